"""SVG structure: units, windows, transforms, shapes."""

from __future__ import annotations

import cmath
import math

import pytest

from layout.proof.plane_map import PlaneMap, read_transform
from layout.proof.read_svg import read_svg

PX = 25.4 / 96


def page(body, head='width="100mm" height="100mm" viewBox="0 0 100 100"'):
    return read_svg(f'<svg xmlns="http://www.w3.org/2000/svg" {head}>{body}</svg>'.encode())


@pytest.mark.parametrize(
    ("head", "unit", "mm"),
    [
        ('width="50mm" height="50mm" viewBox="0 0 100 100"', "mm", 0.5),
        ('width="5cm" height="5cm" viewBox="0 0 100 100"', "cm", 0.5),
        ('width="1in" height="1in" viewBox="0 0 25.4 25.4"', "in", 1.0),
        ('width="72pt" viewBox="0 0 25.4 25.4"', "pt", 1.0),
        ('width="6pc" viewBox="0 0 25.4 25.4"', "pc", 1.0),
        ('height="96" viewBox="0 0 25.4 25.4"', "px", 1.0),
        ('width="96px" height="96px"', "px", PX),
        ('width="100%" height="100%" viewBox="0 0 10 10"', "px", PX),
        ("", "px", PX),
    ],
)
def test_one_unit_is_so_many_mm(head, unit, mm):
    reading = page('<path d="M 1 1 L 4 5"/>', head)
    assert reading.unit == unit
    assert reading.edges.length_mm == pytest.approx([5 * mm], rel=1e-12)
    assert reading.edges.start[0] == pytest.approx(mm * (1 - 1j))


def test_the_view_box_corner_is_the_page_corner():
    reading = page('<path d="M 12 23 h 5"/>', 'width="50mm" height="50mm" viewBox="10 20 50 50"')
    assert reading.edges.start[0] == pytest.approx(2 - 3j)


@pytest.mark.parametrize(
    ("aspect", "corner"),
    [
        ("", 25 + 0j),
        ("xMinYMin meet", 0j),
        ("xMaxYMid", 50 + 0j),
        ("xMidYMid slice", -25j * -1),
    ],
)
def test_a_window_of_another_shape_keeps_the_drawing_whole(aspect, corner):
    head = 'width="100mm" height="50mm" viewBox="0 0 50 50"'
    head += f' preserveAspectRatio="{aspect}"' if aspect else ""
    reading = page('<path d="M 0 0 L 10 0"/>', head)
    scale = 2.0 if "slice" in aspect else 1.0
    assert reading.edges.length_mm == pytest.approx([10 * scale])
    assert reading.edges.start[0] == pytest.approx(corner)


def test_a_stretched_window_stretches():
    head = 'width="100mm" height="50mm" viewBox="0 0 50 50" preserveAspectRatio="none"'
    assert page('<path d="M 0 0 h 10"/>', head).edges.length_mm == pytest.approx([20])
    assert page('<path d="M 0 0 v 10"/>', head).edges.length_mm == pytest.approx([10])


def test_groups_transform_and_name_what_is_in_them():
    body = (
        '<g id="outer" transform="translate(10 20)"><g id="saw" transform="rotate(90) scale(2)">'
        '<path d="M 0 0 L 5 0"/></g><path d="M 0 0 L 0 1"/></g>'
    )
    reading = page(body)
    assert reading.layers == ("saw", "outer")
    assert reading.edges.start[0] == pytest.approx(10 - 20j)
    assert reading.edges.end[0] == pytest.approx(10 - 30j)


def test_a_nested_page_has_its_own_window():
    body = '<svg x="10" y="5" width="20" height="20" viewBox="0 0 40 40"><path d="M0 0h4"/></svg>'
    reading = page(body)
    assert reading.edges.start[0] == pytest.approx(10 - 5j)
    assert reading.edges.length_mm == pytest.approx([2])


@pytest.mark.parametrize(
    ("body", "length"),
    [
        ('<line x1="1" y1="2" x2="4" y2="6"/>', 5),
        ('<polyline points="0,0 3,0 3,4"/>', 7),
        ('<polygon points="0 0, 3 0, 3 4"/>', 12),
        ('<rect x="1" y="1" width="3" height="4"/>', 14),
        ('<rect width="10" height="6" rx="2"/>', 16 + 4 * math.pi),
        ('<rect width="6" height="6" rx="3"/>', 6 * math.pi),
        ('<circle cx="5" cy="5" r="2"/>', 4 * math.pi),
        ('<ellipse cx="5" cy="5" rx="2" ry="2"/>', 4 * math.pi),
        ('<ellipse cx="5" cy="5" rx="2" ry="1"/>', 9.68844822),
        ('<circle cx="5" cy="5" r="2" transform="scale(1 .5)"/>', 9.68844822),
    ],
)
def test_basic_shapes_are_as_long_as_they_are(body, length):
    reading = page(body)
    assert reading.faults == ()
    assert reading.edges.length_mm.sum() == pytest.approx(length, rel=3e-4)
    assert reading.closed.all() == (not body.startswith(("<line", "<polyline")))


def test_what_does_not_show_is_not_drawn():
    drawn = '<path d="M 0 0 h 9"/>'
    hidden = (
        f"<defs>{drawn}</defs><symbol>{drawn}</symbol><g display='none'><g>{drawn}</g></g>"
        f"<g style='stroke:red;display:none'>{drawn}</g><clipPath>{drawn}</clipPath>"
    )
    assert len(page(hidden + drawn).edges) == 1


def test_text_is_left_out_with_a_note():
    reading = page('<text x="1" y="1">12</text>')
    assert reading.faults == ()
    assert reading.notes[0].text == "<text> left out"


@pytest.mark.parametrize(
    "content", [b"", b"<svg", b"<html/>", b"\xff\xfe\x00", b"<svg>&other;</svg>"]
)
def test_what_is_no_svg_is_broken(content):
    reading = read_svg(content)
    assert reading.broken
    assert reading.faults


@pytest.mark.parametrize(
    ("text", "point", "goes_to"),
    [
        ("translate(3)", 1j, 3 + 1j),
        ("scale(2,-1)", 1 + 1j, 2 - 1j),
        ("rotate(90 1 1)", 2 + 1j, 1 + 2j),
        ("matrix(1 2 3 4 5 6)", 1 + 1j, 9 + 12j),
        ("skewX(45)", 1 + 1j, 2 + 1j),
        ("skewY(45) translate(1, 2)", 0j, 1 + 3j),
        (" translate(1 1) , rotate(180)", 1 + 0j, 1j),
    ],
)
def test_transforms(text, point, goes_to):
    assert read_transform(text)(point) == pytest.approx(goes_to)


@pytest.mark.parametrize("text", ["turn(3)", "scale()", "scale(a)", "matrix(1 2 3)", "scale(2"])
def test_what_is_no_transform_is_a_fault(text):
    reading = page(f'<path transform="{text}" d="M 0 0 h 1"/>')
    assert [fault.code for fault in reading.faults] == ["bad-number"]


def test_maps_follow_one_another():
    turn, stretch = PlaneMap(cmath.rect(1, 0.3), 0, 2), PlaneMap(1.5, 0.5, 1j)
    point = 3 - 2j
    assert stretch.after(turn)(point) == pytest.approx(stretch(turn(point)))
    assert turn.keeps_circles
    assert not stretch.keeps_circles
