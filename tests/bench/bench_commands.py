"""How long do the commands take, as multiples of importing the libraries they stand on?

Run it: ``python tests/bench/bench_commands.py``. Prints ratios of time, not seconds to rely on:
each is the quickest of several runs by the quickest of the same number of runs of the bare import,
all started in turn, so that a busy machine slows both alike. Compiled modules are kept, as they
are for a user after the first run.
"""

from __future__ import annotations

import json
import os
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path

import numpy as np

from layout.job.read import read_job
from layout.plan.laying import lay_out
from layout.plan.sounding import describe_strings
from layout.strings.balance import Balance, EndLines
from layout.strings.compensation import solve_compensation

RUNS = 15
PARLOUR = Path(__file__).parents[2] / "examples" / "parlour.yaml"
COMMAND_LINE = "from layout.cli import main; main()"
LIBRARIES = "import numpy, shapely, ezdxf, svgwrite, yaml, click"


def measure(runs: int = RUNS) -> dict[str, float]:
    """Time everything in turn; give ratios, and the seconds of the two bare imports."""
    with tempfile.TemporaryDirectory() as scratch:
        env = {name: value for name, value in os.environ.items() if "BYTECODE" not in name}
        env["PYTHONPYCACHEPREFIX"] = str(Path(scratch) / "compiled")

        def start(program: str, *words: str) -> Callable[[], None]:
            command = [sys.executable, "-c", program, *words]

            def run() -> None:
                subprocess.run(command, check=True, capture_output=True, env=env)

            return run

        cut = start(COMMAND_LINE, "cut", str(PARLOUR), "-o", str(Path(scratch) / "cut"), "--force")
        best = _best(
            {
                "libraries": start(LIBRARIES),
                "click": start("import click"),
                "plan": start(COMMAND_LINE, "plan", str(PARLOUR)),
                "cut": cut,
                "help": start(COMMAND_LINE, "--help"),
                "compensation": _compensate(),
            },
            runs,
        )
    return {
        "plan": best["plan"] / best["libraries"],
        "cut": best["cut"] / best["libraries"],
        "help": best["help"] / best["click"],
        "compensation": best["compensation"] / best["libraries"],
        "seconds_of_libraries": best["libraries"],
        "seconds_of_click": best["click"],
    }


def _best(programs: dict[str, Callable[[], None]], runs: int) -> dict[str, float]:
    for run in programs.values():
        run()
    best = dict.fromkeys(programs, float("inf"))
    for _ in range(runs):
        for name, run in programs.items():
            begun = time.perf_counter()
            run()
            best[name] = min(best[name], time.perf_counter() - begun)
    return best


def _compensate() -> Callable[[], None]:
    """The parlour's six strings, nut and saddle of each free, over frets 1 to 12."""
    instrument = read_job(PARLOUR)
    laid = lay_out(instrument)
    strung = describe_strings(instrument, laid)
    number = np.arange(1, instrument.frets.count + 1)
    weights = np.where(number <= 12, 1.0, 0.0) * np.ones_like(laid.own_mm)
    balance = Balance(laid.own_mm, laid.target_cents, weights)
    lines = laid.strings
    count = len(instrument.strings)
    ends = EndLines(lines.nut_mm, lines.bridge_mm, np.arange(count), np.zeros(count, bool))

    def solve() -> None:
        solve_compensation(
            strung.body, strung.lie, balance=balance, ends=ends, nut="each", saddle="each"
        )

    return solve


if __name__ == "__main__":
    print(json.dumps(measure(), indent=1))
