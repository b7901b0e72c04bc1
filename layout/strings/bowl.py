"""Which bowl does a sum of squares look like from where one stands?

A quadratic model of the sum: that of Gauss and Newton from residuals and slopes alone, or that of
Newton with the bend they leave out, which is measured. Without the bend, steps swing or shrink
slowly where large residuals stand on curved slopes. Nothing here knows strings.

References
----------
C. L. Lawson, R. J. Hanson, "Solving Least Squares Problems", Prentice-Hall 1974, chapters 20
(least squares under linear equalities, by the null space) and 25 (practical rank).
K. Levenberg, Quart. Appl. Math. 2 (1944) 164, and D. W. Marquardt, J. Soc. Indust. Appl. Math. 11
(1963) 431: damping.
J. Nocedal, S. J. Wright, "Numerical Optimization", 2nd ed., Springer 2006, sections 3.4
(eigenvalues made positive) and 10.3 (large residuals).

"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

RANK = 1e-7
"""Directions felt less than this, against the one felt most, count as not felt at all."""
BENT = 1e-6
"""Bends smaller than this, against the square of the largest slope, are rounding."""
VANISHED = 1e-6
"""Sums of squares (cent squared) whose residuals are too small to bend anything."""
PROBE = 2e-3
"""How far to one side the bend is measured (mm)."""
DAMPING = 4.0
"""How much more damping is tried next."""


@dataclass(frozen=True, slots=True)
class Linearised:
    """Squares and moves at one place, and how they change from there.

    Attributes
    ----------
    sum_of_squares
        What is made least; may be inf where the place is impossible.
    residuals, slopes
        Shapes (M,) and (M, K): the squares of ``residuals + slopes @ step`` add up to the sum
        after a small step, but for a constant.
    moves, move_slopes
        Shapes (V,) and (V, K): what is to stay small where there is a choice.

    """

    sum_of_squares: float
    residuals: Array
    slopes: Array
    moves: Array
    move_slopes: Array

    @property
    def is_possible(self) -> bool:
        """Whether the sum and its slopes are known here."""
        return bool(np.isfinite(self.sum_of_squares) and np.isfinite(self.slopes).all())

    def largest_move(self, step: Array) -> float:
        """Give the largest change of a move that a step brings about."""
        return float(np.abs(self.move_slopes @ step).max(initial=0.0))


@dataclass(frozen=True, slots=True)
class Bowl:
    """A quadratic model of the sum about a place, each of its own axes by itself.

    Attributes
    ----------
    here
        Squares and moves at the place.
    felt, unfelt
        Shapes (K, R) and (K, K - R): orthonormal columns, the axes the sum feels and the rest.
    pulls, bends
        Shape (R,): the sum changes by ``2 pulls * along + bends * along**2`` along each axis.

    """

    here: Linearised
    felt: Array
    unfelt: Array
    pulls: Array
    bends: Array

    @property
    def stiffness(self) -> Array:
        """Bends taken positive, shape (R,), so that every step goes down."""
        least = (2 * RANK * np.linalg.norm(self.here.slopes)) ** 2
        return np.asarray(np.maximum(np.abs(self.bends), least))

    def along(self, damping: float = 0.0) -> Array:
        """Give the step along the felt axes, shape (R,)."""
        return np.asarray(-self.pulls / (self.stiffness + damping))

    def step(self, damping: float = 0.0, *, share: float = 1.0) -> Array:
        """Give the step of the unknowns, shape (K,).

        Down the bowl, and then a share of what makes the squares of the moves least along the
        axes the sum does not feel.
        """
        here = self.here
        step = self.felt @ self.along(damping)
        if share and self.unfelt.shape[1]:
            moves = here.moves + here.move_slopes @ step
            least = RANK * float(np.linalg.norm(here.move_slopes))
            step = step + share * (
                self.unfelt @ _shortest(here.move_slopes @ self.unfelt, -moves, least=least)
            )
        return np.asarray(step)

    def fall(self, damping: float = 0.0) -> float:
        """Foretell by how much the sum falls; never negative."""
        along = self.along(damping)
        return float(-along @ (2 * self.pulls + self.bends * along))

    def more_damping(self, damping: float) -> float:
        """Give the damping to try next: the first about halves the step."""
        along = float(np.linalg.norm(self.along()))
        first = float(np.linalg.norm(self.pulls)) / along if along else 1.0
        return max(DAMPING * damping, first)


def make_bowl(here: Linearised, bend: Array | None = None) -> Bowl:
    """Make the model of Gauss and Newton, or with a measured bend that of Newton.

    Where residuals cannot vanish, a direction without slopes may bend the sum: then it is felt.
    """
    left, sizes, directions = _decompose(here.slopes)
    felt, unfelt = directions[:, : len(sizes)], directions[:, len(sizes) :]
    met = left.T @ here.residuals
    if bend is None:
        return Bowl(here, felt, unfelt, sizes * met, sizes**2)
    sags, ways = np.linalg.eigh(unfelt.T @ bend @ unfelt)
    remains = here.sum_of_squares - float(met @ met) > VANISHED
    sagging = (np.abs(sags) > BENT * sizes.max(initial=0.0) ** 2) & remains
    felt, unfelt = np.hstack([felt, unfelt @ ways[:, sagging]]), unfelt @ ways[:, ~sagging]
    on_felt = here.slopes @ felt
    bends, axes = np.linalg.eigh(on_felt.T @ on_felt + felt.T @ bend @ felt)
    return Bowl(here, felt @ axes, unfelt, axes.T @ (on_felt.T @ here.residuals), bends)


def split_felt(slopes: Array) -> tuple[Array, Array]:
    """Split the unknowns into directions the residuals feel and directions they do not.

    Returns
    -------
    felt, unfelt
        Shapes (K, R) and (K, K - R): orthonormal columns.

    """
    _, sizes, directions = _decompose(slopes)
    return directions[:, : len(sizes)], directions[:, len(sizes) :]


def measure_bend(
    linearise: Callable[[Array], Linearised], unknowns: Array, *, here: Linearised
) -> Array:
    """Measure what ``slopes.T @ slopes`` lacks of half the sum's second derivatives, (K, K).

    From the sum's slopes a little to one side by every unknown; an unknown that can go to
    neither side counts as straight.
    """
    pull = here.slopes.T @ here.residuals
    bend = np.zeros((len(unknowns), len(unknowns)))
    for row, way in enumerate(np.eye(len(unknowns))):
        reach = PROBE / (here.largest_move(way) or 1.0)
        for signed in (reach, -reach):
            there = linearise(unknowns + signed * way)
            if there.is_possible:
                change = (there.slopes.T @ there.residuals - pull) / signed
                bend[row] = change - here.slopes.T @ (here.slopes @ way)
                break
    return np.asarray((bend + bend.T) / 2)


def with_bend(here: Linearised, bend: Array | None) -> Linearised:
    """Put in place of residuals and slopes such whose squares follow the bend, taken positive."""
    if bend is None:
        return here
    bowl = make_bowl(here, bend)
    root = np.sqrt(bowl.stiffness)
    return replace(here, residuals=bowl.pulls / root, slopes=root[:, None] * bowl.felt.T)


def _decompose(slopes: Array) -> tuple[Array, Array, Array]:
    """Give ``left`` (M, R) and ``sizes`` (R,) of what is felt, and all ``directions`` (K, K)."""
    if not slopes.any():
        return np.zeros((len(slopes), 0)), np.zeros(0), np.eye(slopes.shape[1])
    left, sizes, directions = np.linalg.svd(slopes, full_matrices=True)
    rank = int(np.count_nonzero(sizes > RANK * sizes[0]))
    return left[:, :rank], sizes[:rank], directions.T


def _shortest(matrix: Array, wanted: Array, *, least: float) -> Array:
    """Least squares by the shortest vector; singular values up to ``least`` count as none."""
    left, sizes, right = np.linalg.svd(matrix, full_matrices=False)
    kept = sizes > least
    return np.asarray(right[kept].T @ ((left.T @ wanted)[kept] / sizes[kept]))
