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
from functools import cache
from itertools import pairwise
from typing import NamedTuple

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


def to_ascii(text: str) -> str:
    r"""Say a text in printable ASCII.

    Accents fall away, dashes and quotes become the plain ones, white space becomes blanks,
    control characters vanish, and what has no plain form becomes a question mark.

    Examples
    --------
    >>> to_ascii("Lauté n° 3 – B♭\x07 道")
    'Laute n deg 3 - Bb ?'

    """
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
    units = sum(glyph.width for glyph in _glyphs_for(text))
    return units * height_mm / (_BASE_LINE - _CAP_LINE)


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
    if not height_mm > 0:
        raise ValueError(f"lettering has a height above 0, not {height_mm}")
    scale = height_mm / (_BASE_LINE - _CAP_LINE)
    back = {"left": 0.0, "centre": 0.5, "right": 1.0}[align]
    left = -back * text_width_mm(text, height_mm=height_mm)
    foot = -{"base": 0.0, "middle": 0.5, "top": 1.0}[stand] * height_mm
    cosine, sine = math.cos(angle), math.sin(angle)

    def place(point: GridPoint) -> Point:
        along, up = left + scale * point[0], foot + scale * (_BASE_LINE - point[1])
        return (
            anchor[0] + along * cosine - up * sine,
            anchor[1] + along * sine + up * cosine,
        )

    return tuple(tuple(place(point) for point in stroke) for stroke in _strokes_for(text))


def _strokes_for(text: str) -> list[list[GridPoint]]:
    """Strokes of a whole text in font units, without the edges a glyph retraces."""
    drawn: set[frozenset[GridPoint]] = set()
    strokes: list[list[GridPoint]] = []
    pen = 0
    for glyph in _glyphs_for(text):
        for stroke in glyph.strokes:
            moved = [(x - glyph.left + pen, y) for x, y in stroke]
            open_end = False
            for start, end in pairwise(moved):
                edge = frozenset((start, end))
                if len(edge) == 1 or edge in drawn:
                    open_end = len(edge) == 1 and open_end
                    continue
                drawn.add(edge)
                if open_end:
                    strokes[-1].append(end)
                else:
                    strokes.append([start, end])
                open_end = True
        pen += glyph.width
    return strokes


def _glyphs_for(text: str) -> list[_Glyph]:
    font = _load_font()
    return [font[character] for character in to_ascii(text)]


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
