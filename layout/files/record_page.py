"""How is a temperament record written for a maker to read?"""

from __future__ import annotations

from collections.abc import Sequence

from layout.files.columns import align
from layout.pitch.temperament import Temperament

MOST_SHOWN = 24
"""Degrees shown of a record that never ends."""


def render_record_list(records: Sequence[Temperament]) -> str:
    """List records by name, with how many notes they have and their title."""
    rows = [[record.name, _size(record), record.title] for record in records]
    return align(["name", "notes", "title"], rows, left=3) + "\n"


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
    return str(len(record.degrees)) if record.period is not None else "endless"
