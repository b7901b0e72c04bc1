"""Where in the job file does a fault stand that planning or drawing found?"""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import replace

from layout.errors import Fault, JobError
from layout.instrument import Instrument

UNPLACED = "job"
"""The file that geometry names, which knows of none."""


@contextmanager
def placing_faults(instrument: Instrument) -> Iterator[None]:
    """Give faults raised inside the job file's name and the line of their key."""
    try:
        yield
    except JobError as error:
        raise JobError([_placed(fault, instrument) for fault in error.faults]) from error


def _placed(fault: Fault, instrument: Instrument) -> Fault:
    """The line is that of the key, or of the nearest key above it that the job has."""
    if fault.file != UNPLACED:
        return fault
    path = fault.path
    while path and path not in instrument.lines:
        path = path.rpartition(".")[0] or path.rpartition("[")[0]
    return replace(fault, file=instrument.file, line=instrument.lines.get(path))
