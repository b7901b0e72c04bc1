"""Where does each fret line run, and where does it meet every string?

A straight fret is the one line that serves its strings' own stops best: least squares in cents,
one vote a course.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from layout.errors import NoSolutionError
from layout.geometry.cross import CrossLine
from layout.geometry.strings import StringLines

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

CENTS_PER_NEPER = 1200 / np.log(2)
"""Cents in a factor e: 1200/ln 2, exact by the definition of the cent (Ellis 1885)."""


@dataclass(frozen=True, slots=True)
class FretLines:
    """Every fret as a line across the board.

    Attributes
    ----------
    at_centre_mm, slope
        Shape (F,): x on the centre line, and mm toward the bridge per mm toward the treble.
    met_mm
        Shape (S, F): distance along the string from its own nut to the line; nan where the fret
        does not serve the string.
    served
        Shape (S, F): which strings each fret serves.

    """

    at_centre_mm: Array
    slope: Array
    met_mm: Array
    served: Mask

    def line(self, fret: int) -> CrossLine:
        """Give the line of fret number ``fret``, counted from 1."""
        return CrossLine(float(self.at_centre_mm[fret - 1]), float(self.slope[fret - 1]))


def divide_mm(scale_mm: Array, cents: Array) -> Array:
    """Divide every string: the stop lies 1 - 2^(-c/1200) of the way along it.

    Parameters
    ----------
    scale_mm
        Shape (S,): plan lengths.
    cents
        Shape (S, F): above the open string.

    Returns
    -------
    Array
        Shape (S, F): distance from the string's own nut, in mm.

    """
    return np.asarray(scale_mm[:, None] * -np.expm1(-cents / CENTS_PER_NEPER))


def vote_weights(served: Mask, course: NDArray[np.int_]) -> Array:
    """Share one vote among the served strings of a course: (S, F), 0 where not served."""
    same = (course[:, None] == course[None, :]).astype(float)
    mates = same @ served.astype(float)
    return np.where(served, 1.0 / np.maximum(mates, 1.0), 0.0)


def lay_frets(
    strings: StringLines,
    own_mm: Array,
    *,
    votes: Array,
    served: Mask,
    free: Mask,
    square_slope: float = 0.0,
) -> FretLines:
    """Lay the straight frets that serve the strings' own stops best, in cents.

    Parameters
    ----------
    strings
        Where the strings run.
    own_mm
        Shape (S, F): each string's own stop, from its own nut.
    votes
        Shape (S, F): weight of each string in each fret's line.
    served
        Shape (S, F): which strings the fret runs under.
    free
        Shape (F,): whether the slant is free; else the line lies at ``square_slope``, or
        parallel to the nut line where it serves one string.
    square_slope
        Slope of a fret whose slant is not free.

    Returns
    -------
    FretLines

    Raises
    ------
    NoSolutionError
        When the lines do not settle, with the last move in mm.

    Notes
    -----
    The error a line leaves on a string is 1200 log2((X0 - own)/(X0 - met)): no physics, so that
    a clash is one of temperaments only. Where all stops are collinear the line passes through
    them.

    """
    voting = votes > 0
    rows = np.where(voting, votes, 0.0)
    y = np.where(voting, strings.nut_mm[:, 1:], 0.0)
    outermost = np.where(voting, y, -np.inf).max(axis=0), np.where(voting, y, np.inf).min(axis=0)
    lone = outermost[0] - outermost[1] <= 0  # one string, or all of them down one line
    slanted = free & ~lone
    slope = np.where(lone, strings.nut_line.slope, square_slope) * np.ones(own_mm.shape[1])
    start = strings.points(np.where(voting, own_mm, 0.0))
    weight = rows.sum(axis=0)
    a = ((start[..., 0] - slope * start[..., 1]) * rows).sum(axis=0) / weight
    b = slope.copy()
    for _ in range(60):
        move_a, move_b = _improve(strings, own_mm, rows=rows, a=a, b=b, slanted=slanted)
        a, b = a + move_a, b + move_b
        last = float(max(np.max(np.abs(move_a)), 100 * np.max(np.abs(move_b))))
        if last < 1e-12 * strings.scale_mm.max():
            break
    else:
        raise NoSolutionError("fret line", iterations=60, last=last)
    met = np.where(served, _met(strings, a, b)[0], np.nan)
    return FretLines(a, b, met, served)


def _met(strings: StringLines, a: Array, b: Array) -> tuple[Array, Array]:
    """Distance along every string to every line x = a + b y, and the foreshortening there."""
    x, y = strings.nut_mm[:, :1], strings.nut_mm[:, 1:]
    across = strings.direction[:, :1] - b * strings.direction[:, 1:]
    return (a + b * y - x) / across, across


def _improve(
    strings: StringLines, own: Array, *, rows: Array, a: Array, b: Array, slanted: Mask
) -> tuple[Array, Array]:
    """One Gauss-Newton step for all frets at once.

    Legend: e error in cents, r = de/dmet, p and q its derivatives by a and b.
    """
    scale = strings.scale_mm[:, None]
    met, across = _met(strings, a, b)
    left = np.where(rows > 0, scale - met, 1.0)
    own_left = np.where(rows > 0, scale - own, 1.0)
    e = CENTS_PER_NEPER * np.log(own_left / left)
    r = CENTS_PER_NEPER / left
    p = r / across
    q = p * (strings.nut_mm[:, 1:] + met * strings.direction[:, 1:])
    aa, ab, bb = ((rows * u * v).sum(axis=0) for u, v in ((p, p), (p, q), (q, q)))
    ae, be = ((rows * u * e).sum(axis=0) for u in (p, q))
    determinant = np.where(slanted, aa * bb - ab * ab, 1.0)
    move_a = np.where(slanted, -(bb * ae - ab * be) / determinant, -ae / aa)
    move_b = np.where(slanted, -(aa * be - ab * ae) / determinant, 0.0)
    return move_a, move_b
