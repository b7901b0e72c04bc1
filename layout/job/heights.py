"""How high do the strings run above the crowns?

Given at two frets, at nut and saddle, or as a named row of figures.
"""

from __future__ import annotations

from dataclasses import dataclass

from layout.instrument import ActionGaps, EndHeights, Heights, PerString, Same, Sides
from layout.job import ranges
from layout.job.cursor import Cursor, Table, figure
from layout.job.places import Places

HEIGHT_KEYS = ("action", "nut", "saddle", "bridge", "relief", "joint")
JOINT = 14
"""The fret at which the body usually begins; common practice, no source."""


@dataclass(frozen=True, slots=True)
class _Row:
    at_fret_1_mm: float
    treble_at_fret_12_mm: float
    bass_at_fret_12_mm: float
    relief_mm: float


NAMED_ROWS = {
    "steel": _Row(0.4, 1.8, 2.3, 0.1),
    "nylon": _Row(0.6, 2.8, 3.6, 0.1),
    "electric": _Row(0.35, 1.5, 1.9, 0.15),
    "bass": _Row(0.45, 2.0, 2.6, 0.25),
    "mandolin": _Row(0.35, 1.3, 1.7, 0.05),
    "banjo": _Row(0.4, 2.2, 2.6, 0.1),
}
"""String over crown at frets 1 and 12, and relief, in mm; common practice, no source."""


def read_heights(root: Table, places: Places, *, zero: str) -> Heights | None:
    """Read the heights; None where they are left out or have faults."""
    cursor = root.at("heights")
    if cursor is None:
        return None
    if cursor.is_text:
        return _named(cursor, places)
    table = cursor.table(
        HEIGHT_KEYS, rule=f"heights is a mapping, or one of {', '.join(NAMED_ROWS)}"
    )
    if table is None:
        return None
    given = _given(table, places, zero=zero)
    relief = table.length("relief", ranges.RELIEF, default=0.0)
    joint = _joint(table, places)
    return None if given is None else Heights(given, relief, joint)


def _given(table: Table, places: Places, *, zero: str) -> ActionGaps | EndHeights | None:
    ends = [key for key in ("nut", "saddle", "bridge") if key in table]
    if "action" not in table and not ends:
        table.wrong(
            "heights need their figures", "write action: {1: 0.4, 12: 2}, or nut and saddle"
        )
        return None
    by_action = _action(table, places) if "action" in table else None
    if not ends:
        return by_action
    if "action" in table:
        table.wrong(
            "heights are given as action at two frets, or at nut and saddle, not both",
            "keep one of the two forms",
            key=ends[0],
        )
        return None
    return _at_ends(table, places, zero=zero)


def _action(table: Table, places: Places) -> ActionGaps | None:
    cursor = table.cursors["action"]
    rule = "action is a mapping of two frets, such as {1: 0.4, 12: 2}"
    before = len(cursor.reading.faults)
    found = places.by_fret(cursor, rule)
    gaps = [(number, places.per_string(value, ranges.ACTION)) for number, value in found]
    if len(cursor.reading.faults) > before or places.labels is None:
        return None
    if len(gaps) != 2:
        cursor.wrong(f"{rule}; here are {len(gaps)}")
        return None
    (first, first_gap), (second, second_gap) = sorted(gaps, key=lambda gap: gap[0])
    if first_gap is None or second_gap is None:
        return None
    return ActionGaps(first, first_gap, second, second_gap)


def _at_ends(table: Table, places: Places, *, zero: str) -> EndHeights | None:
    nut_at, saddle_at = table.at("nut"), table.saddle()
    nut: PerString | None = None
    if nut_at is not None:
        nut = places.per_string(nut_at, ranges.HEIGHT_AT_NUT)
        if zero == "fret" and nut is not None and nut != Same(0.0):
            nut_at.wrong("over a zero fret the strings leave at the height of the crowns",
                         "leave it out")  # fmt: skip
    elif zero == "fret":
        nut = Same(0.0)
        table.reading.assume(table.under("nut"), "0 mm (zero fret)")
    else:
        table.wrong("the height at the nut is missing", key="nut")
    if saddle_at is None:
        table.wrong("the height at the saddle is missing", key="saddle")
        return None
    saddle = places.per_string(saddle_at, ranges.HEIGHT_AT_SADDLE)
    return None if nut is None or saddle is None else EndHeights(nut, saddle)


def _joint(table: Table, places: Places) -> int:
    """Read the fret at the body's joint, where relief ends."""
    count = len(places.labels) if places.labels else JOINT
    cursor = table.at("joint")
    if cursor is not None:
        return places.fret(cursor) or min(JOINT, count)
    return _assumed_joint(table, places)


def _assumed_joint(table: Table, places: Places) -> int:
    count = len(places.labels) if places.labels else JOINT
    number = places.number(str(JOINT)) or min(JOINT, count)
    label = places.labels[number - 1] if places.labels else str(number)
    table.reading.assume(table.under("joint"), label)
    return number


def _named(cursor: Cursor, places: Places) -> Heights | None:
    """Fill in a named row; its figures are listed under assumed."""
    name = cursor.word(tuple(NAMED_ROWS))
    if name is None or places.labels is None:
        return None
    row = NAMED_ROWS[name]
    first, twelfth = places.number("1"), places.number("12")
    if first is None or twelfth is None:
        cursor.fault("a named row is for boards with frets 1 and 12", "give heights in figures")
        return None
    assume = cursor.reading.assume
    practice = f"{name} row: common practice, no source"
    assume("heights.action.1", f"{figure(row.at_fret_1_mm)} mm ({practice})")
    assume(
        "heights.action.12",
        f"{figure(row.treble_at_fret_12_mm)} mm treble, {figure(row.bass_at_fret_12_mm)} mm bass "
        f"({practice})",
    )
    assume("heights.relief", f"{figure(row.relief_mm)} mm ({practice})")
    joint = _assumed_joint(Table({}, cursor.path, cursor.line, cursor.reading), places)
    gaps = ActionGaps(
        first,
        Same(row.at_fret_1_mm),
        twelfth,
        Sides(row.treble_at_fret_12_mm, row.bass_at_fret_12_mm),
    )
    return Heights(gaps, row.relief_mm, joint)
