"""Which point fits best, in least squares, under linear inequalities?

References
----------
C. L. Lawson, R. J. Hanson, "Solving Least Squares Problems", Prentice-Hall 1974, chapter 23:
algorithm NNLS (section 3), least distance programming LDP (section 4) and the change of
variables that brings the general problem to it (section 5). Written from the method.

"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from layout.errors import NoSolutionError

Array = NDArray[np.float64]

ROUNDING = float(np.finfo(np.float64).eps)
GAIN_TOLERANCE = 1e-14
"""A gain smaller than this, of columns and target of length 1, is rounding."""
APART = 1e-13
"""Least distance: a squared residual under this means that the inequalities contradict."""


def solve_nonnegative(columns: Array, target: Array) -> Array:
    """Find the combination of columns, none taken negatively, nearest to the target.

    Parameters
    ----------
    columns
        Shape (M, N).
    target
        Shape (M,).

    Returns
    -------
    Array
        Shape (N,), the coefficients u >= 0 for which ``columns @ u`` is nearest.

    Raises
    ------
    NoSolutionError
        When the set of positive coefficients does not settle.

    References
    ----------
    Lawson & Hanson (1974), chapter 23, algorithm NNLS.

    Examples
    --------
    >>> solve_nonnegative(np.eye(2), np.array([2.0, -1.0]))
    array([2., 0.])

    """
    lengths = np.linalg.norm(columns, axis=0)
    unit = columns / np.where(lengths > 0, lengths, 1.0)
    size = float(np.linalg.norm(target)) or 1.0
    count = columns.shape[1]
    kept = np.zeros(count)
    positive = np.zeros(count, bool)
    refused = np.zeros(count, bool)
    for _ in range(30 * count + 30):
        gain = unit.T @ (target - unit @ kept)
        gain[positive | refused] = -np.inf
        best = int(np.argmax(gain)) if count else -1
        if best < 0 or gain[best] <= GAIN_TOLERANCE * size:
            return kept / np.where(lengths > 0, lengths, 1.0)
        positive[best] = True
        trial = _fit(unit, target, positive)
        if trial[best] <= 0:  # its gain was rounding: leave it out until something else moves
            positive[best] = False
            refused[best] = True
            continue
        refused[:] = False
        kept = _walk_back(unit, target, positive, kept=kept, trial=trial)
    raise NoSolutionError(
        "non-negative least squares", iterations=30 * count + 30, last=float(kept.max())
    )


def _fit(columns: Array, target: Array, positive: NDArray[np.bool_]) -> Array:
    found = np.zeros(columns.shape[1])
    found[positive] = np.linalg.lstsq(columns[:, positive], target, rcond=ROUNDING)[0]
    return found


def _walk_back(
    columns: Array, target: Array, positive: NDArray[np.bool_], *, kept: Array, trial: Array
) -> Array:
    """Drop what would turn negative, one boundary at a time; changes ``positive``."""
    while (trial[positive] <= 0).any():
        falling = positive & (trial <= 0)
        share = np.min(kept[falling] / (kept[falling] - trial[falling]))
        kept = kept + share * (trial - kept)
        positive &= ~(falling & (kept <= ROUNDING * np.max(np.abs(kept))))
        kept[~positive] = 0.0
        trial = _fit(columns, target, positive)
    return trial


def solve_least_distance(sides: Array, at_least: Array, *, question: str) -> Array:
    """Find the shortest vector x with ``sides @ x >= at_least``.

    Parameters
    ----------
    sides
        Shape (K, N).
    at_least
        Shape (K,).
    question
        What is being asked, for the message.

    Returns
    -------
    Array
        Shape (N,).

    Raises
    ------
    NoSolutionError
        When no vector meets all the inequalities.

    References
    ----------
    Lawson & Hanson (1974), chapter 23, algorithm LDP.

    Examples
    --------
    >>> sides = np.array([[1.0, 1.0], [1.0, 0.0]])
    >>> solve_least_distance(sides, np.array([2.0, -5.0]), question="example").round(12)
    array([1., 1.])

    """
    if not len(sides) or (at_least <= 0).all():
        return np.zeros(sides.shape[1])
    lengths = np.linalg.norm(sides, axis=1)
    scale = np.where(lengths > 0, lengths, 1.0)
    columns = np.vstack([(sides / scale[:, None]).T, at_least / scale])
    target = np.zeros(len(columns))
    target[-1] = 1.0
    residual = columns @ solve_nonnegative(columns, target) - target
    if float(residual @ residual) < APART:
        raise NoSolutionError(question, iterations=len(sides), last=float(at_least.max()))
    return np.asarray(residual[:-1] / -residual[-1])


def solve_bounded(matrix: Array, wanted: Array, sides: Array, at_least: Array) -> Array:
    """Find the x whose ``matrix @ x`` is nearest to ``wanted`` while ``sides @ x >= at_least``.

    Parameters
    ----------
    matrix
        Shape (M, N), of full column rank.
    wanted
        Shape (M,).
    sides
        Shape (K, N).
    at_least
        Shape (K,).

    Returns
    -------
    Array
        Shape (N,).

    Raises
    ------
    NoSolutionError
        When no x meets all the inequalities.

    References
    ----------
    Lawson & Hanson (1974), chapter 23, section 5: with matrix = Q R and y = R x - Q' wanted the
    problem is the least distance problem for y.

    Examples
    --------
    >>> solve_bounded(np.eye(2), np.array([3.0, 1.0]), np.array([[-1.0, 0.0]]), np.array([-2.0]))
    array([2., 1.])

    """
    orthogonal, triangle = np.linalg.qr(matrix)
    seen = orthogonal.T @ wanted
    moved = np.linalg.solve(triangle.T, sides.T).T
    shortest = solve_least_distance(
        moved, at_least - moved @ seen, question="least squares under inequalities"
    )
    return np.asarray(np.linalg.solve(triangle, shortest + seen))
