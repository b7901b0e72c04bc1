"""Every number of a rich sheet, read back from the bytes by readers that share no code with us."""

from __future__ import annotations

import math
import re
from dataclasses import replace
from pathlib import Path
from xml.etree import ElementTree as ET

import pytest

from layout.drawing.moves import mirrored, shifted
from layout.drawing.outlines import round_corners
from layout.drawing.reference import draw_check_bar, draw_origin_mark
from layout.drawing.shapes import (
    Arc,
    Circle,
    Lettering,
    Line,
    Outline,
    Polyline3D,
    Shape,
    extents_of,
)
from layout.drawing.sheet import Sheet, make_sheet
from layout.files.dxf import render_dxf
from layout.files.svg import render_svg

DXF_MM, SVG_MM = 1e-6, 1e-4


def rich_shapes() -> list[Shape]:
    slanted = ((100.0, -27.123456789), (100.58, -27.2), (106.6, 29.9), (106.02, 29.95))
    return [
        Outline("CUT_OUTLINE", ((-3.2, 24.1), (418.7, 29.9), (420.1, -29.9), (-3.2, -24.1))),
        Outline("CUT_OUTLINE", ((450, 0), (510, 0), (510, 20), (450, 20)), (0.05, 0, -0.05, 0)),
        Outline("CUT_OUTLINE", ((530, 0), (550, 0), (550, 1.5)), (0.7, 0.0, 0.0), closed=False),
        *(Line("CUT_SLOT", (x, -30.0), (x + 0.7, 31.0)) for x in (35.283412, 68.586532)),
        round_corners("CUT_POCKET", slanted, radius_mm=0.25),
        round_corners("CUT_POCKET", [(x + 50, -y) for x, y in slanted], radius_mm=0.28),
        Circle("DRILL_PIN", (-20, 1e-6), 1.5),
        Circle("DRILL_MARK", (83.2, 0), 3),
        Arc("SCRIBE_STOP", (220, 0), 40, math.radians(200), math.radians(290)),
        Arc("SCRIBE_STOP", (220, 0), 55, math.radians(350), math.radians(15)),
        Arc("SCRIBE_STOP", (300, 0), 9, math.radians(30), math.radians(330)),
        Lettering("ENGRAVE_LABEL", "Nº 12 & {Qgj%@#}", (60, 40), 3.0),
        Lettering("ENGRAVE_LABEL", "35.28 0,0", (36, -45), 2.5, angle=-math.pi / 2, align="left"),
        Lettering("ENGRAVE_LABEL", "slanting", (250, 45), 4, angle=0.3, stand="base"),
        Line("REF_CENTRE", (-30, 0), (660, 0)),
        Line("REF_LINE", (0, -28), (0, 28)),
        Line("REF_LINE", (420.1, -40), (420.1, -35.00002)),
        *(Line("REF_STRING", (0, y), (628.65, 1.5 * y)) for y in (-18.0, -7.2, 7.2, 18.0)),
        *draw_check_bar((10, -70)),
        *draw_check_bar((-40, -70), angle=math.pi / 2),
        *draw_origin_mark(),
    ]


def floors() -> list[Shape]:
    return [
        Polyline3D("CUT_FLOOR", tuple((x + t, 10.0 * t - 30, -2.3 - t * t / 900) for t in range(7)))
        for x in (35.28, 68.58)
    ]


@pytest.fixture(scope="module")
def sheet() -> Sheet:
    return make_sheet("board", "Job <1> & co", shapes=rich_shapes(), notes=("Unit: mm", "Nominal"))


@pytest.fixture(params=["dxf by gdal", "dxf by dxf-parser", "svg by svgelements"])
def read_back(request, tmp_path: Path):
    """Write a sheet, read it with one of the readers, and say what differs from another sheet."""
    form, _, reader = request.param.partition(" by ")
    fixture = {"gdal": "read_dxf_gdal", "dxf-parser": "read_dxf_node", "svgelements": "read_svg"}
    read = request.getfixturevalue(fixture[reader])
    compare = request.getfixturevalue("compare_with_sheet")

    def differences(written: Sheet, meant: Sheet) -> list[str]:
        path = tmp_path / f"sheet.{form}"
        path.write_bytes(render_dxf(written) if form == "dxf" else render_svg(written))
        return compare(meant, read(path), DXF_MM if form == "dxf" else SVG_MM)

    differences.reader = reader
    return differences


def test_everything_is_read_back(sheet: Sheet, read_back) -> None:
    assert read_back(sheet, sheet) == []


def test_left_hand_and_shifted_sheets_are_read_back(sheet: Sheet, read_back) -> None:
    left = mirrored(sheet)
    moved = shifted(left, (-left.extents.left, -left.extents.low))
    assert moved.extents[:2] == (0.0, 0.0)
    assert read_back(left, left) == []
    assert read_back(moved, moved) == []
    assert any("off by" in problem for problem in read_back(left, sheet))


@pytest.mark.parametrize("reader", ["read_dxf_gdal", "read_dxf_node"])
def test_floors_are_read_back(reader, request, compare_with_sheet, tmp_path: Path) -> None:
    sheet = make_sheet("floors", "Slot floors", shapes=floors())
    path = tmp_path / "floors.dxf"
    path.write_bytes(render_dxf(sheet))
    read = request.getfixturevalue(reader)
    assert compare_with_sheet(sheet, read(path), DXF_MM) == []
    deeper = [
        replace(floor, vertices=tuple((x, y, z - 0.01) for x, y, z in floor.vertices))
        for floor in floors()
    ]
    other = make_sheet("floors", "Slot floors", shapes=deeper)
    assert len(compare_with_sheet(other, read(path), DXF_MM)) == 2


def test_renamed_layers_are_read_back(sheet: Sheet, read_dxf_node, read_svg, tmp_path) -> None:
    names = {"CUT_SLOT": "saw_058", "REF_BAR": "bar"}
    for name, render, read in (
        ("a.dxf", render_dxf, read_dxf_node),
        ("a.svg", render_svg, read_svg),
    ):
        path = tmp_path / name
        path.write_bytes(render(sheet, layers=names))
        expected = {names.get(layer, layer) for layer in sheet.layers}
        reading = read(path)
        assert reading.layers - {"0"} == expected
        assert {entity.layer for entity in reading.entities} == expected


# --- mutations: the comparison can fail ----------------------------------------------------------


def _changed(sheet: Sheet, shapes: list[Shape]) -> Sheet:
    """A sheet that bypasses make_sheet, as a faulty program would write it."""
    return replace(sheet, shapes=tuple(shapes), extents=extents_of(shapes))


def _scaled(shape: Shape) -> Shape:
    match shape:
        case Line():
            ends = [(x * 25.4, y * 25.4) for x, y in (shape.start, shape.end)]
            return Line(shape.layer, *ends)
        case Outline():
            return replace(shape, vertices=tuple((x * 25.4, y * 25.4) for x, y in shape.vertices))
    return shape


def test_scale_is_caught(sheet: Sheet, read_back) -> None:
    problems = read_back(_changed(sheet, [_scaled(shape) for shape in sheet.shapes]), sheet)
    slots = [p for p in problems if p.startswith("CUT_SLOT") and "off by" in p]
    assert len(slots) == 2


def test_a_dropped_bulge_is_caught(sheet: Sheet, read_back) -> None:
    shapes = list(sheet.shapes)
    place = next(i for i, s in enumerate(shapes) if s.layer == "CUT_POCKET")
    bulges = shapes[place].bulges
    shapes[place] = replace(shapes[place], bulges=(0.0, *bulges[1:]))
    problems = read_back(_changed(sheet, shapes), sheet)
    assert len(problems) == 1
    assert problems[0].startswith("CUT_POCKET outline at")
    assert "off by 0.0" in problems[0]


def test_a_doubled_line_is_caught(sheet: Sheet, read_back) -> None:
    line = next(shape for shape in sheet.shapes if shape.layer == "CUT_SLOT")
    back = Line("CUT_SLOT", line.end, line.start)
    problems = read_back(_changed(sheet, [*sheet.shapes, back]), sheet)
    assert [problem.partition(":")[0] for problem in problems] == ["extra", "drawn twice"]


def test_a_partly_doubled_line_is_caught(sheet: Sheet, read_back) -> None:
    half = Line("REF_STRING", (0.0, 0.0), (100.0, 0.0))  # along the centre line
    problems = read_back(_changed(sheet, [*sheet.shapes, half]), sheet)
    assert [problem.partition(":")[0] for problem in problems] == ["extra", "drawn twice"]


def test_an_open_contour_is_caught(sheet: Sheet, read_back) -> None:
    shapes = list(sheet.shapes)
    assert shapes[0].closed
    shapes[0] = replace(shapes[0], closed=False)
    problems = read_back(_changed(sheet, shapes), sheet)
    assert any(problem.endswith(": open") for problem in problems)


def test_a_missing_hole_and_a_moved_line_are_caught(sheet: Sheet, read_back) -> None:
    shapes = [shape for shape in sheet.shapes if shape.layer != "DRILL_MARK"]
    place = next(i for i, s in enumerate(shapes) if s.layer == "CUT_SLOT")
    start = shapes[place].start
    shapes[place] = replace(shapes[place], start=(start[0] + 0.001, start[1]))
    problems = read_back(_changed(sheet, shapes), sheet)
    assert any(problem.startswith("missing: DRILL_MARK circle") for problem in problems)
    off = next(problem for problem in problems if "off by" in problem)
    assert float(re.search(r"off by ([\d.]+)", off)[1]) == pytest.approx(0.001, abs=1.1e-4)


# --- what the formats promise beside the geometry ------------------------------------------------


def test_dxf_header_and_plain_numbers(sheet: Sheet) -> None:
    lines = render_dxf(sheet).decode("ascii").split("\n")
    assert lines[-1] == ""
    assert not any("\r" in line for line in lines)
    tags = [(int(code), value) for code, value in zip(lines[:-1:2], lines[1::2], strict=True)]
    assert tags[-1] == (0, "EOF")
    starts = {value: place for place, (code, value) in enumerate(tags) if code == 9}

    def header(name: str) -> list[float]:
        here = starts[name] + 1
        return [float(value) for code, value in tags[here : here + 2] if code != 9]

    assert header("$INSUNITS")[0] == 4
    assert header("$MEASUREMENT")[0] == 1
    for name, corner in (
        ("$EXTMIN", sheet.extents[:2]),
        ("$EXTMAX", sheet.extents[2:]),
        ("$LIMMIN", sheet.extents[:2]),
        ("$LIMMAX", sheet.extents[2:]),
    ):
        assert header(name) == pytest.approx(corner, abs=1e-9)
    assert ("DRILL_PIN", "0.000001") in _circle_centres(tags)
    numbers = [value for code, value in tags if 10 <= code < 60 or 210 <= code < 240]
    assert len(numbers) > 1000
    assert [n for n in numbers if not re.fullmatch(r"-?\d+(\.\d+)?", n)] == []
    assert [n for n in numbers if n.startswith("-") and float(n) == 0] == []
    kinds = {value for code, value in tags[starts_of_entities(tags) :] if code == 0}
    assert kinds <= {
        "LINE", "LWPOLYLINE", "CIRCLE", "ARC", "ENDSEC", "SECTION", "EOF", "DICTIONARY",
        "ACDBDICTIONARYWDFLT", "ACDBPLACEHOLDER", "LAYOUT", "MATERIAL", "MLINESTYLE",
        "MLEADERSTYLE", "SCALE", "VISUALSTYLE", "PLOTSETTINGS", "DICTIONARYVAR", "TABLESTYLE",
    }  # fmt: skip


def _circle_centres(tags: list[tuple[int, str]]) -> list[tuple[str, str]]:
    centres, layer, inside = [], "", False
    for code, value in tags:
        if code == 0:
            inside = value == "CIRCLE"
        elif inside and code == 8:
            layer = value
        elif inside and code == 20:
            centres.append((layer, value))
    return centres


def starts_of_entities(tags: list[tuple[int, str]]) -> int:
    return tags.index((2, "ENTITIES"))


def test_svg_is_plain(sheet: Sheet) -> None:
    text = render_svg(sheet).decode("utf-8")
    root = ET.fromstring(text)
    width, height = sheet.extents.width + 4, sheet.extents.height + 4  # a margin of 2 mm
    box = [float(number) for number in root.attrib["viewBox"].split()]
    assert box == pytest.approx([0, 0, width, height], abs=2.1e-4)
    assert root.attrib["width"] == f"{root.attrib['viewBox'].split()[2]}mm"
    assert root.attrib["height"] == f"{root.attrib['viewBox'].split()[3]}mm"
    space = "{http://www.w3.org/2000/svg}"
    groups = [part for part in root if part.tag == space + "g"]
    assert [group.attrib["id"] for group in groups] == list(sheet.layers)
    assert {part.tag for part in root} == {space + tag for tag in ("title", "desc", "defs", "g")}
    for group in groups:
        assert set(group.attrib) == {"id", "fill", "stroke", "stroke-width"}
        for part in group:
            allowed = {"path": {"d"}, "circle": {"cx", "cy", "r"}}[part.tag.removeprefix(space)]
            assert set(part.attrib) == allowed
            assert len(part) == 0
            for word in " ".join(part.attrib.values()).split():
                assert re.fullmatch(r"[MLAZ]|-?\d+(\.\d{1,4})?", word), word
    assert root.find(space + "title").text == "Job <1> & co"
    assert "Unit: mm\nNominal\nOrigin" in root.find(space + "desc").text
