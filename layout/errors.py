"""What can go wrong: the exception tree and the faults a job file may have."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass


class StopwrightError(Exception):
    """Root of every error this package raises on purpose."""


class TextError(StopwrightError, ValueError):
    """A piece of text breaks the grammar of a length, ratio, note or the like.

    Parameters
    ----------
    rule
        What is allowed, as half a sentence: ``"a length is a number, with or without a unit"``.
    remedy
        What to write instead; may be empty.

    """

    def __init__(self, rule: str, remedy: str = "") -> None:
        super().__init__(f"{rule}; {remedy}" if remedy else rule)
        self.rule = rule
        self.remedy = remedy


@dataclass(frozen=True, slots=True)
class Fault:
    """One thing wrong in a file: place, value, rule, remedy.

    >>> str(Fault("parlour.yaml", 14, "strings[2].gauge", "0",
    ...           "a plain string needs 0.05 to 5 mm"))
    'parlour.yaml:14 strings[2].gauge: 0 is not allowed; a plain string needs 0.05 to 5 mm'
    """

    file: str
    line: int | None
    path: str
    value: str | None
    rule: str
    remedy: str = ""

    def __str__(self) -> str:
        place = self.file if self.line is None else f"{self.file}:{self.line}"
        where = f"{place} {self.path}".rstrip()
        said = self.rule if self.value is None else f"{self.value} is not allowed; {self.rule}"
        tail = f"; {self.remedy}" if self.remedy else ""
        return f"{where}: {said}{tail}"


class JobError(StopwrightError, ValueError):
    """A job (or record) file has faults; all of them are listed, in file order."""

    def __init__(self, faults: Sequence[Fault]) -> None:
        self.faults = tuple(faults)
        super().__init__("\n".join(str(fault) for fault in self.faults))


class PitchError(StopwrightError, ValueError):
    """A temperament has no such degree, note or key."""


class NoSolutionError(StopwrightError, ArithmeticError):
    """An iteration did not end: carries the bracket, the count and the last value reached."""

    def __init__(
        self,
        question: str,
        *,
        iterations: int,
        last: float,
        bracket: tuple[float, float] | None = None,
    ) -> None:
        self.question = question
        self.iterations = iterations
        self.last = last
        self.bracket = bracket
        span = "" if bracket is None else f" between {bracket[0]:.9g} and {bracket[1]:.9g}"
        super().__init__(
            f"{question}: no solution{span} after {iterations} steps (last value {last:.9g})"
        )


class ProofError(StopwrightError):
    """A drawing, read back from its bytes, does not hold what was planned."""


class FileError(StopwrightError, OSError):
    """A file or directory could not be read or written."""
