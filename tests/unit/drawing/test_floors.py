"""Do the floors lie as deep as the tang asks, and beside the top's curve?"""

from __future__ import annotations

from itertools import pairwise

import numpy as np
import pytest

from layout.drawing.floors import draw_floors
from layout.drawing.shapes import Outline, Polyline3D

WIRE = "{tang: 0.53, tang_depth: 1.9}"
GRID_MM = 1.1e-6
DEPTH_MM = 2.3
"""1.9 mm of tang and the default clearance, 0.4 mm."""


def floors(sheet):
    chains = [shape for shape in sheet.shapes if shape.layer == "CUT_FLOOR"]
    assert all(isinstance(chain, Polyline3D) for chain in chains)
    return [np.array(chain.vertices) for chain in chains]


def between(chain, count=101):
    """Many points along a chain."""
    share = np.linspace(0, 1, count)[:, None]
    return np.concatenate([a + share * (b - a) for a, b in pairwise(chain)])


@pytest.mark.parametrize("keys", [{}, {"wire": WIRE, "frets": "{count: 9, kind: lines}"}])
def test_there_are_none_without_a_tang_or_slots(plan_job, keys) -> None:
    assert draw_floors(plan_job(**keys)) is None


@pytest.mark.parametrize("scale", ["628.65", "{treble: 600, bass: 640, square_at: 5}"])
@pytest.mark.parametrize("radius", ["flat", "{nut: 254, tail: 406}"])
@pytest.mark.parametrize("run", ["open", "blind"])
def test_a_floor_that_follows_keeps_its_depth_all_along(plan_job, scale, radius, run) -> None:
    plan = plan_job(
        scale=scale,
        wire=WIRE,
        board=f"{{radius: {radius}}}",
        slots=f"{{floor: follow, run: {run}}}",
    )
    chains = floors(draw_floors(plan))
    assert len(chains) == 20
    for chain, piece in zip(chains, plan.pieces, strict=True):
        np.testing.assert_allclose(chain[0, :2], piece.cut_bass_mm, rtol=0, atol=GRID_MM)
        np.testing.assert_allclose(chain[-1, :2], piece.cut_treble_mm, rtol=0, atol=GRID_MM)
        x, y, z = between(chain).T
        depth = plan.surface.height_mm(x, y) - z
        np.testing.assert_allclose(depth, DEPTH_MM, rtol=0, atol=0.005)


@pytest.mark.parametrize("run", ["open", "blind"])
def test_a_flat_floor_is_level_and_deep_enough_at_its_ends(plan_job, run) -> None:
    plan = plan_job(wire=WIRE, board="{radius: 254}", slots=f"{{run: {run}, past_edge: 4}}")
    for chain, piece in zip(floors(draw_floors(plan)), plan.pieces, strict=True):
        assert len(chain) == 2
        assert chain[0, 2] == chain[1, 2]
        ends = [piece.cut_bass_mm, piece.cut_treble_mm]
        np.testing.assert_allclose(chain[:, :2], ends, rtol=0, atol=GRID_MM)
        # Depth counts in the wood: at the finished edges of an open slot.
        _, y = piece.treble_mm if run == "open" else piece.cut_treble_mm
        top = np.sqrt(254**2 - y**2) - 254
        assert chain[0, 2] == pytest.approx(top - DEPTH_MM, abs=GRID_MM)


def test_past_a_narrow_radius_a_floor_that_follows_runs_on_level(plan_job) -> None:
    plan = plan_job(
        scale="330",
        frets="12",
        wire=WIRE,
        board="{radius: 26}",
        slots="{floor: follow, past_edge: 4}",
    )
    chains = floors(draw_floors(plan))
    last, piece = chains[-1], plan.pieces[-1]
    assert np.isfinite(last).all()
    np.testing.assert_allclose(last[0, :2], piece.cut_bass_mm, rtol=0, atol=GRID_MM)
    assert last[0, 2] == last[1, 2]
    x, y, z = between(last[1:-1]).T
    np.testing.assert_allclose(plan.surface.height_mm(x, y) - z, DEPTH_MM, rtol=0, atol=0.005)


def test_a_zero_fret_has_a_floor_too(plan_job) -> None:
    plan = plan_job(wire=WIRE, nut="{zero: fret}")
    chains = floors(draw_floors(plan))
    assert len(chains) == 21
    assert chains[0][:, 0].tolist() == [0, 0]


def test_a_left_handed_floor_is_turned_over(plan_job) -> None:
    right, left = (
        floors(draw_floors(plan_job(hand=hand, wire=WIRE, board="{radius: 300}")))
        for hand in ("right", "left")
    )
    for one, other in zip(right, left, strict=True):
        np.testing.assert_array_equal(one * [1, -1, 1], other)


@pytest.mark.parametrize(
    ("floor", "radius", "said"),
    [
        ("flat", "300", "Floors: level, 2.30 mm below the finished top at each slot's"),
        ("follow", "300", "Floors: 2.30 mm below the finished top all along, within 0.005 mm."),
        ("flat", "flat", "State of the wood: square blank or tapered, top flat."),
        ("flat", "300", "State of the wood: square blank or tapered, top still flat or radiused"),
    ],
)
def test_notes_say_depth_and_state(plan_job, floor, radius, said) -> None:
    sheet = draw_floors(
        plan_job(wire=WIRE, board=f"{{radius: {radius}}}", slots=f"{{floor: {floor}}}")
    )
    assert any(note.startswith(said) for note in sheet.notes)
    assert sheet.layers[0] == "CUT_FLOOR"
    assert [shape.layer for shape in sheet.shapes if isinstance(shape, Outline)] == ["REF_LINE"]
