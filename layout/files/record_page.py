"""How is a temperament record written for a maker to read?"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Literal

from layout.files.columns import align
from layout.pitch.interval import Interval
from layout.pitch.temperament import Temperament

MOST_SHOWN = 24
"""Degrees shown of a record that never ends."""


Group = Literal["equal", "fifths", "ratios", "string fractions", "no octave"]
"""How a record is built; one without an octave is grouped by that, however it is written."""

_HEADINGS: dict[Group, str] = {
    "equal": "Equal steps of the octave",
    "fifths": "Chains of fifths",
    "ratios": "Ratios",
    "string fractions": "Fractions of the string",
    "no octave": "No octave",
}
_OCTAVE = Interval.of(2)


def record_group(record: Temperament) -> Group:
    """Return how a record is built, by its form and by whether it repeats at the octave.

    Cents listed one by one stand with the ratios. A rule that divides the string and a row of
    stops that ends below the octave stay with the fractions of the string.

    >>> from layout.pitch.temperament import equal
    >>> record_group(equal(12)), record_group(equal(13, period=3))
    ('equal', 'no octave')
    """
    if record.form in ("string", "rule"):
        return "string fractions"
    if record.period != _OCTAVE:
        return "no octave"
    if record.form == "equal":
        return "equal"
    return "fifths" if record.form == "fifths" else "ratios"


def render_record_list(records: Sequence[Temperament]) -> str:
    """List records under how they are built, by name, with how many notes and their title."""
    rows = [[record.name, _size(record), record.title] for record in records]
    header, *lines = align(["name", "notes", "title"], rows, left=3).splitlines()
    page = [header]
    for group, heading in _HEADINGS.items():
        pairs = zip(records, lines, strict=True)
        if members := [line for record, line in pairs if record_group(record) == group]:
            page += ["", heading, *members]
    return "\n".join(page) + "\n"


def render_record(record: Temperament, length_mm: float) -> str:
    """Write one record: source, cents of every degree, and its place on a length from the nut.

    Parameters
    ----------
    record
        The temperament.
    length_mm
        The length that is divided.

    """
    last = len(record.degrees) if record.period is not None else MOST_SHOWN
    if record.last_degree is not None:
        last = min(last, record.last_degree)
    rows = []
    for degree in range(last + 1):
        interval = record.interval(degree)
        name = str(record.notes[degree % len(record.notes)]) if record.notes else ""
        exact = interval.fraction
        rows.append(
            [
                str(degree),
                name,
                f"{interval.cents:.3f}",
                f"{interval.string_fraction * length_mm:.3f}",
                "" if exact is None or exact.denominator > 10**6 else str(exact),
            ]
        )
    keyed = (
        f"Keyed: counted from {record.notes[0]}, so strings differ fret by fret"
        if record.notes
        else "Counted from every open string"
    )
    head = [record.title, f"Source: {record.source}", keyed]
    if record.period is None:
        head.append("No period: it does not repeat at the octave or anywhere")
    table = align(["degree", "note", "cents", f"mm on {length_mm:g}", "ratio"], rows)
    return "\n".join([*head, "", table]) + "\n"


def _size(record: Temperament) -> str:
    return "endless" if record.step is not None else str(len(record.degrees))
