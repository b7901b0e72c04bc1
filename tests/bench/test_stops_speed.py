import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

import layout


@pytest.mark.bench
def test_whole_stops_are_a_hundred_times_faster(request):
    asked = request.config.getoption("markexpr") == "bench"
    if not (asked or request.config.getoption("benchmark_enable", default=False)):
        pytest.skip("prints ratios of time; run it with -m bench or --benchmark-enable")
    script = Path(__file__).with_name("bench_stops.py")
    # The script runs on its own, so it is told where this tree's package lies.
    beside = os.environ | {"PYTHONPATH": str(Path(layout.__file__).parents[1])}
    run = subprocess.run(
        [sys.executable, script], capture_output=True, text=True, check=True, env=beside
    )
    print(run.stdout)
    figures = json.loads(run.stdout)
    assert figures["pitches"] >= 1_000_000
    assert figures["ratio"] >= 100.0
    assert figures["largest_relative_difference"] <= 1e-9
