"""Is the whole drawing enlarged, mirrored, turned or moved, and by which known mistake?

Asked before single edges are matched: a drawing that was read in another unit has every edge wrong
in the same way, and a list of them would hide the cause.
"""

from __future__ import annotations

import cmath
import math
from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
import shapely
from numpy.typing import NDArray

from layout.proof.edges import Edges, Points, find_near_points
from layout.proof.expected import Expected
from layout.proof.matching import pair_in_turn
from layout.proof.plane_map import UNMOVED, PlaneMap
from layout.proof.report import Problem

_CAUSES: tuple[tuple[float, str], ...] = (
    (25.4, "millimetres were taken for inches"),
    (1 / 25.4, "inches were taken for millimetres"),
    (72 / 96, "72/96: a file at 96 units an inch was read at 72, or the reverse"),
    (96 / 72, "96/72: a file at 72 units an inch was read at 96, or the reverse"),
    (90 / 96, "90/96: a file at 90 units an inch was read at 96, or the reverse"),
    (96 / 90, "96/90: a file at 96 units an inch was read at 90, or the reverse"),
    (72 / 90, "72/90: units of 1/72 and of 1/90 inch were mixed up"),
    (90 / 72, "90/72: units of 1/90 and of 1/72 inch were mixed up"),
    (25.4 / 96, "millimetres were taken for pixels of 1/96 inch"),
    (96 / 25.4, "pixels of 1/96 inch were taken for millimetres"),
    (25.4 / 90, "millimetres were taken for pixels of 1/90 inch"),
    (90 / 25.4, "pixels of 1/90 inch were taken for millimetres"),
    (25.4 / 72, "millimetres were taken for points of 1/72 inch"),
    (72 / 25.4, "points of 1/72 inch were taken for millimetres"),
    (10.0, "millimetres were taken for centimetres"),
    (0.1, "centimetres were taken for millimetres"),
    (1000.0, "millimetres were taken for metres"),
    (0.001, "metres were taken for millimetres"),
    (304.8, "millimetres were taken for feet"),
    (1 / 304.8, "feet were taken for millimetres"),
)
"""Factors by which drawings come out wrong: ratios of units, and of the pixels that programs have
counted to the inch (72 in print, 90 and 96 in SVG)."""
_SAME_FACTOR = 2e-5
"""Two factors nearer than this are one: 0.01 mm over half a metre."""
_MOST_PROBES = 400
_LONGEST = 8
_FIRST_LOOK = 40
_ENOUGH = 0.5
"""Share of the probes that must be met before the whole drawing is said to be moved."""
_AGREES = 0.98
"""The same for a drawing that is left alone."""
_FEW = 6
"""Points that any drawing may meet another one in."""
_NEARLY_ALL = 0.85
"""The same for an enlargement or a turn that is none of the known ones."""


@dataclass(frozen=True, slots=True)
class Similarity:
    """How the whole file differs from the sheet.

    Attributes
    ----------
    to_sheet
        Takes points of the file to where the sheet has them.
    problems
        What that means, named.
    met
        Share of the corners looked at that are in the file then.

    """

    to_sheet: PlaneMap
    problems: tuple[Problem, ...]
    met: float = 1.0


def find_similarity(
    expected: Expected, found: Edges, *, anchor: complex, tolerance_mm: float
) -> Similarity:
    """Find what is wrong with the whole drawing, if anything is.

    Parameters
    ----------
    expected, found
        In the frame they should share, mm.
    anchor
        The point that stays where it is when the file is read in another unit: the origin of a
        DXF file, the corner of a page.
    tolerance_mm
        A drawing that agrees within this is left alone.

    """
    in_turn, _, _ = pair_in_turn(expected.edges, found, within_mm=tolerance_mm)
    if len(in_turn) >= _AGREES * len(found):  # nothing is drawn, or all as it was planned
        return Similarity(UNMOVED, ())
    probes = _choose_probes(expected)
    seen = np.unique(np.concatenate((found.start, found.end)))
    most = max(1, min(len(probes), len(seen)))
    stays = _count_met(UNMOVED, probes, seen, within_mm=tolerance_mm)
    if stays >= _AGREES * most:
        return Similarity(UNMOVED, ())
    best, met = UNMOVED, stays
    for guess in _rank_guesses(expected, found, probes, seen, tolerance_mm=tolerance_mm):
        refined = _refine(guess, probes, seen, tolerance_mm=tolerance_mm)
        count = _count_met(refined, probes, seen, within_mm=tolerance_mm)
        if count > met:
            best, met = refined, count
    # A few more points met by chance are no reason to call the drawing moved.
    if met < (_FEW if _is_plain(best) else 2 * _FEW):
        return Similarity(UNMOVED, (), stays / most)
    if met < stays + 0.1 * most or met < (_ENOUGH if _is_plain(best) else _NEARLY_ALL) * most:
        return Similarity(UNMOVED, (), stays / most)
    named = tuple(_name(best, anchor=anchor, tolerance_mm=tolerance_mm))
    return Similarity(best, named, met / most)


def move_edges(edges: Edges, by: PlaneMap) -> Edges:
    """Give edges where a map takes them; heights grow with the drawing."""
    if by == UNMOVED:
        return edges
    start, end = _move(edges.start, by), _move(edges.end, by)
    bulge = -edges.bulge if by.mirrors else edges.bulge
    scale = max(abs(by.a), abs(by.c))
    return Edges(start, end, bulge, edges.low * scale, edges.high * scale)


def _move(points: Points, by: PlaneMap) -> Points:
    return np.asarray(by.a * points + by.c * np.conj(points) + by.b)


def _choose_probes(expected: Expected) -> Points:
    """Corners of the drawing: all but lettering, and enough lettering to tell left from right."""
    points = np.concatenate((expected.edges.start, expected.edges.end))
    text = np.concatenate((expected.lettering, expected.lettering))
    chosen = []
    for kind in (points[~text], points[text]):
        single = np.unique(kind)
        step = max(1, math.ceil(len(single) / (_MOST_PROBES / 2)))
        chosen.append(single[::step])
    return np.concatenate(chosen)


def _count_met(to_sheet: PlaneMap, probes: Points, seen: Points, *, within_mm: float) -> int:
    moved = _move(seen, to_sheet)
    if not np.all(np.isfinite(moved)) or np.abs(moved).max() > 1e9:
        return 0
    met, _ = find_near_points(probes, moved, within_mm=within_mm)
    return len(np.unique(met))


def _rank_guesses(
    expected: Expected, found: Edges, probes: Points, seen: Points, *, tolerance_mm: float
) -> list[PlaneMap]:
    """The best guesses, by a first look at a few probes."""
    few = probes[:: max(1, len(probes) // _FIRST_LOOK)]
    tree = shapely.STRtree(np.asarray(shapely.points(seen.real, seen.imag)))
    guesses = [
        guess
        for guess in _guess(expected, found)
        if 1e-5 < guess.scale < 1e5 and abs(abs(guess.a) - abs(guess.c)) >= 1e-6
    ]
    # A glance at every fifth point first: a right guess meets one of them all but surely.
    glance = _count_near(guesses, few[::5], seen, tree, within_mm=5 * tolerance_mm)
    guesses = [guesses[place] for place in np.flatnonzero(glance)]
    counts = _count_near(guesses, few, seen, tree, within_mm=5 * tolerance_mm)
    return [guesses[place] for place in np.argsort(-counts, kind="stable")[:4]]


def _count_near(
    guesses: list[PlaneMap], few: Points, seen: Points, tree: shapely.STRtree, *, within_mm: float
) -> NDArray[np.intp]:
    """Count for every guess how many points of the sheet it brings one of the file near to."""
    if not guesses:
        return np.zeros(0, np.intp)
    there = np.array([guess.back() for guess in guesses])[:, :, None]
    where = there[:, 0] * few + there[:, 1] * np.conj(few) + there[:, 2]
    nearest = tree.nearest(np.asarray(shapely.points(where.real.ravel(), where.imag.ravel())))
    met = seen[nearest].reshape(where.shape)
    here = np.array(guesses)[:, :, None]
    away = np.abs(here[:, 0] * met + here[:, 1] * np.conj(met) + here[:, 2] - few)
    return np.asarray(np.count_nonzero(away <= within_mm, axis=1))


def _guess(expected: Expected, found: Edges) -> Iterator[PlaneMap]:
    """Maps that take a long edge of the file to a long edge of the sheet, or box to box."""
    planned = expected.edges
    for needless in (False, True):
        kind = (expected.needless == needless) & ~expected.lettering
        for mine in _find_longest(planned.take(kind)):
            for theirs in _find_longest(found):
                yield from _guess_from_pair(mine, theirs)
    yield from _guess_from_boxes(planned, found)


def _find_longest(edges: Edges) -> list[tuple[complex, complex]]:
    order = np.argsort(-edges.chord_mm, kind="stable")[:_LONGEST]
    return [(complex(edges.start[place]), complex(edges.end[place])) for place in order]


def _guess_from_pair(
    mine: tuple[complex, complex], theirs: tuple[complex, complex]
) -> Iterator[PlaneMap]:
    for start, end in (theirs, theirs[::-1]):
        turn = (mine[1] - mine[0]) / (end - start)
        yield PlaneMap(turn, 0, mine[0] - turn * start)
        mirror = (mine[1] - mine[0]) / (end - start).conjugate()
        yield PlaneMap(0, mirror, mine[0] - mirror * start.conjugate())


def _guess_from_boxes(planned: Edges, found: Edges) -> Iterator[PlaneMap]:
    """Eight ways to lay one upright box on the other, at one scale, and stretched."""
    box, other = _box(planned), _box(found)
    for quarter in range(4):
        for mirrored in (False, True):
            turn = 1j**quarter
            lay = PlaneMap(0, turn, 0) if mirrored else PlaneMap(turn, 0, 0)
            laid = sorted((lay(other[0]), lay(other[1])), key=lambda point: point.real)
            wide = laid[1].real - laid[0].real
            low, high = sorted(point.imag for point in laid)
            if wide <= 0 or high <= low:
                continue
            across = (box[1] - box[0]).real / wide
            up = (box[1] - box[0]).imag / (high - low)
            for x, y in ((across, across), (up, up), (across, up)):
                stretch = PlaneMap((x + y) / 2, (x - y) / 2, 0)
                corner = stretch(complex(laid[0].real, low))
                yield PlaneMap(1, 0, box[0] - corner).after(stretch).after(lay)


def _box(edges: Edges) -> tuple[complex, complex]:
    points = np.concatenate((edges.start, edges.end))
    return (
        complex(points.real.min(), points.imag.min()),
        complex(points.real.max(), points.imag.max()),
    )


def _refine(guess: PlaneMap, probes: Points, seen: Points, *, tolerance_mm: float) -> PlaneMap:
    """Fit the guess to all points it brings together, and prefer plain numbers."""
    for within_mm in (10 * tolerance_mm, 3 * tolerance_mm):
        moved = _move(seen, guess)
        mine, theirs = find_near_points(probes, moved, within_mm=within_mm)
        if len(mine) < 4:
            return guess
        here, there = probes[mine], seen[theirs]
        guess = _fit(guess, here, there)
        guess = _prefer_plain(guess)
        rest = here - (guess.a * there + guess.c * np.conj(there))
        # The middle one of all, so that one slot out of place does not shift the rest.
        guess = guess._replace(b=complex(np.median(rest.real), np.median(rest.imag)))
    return guess


def _fit(guess: PlaneMap, here: Points, there: Points) -> PlaneMap:
    columns = {"a": there, "c": np.conj(there)}
    names = ["a"] if guess.keeps_circles and not guess.mirrors else ["c"]
    names = names if guess.keeps_circles else ["a", "c"]
    rows = np.column_stack([columns[name] for name in names] + [np.ones(len(there), complex)])
    solved, *_ = np.linalg.lstsq(rows, here, rcond=None)
    fitted = dict(zip(names, map(complex, solved[:-1]), strict=True))
    return PlaneMap(fitted.get("a", 0), fitted.get("c", 0), complex(solved[-1]))


def _prefer_plain(guess: PlaneMap) -> PlaneMap:
    """Take a known factor and a whole quarter turn where the fit is as near as drawings are."""
    if not guess.keeps_circles:
        return guess
    way = guess.c if guess.mirrors else guess.a
    size, angle = abs(way), cmath.phase(way)
    for factor, _ in ((1.0, ""), *_CAUSES):
        if math.isclose(size * factor, 1.0, rel_tol=_SAME_FACTOR):
            size = 1 / factor
    quarter = round(angle / (math.pi / 2))
    if abs(angle - quarter * math.pi / 2) < _SAME_FACTOR:
        way = size * (1, 1j, -1, -1j)[quarter % 4]
    else:
        way = cmath.rect(size, angle)
    return PlaneMap(0, way, guess.b) if guess.mirrors else PlaneMap(way, 0, guess.b)


def _is_plain(found: PlaneMap) -> bool:
    """Whether it is a move, a known enlargement or a whole quarter turn."""
    if not found.keeps_circles:
        return False
    way = found.c if found.mirrors else found.a
    square = min(abs(way.real), abs(way.imag)) < 1e-9 * abs(way)
    factors = (1.0, *(factor for factor, _ in _CAUSES))
    return square and any(math.isclose(abs(way) * factor, 1.0, rel_tol=1e-9) for factor in factors)


def _name(found: PlaneMap, *, anchor: complex, tolerance_mm: float) -> Iterator[Problem]:
    """Say what a map from file to sheet undoes."""
    if not found.keeps_circles:
        yield _name_stretch(found)
        return
    way = found.c if found.mirrors else found.a
    factor = 1 / abs(way)
    if abs(factor - 1) > 1e-9:
        yield _name_scale(factor)
    upright = True
    if found.mirrors:
        upright = False
        yield _name_mirror(way)
    elif abs(cmath.phase(way)) > 1e-9:
        upright = False
        degrees = -math.degrees(cmath.phase(way))
        yield Problem("turned", f"everything is turned by {degrees:.4g} degrees", degrees)
    moved = (anchor - found.b) / found.a - anchor if upright else 0j
    if abs(moved) > tolerance_mm:
        yield Problem(
            "shifted",
            f"everything is shifted by {_digits(moved.real)} mm in x and "
            f"{_digits(moved.imag)} mm in y",
            abs(moved),
        )


def _digits(value: float) -> str:
    """Three decimals, without a minus zero."""
    return f"{round(value, 3) + 0.0:.3f}"


def _name_scale(factor: float) -> Problem:
    cause = next(
        (f": {words}" for known, words in _CAUSES if math.isclose(factor, known, rel_tol=1e-9)), ""
    )
    if factor > 1:
        text = f"everything is {factor:.6g} times too large{cause}"
    else:
        text = f"everything is too small, {factor:.6g} of its size{cause}"
    return Problem("scale", text, factor)


def _name_mirror(way: complex) -> Problem:
    angle = math.degrees(cmath.phase(way)) / 2 % 180.0
    if min(angle, 180 - angle) < 1e-3:
        said = "treble side for bass side"
    elif abs(angle - 90) < 1e-3:
        said = "nut end for bridge end"
    else:
        said = f"in a line at {angle:.4g} degrees"
    return Problem("mirrored", f"everything is mirrored, {said}", angle)


def _name_stretch(found: PlaneMap) -> Problem:
    along, across = abs(found.a + found.c), abs(found.a - found.c)
    text = (
        "everything is stretched: "
        f"{1 / along:.6g} times its size along x and {1 / across:.6g} along y"
    )
    return Problem("stretched", text, along / across)
