"""How is text drawn with single strokes that a cutter can follow?

References
----------
Hershey, A. V. (1967), Calligraphy for Computers, U. S. Naval Weapons Laboratory, TR 2101: the
plain roman alphabet, of which a stroke-font library carries the coordinates. FONT_NOTICE.txt
beside this file is the notice that goes with them.

"""

from __future__ import annotations

import math
import re
import unicodedata
from collections.abc import Iterable, Iterator, Sequence
from functools import cache, lru_cache
from itertools import islice, pairwise
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from layout.drawing.shapes import Align, Point, Stand

GridPoint = tuple[int, int]

_CAP_LINE, _BASE_LINE = -12, 9
"""Head and foot of a capital in the font's own units, y downward (the font's documentation)."""
_FONT = "futural"
"""The library's name for the plain single-stroke roman alphabet."""

_SAID_IN_ASCII = str.maketrans(
    {
        "\u2010": "-", "\u2011": "-", "\u2012": "-", "\u2013": "-", "\u2014": "-", "\u2212": "-",
        "\u2018": "'", "\u2019": "'", "\u2032": "'", "\u201c": '"', "\u201d": '"', "\u2033": '"',
        "\u266d": "b", "\u266f": "#", "\u266e": "=", "\u00d7": "x", "\u00f7": "/", "\u2044": "/",
        "\u00b0": " deg", "\u00b7": ".", "\u2022": "*", "\u00df": "ss", "\u00e6": "ae",
        "\u00c6": "AE", "\u00f8": "o", "\u00d8": "O", "\u0153": "oe", "\u0152": "OE",
        "\u0111": "d", "\u0110": "D", "\u0142": "l", "\u0141": "L", "\u0131": "i",
        "\u03bc": "u", "\u00b5": "u", "\u00b1": "+/-", "\u20ac": "EUR",
    }
)  # fmt: skip

_FRACTION_SIGN = re.compile("([0-9])([\u00bc-\u00be\u2150-\u215e])")
"""A figure and a sign such as one half: they stay apart when the sign is written out."""


class _Glyph(NamedTuple):
    left: int
    width: int
    strokes: tuple[tuple[GridPoint, ...], ...]


class Chains(NamedTuple):
    """Points (n, 2) of all strokes of a text one after another, and how many each stroke has."""

    points: NDArray[np.float64]
    counts: tuple[int, ...]


def to_ascii(text: str) -> str:
    r"""Say a text in printable ASCII.

    Accents fall away, dashes and quotes become the plain ones, white space becomes blanks,
    control characters vanish, and what has no plain form becomes a question mark.

    Examples
    --------
    >>> to_ascii("Lauté n° 3 – B♭\x07 道")
    'Laute n deg 3 - Bb ?'

    """
    if text.isascii() and text.isprintable():
        return text
    apart = _FRACTION_SIGN.sub(r"\1 \2", text)
    plain = unicodedata.normalize("NFKD", apart.translate(_SAID_IN_ASCII)).translate(_SAID_IN_ASCII)
    said = []
    for character in plain:
        if " " <= character <= "~":
            said.append(character)
        elif character.isspace():
            said.append(" ")
        elif unicodedata.category(character)[0] not in "CM":
            said.append("?")
    return "".join(said)


def text_width_mm(text: str, *, height_mm: float) -> float:
    """Give how long a text runs, in mm, with the space its outer letters keep beside them.

    Examples
    --------
    >>> text_width_mm("12", height_mm=2.1)
    4.0

    """
    return _chains_of(to_ascii(text))[1] * height_mm / (_BASE_LINE - _CAP_LINE)


def letter(
    text: str,
    *,
    anchor: Point = (0.0, 0.0),
    height_mm: float = 3.0,
    angle: float = 0.0,
    align: Align = "left",
    stand: Stand = "base",
) -> tuple[tuple[Point, ...], ...]:
    """Draw a text as chains of points in mm; a closed stroke ends where it began.

    Parameters
    ----------
    text
        Any text; see ``to_ascii`` for what becomes of it.
    anchor
        The point of the text that is pinned down, mm.
    height_mm
        Height of a capital.
    angle
        Direction of writing, radians counter-clockwise from +x.
    align, stand
        Where the anchor is along the writing, and between foot and head of the capitals.

    Returns
    -------
    tuple of strokes
        At least two different points each; no edge is drawn twice.

    Raises
    ------
    ValueError
        When the height is not above zero.

    Examples
    --------
    >>> letter("-", height_mm=21, anchor=(100, 50))
    (((104.0, 59.0), (122.0, 59.0)),)

    """
    points, counts = place_strokes(
        text, anchor=anchor, height_mm=height_mm, angle=angle, align=align, stand=stand
    )
    placed = iter([(x, y) for x, y in points.tolist()])
    return tuple(tuple(islice(placed, count)) for count in counts)


def place_strokes(
    text: str, *, anchor: Point, height_mm: float, angle: float, align: Align, stand: Stand
) -> Chains:
    """Give what ``letter`` draws in one array, mm: a sheet holds thousands of points of text."""
    if not height_mm > 0:
        raise ValueError(f"lettering has a height above 0, not {height_mm}")
    if not math.isfinite(angle):
        raise ValueError(f"lettering has a finite angle, not {angle}")
    (grid, counts), width = _chains_of(to_ascii(text))
    scale = height_mm / (_BASE_LINE - _CAP_LINE)
    back = {"left": 0.0, "centre": 0.5, "right": 1.0}[align]
    left = -back * (width * height_mm / (_BASE_LINE - _CAP_LINE))
    foot = -{"base": 0.0, "middle": 0.5, "top": 1.0}[stand] * height_mm
    along, up = left + scale * grid[:, 0], foot + scale * (_BASE_LINE - grid[:, 1])
    cosine, sine = math.cos(angle), math.sin(angle)
    x = anchor[0] + along * cosine - up * sine
    y = anchor[1] + along * sine + up * cosine
    return Chains(np.column_stack((x, y)), counts)


@lru_cache(maxsize=1024)
def _chains_of(plain: str) -> tuple[Chains, int]:
    """Strokes of a text in font units, y downward, and how far it runs."""
    points: list[GridPoint] = []
    counts: list[int] = []
    pen = 0
    for glyph in map(_glyph_of, plain):
        for stroke in glyph.strokes:
            points += [(x + pen, y) for x, y in stroke]
            counts.append(len(stroke))
        pen += glyph.width
    return Chains(np.array(points, dtype=float).reshape(-1, 2), tuple(counts)), pen


@cache
def _glyph_of(character: str) -> _Glyph:
    """Give a character whose strokes begin at the pen."""
    left, width, strokes = _load_font()[character]
    moved = [[(x - left, y) for x, y in stroke] for stroke in strokes]
    return _Glyph(0, width, tuple(_draw_edges_once(moved)))


def _draw_edges_once(strokes: Iterable[Sequence[GridPoint]]) -> Iterator[tuple[GridPoint, ...]]:
    """Leave out the edges that a glyph retraces; the stroke is broken there."""
    drawn: set[frozenset[GridPoint]] = set()
    for stroke in strokes:
        chain: list[GridPoint] = []
        for start, end in pairwise(stroke):
            edge = frozenset((start, end))
            if len(edge) == 1:
                continue
            if edge in drawn:
                if chain:
                    yield tuple(chain)
                chain = []
                continue
            drawn.add(edge)
            chain = [*chain, end] if chain else [start, end]
        if chain:
            yield tuple(chain)


@cache
def _load_font() -> dict[str, _Glyph]:
    # Unpacking every font of the library takes 20 ms: only commands that draw pay it.
    from HersheyFonts import HersheyFonts  # noqa: PLC0415

    fonts = HersheyFonts()
    fonts.load_default_font(_FONT)
    return {
        character: _Glyph(
            glyph.left_offset,
            glyph.char_width,
            tuple(tuple((int(x), int(y)) for x, y in stroke) for stroke in glyph.strokes),
        )
        for character, glyph in fonts.all_glyphs.items()
        if " " <= character <= "~"
    }
