"""Do the notches of the template stand on the frets?"""

from __future__ import annotations

import numpy as np
import pytest
import shapely

from layout.drawing.shapes import Lettering, extents_of
from layout.drawing.slotting import DEPTH_MM, WIDTH_MM, draw_slotting


def strip(sheet):
    (outline,) = [shape for shape in sheet.shapes if shape.layer == "CUT_OUTLINE"]
    assert outline.closed
    assert shapely.Polygon(outline.vertices).is_valid
    return outline


def notches(outline, bottom_y):
    """The ends in x of every notch's bottom, in order along the strip."""
    at = sorted(x for x, y in outline.vertices if abs(y - bottom_y) < 1e-6)
    return np.array(at).reshape(-1, 2)


@pytest.mark.parametrize(("edge", "side"), [("bass", 1), ("treble", -1)])
def test_notches_are_centred_on_zero_and_on_every_fret(plan_job, edge, side) -> None:
    plan = plan_job(template=f"{{notch: 3, edge: {edge}}}")
    sheet = draw_slotting(plan)
    found = notches(strip(sheet), side * DEPTH_MM)
    assert len(found) == 21
    # By hand: equal temperament, fret k at 628.65 (1 - 2^(-k/12)).
    wanted = 628.65 * (1 - 2 ** (-np.arange(21) / 12))
    np.testing.assert_allclose(found.mean(axis=1), wanted, rtol=0, atol=1e-6)
    np.testing.assert_allclose(np.ptp(found, axis=1), 3, rtol=0, atol=2e-6)
    box = extents_of([strip(sheet)])
    assert (box.low, box.high) == ((0, WIDTH_MM) if side > 0 else (-WIDTH_MM, 0))
    assert box.left < -1.5
    assert box.right == pytest.approx(plan.board.tail_end.at_centre_mm, abs=1e-6)


def test_labels_stand_on_the_strip_over_their_notches(plan_job) -> None:
    sheet = draw_slotting(plan_job(template="{notch: 3}"))
    box = extents_of([strip(sheet)])
    labels = {
        shape.text: shape
        for shape in sheet.shapes
        if isinstance(shape, Lettering) and shape.height_mm <= 3 and shape.text.isdigit()
    }
    assert list(labels) == [str(number) for number in range(21)]
    for shape in labels.values():
        inside = extents_of([shape])
        assert box.low + DEPTH_MM < inside.low
        assert inside.high < box.high
    x = labels["12"].anchor[0]
    assert x == pytest.approx(314.325, abs=1e-6)


def test_a_left_handed_strip_is_turned_over(plan_job) -> None:
    right, left = (
        strip(draw_slotting(plan_job(hand=hand, template="{notch: 3}")))
        for hand in ("right", "left")
    )
    assert sorted(left.vertices) == sorted((x, 0.0 - y) for x, y in right.vertices)


def test_offset_lines_leave_the_notches_their_width(plan_job) -> None:
    sheet = draw_slotting(
        plan_job(
            template="{notch: 3}", tooling="{machine: laser, kerf: {x: 0.2, y: 0.1}, lines: offset}"
        )
    )
    # The beam takes 0.1 mm of either side: the path round the strip is 0.2 narrower in a notch.
    found = notches(strip(sheet), DEPTH_MM - 0.05)
    np.testing.assert_allclose(np.ptp(found, axis=1), 2.8, rtol=0, atol=2e-6)
    wanted = 628.65 * (1 - 2 ** (-np.arange(21) / 12))
    np.testing.assert_allclose(found.mean(axis=1), wanted, rtol=0, atol=1e-6)
    assert any(note.startswith("Lines: offset by half the kerf, ") for note in sheet.notes)


@pytest.mark.parametrize(
    "keys",
    [
        {},
        {"template": "{notch: 3}", "scale": "{treble: 600, bass: 640, square_at: 5}"},
        {"template": "{notch: 12}"},  # frets 19 and 20 are 11.8 mm apart
    ],
)
def test_there_is_none_where_it_does_not_apply(plan_job, keys) -> None:
    assert draw_slotting(plan_job(**keys)) is None


@pytest.mark.parametrize(
    ("zero", "said"),
    [
        ("edge", "0 is the nut line."),
        ("kerf", "0 is the middle of the saw line at the nut end."),
        ("fret", "0 is the nut line."),
    ],
)
def test_notes_say_what_zero_is_and_which_wood_it_fits(plan_job, zero, said) -> None:
    notes = draw_slotting(plan_job(template="{notch: 3}", nut=f"{{zero: {zero}}}")).notes
    assert any(note.endswith(said) for note in notes)
    assert any(note.startswith("State of the wood: square blank") for note in notes)
    assert "Lines: nominal, no cutter offset." in notes
    assert any("takes half its cut" in note for note in notes) == (zero == "edge")
