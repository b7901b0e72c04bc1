"""Where is a drawing parted between sheets of paper, so that no joint runs through a fret?

Along one axis: neighbouring windows overlap, and each joint is the middle of an overlap. All
joints are chosen together, since moving one moves the room of the others.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

Span = tuple[float, float]
"""From where to where a line that must stay whole reaches along the axis, mm."""

CLEAR_MM = 6.0
"""Wanted between a joint and the nearest line: room for its figures, and for a knife."""
_TOUCH_MM = 0.1
"""A joint nearer than this runs through the line: half a printed line's width, and a little."""
_BESIDE_MM = 1.05 * _TOUCH_MM
"""As near to a line as a joint may come; gaps are tried there and in the middle."""
_GRID_MM = 4.0
"""Apart from that, joints are tried this far apart."""
_SAME_MM = 1e-9

_Way = tuple[int, float, tuple[float, ...]]
"""Joints chosen so far, with what they cost: lines crossed, and millimetres of room they lack."""


@dataclass(frozen=True, slots=True)
class Parting:
    """Windows along one axis.

    Attributes
    ----------
    windows_mm
        From where to where each window reaches: the first and the last as far as there is room,
        at a joint half an overlap beyond it.
    joints_mm
        The middle of each overlap, one fewer than the windows.
    crossed
        How many lines the joints run through.

    """

    windows_mm: tuple[Span, ...]
    joints_mm: tuple[float, ...]
    crossed: int


def part_axis(
    low_mm: float, high_mm: float, *, window_mm: float, overlap_mm: float, spans: Sequence[Span]
) -> Parting:
    """Part a drawing into the fewest windows whose joints avoid the lines.

    Parameters
    ----------
    low_mm, high_mm
        Reach of the drawing.
    window_mm, overlap_mm
        Largest size of a window, and what two neighbours share; less than the window.
    spans
        Lines no joint should run through.

    Returns
    -------
    Parting
        With one window more than the fewest only if that keeps lines whole that would be cut.

    Examples
    --------
    >>> part_axis(0, 100, window_mm=70, overlap_mm=10, spans=[(50, 50), (62, 62), (70, 70)])
    Parting(windows_mm=((0, 61.0), (51.0, 121.0)), joints_mm=(56.0,), crossed=0)

    """
    step = window_mm - overlap_mm
    fewest = max(1, math.ceil((high_mm - low_mm - overlap_mm - _SAME_MM) / step))
    if fewest == 1:
        start = (low_mm + high_mm - window_mm) / 2
        return Parting(((start, start + window_mm),), (), 0)
    reach = _Reach(low_mm, high_mm, step, overlap_mm / 2, tuple(spans))
    joints, crossed = reach.choose(fewest)
    if crossed:
        more, left_crossed = reach.choose(fewest + 1)
        if left_crossed < crossed:
            joints, crossed = more, left_crossed
    half = overlap_mm / 2
    starts = (low_mm, *(joint - half for joint in joints))
    ends = (*(joint + half for joint in joints), starts[-1] + window_mm)
    return Parting(tuple(zip(starts, ends, strict=True)), joints, crossed)


@dataclass(frozen=True, slots=True)
class _Reach:
    low: float
    high: float
    step: float
    half_overlap: float
    spans: tuple[Span, ...]

    def choose(self, windows: int) -> tuple[tuple[float, ...], int]:
        """Choose all joints together, at the least cost; give them and how many lines they cross.

        Dynamic programming: the cheapest way to every possible place of the first joint, then of
        the second, and so on. Among equals the later joint, which fills the earlier sheets.
        """
        best: dict[float, _Way] = {self.low: (0, 0.0, ())}
        for number in range(1, windows):
            following: dict[float, _Way] = {}
            for place in self._places(number, windows):
                first = self.half_overlap if number == 1 else 0.0
                before = [
                    way
                    for at, way in best.items()
                    if at < place + _SAME_MM and place - at <= self.step + first + _SAME_MM
                ]
                if before:
                    crossed, shortage, joints = min(before, key=_rank)
                    here = self._cost(place)
                    cost = (crossed + here[0], shortage + here[1], (*joints, place))
                    following[place] = cost
            best = following
        crossed, _, joints = min(best.values(), key=_rank)
        return joints, crossed

    def _places(self, number: int, windows: int) -> list[float]:
        """Places for one joint that leave enough for the windows before and after it."""
        latest = self.low + number * self.step + self.half_overlap
        earliest = self.high - (windows - number) * self.step - self.half_overlap
        earliest = max(earliest, self.low + self.half_overlap)
        tried = {earliest, latest}
        steps = int((latest - earliest) / _GRID_MM)
        tried.update(latest - count * _GRID_MM for count in range(1, steps + 1))
        for start, end in self._gaps():
            tried.update((start + _BESIDE_MM, (start + end) / 2, end - _BESIDE_MM))
        return sorted(place for place in tried if earliest <= place <= latest) or [latest]

    def _gaps(self) -> list[Span]:
        """Stretches between the lines that no line reaches into."""
        gaps: list[Span] = []
        reached = -math.inf
        for start, end in sorted(self.spans):
            if start - reached > 2 * _TOUCH_MM and reached > -math.inf:
                gaps.append((reached, start))
            reached = max(reached, end)
        return gaps

    def _cost(self, place: float) -> tuple[int, float]:
        """How many lines a joint runs through, and how much room it lacks beside them."""
        gaps = [max(low - place, place - high) for low, high in self.spans]
        crossed = sum(gap < _TOUCH_MM for gap in gaps)
        # Lines that are crossed anyway: as near to one of their ends as can be.
        return crossed, sum(max(0.0, CLEAR_MM - gap) for gap in gaps)


def _rank(way: _Way) -> tuple[int, float, float]:
    """Order ways: fewest lines crossed, most room, then the latest joints."""
    crossed, shortage, joints = way
    return crossed, round(shortage, 6), -sum(joints)
