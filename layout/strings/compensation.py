"""How far must nut and saddle move, string by string, so that the stops sound right?

The sum over the balanced stops of weight times squared error is made least, all free unknowns of
nut and saddle together, each stop at its own divided place on its own string. Where that leaves a
choice, nut and saddle move least.

References
----------
Anderson and Beausoleil, "Classical guitar intonation and compensation", J. Acoust.
Soc. Am. 156 (2024) 683: least squares for nut and saddle of one string.

"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from layout.errors import NoSolutionError
from layout.strings.balance import Balance, EndLines, Misfit, Response, measure_misfit
from layout.strings.bowl import Linearised
from layout.strings.least_move import solve_least_move
from layout.strings.lie import StringLie
from layout.strings.moves import Move, free_unknowns
from layout.strings.one_fret import ask_no_more, hold_nut
from layout.strings.stopping import StringBody
from layout.strings.strip import Strip, hull_slants, narrowest_strip
from layout.strings.strip_limit import Held, solve_in_strip

Array = NDArray[np.float64]

SLANTS_KEPT = 2
"""Slants of the saddle strip that are solved in full, of all that are tried."""
SAME_SLANT = 1e-6
QUESTION = (
    "compensation at nut and saddle (check heights, gauges, notes and scale; or balance more "
    "frets, or free fewer figures)"
)
FITS_MM = 1e-9
"""Tolerance of algebra."""


@dataclass(frozen=True, slots=True)
class Compensation:
    """Nut and saddle as chosen, and what they leave.

    Attributes
    ----------
    nut_shift_mm, setback_mm
        Shape (S,), along each string: + toward the saddle, + away from the nut.
    error_cents
        Shape (S, F): predicted less target; nan where there is no stop or no target.
    misfit
        Over the balanced stops.
    strip
        The narrowest strip that holds the saddle points of all fretted strings.
    limit_cost_cents
        How much the saddle's thickness raises the rms; None without a limit, or where the saddle
        is given.
    fits
        Whether the saddle points lie in the strip asked for; True without a limit.

    """

    nut_shift_mm: Array
    setback_mm: Array
    error_cents: Array
    misfit: Misfit
    strip: Strip
    limit_cost_cents: float | None
    fits: bool


def solve_compensation(
    body: StringBody,
    lie: StringLie,
    *,
    balance: Balance,
    ends: EndLines,
    nut: Move,
    saddle: Move,
    strip_mm: float | None = None,
) -> Compensation:
    """Choose nut shifts and setbacks for the least weighted sum of squared errors.

    Parameters
    ----------
    body, lie
        The strings and how they run, S of them.
    balance, ends
        What is to sound right, and where the strings meet the theoretical lines.
    nut, saddle
        A rule, or fixed figures of shape (S,) in mm.
    strip_mm
        Usable thickness of the saddle: all saddle points of fretted strings lie between two
        parallel lines so far apart, at any slant. A given saddle is only checked.

    Returns
    -------
    Compensation
        At which no small move of a free unknown lowers the sum. Strings without a stop stay put.

    Raises
    ------
    NoSolutionError
        When a string cannot be tuned or is slack, the search does not end, or the saddle points
        cannot be brought into the strip.
    ValueError
        When shapes do not agree, a weight is negative, or the strip has no width.

    Notes
    -----
    Figures to 1e-6 mm, within the strip to 1e-9 mm. The thickness of the saddle may leave several
    nearly equal slants; the best of those tried is given.

    References
    ----------
    Anderson and Beausoleil (2024), least squares for the nut and saddle of one string, here for
    all strings that share them.

    """
    if strip_mm is not None and not 0 < strip_mm < np.inf:
        raise ValueError("the thickness of the saddle must be above 0")
    response = _free(body, lie, balance=balance, ends=ends, nut=nut, saddle=saddle)
    start = np.zeros(response.count)
    response.error_cents(start)  # says what is impossible before anything moves
    response = ask_no_more(response)
    unknowns = solve_least_move(response.linearise, start, question=QUESTION)
    best = _report(response, unknowns)
    if strip_mm is None:
        return best
    if response.saddle.count == 0:
        return replace(best, fits=best.strip.width_mm <= strip_mm + FITS_MM)
    if best.strip.width_mm <= strip_mm:
        return replace(best, limit_cost_cents=0.0)
    response, unknowns = hold_nut(response, unknowns)
    held = _report(response, _solve_held(response, unknowns, width_mm=strip_mm).unknowns)
    cost_cents = max(held.misfit.rms_cents - best.misfit.rms_cents, 0.0)
    return replace(held, limit_cost_cents=cost_cents)


def _free(
    body: StringBody,
    lie: StringLie,
    *,
    balance: Balance,
    ends: EndLines,
    nut: Move,
    saddle: Move,
) -> Response:
    """Join strings, stops and lines to the unknowns that the two rules leave free."""
    at_nut = free_unknowns(
        nut,
        ends.nut_mm,
        ends.direction,
        course=ends.course,
        fretted=balance.fretted,
        own_edge=ends.own_nut,
    )
    at_saddle = free_unknowns(
        saddle,
        ends.bridge_mm,
        ends.direction,
        course=ends.course,
        fretted=balance.fretted,
        own_edge=np.zeros_like(ends.own_nut),
    )
    return Response(body, lie, balance, ends, nut=at_nut, saddle=at_saddle)


def _report(response: Response, unknowns: Array) -> Compensation:
    shift_mm, setback_mm = response.figures_mm(unknowns)
    error_cents = response.error_cents(unknowns)
    return Compensation(
        shift_mm,
        setback_mm,
        error_cents,
        measure_misfit(error_cents, response.balance.counted),
        narrowest_strip(response.place(unknowns).points_mm, along=_bridge_slant(response.ends)),
        limit_cost_cents=None,
        fits=True,
    )


def _bridge_slant(ends: EndLines) -> float:
    """Slant of the bridge line in radians, + when its treble end is nearer the bridge."""
    return _mean_slant(ends.bridge_mm)


def _mean_slant(points_mm: Array) -> float:
    """Slant of the straight line that fits points best along x, in radians; 0 for one point."""
    x_mm, y_mm = (points_mm - points_mm.mean(axis=0)).T
    spread = float(y_mm @ y_mm)
    return float(np.arctan(y_mm @ x_mm / spread)) if spread > 0 else 0.0


def _solve_held(response: Response, unknowns: Array, *, width_mm: float) -> Held:
    """Solve within the strip: from every likely slant as if linear, then the best in full."""
    found = response.linearise(unknowns)
    points_mm = response.place(unknowns).points_mm
    slants = [
        _bridge_slant(response.ends),
        _mean_slant(points_mm),
        narrowest_strip(points_mm).slant,
        *hull_slants(points_mm),
    ]
    sketches = _held_from(
        response,
        lambda there: response.continue_linearly(found, unknowns, there),
        [(unknowns, slant) for slant in sorted(slants)],
        width_mm=width_mm,
    )
    best = sorted(sketches, key=lambda sketch: sketch.sum_of_squares)
    apart = [best[0], *(one for one in best[1:] if abs(one.slant - best[0].slant) > SAME_SLANT)]
    held = _held_from(
        response,
        response.linearise,
        [(sketch.unknowns, sketch.slant) for sketch in apart[:SLANTS_KEPT]],
        width_mm=width_mm,
    )
    return min(held, key=lambda one: one.sum_of_squares)


def _held_from(
    response: Response,
    linearise: Callable[[Array], Linearised],
    starts: list[tuple[Array, float]],
    *,
    width_mm: float,
) -> list[Held]:
    """Solve within the strip from several starts; raise only when none of them ends."""
    held: list[Held] = []
    failed: list[NoSolutionError] = []
    for unknowns, slant in starts:
        try:
            held.append(
                solve_in_strip(linearise, response.place, unknowns, width_mm=width_mm, slant=slant)
            )
        except NoSolutionError as error:
            failed.append(error)
    if not held:
        raise failed[0]
    return held
