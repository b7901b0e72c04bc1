"""How the commands are run: in this process for speed, or apart, as a user runs them."""

from __future__ import annotations

import os
import subprocess
import sys
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

import pytest

import layout
from layout.cli import main

ROOT = Path(layout.__file__).parents[1]
PROGRAM = "from layout.cli import main; main()"


@dataclass(frozen=True)
class Ran:
    """What a command left: its exit status, and what it wrote to either stream."""

    status: int
    out: str
    err: str


@pytest.fixture
def run(monkeypatch, capsys) -> Callable[..., Ran]:
    """Run ``stopwright`` with these words in this process."""

    def run_here(*words: str | Path) -> Ran:
        monkeypatch.setattr(sys, "argv", ["stopwright", *map(str, words)])
        capsys.readouterr()
        with pytest.raises(SystemExit) as ended:
            main()
        out, err = capsys.readouterr()
        return Ran(int(ended.value.code or 0), out, err)

    return run_here


@pytest.fixture(scope="session")
def apart() -> Callable[..., subprocess.Popen[str]]:
    """Start ``stopwright`` as a process of its own."""

    def start(*words: str | Path, **options) -> subprocess.Popen[str]:
        # What is held back until the end is how a user meets a full disk.
        env = {name: value for name, value in os.environ.items() if name != "PYTHONUNBUFFERED"}
        return subprocess.Popen(
            [sys.executable, "-c", options.pop("program", PROGRAM), *map(str, words)],
            env=env | {"PYTHONPATH": str(ROOT)},
            text=True,
            **({"stdout": subprocess.PIPE, "stderr": subprocess.PIPE} | options),
        )

    return start


@pytest.fixture(scope="session")
def examples() -> Path:
    return ROOT / "examples"


@pytest.fixture
def write_job(tmp_path: Path) -> Callable[..., Path]:
    """Write a job file: the five lines that run, with some of them replaced or added to."""
    least = {
        "title": "Six-string",
        "scale": "628.65",
        "strings": "[E4, B3, G3, D3, A2, E2]",
        "spread": "{nut: 36, saddle: 54}",
        "frets": "20",
    }

    def write(name: str = "job.yaml", **keys: str) -> Path:
        path = tmp_path / name
        lines = [f"{key}: {value}\n" for key, value in (least | keys).items()]
        path.write_text("".join(lines), encoding="utf-8")
        return path

    return write
