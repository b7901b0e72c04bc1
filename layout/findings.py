"""What is doubtful but legal: coded findings, apart from errors."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

Severity = Literal["note", "warning", "error"]


@dataclass(frozen=True, slots=True)
class Finding:
    """A doubtful point of a job: what it is, where, how much, and what to do.

    Attributes
    ----------
    code
        A code in words, such as ``slot-narrower-than-cutter``.
    severity
        ``note`` informs, ``warning`` fails under ``--strict``, ``error`` spoils the work.
    text
        One or two sentences a maker reads; ends with what to do.
    string, fret
        Numbers from 1 where they apply.
    amount, unit
        The figure behind the finding and its unit.

    """

    code: str
    severity: Severity
    text: str
    string: int | None = None
    fret: int | None = None
    amount: float | None = None
    unit: str | None = None


@dataclass(frozen=True, slots=True)
class Assumed:
    """A value the job left out and the product filled in."""

    key: str
    value: str
