"""What is drawn in a DXF file, read group by group from its bytes?

References
----------
Autodesk (1999), DXF Reference for AutoCAD 2000: group codes, LINE, ARC, CIRCLE, LWPOLYLINE,
POLYLINE, VERTEX; arbitrary axis algorithm.

"""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Iterator
from itertools import pairwise
from typing import NamedTuple

from layout.proof.reading import Pen, Reading, broken_reading
from layout.proof.report import Problem

_UNITS: dict[str, tuple[str, float]] = {
    "0": ("none", 1.0),
    "1": ("in", 25.4),
    "2": ("ft", 304.8),
    "4": ("mm", 1.0),
    "5": ("cm", 10.0),
    "6": ("m", 1000.0),
    "13": ("um", 1e-3),
}
"""$INSUNITS to name and mm (DXF Reference, header section)."""
_BINARY = b"AutoCAD Binary DXF"
_CODE = re.compile(r"[ \t]*-?[0-9]{1,4}[ \t]*")
_WRITING = {
    "TEXT", "MTEXT", "ATTRIB", "ATTDEF", "DIMENSION", "LEADER", "VIEWPORT", "POINT", "IMAGE",
}  # fmt: skip
"""Entities that no cutter follows."""
_PLAIN = {5, 6, 8, 62, 70, 90, 100, 102, 330, 370}
"""Groups of a light polyline that stands in the plane, besides its vertices."""
_CLOSED, _IN_SPACE, _FITTED = 1, 8, 2 | 4 | 16 | 64
"""Flags of a polyline (group 70): closed, 3D, and the kinds that are curves or meshes."""


class _Record(NamedTuple):
    """An entity, or the like: its kind, its groups, and the line of the file it starts on.

    Groups are codes and, in as many places, values.
    """

    kind: str
    codes: list[int]
    values: list[str]
    line: int

    @property
    def groups(self) -> dict[int, str]:
        """By code; of several groups with one code the last."""
        return dict(zip(self.codes, map(str.strip, self.values), strict=True))

    def first(self, code: int, missing: str) -> str:
        """Give the first value with a code."""
        if code not in self.codes:
            return missing
        return self.values[self.codes.index(code)].strip()

    @property
    def layer(self) -> str:
        return self.first(8, "0")


class _BadNumberError(Exception):
    """A value that should be a number is none."""


def read_dxf(content: bytes) -> Reading:
    r"""Read lines, arcs, circles and polylines of an ASCII DXF file, of any release.

    Parameters
    ----------
    content
        The file's bytes.

    Returns
    -------
    Reading
        In mm by the unit the file declares; a file without one is taken to be in mm.

    Examples
    --------
    >>> text = "0|SECTION|2|ENTITIES|0|LINE|8|saw|10|1|20|2|11|4|21|6|0|ENDSEC|0|EOF|"
    >>> reading = read_dxf(text.replace("|", "\n").encode())
    >>> reading.layers, reading.edges.length_mm
    (('saw',), array([5.]))

    """
    if content.startswith(_BINARY):
        return broken_reading("unreadable", "a binary DXF file: save it as ASCII DXF")
    records, fault = _split(content.decode("utf-8", errors="replace"))
    if not records or records[0].kind != "SECTION":
        return broken_reading("unreadable", fault or "this is not a DXF file")
    if fault:
        return broken_reading("truncated", fault)
    pen = Pen()
    header, entities = _find_sections(records)
    _note_hidden_layers(records, pen)
    unit, factor = _read_unit(header, pen)
    _draw_all(entities, pen)
    return pen.finish(unit=unit, factor=factor)


def _split(text: str) -> tuple[list[_Record], str]:
    """Cut the text into records; say what breaks it off, if anything does."""
    lines = text.replace("\r\n", "\n").replace("\r", "\n").split("\n")
    written, values = lines[0:-1:2], lines[1::2]
    fault = "the file breaks off before its end mark (EOF)"
    known = {code: int(code) for code in set(written) if _CODE.fullmatch(code)}
    try:
        codes = [known[code] for code in written]
    except KeyError as strange:
        count = written.index(strange.args[0])
        codes = [known[code] for code in written[:count]]
        if any(map(str.strip, lines[2 * count :])):
            fault = f"line {2 * count + 1} should be a group code"
    if 999 in known.values():  # comments
        said = [place for place, code in enumerate(codes) if code != 999]
        codes, values = [codes[place] for place in said], [values[place] for place in said]
    else:
        said = []
    records: list[_Record] = []
    begins = [place for place, code in enumerate(codes) if code == 0]
    for begin, end in pairwise([*begins, len(codes)]):
        kind = values[begin].strip()
        line = 2 * (said[begin] if said else begin) + 1
        inner = slice(begin + 1, end)
        records.append(_Record(kind, codes[inner], values[inner], line))
        if kind == "EOF":
            return records, ""
    return records, fault


def _find_sections(records: list[_Record]) -> tuple[_Record | None, list[_Record]]:
    """Give the header, and the records of the entities section."""
    header: _Record | None = None
    entities: list[_Record] = []
    section = ""
    for record in records:
        if record.kind == "SECTION":
            section = record.first(2, "")
            if section == "HEADER":
                header = record
        elif record.kind == "ENDSEC":
            section = ""
        elif section == "ENTITIES":
            entities.append(record)
    return header, entities


def _note_hidden_layers(records: list[_Record], pen: Pen) -> None:
    """Note layers that are off or frozen: many programs do not cut what they do not show."""
    for record in records:
        if record.kind != "LAYER":
            continue
        groups = record.groups
        if groups.get(62, "").startswith("-") or groups.get(70, "0") in {"1", "65"}:
            said = f"layer {groups.get(2, '')} is switched off in the file"
            pen.notes.append(Problem("hidden-layer", said))


def _read_unit(header: _Record | None, pen: Pen) -> tuple[str, float]:
    words = [] if header is None else [value.strip() for value in header.values]
    for place, value in enumerate(words[:-1]):
        if value == "$INSUNITS" and header is not None and header.codes[place] == 9:
            declared = words[place + 1]
            if declared in _UNITS:
                return _UNITS[declared]
            pen.faults.append(Problem("unit", f"the file counts in unit {declared!r}, not in mm"))
            return declared[:12], 1.0
    return "none", 1.0


def _draw_all(entities: list[_Record], pen: Pen) -> None:
    strange: dict[str, int] = {}
    for record, vertices in _gather_vertices(entities):
        if 67 in record.codes and record.groups[67] == "1":
            strange["paper space"] = strange.get("paper space", 0) + 1
            continue
        draw = _DRAWN.get(record.kind)
        try:
            understood = draw is not None and draw(record, vertices, pen)
        except (_BadNumberError, KeyError) as fault:
            pen.faults.append(
                Problem("bad-number", f"{record.kind} at line {record.line}: {_say(fault)}")
            )
            continue
        if not understood:
            strange[record.kind] = strange.get(record.kind, 0) + 1
    for kind, count in strange.items():
        if kind in _WRITING or kind == "paper space":
            pen.notes.append(Problem("not-understood", f"{count} {kind} left out", count))
        else:
            said = f"{count} {kind[:24]} cannot be followed; turn them into lines and arcs"
            pen.faults.append(Problem("not-understood", said, count))


def _say(fault: Exception) -> str:
    if isinstance(fault, KeyError):
        return f"group {fault.args[0]} is missing"
    return f"{str(fault)[:24]!r} is not a number"


def _gather_vertices(entities: list[_Record]) -> Iterator[tuple[_Record, list[_Record]]]:
    """Give every entity with the VERTEX records that belong to it."""
    waiting: _Record | None = None
    vertices: list[_Record] = []
    for record in entities:
        if record.kind == "VERTEX" and waiting is not None:
            vertices.append(record)
            continue
        if waiting is not None:
            yield waiting, vertices
            waiting, vertices = None, []
            if record.kind == "SEQEND":
                continue
        if record.kind == "POLYLINE":
            waiting = record
        else:
            yield record, []
    if waiting is not None:
        yield waiting, vertices


def _number(value: str) -> float:
    try:
        number = float(value)
    except ValueError:
        raise _BadNumberError(value) from None
    if not math.isfinite(number) or "_" in value:
        raise _BadNumberError(value)
    return number


def _whole(value: str) -> int:
    number = _number(value)
    return int(number) if abs(number) < 1e9 else 0


def _point(groups: dict[int, str], code: int) -> complex:
    return complex(_number(groups[code]), _number(groups[code + 10]))


def _height(groups: dict[int, str], code: int) -> float:
    return _number(groups[code]) if code in groups else 0.0


def _turned_over(groups: dict[int, str]) -> bool | None:
    """Whether the entity is seen from below (its x runs the other way); None where it is tilted."""
    normal = [_number(groups.get(code, plain)) for code, plain in ((210, "0"), (220, "0"))]
    up = _number(groups.get(230, "1"))
    if abs(normal[0]) > 1e-9 or abs(normal[1]) > 1e-9 or up == 0:
        return None
    return up < 0


def _over(point: complex) -> complex:
    return complex(-point.real, point.imag)


def _draw_line(record: _Record, _: list[_Record], pen: Pen) -> bool:
    groups = record.groups
    pen.begin(record.layer, closed=False)
    pen.draw(
        _point(groups, 10), _point(groups, 11), low=_height(groups, 30), high=_height(groups, 31)
    )
    return True


def _draw_round(record: _Record, _: list[_Record], pen: Pen) -> bool:
    """ARC or CIRCLE."""
    groups = record.groups
    centre, radius = _point(groups, 10), _number(groups[40])
    height, over = _height(groups, 30), _turned_over(groups)
    if over is None:
        return False
    if over:
        centre, height = _over(centre), -height
    if record.kind == "CIRCLE":
        pen.draw_circle(record.layer, centre, radius, height=height)
        return True
    first, last = math.radians(_number(groups[50])), math.radians(_number(groups[51]))
    turn = (last - first) % math.tau or math.tau
    if over:
        first, turn = math.pi - first, -turn
    pen.draw_arc(record.layer, centre, radius, first=first, turn=turn, height=height)
    return True


def _draw_light_polyline(record: _Record, _: list[_Record], pen: Pen) -> bool:
    if _draw_straight(record, pen):
        return True
    points: list[complex] = []
    bulges: list[float] = []
    plain: dict[int, str] = {}
    for code, value in zip(record.codes, map(str.strip, record.values), strict=True):
        if code == 10:
            points.append(complex(_number(value), math.nan))
            bulges.append(0.0)
        elif code == 20 and points:
            points[-1] = complex(points[-1].real, _number(value))
        elif code == 42 and points:
            bulges[-1] = _number(value)
        else:
            plain[code] = value
    if any(math.isnan(point.imag) for point in points):
        raise KeyError(20)
    if 90 in plain and _whole(plain[90]) != len(points):
        said = f"{plain[90]} vertices are announced, {len(points)} are there"
        pen.faults.append(Problem("truncated", f"LWPOLYLINE at line {record.line}: {said}"))
    closed = bool(_whole(plain.get(70, "0")) & _CLOSED)
    return _draw_vertices(record, points, bulges, plain, closed=closed, pen=pen)


def _draw_straight(record: _Record, pen: Pen) -> bool:
    """Draw a straight chain in the plane at once; False leaves it to the slow way."""
    codes, count = record.codes, record.codes.count(10)
    first = codes.index(10) if count > 1 else 0
    vertices = slice(first, first + 2 * count)
    if count < 2 or len(codes) != vertices.stop or codes[vertices] != [10, 20] * count:
        return False
    values = record.values
    plain = dict(zip(codes[:first], map(str.strip, values), strict=False))
    if not _PLAIN.issuperset(plain) or plain.get(90) != str(count):
        return False
    flags = plain.get(70, "0")
    numbers = _read_numbers(values[vertices])
    if flags not in {"0", "1"} or not numbers:
        return False
    points = list(map(complex, numbers[::2], numbers[1::2]))
    pen.draw_straight(record.layer, points, closed=flags == "1")
    return True


def _read_numbers(values: list[str]) -> list[float]:
    """Read numbers; none where any value is not a finite one."""
    try:
        numbers = list(map(float, values))
    except ValueError:
        return []
    return numbers if math.isfinite(sum(numbers)) and "_" not in "".join(values) else []


def _draw_polyline(record: _Record, vertices: list[_Record], pen: Pen) -> bool:
    plain = record.groups
    flags = _whole(plain.get(70, "0"))
    if flags & _FITTED:
        return False
    rows = [vertex.groups for vertex in vertices]
    points = [_point(row, 10) for row in rows]
    closed = bool(flags & _CLOSED)
    if flags & _IN_SPACE:
        heights = [_height(row, 30) for row in rows]
        pen.draw_chain(record.layer, points, closed=closed, heights=heights)
        return True
    bulges = [_number(row.get(42, "0")) for row in rows]
    plain[38] = plain.get(30, "0")
    return _draw_vertices(record, points, bulges, plain, closed=closed, pen=pen)


def _draw_vertices(
    record: _Record,
    points: list[complex],
    bulges: list[float],
    plain: dict[int, str],
    *,
    closed: bool,
    pen: Pen,
) -> bool:
    height, over = _height(plain, 38), _turned_over(plain)
    if over is None:
        return False
    if over:
        points, height = [_over(point) for point in points], -height
        bulges = [-bulge for bulge in bulges]
    heights = [height] * len(points) if height else ()
    pen.draw_chain(record.layer, points, closed=closed, bulges=bulges, heights=heights)
    return True


_DRAWN: dict[str, Callable[[_Record, list[_Record], Pen], bool]] = {
    "LINE": _draw_line,
    "ARC": _draw_round,
    "CIRCLE": _draw_round,
    "LWPOLYLINE": _draw_light_polyline,
    "POLYLINE": _draw_polyline,
}
