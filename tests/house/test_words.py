"""Do the pages say what is so, and do the files keep the house's rules?"""

from __future__ import annotations

import re
import subprocess
import tomllib
from pathlib import Path

import pytest

from layout.api import cut_job
from layout.cli import COMMANDS

LONGEST_FILE = 500

CUT_COMMAND = (
    "python3 -m venv .venv && .venv/bin/pip install . && "
    ".venv/bin/stopwright cut examples/parlour.yaml -o parlour-cut"
)
TEST_COMMAND = "python3 -m venv .venv && .venv/bin/pip install '.[test]' && .venv/bin/pytest"


@pytest.fixture(scope="module")
def readme(root: Path) -> str:
    return (root / "README.md").read_text(encoding="utf-8")


@pytest.fixture(scope="module")
def project(root: Path) -> dict:
    return tomllib.loads((root / "pyproject.toml").read_text(encoding="utf-8"))


@pytest.fixture(scope="module")
def tracked(root: Path) -> list[Path]:
    """Every file that is kept, as git tells it; where there is no git, all but caches."""
    ran = subprocess.run(
        ["git", "ls-files", "--cached", "--others", "--exclude-standard", "-z"],
        cwd=root, capture_output=True, check=False, text=True,
    )  # fmt: skip
    if ran.returncode == 0 and ran.stdout:
        found = [root / name for name in ran.stdout.split("\0") if name]
    else:
        places = ["layout", "temperaments", "examples", "tests", "README.md", "DEVELOPERS.md"]
        found = [path for place in places for path in [root / place, *(root / place).rglob("*")]]
    unkept = {"node_modules", "__pycache__"}
    return [path for path in found if path.is_file() and not unkept & set(path.parts)]


def rows(readme: str, heading: str) -> list[str]:
    """First cells of the table under a heading."""
    part = readme.partition(f"\n## {heading}\n")[2].partition("\n## ")[0]
    return [line.split("|")[1].strip() for line in part.splitlines() if line.startswith("| `")]


def test_the_two_commands_stand_in_the_readme(readme) -> None:
    lines = [line.strip() for line in readme.splitlines()]
    assert CUT_COMMAND in lines
    assert TEST_COMMAND in lines


def test_the_table_of_commands_names_them_all(readme) -> None:
    named = [re.match(r"`stopwright ([a-z]+)", cell)[1] for cell in rows(readme, "Commands")]
    assert sorted(named) == sorted(COMMANDS)


def test_the_table_of_files_names_all_that_cut_writes(readme, root, tmp_path) -> None:
    named = {name for cell in rows(readme, "The files") for name in re.findall(r"`(.+?)`", cell)}
    for job in sorted((root / "examples").iterdir()):
        cut = cut_job(job, tmp_path / job.stem)
        assert set(cut.sizes) - named == set(), job.name


def test_the_options_that_the_readme_tells_exist(readme, run_help) -> None:
    for name, option in re.findall(r"`stopwright ([a-z]+)[^`]*`[^\n]*?`(--[a-z]+)", readme):
        assert option in run_help(name), f"{name} {option}"


@pytest.fixture
def run_help(ask_afresh):
    program = "from layout.cli import main; main()"
    return lambda name: ask_afresh(program, name, "--help")


def test_jobs_in_the_readme_run(readme, tmp_path) -> None:
    blocks = re.findall(r"^```yaml\n(.*?)^```$", readme, re.MULTILINE | re.DOTALL)
    least, more = blocks
    assert least.count("\n") == 5
    job = tmp_path / "least.yaml"
    job.write_text(least, encoding="utf-8")
    assert cut_job(job, tmp_path / "least").plan.pitch is None
    kept = [line for line in least.splitlines() if not line.startswith("strings")]
    job.write_text("\n".join([*kept, more]), encoding="utf-8")
    assert cut_job(job, tmp_path / "more").plan.pitch is not None


def test_the_layers_the_readme_names_can_be_renamed_so(readme, root, tmp_path) -> None:
    line = re.search(r"`(layers: \{.*?\})`", readme)[1]
    job = tmp_path / "job.yaml"
    least = (root / "examples" / "five-line.yaml").read_text(encoding="utf-8")
    job.write_text(f"{least}{line}\n", encoding="utf-8")
    cut_job(job, tmp_path / "cut")


def test_the_wheel_carries_code_and_records(project, root) -> None:
    assert project["tool"]["hatch"]["build"]["targets"]["wheel"]["packages"] == [
        "layout",
        "temperaments",
    ]
    assert project["project"]["scripts"] == {"stopwright": "layout.cli:main"}
    for place in ("layout/py.typed", "layout/drawing/FONT_NOTICE.txt", "temperaments/__init__.py"):
        assert (root / place).is_file()
    assert len(list((root / "temperaments").glob("*.yaml"))) >= 8


def test_every_dependency_is_told_to_contributors(project, root) -> None:
    page = (root / "DEVELOPERS.md").read_text(encoding="utf-8").partition("## Dependencies")[2]
    for wanted in project["project"]["dependencies"]:
        assert re.match(r"[\w-]+", wanted)[0] in page


def test_the_levels_told_to_contributors_are_the_contract_s(project, root) -> None:
    page = (root / "DEVELOPERS.md").read_text(encoding="utf-8").partition("## The frame")[0]
    told = [line for line in page.splitlines() if re.match(r"\| \d ", line)]
    layers = project["tool"]["importlinter"]["contracts"][0]["layers"]
    held = [name for layer in layers for name in layer.split(" | ")]
    for name in held:
        assert any(re.search(rf"`layout/{name}(?:/|\.py)`", line) for line in told), name
    order = [
        next(i for i, line in enumerate(told) if re.search(rf"`layout/{name}(?:/|\.py)`", line))
        for name in held
    ]
    assert order == sorted(order)


def test_no_file_of_the_package_is_long(root) -> None:
    long = {
        str(path.relative_to(root)): count
        for path in (root / "layout").rglob("*.py")
        if (count := len(path.read_text(encoding="utf-8").splitlines())) > LONGEST_FILE
    }
    assert long == {}


def test_every_file_opens_with_what_it_answers(root) -> None:
    for path in (root / "layout").rglob("*.py"):
        text = path.read_text(encoding="utf-8")
        assert not text or re.match(r'r?"""[A-Za-z`]', text), path


def test_every_example_tells_a_number_known_by_hand(root) -> None:
    for path in (root / "examples").iterdir():
        assert "# Known by hand: " in path.read_text(encoding="utf-8"), path


# Written in two halves, so that this file does not hold what it looks for.
UNWANTED = re.compile(
    "|".join(
        [
            r"(?<![\w.])/(?:ho" + r"me|ro" + r"ot|wo" + r"rk|Us" + r"ers)/[\w.]",
            r"[A-Z]:\\Us" + r"ers",
            r"\bTO" + r"DO\b",
            r"\bFIX" + r"ME\b",
            r"\bXX" + r"X\b",
        ]
    )
)


def test_what_is_looked_for_would_be_found() -> None:
    for text in ("see /ho" + "me/mara/x", "# TO" + "DO later", "FIX" + "ME", "/ro" + "ot/.cache"):
        assert UNWANTED.search(text)
    for text in ("a/worker/b", "tests/readers", "layout/home.py", "method", "todo list"):
        assert not UNWANTED.search(text)


def test_no_file_holds_a_path_of_a_machine_or_a_note_to_self(tracked, root) -> None:
    assert len(tracked) > 100
    found = [
        f"{path.relative_to(root)}: {match[0]}"
        for path in tracked
        if (match := UNWANTED.search(path.read_bytes().decode("utf-8", "replace")))
    ]
    assert found == []
