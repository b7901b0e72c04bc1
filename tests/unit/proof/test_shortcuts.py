"""Chains that readers take at once are the chains they would follow step by step."""

from __future__ import annotations

import numpy as np
import pytest

from layout.proof.plane_map import PlaneMap
from layout.proof.read_dxf import read_dxf
from layout.proof.read_pdf import _Walk as PageWalk
from layout.proof.reading import Pen
from layout.proof.svg_path import _draw_plain, _Walk

SKEWED = PlaneMap(2 + 1j, 0.3, 5 - 2j)


def same(one, other):
    assert one.layers == other.layers
    for name in ("start", "end", "bulge", "low", "high"):
        mine, theirs = getattr(one.edges, name), getattr(other.edges, name)
        np.testing.assert_allclose(mine, theirs, rtol=0, atol=1e-12)
    assert one.closed.tolist() == other.closed.tolist()
    assert one.contour.tolist() == other.contour.tolist()
    codes = [[problem.code for problem in reading.faults] for reading in (one, other)]
    assert codes[0] == codes[1]


@pytest.mark.parametrize(
    "text",
    [
        "M 1 2 L 3 4",
        "M1 2L3 4L5,6Z",
        " M 0 0 L 9 0 L 9 9 L 0 0 Z M -1.5 2 L 8 8 ",
        "M 0 0 L 0 0",
        "M 1 2 Z M 3 3 L 4 4",
        "M 1 2",
    ],
)
def test_paths(text):
    at_once, step_by_step = Pen(), Pen()
    assert _draw_plain(text, SKEWED, at_once, layer="a")
    _Walk(SKEWED, step_by_step, "a").follow(text)
    same(at_once.finish(unit="mm"), step_by_step.finish(unit="mm"))


@pytest.mark.parametrize(
    "text",
    ["", "M 1 2 3 4", "M 1 2 l 3 4", "M 1 2 L 3", "M 1 2 L 1e3 4", "M 1-2 L 3 4", "L 1 2",
     "M 1 2 L 3 nan", "M 1 2 L 3 4 Z L 5 6", "M 1 2 L 1_0 4", "M . 2 L 3 4"],
)  # fmt: skip
def test_other_paths_are_followed_step_by_step(text):
    assert not _draw_plain(text, SKEWED, Pen(), layer="a")


def polyline(*, flags="0", count=3, more="", last="7"):
    text = (
        f"0|SECTION|2|ENTITIES|0|LWPOLYLINE|8|saw|90|{count}|70|{flags}|{more}"
        f"10|1|20|2|10|4|20|6|10|9|20|{last}|0|ENDSEC|0|EOF|"
    )
    return read_dxf(text.replace("|", "\n").encode())


@pytest.mark.parametrize("flags", ["0", "1"])
def test_polylines(flags):
    """A width that every other program writes makes the reader go step by step."""
    same(polyline(flags=flags), polyline(flags=flags, more="43|0.0|"))


@pytest.mark.parametrize("last", ["nan", "inf", "1e400", "1_0", "x", ""])
def test_bad_numbers_of_polylines_are_named(last):
    reading = polyline(last=last)
    assert [fault.code for fault in reading.faults] == ["bad-number"]
    assert "LWPOLYLINE at line 5" in reading.faults[0].text


def test_a_polyline_with_a_vertex_too_few_is_named():
    assert [fault.code for fault in polyline(count=4).faults] == ["truncated"]


@pytest.mark.parametrize(
    "stream",
    [
        b"1 2 m 3 4 l S\n",
        b"q 1 2 m 3 4 l 5.5 -6 l h S Q 7 7 m 8 8 l S ",
        b"0.5 w [] 0 d 1 2 m\n3 4 l\nS\n",
        b"1 1 m 2 2 l 1 2 m 3 4 l S\n",
    ],
)
def test_pages(stream):
    """A comment between points makes the reader go step by step."""
    plain = PageWalk(SKEWED).follow(stream)
    split = PageWalk(SKEWED).follow(stream.replace(b" l", b" %\n l"))
    assert len(plain.edges)
    same(plain, split)
