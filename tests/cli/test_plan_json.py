"""Are the keys of the JSON plan those its page fixes, and do its numbers agree with one another?

``plan_page.json`` is the example of the format's own page, its points and dots filled in.
"""

from __future__ import annotations

import hashlib
import json
import math
from pathlib import Path

import numpy as np
import pytest

PAGE = json.loads(Path(__file__).with_name("plan_page.json").read_text(encoding="utf-8"))
MM, CENTS = 2e-9, 2e-9
"""Two roundings to 1e-9."""

NAMES = ["bass", "five-line", "multiscale-seven", "nylon", "parlour"]


@pytest.fixture(params=NAMES)
def job(request, examples) -> Path:
    return examples / f"{request.param}.yaml"


@pytest.fixture
def plan(run, job: Path) -> dict:
    ran = run("plan", job, "--json")
    assert (ran.status, ran.err) == (0, "")
    return json.loads(ran.out, parse_constant=pytest.fail)


def lacking(page: object, found: object, place: str = "plan") -> list[str]:
    """Keys of the page that are not there, and values of another kind; null stands for any."""
    if found is None or page is None:
        return []
    kind = (int, float) if isinstance(page, (int, float)) else type(page)
    if not isinstance(found, kind):
        return [f"{place} is a {type(found).__name__}"]
    gaps: list[str] = []
    if isinstance(page, dict):
        gaps += [f"{place}.{key}" for key in page if key not in found]
        for key in page.keys() & found.keys():
            gaps += lacking(page[key], found[key], f"{place}.{key}")
    elif isinstance(page, list):
        for value in found:
            gaps += lacking(page[0], value, f"{place}[]")
    return gaps


def test_the_keys_are_those_of_the_page(plan: dict) -> None:
    assert lacking(PAGE, plan) == []


def test_a_lost_key_would_be_seen(plan: dict) -> None:
    del plan["frets"][3]["slot_edges"]
    plan["strings"][0]["nut"] = {"x": 1, "y": 2}
    assert sorted(lacking(PAGE, plan)) == [
        "plan.frets[].slot_edges",
        "plan.strings[].nut is a dict",
    ]


def test_head_and_order(plan: dict, job: Path) -> None:
    assert next(iter(plan)) == "format"
    assert plan["format"] == "stopwright-plan/1"
    assert plan["job_sha256"] == hashlib.sha256(job.read_bytes()).hexdigest()
    assert [string["number"] for string in plan["strings"]] == list(
        range(1, len(plan["strings"]) + 1)
    )
    assert [fret["number"] for fret in plan["frets"]] == list(range(1, len(plan["frets"]) + 1))


def test_five_lines_claim_nothing_about_pitch(run, examples) -> None:
    plan = json.loads(run("plan", examples / "five-line.yaml", "--json").out)
    assert plan["pitch"] is None
    assert plan["tension_total_n"] is None
    for string in plan["strings"]:
        assert string["tension_n"] is None
        assert string["height_at_nut"] is None
        assert (string["nut_shift"], string["setback"]) == (0, 0)


def test_strings_run_from_nut_to_saddle(plan: dict) -> None:
    for string in plan["strings"]:
        nut_line, bridge_line = (np.array(string[key]) for key in ("nut_line", "bridge_line"))
        run = bridge_line - nut_line
        assert math.hypot(*run) == pytest.approx(string["scale"], abs=MM)
        way = run / math.hypot(*run)
        assert string["nut"] == pytest.approx(nut_line + string["nut_shift"] * way, abs=MM)
        assert string["saddle"] == pytest.approx(bridge_line + string["setback"] * way, abs=MM)
        rise = (string["height_at_saddle"] or 0) - (string["height_at_nut"] or 0)
        between = math.dist(string["nut"], string["saddle"])
        assert string["speaking_length"] == pytest.approx(math.hypot(between, rise), abs=2 * MM)
    ys = [string["nut_line"][1] for string in plan["strings"]]
    assert ys == sorted(ys, reverse=True)  # string 1 is the treble one, treble is +y


def test_frets_lie_where_they_say(plan: dict) -> None:
    first, last = plan["strings"][0], plan["strings"][-1]
    width = plan["board"]["slot_width_finished"]
    for fret in plan["frets"]:
        treble, bass = (np.array(fret["ends"][side]) for side in ("treble", "bass"))
        way = (treble - bass) / math.dist(treble, bass)
        assert fret["angle"] == pytest.approx(math.degrees(math.atan2(way[0], way[1])), abs=1e-7)
        for point, string in zip(fret["points"], plan["strings"], strict=True):
            for through, along in ((bass, way), (string["nut_line"], None)):
                run = np.subtract(string["bridge_line"], string["nut_line"])
                line = run / string["scale"] if along is None else along
                gap = np.subtract(point, through)
                assert abs(gap[0] * line[1] - gap[1] * line[0]) < 2 * MM
        middle = bass - way * bass[1] / way[1]
        assert fret["at_centre"] == pytest.approx(middle[0], abs=2 * MM)
        half = width / (2 * math.cos(math.radians(fret["angle"])))
        assert fret["slot_edges"] == pytest.approx(
            [fret["at_centre"] - half, fret["at_centre"] + half], abs=MM
        )
        along = fret["along"]
        for key, index, string in (("treble_string", 0, first), ("bass_string", -1, last)):
            assert along[key] == pytest.approx(
                math.dist(fret["points"][index], string["nut_line"]), abs=MM
            )
        assert len(fret["pieces"]) == 1
        finished = math.dist(*fret["pieces"][0])
        assert finished <= fret["wire_length"] + MM < finished * 1.01
        assert fret["strings"] == [string["number"] for string in plan["strings"]]
        assert fret["label"] == str(fret["number"]) == str(fret["step"])


def test_equal_steps_divide_every_string(plan: dict) -> None:
    for index, string in enumerate(plan["strings"]):
        for fret in plan["frets"]:
            along = math.dist(fret["points"][index], string["nut_line"])
            # exact on these boards: parallel, or a fan with equal centres at both ends
            exact = string["scale"] * (1 - 2 ** (-fret["number"] / 12))
            assert along == pytest.approx(exact, abs=3e-9)


def test_errors_are_predicted_less_target(plan: dict) -> None:
    pitch = plan["pitch"]
    if pitch is None:
        assert plan["title"] == "Six-string"
        return
    shape = len(plan["strings"]), len(plan["frets"])
    target, predicted, error = (
        np.array(pitch[key], float) for key in ("target_cents", "predicted_cents", "error_cents")
    )
    assert target.shape == predicted.shape == error.shape == shape
    np.testing.assert_allclose(error, predicted - target, rtol=0, atol=CENTS)
    np.testing.assert_allclose(target, np.broadcast_to(100.0 * np.arange(1, shape[1] + 1), shape))
    assert pitch["rms_all_cents"] == pytest.approx(np.sqrt(np.mean(error**2)), abs=CENTS)
    worst = pitch["worst_all"]
    assert worst["cents"] == error[worst["string"] - 1, worst["fret"] - 1]
    assert abs(worst["cents"]) == np.abs(error).max()
    parts = sum(np.array(part, float) for part in pitch["parts"].values())
    np.testing.assert_allclose(parts, error, rtol=0, atol=1e-6)


@pytest.mark.parametrize(
    ("name", "last"), [("bass", 12), ("multiscale-seven", 17), ("nylon", 12), ("parlour", 12)]
)
def test_the_balanced_range_is_summed_up(run, examples, name: str, last: int) -> None:
    pitch = json.loads(run("plan", examples / f"{name}.yaml", "--json").out)["pitch"]
    error = np.array(pitch["error_cents"])[:, :last]
    assert pitch["rms_cents"] == pytest.approx(np.sqrt(np.mean(error**2)), abs=CENTS)
    assert abs(pitch["worst"]["cents"]) == np.abs(error).max()
    rungs = {(rung["nut"], rung["saddle"]): rung for rung in pitch["ladder"]}
    # every step of freedom leaves less error, and this plan no more than nothing at all
    falling = [
        rungs[key]["rms_cents"]
        for key in (("none", "none"), ("none", "straight"), ("none", "each"), ("each", "each"))
        if key in rungs
    ]
    assert falling == sorted(falling, reverse=True)
    assert pitch["rms_cents"] < rungs["none", "none"]["rms_cents"]
    assert all(rung["worst_cents"] >= rung["rms_cents"] for rung in pitch["ladder"])


def test_tensions_are_those_of_mass_length_and_pitch(plan: dict) -> None:
    if plan["pitch"] is None:
        assert plan["title"] == "Six-string"
        return
    tensions = [string["tension_n"] for string in plan["strings"]]
    assert plan["tension_total_n"] == pytest.approx(sum(tensions), abs=1e-8)
    for string in plan["strings"]:
        length, mass = string["speaking_length"] / 1000, string["unit_mass_g_per_m"] / 1000
        flexible = mass * (2 * length * string["hz"]) ** 2
        # stiffness lets a string reach its pitch with a little less
        assert 0.97 * flexible < string["tension_n"] < flexible


def test_nut_and_saddle_of_the_parlour(run, examples) -> None:
    plan = json.loads(run("plan", examples / "parlour.yaml", "--json").out)
    shifts = [string["nut_shift"] for string in plan["strings"]]
    assert plan["board"]["face"] == max(shifts)
    for string in plan["strings"]:
        assert string["file_back"] == pytest.approx(max(shifts) - string["nut_shift"], abs=MM)
        assert string["overhang"] == 0
    assert plan["saddle_strip"]["width"] <= plan["saddle_strip"]["limit"] == 2.4
    assert plan["board"]["slot_width_finished"] == pytest.approx(0.60)  # cutter plus runout
    assert plan["board"]["outline"][0][0] == pytest.approx(max(shifts), abs=MM)


def test_left_handed_numbers_are_the_right_handed_ones(run, examples, tmp_path) -> None:
    text = (examples / "bass.yaml").read_text(encoding="utf-8")
    right = tmp_path / "bass.yaml"
    right.write_text(text.replace("hand: left", "hand: right"), encoding="utf-8")
    plans = [json.loads(run("plan", job, "--json").out) for job in (examples / "bass.yaml", right)]
    assert [plan.pop("hand") for plan in plans] == ["left", "right"]
    for plan in plans:
        del plan["job_sha256"]
    assert plans[0] == plans[1]
