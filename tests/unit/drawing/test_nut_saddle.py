"""Does the sheet of nut and saddle say where every string leaves, once and in its place?"""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
import shapely

from layout.drawing.nut import lay_nut, nut_notes, nut_rows
from layout.drawing.nut_saddle import draw_nut_saddle
from layout.drawing.saddle import from_octave_mm, octave_fret, saddle_notes, saddle_rows
from layout.drawing.shapes import Lettering, Line, Outline, extents_of

GRID_MM = 1.1e-6
"""Both coordinates of a vertex are rounded to 1e-6 mm."""
STEEL = (
    "[{note: E4, plain: steel, gauge: 0.3}, {note: B3, plain: steel, gauge: 0.4}, "
    "{note: G3, plain: steel, gauge: 0.6}]"
)
SHIFTS = "{nut: [0.5, 0.2, 0.2, -0.3, 0.4, 0.1], saddle: [1, 2.5, 1.2, 1.6, 2.2, 2.8]}"
FAN = "{treble: 600, bass: 640, square_at: 5}"


@pytest.fixture(scope="module")
def strung(plan_job):
    """Three steel strings with heights, for whom everything is computed."""

    def make(**keys):
        given = {"strings": STEEL, "heights": "{nut: 0.5, saddle: 3}"}
        return plan_job(**given | keys)

    return make


def on(sheet, layer):
    return [shape for shape in sheet.shapes if shape.layer == layer]


def texts(sheet):
    return [shape.text for shape in sheet.shapes if isinstance(shape, Lettering)]


def nut_outline(sheet):
    (outline,) = on(sheet, "CUT_OUTLINE")
    assert outline.closed
    return outline


def moved_mm(sheet):
    """How far the sheet says the saddle was moved."""
    (note,) = [note for note in sheet.notes if "true x" in note]
    return float(note.split(" plus ")[1].removesuffix(" mm."))


@pytest.mark.parametrize("scale", ["628.65", FAN])
@pytest.mark.parametrize("fit", ["trim", "overhang"])
def test_the_front_of_the_nut_steps_to_every_string(plan_job, scale, fit) -> None:
    plan = plan_job(scale=scale, compensation=SHIFTS, nut=f"{{fit: {fit}}}")
    sheet = draw_nut_saddle(plan)
    outline = nut_outline(sheet)
    ring = shapely.Polygon(outline.vertices)
    assert ring.is_valid
    # Each string leaves on the outline; steps nearer than 0.005 mm are one.
    for point in plan.ends.nut_mm:
        assert ring.exterior.distance(shapely.Point(point)) < 0.005
    # Six steps of which strings 2 and 3 share one: four risers, each with two corners.
    assert len(outline.vertices) == 4 + 2 * 4


@pytest.mark.parametrize("fit", ["trim", "overhang"])
def test_steps_are_what_the_figures_say(plan_job, fit) -> None:
    plan = plan_job(compensation=SHIFTS, nut=f"{{fit: {fit}}}")
    lines = lay_nut(plan)
    trim = fit == "trim"
    assert lines.front.at_centre_mm == pytest.approx(0.5 if trim else 0.0, abs=1e-12)
    # By hand: strings run within 0.9 degrees of the centre line, so shifts are x within 1e-4.
    at = [step.at_centre_mm for step in lines.steps]
    np.testing.assert_allclose(at, [0.5, 0.2, 0.2, -0.3, 0.4, 0.1], rtol=0, atol=1e-4)
    rows = nut_rows(plan)
    assert rows[0] == ["string", "gauge", "nut shift", "file back" if trim else "reaches over"]
    assert [row[3] for row in rows[1:]] == (
        ["0.000", "0.300", "0.300", "0.800", "0.100", "0.400"]
        if trim
        else ["0.500", "0.200", "0.200", "0.000", "0.400", "0.100"]
    )
    assert rows[4][:3] == ["4 D3", "-", "-0.300"]


def test_what_is_filed_back_under_an_overhang_still_steps(plan_job) -> None:
    plan = plan_job(compensation="{nut: [0, 0, 0, -0.3, 0, 0], saddle: none}")
    lines = lay_nut(plan)
    assert plan.ends.overhang_mm[3] == 0
    assert lines.steps[3].at_centre_mm == pytest.approx(-0.3, abs=1e-4)


def test_the_nut_is_as_wide_as_the_board_and_as_thick_as_asked(plan_job) -> None:
    plan = plan_job(nut="{thickness: 4.5}", board="{margin: {nut: 3.5, tail: 3}}")
    outline = nut_outline(draw_nut_saddle(plan))
    assert len(outline.vertices) == 4
    box = extents_of([outline])
    assert (box.left, box.right) == (-4.5, 0.0)
    # By hand: 36 between outer centres and 3.5 beside each, 43 at the front.
    front = [y for x, y in outline.vertices if x == 0.0]
    assert sorted(front) == pytest.approx([-21.5, 21.5], abs=GRID_MM)
    assert "Nut blank: 43.00 mm along its front, 4.50 mm thick." in nut_notes(plan)


def test_string_slots_are_a_gauge_wide_from_step_to_back(strung) -> None:
    plan = strung(compensation="{nut: each, saddle: each}", nut="{fit: trim}")
    sheet = draw_nut_saddle(plan)
    lines = lay_nut(plan)
    slots = [line for line in on(sheet, "SCRIBE_STOP") if line.start[0] < 1 and line.end[0] < 1]
    assert len(slots) == 6
    for index, gauge in enumerate((0.3, 0.4, 0.6)):
        pair = sorted((slots[2 * index], slots[2 * index + 1]), key=lambda line: line.start[1])
        (x, y), (x1, y1), (x2, y2) = pair[0].start, pair[0].end, pair[1].start
        apart = ((x1 - x) * (y2 - y) - (y1 - y) * (x2 - x)) / math.dist((x, y), (x1, y1))
        assert apart == pytest.approx(gauge, abs=3e-6)
        for line in pair:
            assert line.start[0] == pytest.approx(lines.back.at_centre_mm, abs=GRID_MM)
            assert line.end[0] == pytest.approx(lines.steps[index].at_centre_mm, abs=GRID_MM)


def test_without_a_gauge_a_slot_is_its_middle(plan_job) -> None:
    sheet = draw_nut_saddle(plan_job())
    assert sum(1 for line in on(sheet, "SCRIBE_STOP") if line.end[0] < 1) == 6


def test_a_nut_behind_a_zero_fret_only_guides(plan_job) -> None:
    plan = plan_job(nut="{zero: fret, thickness: 5}")
    outline = nut_outline(draw_nut_saddle(plan))
    box = extents_of([outline])
    assert box.left == pytest.approx(plan.board.nut_end.at_centre_mm, abs=GRID_MM)
    assert box.right == pytest.approx(-2.0, abs=GRID_MM)
    assert any(note.startswith("Zero fret: the nut only guides") for note in nut_notes(plan))


def test_a_channel_shows_the_wood_behind(plan_job) -> None:
    plan = plan_job(nut="{thickness: 5, seat: channel, behind: 3}")
    sheet = draw_nut_saddle(plan)
    (wood,) = [
        shape
        for shape in on(sheet, "REF_LINE")
        if isinstance(shape, Outline) and extents_of([shape]).right < 0
    ]
    box = extents_of([wood])
    assert (box.left, box.right) == pytest.approx((-8.0, -5.0), abs=GRID_MM)
    said = "Seat: a channel 5.00 mm wide; the wood runs on 3.00 mm behind it."
    assert said in nut_notes(plan)


def test_a_short_string_has_a_nut_of_its_own(plan_job) -> None:
    plan = plan_job(
        strings="[D4, B3, G3, D3, {note: G4, starts_at: {fret: 5, step: 9}}]",
        spread="{nut: 24, saddle: 33}",
    )
    assert lay_nut(plan).strings == (0, 1, 2, 3)
    assert nut_rows(plan)[5][3] == "-"
    # By hand: fret 5 of 628.65 mm lies at 628.65 (1 - 2^(-5/12)).
    at = 628.65 * (1 - 2 ** (-5 / 12))
    assert f"String 5 has a nut of its own at fret 5, {at:.3f} mm from zero." in nut_notes(plan)


def test_an_open_only_string_has_no_step(plan_job) -> None:
    plan = plan_job(strings="[E4, B3, G3, {note: A1, open_only: true, length: 700}]")
    assert lay_nut(plan).strings == (0, 1, 2)
    assert nut_rows(plan)[4][2:] == ["-", "-"]
    assert saddle_rows(plan)[4][2] == "-"


# Saddle ----------------------------------------------------------------------------------------


@pytest.mark.parametrize("scale", ["628.65", FAN])
def test_every_crown_is_crossed_at_its_place_and_in_the_strip(plan_job, scale) -> None:
    plan = plan_job(
        scale=scale,
        compensation="{nut: none, saddle: [1, 2.5, 1.2, 1.6, 2.2, 2.8], saddle_thickness: 2.4}",
    )
    sheet = draw_nut_saddle(plan)
    back = moved_mm(sheet)
    assert back % 10 == 0
    marks = [line for line in on(sheet, "SCRIBE_STOP") if line.start[0] > 10]
    middles = np.array([np.add(line.start, line.end) / 2 for line in marks])
    middles += np.array([back, 0.0])
    for crown in plan.ends.saddle_mm:
        near = np.hypot(*(middles - crown).T) < 3e-6
        assert near.sum() == 3  # a line across the string and both arms of its cross
    (strip,) = [
        shape for shape in on(sheet, "REF_LINE") if isinstance(shape, Outline) and shape.closed
    ]
    ring = shapely.Polygon(np.array(strip.vertices) + np.array([back, 0.0]))
    for crown in plan.ends.saddle_mm:
        assert ring.buffer(3e-6).contains(shapely.Point(crown))
    low, high = plan.ends.saddle_mm[[-1, 0], 1]
    width = ring.area / ((high - low + 12) / math.cos(plan.ends.strip.slant))
    assert width == pytest.approx(2.4, abs=1e-5)


def test_distances_from_bridge_line_and_octave_fret(plan_job) -> None:
    plan = plan_job(compensation=SHIFTS)
    assert octave_fret(plan) == 12
    # By hand: half of 628.65, and the setback, along a string as good as parallel to the centre.
    setback = np.array([1, 2.5, 1.2, 1.6, 2.2, 2.8])
    half = np.hypot(628.65, (np.linspace(27, -27, 6) - np.linspace(18, -18, 6))) / 2
    np.testing.assert_allclose(from_octave_mm(plan), half + setback, rtol=0, atol=1e-9)
    rows = saddle_rows(plan)
    assert rows[0] == ["string", "setback", "from octave", "x", "y"]
    assert rows[2][:3] == ["2 B3", "+2.500", f"{half[1] + 2.5:.3f}"]
    x, y = plan.ends.saddle_mm[1]
    assert rows[2][3:] == [f"{x:.3f}", f"{y:+.3f}"]
    assert "From octave: from fret 12 along the string to the crown." in saddle_notes(plan)


@pytest.mark.parametrize("frets", ["9", "{count: 20, temperament: equal-19}"])
def test_without_an_octave_fret_half_the_string_serves(plan_job, frets) -> None:
    plan = plan_job(frets=frets)
    if frets == "9":
        assert octave_fret(plan) is None
        said = "From octave: from the half-length line along the string to the crown."
    else:
        assert octave_fret(plan) == 19
        said = "From octave: from fret 19 along the string to the crown."
    assert said in saddle_notes(plan)
    np.testing.assert_allclose(from_octave_mm(plan), plan.strings.scale_mm / 2, rtol=0, atol=1e-9)


def test_how_much_of_the_strip_is_used(plan_job) -> None:
    given = "{nut: none, saddle: [1, 2, 3, 1, 2, 3], saddle_thickness: %s}"
    wide = saddle_notes(plan_job(compensation=given % 4))
    used = plan_job(compensation=given % 4).ends.strip.width_mm
    said = f"Saddle strip: 4.00 mm wide, of which the crowns use {used:.2f} mm ({used / 4:.0%})."
    assert said in wide
    tight = saddle_notes(plan_job(compensation=given % 1))
    assert f"Saddle strip: the crowns need {used:.2f} mm, more than the saddle's 1.00 mm." in tight


def test_no_setback_is_said_and_draws_no_strip(plan_job) -> None:
    plan = plan_job()
    assert "No setback is planned: every crown lies on the bridge line." in saddle_notes(plan)
    sheet = draw_nut_saddle(plan)
    assert not [shape for shape in on(sheet, "REF_LINE") if isinstance(shape, Outline)]


def test_separate_pieces_travel_along_their_strings(plan_job) -> None:
    plan = plan_job(bridge="{separate: {travel: 10}}", compensation=SHIFTS)
    sheet = draw_nut_saddle(plan)
    back = moved_mm(sheet)
    rows = saddle_rows(plan)
    assert rows[0][-1] == "in travel"
    # By hand: setbacks 1 to 2.8 centred in 10 mm: the travel runs from -3.1 to 6.9.
    assert [row[-1] for row in rows[1:]] == ["4.100", "5.600", "4.300", "4.700", "5.300", "5.900"]
    assert any("10.00 mm of travel the strings use 1.80 mm" in note for note in saddle_notes(plan))
    travels = [
        line
        for line in on(sheet, "REF_LINE")
        if isinstance(line, Line) and abs(line.start[1] - line.end[1]) < 1 and line.start[0] > 10
    ]
    assert len(travels) == 6
    for line, bridge in zip(travels, plan.strings.bridge_mm, strict=True):
        assert math.dist(line.start, line.end) == pytest.approx(10, abs=3e-6)
        assert line.start[0] + back == pytest.approx(bridge[0] - 3.1, abs=1e-3)


def test_a_loose_bridge_is_told_in_words(strung) -> None:
    plan = strung(bridge="loose", compensation="{saddle: straight}")
    x = plan.ends.saddle_mm[:, 0]
    said = (
        f"The bridge is loose: it stands {x[0]:.2f} mm from zero at the treble string, "
        f"{x[-1]:.2f} mm at the bass string."
    )
    assert said in draw_nut_saddle(plan).notes
    assert said in texts(draw_nut_saddle(plan))


# The whole sheet -------------------------------------------------------------------------------


def test_every_figure_and_note_is_lettered(plan_job) -> None:
    plan = plan_job(compensation=SHIFTS, board="{radius: 300}")
    sheet = draw_nut_saddle(plan)
    said = texts(sheet)
    for rows in (nut_rows(plan), saddle_rows(plan)):
        for row in rows:
            for word in row:
                assert word in said
    for note in sheet.notes:
        assert note in said
    assert "Lines: nominal, no cutter offset." in said
    state = [note for note in said if note.startswith("State of the wood: ")]
    assert len(state) == 1
    assert "the board is tapered, radiused and fretted." in state[0]
    assert (sheet.name, sheet.title) == ("nut-saddle", "Six-string: nut and saddle")
    assert "100 mm" in said


def test_parts_and_figures_stand_apart(strung) -> None:
    sheet = draw_nut_saddle(strung(scale=FAN, compensation="{nut: each, saddle: each}"))
    boxes = [
        extents_of([shape])
        for shape in sheet.shapes
        if isinstance(shape, Lettering) and shape.layer == "ENGRAVE_LABEL"
    ]
    for index, one in enumerate(boxes):
        for other in boxes[:index]:
            assert (
                one.left > other.right
                or other.left > one.right
                or one.low > other.high
                or other.low > one.high
            )


def test_a_left_handed_sheet_is_turned_over_and_its_figures_are_not(plan_job) -> None:
    left, right = (
        draw_nut_saddle(plan_job(hand=hand, compensation=SHIFTS)) for hand in ("left", "right")
    )
    for layer in ("CUT_OUTLINE", "REF_STRING"):
        points = [
            sorted(
                (x, sign * y + 0.0)
                for shape in on(sheet, layer)
                for x, y in (
                    shape.vertices if isinstance(shape, Outline) else (shape.start, shape.end)
                )
            )
            for sheet, sign in ((left, 1), (right, -1))
        ]
        assert points[0] == points[1]
    assert "Left-handed: mirrored across the centre line. Figures are as planned." in left.notes
    figures = [
        sorted(text for text in texts(sheet) if text[0] in "+-0123456789")
        for sheet in (left, right)
    ]
    assert figures[0] == figures[1]


def test_unfretted_work_without_a_spread_has_no_such_sheet(plan_job) -> None:
    plan = plan_job()
    bare = replace(plan, instrument=replace(plan.instrument, spread=None))
    assert draw_nut_saddle(bare) is None
