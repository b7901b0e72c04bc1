"""Which unknowns make weighted squares least, and, where that leaves a choice, move least?

Damped Gauss-Newton in two stages: every step first makes the linearised sum of squares least,
then, in the directions the sum does not feel, makes the squares of the moves least.
Differentiable functions only; nothing here knows strings.

References
----------
C. L. Lawson, R. J. Hanson, "Solving Least Squares Problems", Prentice-Hall 1974, chapters 20
(least squares under linear equalities, by the null space) and 25 (practical rank).

"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from layout.errors import NoSolutionError

Array = NDArray[np.float64]

RANK = 1e-7
"""Directions felt less than this, against the one felt most, count as not felt at all."""
SETTLED = 1e-8
"""Moves are found once a step changes none of them by more than this (mm)."""
NOISE = 1e-6
"""Steps shorter than this that no longer shrink are rounding (mm)."""
STEPS = 60
HALVINGS = 25


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


def solve_least_move(
    linearise: Callable[[Array], Linearised], start: Array, *, question: str = "least move"
) -> Array:
    """Find the unknowns whose sum of squares is least and, among those, whose moves are least.

    Parameters
    ----------
    linearise
        Gives squares and moves at any unknowns, shape (K,).
    start
        Shape (K,), where the search begins.
    question
        What is being asked, for the message.

    Returns
    -------
    Array
        Shape (K,).

    Raises
    ------
    NoSolutionError
        When the sum will not fall along a step, however short, or the steps do not end.

    Examples
    --------
    One equation, x + 2 y = 5, two unknowns: the least move is along (1, 2).

    >>> def linearise(x):
    ...     slopes = np.array([[1.0, 2.0]])
    ...     residuals = slopes @ x - 5.0
    ...     return Linearised(float(residuals @ residuals), residuals, slopes, x, np.eye(2))
    >>> solve_least_move(linearise, np.zeros(2)).round(12)
    array([1., 2.])

    """
    unknowns = start.copy()
    here = linearise(unknowns)
    before = np.inf
    for _ in range(STEPS):
        step = least_move_step(here)
        change = float(np.abs(here.move_slopes @ step).max(initial=0.0))
        if is_settled(change, before=before):
            return unknowns
        before = change
        unknowns, here = _walk_down(linearise, unknowns, step, here=here, question=question)
    raise NoSolutionError(question, iterations=STEPS, last=here.sum_of_squares)


def is_settled(change: float, *, before: float) -> bool:
    """Tell whether steps have ended, from the largest move of this step and the one before."""
    return change <= SETTLED or (change <= NOISE and change > before / 2)


def least_move_step(here: Linearised) -> Array:
    """Give the step that makes the linearised sum least and, within that, the moves least.

    Returns
    -------
    Array
        Shape (K,), in the units of the unknowns.

    """
    felt, unfelt = split_felt(here.slopes)
    step = felt @ np.linalg.lstsq(here.slopes @ felt, -here.residuals, rcond=None)[0]
    if unfelt.shape[1]:
        moves = here.moves + here.move_slopes @ step
        moving = here.move_slopes @ unfelt
        least = RANK * np.linalg.norm(here.move_slopes)
        step = step + unfelt @ _shortest(moving, -moves, least=float(least))
    return np.asarray(step)


def _shortest(matrix: Array, wanted: Array, *, least: float) -> Array:
    """Least squares by the shortest vector; singular values up to ``least`` count as none."""
    left, sizes, right = np.linalg.svd(matrix, full_matrices=False)
    kept = sizes > least
    return np.asarray(right[kept].T @ ((left.T @ wanted)[kept] / sizes[kept]))


def split_felt(slopes: Array) -> tuple[Array, Array]:
    """Split the unknowns into directions the residuals feel and directions they do not.

    Returns
    -------
    felt, unfelt
        Shapes (K, R) and (K, K - R): orthonormal columns.

    """
    count = slopes.shape[1]
    if not slopes.any():
        return np.zeros((count, 0)), np.eye(count)
    sizes, directions = np.linalg.svd(slopes, full_matrices=True)[1:]
    rank = int(np.count_nonzero(sizes > RANK * sizes[0]))
    return directions[:rank].T, directions[rank:].T


def _walk_down(
    linearise: Callable[[Array], Linearised],
    unknowns: Array,
    step: Array,
    *,
    here: Linearised,
    question: str,
) -> tuple[Array, Linearised]:
    """Take the step, halved until the sum does not rise."""
    # Rounding of some 1e-12 cent in each residual is not a rise.
    ceiling = here.sum_of_squares * (1 + 1e-10) + 1e-18
    for halving in range(HALVINGS):
        there = unknowns + step * 0.5**halving
        found = linearise(there)
        if found.sum_of_squares <= ceiling:
            return there, found
    raise NoSolutionError(question, iterations=HALVINGS, last=here.sum_of_squares)
