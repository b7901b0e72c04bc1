"""What do the commands say of themselves, and of words they do not know?"""

from __future__ import annotations

import re
import shlex

import pytest

from layout import __version__
from layout.cli import COMMANDS


def test_the_help_page_lists_every_command_and_status(run) -> None:
    ran = run("--help")
    assert (ran.status, ran.err) == (0, "")
    for name in COMMANDS:
        assert re.search(rf"^  {name} ", ran.out, re.MULTILINE)
    assert "0 done; 1 a job with faults" in ran.out
    assert run("-h").out == ran.out


def test_no_command_at_all_prints_the_help_page_and_is_wrong_usage(run) -> None:
    ran = run()
    assert ran.status == 2
    assert "Usage: stopwright" in ran.out + ran.err


def test_the_version_is_the_package_s(run) -> None:
    assert run("--version").out == f"stopwright, version {__version__}\n"


@pytest.mark.parametrize("name", COMMANDS)
def test_every_command_s_help_has_a_worked_line(run, name: str) -> None:
    ran = run(name, "--help")
    assert (ran.status, ran.err) == (0, "")
    assert ran.out.startswith(f"Usage: stopwright {name} ")
    assert f"Example: stopwright {name} " in " ".join(ran.out.split())


@pytest.mark.parametrize("name", ["new", "plan", "cut", "temperaments"])
def test_the_worked_line_runs(run, monkeypatch, tmp_path, examples, name: str) -> None:
    said = " ".join(run(name, "--help").out.replace("parlour-\n  cut", "parlour-cut").split())
    words = shlex.split(said.partition("Example: stopwright ")[2])
    stop = next(i for i, word in enumerate(words) if word in {"prints", "writes", ">"})
    (tmp_path / "parlour.yaml").write_bytes((examples / "parlour.yaml").read_bytes())
    monkeypatch.chdir(tmp_path)
    assert run(*words[:stop]).status == 0


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["plam", "job.yaml"], "plam"),
        (["plan", "--nope", "job.yaml"], "--nope"),
        (["plan"], "JOB"),
        (["plan", "job.yaml", "more.yaml"], "more.yaml"),
        (["cut", "job.yaml"], "--output"),
        (["temperaments", "nope"], "no record 'nope'; the records are alpha, "),
        (["temperaments", "equal-12", "--on", "long"], "a length is a number"),
        (["temperaments", "equal-12", "--on", "0"], "a length is above 0"),
        (["temperaments", "equal-12", "--on=-650"], "a length is above 0"),
        (["new", "nope"], "nope"),
    ],
)
def test_wrong_usage_ends_with_2(run, words: list[str], said: str) -> None:
    ran = run(*words)
    assert ran.status == 2
    assert ran.out == ""
    assert said in ran.err
    assert "Traceback" not in ran.err


def test_temperaments_are_listed_and_shown(run) -> None:
    listed = run("temperaments")
    assert (listed.status, listed.err) == (0, "")
    assert re.search(r"^  werckmeister-3 +12 +Werckmeister", listed.out, re.MULTILINE)
    shown = run("temperaments", "equal-12", "--on", "25 1/2 in")
    assert (shown.status, shown.err) == (0, "")
    # by hand: fret 12 halves 25.5 in = 647.7 mm
    assert re.search(r"^ +12 +1200\.000 +323\.850 +2$", shown.out, re.MULTILINE)


def test_temperaments_divide_650_mm_where_no_length_is_given(run) -> None:
    assert run("temperaments", "equal-12").out == run("temperaments", "equal-12", "--on=650").out
