"""What is drawn on the pages of a PDF file?

Plain files are opened and unpacked here, others by a general library; what the pages' contents
draw is followed here.

References
----------
ISO 32000-1 (2008), Document management - Portable document format: 7.2 (lexical conventions),
8.3.4 (transformation matrices), 8.5 (path construction and painting), 14.11.2 (page boundaries).

"""

from __future__ import annotations

import logging
import math
import re
from collections.abc import Iterator
from dataclasses import dataclass
from io import BytesIO
from typing import TYPE_CHECKING, Final

from layout.proof.pdf_file import PlainPage, find_plain_pages
from layout.proof.plane_map import PlaneMap, make_matrix
from layout.proof.reading import Pen, Reading, broken_reading
from layout.proof.report import Problem
from layout.proof.svg_path import chords_of_bezier

if TYPE_CHECKING:
    from pypdf import PageObject

_MM_PER_POINT: Final = 25.4 / 72
_TOKEN = re.compile(
    rb"(?P<number>[+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?=[\s\[\]<>()/%]|$))"
    rb"|(?P<text>\((?:[^()\\]|\\.|\((?:[^()\\]|\\.)*\))*\))"
    rb"|(?P<other><<|>>|<[0-9A-Fa-f\s]*>|\[|\]|/[^\s\[\]<>()/%]*|%[^\r\n]*)"
    rb"|(?P<word>[A-Za-z'\"*][A-Za-z0-9'\"*]*)",
    re.DOTALL,
)
_POINT = rb"-?[0-9]+(?:\.[0-9]+)? -?[0-9]+(?:\.[0-9]+)? "
_CHAIN = re.compile(rb"\s*(%sm(?:\s%sl)+)(\sh)?\sS\s" % (_POINT, _POINT))
"""A chain of straight lines that is drawn and stroked, as most of a drawing is."""
_MOST_PAGES = 500


@dataclass(frozen=True, slots=True, eq=False)
class Page:
    """One page: its size in mm, and what is stroked on it, mm from its lower left corner."""

    width_mm: float
    height_mm: float
    reading: Reading


@dataclass(frozen=True, slots=True, eq=False)
class Pages:
    """A PDF file: its pages, and what is wrong with it as a file."""

    pages: tuple[Page, ...]
    faults: tuple[Problem, ...] = ()

    @property
    def broken(self) -> bool:
        """Whether it could not be read."""
        return not self.pages


def read_pdf(content: bytes) -> Pages:
    """Read the lines and curves that are stroked on every page of a PDF file.

    Parameters
    ----------
    content
        The file's bytes.

    Returns
    -------
    Pages
        As a viewer shows them: turned by the page's own rotation. Curves come as chords within
        0.0005 mm. Text set in fonts, fillings and images are left out.

    """
    if not content.startswith(b"%PDF-"):
        return Pages((), (Problem("unreadable", "this is not a PDF file"),))
    if not content.rstrip().endswith(b"%%EOF"):
        said = "the file breaks off before its end mark (%%EOF)"
        return Pages((), (Problem("truncated", said),))
    plain = find_plain_pages(content, most=_MOST_PAGES)
    if plain is not None:
        return Pages(tuple(map(_read_page, plain)))
    return _read_any(content)


def _read_any(content: bytes) -> Pages:
    """Read a file of any structure."""
    # pypdf takes longer to import than a plain file to read: only other files pay it.
    from pypdf import PdfReader  # noqa: PLC0415

    log = logging.getLogger("pypdf")
    before, log.disabled = log.disabled, True
    try:
        sheets = PdfReader(BytesIO(content), strict=True).pages
        if not 0 < len(sheets) <= _MOST_PAGES:
            return Pages((), (Problem("unreadable", f"the file has {len(sheets)} pages"),))
        return Pages(tuple(_read_page(_unfold(sheet)) for sheet in sheets))
    except Exception as fault:  # noqa: BLE001  the library raises anything over a damaged file
        said = f"the file is damaged ({type(fault).__name__})"
        return Pages((), (Problem("unreadable", said),))
    finally:
        log.disabled = before


def _unfold(sheet: PageObject) -> PlainPage:
    left, low, right, high = (float(side) for side in sheet.mediabox)
    contents = sheet.get_contents()
    stream = b"" if contents is None else contents.get_data()
    turn, unit = int(sheet.get("/Rotate", 0)), float(sheet.get("/UserUnit", 1))
    return PlainPage((left, low, right, high), turn, unit, stream)


def _read_page(sheet: PlainPage) -> Page:
    unit_mm = _MM_PER_POINT * sheet.unit
    left, low, right, high = sheet.box
    to_page = PlaneMap(unit_mm, 0, -unit_mm * complex(min(left, right), min(low, high)))
    width, height = abs(right - left) * unit_mm, abs(high - low) * unit_mm
    for _ in range(sheet.turn // 90 % 4):  # clockwise, as seen
        to_page = PlaneMap(-1j, 0, complex(0, width)).after(to_page)
        width, height = height, width
    if not (0 < width < math.inf and 0 < height < math.inf):
        return Page(0.0, 0.0, broken_reading("bad-number", "the page has no size"))
    return Page(width, height, _Walk(to_page).follow(sheet.contents))


class _Walk:
    """Keeps the state of the graphics and gathers what is stroked."""

    def __init__(self, to_page: PlaneMap) -> None:
        self.pen = Pen()
        self.to_page = to_page
        self.kept: list[PlaneMap] = []
        self.chains: list[tuple[list[complex], bool]] = []
        self.placed = 0

    def follow(self, stream: bytes) -> Reading:
        try:
            for operator, numbers in _split(stream):
                self._step(operator, numbers)
        except (ValueError, IndexError, OverflowError) as fault:
            return broken_reading("bad-number", f"the page's contents break off: {fault}"[:80])
        if self.placed:
            said = f"{self.placed} placed forms or images cannot be followed"
            self.pen.faults.append(Problem("not-understood", said, float(self.placed)))
        return self.pen.finish(unit="pt")

    def _step(self, operator: str, numbers: list[float]) -> None:
        match operator:
            case "chain" | "closed chain":
                self._draw_chain(numbers, closed=operator != "chain")
            case "q":
                self.kept.append(self.to_page)
            case "Q":
                self.to_page = self.kept.pop() if self.kept else self.to_page
            case "cm":
                p, q, r, s, x, y = numbers[-6:]
                self.to_page = self.to_page.after(make_matrix((p, q), (r, s), complex(x, y)))
            case "S" | "s" | "B" | "b" | "B*" | "b*":
                self._stroke(close=operator in {"s", "b", "b*"})
            case "n" | "f" | "F" | "f*":
                self.chains = []
            case "Do":
                self.placed += 1
            case _:
                self._build(operator, numbers)

    def _draw_chain(self, numbers: list[float], *, closed: bool) -> None:
        a, c, b = self.to_page
        points = list(map(complex, numbers[::2], numbers[1::2]))
        points = [a * point + c * point.conjugate() + b for point in points]
        if self.chains:  # painted together with what was built before
            self.chains.append((points, closed))
            self._stroke(close=False)
        else:
            self.pen.draw_chain("page", points, closed=closed)

    def _build(self, operator: str, numbers: list[float]) -> None:
        points = [
            self.to_page(complex(x, y)) for x, y in zip(numbers[::2], numbers[1::2], strict=False)
        ]
        match operator:
            case "m":
                self.chains.append(([points[-1]], False))
            case "l":
                self.chains[-1][0].append(points[-1])
            case "c" | "v" | "y":
                chain = self.chains[-1][0]
                levers = [chain[-1], *points]
                if operator == "v":
                    levers.insert(1, chain[-1])
                elif operator == "y":
                    levers.append(levers[-1])
                chain.extend(chords_of_bezier(levers, scale=1.0))
            case "h":
                if self.chains:
                    chain, _ = self.chains[-1]
                    self.chains[-1] = (chain, True)
                    self.chains.append(([chain[0]], False))
            case "re":
                x, y, width, height = numbers[-4:]
                corners = (
                    complex(x, y),
                    complex(x + width, y),
                    complex(x + width, y + height),
                    complex(x, y + height),
                )
                self.chains.append(([self.to_page(corner) for corner in corners], True))

    def _stroke(self, *, close: bool) -> None:
        for chain, closed in self.chains:
            last = chain is self.chains[-1][0]
            if len(chain) > 1:
                self.pen.draw_chain("page", chain, closed=closed or (close and last))
        self.chains = []


def _split(stream: bytes) -> Iterator[tuple[str, list[float]]]:
    """Give every operator with the numbers before it; simple chains whole."""
    numbers: list[float] = []
    reached = 0
    while reached < len(stream):
        chain = None if numbers else _CHAIN.match(stream, reached)
        if chain is not None:
            reached = chain.end() - 1
            words = chain[1].split()
            del words[2::3]
            yield "closed chain" if chain[2] else "chain", list(map(float, words))
            continue
        match = _TOKEN.match(stream, reached)
        if match is None:
            reached += 1
            continue
        reached = match.end()
        if match.lastgroup == "number":
            numbers.append(float(match[0]))
        elif match.lastgroup == "word":
            operator = match[0].decode("latin-1")
            yield operator, numbers
            numbers = []
            if operator == "ID":  # an image within the page: its bytes are no operators
                end = stream.find(b"EI", reached)
                reached = len(stream) if end < 0 else end + 2
