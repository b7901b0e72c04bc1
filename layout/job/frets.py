"""How many stops does the board have, which pitches do they sound, and how are they laid?"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from itertools import pairwise
from typing import Literal

from layout.errors import PitchError
from layout.instrument import Frets, MultiScale, Reference, StringSpec
from layout.job import ranges
from layout.job.cursor import Table
from layout.job.places import NOT_LABELS, Places
from layout.job.records import load_library_record, take_temperament
from layout.pitch.targets import nearest_degree
from layout.pitch.temperament import Temperament

FRET_KEYS = (
    "count", "temperament", "key", "from", "steps", "labels", "kind", "placing", "slant",
    "favour", "only",
)  # fmt: skip

Kind = Literal["slotted", "tied", "lines"]
KINDS: tuple[Kind, ...] = ("slotted", "tied", "lines")
PLACINGS: tuple[Literal["divided", "straight", "each"], ...] = ("divided", "straight", "each")
Slant = Literal["square", "free"]
SLANTS: tuple[Slant, ...] = ("square", "free")
COUNTED_FROM: tuple[Literal["key", "open"], ...] = ("key", "open")

LONGEST_LABEL = 12
DEFAULT_TEMPERAMENT = "equal-12"
_STEPS_RULE = f"steps is a list of 1 to {ranges.MOST_FRETS} degrees"


@dataclass(frozen=True, slots=True)
class FretRow:
    """Labels and degrees of the stops, before strings are looked at."""

    table: Table
    labels: tuple[str, ...]
    steps: tuple[int, ...]
    kind: Kind
    labels_known: bool = True


def read_fret_row(root: Table) -> FretRow | None:
    """Read count, labels, steps and kind of the stops; None where nothing can be read."""
    cursor = root.need("frets", "the frets are missing", "write frets: 20")
    if cursor is None:
        return None
    if not cursor.is_table:
        if cursor.is_list:
            cursor.fault("frets is a count, or a mapping with count, temperament and so on")
            return None
        root.reading.assume("frets.kind", "slotted")
        table = Table({}, cursor.path, cursor.line, cursor.reading)
        return _row(table, cursor.whole(ranges.FRET_COUNT), "slotted")
    known = cursor.table(FRET_KEYS)
    if known is None:
        return None
    kind = known.word("kind", KINDS, default="slotted")
    return _row(known, _read_count(known), kind)


def _row(table: Table, count: int | None, kind: Kind) -> FretRow:
    steps, labels = _read_steps(table), _read_labels(table, count)
    numbers = range(1, (count or 1) + 1)
    return FretRow(
        table,
        labels or tuple(str(number) for number in numbers),
        steps or tuple(numbers),
        kind,
        labels_known=count is not None and (labels is not None or "labels" not in table),
    )


def _read_count(table: Table) -> int | None:
    """Read the count, given or from the steps."""
    count_at, steps_at = table.at("count"), table.at("steps")
    count = count_at.whole(ranges.FRET_COUNT) if count_at else None
    if count_at and count is None:
        return None
    from_steps = None
    if steps_at is not None:
        items = steps_at.items(_STEPS_RULE, least=1, most=ranges.MOST_FRETS)
        from_steps = None if items is None else len(items)
        if count_at and from_steps not in (None, count):
            count_at.fault(f"there are {from_steps} steps", "leave the count out, or match it")
            return None
    if count_at is None and steps_at is None:
        table.wrong("the number of frets is missing", "write count: 20", key="count")
    return count if count is not None else from_steps


def _read_steps(table: Table) -> tuple[int, ...] | None:
    cursor = table.at("steps")
    items = cursor.items(_STEPS_RULE, least=1, most=ranges.MOST_FRETS) if cursor else None
    if items is None:
        return None
    taken = [(item, item.whole(ranges.FRET_STEP)) for item in items]
    known = [(item, step) for item, step in taken if step is not None]
    for (_, below), (item, above) in pairwise(known):
        if above <= below:
            item.fault(f"steps rise; the one before is {below}")
    return tuple(step for _, step in known) if len(known) == len(taken) else None


def _read_labels(table: Table, count: int | None) -> tuple[str, ...] | None:
    cursor = table.at("labels")
    rule = (
        "labels is a list of short texts" if count is None else f"{count} frets have {count} labels"
    )
    items = cursor.items(rule, least=count or 0, most=count) if cursor else None
    if items is None:
        return None
    labels: list[str] = []
    for item in items:
        label = item.text("a label is a short text", most=LONGEST_LABEL)
        if label is None:
            continue
        if label in NOT_LABELS:
            item.fault("this names a place that is no fret", "choose another label")
        elif label in labels:
            item.fault(f"labels differ; fret {labels.index(label) + 1} has this one")
        labels.append(label)
    return tuple(labels) if len(set(labels)) == len(items) else None


def read_frets(
    row: FretRow, places: Places, *, reference: Reference, scale: object
) -> Frets | None:
    """Read temperament, placing and pitch choices, and check them against the strings."""
    table = row.table
    temperament = _read_temperament(table)
    counted_from = _read_counted_from(table, temperament)
    placing = table.word("placing", PLACINGS, default="divided")
    usual: Slant = "free" if isinstance(scale, MultiScale) else "square"
    slant = table.word("slant", SLANTS, default=usual)
    favour = _read_favour(table, places)
    only = _read_only(table, places)
    if temperament is None or counted_from is None:
        return None
    _check_reach(table, temperament, row)
    if counted_from == "key" and temperament.keyed:
        _check_spelling(table, temperament, places.strings, reference)
    return Frets(
        count=len(row.labels),
        temperament=temperament,
        counted_from=counted_from,
        labels=row.labels,
        steps=row.steps,
        kind=row.kind,
        placing=placing,
        slant=slant,
        favour=favour,
        only=only,
    )


def _read_temperament(table: Table) -> Temperament | None:
    """Read the temperament and move it to its key."""
    cursor, key_at = table.at("temperament"), table.at("key")
    if cursor is None:
        table.reading.assume(table.under("temperament"), DEFAULT_TEMPERAMENT)
        temperament: Temperament | None = load_library_record(DEFAULT_TEMPERAMENT)
    else:
        temperament = take_temperament(cursor)
    key = key_at.note_name() if key_at else None
    if temperament is None or key is None or key_at is None:
        return temperament
    try:
        return temperament.keyed_from(key)
    except PitchError as error:
        key_at.fault(str(error))
        return None


def _read_counted_from(
    table: Table, temperament: Temperament | None
) -> Literal["key", "open"] | None:
    if temperament is None:
        cursor = table.at("from")
        return cursor.word(COUNTED_FROM) if cursor else "open"
    default: Literal["key", "open"] = "key" if temperament.keyed else "open"
    taken = table.word("from", COUNTED_FROM, default=default)
    if taken == "key" and not temperament.keyed:
        table.wrong(
            f"{temperament.name} names no notes, so it has no key", "add key: C", key="from"
        )
    if taken == "open" and "key" in table:
        table.wrong("a record counted from every open string has no key", "leave it out", key="key")
    return taken


def _check_reach(table: Table, temperament: Temperament, row: FretRow) -> None:
    last = temperament.last_degree
    if last is not None and row.steps[-1] > last:
        key = next((key for key in ("steps", "count") if key in table), "")
        table.wrong(
            f"{temperament.name} ends at degree {last}; the last fret needs degree {row.steps[-1]}",
            "have fewer frets, or take a record that repeats",
            key=key,
        )


def _check_spelling(
    table: Table,
    temperament: Temperament,
    strings: tuple[StringSpec, ...] | None,
    reference: Reference,
) -> None:
    """Record a fault for every open note (and the reference) the record does not spell."""
    try:
        temperament.degree_of(reference.note)
    except PitchError as error:
        table.wrong(f"the reference: {error}", "give a reference the record has",
                    key="temperament")  # fmt: skip
        return
    for number, string in enumerate(strings or (), start=1):
        try:
            if string.note is not None:
                temperament.degree_of(string.note)
            elif string.hz is not None:
                nearest_degree(temperament, string.hz, reference_note=reference.note,
                               reference_hz=reference.hz)  # fmt: skip
        except PitchError as error:
            table.wrong(f"string {number}: {error}", "respell the note, or choose another key",
                        key="temperament")  # fmt: skip


def _read_favour(
    table: Table, places: Places
) -> Mapping[int, Literal["flat", "sharp"] | tuple[int, ...]]:
    """Read which pitch wins where the strings of a fret disagree."""
    cursor = table.at("favour")
    rule = "favour is a mapping {fret: flat, sharp or a list of strings}"
    favour: dict[int, Literal["flat", "sharp"] | tuple[int, ...]] = {}
    for number, value in places.by_fret(cursor, rule) if cursor else []:
        if value.is_word("flat"):
            favour[number] = "flat"
        elif value.is_word("sharp"):
            favour[number] = "sharp"
        elif value.is_list:
            favour[number] = places.string_numbers(value) or ()
        else:
            value.fault("flat, sharp or a list of strings stands here")
    return favour


def _read_only(table: Table, places: Places) -> Mapping[int, tuple[int, ...]]:
    """Read which strings a partial fret serves."""
    cursor = table.at("only")
    rule = "only is a mapping {fret: [strings]}"
    found = places.by_fret(cursor, rule) if cursor else []
    return {number: places.string_numbers(value) or () for number, value in found}
