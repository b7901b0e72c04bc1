"""How far must the unknowns give way so that the saddle points fit a strip of a given width?

The points lie in the strip of width t whose centre line is x = c + b y when
``|x_i - c - b y_i| <= (t/2) sqrt(1 + b^2)`` for every point. Place and slant of the strip are
unknowns beside the others. Each step solves the linearised least squares under the linearised
inequalities, with a small proximal term that vanishes as the steps end; among the unknowns the
sum does not feel it then takes the least moves. Where steps shrink slowly the bend of the sum is
measured, as without a strip.

References
----------
C. L. Lawson, R. J. Hanson, "Solving Least Squares Problems", Prentice-Hall 1974, chapter 23;
J. Nocedal, S. J. Wright, "Numerical Optimization", 2nd ed., Springer 2006, chapter 18
(sequential quadratic programming).

"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from layout.errors import NoSolutionError
from layout.strings.bowl import Linearised, measure_bend, split_felt, with_bend
from layout.strings.inequality import solve_bounded
from layout.strings.least_move import is_settled, is_slow

Array = NDArray[np.float64]

QUESTION = (
    "nut and saddle within the saddle's thickness (check heights, gauges, notes and scale, or "
    "allow a thicker saddle)"
)
STEPS = 200
HALVINGS = 25
OUTSIDE_MM = 5e-9
"""Points outside the strip by less than this are in it; both sides come in by as much."""
HOLD = 3e-2
"""Proximal weight, against the slope felt most, of what no residual feels directly."""
LEAST_HOLD = 1e-3
"""What halving the weight may leave of it, where steps shrink slowly."""


@dataclass(frozen=True, slots=True)
class Placed:
    """Saddle points in plan and how they follow the unknowns: shapes (P, 2) and (P, 2, K), mm."""

    points_mm: Array
    slopes: Array


@dataclass(frozen=True, slots=True)
class Held:
    """A solution within the strip: unknowns (K,), slant in radians, and the sum of squares."""

    unknowns: Array
    slant: float
    sum_of_squares: float


@dataclass(frozen=True, slots=True)
class _Strip:
    """The strip's unknowns: x of its centre line at ``middle_mm``, and x further at the reach."""

    middle_mm: float
    reach_mm: float
    width_mm: float

    def room_mm(self, placed: Placed, line: Array) -> tuple[Array, Array]:
        """Give the room (2P,) left on either side, negative outside, and its slopes (2P, K + 2)."""
        x_mm, y_mm = placed.points_mm.T
        lever = (y_mm - self.middle_mm) / self.reach_mm
        slant = line[1] / self.reach_mm
        half_mm = self.width_mm / 2 * np.hypot(1.0, slant)
        half_by_slant = self.width_mm / 2 * slant / np.hypot(1.0, slant) / self.reach_mm
        off_mm = x_mm - line[0] - line[1] * lever
        off_slopes = np.column_stack(
            [
                placed.slopes[:, 0] - slant * placed.slopes[:, 1],
                np.full(len(x_mm), -1.0),
                -lever,
            ]
        )
        widening = np.zeros_like(off_slopes)
        widening[:, -1] = half_by_slant
        return (
            np.concatenate([half_mm + off_mm, half_mm - off_mm]),
            np.vstack([widening + off_slopes, widening - off_slopes]),
        )

    def line_through(self, points_mm: Array, slant: float) -> Array:
        """Give the strip's unknowns for the middle of the points at a slant in radians."""
        rise_mm = self.reach_mm * np.tan(slant)
        across = points_mm[:, 0] - rise_mm * (points_mm[:, 1] - self.middle_mm) / self.reach_mm
        return np.array([(across.min() + across.max()) / 2, rise_mm])


def solve_in_strip(
    linearise: Callable[[Array], Linearised],
    place: Callable[[Array], Placed],
    start: Array,
    *,
    width_mm: float,
    slant: float,
) -> Held:
    """Find the least sum of squares whose saddle points fit the strip, near a first slant.

    Parameters
    ----------
    linearise
        Gives squares and moves at any unknowns, shape (K,).
    place
        Gives the saddle points at any unknowns.
    start
        Shape (K,); its points need not fit.
    width_mm
        The strip's width, above 0.
    slant
        The slant to begin with, in radians.

    Returns
    -------
    Held
        Points within the strip, to rounding.

    Raises
    ------
    NoSolutionError
        When the points cannot be brought into the strip, or the steps do not end.

    Notes
    -----
    The least sum near the first slant; other slants may hold a lower one, so try several.

    """
    y_mm = place(start).points_mm[:, 1]
    strip = _Strip(
        middle_mm=float(y_mm.min() + y_mm.max()) / 2,
        reach_mm=float(np.ptp(y_mm)) / 2 or 1.0,
        width_mm=max(width_mm - 2 * OUTSIDE_MM, width_mm / 2),
    )
    at = np.concatenate([start, strip.line_through(place(start).points_mm, slant)])
    here, placed = linearise(start), place(start)
    before = np.inf
    bend: Array | None = None
    hold = HOLD
    for _ in range(STEPS):
        room_mm, room_slopes = strip.room_mm(placed, at[-2:])
        step = _bounded_step(with_bend(here, bend), room_mm, room_slopes, hold=hold)
        change = here.largest_move(step[:-2])
        if is_slow(change, before=before):
            hold = max(hold / 2, LEAST_HOLD)
            bend = measure_bend(linearise, at[:-2], here=here)
            step = _bounded_step(with_bend(here, bend), room_mm, room_slopes, hold=hold)
            change = here.largest_move(step[:-2])
        settled = is_settled(change, before=before, moves=here.moves)
        if settled and room_mm.min() >= -OUTSIDE_MM:
            return Held(at[:-2], float(np.arctan(at[-1] / strip.reach_mm)), here.sum_of_squares)
        before = change
        for halving in range(HALVINGS):
            there = at + step * 0.5**halving
            found, moved = linearise(there[:-2]), place(there[:-2])
            left_mm = strip.room_mm(moved, there[-2:])[0]
            falls = found.sum_of_squares <= here.sum_of_squares * (1 + 1e-10) + 1e-18
            enters = -left_mm.min() <= -0.9 * room_mm.min() and np.isfinite(found.sum_of_squares)
            if falls or (room_mm.min() < 0 and enters):
                break
        else:
            break
        at, here, placed = there, found, moved
    raise NoSolutionError(QUESTION, iterations=STEPS, last=here.sum_of_squares)


def _bounded_step(here: Linearised, room_mm: Array, room_slopes: Array, *, hold: float) -> Array:
    """Give the step (K + 2,) of least sum, then of least moves, that stays in the strip."""
    count = here.slopes.shape[1]
    scale = float(np.linalg.norm(here.slopes, 2)) if here.slopes.size else 0.0
    unfelt = split_felt(here.slopes)[1]
    free = np.zeros((unfelt.shape[1] + 2, count + 2))
    free[:-2, :count], free[-2:, count:] = unfelt.T, np.eye(2)
    matrix = np.vstack([np.pad(here.slopes, ((0, 0), (0, 2))), (scale or 1.0) * hold * free])
    wanted = np.concatenate([-here.residuals, np.zeros(len(free))])
    step = solve_bounded(matrix, wanted, room_slopes, -room_mm)
    moved = here.move_slopes @ unfelt
    if not moved.any():
        return step
    # Second stage: along what the sum does not feel, and with the strip free to follow.
    way = free.T
    held = HOLD * np.eye(len(free))
    held[:-2] *= HOLD  # these are held by the moves themselves
    moves = here.moves + here.move_slopes @ step[:count]
    matrix = np.vstack([np.pad(moved, ((0, 0), (0, 2))), held])
    wanted = np.concatenate([-moves, np.zeros(len(free))])
    room_left = room_mm + room_slopes @ step
    return np.asarray(
        step + way @ solve_bounded(matrix, wanted, room_slopes @ way, np.minimum(-room_left, 0.0))
    )
