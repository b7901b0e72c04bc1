"""What happens with a job that cannot be read, or says what cannot be?"""

from __future__ import annotations

import re
from pathlib import Path

import pytest

BOMB = "a: &a [x, x]\n" + "".join(
    f"{new}: &{new} [{', '.join([f'*{old}'] * 9)}]\n"
    for old, new in zip("abcdefgh", "bcdefghi", strict=True)
)

UNREADABLE = {
    "empty": (b"", "the file holds no keys"),
    "blank": (b"\n  \n# nothing\n", "the file holds no keys"),
    "binary": (bytes(range(256)) * 20, "zero bytes"),
    "latin": ("title: Lautenb\u00e4ss\n".encode("latin-1"), "UTF-8"),
    "bracket": (b"title: [one, two\nscale: 600\n", "bracket"),
    "tab": (b"title: x\nboard:\n\tmargin: 3\n", "tab"),
    "deep": (b"title: " + b"[" * 200 + b"]" * 200, "deep"),
    "endless": (b"title: " + b"[" * 20000, "bracket"),
    "bomb": (BOMB.encode(), "anchors are not read"),
    "tag": (b"title: !!python/object:os.system x\n", "tags are not read"),
    "large": (b"# " + b"x" * 10_000_000, "at most 1 MB"),
    "list": (b"- title\n- scale\n", "a job is a mapping of keys"),
    "word": (b"guitar\n", "a job is a mapping of keys"),
}


def ways(job: Path, directory: Path) -> list[list[str | Path]]:
    return [["plan", job], ["plan", job, "--json"], ["cut", job, "-o", directory]]


@pytest.mark.parametrize("case", UNREADABLE)
def test_a_file_that_is_no_job_is_refused_in_plain_lines(run, tmp_path, case: str) -> None:
    content, said = UNREADABLE[case]
    job, directory = tmp_path / "bad.yaml", tmp_path / "out"
    job.write_bytes(content)
    for words in ways(job, directory):
        ran = run(*words)
        assert ran.status == 1
        assert ran.out == ""
        lines = ran.err.splitlines()
        assert 1 <= len(lines) <= 40
        assert all(line.startswith("bad.yaml") and len(line) < 300 for line in lines)
        assert said in ran.err
        assert ran.err.replace("\n", "").isprintable()
        assert "Traceback" not in ran.err
    assert sorted(path.name for path in tmp_path.iterdir()) == ["bad.yaml"]


def test_a_missing_file_and_a_directory_end_with_3(run, tmp_path) -> None:
    for job, said in (
        (tmp_path / "none.yaml", "there is no such file"),
        (tmp_path, "is a directory"),
        (tmp_path / "none" / "deeper.yaml", "there is no such file"),
    ):
        for words in ways(job, tmp_path / "out"):
            ran = run(*words)
            assert ran.status == 3
            assert ran.out == ""
            assert re.fullmatch(r"stopwright: .*\n", ran.err)
            assert said in ran.err
    assert list(tmp_path.iterdir()) == []


TEN_FAULTS = """\
title: Ten faults
hand: middle
scale: 20
strings:
  - {note: H9, plain: steel, gauge: 0.012 in}
  - {note: B3, plain: steel, gauge: 0}
  - {note: G3, plain: cheese, gauge: 0.5}
spread: {nut: 36, saddle: nan}
frets: {count: 999}
finger: {behind: 8, behind: 9}
nut: {zero: middle}
colour: red
slots: {width: 0,58}
"""


def test_ten_faults_are_ten_lines_each_with_its_place(run, tmp_path) -> None:
    job = tmp_path / "ten.yaml"
    job.write_text(TEN_FAULTS, encoding="utf-8")
    for words in ways(job, tmp_path / "out"):
        ran = run(*words)
        assert (ran.status, ran.out) == (1, "")
        lines = ran.err.splitlines()
        places = [re.match(r"ten\.yaml:(\d+) ([\w.\[\]]+): ", line) for line in lines]
        assert all(places), ran.err
        found = [int(place[1]) for place in places]
        assert found == sorted(found)
        # every line of the job but the title, the strings' key and nothing else
        assert sorted(set(found)) == [2, 3, 5, 6, 7, 8, 9, 10, 11, 12, 13]
        assert len(lines) >= 10
    assert not (tmp_path / "out").exists()


def test_faults_found_after_reading_name_the_file_and_the_line(run, write_job, tmp_path) -> None:
    job = write_job("short.yaml", board="{length: 30}")
    for words in ways(job, tmp_path / "out"):
        ran = run(*words)
        assert (ran.status, ran.out) == (1, "")
        assert re.match(r"short\.yaml:6 board[\w.]*: fret 1 runs off", ran.err)
    assert not (tmp_path / "out").exists()
