"""Everything that may go wrong with an SVG file is caught, and named for what it is."""

from __future__ import annotations

import re

import pytest

EXAMPLES = ["parlour", "five-line", "bass", "nylon", "multiscale-seven"]


def grouped(content: bytes, transform: str) -> bytes:
    """Put a transform around everything drawn."""
    opened = content.replace(b"<defs />", f'<defs /><g transform="{transform}">'.encode(), 1)
    assert opened != content
    return opened.replace(b"</svg>", b"</g></svg>")


@pytest.mark.parametrize("example", EXAMPLES)
def test_a_board_as_written_passes_whole(boards, example):
    board = boards(example)
    report = board.prove("board.svg", board.svg)
    assert report.problems == ()
    assert report.notes == ()
    assert report.complete
    assert report.unit == "mm"
    assert report.largest_mm <= 1e-4


@pytest.mark.parametrize(
    ("factor", "words"),
    [
        (25.4, "25.4 times too large: millimetres were taken for inches"),
        (72 / 96, "0.75 of its size: 72/96"),
        (90 / 96, "0.9375 of its size: 90/96"),
        (1.25, "1.25 times too large: 90/72"),
    ],
)
def test_an_enlarged_drawing_is_named(boards, codes, factor, words):
    board = boards("parlour")
    report = board.prove("board.svg", grouped(board.svg, f"scale({factor!r})"))
    assert codes(report) == {"scale"}
    assert words in report.problems[0].text


@pytest.mark.parametrize(
    ("unit", "factor"), [("", 25.4 / 96), ("px", 25.4 / 96), ("pt", 25.4 / 72), ("in", 25.4)]
)
def test_a_page_in_another_unit_is_named(boards, codes, unit, factor):
    board = boards("parlour")
    spoilt = re.sub(rb'(width|height)="([0-9.]+)mm"', rb'\1="\2' + unit.encode() + b'"', board.svg)
    assert spoilt != board.svg
    report = board.prove("board.svg", spoilt)
    assert codes(report) == {"scale"}
    assert report.problems[0].amount == pytest.approx(factor, rel=1e-9)
    assert report.unit == (unit or "px")


def test_a_page_without_a_view_box_counts_in_pixels(boards, codes):
    board = boards("parlour")
    spoilt = re.sub(rb' viewBox="[^"]*"', b"", board.svg)
    report = board.prove("board.svg", spoilt)
    assert codes(report) == {"scale"}
    assert "millimetres were taken for pixels of 1/96 inch" in report.problems[0].text


@pytest.mark.parametrize("example", EXAMPLES)
def test_a_mirrored_drawing_is_named(boards, codes, example):
    board = boards(example)
    high = board.sheet.extents.height
    report = board.prove("board.svg", grouped(board.svg, f"matrix(1 0 0 -1 0 {high})"))
    assert codes(report) == {"mirrored"}


def test_a_shifted_drawing_is_named(boards, codes):
    board = boards("parlour")
    report = board.prove("board.svg", grouped(board.svg, "translate(1 0)"))
    assert codes(report) == {"shifted"}
    assert "1.000 mm in x and 0.000 mm in y" in report.problems[0].text


def test_a_stretched_drawing_is_named(boards, codes):
    board = boards("parlour")
    report = board.prove("board.svg", grouped(board.svg, "scale(1.01 1)"))
    assert codes(report) == {"stretched"}
    assert "1.01 times its size along x and 1 along y" in report.problems[0].text


def drawn(board, layer):
    """Path elements of one layer, as written."""
    group = re.search(rb'<g [^>]*id="' + layer.encode() + rb'".*?</g>', board.svg)
    assert group
    return re.findall(rb"<path [^>]*/>", group[0])


def test_one_slot_out_of_place_is_measured(boards, codes):
    board = boards("parlour")
    slot = drawn(board, "CUT_SLOT")[6]
    moved = slot.replace(b"<path ", b'<path transform="translate(.05)" ')
    report = board.prove("board.svg", board.svg.replace(slot, moved))
    assert codes(report) == {"deviation"}
    assert report.problems[0].amount == pytest.approx(0.05, abs=1.5e-4)


def test_a_deleted_slot_is_missing(boards, codes):
    board = boards("parlour")
    report = board.prove("board.svg", board.svg.replace(drawn(board, "CUT_SLOT")[0], b""))
    assert codes(report) == {"missing"}


def test_a_hidden_slot_is_missing(boards, codes):
    board = boards("parlour")
    slot = drawn(board, "CUT_SLOT")[0]
    hidden = slot.replace(b"<path ", b'<path style="fill:none; display: none" ')
    assert codes(board.prove("board.svg", board.svg.replace(slot, hidden))) == {"missing"}


def test_what_is_drawn_twice_is_caught(boards, codes):
    board = boards("parlour")
    slot = drawn(board, "CUT_SLOT")[0]
    assert codes(board.prove("board.svg", board.svg.replace(slot, slot * 2))) == {"duplicate"}


def test_an_opened_pocket_is_caught(boards, codes):
    board = boards("bass")
    pocket = drawn(board, "CUT_POCKET")[0]
    opened = pocket.replace(b" Z", b"")
    assert opened != pocket
    report = board.prove("board.svg", board.svg.replace(pocket, opened))
    assert codes(report) == {"open-contour"}


def test_an_arc_made_straight_is_caught(boards, codes):
    board = boards("multiscale-seven")
    pocket = drawn(board, "CUT_POCKET")[0]
    straight = re.sub(rb"A \S+ \S+ 0 0 [01] ", b"L ", pocket)
    assert straight != pocket
    report = board.prove("board.svg", board.svg.replace(pocket, straight))
    assert codes(report) == {"deviation"}


def test_an_arc_bent_the_other_way_is_caught(boards, codes):
    board = boards("multiscale-seven")
    pocket = drawn(board, "CUT_POCKET")[0]
    bent = re.sub(rb"(A \S+ \S+ 0 0) [01]", rb"\1 1", pocket)
    if bent == pocket:
        bent = re.sub(rb"(A \S+ \S+ 0 0) [01]", rb"\1 0", pocket)
    assert not board.prove("board.svg", board.svg.replace(pocket, bent)).passed


def test_a_further_cut_is_extra(boards, codes):
    board = boards("parlour")
    spoilt = board.svg.replace(b"</svg>", b'<path d="M 90 40 l 30 5"/></svg>')
    assert codes(board.prove("board.svg", spoilt)) == {"extra"}


def test_a_point_is_caught(boards, codes):
    board = boards("parlour")
    spoilt = board.svg.replace(b"</svg>", b'<path d="M 90 40 L 90 40"/></svg>')
    assert codes(board.prove("board.svg", spoilt)) == {"zero-length"}


def test_a_copy_by_reference_cannot_be_followed(boards, codes):
    board = boards("parlour")
    spoilt = board.svg.replace(b"</svg>", b'<use href="#CUT_SLOT"/></svg>')
    assert codes(board.prove("board.svg", spoilt)) == {"not-understood"}


@pytest.mark.parametrize(
    "text", ["M 0 0 L nan 5", "M 0 0 L 5", "L 5 5", "M 0 0 L 1e400 5", "M0 0?"]
)
def test_a_path_that_is_none_fails(boards, codes, text):
    board = boards("parlour")
    spoilt = board.svg.replace(b"</svg>", f'<path d="{text}"/></svg>'.encode())
    assert "bad-number" in codes(board.prove("board.svg", spoilt))


def test_entities_of_the_file_itself_are_refused(boards, codes):
    board = boards("parlour")
    bomb = b'<!DOCTYPE svg [<!ENTITY a "aaaaaaaaaa"><!ENTITY b "&a;&a;&a;&a;">]>'
    head, mark, tail = board.svg.partition(b"?>")
    report = board.prove("board.svg", head + mark + bomb + tail)
    assert codes(report) == {"unreadable"}


def test_the_plain_document_type_of_other_programs_is_read(boards):
    board = boards("parlour")
    plain = b'<!DOCTYPE svg PUBLIC "-//W3C//DTD SVG 1.1//EN" "http://www.w3.org/svg11.dtd">'
    head, mark, tail = board.svg.partition(b"?>")
    assert board.prove("board.svg", head + mark + plain + tail).passed
