"""Where the tree is, and how a fresh interpreter is asked about it."""

from __future__ import annotations

import os
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import pytest

import layout


@pytest.fixture(scope="session")
def root() -> Path:
    return Path(layout.__file__).parents[1]


@pytest.fixture(scope="session")
def ask_afresh(root: Path, tmp_path_factory) -> Callable[..., str]:
    """Run a piece of Python in an interpreter of its own; give what it prints."""
    # Compiled modules are kept from one to the next, but not in the tree.
    kept = {name: value for name, value in os.environ.items() if "BYTECODE" not in name}
    kept["PYTHONPYCACHEPREFIX"] = str(tmp_path_factory.mktemp("compiled"))
    kept["PYTHONPATH"] = str(root)

    def ask(program: str, *words: str | Path) -> str:
        ran = subprocess.run(
            [sys.executable, "-W", "error", "-c", program, *words],
            capture_output=True,
            check=False,
            text=True,
            timeout=120,
            cwd=root,
            env=kept,
        )
        assert ran.returncode == 0, ran.stderr
        return ran.stdout

    return ask
