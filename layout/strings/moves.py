"""Which unknowns does a rule for the nut or the saddle leave free?

A rule turns K unknowns into a figure a string: how far the string's end moves along the string
from a theoretical line, in mm. Equations of ``straight``: a string meets its line at B and runs
in the direction u; the edge is x = a + b y; then the end B + s u lies on the edge when
``s = (a + b B_y - B_x)/(u_x - b u_y)``.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal, Protocol

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

Rule = Literal["none", "one", "straight", "course", "each"]
"""A figure for all, a straight edge in plan, one figure a course, one a string; or no move."""

Move = Rule | Array
"""A rule, or fixed figures of shape (S,) in mm."""


class Freedom(Protocol):
    """What a rule leaves free: the number of unknowns, and the figures they stand for."""

    @property
    def count(self) -> int:
        """Number of unknowns K."""

    def figures_mm(self, unknowns: Array) -> Array:
        """Give the figure of every string, shape (S,), for unknowns of shape (K,), in mm."""

    def slopes(self, unknowns: Array) -> Array:
        """Give the derivatives of the figures by the unknowns, shape (S, K)."""


@dataclass(frozen=True, slots=True)
class Linear:
    """Figures in proportion to the unknowns: ``fixed_mm + pattern @ unknowns``."""

    fixed_mm: Array
    pattern: Array

    @property
    def count(self) -> int:
        """Number of unknowns."""
        return int(self.pattern.shape[1])

    def figures_mm(self, unknowns: Array) -> Array:
        """Give the figure of every string, shape (S,), in mm."""
        return np.asarray(self.fixed_mm + self.pattern @ unknowns)

    def slopes(self, unknowns: Array) -> Array:  # noqa: ARG002 - the same everywhere
        """Give the derivatives of the figures by the unknowns, shape (S, K)."""
        return self.pattern


@dataclass(frozen=True, slots=True)
class StraightEdge:
    """Ends on one straight line in plan; further strings may each have an edge of their own.

    The first two unknowns move the edge at the middle of its strings and, further, at the
    outermost of them (mm along x), from ``start_mm + slant y``; the rest are the figures of the
    strings with an edge of their own.
    """

    line_mm: Array
    direction: Array
    member: Mask
    start_mm: float
    slant: float
    middle_mm: float
    reach_mm: float
    own: Array

    @property
    def count(self) -> int:
        """Number of unknowns."""
        return 2 + int(self.own.shape[1])

    def figures_mm(self, unknowns: Array) -> Array:
        """Give the figure of every string, shape (S,), in mm."""
        along, ahead, _ = self._met(unknowns)
        return np.asarray(np.where(self.member, along / ahead, self.own @ unknowns[2:]))

    def slopes(self, unknowns: Array) -> Array:
        """Give the derivatives of the figures by the unknowns, shape (S, K)."""
        along, ahead, y_mm = self._met(unknowns)
        met_y_mm = y_mm + along / ahead * self.direction[:, 1]
        by_middle = 1 / ahead
        by_reach = (met_y_mm - self.middle_mm) / self.reach_mm / ahead
        shared = np.column_stack([by_middle, by_reach]) * self.member[:, None]
        return np.hstack([shared, self.own])

    def _met(self, unknowns: Array) -> tuple[Array, Array, Array]:
        """Give numerator and denominator of the string's move to the edge, and y on its line."""
        x_mm, y_mm = self.line_mm.T
        slant = self.slant + unknowns[1] / self.reach_mm
        edge_mm = self.start_mm + self.slant * y_mm + unknowns[0]
        edge_mm = edge_mm + unknowns[1] * (y_mm - self.middle_mm) / self.reach_mm
        return edge_mm - x_mm, self.direction[:, 0] - slant * self.direction[:, 1], y_mm


def free_unknowns(
    move: Move,
    line_mm: Array,
    direction: Array,
    *,
    course: NDArray[np.int_],
    fretted: Mask,
    own_edge: Mask,
) -> Freedom:
    """Turn a rule, or fixed figures, into the unknowns it leaves free.

    Parameters
    ----------
    move
        The rule, or fixed figures, shape (S,), in mm.
    line_mm
        Shape (S, 2): where each string meets the theoretical line, plan mm.
    direction
        Shape (S, 2): unit vectors along the strings, from nut to bridge.
    course
        Shape (S,): strings of one course share a number.
    fretted
        Shape (S,): strings without a stop have no edge and stay where they are.
    own_edge
        Shape (S,): strings that do not reach the shared edge; where the rule is ``straight``
        each has an edge, so a figure, of its own.

    Returns
    -------
    Freedom
        Unknowns that are all zero where nothing moves, as far as the rule allows that.

    Raises
    ------
    ValueError
        When the figures are not one a string and finite, or the rule is unknown.

    """
    strings = len(line_mm)
    nothing = np.zeros(strings)
    if not isinstance(move, str):
        if np.shape(move) != (strings,) or not np.isfinite(move).all():
            raise ValueError(f"fixed figures must be finite and one a string, {strings} in all")
        return Linear(np.asarray(move, np.float64), np.zeros((strings, 0)))
    if move == "none":
        return Linear(nothing, np.zeros((strings, 0)))
    if move == "straight":
        return _straight_edge(line_mm, direction, fretted & ~own_edge, own=fretted & own_edge)
    groups = {
        "one": np.zeros(strings, np.int_),
        "course": np.asarray(course),
        "each": np.arange(strings),
    }
    if move not in groups:
        raise ValueError(f"{move!r} is not a rule; use none, one, straight, course or each")
    return Linear(nothing, _pattern(groups[move], fretted))


def _pattern(group: NDArray[np.int_], taking_part: Mask) -> Array:
    names = np.array(sorted(set(group[taking_part].tolist())))
    shared = group[:, None] == names[None, :]
    return np.asarray(shared & taking_part[:, None], np.float64)


def _straight_edge(line_mm: Array, direction: Array, member: Mask, *, own: Mask) -> Freedom:
    figures_of_own = _pattern(np.arange(len(line_mm)), own)
    if not member.any():
        return Linear(np.zeros(len(line_mm)), figures_of_own)
    x_mm, y_mm = line_mm[member].T
    middle = float(y_mm.min() + y_mm.max()) / 2
    reach = float(np.ptp(y_mm)) / 2
    across = y_mm - y_mm.mean()
    slant = float(across @ x_mm / (across @ across)) if reach > 0 else 0.0
    return StraightEdge(
        line_mm,
        direction,
        member,
        start_mm=float(x_mm.mean() - slant * y_mm.mean()),
        slant=slant,
        middle_mm=middle,
        reach_mm=reach or 1.0,
        own=figures_of_own,
    )
