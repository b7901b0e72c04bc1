"""Are jobs planned whose errors stay large whatever nut and saddle do?"""

from __future__ import annotations

import json

import pytest

BANJO = """\
title: Quarter tones on a short fifth string
scale: 660
strings:
  - {note: D4, plain: steel, gauge: 0.25}
  - {note: B3, plain: steel, gauge: 0.28}
  - {note: G3, plain: steel, gauge: 0.33}
  - {note: D3, wound: nickel, gauge: 0.5}
  - {note: G4, plain: steel, gauge: 0.25, starts_at: {fret: 5, behind: 3, step: 6}}
spread: {nut: 26, saddle: 40}
frets: {count: 15, temperament: equal-24}
heights: HEIGHTS
compensation: COMPENSATION
"""


@pytest.mark.parametrize(
    "settings",
    [
        ["heights.action.1=3"],
        ["heights={action: {1: 3, 12: 1.8}}", "compensation={nut: each, saddle: each}"],
        ["heights={nut: 1.5, saddle: 5}", "frets.temperament=equal-24"],
        ["heights={nut: 3, saddle: 5}", "frets.temperament=equal-24"],
        ["heights=steel", "frets.temperament=meantone-quarter-comma"],
    ],
)
def test_high_nuts_and_small_steps_are_planned(run, tmp_path, settings: list[str]) -> None:
    job = tmp_path / "job.yaml"
    job.write_text(run("new", "steel-six", *settings).out, encoding="utf-8")
    planned = run("plan", job, "--json")
    assert (planned.status, planned.err) == (0, "")
    rungs = {
        (rung["nut"], rung["saddle"]): rung["rms_cents"]
        for rung in json.loads(planned.out)["pitch"]["ladder"]
    }
    assert rungs["each", "each"] < rungs["none", "none"]
    assert rungs["none", "each"] < rungs["none", "none"]


@pytest.mark.parametrize(
    "heights", ["steel", "{action: {1: 0.52, 12: {treble: 1.25, bass: 2.48}}}"]
)
@pytest.mark.parametrize(
    "compensation",
    [
        "{nut: straight, saddle: none, frets: [1, 12]}",
        "{nut: straight, saddle: straight, frets: [5, 12]}",
        "{nut: each, saddle: each, saddle_thickness: 1}",
    ],
)
def test_a_short_string_in_quarter_tones_is_planned(
    run, tmp_path, heights: str, compensation: str
) -> None:
    job = tmp_path / "job.yaml"
    text = BANJO.replace("HEIGHTS", heights).replace("COMPENSATION", compensation)
    job.write_text(text, encoding="utf-8")
    planned = run("plan", job)
    assert (planned.status, planned.err) == (0, "")


def test_a_string_that_cannot_be_tuned_is_named(run, tmp_path) -> None:
    job = tmp_path / "job.yaml"
    made = run("new", "steel-six", "strings.2={note: B1, plain: steel, gauge: 4 mm}", "scale=100")
    job.write_text(made.out, encoding="utf-8")
    planned = run("plan", job)
    assert planned.status == 1
    assert "take a thinner or slacker string" in planned.err
    assert "string 2 " in planned.err
