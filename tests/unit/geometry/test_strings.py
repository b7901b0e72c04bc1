import numpy as np
import pytest

from layout.errors import JobError
from layout.geometry.cross import CrossLine
from layout.geometry.strings import end_open, lay_strings, start_at
from layout.instrument import MultiScale, ParallelScale

NUT_Y = np.linspace(18.0, -18.0, 6)
BRIDGE_Y = np.linspace(26.25, -26.25, 6)
FULL = np.ones(6, bool)


def fraction(fret):
    return 1 - 2 ** (-fret / 12)


def fan(square_at=7.0, *, at=None, treble=647.7, bass=685.8):
    at = fraction(square_at) if at is None else at
    return lay_strings(
        MultiScale(treble, bass, square_at),
        NUT_Y,
        BRIDGE_Y,
        full=FULL,
        square_fraction=(at, at),
    )


def test_parallel_lines_are_square_and_splayed_strings_a_little_longer():
    lines = lay_strings(ParallelScale(628.65), NUT_Y, BRIDGE_Y, full=FULL)
    assert (lines.nut_line, lines.bridge_line) == (CrossLine(0.0), CrossLine(628.65))
    assert lines.scale_mm == pytest.approx(np.hypot(628.65, BRIDGE_Y - NUT_Y), abs=1e-12)
    assert lines.scale_mm.argmin() in (2, 3)
    assert np.hypot(*lines.direction.T) == pytest.approx(1.0, abs=1e-15)


def test_multi_scale_figures():
    # Geometry page, Lines: the example, to 0.001 mm.
    lines = fan()
    assert lines.nut_mm[[0, -1], 0] == pytest.approx([6.336, -6.336], abs=5e-4)
    assert lines.bridge_mm[[0, -1], 0] == pytest.approx([653.984, 679.414], abs=5e-4)
    assert lines.scale_mm[[0, -1]] == pytest.approx([647.7, 685.8], abs=1e-9)
    met = lines.points(np.outer(lines.scale_mm, [fraction(7), fraction(12)]))
    assert met[:, 0, 0] == pytest.approx(221.731, abs=5e-4)
    assert met[[0, -1], 1, 0] == pytest.approx([330.160, 336.539], abs=5e-4)


def test_inner_strings_go_to_the_lines_of_the_outer_ones():
    lines = fan()
    assert lines.nut_mm[:, 0] == pytest.approx(lines.nut_line.x_at(NUT_Y), abs=1e-12)
    assert lines.bridge_mm[:, 0] == pytest.approx(lines.bridge_line.x_at(BRIDGE_Y), abs=1e-9)
    assert lines.nut_line.at_centre_mm == 0.0


@pytest.mark.parametrize(
    ("square_at", "at"), [("nut", 0.0), ("bridge", 1.0), (7.0, None), (8.5, None), (24.0, None)]
)
def test_the_square_fret_is_square(square_at, at):
    at = fraction(square_at) if at is None else at
    lines = fan(square_at, at=at)
    met = lines.points(lines.scale_mm[:, None] * at)[:, 0, 0]
    assert np.ptp(met) < 1e-9


def test_fractions_may_differ_from_string_to_string():
    lines = lay_strings(
        MultiScale(647.7, 685.8, 7.0), NUT_Y, BRIDGE_Y, full=FULL, square_fraction=(0.33, 0.34)
    )
    met = lines.points(lines.scale_mm[:, None] * np.array([[0.33]] * 5 + [[0.34]]))
    assert met[0, 0, 0] == pytest.approx(met[-1, 0, 0], abs=1e-9)


def test_a_longer_treble_leans_the_other_way():
    assert fan(treble=685.8, bass=647.7).nut_line.slope < 0 < fan().nut_line.slope


def test_only_strings_that_reach_the_nut_are_the_outer_ones():
    full = np.array([False, True, True, True, True, False])
    lines = lay_strings(
        MultiScale(600.0, 620.0, 0.0), NUT_Y, BRIDGE_Y, full=full, square_fraction=(0.0, 0.0)
    )
    assert lines.scale_mm[[1, 4]] == pytest.approx([600.0, 620.0], abs=1e-9)


def test_impossible_fans():
    with pytest.raises(JobError, match="shorter than its own splay"):
        fan(treble=5.0)
    with pytest.raises(JobError, match="two strings that reach the nut"):
        lay_strings(
            MultiScale(600.0, 620.0, "nut"), np.zeros(1), np.zeros(1), full=np.ones(1, bool)
        )


@pytest.mark.parametrize("slope", [0.0, 0.08])
@pytest.mark.parametrize("behind", [0.0, 4.0])
def test_a_short_string_starts_on_its_fret(slope, behind):
    fret = CrossLine(170.0, slope)
    lines = lay_strings(ParallelScale(666.75), NUT_Y, BRIDGE_Y, full=FULL)
    short = start_at(lines, 5, fret, behind_mm=behind, y_mm=None)
    assert fret.x_at(short.nut_mm[5, 1]) == pytest.approx(short.nut_mm[5, 0], abs=1e-9)
    assert short.direction[5] == pytest.approx(lines.direction[5], abs=1e-12)  # the lane it had
    assert short.scale_mm[5] == pytest.approx(
        np.hypot(*(lines.bridge_mm[5] - short.nut_mm[5])), abs=1e-9
    )
    assert short.scale_mm[:5] == pytest.approx(lines.scale_mm[:5], abs=1e-12)


@pytest.mark.parametrize("slope", [0.0, 0.08])
@pytest.mark.parametrize("behind", [0.0, 6.0])
def test_the_y_listed_for_a_short_string_is_at_its_own_nut(slope, behind):
    fret = CrossLine(170.0, slope)
    lines = lay_strings(ParallelScale(666.75), NUT_Y, BRIDGE_Y, full=FULL)
    short = start_at(lines, 5, fret, behind_mm=behind, y_mm=-22.0)
    own_nut = short.nut_mm[5] - behind * short.direction[5]
    assert own_nut[1] == pytest.approx(-22.0, abs=1e-10)
    assert fret.x_at(short.nut_mm[5, 1]) == pytest.approx(short.nut_mm[5, 0], abs=1e-10)


def test_an_open_string_has_its_own_length_and_ends_at_the_bridge():
    lines = lay_strings(ParallelScale(600.0), NUT_Y, BRIDGE_Y, full=FULL)
    opened = end_open(lines, 5, 900.0)
    assert opened.scale_mm[5] == 900.0
    assert np.hypot(*(opened.bridge_mm[5] - opened.nut_mm[5])) == pytest.approx(900.0, abs=1e-9)
    assert opened.bridge_mm[5].tolist() == lines.bridge_mm[5].tolist()
    assert opened.nut_mm[5, 0] < -290


def test_a_lane_goes_on_beyond_its_ends():
    lines = lay_strings(ParallelScale(600.0), NUT_Y, BRIDGE_Y, full=FULL)
    assert lines.y_at(0, 0.0) == 18.0
    assert lines.y_at(0, 1200.0) == pytest.approx(18.0 + 2 * 8.25, abs=1e-12)
