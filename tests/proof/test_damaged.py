"""Whatever is in a file, a proof fails it: no error escapes, and nothing broken passes."""

from __future__ import annotations

import random
import re

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

PLACES = 60


@pytest.mark.parametrize("kind", ["dxf", "svg"])
def test_a_file_cut_off_anywhere_fails(boards, kind):
    board = boards("five-line")
    content = getattr(board, kind)
    whole = len(content.rstrip())
    for place in range(PLACES):
        cut = content[: whole * place // PLACES]
        report = board.prove(f"board.{kind}", cut)
        assert not report.passed, f"cut after {len(cut)} bytes"
        assert {"truncated", "unreadable"} & {problem.code for problem in report.problems}
    for left in range(1, 8):
        assert not board.prove(f"board.{kind}", content[: whole - left]).passed


@pytest.mark.parametrize("kind", ["dxf", "svg"])
def test_a_file_without_a_middle_fails(boards, kind):
    board = boards("five-line")
    content = getattr(board, kind)
    rng = random.Random(7)
    for _ in range(12):
        start = rng.randrange(len(content) // 2, len(content) - 4000)
        hole = content[:start] + content[start + 2000 :]
        report = board.prove(f"board.{kind}", hole)
        assert not report.complete


@settings(max_examples=40, deadline=None, suppress_health_check=list(HealthCheck))
@given(content=st.binary(max_size=400), kind=st.sampled_from(["dxf", "svg", "pdf"]))
def test_random_bytes_fail(boards, content, kind):
    assert not boards("parlour").prove(f"board.{kind}", content).passed


@settings(max_examples=25, deadline=None, suppress_health_check=list(HealthCheck))
@given(seed=st.integers(0, 10**9), kind=st.sampled_from(["dxf", "svg"]))
def test_random_changes_never_escape(boards, seed, kind):
    board = boards("five-line")
    rng = random.Random(seed)
    content = bytearray(getattr(board, kind))
    for _ in range(rng.randrange(1, 30)):
        content[rng.randrange(len(content))] = rng.randrange(256)
    board.prove(f"board.{kind}", bytes(content))


@pytest.mark.parametrize("huge", [b"1e308", b"-1e308", b"99999999999", b"1e-320"])
@pytest.mark.parametrize("kind", ["dxf", "svg"])
def test_absurd_numbers_fail(boards, kind, huge):
    board = boards("five-line")
    numbers = list(re.finditer(rb"(?<![\w.])[0-9]+\.[0-9]{3,6}(?=\s)", getattr(board, kind)))
    for match in numbers[200:210]:
        content = getattr(board, kind)
        spoilt = content[: match.start()] + huge + content[match.end() :]
        assert not board.prove(f"board.{kind}", spoilt).complete


def test_an_empty_drawing_fails(boards):
    board = boards("parlour")
    empty = b"  0\nSECTION\n  2\nENTITIES\n  0\nENDSEC\n  0\nEOF\n"
    assert not board.prove("board.dxf", empty).passed
    assert not board.prove("board.svg", b'<svg width="9mm" viewBox="0 0 9 9"/>').passed


def test_a_binary_file_says_what_to_do(boards):
    report = boards("parlour").prove("board.dxf", b"AutoCAD Binary DXF\r\n\x1a\x00\x00")
    assert "save it as ASCII DXF" in report.problems[0].text


@pytest.mark.parametrize("name", ["board.step", "board", "board.txt"])
def test_other_formats_fail(boards, name):
    board = boards("parlour")
    assert [problem.code for problem in board.prove(name, board.dxf).problems] == ["unreadable"]


@pytest.mark.parametrize("tolerance", [0.0, -1.0, float("nan"), float("inf")])
def test_a_tolerance_is_a_length(boards, tolerance):
    board = boards("parlour")
    with pytest.raises(ValueError, match="a tolerance is a length above 0"):
        board.prove("board.dxf", board.dxf, tolerance_mm=tolerance)
