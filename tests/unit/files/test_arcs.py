"""Arcs spelt out as pieces and as chords."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from layout.drawing.shapes import (
    Arc,
    Circle,
    Lettering,
    Line,
    Outline,
    Piece,
    Polyline3D,
    point_along,
    turn_of,
)
from layout.drawing.sheet import make_sheet
from layout.files.arcs import CHORD_MM, LARGEST_RADIUS_MM, spell_arcs

PLAIN = [
    Line("CUT_SLOT", (0.0, 0.0), (1.0, 2.0)),
    Circle("DRILL_PIN", (0.0, 0.0), 1.5),
    Outline("CUT_OUTLINE", ((0.0, 0.0), (4.0, 0.0), (4.0, 3.0))),
    Polyline3D("CUT_FLOOR", ((0.0, 0.0, -1.0), (4.0, 0.0, -2.0))),
]


@pytest.mark.parametrize("arcs", ["bulge", "pieces", "chords"])
@pytest.mark.parametrize("shape", PLAIN)
def test_what_is_straight_or_a_hole_stays(shape, arcs) -> None:
    assert spell_arcs(shape, arcs) == [shape]


def test_lettering_comes_as_strokes() -> None:
    (text,) = make_sheet("a", "A", shapes=[Lettering("ENGRAVE_LABEL", "8x", (0, 0))]).shapes
    assert spell_arcs(text, "pieces") == list(text.strokes)


def test_an_open_outline_stays_open() -> None:
    chain = Outline("CUT_OUTLINE", ((0.0, 0.0), (4.0, 0.0), (4.0, 3.0)), (0.5, 0.0, 0.7), False)
    arc, line = spell_arcs(chain, "pieces")
    assert isinstance(arc, Arc)
    assert line == Line("CUT_OUTLINE", (4.0, 0.0), (4.0, 3.0))
    (chords,) = spell_arcs(chain, "chords")
    assert chords.vertices[0] == (0.0, 0.0)
    assert chords.vertices[-2:] == ((4.0, 0.0), (4.0, 3.0))
    assert not chords.closed


def test_arcs_run_counter_clockwise_whatever_the_bulge() -> None:
    for bulge, middle in ((1.0, -1.0), (-1.0, 1.0)):
        outline = Outline("CUT_OUTLINE", ((0.0, 0.0), (2.0, 0.0)), (bulge, 0.0), closed=False)
        (arc,) = spell_arcs(outline, "pieces")
        half = (arc.start_angle + arc.end_angle) / 2
        assert arc.sweep == pytest.approx(math.pi, abs=1e-15)
        assert arc.centre[1] + math.sin(half) == pytest.approx(middle, abs=1e-15)


def test_an_arc_becomes_a_chain_of_chords() -> None:
    arc = Arc("SCRIBE_STOP", (1.0, 2.0), 10.0, 0.5, 2.0)
    assert spell_arcs(arc, "pieces") == [arc]
    (chain,) = spell_arcs(arc, "chords")
    assert not chain.closed
    off = [abs(math.dist(vertex, arc.centre) - 10) for vertex in chain.vertices]
    assert max(off) < 1e-6
    # 0.002 mm of a radius of 10 mm: chords turn through 4 asin(sqrt(0.002 / 20)) = 0.04 rad.
    assert len(chain.vertices) - 1 == pytest.approx(1.5 / 0.04, abs=1)


def test_an_arc_flatter_than_an_arc_can_close_becomes_fine_chords() -> None:
    for radius, kind in ((0.99 * LARGEST_RADIUS_MM, Arc), (1.01 * LARGEST_RADIUS_MM, Line)):
        bulge = math.tan(math.asin(300 / radius) / 2)
        outline = Outline("CUT_OUTLINE", ((0.0, 0.0), (600.0, 0.0)), (bulge, 0.0), closed=False)
        pieces = spell_arcs(outline, "pieces")
        assert {type(piece) for piece in pieces} == {kind}
    assert pieces[0].start == (0.0, 0.0)
    assert pieces[-1].end == (600.0, 0.0)
    centre = (300.0, math.sqrt(radius**2 - 300**2))
    for piece in pieces:
        middle = ((piece.start[0] + piece.end[0]) / 2, (piece.start[1] + piece.end[1]) / 2)
        for point in (piece.start, middle, piece.end):
            assert abs(math.dist(point, centre) - radius) < 1e-6
    assert 500 < len(pieces) < 1200


def test_a_lens_thinner_than_the_tolerance_does_not_collapse() -> None:
    lens = Outline("CUT_OUTLINE", ((0.0, 0.0), (4.0, 0.0)), (0.0004, 0.0004))
    (chords,) = spell_arcs(lens, "chords")
    assert chords.vertices == ((0.0, 0.0), (2.0, -0.0008), (4.0, 0.0), (2.0, 0.0008))


spans = st.floats(-500, 500).map(lambda x: round(x, 6))


@given(spans, spans, spans, spans, st.floats(-4, 4))
def test_chords_stay_within_two_thousandths(x0, y0, x1, y1, bulge) -> None:
    piece = Piece((x0, y0), (x1, y1), round(bulge, 12))
    if math.dist(piece.start, piece.end) < 1e-3 or piece.bulge == 0:
        return
    outline = Outline("CUT_OUTLINE", piece[:2], (piece.bulge, 0.0), closed=False)
    (chords,) = spell_arcs(outline, "chords")
    points = np.array(chords.vertices)
    assert chords.vertices[0] == piece.start
    assert chords.vertices[-1] == piece.end
    assert np.hypot(*np.diff(points, axis=0).T).min() > 0
    centre, radius_mm, _, _ = turn_of(piece)
    rounded = 1e-6 + radius_mm * 1e-14
    assert np.abs(np.hypot(*(points - centre).T) - radius_mm).max() < rounded
    middles = (points[1:] + points[:-1]) / 2
    bow = np.abs(np.hypot(*(middles - centre).T) - radius_mm)
    assert bow.max() < CHORD_MM + rounded
    # The chords go the arc's own way round.
    half = point_along(piece, 0.5)
    assert np.hypot(*(np.vstack([points, middles]) - half).T).min() < (
        math.dist(piece.start, piece.end) * (1 + piece.bulge**2)
    )
