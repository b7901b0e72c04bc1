"""What does a match mean for a maker: which slots are right, missing, open, drawn twice?"""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np

from layout.drawing.shapes import LAYERS, Circle, Layer, Lettering, Line, Outline, Shape
from layout.proof.edges import Edges, Flags, Places, Points, find_near_points, points_along
from layout.proof.expected import Expected, is_text
from layout.proof.matching import Match
from layout.proof.reading import Reading
from layout.proof.report import LayerReport, Problem


@dataclass(frozen=True, slots=True)
class Judgement:
    """What a match says, layer by layer."""

    layers: tuple[LayerReport, ...]
    problems: tuple[Problem, ...]
    notes: tuple[Problem, ...]


def judge_match(
    expected: Expected,
    reading: Reading,
    found: Edges,
    match: Match,
    *,
    tolerance_mm: float,
    paper: bool = False,
) -> Judgement:
    """Turn distances between edges into a verdict on shapes.

    Parameters
    ----------
    expected
        What should be there.
    reading, found
        What is there; ``found`` are its edges in the sheet's frame.
    match
        How the two agree.
    tolerance_mm
        The largest deviation that passes.
    paper
        On paper, contours end at the edge of the page, lines may cross twice, and there are no
        layers: none of that is judged.

    Notes
    -----
    Whatever is cut, drilled or scribed must be there, whole and within the tolerance. Reference
    lines may be left out (a note), but those that are there must be right. Lettering may be left
    out, changed or set anew where it stood (notes). Whatever else is in the file fails: a machine
    would cut it. So does whatever is drawn twice.

    """
    bench = _Bench(expected, reading, found, match, tolerance_mm, paper=paper)
    layers: list[LayerReport] = []
    problems: list[Problem] = []
    notes: list[Problem] = []
    extra = bench.count_extra()
    for layer in expected.sheet.layers:
        report, failing, noted = bench.judge_layer(layer, extra.get(layer, 0))
        layers.append(report)
        problems += failing
        notes += noted
    extra_problems, extra_notes = bench.name_extra()
    problems += extra_problems
    notes += extra_notes
    if not paper:
        problems += bench.name_doubled()
        notes += bench.name_mixed()
    return Judgement(tuple(layers), tuple(problems), tuple(notes))


def _say(point: complex) -> str:
    return f"({point.real:.3f}, {point.imag:.3f})"


def _name_kind(shape: Shape, count: int) -> str:
    match shape:
        case Lettering():
            word = "text"
        case Line():
            word = "line"
        case Circle():
            word = "circle"
        case Outline(closed=True):
            word = "closed outline"
        case _:
            word = "chain"
    return word if count == 1 else f"{word}s"


class _Bench:
    """Everything a verdict needs, with the questions asked of it."""

    def __init__(
        self,
        expected: Expected,
        reading: Reading,
        found: Edges,
        match: Match,
        tolerance_mm: float,
        *,
        paper: bool,
    ) -> None:
        self.paper = paper
        self.expected, self.reading, self.found, self.match = expected, reading, found, match
        self.tolerance_mm = tolerance_mm
        self.shapes = expected.sheet.shapes
        count = len(self.shapes)
        lacking = ~match.served | (match.uncovered_mm > tolerance_mm)
        self.lacking = np.bincount(expected.shape, weights=lacking, minlength=count)
        self.served = np.bincount(expected.shape, weights=match.served, minlength=count)
        self.deviation_mm = np.zeros(count)
        np.maximum.at(self.deviation_mm, expected.shape, match.deviation_mm)
        self.extra = match.stray_mm > np.minimum(tolerance_mm, found.length_mm / 2)
        self.in_labels = self._find_labels()
        self.at_once = np.full(len(expected.edges), -1, np.intp)
        owners = np.flatnonzero(match.serves >= 0)
        self.at_once[match.serves[owners]] = owners

    def judge_layer(
        self, layer: Layer, extra: int
    ) -> tuple[LayerReport, list[Problem], list[Problem]]:
        places = [
            place
            for place, shape in enumerate(self.shapes)
            if shape.layer == layer
            and place not in self.expected.spare
            and self.expected.first[place] < self.expected.first[place + 1]
        ]
        absent = [place for place in places if not self.served[place]]
        partly = [place for place in places if self.served[place] and self.lacking[place]]
        opened = [place for place in places if self.served[place] and self._is_open(place)]
        missing = sorted({*absent, *partly, *opened})
        largest = float(max((self.deviation_mm[place] for place in places), default=0.0))
        report = LayerReport(
            layer, len(places), len(places) - len(missing), len(missing), extra, largest
        )
        failing: list[Problem] = []
        noted: list[Problem] = []
        needless = layer.startswith("REF") or layer == "ENGRAVE_LABEL"
        if absent:
            (noted if needless else failing).append(
                self._name_places("missing", layer, absent, len(places), "missing")
            )
        if opened:
            failing.append(
                self._name_places("open-contour", layer, opened, len(places), "not closed")
            )
        if partly := [place for place in partly if place not in opened]:
            (noted if needless else failing).append(
                self._name_places("missing", layer, partly, len(places), "there only in part")
            )
        for problem, text in self._name_deviation(layer, places):
            (noted if text else failing).append(problem)
        return report, failing, noted

    def _name_places(
        self, code: str, layer: Layer, places: Sequence[int], all_there: int, said: str
    ) -> Problem:
        shape = self.shapes[places[0]]
        first = self.expected.edges.start[self.expected.first[places[0]]]
        kind = _name_kind(shape, all_there)
        are = "is" if len(places) == 1 else "are"
        where = f", the first at {_say(first)}" if len(places) > 1 else f", at {_say(first)}"
        if isinstance(shape, Lettering):
            where += f" ({shape.text[:30]!r})"
        text = f"{layer}: {len(places)} of {all_there} {kind} {are} {said}{where}"
        return Problem(code, text, float(len(places)))

    def _name_deviation(
        self, layer: Layer, places: Sequence[int]
    ) -> Iterator[tuple[Problem, bool]]:
        """Name what is out of place, and say whether it is lettering."""
        for text in (False, True):
            mine = [place for place in places if is_text(self.shapes[place]) == text]
            off = [place for place in mine if self.deviation_mm[place] > self.tolerance_mm]
            if not off:
                continue
            worst = max(off, key=lambda place: float(self.deviation_mm[place]))
            amount = float(self.deviation_mm[worst])
            part = slice(self.expected.first[worst], self.expected.first[worst + 1])
            edge = part.start + int(np.argmax(self.match.deviation_mm[part]))
            where = _say(self.expected.edges.start[edge])
            kind = _name_kind(self.shapes[worst], len(mine))
            are = "is" if len(off) == 1 else "are"
            said = f"{layer}: {len(off)} of {len(mine)} {kind} {are} out of place, the worst by "
            yield Problem("deviation", f"{said}{amount:.4f} mm, at {where}", amount), text

    def _servants(self, place: int) -> Places:
        """The edges of the file that make up a shape."""
        edges = range(self.expected.first[place], self.expected.first[place + 1])
        owners: set[int] = set()
        for edge in edges:
            if edge in self.match.servants:
                owners |= self.match.servants[edge]
            elif self.at_once[edge] >= 0:
                owners.add(int(self.at_once[edge]))
        return np.array(sorted(owners), np.intp)

    def _is_open(self, place: int) -> bool:
        """Whether a closed outline has loose ends in the file."""
        shape = self.shapes[place]
        if not (isinstance(shape, Outline) and shape.closed) or is_text(shape):
            return False
        if self.paper or not shape.layer.startswith("CUT"):
            return False
        owners = self._servants(place)
        if self.reading.closed[owners].all() and not self.lacking[place]:
            return False
        ends = np.concatenate((self.found.start[owners], self.found.end[owners]))
        count = len(owners)
        one, other = find_near_points(ends, ends, within_mm=self.tolerance_mm)
        joined = np.zeros(2 * count, bool)
        joined[one[(one % count) != (other % count)]] = True
        return not joined.all()

    def count_extra(self) -> dict[str, int]:
        """Count stray edges by the planned layer that their own layer stands for."""
        layer_of = self._find_planned_layers()
        names = [layer_of[place] for place in self.reading.layer[self.extra]]
        return dict(Counter(names))

    def _find_planned_layers(self) -> list[str]:
        """For every layer of the file: the planned one of that name, or that most of it serves."""
        answer: list[str] = []
        for place, name in enumerate(self.reading.layers):
            if name in LAYERS:
                answer.append(name)
                continue
            counts = self._count_served(place)
            answer.append(counts.most_common(1)[0][0] if counts else "")
        return answer

    def _count_served(self, place: int) -> Counter[str]:
        serves = self.match.serves[(self.reading.layer == place) & (self.match.serves >= 0)]
        shapes, counts = np.unique(self.expected.shape[serves], return_counts=True)
        total: Counter[str] = Counter()
        for shape, count in zip(shapes.tolist(), counts.tolist(), strict=True):
            total[self.shapes[shape].layer] += count
        return total

    def _find_labels(self) -> Flags:
        """Stray edges of the file that lie where lettering is planned, and touch nothing else."""
        places = np.flatnonzero(self.extra & (self.match.serves < 0))
        start, end = self.found.start[places], self.found.end[places]
        within = np.zeros(len(places), bool)
        for left, low, right, high in self.expected.label_boxes if len(places) else ():
            within |= _inside(start, left, low, right, high) & _inside(end, left, low, right, high)
        flags = np.zeros(len(self.found), bool)
        flags[places[within]] = True
        return flags

    def name_extra(self) -> tuple[list[Problem], list[Problem]]:
        """Name stray edges: failing, or notes where they only change lettering."""
        named: tuple[list[Problem], list[Problem]] = ([], [])
        for kind, chosen in enumerate((self.extra & ~self.in_labels, self.extra & self.in_labels)):
            for place in np.unique(self.reading.layer[chosen]):
                mine = np.flatnonzero(chosen & (self.reading.layer == place))
                longest = mine[int(np.argmax(self.match.stray_mm[mine]))]
                is_one = "1 edge is" if len(mine) == 1 else f"{len(mine)} edges are"
                why = "not planned" if kind == 0 else "not the planned lettering"
                text = (
                    f"on layer {self.reading.layers[place]} {is_one} {why}, the longest from "
                    f"{_say(self.found.start[longest])} to {_say(self.found.end[longest])}"
                )
                named[kind].append(Problem("extra", text, float(len(mine))))
        return named

    def name_doubled(self) -> Iterator[Problem]:
        """Name what is drawn twice."""
        least = np.minimum(self.tolerance_mm, self.found.length_mm / 2)
        doubled = self.match.doubled_mm > least
        for place in np.unique(self.reading.layer[doubled]):
            mine = np.flatnonzero(doubled & (self.reading.layer == place))
            worst = mine[int(np.argmax(self.match.doubled_mm[mine]))]
            where = points_along(self.found, np.array([worst]), np.array([0.5]))[0, 0]
            is_one = "1 edge is" if len(mine) == 1 else f"{len(mine)} edges are"
            text = (
                f"on layer {self.reading.layers[place]} {is_one} drawn twice, "
                f"the longest stretch {self.match.doubled_mm[worst]:.3f} mm, about {_say(where)}"
            )
            yield Problem("duplicate", text, float(len(mine)))

    def name_mixed(self) -> Iterator[Problem]:
        """Note layers of the file that hold several operations."""
        for place, name in enumerate(self.reading.layers):
            held = sorted(layer for layer in self._count_served(place))
            if len(held) > 1:
                yield Problem("layers-mixed", f"layer {name} holds {', '.join(held)}", len(held))


def _inside(points: Points, left: float, low: float, right: float, high: float) -> Flags:
    across = (points.real >= left) & (points.real <= right)
    return np.asarray(across & (points.imag >= low) & (points.imag <= high))
