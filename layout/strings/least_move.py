"""Which unknowns make weighted squares least, and, where that leaves a choice, move least?

Every step goes down the bowl that the sum looks like, then, in the directions the sum does not
feel, makes the squares of the moves least. A step that the sum does not follow is damped, and the
damping is gone at the end; where steps shrink slowly, the bend of the bowl is measured.
Differentiable functions only; nothing here knows strings.

References
----------
J. Nocedal, S. J. Wright, "Numerical Optimization", 2nd ed., Springer 2006, chapter 4 (what a step
gains against what its model foretold) and section 15.4 (a step may raise one of two aims).
P. Deuflhard, "Newton Methods for Nonlinear Problems", Springer 2004, chapter 3 (judging a step by
what the next one would be).

"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from layout.errors import NoSolutionError
from layout.strings.bowl import DAMPING, Bowl, Linearised, make_bowl, measure_bend

Array = NDArray[np.float64]

SETTLED = 1e-8
"""Moves are found once an undamped step changes none of them by more than this (mm)."""
NOISE = 1e-6
"""Steps shorter than this that no longer shrink are rounding (mm)."""
FAR_MM = 10.0
"""Moves beyond this are known to so much less."""
SLOW = 0.3
"""Steps that are left longer than this share of the one before ask for the bend."""
STEPS = 100
TRIALS = 30
"""How often one step is shortened; some 1e-16 of it is left then."""
LIKELY, UNLIKELY = 0.75, 0.25
"""Shares of the foretold fall above which the next step is damped less, below which more."""
WORTH = 1e-4
"""Share of a foretold fall that a step must bring."""
LEAST_SHARE = 0.05
"""Of the least moves; where less would be allowed they wait for the next step."""
SMEARED = 1e-2
"""Where slopes jump, those given may be smeared over so much (mm); the sum does not follow."""
ROUNDING = 2e-10
"""Of each residual (cent): a stiff string magnifies rounding of its path some hundred times."""


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
        When the sum is not known at the start, will not fall along a step, however short, or
        falls for ever.

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
    look = _carefully(linearise)
    here = look(start)
    if not here.is_possible:
        raise NoSolutionError(question, iterations=0, last=here.sum_of_squares)
    walk = _Walk(start.copy(), here, bend=None, damping=0.0, budget=1.0 + here.sum_of_squares)
    before, taken = np.inf, 0
    while taken < STEPS:
        taken += 1
        bowl, change = walk.foresee()
        settled = is_settled(change, before=before, moves=walk.here.moves)
        # A bend measured elsewhere may hold what is free to move here.
        measured = is_slow(change, before=before) or (settled and walk.bend is not None)
        if measured:
            walk = walk.with_measured_bend(look)
            bowl, change = walk.foresee()
            settled = is_settled(change, before=before, moves=walk.here.moves)
        if settled:
            return walk.unknowns
        before = change
        onward = _walk_down(look, walk, bowl=bowl)
        if onward is None and not measured:
            onward = walk.with_measured_bend(look)
        if onward is None:
            break
        walk = onward
    raise NoSolutionError(question, iterations=taken, last=walk.here.sum_of_squares)


def is_settled(change: float, *, before: float, moves: Array) -> bool:
    """Tell whether steps have ended, from the largest move of this step and the one before."""
    far = max(1.0, float(np.abs(moves).max(initial=0.0)) / FAR_MM)
    return change <= SETTLED * far or (change <= NOISE * far and change > before / 2)


def is_slow(change: float, *, before: float) -> bool:
    """Tell whether steps shrink so slowly that the bend is worth measuring."""
    return change > SLOW * before and change > NOISE


@dataclass(frozen=True, slots=True)
class _Walk:
    """Where the search is, and what it has learnt.

    ``budget`` is how much of the sum may be left to gain after a step that is taken for the sake
    of the moves; it shrinks with every such step.
    """

    unknowns: Array
    here: Linearised
    bend: Array | None
    damping: float
    budget: float

    def foresee(self) -> tuple[Bowl, float]:
        """Give the bowl about this place, and the largest move of the whole step down it."""
        bowl = make_bowl(self.here, self.bend)
        return bowl, self.here.largest_move(bowl.step())

    def with_measured_bend(self, look: Callable[[Array], Linearised]) -> _Walk:
        """Give the same place with its own bend."""
        return replace(self, bend=measure_bend(look, self.unknowns, here=self.here))


def _walk_down(look: Callable[[Array], Linearised], walk: _Walk, *, bowl: Bowl) -> _Walk | None:
    """Take a step, shortened until it brings what it foretold; None when none does."""
    rounding = ROUNDING * (2 * np.sqrt(walk.here.sum_of_squares) + ROUNDING)
    blind = bowl.fall() <= rounding  # what is left to gain cannot be seen in the sum
    damping, share = (0.0 if blind else walk.damping), 1.0 if bowl.unfelt.shape[1] else 0.0
    for _ in range(TRIALS):
        foretold = bowl.fall(damping)
        if foretold < rounding and not blind:
            return None
        step = bowl.step(damping, share=share)
        there = replace(
            walk, unknowns=walk.unknowns + step, here=look(walk.unknowns + step), damping=damping
        )
        fall = walk.here.sum_of_squares - there.here.sum_of_squares
        if there.here.is_possible and fall >= WORTH * foretold - rounding:
            if blind or UNLIKELY * foretold <= fall <= LIKELY * foretold:
                return there
            much = fall > LIKELY * foretold
            return replace(there, damping=damping / DAMPING if much else bowl.more_damping(damping))
        if there.here.is_possible:
            left = there.foresee()[0].fall()
            if share and left <= walk.budget and _moves_fall(walk.here, there.here, step):
                return replace(there, budget=walk.budget / DAMPING)
            if left < bowl.fall() / 2 and walk.here.largest_move(step) <= SMEARED:
                return there
        if share:
            share = share / DAMPING if share > LEAST_SHARE else 0.0
        else:
            damping = bowl.more_damping(damping)
    return None


def _moves_fall(here: Linearised, there: Linearised, step: Array) -> bool:
    """Tell whether the squares of the moves fall as a step foretold."""
    now = float(here.moves @ here.moves)
    expected = here.moves + here.move_slopes @ step
    foretold = now - float(expected @ expected)
    return foretold > 0 and now - float(there.moves @ there.moves) >= WORTH * foretold


def _carefully(linearise: Callable[[Array], Linearised]) -> Callable[[Array], Linearised]:
    """Look without warnings: what is not a number at an impossible place, the sum tells."""

    def look(unknowns: Array) -> Linearised:
        with np.errstate(all="ignore"):
            return linearise(unknowns)

    return look
