from dataclasses import dataclass

import numpy as np
import pytest
from scipy.integrate import quad

from layout.errors import JobError
from layout.geometry.board import BoardShape, Edge
from layout.geometry.cross import CrossLine
from layout.geometry.frets import FretLines
from layout.geometry.strings import lay_strings
from layout.geometry.surface import Surface, shape_top
from layout.instrument import ConeAtNut, LevelEdgesAtNut, OneRadius, ParallelScale, TwoRadii

SCALE_MM = 647.7
COUNT = 22
TAIL_MM = 480.0


@dataclass
class Made:
    board: BoardShape
    strings: object
    frets: FretLines

    def top(self, rule):
        return shape_top(rule, self.board, self.strings, self.frets)


@pytest.fixture
def made():
    places = SCALE_MM * (1 - 2 ** (-np.arange(1, COUNT + 1) / 12))
    nothing = np.zeros((6, COUNT))
    frets = FretLines(places, np.zeros(COUNT), nothing, nothing > 0)
    strings = lay_strings(
        ParallelScale(SCALE_MM),
        np.linspace(18.0, -18.0, 6),
        np.linspace(26.25, -26.25, 6),
        full=np.ones(6, bool),
    )
    edges = [
        Edge(np.array([[0.0, s * 21.5], [TAIL_MM, s * 28.5]]), np.array([0.0, s * 21.5]))
        for s in (1, -1)
    ]
    wood = np.concatenate((edges[0].points_mm, edges[1].points_mm[::-1]))
    ends = CrossLine(0.0), CrossLine(TAIL_MM), CrossLine(0.0)
    return Made(BoardShape(*edges, *ends, wood), strings, frets)


def test_flat(made):
    top = made.top(None)
    assert top.height_mm([0.0, 300.0], [20.0, -20.0]).tolist() == [0.0, 0.0]
    assert np.isinf(top.radius_mm(100.0))
    assert top.curve_length_mm(np.array([0.0, -30.0]), np.array([40.0, 0.0])) == 50.0


def test_one_radius_drops_the_figure_of_common_practice(made):
    top = made.top(OneRadius(305.0))
    assert float(top.height_mm(100.0, 28.0)) == pytest.approx(-1.29, abs=0.005)
    # By the definition z = sqrt(R^2 - y^2) - R.
    assert float(top.height_mm(0.0, 20.0)) == pytest.approx(np.sqrt(305**2 - 400) - 305, abs=1e-12)
    assert float(top.height_mm(0.0, 0.0)) == 0.0


def test_two_radii_are_straight_line_in_x(made):
    # Geometry page, Board: 254 at the nut and 406.4 at fret 22 give 466 at the bridge.
    top = made.top(TwoRadii(("nut", 254.0), (22, 406.4)))
    assert float(top.radius_mm(0.0)) == pytest.approx(254.0, abs=1e-12)
    assert float(top.radius_mm(made.frets.at_centre_mm[21])) == pytest.approx(406.4, abs=1e-9)
    assert float(top.radius_mm(SCALE_MM)) == pytest.approx(466.0, abs=0.5)
    assert made.top(TwoRadii((22, 406.4), ("nut", 254.0))).coefficients == pytest.approx(
        top.coefficients, abs=1e-9
    )


def test_the_cone_keeps_pace_with_the_strings(made):
    top = made.top(ConeAtNut(254.0))
    for x in (0.0, 200.0, SCALE_MM):
        spread = made.strings.y_at(0, x) - made.strings.y_at(5, x)
        assert float(top.radius_mm(x)) == pytest.approx(254.0 * spread / 36.0, abs=1e-9)
    # So strings at one share of the spread run level over it: z/R is the same all along.
    drop = [float(top.height_mm(x, made.strings.y_at(0, x)) / top.radius_mm(x)) for x in (0, 600)]
    assert drop[0] == pytest.approx(drop[1], abs=1e-14)


def test_level_edges_keep_the_drop_of_the_nut(made):
    top = made.top(LevelEdgesAtNut(305.0))
    x = np.linspace(0.0, TAIL_MM, 9)
    edge = np.array([made.board.treble.y_at(value) for value in x])
    drop = top.height_mm(x, edge)
    assert drop == pytest.approx(np.sqrt(305**2 - 21.5**2) - 305, abs=1e-9)
    assert float(top.radius_mm(0.0)) == pytest.approx(305.0, abs=1e-9)
    assert float(top.radius_mm(TAIL_MM)) > 500


def test_radii_at_the_ends_differ_between_the_rules(made):
    rules = (OneRadius(254.0), ConeAtNut(254.0), LevelEdgesAtNut(254.0))
    at_tail = [float(made.top(rule).radius_mm(TAIL_MM)) for rule in rules]
    assert len({round(radius) for radius in at_tail}) == 3


@pytest.mark.parametrize(
    "rule",
    [
        OneRadius(40.0),
        OneRadius(305.0),
        TwoRadii(("nut", 184.0), ("tail", 406.0)),
        ConeAtNut(254.0),
        LevelEdgesAtNut(254.0),
    ],
)
@pytest.mark.parametrize("slant", [0.0, 0.3])
def test_length_over_the_curve(made, rule, slant):
    top = made.top(rule)
    bass, treble = np.array([200.0 - 24 * slant, -24.0]), np.array([200.0 + 24 * slant, 24.0])
    run = treble - bass

    def height(share):
        return float(top.height_mm(*(bass + share * run)))

    def speed(share, by=1e-5):
        rise = (height(share + by) - height(share - by)) / (2 * by)
        return np.sqrt(run @ run + rise**2)

    expected, _ = quad(speed, 0, 1, epsabs=1e-10)
    assert float(top.curve_length_mm(bass, treble)) == pytest.approx(expected, abs=1e-6)


def test_length_over_one_radius_is_an_arc():
    top = Surface((305.0, 0.0, 0.0))
    bass, treble = np.array([[9.0, -28.0], [9.0, 0.0]]), np.array([[9.0, 28.0], [9.0, 28.0]])
    arc = 305.0 * np.arcsin(28.0 / 305.0)
    assert top.curve_length_mm(bass, treble) == pytest.approx([2 * arc, arc], abs=1e-9)


@pytest.mark.parametrize(
    "rule",
    [
        OneRadius(28.0),
        TwoRadii(("nut", 100.0), (12, 40.0)),
        LevelEdgesAtNut(20.0),
        LevelEdgesAtNut(21.5),
    ],
)
def test_a_radius_smaller_than_half_the_width_is_refused(made, rule):
    with pytest.raises(JobError, match="half the board's width"):
        made.top(rule)


def test_two_radii_at_one_place_are_refused(made):
    with pytest.raises(JobError, match="two places must differ"):
        made.top(TwoRadii(("nut", 254.0), (0, 305.0)))
