"""Edges are matched by place: what covers, what strays, what is drawn twice."""

from __future__ import annotations

import cmath
import math
from itertools import pairwise

import numpy as np
import pytest

from layout.drawing.shapes import Arc, Circle, Line, Outline, Polyline3D
from layout.drawing.sheet import make_sheet
from layout.files.dxf import render_dxf
from layout.files.svg import render_svg
from layout.proof.edges import find_feet, make_edges, points_along
from layout.proof.matching import match_edges
from layout.proof.prove import prove_files


def line(start, end, low=0.0, high=0.0):
    return (complex(start), complex(end), 0.0, low, high)


def match(planned, found, **options):
    return match_edges(make_edges(planned), make_edges(found), tolerance_mm=0.01, **options)


def test_a_gap_in_a_line_is_measured_from_its_middle():
    answer = match([line(0, 50)], [line(0, 20), line(20.6, 50)])
    assert answer.deviation_mm[0] == pytest.approx(0.3)
    assert answer.uncovered_mm[0] == 0


def test_a_wide_gap_is_uncovered():
    answer = match([line(0, 50)], [line(0, 20), line(30, 50)])
    assert answer.uncovered_mm[0] == pytest.approx(10)


def test_a_longer_line_strays_by_what_it_is_longer():
    assert match([line(0, 50)], [line(0, 50.4)]).deviation_mm[0] == pytest.approx(0.4)
    assert match([line(0, 50)], [line(0, 60)]).stray_mm[0] == pytest.approx(10)


def test_one_line_may_serve_several():
    answer = match([line(0, 20), line(20, 50), line(60, 80)], [line(0, 50), line(80, 60)])
    assert answer.deviation_mm.tolist() == [0, 0, 0]
    assert answer.stray_mm.tolist() == [0, 0]


def test_the_nearer_of_two_neighbours_is_served():
    planned = [line(0, 40j), line(0.58, 0.58 + 40j)]
    answer = match(planned, [line(0.55, 0.55 + 40j)])
    assert answer.served.tolist() == [False, True]
    assert answer.deviation_mm[1] == pytest.approx(0.03)


def test_overlap_counts_as_drawn_twice():
    answer = match([line(0, 50)], [line(0, 30), line(20, 50)])
    assert answer.doubled_mm.sum() == pytest.approx(10)
    assert answer.deviation_mm[0] < 1e-12


def test_heights_count_in_space_only():
    planned, found = [line(0, 40j, -2, -1.5)], [line(0, 40j, -2, -1.7)]
    assert match(planned, found).deviation_mm[0] == pytest.approx(0.2)
    assert match(planned, found, in_space=False).deviation_mm[0] == 0


@pytest.mark.parametrize("count", [3, 8, 40])
def test_chords_of_an_arc_stray_by_their_sagitta(count):
    turn = math.pi / 2
    corners = [cmath.rect(10, turn * place / count) for place in range(count + 1)]
    chords = [line(*ends) for ends in pairwise(corners)]
    answer = match([(10 + 0j, 10j, math.tan(turn / 4), 0.0, 0.0)], chords)
    sagitta = 10 * (1 - math.cos(turn / count / 2))
    assert answer.deviation_mm[0] == pytest.approx(sagitta, rel=1e-6)
    assert answer.uncovered_mm[0] == 0


def test_points_and_feet_agree_on_random_edges():
    rng = np.random.default_rng(4)
    count = 200
    rows = [
        (complex(*rng.uniform(-50, 50, 2)), complex(*rng.uniform(-50, 50, 2)), bulge, 0.0, 0.0)
        for bulge in rng.choice([0.0, 1e-6, -0.3, 0.9, -1.0, 1.0], count)
    ]
    edges = make_edges(rows)
    every = np.arange(count)
    shares = rng.uniform(0, 1, (count, 5))
    points = points_along(edges, every, shares)
    feet = find_feet(points, edges, every)
    np.testing.assert_allclose(feet.distance_mm, 0, rtol=0, atol=1e-8)
    np.testing.assert_allclose(feet.share, shares, rtol=0, atol=1e-7)


SHAPES = [
    Outline("CUT_OUTLINE", ((0, 0), (90, 0), (90, 30), (0, 30)), (0.2, 0.0, -0.3, 0.0)),
    Circle("DRILL_PIN", (10, 15), 1.5),
    Circle("DRILL_MARK", (80, 15), 3),
    Arc("SCRIBE_STOP", (45, -40), 60, 1.4, 1.9),
    Line("CUT_SLOT", (30, 3), (31, 27)),
]


def test_holes_and_arcs_prove_in_every_format():
    sheet = make_sheet("gauges", "Gauges", shapes=SHAPES)
    files = {"gauges.dxf": render_dxf(sheet), "gauges.svg": render_svg(sheet)}
    report = prove_files({"gauges": sheet}, files)
    assert report.complete
    assert report.files[0].largest_mm < 1e-9
    assert report.files[1].largest_mm < 2e-4


@pytest.mark.parametrize(
    ("old", "new", "code"),
    [
        (SHAPES[1], Circle("DRILL_PIN", (10, 15), 1.55), "deviation"),
        (SHAPES[1], Circle("DRILL_PIN", (10.1, 15), 1.5), "deviation"),
        (SHAPES[2], Arc("DRILL_MARK", (80, 15), 3, 0.0, 5.0), "missing"),
        (SHAPES[3], Arc("SCRIBE_STOP", (45, -40), 60, 1.4, 1.8), "missing"),
        (SHAPES[3], Arc("SCRIBE_STOP", (45, -40), 60.2, 1.4, 1.9), "deviation"),
        (SHAPES[0], Outline("CUT_OUTLINE", SHAPES[0].vertices, (0.2, 0.0, 0.3, 0.0)), "extra"),
    ],
)
def test_a_spoilt_hole_or_arc_fails(old, new, code):
    sheet = make_sheet("gauges", "Gauges", shapes=SHAPES)
    spoilt = make_sheet("g", "G", shapes=[new if shape is old else shape for shape in SHAPES])
    for name, render in (("gauges.dxf", render_dxf), ("gauges.svg", render_svg)):
        if name.endswith("svg") and spoilt.extents != sheet.extents:
            continue  # another extent is another page
        report = prove_files({"gauges": sheet}, {name: render(spoilt)})
        assert code in {problem.code for problem in report.files[0].problems}, name


def test_slot_floors_prove_with_their_heights():
    floors = [
        Polyline3D("CUT_FLOOR", ((x, -25.0, -2.5), (x, 0.0, -2.1), (x + 1, 25.0, -2.5)))
        for x in (35.0, 68.0, 99.0)
    ]
    sheet = make_sheet("floors", "Floors", shapes=floors)
    assert prove_files({"floors": sheet}, {"floors.dxf": render_dxf(sheet)}).complete
    raised = [
        *floors[:2],
        Polyline3D("CUT_FLOOR", ((99.0, -25.0, -2.5), (99.0, 0.0, -2.0), (100.0, 25.0, -2.5))),
    ]
    spoilt = render_dxf(make_sheet("floors", "Floors", shapes=raised))
    report = prove_files({"floors": sheet}, {"floors.dxf": spoilt})
    (problem,) = report.files[0].problems
    assert problem.code == "deviation"
    assert problem.amount == pytest.approx(0.1)


def test_two_parts_that_share_an_edge_prove():
    left = Outline("CUT_OUTLINE", ((0, 0), (50, 0), (50, 20), (0, 20)))
    right = Outline("CUT_OUTLINE", ((50, 0), (90, 0), (90, 20), (50, 20)))
    sheet = make_sheet("parts", "Parts", shapes=[left, right])
    assert prove_files({"parts": sheet}, {"parts.dxf": render_dxf(sheet)}).complete
