"""Every release and every spelling of arcs, read back by readers that share no code with us."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path

import pytest

from layout.api import draw_sheets, make_plan, read_job
from layout.drawing.moves import made_positive
from layout.drawing.outlines import round_corners
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

DXF_MM = 1e-6
EXAMPLES = Path(__file__).parents[2] / "examples"
VERSIONS = ["r2000", "r12"]
SPELLINGS = ["bulge", "pieces", "chords"]
READERS = ["read_dxf_gdal", "read_dxf_node"]


def rich_shapes() -> list[Shape]:
    slanted = [(700.1, -27.123456789), (700.68, -27.2), (706.7, 29.9), (706.12, 29.95)]
    return [
        Outline("CUT_OUTLINE", ((-3.2, 24.1), (418.7, 29.9), (420.1, -29.9), (-3.2, -24.1))),
        # Edges that bow out and in, arc to arc, more than a half circle, a microscopic corner.
        Outline("CUT_OUTLINE", ((450, 0), (510, 0), (510, 20), (450, 20)), (0.05, 0.3, -0.05, -2)),
        Outline("CUT_OUTLINE", ((600, 60), (600.0003, 60), (600, 60.4)), (0.7, 0.1, -0.2)),
        Outline("CUT_OUTLINE", ((530, 0), (550, 0), (550, 1.5)), (0.7, 0.0, 0.0), closed=False),
        *(round_corners("CUT_POCKET", slanted, radius_mm=radius) for radius in (0.25,)),
        *(
            round_corners("CUT_POCKET", [(x - gap, y) for x, y in slanted], radius_mm=0.28)
            for gap in (20, 40, 60)
        ),
        Outline("CUT_POCKET", ((720, 0), (720, 50), (719.4, 50), (719.4, 0)), (0, 1, 0, 1)),
        *(Line("CUT_SLOT", (x, -30.0), (x + 0.7, 31.0)) for x in (35.283412, 68.586532)),
        Circle("DRILL_PIN", (-20, 1e-6), 1.5),
        Circle("DRILL_MARK", (83.2, 0), 3),
        Arc("SCRIBE_STOP", (220, 0), 40, math.radians(200), math.radians(290)),
        Arc("SCRIBE_STOP", (220, 0), 55, math.radians(350), math.radians(15)),
        Lettering("ENGRAVE_LABEL", "Nr 12 & {Qgj%@#}", (60, 40), 3.0),
        Line("REF_CENTRE", (-30, 0), (660, 0)),
        Polyline3D("CUT_FLOOR", ((35.0, -30.0, -2.3), (35.3, 0.0, -2.0), (35.7, 31.0, -2.3))),
        Polyline3D("CUT_FLOOR", ((68.0, -30.0, -2.3), (68.7, 31.0, -2.4))),
    ]


def flat_shapes() -> list[Shape]:
    """Radii of 98 m, and of 102 m and 15 km, which an ARC cannot close."""
    return [
        Outline("CUT_OUTLINE", ((0, 80), (600.0, 81.3), (600, 99), (0, 99)), (0, 0, 0.00153, 0)),
        Outline("CUT_OUTLINE", ((0, 110), (600, 110), (600, 129), (0, 129)), (0.00147, 0, 1e-5, 0)),
    ]


@pytest.fixture(scope="module")
def rich() -> Sheet:
    return make_sheet("rich", "Rich", shapes=rich_shapes())


@pytest.fixture(scope="module")
def drawn_examples() -> list[Sheet]:
    """The board of every example, and all sheets with round outlines of one of them."""
    drawn = {
        path.stem: draw_sheets(make_plan(read_job(path)))
        for path in sorted(EXAMPLES.glob("*.yaml"))
    }
    assert len(drawn) >= 5
    boards = [sheet for sheets in drawn.values() for sheet in sheets if sheet.name == "board"]
    others = [sheet for sheet in drawn["multiscale-seven"] if sheet.name != "board"]
    return boards + [sheet for sheet in others if bends(sheet)]


def bends(sheet: Sheet) -> bool:
    return any(shape.bulges for shape in sheet.shapes if isinstance(shape, Outline))


@pytest.fixture(params=[(reader, version) for reader in READERS for version in VERSIONS])
def differences(request, compare_with_sheet, tmp_path: Path) -> Callable[..., list[str]]:
    """Write a sheet, read it, and say in what it differs from the sheet that was meant."""
    reader, version = request.param
    read = request.getfixturevalue(reader)

    def compare(written: Sheet, arcs: str, *, meant: Sheet | None = None, spelt=None) -> list[str]:
        path = tmp_path / "sheet-mm.dxf"
        path.write_bytes(render_dxf(written, version=version, arcs=arcs))
        return compare_with_sheet(meant or written, read(path), DXF_MM, arcs=spelt or arcs)

    return compare


@pytest.mark.parametrize("arcs", SPELLINGS)
def test_the_rich_sheet(rich: Sheet, arcs: str, differences) -> None:
    assert differences(rich, arcs) == []


def test_every_example(drawn_examples: list[Sheet], differences) -> None:
    for sheet in drawn_examples:
        assert differences(sheet, "bulge") == [], sheet.title
        # A sheet that is all straight is the same file, whatever the spelling.
        others = ("pieces", "chords") if sheet.name == "board" else ("pieces",)
        for arcs in others if bends(sheet) else ():
            assert differences(sheet, arcs) == [], (sheet.title, arcs)


def test_the_spelling_changes_no_straight_sheet(drawn_examples: list[Sheet]) -> None:
    sheet = next(sheet for sheet in drawn_examples if not bends(sheet))
    assert render_dxf(sheet, arcs="pieces") == render_dxf(sheet) == render_dxf(sheet, arcs="chords")


@pytest.mark.parametrize("arcs", SPELLINGS)
@pytest.mark.parametrize("version", VERSIONS)
def test_flat_arcs(version, arcs, read_dxf_node, compare_with_sheet, tmp_path: Path) -> None:
    sheet = make_sheet("flat", "Flat arcs", shapes=flat_shapes())
    path = tmp_path / "flat-mm.dxf"
    path.write_bytes(render_dxf(sheet, version=version, arcs=arcs))
    reading = read_dxf_node(path)
    assert compare_with_sheet(sheet, reading, DXF_MM, arcs=arcs) == []
    count = sum(entity.kind == "arc" for entity in reading.entities)
    assert count == (1 if arcs == "pieces" else 0)


def test_a_sheet_made_positive(rich: Sheet, differences) -> None:
    moved, by = made_positive(rich)
    assert min(by) > 0
    assert differences(moved, "pieces") == []
    assert differences(moved, "pieces", meant=rich) != []


# --- the comparison can fail ---------------------------------------------------------------------


def with_first_pocket(sheet: Sheet, change: Callable[[Outline], Outline]) -> Sheet:
    shapes = list(sheet.shapes)
    place = next(i for i, s in enumerate(shapes) if s.layer == "CUT_POCKET")
    shapes[place] = change(shapes[place])
    return replace(sheet, shapes=tuple(shapes), extents=extents_of(shapes))


def moved_corner(pocket: Outline) -> Outline:
    (x, y), *rest = pocket.vertices
    return replace(pocket, vertices=((x + 2e-6, y), *rest))


@pytest.mark.parametrize("arcs", SPELLINGS)
def test_a_corner_two_millionths_off_is_caught(rich: Sheet, arcs: str, differences) -> None:
    problems = differences(with_first_pocket(rich, moved_corner), arcs, meant=rich)
    assert len(problems) == 1
    assert problems[0].startswith("CUT_POCKET outline at")
    assert "off by" in problems[0]


@pytest.mark.parametrize("arcs", SPELLINGS)
def test_an_open_contour_is_caught(rich: Sheet, arcs: str, differences) -> None:
    def opened(pocket: Outline) -> Outline:
        return replace(pocket, closed=False)

    problems = differences(with_first_pocket(rich, opened), arcs, meant=rich)
    assert any(problem.endswith(": open") for problem in problems)


def test_pieces_and_chords_are_not_taken_for_bulges(rich: Sheet, differences) -> None:
    assert any("extra: CUT_POCKET" in p for p in differences(rich, "pieces", spelt="bulge"))
    assert any("off by" in problem for problem in differences(rich, "chords", spelt="bulge"))


def test_a_joint_millionths_open_is_caught(rich: Sheet, differences, monkeypatch) -> None:
    # Seven digits of a degree put the ends of an arc of 60 mm up to 5e-8 mm off.
    monkeypatch.setattr("layout.files.dxf._ANGLE_DIGITS", 7)
    assert any(problem.endswith(": open") for problem in differences(rich, "pieces"))
