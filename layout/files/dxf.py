"""How is a sheet written as DXF, so that every reader gets the sheet's own numbers?

References
----------
Autodesk (1999), DXF Reference for AutoCAD 2000: group codes, header variables.
Autodesk (1992), AutoCAD Release 12 Customization Manual, chapter 11: drawing interchange files.

"""

from __future__ import annotations

import logging
import math
import re
from collections.abc import Iterator, Mapping
from contextlib import contextmanager
from decimal import Decimal
from io import StringIO
from typing import TYPE_CHECKING, Literal

from layout.drawing.shapes import (
    Arc,
    Circle,
    Lettering,
    Line,
    Outline,
    Polyline3D,
    Shape,
)
from layout.drawing.sheet import Sheet
from layout.files.arcs import Arcs, spell_arcs
from layout.files.dxf_strokes import add_strokes
from layout.files.layers import COLOURS, name_layers

if TYPE_CHECKING:
    from ezdxf.document import Drawing
    from ezdxf.layouts.layout import Modelspace

DxfVersion = Literal["r2000", "r12"]
"""Release 2000, or 12 of 1992 for old machines: that one has no place for the unit."""

_NO_UNIT, _MILLIMETRES, _METRIC = 0, 4, 1
"""$INSUNITS and $MEASUREMENT (DXF Reference, header section)."""
_ANGLE_DIGITS = 13
"""Of arc ends in degrees: half a step is 9e-11 mm at 100 m radius, see ``LARGEST_RADIUS_MM``."""
_WITH_EXPONENT = re.compile(r"-?\d+(?:\.\d+)?e[+-]?\d+")
_FLOAT_CODES = (range(10, 60), range(110, 150), range(210, 240), range(460, 470), range(1010, 1060))
"""Group codes whose value is a floating-point number (DXF Reference, group code ranges)."""


def render_dxf(
    sheet: Sheet,
    *,
    layers: Mapping[str, str] | None = None,
    version: DxfVersion = "r2000",
    arcs: Arcs = "bulge",
) -> bytes:
    """Write a sheet as an ASCII DXF file in millimetres.

    Parameters
    ----------
    sheet
        From ``make_sheet``; its numbers are written as they are.
    layers
        The maker's own layer names: layer to name.
    version
        The release of the format. Release 12 knows no unit: whoever names the file says it there.
    arcs
        How round edges of outlines are written: ``spell_arcs`` tells.

    Returns
    -------
    bytes
        The same for the same sheet on every run.

    Raises
    ------
    FileError
        For a layer name that some reader would refuse.

    Notes
    -----
    Lines are LINE, holes CIRCLE, outlines and strokes LWPOLYLINE with bulges (in release 12 flat
    POLYLINE), slot floors 3D POLYLINE; nothing else is used but ARC. Lettering comes last. Only the
    layers that are drawn on are listed, beside the layer 0 that the format demands. Release 12
    keeps names in upper case, and so the layers' names are written there.

    """
    names = name_layers(layers or {})
    document = _new_document(version)
    for layer in sheet.layers:
        if not document.layers.has_entry(names[layer]):
            document.layers.add(names[layer], color=COLOURS[layer].number)
    _set_extents(document, sheet)
    space = document.modelspace()
    for layer in sheet.layers:
        for shape in sheet.on_layer(layer):
            if not isinstance(shape, Lettering):
                for spelt in spell_arcs(shape, arcs):
                    _add(space, spelt, names[layer])
    owner = space.layout_key
    if version == "r12":
        _keep_to_release_12(document)
    lines = _write(document)
    words = [
        (names[shape.layer], stroke.vertices, stroke.closed)
        for layer in sheet.layers
        for shape in sheet.on_layer(layer)
        if isinstance(shape, Lettering)
        for stroke in shape.strokes
    ]
    add_strokes(lines, words, owner=None if version == "r12" else owner)
    return "\n".join(lines).encode("ascii")


def _new_document(version: DxfVersion) -> Drawing:
    # ezdxf takes 0.15 s to import: only commands that write DXF pay it.
    from ezdxf.filemanagement import new  # noqa: PLC0415

    with _fixed_options():
        if version == "r12":
            with _without_warnings():  # that release 12 has no unit; ``render_dxf`` says so
                document = new("R12", setup=False, units=_NO_UNIT)
        else:
            document = new("R2000", setup=False, units=_MILLIMETRES)
            document.header["$MEASUREMENT"] = _METRIC
    document.layers.remove("Defpoints")
    return document


def _keep_to_release_12(document: Drawing) -> None:
    """Leave out what came later: handles nobody refers to, names in lower case."""
    from ezdxf.r12strict import make_acad_compatible  # noqa: PLC0415  # see _new_document

    document.header["$HANDLING"] = 0
    document.header["$DIMSTYLE"] = "STANDARD"  # the one that is listed
    document.layers.get("0").dxf.linetype = "CONTINUOUS"
    make_acad_compatible(document)


def _set_extents(document: Drawing, sheet: Sheet) -> None:
    """State the true extents, and open the drawing so that it fills the window."""
    around = sheet.extents
    heights = [
        vertex[2]
        for shape in sheet.shapes
        if isinstance(shape, Polyline3D)
        for vertex in shape.vertices
    ]
    low, high = min(heights, default=0.0), max(heights, default=0.0)
    space, paper = document.modelspace(), document.paperspace()
    space.reset_extents((*around[:2], low), (*around[2:], high))
    space.reset_limits(around[:2], around[2:])
    # An empty paper space has no extents; the format's own mark for that is 1e20, an exponent.
    paper.reset_extents((0.0, 0.0, 0.0), (0.0, 0.0, 0.0))
    middle = ((around.left + around.right) / 2, (around.low + around.high) / 2)
    document.set_modelspace_vport(
        round(max(around.height, around.width / 2, 1.0) * 1.1, 6),
        center=(round(middle[0], 6), round(middle[1], 6)),
    )


def _add(space: Modelspace, shape: Shape, name: str) -> None:
    on_layer = {"layer": name}
    match shape:
        case Line():
            space.add_line(shape.start, shape.end, on_layer)
        case Circle():
            space.add_circle(shape.centre, shape.radius_mm, on_layer)
        case Arc():
            start, end = (
                round(math.degrees(angle) % 360.0, _ANGLE_DIGITS)
                for angle in (shape.start_angle, shape.end_angle)
            )
            space.add_arc(shape.centre, shape.radius_mm, start, end, dxfattribs=on_layer)
        case Outline():
            bulges = shape.bulges or (0.0,) * len(shape.vertices)
            points = [(*xy, bulge) for xy, bulge in zip(shape.vertices, bulges, strict=True)]
            flat = space.add_polyline2d if space.dxfversion == "AC1009" else space.add_lwpolyline
            flat(points, format="xyb", close=shape.closed, dxfattribs=on_layer)
        case Polyline3D():
            space.add_polyline3d(shape.vertices, dxfattribs=on_layer)
        case Lettering():
            raise AssertionError("lettering is written by ``add_strokes``")


def _write(document: Drawing) -> list[str]:
    """Give the file's lines: no date, no exponent and no minus zero."""
    with _fixed_options(), StringIO() as stream:
        document.write(stream)
        lines = stream.getvalue().split("\n")
    for place in range(1, len(lines), 2):
        value = lines[place]
        if "e" in value and _WITH_EXPONENT.fullmatch(value) and _holds_float(lines[place - 1]):
            lines[place] = format(Decimal(value), "f")
        elif value == "-0.0" and _holds_float(lines[place - 1]):
            lines[place] = "0.0"
    return lines


def _holds_float(code: str) -> bool:
    return any(int(code) in codes for codes in _FLOAT_CODES)


@contextmanager
def _fixed_options() -> Iterator[None]:
    """Take dates and random numbers out of what ezdxf writes, then give its options back.

    Setting header variables does not do it: ezdxf overwrites them as it writes. Being set here,
    the option is the same whatever a user's own ezdxf.ini says.
    """
    from ezdxf import options  # type: ignore[attr-defined]  # noqa: PLC0415  # see _new_document

    before = options.write_fixed_meta_data_for_testing
    options.write_fixed_meta_data_for_testing = True
    try:
        yield
    finally:
        options.write_fixed_meta_data_for_testing = before


@contextmanager
def _without_warnings() -> Iterator[None]:
    logger = logging.getLogger("ezdxf")
    before = logger.disabled
    logger.disabled = True
    try:
        yield
    finally:
        logger.disabled = before
