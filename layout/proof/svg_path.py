"""Where does an SVG path lead?

References
----------
W3C (2011), Scalable Vector Graphics 1.1: 8.3 (path data), appendix F.6 (elliptical arcs).

"""

from __future__ import annotations

import cmath
import math
import re
from collections.abc import Iterator, Sequence

from layout.proof.plane_map import PlaneMap
from layout.proof.reading import SAME_MM, Pen

SAG_MM = 5e-4
"""Curves become chords that stay this near."""
_MOST_CHORDS = 2000

_COMMAND = re.compile(r"([MLHVCSQTAZmlhvcsqtaz])([^MLHVCSQTAZmlhvcsqtaz]*)")
NUMBER = r"[+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]+)?"
_NUMBERS = re.compile(NUMBER)
_APART = r"[\s,]*"
_ARC = re.compile(
    _APART + _APART.join((f"({NUMBER})",) * 3 + ("([01])",) * 2 + (f"({NUMBER})",) * 2)
)
_POINT = r"\s*[+-]?[0-9]+(?:\.[0-9]*)?(?:\s*,\s*|\s+)[+-]?[0-9]+(?:\.[0-9]*)?\s*"
_PLAIN = re.compile(rf"\s*(?:M{_POINT}(?:L{_POINT})*(?:Z\s*)?)+")
"""Chains as most programs write them: a command before every point."""
_COUNTS = {"M": 2, "L": 2, "H": 1, "V": 1, "C": 6, "S": 4, "Q": 4, "T": 2, "A": 7, "Z": 0}


class BadPathError(Exception):
    """A path breaks the grammar of path data."""


def follow_path(text: str, to_page: PlaneMap, pen: Pen, *, layer: str) -> None:
    """Draw a path with a pen: y is turned up.

    Raises
    ------
    BadPathError
        When the text is no path data; what stands before the fault is drawn.

    """
    if not _draw_plain(text, to_page, pen, layer=layer):
        _Walk(to_page, pen, layer).follow(text)


def _draw_plain(text: str, to_page: PlaneMap, pen: Pen, *, layer: str) -> bool:
    """Draw absolute M, L and Z alone, whole chains at once; say whether the path was that."""
    if not _PLAIN.fullmatch(text):
        return False
    a, c, b = PlaneMap(0, 1, 0).after(to_page)
    for chain in text.split("M")[1:]:
        closed = chain.rstrip().endswith("Z")
        words = chain.rstrip(" \t\r\n,Z").replace("L", " ").replace(",", " ").split()
        numbers = list(map(float, words))
        points = list(map(complex, numbers[::2], numbers[1::2]))
        points = [a * point + c * point.conjugate() + b for point in points]
        if len(points) > 1:
            pen.draw_straight(layer, points, closed=closed)
    return True


def _split(text: str) -> Iterator[tuple[str, list[float]]]:
    text = text.strip()
    reached = 0
    for match in _COMMAND.finditer(text):
        if match.start() != reached:
            break
        reached = match.end()
        command = match[1]
        yield command, _read_arcs(match[2]) if command in "Aa" else _read_numbers(match[2])
    if reached != len(text):
        raise BadPathError(f"{text[reached : reached + 20]!r} is no path data")


def _read_numbers(text: str) -> list[float]:
    try:
        if "_" not in text:
            return list(map(float, text.replace(",", " ").split()))
    except ValueError:
        pass
    if _NUMBERS.sub(" ", text).strip(" \t\r\n,"):
        raise BadPathError(f"{text.strip()[:20]!r} are no numbers")
    return list(map(float, _NUMBERS.findall(text)))


def _read_arcs(text: str) -> list[float]:
    """Flags may stand without a space: ``0 01`` is two flags after an angle of 0."""
    numbers: list[float] = []
    reached = 0
    while match := _ARC.match(text, reached):
        numbers += map(float, match.groups())
        reached = match.end()
    if text[reached:].strip(" \t\r\n,"):
        raise BadPathError(f"{text[reached:].strip()[:20]!r} is no arc")
    return numbers


class _Walk:
    """Keeps where the path has come to: ``at`` in its own units, ``here`` on the sheet."""

    def __init__(self, to_page: PlaneMap, pen: Pen, layer: str) -> None:
        self.pen, self.layer = pen, layer
        # The page counts y downwards; a conjugate turns it up.
        self.to_sheet = PlaneMap(0, 1, 0).after(to_page)
        self.at = self.begun = self.here = 0j
        self.lever: complex | None = None
        self.lever_kind = ""
        self.drawing = False

    def follow(self, text: str) -> None:
        for first, (command, numbers) in enumerate(_split(text)):
            kind = command.upper()
            if first == 0 and kind != "M":
                raise BadPathError("a path begins with M")
            size = _COUNTS[kind]
            if (size == 0) != (not numbers) or (size and len(numbers) % size):
                raise BadPathError(f"{command} has {len(numbers)} numbers")
            if size == 0:
                self._close()
            for place in range(0, len(numbers), size or 1):
                self._step(kind, numbers[place : place + size], relative=command.islower())
                kind = "L" if kind == "M" else kind

    def _step(self, kind: str, numbers: Sequence[float], *, relative: bool) -> None:
        origin = self.at if relative else 0j
        if kind == "L":
            self._line_to(complex(*numbers) + origin)
        elif kind == "M":
            self.at = self.begun = complex(*numbers) + origin
            self.here = self.to_sheet(self.at)
            self.drawing = False
            self.lever_kind = ""
        elif kind == "H":
            self._line_to(complex(numbers[0] + origin.real, self.at.imag))
        elif kind == "V":
            self._line_to(complex(self.at.real, numbers[0] + origin.imag))
        elif kind == "A":
            self._arc_to(complex(*numbers[5:7]) + origin, numbers)
        else:
            points = [
                complex(x, y) + origin for x, y in zip(numbers[::2], numbers[1::2], strict=True)
            ]
            self._curve_to(kind, points)

    def _close(self) -> None:
        if self.drawing:
            if abs(self.here - self.to_sheet(self.begun)) > SAME_MM:
                self._draw(self.begun)
            self.pen.close()
        self.at, self.drawing = self.begun, False
        self.here = self.to_sheet(self.at)

    def _line_to(self, end: complex) -> None:
        self._draw(end)
        self.at = end
        self.lever_kind = ""

    def _draw(self, end: complex, bulge: float = 0.0) -> None:
        if not self.drawing:
            self.pen.begin(self.layer, closed=False)
            self.drawing = True
        there = self.to_sheet(end)
        self.pen.draw(self.here, there, bulge)
        self.here = there

    def _curve_to(self, kind: str, points: list[complex]) -> None:
        cubic = kind in "CS"
        if kind in "ST":
            smooth = self.lever is not None and self.lever_kind == ("C" if cubic else "Q")
            points.insert(0, 2 * self.at - self.lever if smooth and self.lever else self.at)
        self.lever, self.lever_kind = points[-2], "C" if cubic else "Q"
        levers = [self.at, *points]
        if not cubic:
            start, middle, end = levers
            levers = [start, start + (middle - start) * 2 / 3, end + (middle - end) * 2 / 3, end]
        for end in chords_of_bezier(levers, scale=self.to_sheet.scale):
            self._draw(end)
            self.at = end

    def _arc_to(self, end: complex, numbers: Sequence[float]) -> None:
        across, down = abs(numbers[0]), abs(numbers[1])
        self.lever_kind = ""
        if across == 0 or down == 0 or end == self.at:
            if end != self.at:
                self._line_to(end)
            return
        ellipse = _find_ellipse(self.at, end, (across, down), numbers[2:5])
        if across == down and self.to_sheet.keeps_circles:
            self._draw_round(end, ellipse.sweep)
            return
        steps = _chord_count(max(ellipse.radii) * self.to_sheet.scale, abs(ellipse.sweep))
        for step in range(1, steps + 1):
            ahead = end if step == steps else ellipse.point(step / steps)
            self._draw(ahead)
            self.at = ahead

    def _draw_round(self, end: complex, sweep: float) -> None:
        sign = -1.0 if self.to_sheet.mirrors else 1.0
        bulge = math.tan(sweep / 4)
        if abs(bulge) <= 1:
            self._draw(end, sign * bulge)
        else:
            middle = (self.at + end) / 2 - 0.5j * (end - self.at) * bulge
            half = sign * math.tan(sweep / 8)
            self._draw(middle, half)
            self._draw(end, half)
        self.at = end


def chords_of_bezier(levers: Sequence[complex], *, scale: float) -> Iterator[complex]:
    """Give the ends of chords within SAG_MM of a cubic curve.

    Notes
    -----
    A chord over 1/n of a curve strays by at most max|B''| / (8 n^2), and B'' lies between its
    values at the ends: 6 times the second differences of the levers.

    """
    start, one, two, end = levers
    bend = 6 * scale * max(abs(start - 2 * one + two), abs(one - 2 * two + end))
    if not math.isfinite(bend):
        raise BadPathError("a curve is not finite")
    steps = min(max(1, math.ceil(math.sqrt(bend / (8 * SAG_MM)))), _MOST_CHORDS)
    for step in range(1, steps):
        t = step / steps
        u = 1 - t
        yield u**3 * start + 3 * u * u * t * one + 3 * u * t * t * two + t**3 * end
    yield end


def _chord_count(radius_mm: float, sweep: float) -> int:
    least = math.acos(max(1 - SAG_MM / radius_mm, 0.0)) * 2 if radius_mm > SAG_MM else math.pi
    return min(max(1, math.ceil(sweep / least)), _MOST_CHORDS) if math.isfinite(least) else 1


class _Ellipse:
    """An arc of an ellipse, as the circle it is the image of."""

    def __init__(self, centre: complex, radii: tuple[float, float], tilt: complex) -> None:
        self.centre, self.radii, self.tilt = centre, radii, tilt
        self.first = self.sweep = 0.0

    def point(self, share: float) -> complex:
        on_unit = cmath.rect(1, self.first + share * self.sweep)
        stretched = complex(on_unit.real * self.radii[0], on_unit.imag * self.radii[1])
        return self.centre + self.tilt * stretched


def _find_ellipse(
    start: complex, end: complex, radii: tuple[float, float], rest: Sequence[float]
) -> _Ellipse:
    """Centre and angles from the ends (SVG 1.1, F.6.5), radii that are too small scaled up."""
    tilt = cmath.rect(1, math.radians(rest[0]))
    large, ahead = bool(rest[1]), bool(rest[2])

    def unit(point: complex) -> complex:
        turned = point / tilt
        return complex(turned.real / radii[0], turned.imag / radii[1])

    chord = unit(end - start)
    half = abs(chord) / 2
    aside = math.sqrt(max(1 - half * half, 0.0))
    side = 1 if large != ahead else -1
    foot = chord / 2 + side * 1j * aside * chord / (2 * half)
    grown = max(half, 1.0)
    radii_grown = (radii[0] * grown, radii[1] * grown)
    centre = start + tilt * complex(foot.real * radii[0], foot.imag * radii[1])
    ellipse = _Ellipse(centre, radii_grown, tilt)
    ellipse.first = cmath.phase(-foot)
    turn = 2 * math.asin(min(half, 1.0))
    turn = math.tau - turn if large and half < 1 else turn
    ellipse.sweep = turn if ahead else -turn
    return ellipse


def round_corner_path(corner: complex, size: complex, *, rounding: tuple[float, float]) -> str:
    """Write the path of a rectangle with rounded corners; nan where a rounding is not said."""
    if size.real <= 0 or size.imag <= 0:
        return ""
    across, down = rounding
    across = down if math.isnan(across) else across
    down = across if math.isnan(down) else down
    across = 0.0 if math.isnan(across) else min(across, size.real / 2)
    down = 0.0 if math.isnan(down) else min(down, size.imag / 2)
    straight = complex(size.real - 2 * across, size.imag - 2 * down)
    words = [f"M{corner.real + across!r} {corner.imag!r}"]
    arc = f"a{across!r} {down!r} 0 0 1 "
    for turn, (dx, dy) in zip(
        (1, 1j, -1, -1j),
        ((across, down), (-across, down), (-across, -down), (across, -down)),
        strict=True,
    ):
        way = straight.real if turn.imag == 0 else straight.imag
        if way > 0:
            step = turn * way
            words.append(f"l{step.real!r} {step.imag!r}")
        if across > 0 and down > 0:
            words.append(f"{arc}{dx!r} {dy!r}")
    return " ".join([*words, "Z"])
