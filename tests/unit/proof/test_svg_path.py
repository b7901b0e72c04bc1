"""Path data, against a library for paths."""

from __future__ import annotations

import random

import numpy as np
import pytest
import svgpathtools

from layout.proof.edges import find_feet
from layout.proof.plane_map import UNMOVED
from layout.proof.reading import Pen
from layout.proof.svg_path import BadPathError, follow_path


def read(text):
    pen = Pen()
    follow_path(text, UNMOVED, pen, layer="0")
    return pen.finish(unit="mm")


def farthest(text):
    """How far points of the library's path lie from ours, and how the lengths compare."""
    theirs = svgpathtools.parse_path(text)
    points = np.array(
        [piece.point(share) for piece in theirs for share in np.linspace(0, 1, 33)]
    ).conj()
    edges = read(text).edges
    every = np.arange(len(edges))
    distance = find_feet(np.broadcast_to(points, (len(edges), len(points))), edges, every)
    return distance.distance_mm.min(axis=0).max(), edges.length_mm.sum() / theirs.length(error=1e-5)


@pytest.mark.parametrize(
    "text",
    [
        "M 1 2 L 3 4 H 9 V -2 Z",
        "m 1 2 l 3 4 h 9 v -2 z",
        "M1,2 3,4 5-6.5.5 1e1",
        "M 0 0 l 5 0 z m 10 10 l 5 5 l 0 -5 z",
        "M 0 0 C 10 0 10 10 20 10 S 30 20 40 0",
        "m 5 5 c 10 0 10 10 20 10 s 10 10 20 -10",
        "M 0 0 Q 10 20 20 0 T 40 0 t 20 0",
        "M 0 0 L 5 5 T 20 0",
        "M 10 10 A 5 5 0 0 1 15 15",
        "M 10 10 A 5 5 0 1 1 15 15",
        "M 10 10 A 5 5 0 1 0 15 15",
        "M 10 10 A 5 5 0 0 0 15 15",
        "M 10 10 a 8 3 30 1 1 5 5",
        "M 10 10 a 8 3 -70 0 0 5 5",
        "M 10 10 A 1 1 0 0 1 30 10",
        "M 10 10 A 1 2 45 0 0 30 10",
    ],
)
def test_a_path_runs_where_the_library_says(text):
    distance, ratio = farthest(text)
    assert distance < 6e-4
    assert ratio == pytest.approx(1, rel=2e-4)


def test_random_arcs_run_where_the_library_says():
    rng = random.Random(5)
    for _ in range(60):
        numbers = [round(rng.uniform(-40, 40), 3) for _ in range(4)]
        radii = [round(rng.uniform(0.5, 60), 3) for _ in range(2)]
        if rng.random() < 0.5:
            radii[1] = radii[0]
        flags = rng.choice(["0 0", "0 1", "1 0", "1 1"])
        tilt = rng.choice([0, 17, -123])
        text = f"M {numbers[0]} {numbers[1]} A {radii[0]} {radii[1]} {tilt} {flags} "
        text += f"{numbers[2]} {numbers[3]}"
        distance, ratio = farthest(text)
        assert distance < 6e-4, text
        assert ratio == pytest.approx(1, rel=2e-4), text


def test_flags_need_no_blanks():
    one, two = read("M0 0a5 5 0 0110 0"), read("M 0 0 a 5 5 0 0 1 10 0")
    np.testing.assert_array_equal(one.edges.bulge, two.edges.bulge)
    np.testing.assert_array_equal(one.edges.end, two.edges.end)


def test_closing_where_a_path_began_draws_nothing():
    reading = read("M 0 0 L 5 0 L 5 5 L 0 0 Z")
    assert len(reading.edges) == 3
    assert reading.closed.all()
    assert reading.faults == ()


@pytest.mark.parametrize(
    "text",
    [
        "L 1 1",
        "M 1",
        "M 1 1 L",
        "M 1 1 Z 4",
        "M 1 1 A 5 5 0 2 0 3 3",
        "M 1 1 X 3",
        "M 1 1 L 1,,a",
    ],
)
def test_what_is_no_path_is_refused(text):
    with pytest.raises(BadPathError):
        read(text)
