"""How are points moved, turned, stretched and mirrored, in one formula?"""

from __future__ import annotations

import cmath
import math
import re
from typing import NamedTuple


class PlaneMap(NamedTuple):
    """The map p -> a p + c conj(p) + b of points as complex numbers: any affine map.

    ``c`` is 0 for a move, turn and enlargement; ``a`` is 0 when it is mirrored as well; with
    neither, the drawing is stretched.

    >>> PlaneMap(1j, 0, 5)(2 + 0j)
    (5+2j)
    """

    a: complex
    c: complex
    b: complex

    def __call__(self, point: complex) -> complex:
        """Give where a point goes."""
        return self.a * point + self.c * point.conjugate() + self.b

    def after(self, first: PlaneMap) -> PlaneMap:
        """Give the map that does ``first``, then this one."""
        a, c, b = first
        return PlaneMap(
            self.a * a + self.c * c.conjugate(),
            self.a * c + self.c * a.conjugate(),
            self(b),
        )

    def back(self) -> PlaneMap:
        """Give the map that undoes this one.

        >>> PlaneMap(2j, 0.5, 7).back()(PlaneMap(2j, 0.5, 7)(3 + 4j))
        (3+4j)
        """
        size = abs(self.a) ** 2 - abs(self.c) ** 2
        a, c = self.a.conjugate() / size, -self.c / size
        return PlaneMap(a, c, -(a * self.b + c * self.b.conjugate()))

    @property
    def keeps_circles(self) -> bool:
        """Whether circles stay circles (to 1e-9 of their size)."""
        small, large = sorted((abs(self.a), abs(self.c)))
        return small <= 1e-9 * large

    @property
    def scale(self) -> float:
        """The largest enlargement in any direction."""
        return abs(self.a) + abs(self.c)

    @property
    def mirrors(self) -> bool:
        """Whether left turns become right turns."""
        return abs(self.c) > abs(self.a)


UNMOVED = PlaneMap(1, 0, 0)


def make_matrix(along: tuple[float, float], aside: tuple[float, float], move: complex) -> PlaneMap:
    """Make the map that takes the unit vectors along x and y to two others, then moves.

    >>> make_matrix((0, 2), (-2, 0), 5)(1 + 0j)
    (5+2j)
    """
    one, two = complex(*along), complex(*aside)
    return PlaneMap((one - 1j * two) / 2, (one + 1j * two) / 2, move)


_CALL = re.compile(r"[\s,]*([A-Za-z]+)\s*\(([^()]*)\)")


def read_transform(text: str) -> PlaneMap:
    """Read an SVG transform list.

    Raises
    ------
    ValueError
        When it is not one.

    Examples
    --------
    >>> read_transform("translate(10,5) scale(2)")(1 + 1j)
    (12+7j)

    """
    whole = UNMOVED
    place = 0
    while match := _CALL.match(text, place):
        words = [float(word) for word in match[2].replace(",", " ").split()]
        whole = whole.after(_make(match[1], words))
        place = match.end()
    if text[place:].strip(" \t\r\n,"):
        raise ValueError(f"transform {text[:40]!r} is not understood")
    return whole


def _make(name: str, words: list[float]) -> PlaneMap:
    match name, words:
        case "matrix", [p, q, r, s, x, y]:
            return make_matrix((p, q), (r, s), complex(x, y))
        case "translate", [x, *rest] if len(rest) < 2:
            return PlaneMap(1, 0, complex(x, rest[0] if rest else 0))
        case "scale", [across, *rest] if len(rest) < 2:
            return make_matrix((across, 0), (0, rest[0] if rest else across), 0)
        case "rotate", [degrees, *about] if len(about) in {0, 2}:
            turn = cmath.rect(1, math.radians(degrees))
            centre = complex(*about) if about else 0j
            return PlaneMap(turn, 0, centre - turn * centre)
        case "skewX", [degrees]:
            return make_matrix((1, 0), (math.tan(math.radians(degrees)), 1), 0)
        case "skewY", [degrees]:
            return make_matrix((1, math.tan(math.radians(degrees))), (0, 1), 0)
    raise ValueError(f"transform {name} is not understood")
