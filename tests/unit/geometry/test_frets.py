import numpy as np
import pytest

from layout.geometry.frets import divide_mm, lay_frets, vote_weights
from layout.geometry.spread import spread_strings
from layout.geometry.strings import lay_strings
from layout.instrument import MultiScale, ParallelScale, SpreadRule, StringSpec

EQUAL = 100.0 * np.arange(1, 25)
ALONE = np.arange(6)
GAUGES_MM = (0.254, 0.33, 0.4318, 0.6604, 0.9144, 1.1684)


def board(scale=None, *, rule="centres"):
    scale = scale or ParallelScale(628.65)
    made = [StringSpec(gauge_mm=gauge) for gauge in GAUGES_MM]
    nut, bridge = spread_strings(SpreadRule(36.0, 52.5, rule), made)
    q = 1 - 2 ** (-7 / 12)
    return lay_strings(scale, nut, bridge, full=np.ones(6, bool), square_fraction=(q, q))


def lay(strings, cents, *, slant="square", course=ALONE, served=None):
    cents = np.broadcast_to(cents, (len(strings.scale_mm), np.shape(cents)[-1]))
    served = np.ones(cents.shape, bool) if served is None else served
    own = divide_mm(strings.scale_mm, cents)
    frets = lay_frets(
        strings,
        own,
        votes=vote_weights(served, course),
        served=served,
        free=np.full(cents.shape[1], slant == "free"),
    )
    return own, frets


def test_divided_places():
    # Of 650 mm: a semitone by hand, 650 (1 - 0.9438743127), a pure fifth at a third, octaves.
    places = divide_mm(np.array([650.0]), np.array([[100.0, 1200.0, 1200 * np.log2(1.5), 2400.0]]))
    assert places[0] == pytest.approx([36.481697, 325.0, 650 / 3, 487.5], abs=5e-7)


def test_one_vote_a_course():
    served = np.array([[True, True], [True, False], [True, True]])
    votes = vote_weights(served, np.array([0, 0, 1]))
    assert votes.tolist() == [[0.5, 1.0], [0.5, 0.0], [1.0, 1.0]]


@pytest.mark.parametrize("slant", ["square", "free"])
def test_lines_pass_through_collinear_stops_on_parallel_boards(slant):
    own, frets = lay(board(), EQUAL, slant=slant)
    assert frets.met_mm == pytest.approx(own, abs=1e-9)
    assert np.abs(frets.slope).max() < 1e-11


@pytest.mark.parametrize("scale", [MultiScale(647.7, 685.8, 7.0), MultiScale(700.0, 600.0, 7.0)])
def test_lines_pass_through_collinear_stops_on_multi_scale_boards(scale):
    own, frets = lay(board(scale), EQUAL, slant="free")
    assert frets.met_mm == pytest.approx(own, abs=1e-9)
    assert abs(frets.slope[6]) < 1e-11
    assert np.abs(frets.slope[11]) > 0.1


def test_equal_gaps_leave_a_little_on_multi_scale_boards():
    # Geometry page, Stops and frets: up to 0.15 mm whenever gaps are equal at either end.
    own, frets = lay(board(MultiScale(647.7, 685.8, 7.0), rule="gaps"), EQUAL, slant="free")
    left = np.abs(frets.met_mm - own).max()
    assert 0.01 < left < 0.15
    exact, parallel = lay(board(rule="gaps"), EQUAL)
    assert parallel.met_mm == pytest.approx(exact, abs=1e-9)


def test_a_square_fret_takes_the_mean_of_the_cents():
    # Parallel strings are all met in one ratio, so least squares in cents is the mean of them.
    cents = np.array([[100.0], [100.0], [141.0], [100.0], [141.0], [100.0]])
    strings = board()
    _, frets = lay(strings, cents)
    assert frets.at_centre_mm[0] == pytest.approx(
        628.65 * (1 - 2 ** (-cents.mean() / 1200)), abs=1e-9
    )
    assert frets.slope[0] == 0.0


def test_a_course_has_one_vote_between_its_strings():
    cents = np.array([[100.0], [140.0], [140.0], [140.0], [140.0], [140.0]])
    _, frets = lay(board(), cents, course=np.array([0, 1, 1, 1, 1, 1]))
    assert frets.at_centre_mm[0] == pytest.approx(628.65 * (1 - 2 ** (-120 / 1200)), abs=1e-9)


def test_free_slant_is_never_worse_than_square():
    rng = np.random.default_rng(3)
    cents = 700 + rng.uniform(-20, 20, (6, 5))
    strings = board()

    def total(slant):
        own, frets = lay(strings, cents, slant=slant)
        scale = strings.scale_mm[:, None]
        return (np.log((scale - own) / (scale - frets.met_mm)) ** 2).sum(axis=0)

    assert (total("free") < total("square")).all()


@pytest.mark.parametrize("slant", ["square", "free"])
def test_a_fret_under_one_string_lies_parallel_to_the_nut_line(slant):
    strings = board(MultiScale(647.7, 685.8, 7.0))
    served = np.zeros((6, 24), bool)
    served[2] = True
    own, frets = lay(strings, EQUAL, slant=slant, served=served)
    assert frets.slope == pytest.approx(strings.nut_line.slope, abs=1e-15)
    assert frets.met_mm[2] == pytest.approx(own[2], abs=1e-9)
    assert np.isnan(frets.met_mm[[0, 1, 3, 4, 5]]).all()


def test_a_fret_under_one_course_passes_through_both_its_stops():
    strings = board(MultiScale(647.7, 685.8, 7.0))
    served = np.zeros((6, 24), bool)
    served[2:4] = True
    own, frets = lay(
        strings, EQUAL, slant="free", served=served, course=np.array([0, 1, 2, 2, 3, 4])
    )
    assert frets.met_mm[2:4] == pytest.approx(own[2:4], abs=1e-9)


def test_points_of_a_fret_lie_on_its_line():
    strings = board(MultiScale(647.7, 685.8, 7.0), rule="gaps")
    _, frets = lay(strings, EQUAL, slant="free")
    points = strings.points(frets.met_mm)
    for fret in range(24):
        on_line = frets.line(fret + 1).x_at(points[:, fret, 1])
        assert points[:, fret, 0] == pytest.approx(on_line, abs=1e-9)
