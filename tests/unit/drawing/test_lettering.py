"""Text becomes clean single strokes."""

from __future__ import annotations

import math
import string
from itertools import pairwise
from pathlib import Path

import pytest

import layout.drawing
from layout.drawing import lettering
from layout.drawing.lettering import letter, text_width_mm, to_ascii

PRINTABLE = "".join(map(chr, range(32, 127)))


def edges(strokes):
    return [edge for stroke in strokes for edge in pairwise(stroke)]


@pytest.mark.parametrize("character", PRINTABLE[1:])
def test_every_printable_character_has_clean_strokes(character: str) -> None:
    strokes = letter(character, height_mm=21)
    assert strokes
    drawn = [frozenset(edge) for edge in edges(strokes)]
    assert len(set(drawn)) == len(drawn)
    assert all(len(edge) == 2 for edge in drawn)


def test_retraced_and_empty_edges_are_left_out() -> None:
    there_and_back = ((0, 9), (0, -12), (0, 9), (0, 9), (6, 9))
    strokes = lettering._draw_edges_once((there_and_back, ((6, 9), (0, 9)), ((3, 3),)))
    assert list(strokes) == [((0, 9), (0, -12)), ((0, 9), (6, 9))]


def test_capitals_have_the_height_asked_for() -> None:
    for character in string.ascii_uppercase.replace("Q", "") + string.digits:
        ys = [y for stroke in letter(character, height_mm=3.5) for _, y in stroke]
        assert min(ys) == pytest.approx(0, abs=3.5 / 21 + 1e-9)
        assert max(ys) == pytest.approx(3.5, abs=3.5 / 21 + 1e-9)


@pytest.mark.parametrize(("align", "share"), [("left", 0), ("centre", 0.5), ("right", 1)])
@pytest.mark.parametrize(("stand", "rise"), [("base", 0), ("middle", 0.5), ("top", 1)])
def test_the_anchor_is_where_it_is_said_to_be(align, share, stand, rise) -> None:
    plain = letter("A7", height_mm=3)
    width = text_width_mm("A7", height_mm=3)
    turned = letter("A7", height_mm=3, anchor=(10, 20), angle=math.pi / 2, align=align, stand=stand)
    for stroke, other in zip(plain, turned, strict=True):
        for (x, y), place in zip(stroke, other, strict=True):
            expected = (10 - (y - 3 * rise), 20 + (x - width * share))
            assert place == pytest.approx(expected, abs=1e-12)


def test_text_runs_to_the_right_without_gaps_or_overlaps() -> None:
    for text in ("12", "0.58 mm", "C#4"):
        xs = [x for stroke in letter(text) for x, _ in stroke]
        assert min(xs) > 0
        assert max(xs) < text_width_mm(text, height_mm=3)
    assert text_width_mm("1 2", height_mm=3) > text_width_mm("12", height_mm=3)


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("Gitarre für Ünïcödé", "Gitarre fur Unicode"),
        ("25\u00bd\u2033", '25 1/2"'),
        ("a\tb\x00\x1b[0m\u200b", "a b[0m"),
        ("♭♯½°", "b#1/2 deg"),
        ("漢字", "??"),
        ("e\u0301", "e"),
        ("–—‘’“”", "--''\"\""),
        (PRINTABLE, PRINTABLE),
    ],
)
def test_to_ascii(text: str, said: str) -> None:
    assert to_ascii(text) == said


def test_a_height_of_nothing_is_refused() -> None:
    with pytest.raises(ValueError, match="height above 0"):
        letter("1", height_mm=0)


def test_the_notice_of_the_font_is_part_of_the_package() -> None:
    notice = (Path(layout.drawing.__file__).parent / "FONT_NOTICE.txt").read_text("ascii")
    assert "originally created by Dr. A. V. Hershey" in " ".join(notice.split())
