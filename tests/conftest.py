"""Fixtures that several kinds of test share."""

from __future__ import annotations

from dataclasses import dataclass

import hypothesis
import numpy as np
import pytest

from layout.strings.balance import Balance, EndLines
from layout.strings.lie import StringLie
from layout.strings.stopping import StringBody

# The same cases on every run, so that a red run is about the change; explore with
# ``--hypothesis-profile=explore``.
hypothesis.settings.register_profile("steady", derandomize=True, deadline=None)
hypothesis.settings.register_profile("explore", deadline=None)
hypothesis.settings.load_profile("steady")


@dataclass(frozen=True)
class Strung:
    """Strings over a board, as the choice of nut and saddle is asked about them."""

    body: StringBody
    lie: StringLie
    balance: Balance
    ends: EndLines


def string_up(seed, *, strings=6, frets=12, first=1):
    """Draw a plausible instrument: tensions, stiffnesses, heights and a slanted bridge line."""
    rng = np.random.default_rng(seed)
    across = np.linspace(1.0, -1.0, strings) if strings > 1 else np.zeros(1)
    nut_y = 18 * across + rng.uniform(-0.5, 0.5, strings)
    bridge_y = 27 * across + rng.uniform(-0.5, 0.5, strings)
    length = rng.uniform(340, 700)
    nut_mm = np.column_stack([rng.uniform(-0.3, 0.3) * nut_y, nut_y])
    bridge_mm = np.column_stack([length + rng.uniform(-0.5, 0.5) * bridge_y, bridge_y])
    scale_mm = np.hypot(*(bridge_mm - nut_mm).T)
    tension_n = rng.uniform(40, 110, strings)
    hz = rng.uniform(80, 400, strings)
    body = StringBody(
        tension_n / (2 * scale_mm / 1000 * hz) ** 2,
        tension_n * rng.uniform(40, 250, strings),
        tension_n * (rng.uniform(0.001, 0.004, strings) * scale_mm / 1000) ** 2,
    )
    number = np.arange(1, frets + 1)
    stops_mm = scale_mm[:, None] * (1 - 2.0 ** (-number / 12))
    lie = StringLie(
        open_hz=hz,
        scale_mm=scale_mm,
        height_at_nut_mm=rng.uniform(0.2, 1.2, strings),
        height_at_saddle_mm=rng.uniform(2.0, 6.0, strings),
        finger_behind_mm=float(rng.uniform(0, 8)),
        relief_mm=0.1,
        relief_from_mm=stops_mm[:, 0],
        relief_to_mm=stops_mm[:, -1],
    )
    targets = np.broadcast_to(100.0 * number, stops_mm.shape)
    weights = np.where(number >= first, rng.uniform(0.5, 2.0, stops_mm.shape), 0.0)
    course = np.arange(strings) // 2
    return Strung(
        body,
        lie,
        Balance(stops_mm, targets, weights),
        EndLines(nut_mm, bridge_mm, course, np.zeros(strings, bool)),
    )


@pytest.fixture(scope="session")
def strung():
    """Give the drawing of instruments: ``strung(seed, strings=6, frets=12, first=1)``."""
    return string_up
