"""Does every example run, and give the number its own comment says is known by hand?"""

from __future__ import annotations

import math
import os
import re
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import pytest

import layout
from layout.api import cut_job, describe_plan

ROOT = Path(layout.__file__).parents[1]
EXAMPLES = sorted((ROOT / "examples").iterdir())
FILES = {"board.dxf", "board.svg", "job.yaml", "plan.json", "positions.csv"}
"""What is written for every job; there may be more."""


def _from_zero(fret: int) -> Callable[[dict], float]:
    return lambda plan: plan["frets"][fret - 1]["at_centre"]


def _along_treble(fret: int) -> Callable[[dict], float]:
    return lambda plan: plan["frets"][fret - 1]["along"]["treble_string"]


KNOWN: dict[str, tuple[str, float, Callable[[dict], float]]] = {
    "bass.yaml": ("648", 864 * 3 / 4, _from_zero(24)),
    "five-line.yaml": ("314.325", 628.65 / 2, _from_zero(12)),
    "multiscale-seven.yaml": ("485.775", 647.7 * 3 / 4, _along_treble(24)),
    "nylon.yaml": ("325", 650 / 2, _from_zero(12)),
    "parlour.yaml": ("314.325", 628.65 / 2, _from_zero(12)),
}
"""For every example the number its comment tells, the sum behind it, and where the plan has it."""


@pytest.fixture(scope="module")
def cuts(tmp_path_factory) -> dict[str, tuple[dict, Path]]:
    """Every example, cut once: its plan and the directory of its files."""
    top = tmp_path_factory.mktemp("cuts")
    return {
        job.name: (describe_plan(cut_job(job, top / job.stem).plan), top / job.stem)
        for job in EXAMPLES
    }


@pytest.fixture(params=EXAMPLES, ids=lambda path: path.stem)
def job(request) -> Path:
    return request.param


def test_every_example_has_its_number() -> None:
    assert [job.name for job in EXAMPLES] == sorted(KNOWN)


def test_the_number_known_by_hand(job: Path, cuts) -> None:
    said, by_hand, look_up = KNOWN[job.name]
    comment = " ".join(re.findall(r"^# ?(.*)", job.read_text(encoding="utf-8"), re.MULTILINE))
    assert "Known by hand: " in comment
    assert f" {said} mm" in comment.partition("Known by hand: ")[2]
    assert float(said) == pytest.approx(by_hand, abs=1e-9)
    assert look_up(cuts[job.name][0]) == pytest.approx(by_hand, abs=2e-9)


def test_nothing_more_than_notes_is_found(job: Path, cuts) -> None:
    plan, _ = cuts[job.name]
    assert [found for found in plan["findings"] if found["severity"] != "note"] == []


def test_the_files_are_all_there(job: Path, cuts) -> None:
    _, directory = cuts[job.name]
    assert {path.name for path in directory.iterdir()} >= FILES
    assert (directory / "job.yaml").read_bytes() == job.read_bytes()


def test_the_table_s_places_are_the_plan_s(job: Path, cuts) -> None:
    plan, directory = cuts[job.name]
    lines = (directory / "positions.csv").read_text(encoding="utf-8").splitlines()[1:]
    rows = [line for line in lines if not line.startswith("0,")]  # a zero fret stands on zero
    assert len(rows) == len(plan["frets"])
    for row, fret in zip(rows, plan["frets"], strict=True):
        number, _, at_centre = row.split(",")[:3]
        assert int(number) == fret["number"]
        assert math.isclose(float(at_centre), fret["at_centre"], abs_tol=0.0005001)


CUT_ALL = """
import sys
from pathlib import Path
from layout.api import cut_job
for job in sys.argv[2:]:
    cut_job(Path(job), Path(sys.argv[1]) / Path(job).stem)
"""


def test_the_same_bytes_whatever_the_surroundings(cuts, tmp_path) -> None:
    surroundings = [
        {"PYTHONHASHSEED": "1", "TZ": "Pacific/Kiritimati", "LC_ALL": "C"},
        {"PYTHONHASHSEED": "4242", "TZ": "America/St_Johns", "LC_ALL": "tr_TR.UTF-8"},
    ]
    for number, changed in enumerate(surroundings):
        top, elsewhere = tmp_path / f"cuts-{number}", tmp_path / f"elsewhere-{number}"
        top.mkdir()
        elsewhere.mkdir()
        env = os.environ | {"PYTHONPATH": str(ROOT)} | changed
        subprocess.run(
            [sys.executable, "-c", CUT_ALL, top, *EXAMPLES],
            check=True, cwd=elsewhere, env=env, timeout=120,
        )  # fmt: skip
        for _, directory in cuts.values():
            for path in directory.iterdir():
                assert path.read_bytes() == (top / directory.name / path.name).read_bytes(), path


def test_one_example_through_the_real_command(cuts, tmp_path) -> None:
    run = subprocess.run(
        [sys.executable, "-c", "from layout.cli import main; main()",
         "cut", ROOT / "examples" / "parlour.yaml", "-o", tmp_path / "cut"],
        check=True, capture_output=True, text=True, timeout=120,
        env=os.environ | {"PYTHONPATH": str(ROOT)},
    )  # fmt: skip
    _, directory = cuts["parlour.yaml"]
    told = {Path(line).name for line in run.stdout.splitlines()}
    assert told == {path.name for path in directory.iterdir()}
    for name in told:
        assert (tmp_path / "cut" / name).read_bytes() == (directory / name).read_bytes()
