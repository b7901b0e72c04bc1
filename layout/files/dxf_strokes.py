"""How are the thousands of strokes of a sheet's lettering written into a DXF file?

A document model spends 0.1 ms on every polyline, and a sheet has hundreds of strokes, all of one
kind. Their lines are added to the file that it wrote of everything else.

References
----------
Autodesk (1999), DXF Reference for AutoCAD 2000: LWPOLYLINE, header variable $HANDSEED.
Autodesk (1992), AutoCAD Release 12 Customization Manual, chapter 11: POLYLINE, VERTEX, SEQEND.

"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from itertools import chain

from layout.drawing.shapes import Point

Stroke = tuple[str, Sequence[Point], bool]
"""Layer name, vertices in mm, and whether the last is joined to the first."""


def add_strokes(lines: list[str], strokes: Sequence[Stroke], *, owner: str | None) -> None:
    """Add strokes at the end of a file's entities, in place.

    Parameters
    ----------
    lines
        Of a whole file, codes and values in turn; also of one with no entities.
    strokes
        Straight from vertex to vertex.
    owner
        Handle of the model space in release 2000, where every entity has a handle of its own:
        the first that is free, which the file states, and those after it. None is release 12.

    Raises
    ------
    ValueError
        When the file has no section of entities, or no first free handle where one is needed.

    """
    entities = _place_of(lines, "ENTITIES", code="  2")
    end = _place_of(lines, "ENDSEC", code="  0", start=entities) - 1
    if owner is None:
        lines[end:end] = list(_write_polylines(strokes))
        return
    seed = _place_of(lines, "$HANDSEED", code="  9") + 2
    free = int(lines[seed], 16)
    lines[seed] = f"{free + len(strokes):X}"
    lines[end:end] = list(_write_lwpolylines(strokes, owner=owner, free=free))


def _place_of(lines: Sequence[str], value: str, *, code: str, start: int = 0) -> int:
    place = lines.index(value, start)
    while lines[place - 1] != code or not place % 2:
        place = lines.index(value, place + 1)
    return place


def _write_lwpolylines(strokes: Sequence[Stroke], *, owner: str, free: int) -> Iterator[str]:
    for handle, (layer, vertices, closed) in enumerate(strokes, start=free):
        yield (
            f"  0\nLWPOLYLINE\n  5\n{handle:X}\n330\n{owner}\n100\nAcDbEntity\n  8\n{layer}\n"
            f"100\nAcDbPolyline\n 90\n{len(vertices)}\n 70\n{closed:d}\n"
            + write_points(vertices, " 10\n%.6f\n 20\n%.6f")
        )


def _write_polylines(strokes: Sequence[Stroke]) -> Iterator[str]:
    for name, vertices, closed in strokes:
        layer = name.upper()  # release 12 keeps names so
        yield (
            f"  0\nPOLYLINE\n  8\n{layer}\n 66\n1\n 10\n0.0\n 20\n0.0\n 30\n0.0\n 70\n{closed:d}"
        )
        yield write_points(
            vertices, f"  0\nVERTEX\n  8\n{layer}\n 10\n%.6f\n 20\n%.6f\n 30\n0.0\n 70\n0"
        )
        yield f"  0\nSEQEND\n  8\n{layer}"


def write_points(vertices: Sequence[Point], form: str) -> str:
    r"""Write points in a form with two places for numbers, one after another.

    Six decimals are all a sheet's numbers have.

    Examples
    --------
    >>> write_points([(-1e-06, 12.5), (3.0, 0.0)], "x %.6f y %.6f")
    'x -0.000001 y 12.500000\nx 3.000000 y 0.000000'

    """
    return "\n".join([form] * len(vertices)) % tuple(chain.from_iterable(vertices))
