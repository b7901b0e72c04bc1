"""What can a single balanced fret tell of nut and saddle?

Not which of the two to move: on every string both change its pitch in nearly the same ratio.
Where strings share figures at both ends, plain least squares would play off against each other,
over metres, what little the strings differ in this.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from layout.strings.balance import Response
from layout.strings.moves import Linear

Array = NDArray[np.float64]

APART = 0.1
"""Patterns over the strings that differ less than this, as nut and saddle edges do, are one."""


def ask_no_more(response: Response) -> Response:
    """Give the response that asks of a single balanced fret no more than it can tell.

    The errors are weighed together only over the patterns across the strings that the rules can
    follow; these are fewer than the unknowns, and the least move decides the rest. With more
    frets, with one end free, or where every string's own pitch can be met, nothing changes.

    """
    counted = response.balance.counted
    if not (response.nut.count and response.saddle.count and is_one_fret(response)):
        return response
    start = np.zeros(response.count)
    on_nut = response.weighted_errors(*response.figures_mm(start))[1].sum(axis=1)
    heard = np.asarray(np.any(counted, axis=1))
    patterns = np.sum(response.figure_slopes(start), axis=0) * heard[:, None]
    sizes, directions = np.linalg.svd(patterns)[1:]
    apart = directions[: np.count_nonzero(sizes > APART * sizes[0])]
    if len(apart) == np.count_nonzero(counted):
        return response
    told = np.linalg.qr(on_nut[:, None] * (patterns @ apart.T))[0]
    return replace(response, told=np.asarray(told))


def hold_nut(response: Response, unknowns: Array) -> tuple[Response, Array]:
    """Hold the nut where it is, if a single fret could not tell it from a saddle in a strip.

    Returns
    -------
    Response, Array
        What is still free and its unknowns; as given where the nut is free on every string, or
        more frets are balanced.

    """
    strings = np.count_nonzero(response.balance.counted.any(axis=1))
    if not is_one_fret(response) or not 0 < response.nut.count < strings:
        return response, unknowns
    shift_mm = response.figures_mm(unknowns)[0]
    held = Linear(shift_mm, np.zeros((len(shift_mm), 0)))
    return replace(response, nut=held, told=None), unknowns[response.nut.count :]


def is_one_fret(response: Response) -> bool:
    """Tell whether all balanced stops lie at one fret."""
    return bool(np.count_nonzero(response.balance.counted.any(axis=0)) == 1)
