"""What is drawn in an SVG file, whichever program saved it?

The file is read as a stream of elements. A document type with definitions of its own is refused:
entities could make a small file endless.

References
----------
W3C (2011), Scalable Vector Graphics 1.1: 5 (structure), 7 (coordinates, transforms, units,
viewBox, preserveAspectRatio), 9 (basic shapes).

"""

from __future__ import annotations

import math
import re
from collections.abc import Callable
from dataclasses import dataclass
from typing import Final
from xml.parsers import expat

from layout.proof.plane_map import UNMOVED, PlaneMap, read_transform
from layout.proof.reading import Pen, Reading, broken_reading
from layout.proof.report import Problem
from layout.proof.svg_path import NUMBER, BadPathError, follow_path, round_corner_path

_MM: Final = {
    "mm": 1.0,
    "cm": 10.0,
    "in": 25.4,
    "pt": 25.4 / 72,
    "pc": 25.4 / 6,
    "px": 25.4 / 96,
    "q": 0.25,
    "": 25.4 / 96,
}
"""Absolute units; a number alone counts in px, 1/96 inch (CSS 2.1, 4.3.2)."""
_LENGTH = re.compile(rf"\s*({NUMBER})\s*([A-Za-z%]*)\s*")
_HIDDEN = re.compile(r"(?:^|;)\s*(?:display\s*:\s*none|visibility\s*:\s*hidden)\b")
_STYLED_TRANSFORM = re.compile(r"(?:^|;)\s*transform\s*:")
_INERT = {
    "defs", "symbol", "clipPath", "mask", "pattern", "marker", "metadata", "title", "desc",
    "style", "script", "namedview", "linearGradient", "radialGradient", "filter", "font",
}  # fmt: skip
"""Elements nothing in which is drawn."""
_WRITING = {"text", "tspan", "textPath", "image", "foreignObject"}
_GROUPS = {"g", "a", "svg", "switch"}


class _RefusedError(Exception):
    """The file holds what no drawing needs."""


@dataclass(frozen=True, slots=True)
class _Place:
    """Where an element stands: its map to the page in mm (y down), its layer, whether it shows."""

    name: str
    to_page: PlaneMap
    layer: str
    shown: bool = True


def read_svg(content: bytes) -> Reading:
    """Read paths and basic shapes of an SVG file, through groups, transforms and units.

    Parameters
    ----------
    content
        The file's bytes.

    Returns
    -------
    Reading
        In mm; x counts from the left and y, downwards negative, from the top of the page. Curves
        come as chords within 0.0005 mm.

    Examples
    --------
    >>> reading = read_svg(b'<svg width="2in" viewBox="0 0 2 1"><path d="M0 0h1"/></svg>')
    >>> reading.unit, reading.edges.length_mm
    ('in', array([25.4]))

    """
    reader = _Reader()
    parser = expat.ParserCreate(namespace_separator=" ")
    parser.StartElementHandler = reader.start
    parser.EndElementHandler = reader.end
    parser.StartDoctypeDeclHandler = _refuse_definitions
    parser.EntityDeclHandler = _refuse_entity
    try:
        parser.Parse(content, True)  # noqa: FBT003  expat takes no keywords
    except expat.ExpatError as fault:
        where = f"line {fault.lineno}"
        return broken_reading("truncated", f"the file breaks off or is no XML, at {where}")
    except _RefusedError as fault:
        return broken_reading("unreadable", str(fault))
    except (ValueError, LookupError):  # an encoding there is not
        return broken_reading("unreadable", "the file's characters cannot be read")
    if reader.unit is None:
        return broken_reading("unreadable", "this is not an SVG file")
    return reader.finish()


def _refuse_definitions(*declared: object) -> None:
    if declared[-1]:
        raise _RefusedError("the file defines entities of its own, which a drawing does not need")


def _refuse_entity(*_: object) -> None:
    raise _RefusedError("the file defines entities of its own, which a drawing does not need")


class _Reader:
    """Follows the elements and draws what shows."""

    def __init__(self) -> None:
        self.pen = Pen()
        self.unit: str | None = None
        self.places = [_Place("", UNMOVED, "0")]
        self.strange: dict[str, int] = {}
        self.bad: list[str] = []

    def start(self, tag: str, given: dict[str, str]) -> None:
        name = tag.rpartition(" ")[2]
        around = self.places[-1]
        if self.unit is None and name != "svg":
            raise _RefusedError("this is not an SVG file")
        here = _Place(name, around.to_page, around.layer, around.shown)
        try:
            here = self._enter(here, given)
            if here.shown and name not in _GROUPS:
                self._draw(here, given)
        except (BadPathError, ValueError, OverflowError) as fault:
            self.bad.append(f"<{name}>: {str(fault)[:60] or 'a number is missing'}")
        self.places.append(here)

    def end(self, _: str) -> None:
        self.places.pop()

    def _enter(self, place: _Place, given: dict[str, str]) -> _Place:
        style = given.get("style", "")
        hidden = given.get("display") == "none" or given.get("visibility") == "hidden"
        shown = place.shown and place.name not in _INERT
        shown = shown and not hidden and not _HIDDEN.search(style)
        to_page = place.to_page
        if place.name == "svg":
            to_page = self._open_window(to_page, given)
        if transform := given.get("transform"):
            to_page = to_page.after(read_transform(transform))
        if _STYLED_TRANSFORM.search(style):
            self._count("transform in a style")
        return _Place(place.name, to_page, _layer_name(place, given), shown)

    def _open_window(self, to_page: PlaneMap, given: dict[str, str]) -> PlaneMap:
        outermost = self.unit is None
        box = [float(word) for word in given.get("viewBox", "").replace(",", " ").split()]
        box = box if len(box) == 4 and min(box[2:]) > 0 else []
        sizes = [_read_size(given.get(key), outermost=outermost) for key in ("width", "height")]
        if outermost:
            self.unit = sizes[0][1] or sizes[1][1] or "px"
        across, down = sizes[0][0], sizes[1][0]
        if box and across is None and down is not None:
            across = down * box[2] / box[3]
        elif box and down is None and across is not None:
            down = across * box[3] / box[2]
        corner = (
            complex(0, 0)
            if outermost
            else complex(*(float(given.get(key, "0")) for key in ("x", "y")))
        )
        window = to_page.after(PlaneMap(1, 0, corner))
        if not box:
            return window.after(PlaneMap(_MM["px"], 0, 0)) if outermost else window
        if across is None or down is None:
            across, down = (side * _MM["px"] if outermost else side for side in box[2:])
        return window.after(_fit(box, across, down, given.get("preserveAspectRatio", "")))

    def _draw(self, place: _Place, given: dict[str, str]) -> None:
        draw = _SHAPES.get(place.name)
        if draw is not None:
            follow_path(draw(given), place.to_page, self.pen, layer=place.layer)
        elif place.name in _WRITING:
            self.pen.notes.append(Problem("not-understood", f"<{place.name}> left out"))
        elif place.name == "use":
            self._count("<use>")

    def _count(self, what: str) -> None:
        self.strange[what] = self.strange.get(what, 0) + 1

    def finish(self) -> Reading:
        for what, count in self.strange.items():
            said = f"{count} {what} cannot be followed; turn them into plain paths"
            self.pen.faults.append(Problem("not-understood", said, count))
        if self.bad:
            more = f", and {len(self.bad) - 1} more" if len(self.bad) > 1 else ""
            self.pen.faults.append(
                Problem("bad-number", f"{self.bad[0]}{more}", float(len(self.bad)))
            )
        return self.pen.finish(unit=self.unit or "px")


def _layer_name(place: _Place, given: dict[str, str]) -> str:
    """A group's name is its layer's: the label a drawing program gives it, or its id."""
    if place.name != "g":
        return place.layer
    label = next((value for key, value in given.items() if key.endswith(" label")), None)
    return label or given.get("id") or place.layer


def _read_size(text: str | None, *, outermost: bool) -> tuple[float | None, str]:
    """Give a size in mm (or in the units around it) and its unit; None where it is relative."""
    match = _LENGTH.fullmatch(text or "")
    if match is None or match[2].lower() not in _MM:
        return None, ""
    size, unit = float(match[1]), match[2].lower()
    factor = _MM[unit] if outermost else _MM[unit] / _MM["px"]
    return (size * factor if size > 0 else None), unit or "px"


def _fit(box: list[float], across: float, down: float, aspect: str) -> PlaneMap:
    """Map the viewBox into its window (preserveAspectRatio; xMidYMid meet when not said)."""
    wide, high = across / box[2], down / box[3]
    corner = complex(box[0], box[1])
    if "none" in aspect:
        stretch = PlaneMap((wide + high) / 2, (wide - high) / 2, 0)
        return stretch.after(PlaneMap(1, 0, -corner))
    scale = max(wide, high) if "slice" in aspect else min(wide, high)
    rest = complex(across - scale * box[2], down - scale * box[3])
    share_x = 0.0 if "xMin" in aspect else 1.0 if "xMax" in aspect else 0.5
    share_y = 0.0 if "YMin" in aspect else 1.0 if "YMax" in aspect else 0.5
    moved = complex(rest.real * share_x, rest.imag * share_y)
    # Programs print width and height with few digits: a remainder that small is no margin.
    if abs(rest) < 1e-3 * math.hypot(across, down) * 1e-3:
        moved = 0j
    return PlaneMap(scale, 0, moved - scale * corner)


def _number(given: dict[str, str], key: str, missing: float = 0.0) -> float:
    match = _LENGTH.fullmatch(given.get(key, ""))
    if match is None:
        if given.get(key):
            raise ValueError(f"{key}={given[key][:20]!r} is not a number")
        return missing
    if match[2].lower() not in _MM:
        raise ValueError(f"{key} is in {match[2]!r}")
    factor = _MM[match[2].lower()] / _MM["px"] if match[2] else 1.0
    return float(match[1]) * factor


def _path(given: dict[str, str]) -> str:
    return given.get("d", "")


def _line(given: dict[str, str]) -> str:
    x1, y1, x2, y2 = (_number(given, key) for key in ("x1", "y1", "x2", "y2"))
    return f"M{x1!r} {y1!r}L{x2!r} {y2!r}"


def _polyline(given: dict[str, str]) -> str:
    return f"M{given['points']}" if given.get("points", "").strip() else ""


def _polygon(given: dict[str, str]) -> str:
    return f"M{given['points']}Z" if given.get("points", "").strip() else ""


def _ellipse(given: dict[str, str]) -> str:
    across = _number(given, "rx", _number(given, "r"))
    down = _number(given, "ry", _number(given, "r"))
    if across <= 0 or down <= 0:
        return ""
    x, y = _number(given, "cx"), _number(given, "cy")
    half = f"A{across!r} {down!r} 0 1 1 "
    return f"M{x + across!r} {y!r}{half}{x - across!r} {y!r}{half}{x + across!r} {y!r}Z"


def _rectangle(given: dict[str, str]) -> str:
    return round_corner_path(
        complex(_number(given, "x"), _number(given, "y")),
        complex(_number(given, "width"), _number(given, "height")),
        rounding=(_number(given, "rx", math.nan), _number(given, "ry", math.nan)),
    )


_SHAPES: dict[str, Callable[[dict[str, str]], str]] = {
    "path": _path,
    "line": _line,
    "polyline": _polyline,
    "polygon": _polygon,
    "circle": _ellipse,
    "ellipse": _ellipse,
    "rect": _rectangle,
}
