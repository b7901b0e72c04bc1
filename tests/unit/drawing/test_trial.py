"""Is the trial scrap cut as the board would be, at five widths?"""

from __future__ import annotations

import pytest

from layout.drawing.shapes import Lettering, Line, Outline, extents_of
from layout.drawing.trial import HEIGHT_MM, LENGTH_MM, SLOT_MM, draw_trial, lay_trial

ROUTER = "{machine: router, cutter: %s, runout: 0.02}"
LASER = "{machine: laser, kerf: {x: 0.12, y: 0.1}, lines: %s}"


def on(sheet, layer):
    return [shape for shape in sheet.shapes if shape.layer == layer]


def texts(sheet):
    return [shape.text for shape in sheet.shapes if isinstance(shape, Lettering)]


@pytest.mark.parametrize(
    "keys",
    [
        {},
        {"tooling": "{machine: saw, kerf: 0.58}"},
        {"tooling": ROUTER % 0.4, "frets": "{count: 9, kind: lines}"},
    ],
)
def test_a_saw_or_unslotted_work_needs_none(plan_job, keys) -> None:
    assert draw_trial(plan_job(**keys)) is None


def test_a_router_cuts_five_pockets(plan_job) -> None:
    plan = plan_job(tooling=ROUTER % 0.4, slots="{width: 0.58}")
    sheet = draw_trial(plan)
    pockets, lines = on(sheet, "CUT_POCKET"), on(sheet, "CUT_SLOT")
    assert len(pockets) == len(lines) == 5
    for pocket, width in zip(pockets, (0.54, 0.56, 0.58, 0.60, 0.62), strict=True):
        box = extents_of([pocket])
        assert box.width == pytest.approx(width, abs=2e-6)
        assert box.high == SLOT_MM  # the blind end
        assert box.low < -0.2  # open: the round end lies outside the scrap
        assert any(pocket.bulges)
        assert {f"{width:.3f}", f"cuts {width + 0.02:.3f}"} <= set(texts(sheet))


def test_widths_a_router_cannot_cut_are_named(plan_job) -> None:
    plan = plan_job(tooling=ROUTER % 0.58, slots="{width: 0.58}")
    slots, left_out = lay_trial(plan)
    assert [slot.width_mm for slot in slots] == [0.58, 0.6, 0.62]
    assert left_out == (0.54, 0.56)
    sheet = draw_trial(plan)
    assert "Left out, narrower than this machine cuts: 0.54, 0.56 mm." in sheet.notes
    assert len(on(sheet, "CUT_SLOT")) == 3
    assert len(on(sheet, "CUT_POCKET")) == 2  # the first is as wide as the cutter: a centre line
    assert isinstance(on(sheet, "CUT_SLOT")[0], Line)


@pytest.mark.parametrize(
    ("lines", "drawn", "finished"), [("on", 0.0, 0.12), ("offset", -0.12, 0.0)]
)
def test_a_laser_s_slots_follow_what_its_lines_mean(plan_job, lines, drawn, finished) -> None:
    plan = plan_job(tooling=LASER % lines, slots="{width: 0.5}")
    sheet = draw_trial(plan)
    pockets = on(sheet, "CUT_POCKET")
    for pocket, width in zip(pockets, (0.46, 0.48, 0.50, 0.52, 0.54), strict=True):
        assert extents_of([pocket]).width == pytest.approx(width + drawn, abs=2e-6)
        assert f"cuts {width + finished:.3f}" in texts(sheet)
    outside = 0.0 if lines == "on" else 0.06
    (scrap,) = on(sheet, "CUT_OUTLINE")
    box = extents_of([scrap])
    assert box.left == pytest.approx(-outside, abs=1e-6)
    assert box.right == pytest.approx(LENGTH_MM + outside, abs=1e-6)
    said = (
        "Lines: nominal, no cutter offset." if lines == "on" else "Lines: offset by half the kerf"
    )
    assert any(note.startswith(said) for note in sheet.notes)


def test_a_bar_and_labels_stand_on_the_scrap(plan_job) -> None:
    sheet = draw_trial(plan_job(tooling=ROUTER % 0.4, wire="{tang: 0.5, tang_depth: 1.9}"))
    bars = [
        shape
        for shape in on(sheet, "REF_BAR")
        if isinstance(shape, Line) and abs(shape.start[0] - shape.end[0]) > 50
    ]
    (bar,) = bars
    assert bar.end[0] - bar.start[0] == 100
    assert 0 < bar.start[1] < HEIGHT_MM
    boxes = [
        extents_of([shape])
        for shape in on(sheet, "ENGRAVE_LABEL")
        if shape.text.replace("cuts ", "").replace(".", "").isdigit()
    ]
    assert len(boxes) == 10
    for index, one in enumerate(boxes):
        assert one.low > SLOT_MM
        assert one.high < bar.start[1]
        assert 0 < one.left < one.right < LENGTH_MM
        for other in boxes[:index]:
            apart = one.left > other.right or other.left > one.right
            assert apart or one.low > other.high or other.low > one.high
    assert "Depth: 2.30 mm." in sheet.notes
    assert any(note.startswith("State of the wood: a flat scrap") for note in sheet.notes)
    assert all(isinstance(shape, Outline) for shape in on(sheet, "CUT_POCKET"))
