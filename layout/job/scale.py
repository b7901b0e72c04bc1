"""How long are the strings, from what pitch are they tuned, and how far apart do they lie?"""

from __future__ import annotations

from itertools import pairwise
from typing import Literal

from layout.findings import Finding
from layout.instrument import (
    MultiScale,
    ParallelScale,
    Reference,
    Spread,
    SpreadList,
    SpreadRule,
    StringSpec,
)
from layout.job import ranges
from layout.job.cursor import Cursor, Table
from layout.job.places import Places
from layout.pitch.notes import read_note

SPREAD_KEYS = ("nut", "saddle", "bridge", "rule", "pair")
RULES: tuple[Literal["centres", "gaps"], ...] = ("centres", "gaps")
STANDARD_HZ = 440.0
"""ISO 16:1975: the standard A4."""


def read_reference(root: Table) -> Reference:
    """Read the pitch everything is tuned from; A4 = 440 Hz where it is left out."""
    standard = Reference(read_note("A4"), STANDARD_HZ)
    cursor = root.at("reference")
    if cursor is None:
        root.reading.assume("reference", "A4 = 440 Hz")
        return standard
    if not cursor.is_table:
        hz = cursor.number(ranges.A4_HZ)
        return standard if hz is None else Reference(standard.note, hz)
    table = cursor.table(("note", "hz"))
    if table is None:
        return standard
    note_at = table.need("note", "the note of the reference is missing", "write note: A4")
    hz_at = table.need("hz", "the frequency of the reference is missing", "write hz: 440")
    note = note_at.note() if note_at else None
    hz = hz_at.number(ranges.NOTE_HZ) if hz_at else None
    return standard if note is None or hz is None else Reference(note, hz)


def read_scale(root: Table, places: Places) -> ParallelScale | MultiScale | None:
    """Read the scale: one length, or the outer strings' lengths and the square fret."""
    cursor = root.need("scale", "the scale is missing", "write scale: and the length to be divided")
    if cursor is None:
        return None
    if cursor.is_text:
        length = cursor.length(ranges.SCALE)
        return None if length is None else ParallelScale(length)
    table = cursor.table(
        ("treble", "bass", "square_at"),
        rule="a scale is a length, or {treble, bass, square_at}",
    )
    if table is None:
        return None
    lengths = []
    for side in ("treble", "bass"):
        at = table.need(side, f"the length of the {side} string is missing")
        lengths.append(at.length(ranges.SCALE) if at else None)
    square_at = table.need("square_at", "the square fret is missing", "write a fret, nut or bridge")
    place = _square_place(square_at, places) if square_at else None
    treble, bass = lengths
    if treble is None or bass is None or place is None:
        return None
    return MultiScale(treble, bass, place)


def _square_place(cursor: Cursor, places: Places) -> float | Literal["nut", "bridge"] | None:
    """Read where the fret is square: nut, bridge, a label, or a fraction between frets."""
    if cursor.is_word("nut"):
        return "nut"
    if cursor.is_word("bridge", "saddle"):
        return "bridge"
    number = places.number((cursor.raw or "").strip())
    return _between_frets(cursor, places) if number is None else float(number)


def _between_frets(cursor: Cursor, places: Places) -> float | None:
    value = cursor.exact("the square fret is a fret, nut or bridge")
    if value is None or places.labels is None:
        return None
    count = len(places.labels)
    numbered = places.labels == tuple(str(number) for number in range(1, count + 1))
    if numbered and 0 <= value <= count:
        return float(value)
    cursor.fault(
        f"the square fret is nut, bridge or 0 to {count}"
        if numbered
        else "the square fret is nut, bridge or one of the board's labels"
    )
    return None


def read_spread(root: Table, places: Places, *, required: bool) -> Spread | None:
    """Read how far apart the strings lie at nut and saddle."""
    cursor = root.at("spread")
    if cursor is None:
        if required:
            root.wrong(
                "a slotted board needs its spread",
                "write spread: {nut: 36, saddle: 54}, the outer string centres",
                key="spread",
            )
        return None
    table = cursor.table(SPREAD_KEYS)
    if table is None:
        return None
    nut = table.need("nut", "the spread at the nut is missing")
    saddle = table.saddle()
    if saddle is None:
        table.wrong("the spread at the saddle is missing", key="saddle")
    if nut is None or saddle is None:
        return None
    if nut.is_list or saddle.is_list:
        return _listed(table, nut, saddle, places)
    return _by_rule(table, nut, saddle, places)


def _listed(table: Table, nut: Cursor, saddle: Cursor, places: Places) -> SpreadList | None:
    for key in ("rule", "pair"):
        if key in table:
            table.wrong("listed strings follow no rule", "leave it out", key=key)
    sides = []
    for cursor in (nut, saddle):
        if not cursor.is_list:
            cursor.fault("both ends are listed, or neither")
            return None
        values = places.listed(cursor, ranges.STRING_Y)
        if values is not None:
            _check_order(cursor, values, places)
        sides.append(values)
    nut_y, saddle_y = sides
    return None if nut_y is None or saddle_y is None else SpreadList(nut_y, saddle_y)


def _check_order(cursor: Cursor, values: tuple[float, ...], places: Places) -> None:
    """Record a fault unless strings that reach the nut lie from treble (+) to bass."""
    strings = places.strings
    if strings is None or places.faulty or len(values) != len(strings):
        return
    full = [y for y, string in zip(values, strings, strict=True) if string.full]
    if any(after >= before for before, after in pairwise(full)):
        cursor.wrong("string 1 is the outermost on the treble side, and + is toward it",
                     "list falling figures")  # fmt: skip


def _by_rule(table: Table, nut: Cursor, saddle: Cursor, places: Places) -> SpreadRule | None:
    nut_mm, saddle_mm = nut.length(ranges.SPREAD), saddle.length(ranges.SPREAD)
    several = not places.faulty and sum(string.full for string in places.strings or ()) > 1
    for cursor, value in ((nut, nut_mm), (saddle, saddle_mm)):
        if value == 0 and several:
            cursor.fault("strings lie apart")
    rule = table.word("rule", RULES, default="centres")
    if places.strings and has_courses(places.strings):
        table.reading.assume("spread", "courses: equal clear space between them, whatever the rule")
    pair = _pair(table, places)
    _doubt_gauges(table, places, rule=rule)
    if nut_mm is None or saddle_mm is None:
        return None
    return SpreadRule(nut_mm, saddle_mm, rule, *pair)


def _pair(table: Table, places: Places) -> tuple[float | None, float | None]:
    """Read the clear gap inside a course, at nut and saddle."""
    cursor = table.at("pair")
    if cursor is None:
        if places.strings and not places.faulty and has_courses(places.strings):
            table.wrong("courses need the clear gap between their strings", "write pair: 2")
        return None, None
    if places.strings and not places.faulty and not has_courses(places.strings):
        cursor.wrong("a pair gap needs courses", "give the strings of a course the same course")
    if not cursor.is_table:
        gap = cursor.length(ranges.PAIR_GAP)
        return gap, gap
    inner = cursor.table(("nut", "saddle", "bridge"))
    if inner is None:
        return None, None
    nut, saddle = inner.need("nut", "the gap at the nut is missing"), inner.saddle()
    if saddle is None:
        inner.wrong("the gap at the saddle is missing", key="saddle")
    return (
        nut.length(ranges.PAIR_GAP) if nut else None,
        saddle.length(ranges.PAIR_GAP) if saddle else None,
    )


def has_courses(strings: tuple[StringSpec, ...]) -> bool:
    """Whether any two strings share a course."""
    names = [string.course for string in strings if string.course is not None]
    return len(set(names)) < len(names)


def _doubt_gauges(table: Table, places: Places, *, rule: str) -> None:
    """Clear gaps count the gauges; a string without one is taken as infinitely thin."""
    if places.strings is None or places.faulty:
        return
    if rule != "gaps" and not has_courses(places.strings):
        return
    bare = [n for n, s in enumerate(places.strings, 1) if s.full and s.gauge_mm is None]
    for number in bare[:1]:
        table.reading.findings.append(
            Finding(
                "gap-without-gauge",
                "warning",
                f"Clear gaps between strings are shared out, but {len(bare)} of the strings have "
                f"no gauge (the first is string {number}) and are taken as infinitely thin. Give "
                "their gauges.",
                string=number,
            )
        )
