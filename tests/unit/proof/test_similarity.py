"""What is wrong with a whole drawing is found from its points alone."""

from __future__ import annotations

import cmath
import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from layout.drawing.shapes import Line, Outline
from layout.drawing.sheet import make_sheet
from layout.proof.edges import make_edges
from layout.proof.expected import expect_sheet
from layout.proof.plane_map import UNMOVED, PlaneMap
from layout.proof.similarity import find_similarity, move_edges

FRETS = [
    Line("CUT_SLOT", (x, -20 - x / 40), (x + 3, 22 + x / 50))
    for x in (35.3, 68.6, 100.0, 129.7, 157.7, 184.1, 209.1, 232.6, 254.8, 275.8)
]
WOOD = Outline("CUT_OUTLINE", ((0, -19), (290, -27), (295, 29), (2, 23)))
EXPECTED = expect_sheet(make_sheet("board", "Board", shapes=[WOOD, *FRETS]))


def codes(found, **options):
    options = {"anchor": 0j, "tolerance_mm": 0.01} | options
    return {problem.code for problem in find_similarity(EXPECTED, found, **options).problems}


def spoilt(a, c, b):
    return move_edges(EXPECTED.edges, PlaneMap(a, c, b))


def test_what_agrees_is_left_alone():
    assert (
        find_similarity(EXPECTED, EXPECTED.edges, anchor=0j, tolerance_mm=0.01).to_sheet == UNMOVED
    )


@settings(max_examples=60, deadline=None)
@given(
    scale=st.sampled_from([1.0, 25.4, 0.75, 0.9375, 1.0004, 3.3]),
    degrees=st.sampled_from([0.0, 90.0, 180.0, -90.0, 7.0]),
    mirrored=st.booleans(),
    x=st.floats(-500, 500),
    y=st.floats(-500, 500),
)
def test_any_move_is_undone(scale, degrees, mirrored, x, y):
    way = cmath.rect(scale, math.radians(degrees))
    found = spoilt(0, way, complex(x, y)) if mirrored else spoilt(way, 0, complex(x, y))
    whole = find_similarity(EXPECTED, found, anchor=0j, tolerance_mm=0.01)
    back = move_edges(found, whole.to_sheet)
    np.testing.assert_allclose(back.start, EXPECTED.edges.start, rtol=0, atol=0.011)
    said = {problem.code for problem in whole.problems}
    assert ("mirrored" in said) == mirrored
    assert ("scale" in said) == (scale != 1.0)


def test_a_shift_within_the_tolerance_is_none():
    assert codes(spoilt(1, 0, 0.004 + 0.003j)) == set()


def test_a_scale_about_the_anchor_is_no_shift():
    corner = -12 + 46j
    assert codes(spoilt(2.5, 0, corner - 2.5 * corner), anchor=corner) == {"scale"}


@pytest.mark.parametrize("count", [1, 2])
def test_a_few_lines_are_not_a_drawing(count):
    rows = [(complex(i, 7), complex(i + 1, 90), 0.0, 0.0, 0.0) for i in range(count)]
    assert codes(make_edges(rows)) == set()


def test_noise_is_not_a_drawing():
    rng = np.random.default_rng(8)
    points = rng.uniform(-100, 300, (60, 4))
    rows = [(complex(a, b), complex(c, d), 0.0, 0.0, 0.0) for a, b, c, d in points]
    assert codes(make_edges(rows)) == set()


def test_one_slot_in_ten_out_of_place_does_not_hide_a_scale():
    edges = spoilt(25.4, 0, 0)
    edges.start[6] += 40
    assert codes(edges) == {"scale"}
