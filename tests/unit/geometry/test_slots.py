from itertools import pairwise

import numpy as np
import pytest
import shapely

from layout.geometry.kerf import offset_inward
from layout.geometry.slots import (
    SlotCut,
    choose_cut,
    outline_slot,
    run_slot,
)
from layout.instrument import Slots, Tooling

BASS, TREBLE = np.array([100.0, -25.0]), np.array([106.0, 25.0])
LENGTH = float(np.hypot(*(TREBLE - BASS)))


def router(cutter, runout=0.0):
    return Tooling("router", cutter, runout)


def laser(lines, kerf=(0.15, 0.2)):
    return Tooling("laser", kerf_mm=kerf, lines=lines)


def polygon(pocket):
    """Draw an outline with its bulges as fine chords."""
    points = []
    corners = [*pocket.points_mm, pocket.points_mm[0]]
    for (start, end), bulge in zip(pairwise(corners), pocket.bulges, strict=True):
        points.append(start)
        if bulge:
            # bulge: tan of a quarter of the arc, + counter-clockwise from start to end.
            turn, chord = 4 * np.arctan(bulge), end - start
            middle = (start + end) / 2 + np.array([-chord[1], chord[0]]) / 2 / np.tan(turn / 2)
            for share in np.linspace(0, 1, 400)[1:-1]:
                c, s = np.cos(share * turn), np.sin(share * turn)
                x, y = start - middle
                points.append(middle + np.array([c * x - s * y, s * x + c * y]))
    return shapely.Polygon(points)


def test_without_a_machine_the_slot_is_as_wanted():
    assert choose_cut(Slots(0.6), None) == SlotCut(0.6, None, 0.0, centre_line=True)


def test_a_saw_cuts_its_kerf():
    assert choose_cut(Slots(0.58), Tooling("saw", kerf_mm=(0.61, 0.61))).finished_mm == 0.61
    assert choose_cut(Slots(0.58), Tooling("saw")).finished_mm == 0.58


@pytest.mark.parametrize("cutter", [0.57, 0.58, 0.59])
def test_a_cutter_within_a_hundredth_follows_the_centre_line(cutter):
    cut = choose_cut(Slots(0.58), router(cutter, 0.02))
    assert (cut.drawn_mm, cut.centre_line, cut.too_narrow_by_mm) == (None, True, 0.0)
    assert cut.finished_mm == pytest.approx(cutter + 0.02, abs=1e-12)


def test_a_wider_slot_is_a_pocket():
    cut = choose_cut(Slots(0.58), router(0.4, 0.02))
    assert (cut.drawn_mm, cut.centre_line, cut.corner_mm) == (0.58, True, 0.2)
    assert cut.finished_mm == pytest.approx(0.60, abs=1e-12)
    assert choose_cut(Slots(0.58), router(0.569)).drawn_mm == 0.58


def test_a_narrower_slot_has_no_pocket():
    cut = choose_cut(Slots(0.58), router(0.6, 0.02))
    assert cut.drawn_mm is None
    assert cut.too_narrow_by_mm == pytest.approx(0.02, abs=1e-12)
    assert cut.finished_mm == pytest.approx(0.62, abs=1e-12)


def test_a_laser_on_the_line_widens_the_slot():
    cut = choose_cut(Slots(0.4), laser("on"))
    assert (cut.drawn_mm, cut.kerf_mm, cut.centre_line) == (0.4, None, False)
    assert cut.finished_mm == pytest.approx(0.55, abs=1e-12)


def test_an_offset_laser_draws_half_the_kerf_inward_all_round_per_axis():
    cut = choose_cut(Slots(0.58), laser("offset"))
    assert cut.finished_mm == 0.58
    assert cut.drawn_mm == pytest.approx(0.43, abs=1e-12)
    square = outline_slot(cut, np.array([0.0, 25.0]), np.array([0.0, -25.0]), run="open")
    low, high = square.points_mm.min(axis=0), square.points_mm.max(axis=0)
    assert high - low == pytest.approx([0.43, 49.8], abs=1e-12)


def test_a_kerf_as_wide_as_the_slot_leaves_nothing_to_draw_inward():
    cut = choose_cut(Slots(0.3), laser("offset", (0.35, 0.35)))
    assert (cut.drawn_mm, cut.centre_line, cut.finished_mm) == (None, True, 0.35)
    assert cut.too_narrow_by_mm == pytest.approx(0.05, abs=1e-12)


def test_slots_run_past_the_edge_or_stop_short_along_themselves():
    for slots, reach in ((Slots(past_edge_mm=2.5), 2.5), (Slots(run="blind"), -1.5)):
        treble, bass = run_slot(slots, TREBLE, BASS)
        assert np.hypot(*(treble - bass)) == pytest.approx(LENGTH + 2 * reach, abs=1e-12)
        assert np.hypot(*(treble - TREBLE)) == pytest.approx(abs(reach), abs=1e-12)
        way = (TREBLE - BASS) / LENGTH
        assert (treble - TREBLE) @ way == pytest.approx(reach, abs=1e-12)


def test_an_open_pocket_is_a_rectangle():
    cut = choose_cut(Slots(0.58), router(0.4))
    pocket = outline_slot(cut, TREBLE, BASS, run="open")
    assert pocket.bulges == (0.0,) * 4
    shape = polygon(pocket)
    assert shape.exterior.is_ccw
    assert shape.area == pytest.approx(0.58 * LENGTH, abs=1e-9)
    assert shape.length == pytest.approx(2 * (0.58 + LENGTH), abs=1e-9)


def test_a_blind_pocket_has_corners_of_the_cutters_radius():
    cut = choose_cut(Slots(0.58, run="blind"), router(0.4))
    pocket = outline_slot(cut, TREBLE, BASS, run="blind")
    assert len(pocket.points_mm) == len(pocket.bulges) == 8
    shape = polygon(pocket)
    assert shape.is_valid
    assert shape.exterior.is_ccw
    # Four corners of radius r take (4 - pi) r^2 from the rectangle, (8 - 2 pi) r from its length.
    assert shape.area == pytest.approx(0.58 * LENGTH - (4 - np.pi) * 0.2**2, abs=1e-6)
    assert shape.length == pytest.approx(2 * (0.58 + LENGTH) - (8 - 2 * np.pi) * 0.2, abs=1e-5)
    assert shape.convex_hull.area == pytest.approx(shape.area, abs=1e-9)


def test_a_blind_pocket_as_wide_as_its_cutter_has_round_ends():
    cut = SlotCut(0.6, 0.6, 0.3, centre_line=True)
    pocket = outline_slot(cut, TREBLE, BASS, run="blind")
    assert pocket.bulges == (0.0, 1.0, 0.0, 1.0)
    shape = polygon(pocket)
    assert shape.area == pytest.approx(0.6 * LENGTH - (4 - np.pi) * 0.3**2, abs=1e-5)
    assert shape.convex_hull.area == pytest.approx(shape.area, abs=1e-9)
    # The ends reach as far as the slot's own ends.
    hull = shapely.LineString([BASS, TREBLE])
    assert hull.hausdorff_distance(shape.exterior) == pytest.approx(0.3, abs=1e-4)


def test_a_blind_laser_slot_has_square_corners():
    pocket = outline_slot(choose_cut(Slots(0.58), laser("on")), TREBLE, BASS, run="blind")
    assert pocket.bulges == (0.0,) * 4


@pytest.mark.parametrize("run", ["open", "blind"])
def test_outlines_repeat_no_point(run):
    for cutter in (0.3, 0.4, 0.5):
        cut = choose_cut(Slots(0.58), router(cutter))
        points = outline_slot(cut, TREBLE, BASS, run=run).points_mm
        gaps = np.hypot(*np.diff(np.concatenate((points, points[:1])), axis=0).T)
        assert gaps.min() > 0.05


@pytest.mark.parametrize("slant", [0.0, 0.2, -0.35])
def test_a_laser_offset_follows_the_slant_as_any_outline_does(slant):
    slots, tooling = Slots(0.5), Tooling("laser", kerf_mm=(0.12, 0.16), lines="offset")
    treble, bass = np.array([100 + 25 * slant, 25.0]), np.array([100 - 25 * slant, -25.0])
    nominal = outline_slot(
        choose_cut(slots, Tooling("laser", kerf_mm=(0.0, 0.0), lines="on")),
        treble,
        bass,
        run="open",
    )
    expected = offset_inward(nominal.points_mm, kerf_x_mm=0.12, kerf_y_mm=0.16)
    drawn = outline_slot(choose_cut(slots, tooling), treble, bass, run="open")
    np.testing.assert_allclose(drawn.points_mm, expected.points_mm, rtol=0, atol=1e-9)
