"""Strokes added to a file are entities like the rest: own handles, plain numbers, in place."""

from __future__ import annotations

from io import StringIO

import ezdxf.filemanagement
import pytest

from layout.drawing.shapes import Lettering, Line
from layout.drawing.sheet import make_sheet
from layout.files.dxf import render_dxf
from layout.files.dxf_strokes import add_strokes

WORD = Lettering("ENGRAVE_LABEL", "B 8%", (3, 3), 5)
ALONE = make_sheet("a", "A", shapes=[WORD])
SHEET = make_sheet("a", "A", shapes=[WORD, Line("CUT_SLOT", (0, 40), (9, 40))])


def read(content: bytes):
    return ezdxf.filemanagement.read(StringIO(content.decode("ascii")))


@pytest.mark.parametrize("sheet", [SHEET, ALONE], ids=["beside a line", "alone"])
@pytest.mark.parametrize("version", ["r2000", "r12"])
def test_every_stroke_is_read_as_it_is(version, sheet) -> None:
    document = read(render_dxf(sheet, version=version))
    drawn = document.modelspace().query("LWPOLYLINE POLYLINE")
    word = sheet.shapes[0]
    assert len(word.strokes) > 5
    assert any(stroke.closed for stroke in word.strokes)
    for stroke, read_back in zip(word.strokes, drawn, strict=True):
        points = (
            [(x, y) for x, y in read_back.get_points("xy")]
            if version == "r2000"
            else [(vertex.dxf.location.x, vertex.dxf.location.y) for vertex in read_back.vertices]
        )
        assert tuple(points) == stroke.vertices
        assert bool(read_back.is_closed) == stroke.closed
        assert read_back.dxf.layer == "ENGRAVE_LABEL"
    assert document.audit().errors == []
    assert document.audit().fixes == []


def test_every_handle_is_used_once_and_the_next_is_stated() -> None:
    lines = render_dxf(SHEET).decode("ascii").split("\n")
    tags = list(zip(lines[:-1:2], lines[1::2], strict=True))
    start = tags.index(("  2", "TABLES"))
    handles = [int(value, 16) for code, value in tags[start:] if code in {"  5", "105"}]
    assert len(set(handles)) == len(handles)
    seed = int(tags[tags.index(("  9", "$HANDSEED")) + 1][1], 16)
    assert seed == max(handles) + 1
    space = next(iter(read(render_dxf(SHEET)).modelspace().query("LINE"))).dxf.owner
    owners = {tags[i + 2][1] for i, tag in enumerate(tags) if tag == ("  0", "LWPOLYLINE")}
    assert owners == {space}


def test_a_file_without_a_section_of_entities_is_refused() -> None:
    with pytest.raises(ValueError, match="ENTITIES"):
        add_strokes(["  0", "SECTION", "  2", "HEADER", "  0", "ENDSEC"], [], owner=None)
