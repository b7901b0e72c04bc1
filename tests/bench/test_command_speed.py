import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

import layout

MOST = {"plan": 0.8, "cut": 2.0, "help": 1.6, "compensation": 0.05}
"""A plan as a multiple of importing the libraries, and so on: see the script."""


@pytest.mark.bench
def test_commands_take_little_more_than_their_libraries(request):
    asked = request.config.getoption("markexpr") == "bench"
    if not (asked or request.config.getoption("benchmark_enable", default=False)):
        pytest.skip("prints ratios of time; run it with -m bench or --benchmark-enable")
    script = Path(__file__).with_name("bench_commands.py")
    # The script runs on its own, so it is told where this tree's package lies.
    beside = os.environ | {"PYTHONPATH": str(Path(layout.__file__).parents[1])}
    run = subprocess.run(
        [sys.executable, script], capture_output=True, text=True, check=True, env=beside
    )
    print(run.stdout)
    figures = json.loads(run.stdout)
    assert {name: figures[name] for name in MOST if figures[name] > MOST[name]} == {}
