"""DXF entities, group by group."""

from __future__ import annotations

import io
import math

import ezdxf
import numpy as np
import pytest

from layout.proof.edges import points_along
from layout.proof.read_dxf import read_dxf


def saved(draw, *, version="R2000", unit=4):
    document = ezdxf.new(version, units=unit)
    draw(document.modelspace())
    stream = io.StringIO()
    document.write(stream)
    return stream.getvalue().encode("utf-8")


def middles(reading):
    return points_along(reading.edges, np.arange(len(reading.edges)), np.array([0.5]))[:, 0]


@pytest.mark.parametrize(
    ("unit", "name", "factor"),
    [
        (0, "none", 1),
        (1, "in", 25.4),
        (2, "ft", 304.8),
        (4, "mm", 1),
        (5, "cm", 10),
        (6, "m", 1000),
    ],
)
def test_the_declared_unit_is_believed(unit, name, factor):
    reading = read_dxf(saved(lambda space: space.add_line((0, 0), (3, 4)), unit=unit))
    assert reading.unit == name
    assert reading.edges.length_mm == pytest.approx([5 * factor])


def test_an_unknown_unit_is_a_fault():
    reading = read_dxf(saved(lambda space: space.add_line((0, 0), (3, 4)), unit=18))
    assert [fault.code for fault in reading.faults] == ["unit"]


@pytest.mark.parametrize(
    ("first", "last", "turn"),
    [
        (10, 50, 40),
        (350, 20, 30),
        (90, 60, 330),
        (0, 360, 360),
        (-90, 90, 180),
    ],
)
def test_arcs_run_counter_clockwise(first, last, turn):
    reading = read_dxf(saved(lambda space: space.add_arc((3, 1), 2, first, last)))
    edges = reading.edges
    assert edges.sweep.sum() == pytest.approx(math.radians(turn))
    start = 3 + 1j + 2 * np.exp(1j * math.radians(first))
    assert edges.start[0] == pytest.approx(start)
    np.testing.assert_allclose(np.abs(middles(reading) - (3 + 1j)), 2, rtol=0, atol=1e-12)


def test_a_circle_is_two_half_turns():
    reading = read_dxf(saved(lambda space: space.add_circle((3, 1), 2)))
    assert reading.closed.all()
    assert reading.edges.length_mm.sum() == pytest.approx(4 * math.pi)


@pytest.mark.parametrize("version", ["R12", "R2000"])
def test_polylines_keep_bulges_and_closing(version):
    points = [(0, 0, 0.0), (4, 0, 1.0), (4, 2, 0.0), (0, 2, -0.4)]

    def draw(space):
        if version == "R12":
            space.add_polyline2d(points, format="xyb", close=True)
        else:
            space.add_lwpolyline(points, format="xyb", close=True)

    reading = read_dxf(saved(draw, version=version))
    assert reading.closed.all()
    assert reading.edges.bulge.tolist() == [0, 1, 0, -0.4]
    assert middles(reading)[1] == pytest.approx(5 + 1j)


def test_a_bulge_beyond_half_a_turn_is_two_edges():
    reading = read_dxf(
        saved(lambda space: space.add_lwpolyline([(0, 0, 2.0), (2, 0, 0)], format="xyb"))
    )
    assert len(reading.edges) == 2
    assert reading.edges.sweep.sum() == pytest.approx(4 * math.atan(2.0))
    # The sagitta is half the chord times the bulge: 2 mm below.
    assert reading.edges.end[0] == pytest.approx(1 - 2j)


def test_floors_keep_their_heights():
    points = [(0, 0, -1.5), (0, 20, -1.9), (0, 40, -1.5)]
    reading = read_dxf(saved(lambda space: space.add_polyline3d(points)))
    assert reading.edges.low.tolist() == [-1.5, -1.9]
    assert reading.edges.high.tolist() == [-1.9, -1.5]


def test_arcs_seen_from_below_are_turned_over():
    down = {"extrusion": (0, 0, -1)}
    reading = read_dxf(saved(lambda space: space.add_arc((-3, 1), 2, 0, 90, dxfattribs=down)))
    # From 0 to 90 degrees about (-3, 1) in its own frame: from 180 to 90 about (3, 1) from above.
    assert reading.edges.start[0] == pytest.approx(1 + 1j)
    assert reading.edges.end[0] == pytest.approx(3 + 3j)
    assert reading.edges.sweep[0] == pytest.approx(-math.pi / 2)


def test_text_is_left_out_with_a_note():
    reading = read_dxf(saved(lambda space: space.add_text("fret 1")))
    assert reading.faults == ()
    assert "1 TEXT left out" in reading.notes[0].text


def test_line_ends_of_other_systems_are_read():
    content = saved(lambda space: space.add_line((0, 0), (3, 4)))
    for end in (b"\r\n", b"\r"):
        assert len(read_dxf(content.replace(b"\n", end)).edges) == 1


def test_a_vertex_count_that_is_wrong_is_a_fault():
    content = saved(lambda space: space.add_lwpolyline([(0, 0), (1, 0), (2, 1)]))
    spoilt = content.replace(b"\n 90\n3\n", b"\n 90\n4\n")
    assert spoilt != content
    assert "4 vertices are announced, 3 are there" in read_dxf(spoilt).faults[0].text


def test_a_missing_coordinate_is_a_fault():
    content = b"0\nSECTION\n2\nENTITIES\n0\nLINE\n8\n0\n10\n1\n20\n2\n11\n3\n0\nENDSEC\n0\nEOF\n"
    reading = read_dxf(content)
    assert reading.faults[0].text == "LINE at line 5: group 21 is missing"


@pytest.mark.parametrize("hide", ["off", "freeze"])
def test_a_hidden_layer_is_noted(hide):
    document = ezdxf.new("R2000", units=4)
    getattr(document.layers.add("CUT_SLOT"), hide)()
    document.modelspace().add_line((0, 0), (3, 4), {"layer": "CUT_SLOT"})
    stream = io.StringIO()
    document.write(stream)
    reading = read_dxf(stream.getvalue().encode())
    assert [note.text for note in reading.notes] == ["layer CUT_SLOT is switched off in the file"]
