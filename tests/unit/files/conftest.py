"""Plans of small jobs, made from their text."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from layout.job.read import read_job_text
from layout.plan.make import make_plan
from layout.plan.model import Plan

LEAST = {
    "title": "Six-string",
    "scale": "628.65",
    "strings": "[E4, B3, G3, D3, A2, E2]",
    "spread": "{nut: 36, saddle: 54}",
    "frets": "20",
}
STRUNG = {
    "strings": "[{note: E4, plain: steel, gauge: 0.012 in}, {note: B3, plain: steel, gauge: 0.4}]",
    "heights": "{nut: 0.5, saddle: 3}",
}


@pytest.fixture(scope="session")
def plan_of() -> Callable[..., Plan]:
    """Plan the least job with some keys replaced; ``strung`` adds gauges and heights first."""

    def make(*, strung: bool = False, **keys: str) -> Plan:
        job = LEAST | (STRUNG if strung else {}) | keys
        text = "".join(f"{key}: {value}\n" for key, value in job.items())
        return make_plan(read_job_text(text.encode(), "job.yaml"))

    return make
