"""Does ``stopwright new`` print jobs that run as they are, with the keys that were set?"""

from __future__ import annotations

import json
import re

import pytest

from layout.api import starter_kinds


def test_without_a_kind_the_kinds_are_listed(run) -> None:
    ran = run("new")
    assert (ran.status, ran.err) == (0, "")
    assert [line.split()[0] for line in ran.out.splitlines()] == list(starter_kinds())
    assert "steel-six" in ran.out


@pytest.mark.parametrize("kind", starter_kinds())
def test_every_kind_runs_as_it_is(run, tmp_path, kind: str) -> None:
    made = run("new", kind)
    assert (made.status, made.err) == (0, "")
    assert made.out.count("#") >= 3  # it is commented
    job = tmp_path / "job.yaml"
    job.write_text(made.out, encoding="utf-8")
    planned = run("plan", job, "--json", "--strict")
    assert planned.status == 0, planned.err
    plan = json.loads(planned.out)
    assert plan["pitch"]["rms_cents"] < 2
    cut = run("cut", job, "-o", tmp_path / "cut", "--strict")
    assert cut.status == 0, cut.err


def test_keys_are_set_and_comments_stay(run, tmp_path) -> None:
    plain = run("new", "steel-six").out
    made = run("new", "steel-six", "scale=640", "frets.count=21", "strings.1.gauge=0.011 in")
    assert (made.status, made.err) == (0, "")
    assert len(re.findall("#", made.out)) == len(re.findall("#", plain))
    job = tmp_path / "job.yaml"
    job.write_text(made.out, encoding="utf-8")
    plan = json.loads(run("plan", job, "--json").out)
    assert len(plan["frets"]) == 21
    # by hand: fret 12 halves 640
    assert plan["frets"][11]["at_centre"] == pytest.approx(320.0, abs=1e-9)
    assert plan["strings"][0]["gauge"] == pytest.approx(0.011 * 25.4, abs=1e-9)


@pytest.mark.parametrize(
    ("setting", "status", "said"),
    [
        ("scale=0", 1, "steel-six.yaml:"),
        ("scale=0", 1, " scale: 0 is not allowed"),
        ("colour=red", 1, "colour: there is no such key"),
        ("scale", 2, "is no setting"),
        ("strings.9.gauge=1", 2, "none of its places"),
    ],
)
def test_a_setting_that_makes_no_job_prints_none(run, setting: str, status: int, said: str) -> None:
    ran = run("new", "steel-six", setting)
    assert (ran.status, ran.out) == (status, "")
    assert said in ran.err
    assert "Traceback" not in ran.err


def test_an_unknown_kind_names_those_there_are(run) -> None:
    ran = run("new", "nope")
    assert (ran.status, ran.out) == (2, "")
    assert "steel-six" in ran.err
