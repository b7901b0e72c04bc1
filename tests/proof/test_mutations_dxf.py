"""Everything that may go wrong with a DXF file is caught, and named for what it is."""

from __future__ import annotations

import ezdxf.transform
import pytest
from ezdxf.math import Matrix44

EXAMPLES = ["parlour", "five-line", "bass", "nylon", "multiscale-seven"]


def transformed(matrix):
    def change(document):
        ezdxf.transform.inplace(document.modelspace(), matrix)

    return change


@pytest.mark.parametrize("example", EXAMPLES)
def test_a_board_as_written_passes_whole(boards, example):
    board = boards(example)
    report = board.prove("board.dxf", board.dxf)
    assert report.problems == ()
    assert report.notes == ()
    assert report.complete
    assert report.largest_mm <= 1e-6
    assert [row.layer for row in report.layers] == list(board.sheet.layers)
    assert all(row.planned == row.found > 0 for row in report.layers)


@pytest.mark.parametrize(
    ("factor", "words"),
    [
        (25.4, "25.4 times too large: millimetres were taken for inches"),
        (1 / 25.4, "0.0393701 of its size: inches were taken for millimetres"),
        (72 / 96, "0.75 of its size: 72/96"),
        (90 / 96, "0.9375 of its size: 90/96"),
        (96 / 72, "1.33333 times too large: 96/72"),
        (10.0, "10 times too large: millimetres were taken for centimetres"),
        (1.0003, "1.0003 times too large"),
    ],
)
@pytest.mark.parametrize("example", ["five-line"])
def test_an_enlarged_drawing_is_named(boards, edit_dxf, codes, example, factor, words):
    board = boards(example)
    spoilt = edit_dxf(board.dxf, transformed(Matrix44.scale(factor)))
    report = board.prove("board.dxf", spoilt)
    assert codes(report) == {"scale"}
    assert words in report.problems[0].text
    assert report.problems[0].amount == pytest.approx(factor, rel=1e-7)


def test_numbers_in_mm_declared_as_inches_are_named(boards, codes):
    board = boards("parlour")
    spoilt = board.dxf.replace(b"$INSUNITS\n 70\n4\n", b"$INSUNITS\n 70\n1\n")
    assert spoilt != board.dxf
    report = board.prove("board.dxf", spoilt)
    assert codes(report) == {"scale"}
    assert "25.4 times too large: millimetres were taken for inches" in report.problems[0].text


def test_a_drawing_saved_in_inches_and_declared_so_passes(boards, edit_dxf):
    board = boards("parlour")
    inches = edit_dxf(board.dxf, transformed(Matrix44.scale(1 / 25.4)))
    inches = inches.replace(b"$INSUNITS\n 70\n4\n", b"$INSUNITS\n 70\n1\n")
    report = board.prove("board.dxf", inches)
    assert report.passed
    assert report.unit == "in"


@pytest.mark.parametrize(
    ("scale", "words"),
    [((1, -1, 1), "treble side for bass side"), ((-1, 1, 1), "nut end for bridge end")],
)
@pytest.mark.parametrize("example", ["five-line", "multiscale-seven"])
def test_a_mirrored_drawing_is_named(boards, edit_dxf, codes, example, scale, words):
    board = boards(example)
    report = board.prove("board.dxf", edit_dxf(board.dxf, transformed(Matrix44.scale(*scale))))
    assert codes(report) == {"mirrored"}
    assert words in report.problems[0].text


def test_a_turned_drawing_is_named(boards, edit_dxf, codes):
    board = boards("multiscale-seven")
    quarter = transformed(Matrix44.z_rotate(1.5707963267948966))
    report = board.prove("board.dxf", edit_dxf(board.dxf, quarter))
    assert codes(report) == {"turned"}
    assert report.problems[0].amount == pytest.approx(90)


@pytest.mark.parametrize("shift", [(1, 0), (0, 1), (0.05, 0), (-0.7, 0.7)])
def test_a_shifted_drawing_is_named(boards, edit_dxf, codes, shift):
    board = boards("parlour")
    moved = edit_dxf(board.dxf, transformed(Matrix44.translate(*shift, 0)))
    report = board.prove("board.dxf", moved)
    assert codes(report) == {"shifted"}
    assert f"{shift[0]:.3f} mm in x and {shift[1]:.3f} mm in y" in report.problems[0].text
    assert report.problems[0].amount == pytest.approx((shift[0] ** 2 + shift[1] ** 2) ** 0.5)


def test_a_drawing_moved_to_positive_numbers_passes_with_a_note(boards, edit_dxf):
    board = boards("parlour")
    extents = board.sheet.extents
    moved = edit_dxf(board.dxf, transformed(Matrix44.translate(-extents.left, -extents.low, 0)))
    report = board.prove("board.dxf", moved)
    assert report.passed
    assert "the origin is the lower left corner" in report.notes[0].text


def slots(document):
    return list(document.modelspace().query("LINE[layer=='CUT_SLOT']"))


def pockets(document):
    return list(document.modelspace().query("LWPOLYLINE[layer=='CUT_POCKET']"))


def deviations(report):
    return {row.layer: row.largest_mm for row in report.layers}


@pytest.mark.parametrize("example", ["parlour", "five-line"])
def test_one_slot_out_of_place_is_measured(boards, edit_dxf, codes, example):
    board = boards(example)

    def change(document):
        slots(document)[6].translate(0.05, 0, 0)

    report = board.prove("board.dxf", edit_dxf(board.dxf, change))
    assert codes(report) == {"deviation"}
    assert deviations(report)["CUT_SLOT"] == pytest.approx(0.05, abs=2e-3)
    assert report.problems[0].text.startswith("CUT_SLOT: 1 of")


def test_one_slot_too_long_is_measured(boards, edit_dxf, codes):
    board = boards("parlour")

    def change(document):
        line = slots(document)[3]
        line.dxf.end += (line.dxf.end - line.dxf.start).normalize(0.3)

    report = board.prove("board.dxf", edit_dxf(board.dxf, change))
    assert codes(report) == {"deviation"}
    assert deviations(report)["CUT_SLOT"] == pytest.approx(0.3, abs=1e-6)


def test_one_slot_too_short_is_measured(boards, edit_dxf, codes):
    board = boards("parlour")

    def change(document):
        line = slots(document)[3]
        line.dxf.end -= (line.dxf.end - line.dxf.start).normalize(0.3)

    report = board.prove("board.dxf", edit_dxf(board.dxf, change))
    assert codes(report) == {"deviation"}
    assert deviations(report)["CUT_SLOT"] == pytest.approx(0.3, abs=1e-6)


@pytest.mark.parametrize("example", ["multiscale-seven", "five-line"])
def test_a_deleted_slot_is_missing(boards, edit_dxf, codes, example):
    board = boards(example)

    def change(document):
        document.modelspace().delete_entity(slots(document)[4])

    report = board.prove("board.dxf", edit_dxf(board.dxf, change))
    assert codes(report) == {"missing"}
    row = next(row for row in report.layers if row.layer == "CUT_SLOT")
    assert (row.missing, row.found, row.extra) == (1, row.planned - 1, 0)


def test_a_deleted_pocket_is_missing(boards, edit_dxf, codes):
    board = boards("bass")

    def change(document):
        document.modelspace().delete_entity(pockets(document)[4])

    report = board.prove("board.dxf", edit_dxf(board.dxf, change))
    assert codes(report) == {"missing"}


@pytest.mark.parametrize("query", ["LINE[layer=='CUT_SLOT']", "LWPOLYLINE[layer=='CUT_OUTLINE']"])
def test_what_is_drawn_twice_is_caught(boards, edit_dxf, codes, query):
    board = boards("parlour")

    def change(document):
        entity = document.modelspace().query(query)[0]
        document.modelspace().add_entity(entity.copy())

    report = board.prove("board.dxf", edit_dxf(board.dxf, change))
    assert codes(report) == {"duplicate"}


def test_a_line_drawn_twice_in_part_and_backwards_is_caught(boards, edit_dxf, codes):
    board = boards("parlour")

    def change(document):
        line = slots(document)[5]
        middle = (line.dxf.start + line.dxf.end) / 2
        document.modelspace().add_line(middle, line.dxf.start, {"layer": "other"})

    report = board.prove("board.dxf", edit_dxf(board.dxf, change))
    assert codes(report) == {"duplicate"}


@pytest.mark.parametrize("example", ["bass", "multiscale-seven"])
def test_an_opened_pocket_is_caught(boards, edit_dxf, codes, example):
    board = boards(example)

    def change(document):
        pockets(document)[7].closed = False

    report = board.prove("board.dxf", edit_dxf(board.dxf, change))
    assert codes(report) == {"open-contour"}
    assert report.problems[0].amount == 1


def test_a_pocket_whose_corner_does_not_meet_is_caught(boards, edit_dxf, codes):
    board = boards("bass")

    def change(document):
        space = document.modelspace()
        lines = list(pockets(document)[2].explode(space))
        lines[1].dxf.start += (lines[1].dxf.end - lines[1].dxf.start).normalize(0.02)

    report = board.prove("board.dxf", edit_dxf(board.dxf, change), tolerance_mm=0.015)
    assert codes(report) == {"open-contour", "deviation"}


def test_a_dropped_bulge_is_caught(boards, edit_dxf, codes):
    board = boards("multiscale-seven")

    def change(document):
        pocket = pockets(document)[9]
        points = pocket.get_points("xyb")
        place = next(place for place, point in enumerate(points) if point[2])
        points[place] = (*points[place][:2], 0.0)
        pocket.set_points(points, "xyb")

    report = board.prove("board.dxf", edit_dxf(board.dxf, change))
    assert codes(report) == {"deviation"}
    assert 0.05 < deviations(report)["CUT_POCKET"] < 0.2


def test_all_bulges_dropped_is_caught(boards, edit_dxf, codes):
    board = boards("multiscale-seven")

    def change(document):
        for pocket in pockets(document):
            pocket.set_points(pocket.get_points("xy"), "xy")

    report = board.prove("board.dxf", edit_dxf(board.dxf, change))
    assert codes(report) == {"deviation"}
    assert report.problems[0].text.startswith("CUT_POCKET: 24 of 24")


def test_a_further_cut_is_extra(boards, edit_dxf, codes):
    board = boards("parlour")

    def change(document):
        document.modelspace().add_line((100, -10), (140, 10), {"layer": "CUT_SLOT"})
        document.modelspace().add_circle((100, 0), 3, {"layer": "CUT_SLOT"})

    report = board.prove("board.dxf", edit_dxf(board.dxf, change))
    assert codes(report) == {"extra"}
    assert next(row for row in report.layers if row.layer == "CUT_SLOT").extra == 3


def test_a_point_is_caught(boards, edit_dxf, codes):
    board = boards("parlour")

    def change(document):
        document.modelspace().add_line((100, 0), (100, 0), {"layer": "CUT_SLOT"})

    assert codes(board.prove("board.dxf", edit_dxf(board.dxf, change))) == {"zero-length"}


def test_a_slot_at_another_height_is_caught(boards, edit_dxf, codes):
    board = boards("parlour")

    def change(document):
        slots(document)[0].translate(0, 0, -0.5)

    report = board.prove("board.dxf", edit_dxf(board.dxf, change))
    assert codes(report) == {"deviation"}
    assert deviations(report)["CUT_SLOT"] == pytest.approx(0.5)


@pytest.mark.parametrize("kind", ["spline", "insert", "tilted"])
def test_what_cannot_be_followed_fails(boards, edit_dxf, codes, kind):
    board = boards("parlour")

    def change(document):
        space = document.modelspace()
        match kind:
            case "spline":
                space.add_spline([(0, 0), (5, 5), (10, 0)])
            case "insert":
                document.blocks.new("part").add_line((0, 0), (1, 1))
                space.add_blockref("part", (3, 3))
            case "tilted":
                space.add_circle((3, 3), 2, {"extrusion": (1, 0, 0)})

    assert codes(board.prove("board.dxf", edit_dxf(board.dxf, change))) == {"not-understood"}


@pytest.mark.parametrize("value", ["nan", "inf", "1e400", "12,5", "abc", "1_0"])
def test_a_number_that_is_none_fails(boards, codes, value):
    board = boards("parlour")
    head, line, tail = board.dxf.partition(b"AcDbLine\n")
    assert line
    spoilt = head + line + tail.replace(tail.split(b"\n")[1], value.encode(), 1)
    assert "bad-number" in codes(board.prove("board.dxf", spoilt))
