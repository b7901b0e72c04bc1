"""Are the radius gauges true arcs of the top's own radii?"""

from __future__ import annotations

import math

import pytest

from layout.drawing.gauges import draw_gauges, gauge_places
from layout.drawing.shapes import Lettering, extents_of, pieces_of, point_along, turn_of


def gauges(sheet):
    return [shape for shape in sheet.shapes if shape.layer == "CUT_OUTLINE"]


def arc_of(outline):
    (arc,) = [piece for piece in pieces_of(outline) if piece.bulge]
    return arc


def texts(sheet):
    return [shape.text for shape in sheet.shapes if isinstance(shape, Lettering)]


def test_a_flat_top_needs_none(plan_job) -> None:
    assert draw_gauges(plan_job()) is None


def test_one_radius_needs_one_pair(plan_job) -> None:
    sheet = draw_gauges(plan_job(board="{radius: 305}"))
    concave, convex = gauges(sheet)
    for outline in (concave, convex):
        assert outline.closed
        assert len(outline.vertices) == 4
        assert turn_of(arc_of(outline)).radius_mm == pytest.approx(305, abs=1e-4)
    assert {"R 305.00 mm", "all along, concave", "all along, convex"} <= set(texts(sheet))
    # As wide as the board at its widest, and 5 mm past either edge.
    assert extents_of([concave]).width == pytest.approx(extents_of([convex]).width, abs=2e-6)


def test_two_radii_at_nut_octave_fret_and_tail(plan_job) -> None:
    plan = plan_job(board="{radius: {nut: 305, tail: 406}}")
    sheet = draw_gauges(plan)
    places = gauge_places(plan)
    assert [place.name for place in places] == ["nut", "octave fret", "tail"]
    # By hand: straight-line in x from 305 at zero to 406 at the tail.
    tail = 628.65 * (1 - 2 ** (-20 / 12)) + 12
    middle = 305 + 101 * 628.65 / 2 / tail
    radii = [305, middle, 406]
    assert [place.radius_mm for place in places] == pytest.approx(radii, abs=1e-9)
    outlines = gauges(sheet)
    assert len(outlines) == 6
    for index, radius in enumerate(radii):
        for outline in outlines[2 * index : 2 * index + 2]:
            assert turn_of(arc_of(outline)).radius_mm == pytest.approx(radius, abs=1e-4)
    said = set(texts(sheet))
    for radius, place in zip(radii, places, strict=True):
        assert f"R {radius:.2f} mm" in said
        assert {f"{place.name}, concave", f"{place.name}, convex"} <= said
    for one, other in zip(outlines[:-2:2], outlines[2::2], strict=True):
        assert extents_of([one]).right < extents_of([other]).left - 5


def test_a_concave_gauge_stands_on_the_board_and_its_mate_fits_it(plan_job) -> None:
    plan = plan_job(board="{radius: 200}")
    concave, convex = gauges(draw_gauges(plan))
    hollow, crown = arc_of(concave), arc_of(convex)
    hollow_top, crown_top = point_along(hollow, 0.5), point_along(crown, 0.5)
    assert hollow_top == pytest.approx((0, 0), abs=2e-6)
    for y in (5.0, 15.0, 25.0):
        drop = -float(plan.surface.height_mm(0.0, y))
        for arc, top in ((hollow, hollow_top), (crown, crown_top)):
            (_, up), radius, *_ = turn_of(arc)
            assert top[1] - (up + math.sqrt(radius**2 - y**2)) == pytest.approx(drop, abs=1e-5)
    assert extents_of([concave]).high - hollow_top[1] >= 25
    assert extents_of([concave]).low - extents_of([convex]).high >= 9
    assert turn_of(hollow).centre[1] < 0  # the board's side
    assert turn_of(crown).centre[1] < crown_top[1]  # the gauge's own side


def test_a_radius_hardly_wider_than_the_board_still_has_gauges(plan_job) -> None:
    plan = plan_job(scale="330", frets="12", board="{radius: 26}")
    concave, convex = gauges(draw_gauges(plan))
    for outline in (concave, convex):
        assert turn_of(arc_of(outline)).radius_mm == pytest.approx(26, abs=1e-4)
    assert extents_of([concave]).low > extents_of([convex]).high


def test_offset_lines_run_half_a_kerf_outside(plan_job) -> None:
    keys = {"board": "{radius: 305}"}
    laser = "{machine: laser, kerf: 0.2, lines: %s}"
    plain = draw_gauges(plan_job(**keys, tooling=laser % "on"))
    offset = draw_gauges(plan_job(**keys, tooling=laser % "offset"))
    assert "Lines: nominal, no cutter offset." in plain.notes
    assert any(note.startswith("Lines: offset by half the kerf, ") for note in offset.notes)
    hollow, crown = (turn_of(arc_of(outline)).radius_mm for outline in gauges(offset))
    # Outside a hollow is toward its centre; outside a crown away from it.
    assert hollow == pytest.approx(304.9, abs=1e-3)
    assert crown == pytest.approx(305.1, abs=1e-3)
    assert extents_of([gauges(offset)[0]]).width == pytest.approx(
        extents_of([gauges(plain)[0]]).width + 0.2, abs=3e-6
    )


def test_a_very_uneven_beam_is_not_offset_and_that_is_said(plan_job) -> None:
    sheet = draw_gauges(
        plan_job(
            board="{radius: 305}",
            tooling="{machine: laser, kerf: {x: 0.3, y: 0.05}, lines: offset}",
        )
    )
    assert "Lines: nominal, no cutter offset." in sheet.notes


def test_notes_and_inches(plan_job) -> None:
    sheet = draw_gauges(plan_job(board="{radius: 304.8 mm}"))
    assert any(note.startswith("State of the wood: radiused.") for note in sheet.notes)
    assert "Top: one radius, 304.8 mm, all along." in sheet.notes
    assert set(sheet.notes) <= set(texts(sheet))
    inches = plan_job(unit="in", scale="25", spread="{nut: 1.4, saddle: 2.1}", board="{radius: 12}")
    assert "R 304.80 mm = 12.000 in" in texts(draw_gauges(inches))
