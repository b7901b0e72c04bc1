"""Jobs that run, and what the reader says about others."""

from collections.abc import Callable
from pathlib import Path

import pytest

from layout.errors import JobError
from layout.instrument import Instrument
from layout.job.read import read_job_text

HERE = Path(__file__).parent


@pytest.fixture(scope="session")
def five() -> str:
    return (HERE / "five.yaml").read_text(encoding="utf-8")


@pytest.fixture(scope="session")
def full() -> str:
    return (HERE / "full.yaml").read_text(encoding="utf-8")


@pytest.fixture(scope="session")
def read() -> Callable[[str], Instrument]:
    return lambda text: read_job_text(text.encode(), "job.yaml")


@pytest.fixture(scope="session")
def faults() -> Callable[[str | bytes], list[str]]:
    """Give what the reader says against a job, one line a fault; empty where it reads."""

    def told(text: str | bytes) -> list[str]:
        data = text.encode() if isinstance(text, str) else text
        try:
            read_job_text(data, "job.yaml")
        except JobError as error:
            found = error
        else:
            return []
        assert [str(fault) for fault in found.faults] == str(found).split("\n")
        return [str(fault) for fault in found.faults]

    return told
