"""Do imports point one way, and does a command load no more than it needs?"""

from __future__ import annotations

import subprocess
import sys
import tomllib
from pathlib import Path

import pytest

HEAVY = {"numpy", "shapely", "ezdxf", "svgwrite", "yaml", "click", "HersheyFonts"}


def test_the_contracts_of_the_levels_hold(root: Path) -> None:
    pytest.importorskip("importlinter")
    ran = subprocess.run(
        [sys.executable, "-c", LINT, root / "pyproject.toml"],
        capture_output=True, check=False, text=True, timeout=120, cwd=root,
    )  # fmt: skip
    assert ran.returncode == 0, ran.stdout + ran.stderr
    project = tomllib.loads((root / "pyproject.toml").read_text(encoding="utf-8"))
    contracts = project["tool"]["importlinter"]["contracts"]
    assert f"{len(contracts)} kept, 0 broken" in ran.stdout


LINT = """
import sys
from importlinter.cli import lint_imports
sys.path.insert(0, ".")
sys.exit(lint_imports(config_filename=sys.argv[1], no_cache=True))
"""

LOADED = """
import sys
from contextlib import redirect_stdout
from io import StringIO
sys.argv = ["stopwright", *sys.argv[1:]]
with redirect_stdout(StringIO()):
    try:
        {what}
    except SystemExit as ended:
        assert not ended.code, ended.code
print(*sorted({{name.partition(".")[0] for name in sys.modules}}))
"""


def loaded(ask_afresh, what: str, *words: str | Path) -> set[str]:
    return HEAVY & set(ask_afresh(LOADED.format(what=what), *words).split())


COMMAND_LINE = "from layout.cli import main; main()"


def test_a_bare_import_loads_nothing(ask_afresh) -> None:
    assert loaded(ask_afresh, "import layout") == set()


@pytest.mark.parametrize("words", [["--help"], ["--version"]])
def test_the_help_page_loads_click_alone(ask_afresh, words) -> None:
    assert loaded(ask_afresh, COMMAND_LINE, *words) == {"click"}


@pytest.mark.parametrize("more", [[], ["--json"]])
def test_a_plan_loads_no_drawing(ask_afresh, root, more) -> None:
    job = root / "examples" / "parlour.yaml"
    assert loaded(ask_afresh, COMMAND_LINE, "plan", job, *more) == {
        "click", "numpy", "shapely", "yaml",
    }  # fmt: skip


def test_a_cut_loads_it_all(ask_afresh, root, tmp_path) -> None:
    job = root / "examples" / "five-line.yaml"
    assert loaded(ask_afresh, COMMAND_LINE, "cut", job, "-o", tmp_path / "cut") == HEAVY


def test_temperaments_load_no_geometry(ask_afresh) -> None:
    program = LOADED.format(what=COMMAND_LINE) + "print(*sys.modules)"
    said = ask_afresh(program, "temperaments").split()
    assert [name for name in said if name.startswith(("layout.plan", "layout.drawing"))] == []
    assert "shapely" not in said


ALONE = """
import importlib, pkgutil, sys
import layout
names = [found.name for found in pkgutil.walk_packages(layout.__path__, "layout.")]
for name in ["layout", *names]:
    for known in [each for each in sys.modules if each.partition(".")[0] == "layout"]:
        del sys.modules[known]
    importlib.import_module(name)
    print(name)
"""


def test_every_module_can_be_imported_alone(ask_afresh, root) -> None:
    imported = set(ask_afresh(ALONE).split())
    files = {
        ".".join(path.relative_to(root).with_suffix("").parts).removesuffix(".__init__")
        for path in (root / "layout").rglob("*.py")
    }
    assert imported == files
