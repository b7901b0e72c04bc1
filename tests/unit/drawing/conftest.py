"""Plans of small jobs, for the tests of drawings."""

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


def plan_of(**keys: str) -> Plan:
    text = "".join(f"{key}: {value}\n" for key, value in (LEAST | keys).items())
    return make_plan(read_job_text(text.encode(), "job.yaml"))


@pytest.fixture(scope="session")
def plan_job() -> Callable[..., Plan]:
    """Give ``plan_job(**keys)``: the plan of the least job with keys added or replaced."""
    return plan_of
