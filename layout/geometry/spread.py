"""How far from the centre line does each string leave the nut and meet the bridge?

The trade's rules: equal centres; equal gaps, where the clear space between neighbouring string
edges is equal; and courses, a fixed clear gap inside a course and equal clear space between.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from layout.instrument import SpreadList, SpreadRule, StringSpec

Array = NDArray[np.float64]


def spread_strings(
    spread: SpreadRule | SpreadList, strings: Sequence[StringSpec]
) -> tuple[Array, Array]:
    """Give every string's y at its nut and at the bridge line, in mm.

    Parameters
    ----------
    spread
        A rule for the strings that reach the nut, or every y listed.
    strings
        String 1 (treble) first.

    Returns
    -------
    nut_y_mm, bridge_y_mm
        Shape (S,), + toward the treble side. Under a rule, short and open-only strings continue
        the spacing outward (both ys on the full nut and bridge lines).

    """
    if isinstance(spread, SpreadList):
        return np.array(spread.nut_y_mm, float), np.array(spread.saddle_y_mm, float)
    nut_y = _share(spread.nut_mm, spread.rule, spread.pair_nut_mm, strings)
    bridge_y = _share(spread.saddle_mm, spread.rule, spread.pair_saddle_mm, strings)
    return nut_y, bridge_y


def clear_gaps_mm(y_mm: Array, strings: Sequence[StringSpec]) -> Array:
    """Measure the clear space between neighbouring string edges, shape (S-1,), in mm."""
    radius = np.array([_half_gauge(string) for string in strings])
    return np.asarray(-np.diff(y_mm) - radius[:-1] - radius[1:])


def _share(
    width_mm: float, rule: str, pair_mm: float | None, strings: Sequence[StringSpec]
) -> Array:
    """Share a width among the strings that reach the nut; the others go on outward likewise."""
    full = [index for index, string in enumerate(strings) if string.full]
    sharing = _sharing(width_mm, rule, pair_mm, [strings[index] for index in full])
    y = np.full(len(strings), np.nan)
    steps = [sharing.apart_mm(strings[a], strings[b]) for a, b in pairwise(full)]
    own = width_mm / 2 - np.concatenate(([0.0], np.cumsum(steps))) if steps else np.zeros(1)
    y[full[0] : full[-1] + 1] = np.interp(np.arange(full[0], full[-1] + 1), full, own)
    for index in range(full[0] - 1, -1, -1):
        y[index] = y[index + 1] + sharing.apart_mm(strings[index], strings[index + 1])
    for index in range(full[-1] + 1, len(strings)):
        y[index] = y[index - 1] - sharing.apart_mm(strings[index - 1], strings[index])
    return y


@dataclass(frozen=True, slots=True)
class _Sharing:
    """How far neighbours lie apart: equal centres, or clear gaps between and inside courses."""

    centres_mm: float | None
    gap_mm: float = 0.0
    pair_mm: float = 0.0

    def apart_mm(self, first: StringSpec, second: StringSpec) -> float:
        """Distance between the centres of two neighbours."""
        if self.centres_mm is not None:
            return self.centres_mm
        clear = self.pair_mm if _together(first, second) else self.gap_mm
        return _half_gauge(first) + clear + _half_gauge(second)


def _sharing(
    width_mm: float, rule: str, pair_mm: float | None, strings: Sequence[StringSpec]
) -> _Sharing:
    """Choose distances that add up to the width over the strings that reach the nut."""
    if len(strings) == 1:
        return _Sharing(0.0)
    inside = sum(_together(a, b) for a, b in pairwise(strings))
    between = len(strings) - 1 - inside
    if (rule == "centres" and not inside) or not between:
        return _Sharing(width_mm / (len(strings) - 1))
    pair = pair_mm or 0.0
    wood = sum(_half_gauge(a) + _half_gauge(b) for a, b in pairwise(strings))
    return _Sharing(None, (width_mm - wood - inside * pair) / between, pair)


def _together(first: StringSpec, second: StringSpec) -> bool:
    return first.course is not None and first.course == second.course


def _half_gauge(string: StringSpec) -> float:
    return (string.gauge_mm or 0.0) / 2
