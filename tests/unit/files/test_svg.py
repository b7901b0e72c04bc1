"""The SVG writer: true size, plain paths, whatever the text."""

from __future__ import annotations

import math
import random
import re
from xml.etree import ElementTree as ET

import pytest

from layout.drawing.outlines import bulge_through
from layout.drawing.shapes import (
    Arc,
    Circle,
    Line,
    Outline,
    Piece,
    Polyline3D,
    point_along,
    turn_of,
)
from layout.drawing.sheet import make_sheet
from layout.files.svg import render_svg

MARGIN_MM = 2.0
SPACE = "{http://www.w3.org/2000/svg}"


def paths_of(content: bytes) -> list[str]:
    return [part.attrib["d"] for part in ET.fromstring(content).iter(SPACE + "path")]


def test_y_is_flipped_and_the_corner_is_the_extents_with_a_margin() -> None:
    sheet = make_sheet("a", "A", shapes=[Line("CUT_SLOT", (-10, -5), (20.12346, 7))])
    assert paths_of(render_svg(sheet)) == ["M 2 14 L 32.1235 2"]
    desc = ET.fromstring(render_svg(sheet)).find(SPACE + "desc").text
    assert desc == (
        "Origin of the drawing: 12 mm from the left and 9 mm from the top of this page; "
        "one unit is 1 mm."
    )


def test_the_stated_origin_is_exact() -> None:
    """Numbers from the page, less the origin it states, are the sheet's to half a step."""
    ends = ((-10.123451, -5.000049), (20.999951, 7.123449))
    content = render_svg(make_sheet("a", "A", shapes=[Line("CUT_SLOT", *ends)]))
    desc = ET.fromstring(content).find(SPACE + "desc").text
    left, top = map(float, re.findall(r"([\d.]+) mm from", desc))
    numbers = [float(word) for word in paths_of(content)[0].split() if word not in "ML"]
    for (x, y), place in zip(ends, (numbers[:2], numbers[2:]), strict=True):
        assert (place[0] - left, top - place[1]) == pytest.approx((x, y), abs=5.01e-5)


def test_closed_outlines_end_with_z() -> None:
    sheet = make_sheet(
        "a",
        "A",
        shapes=[
            Outline("CUT_OUTLINE", ((0, 0), (10, 0), (10, 5))),
            Outline("CUT_SLOT", ((0, 9), (1, 10), (2, 9)), closed=False),
            Polyline3D("CUT_FLOOR", ((0, 20, -1), (5, 20, -2))),
        ],
    )
    assert paths_of(render_svg(sheet)) == [
        "M 2 22 L 12 22 L 12 17 Z",
        "M 2 13 L 3 12 L 4 13",
        "M 2 2 L 7 2",
    ]


def test_arcs_turn_the_right_way() -> None:
    """A left turn from east to north is a counter-clockwise arc on paper: sweep flag 0."""
    sheet = make_sheet("a", "A", shapes=[Arc("CUT_SLOT", (0, 0), 10, 0, math.pi / 3)])
    assert re.fullmatch(r"M \S+ \S+ A 10 10 0 0 0 \S+ 2", paths_of(render_svg(sheet))[0])
    back = Outline("CUT_SLOT", ((0, 0), (10, 0)), (-0.2, 0), closed=False)
    assert " 0 0 1 " in paths_of(render_svg(make_sheet("a", "A", shapes=[back])))[0]


def test_four_decimals_keep_arcs_within_a_ten_thousandth() -> None:
    """Rounded ends and radius give an arc again; compared with the arc meant, at 9 points."""
    chance = random.Random(4)
    for _ in range(300):
        radius = 10 ** chance.uniform(-0.7, 2.8)
        start = chance.uniform(0, 6)
        arc = Arc(
            "CUT_SLOT", (chance.uniform(-9, 9), 1), radius, start, start + chance.uniform(0.05, 6)
        )
        sheet = make_sheet("a", "A", shapes=[arc, Line("REF_BAR", (-900, 900), (-800, 900))])
        left = math.floor(sheet.extents.left * 1e4 + 1e-3) / 1e4 - MARGIN_MM
        high = math.ceil(sheet.extents.high * 1e4 - 1e-3) / 1e4 + MARGIN_MM
        numbers = paths_of(render_svg(sheet))[0].replace("M", "").split("A")
        at = tuple(map(float, numbers[0].split()))
        for words in numbers[1:]:
            rx, _, _, large, sweep, x, y = map(float, words.split())
            assert large == 0
            assert sweep == 0
            chord = math.dist(at, (x, y))
            bulge = math.tan(math.asin(min(chord / 2 / rx, 1)) / 2)
            piece = Piece((at[0] + left, high - at[1]), (x + left, high - y), bulge)
            for share in range(9):
                point = point_along(piece, share / 8)
                assert abs(math.dist(point, arc.centre) - radius) < 1e-4
            at = (x, y)


def test_a_half_circle_of_a_narrow_slot_keeps_its_top() -> None:
    slot = Outline("CUT_POCKET", ((0, 0.29), (0, -0.29), (9, -0.29), (9, 0.29)), (1, 0, 1, 0))
    words = paths_of(render_svg(make_sheet("a", "A", shapes=[slot])))[0]
    assert words.count("A") == 6
    first = [float(word) for word in words.split("A")[2].split()[-2:]]
    middle = (0.0 - 0.29 * math.cos(math.pi / 6), -0.29 * math.sin(math.pi / 6))
    assert first[0] == pytest.approx(middle[0] + 0.29 + MARGIN_MM, abs=1e-4)
    assert bulge_through((0, 0.29), (-0.29, 0), (0, -0.29)) == pytest.approx(1)
    assert turn_of(Piece((0, 0.29), (0, -0.29), 1.0)).radius_mm == pytest.approx(0.29)


def test_text_is_escaped_and_control_characters_go() -> None:
    sheet = make_sheet(
        "a",
        'x<&>"\x00\x1b\ud800 Ü',
        notes=("]]>\x07", "b"),
        shapes=[Circle("DRILL_PIN", (0, 0), 1)],
    )
    root = ET.fromstring(render_svg(sheet))
    assert root.find(SPACE + "title").text == 'x<&>" Ü'
    assert root.find(SPACE + "desc").text.startswith("]]>\nb\nOrigin")
    (circle,) = root.iter(SPACE + "circle")
    assert circle.attrib == {"cx": "3", "cy": "3", "r": "1"}


def test_a_single_line_still_has_a_page() -> None:
    sheet = make_sheet("a", "A", shapes=[Line("CUT_SLOT", (0, 0), (9, 0))])
    root = ET.fromstring(render_svg(sheet))
    assert (root.attrib["width"], root.attrib["height"]) == ("13mm", "4mm")


def test_renamed_layers_share_a_group() -> None:
    sheet = make_sheet(
        "a", "A", shapes=[Line("CUT_SLOT", (0, 0), (9, 0)), Line("CUT_OUTLINE", (0, 5), (9, 5))]
    )
    root = ET.fromstring(render_svg(sheet, layers={"CUT_SLOT": "cut", "CUT_OUTLINE": "cut"}))
    (group,) = root.findall(SPACE + "g")
    assert (group.attrib["id"], len(group)) == ("cut", 2)
