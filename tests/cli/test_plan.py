"""What does ``stopwright plan`` print for a maker, and where?"""

from __future__ import annotations

import json
import re

import pytest

OWN_RECORD = """\
name: own
title: Two equal steps to the octave
source: this test
period: 2
equal: 2
"""

HEADS = ["STRINGS", "NUT AND SADDLE", "FRETS", "ERRORS", "CHOICES", "ASSUMED", "FINDINGS",
         "CAUTIONS"]  # fmt: skip


def heads(page: str) -> list[str]:
    return [match[1] for match in re.finditer(r"^([A-Z]{3}[A-Z ]*[A-Z])\b", page, re.MULTILINE)]


def test_the_page_has_its_parts_in_order(run, examples) -> None:
    ran = run("plan", examples / "parlour.yaml")
    assert (ran.status, ran.err) == (0, "")
    assert [head for head in heads(ran.out) if head in HEADS] == HEADS
    assert ran.out.startswith("Parlour guitar, six strings\n")
    assert "\t" not in ran.out
    assert [line for line in ran.out.splitlines() if line != line.rstrip()] == []


def test_a_geometry_job_prints_no_errors_and_says_so(run, examples) -> None:
    ran = run("plan", examples / "five-line.yaml")
    assert set(HEADS) - set(heads(ran.out)) == {"ERRORS", "CHOICES"}
    assert "no-claim-about-pitch" in ran.out


def test_fret_12_of_the_parlour_halves_the_scale(run, examples) -> None:
    page = run("plan", examples / "parlour.yaml").out
    row = next(line.split() for line in page.splitlines() if re.match(r" +12 +314", line))
    # by hand: 628.65 / 2, and half of 0.58 + 0.02 mm either side
    assert row[1] == "314.325"
    assert row[4:6] == ["314.025", "314.625"]


def test_inch_adds_decimals_and_the_nearest_64th(run, examples) -> None:
    plain = run("plan", examples / "parlour.yaml").out
    page = run("plan", examples / "parlour.yaml", "--inch").out
    row = next(line for line in page.splitlines() if re.match(r" +12 +314", line))
    # by hand: 314.325 mm is 12.375 in, exactly 12 3/8
    assert " 12.3750 " in row
    assert " 12 3/8 in " in row
    first = next(line for line in page.splitlines() if re.match(r" +1 +35\.283 ", line))
    # by hand: 35.28347 mm is 1.3891 in; 1 25/64 in is 35.321875 mm
    assert re.search(r" 1\.3891 +1 25/64 in +-0\.038 ", first)
    assert "1/64" not in plain
    assert "12.3750" not in plain


def test_json_is_the_same_with_and_without_inch(run, examples) -> None:
    job = examples / "parlour.yaml"
    assert run("plan", job, "--json").out == run("plan", job, "--json", "--inch").out


NARROW = {
    "tooling": "{machine: router, cutter: 0.8}",
    "wire": "{tang: 0.53}",
}


@pytest.mark.parametrize("more", [(), ("--json",)])
def test_strict_fails_on_warnings_after_printing(run, write_job, more) -> None:
    job = write_job(**NARROW)
    easy = run("plan", job, *more)
    assert (easy.status, easy.err) == (0, "")
    assert "slot-narrower-than-cutter" in easy.out
    ran = run("plan", job, "--strict", *more)
    assert ran.status == 1
    assert ran.out == easy.out
    lines = ran.err.splitlines()
    assert lines[0].startswith("error   slot-narrower-than-cutter: ")
    assert lines[-1] == f"--strict: {len(lines) - 1} findings are warnings or errors"


def test_strict_lets_notes_pass(run, examples) -> None:
    for name in ("five-line", "bass"):
        ran = run("plan", examples / f"{name}.yaml", "--strict")
        assert (ran.status, ran.err) == (0, "")
        assert "\n  note    " in ran.out


def test_a_record_beside_the_job_is_found_from_anywhere(
    run, write_job, tmp_path, monkeypatch
) -> None:
    (tmp_path / "own.yaml").write_text(OWN_RECORD, encoding="utf-8")
    job = write_job(frets="{count: 4, temperament: own.yaml}")
    elsewhere = tmp_path / "elsewhere"
    elsewhere.mkdir()
    monkeypatch.chdir(elsewhere)
    plan = run("plan", job, "--json")
    assert plan.status == 0, plan.err
    # by hand: two equal steps to the octave: the second halves 628.65
    assert json.loads(plan.out)["frets"][1]["at_centre"] == pytest.approx(314.325)
    cut = run("cut", job, "-o", "out")
    assert cut.status == 0, cut.err
    assert (elsewhere / "out" / "plan.json").read_text("ascii") == plan.out
