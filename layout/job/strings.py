"""What strings does the job order, and what is known of each?"""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from itertools import pairwise
from typing import Literal

from layout.instrument import ShortStart, StatedTension, Stretch, StringSpec
from layout.job import ranges
from layout.job.cursor import Allowed, Cursor, Table
from layout.job.places import Places
from layout.pitch.notes import Note
from layout.strings.material import PLAIN_MATERIALS, WRAP_MATERIALS
from layout.units import (
    BENDING_UNITS_N_M2,
    STIFFNESS_UNITS_N,
    TENSION_UNITS_N,
    UNIT_MASS_UNITS_KG_PER_M,
)

STRING_KEYS = (
    "note", "hz", "plain", "wound", "gauge", "core", "core_material", "unit_mass",
    "axial_stiffness", "bending_stiffness", "stretch", "tension", "at", "course", "starts_at",
    "open_only", "length",
)  # fmt: skip

SOFT_CORES = ("nylon", "gut", "fluorocarbon")
"""Cores whose stiffness never follows from diameters (physics page)."""


def read_strings(root: Table, places: Places) -> Places:
    """Read the strings, string 1 first, and give the places with them."""
    cursor = root.need("strings", "the strings are missing", "write strings: [E4, B3, ...]")
    if cursor is None:
        return places
    rule = f"strings is a list of 1 to {ranges.MOST_STRINGS} notes or mappings, treble side first"
    items = cursor.items(rule, least=1, most=ranges.MOST_STRINGS)
    if items is None:
        return places
    strings: list[StringSpec] = []
    faulty: set[int] = set()
    for number, item in enumerate(items, start=1):
        before = len(root.reading.faults)
        strings.append(_read_string(item, places))
        if len(root.reading.faults) > before:
            faulty.add(number)
    _check_courses(items, strings)
    if not faulty and not any(string.full for string in strings):
        cursor.wrong("no string reaches the nut", "at least one string has no start or open_only")
    return replace(places, strings=tuple(strings), faulty=frozenset(faulty))


def _read_string(cursor: Cursor, places: Places) -> StringSpec:
    if cursor.is_text:
        return StringSpec(note=cursor.note())
    table = cursor.table(STRING_KEYS, rule="a string is a note such as E4, or a mapping")
    if table is None:
        return StringSpec()
    note, hz = _read_pitch(table)
    made = _read_make(table)
    measured = _read_measured(table)
    open_length = _read_open_length(table)
    return StringSpec(
        note=note,
        hz=hz,
        make=made.make,
        material=made.material,
        gauge_mm=made.gauge_mm,
        core_mm=made.core_mm,
        core_material=made.core_material,
        unit_mass_kg_per_m=measured.unit_mass_kg_per_m,
        axial_stiffness_n=measured.axial_stiffness_n,
        bending_stiffness_n_m2=measured.bending_stiffness_n_m2,
        stretch=_read_stretch(table),
        tension=_read_tension(table),
        course=_read_course(table),
        starts_at=_read_start(table, places),
        open_length_mm=open_length,
    )


def _read_pitch(table: Table) -> tuple[Note | None, float | None]:
    note, hz = table.at("note"), table.at("hz")
    if note is not None and hz is not None:
        hz.wrong("a string has a note or a frequency, not both", "keep one of them")
    if note is None and hz is None:
        table.wrong("a string needs its note", "write note: E4 (or hz: 329.6)", key="note")
    return note.note() if note else None, hz.number(ranges.NOTE_HZ) if hz else None


@dataclass(frozen=True, slots=True)
class _Make:
    make: Literal["plain", "wound"] | None = None
    material: str | None = None
    gauge_mm: float | None = None
    core_mm: float | None = None
    core_material: str = "steel"


def _read_make(table: Table) -> _Make:
    """Read what the string is made of, and how thick it is."""
    plain, wound = table.at("plain"), table.at("wound")
    if plain and wound:
        wound.wrong("a string is plain or wound, not both", "keep one of them")
    gauge_at = table.at("gauge")
    allowed = ranges.PLAIN_GAUGE if plain else ranges.WOUND_GAUGE if wound else ranges.GAUGE
    gauge = gauge_at.length(allowed, thousandths=True) if gauge_at else None
    if not wound:
        for key in ("core", "core_material"):
            if key in table:
                table.wrong("only a wound string has a core", "leave it out", key=key)
        if not plain:
            return _Make(gauge_mm=gauge)
        return _Make("plain", plain.word(tuple(PLAIN_MATERIALS)), gauge)
    material = wound.word(tuple(WRAP_MATERIALS))
    core_at = table.at("core")
    core = core_at.length(ranges.CORE, thousandths=True) if core_at else None
    if core_at and core is not None and gauge is not None and core >= gauge:
        core_at.fault("a core is thinner than its string")
        core = None
    core_material = table.word("core_material", tuple(PLAIN_MATERIALS), default="steel")
    return _Make("wound", material, gauge, core, core_material)


@dataclass(frozen=True, slots=True)
class _Measured:
    unit_mass_kg_per_m: float | None
    axial_stiffness_n: float | None
    bending_stiffness_n_m2: float | None


def _read_measured(table: Table) -> _Measured:
    """Read measured figures; a bare one is in the trade's unit, which is noted."""
    mass = _measured(table, "unit_mass", UNIT_MASS_UNITS_KG_PER_M, bare="g/m",
                     allowed=ranges.UNIT_MASS, per_unit=1000.0)  # fmt: skip
    axial = _measured(table, "axial_stiffness", STIFFNESS_UNITS_N, bare="N",
                      allowed=ranges.AXIAL_STIFFNESS)  # fmt: skip
    bending = _measured(table, "bending_stiffness", BENDING_UNITS_N_M2, bare="N m2",
                        allowed=ranges.BENDING_STIFFNESS)  # fmt: skip
    return _Measured(mass, axial, bending)


def _measured(
    table: Table,
    key: str,
    units: dict[str, Fraction],
    *,
    bare: str,
    allowed: Allowed,
    per_unit: float = 1.0,
) -> float | None:
    cursor = table.at(key)
    if cursor is None:
        return None
    what = {"unit_mass": "a mass per length", "axial_stiffness": "an axial stiffness"}.get(
        key, "a bending stiffness"
    )
    value = cursor.quantity(units, bare=bare, what=what, rule=allowed.rule)
    if value is None or cursor.within(value * per_unit, allowed) is None:
        return None
    if (cursor.raw or " ").strip()[-1].isdigit():
        table.reading.assume(cursor.path, f"a bare figure is read in {bare}")
    return value


def _read_stretch(table: Table) -> Stretch | None:
    cursor = table.at("stretch")
    inner = cursor.table(("rise_cents", "by", "length")) if cursor else None
    if inner is None:
        return None
    if "axial_stiffness" in table:
        inner.wrong("the axial stiffness stands there too", "keep one of the two")
    rise_at, by_at, length_at = (
        inner.need(key, f"a stretch test needs {what}")
        for key, what in (
            ("rise_cents", "the cents it rose"),
            ("by", "how far the end was drawn"),
            ("length", "the length that was stretched"),
        )
    )
    rise = rise_at.number(ranges.STRETCH_RISE) if rise_at else None
    by = by_at.length(ranges.STRETCH_BY) if by_at else None
    length = length_at.length(ranges.STRING_LENGTH) if length_at else None
    if rise is None or by is None or length is None:
        return None
    return Stretch(rise, by, length)


def _read_tension(table: Table) -> StatedTension | None:
    cursor, at = table.at("tension"), table.at("at")
    if cursor is None:
        if at is not None:
            at.wrong("this says for what a tension is stated", "add tension: 70 N")
        return None
    newton = _newton(cursor)
    inner = at.table(("length", "note")) if at else None
    if inner is None:
        return None if newton is None else StatedTension(newton)
    if not inner.keys:
        inner.wrong("here stands a length, a note or both", "leave at out where they are its own")
    note_at = inner.at("note")
    length = inner.length_or_none("length", ranges.STRING_LENGTH)
    note = note_at.note() if note_at else None
    return None if newton is None else StatedTension(newton, length, note)


def _newton(cursor: Cursor) -> float | None:
    """Take a tension, which never stands without its unit: both newton and pounds are common."""
    raw = (cursor.raw or "").strip()
    if raw and raw[-1].isdigit() and " " not in raw and "/" not in raw:
        cursor.fault("a tension needs its unit", "write 70 N or 15.7 lb")
        return None
    value = cursor.quantity(TENSION_UNITS_N, bare=None, what="a tension", rule=ranges.TENSION.rule)
    return None if value is None else cursor.within(value, ranges.TENSION)


def _read_course(table: Table) -> str | None:
    cursor = table.at("course")
    return cursor.text("a course is a short name or number", most=20) if cursor else None


def _read_start(table: Table, places: Places) -> ShortStart | None:
    """Read the fret a short string starts at."""
    cursor = table.at("starts_at")
    if cursor is None:
        return None
    if "open_only" in table:
        cursor.wrong("an open-only string has no frets to start at", "keep one of them")
    if not cursor.is_table:
        number = places.fret(cursor)
        for key in ("behind", "step"):
            table.reading.assume(f"{cursor.path}.{key}", "0 mm")
        return _short_start(cursor, number, places)
    inner = cursor.table(("fret", "behind", "step"))
    if inner is None:
        return None
    fret_at = inner.need("fret", "the fret a short string starts at is missing", "write fret: 5")
    number = places.fret(fret_at) if fret_at else None
    behind = inner.length("behind", ranges.SHORT_START_BEHIND, default=0.0)
    step = inner.length("step", ranges.EDGE_STEP, default=0.0)
    return _short_start(fret_at or cursor, number, places, behind_mm=behind, step_mm=step)


def _short_start(
    cursor: Cursor,
    number: int | None,
    places: Places,
    *,
    behind_mm: float = 0.0,
    step_mm: float = 0.0,
) -> ShortStart | None:
    if number is None or places.labels is None:
        return None
    if number == len(places.labels):
        cursor.fault("a short string has frets after its start", "start it before the last fret")
        return None
    return ShortStart(number, behind_mm, step_mm)


def _read_open_length(table: Table) -> float | None:
    """Read the length of a string that runs beside the board."""
    only, length = table.at("open_only"), table.at("length")
    taken = only.flag() if only else False
    if not taken:
        if length is not None and taken is False:
            length.wrong("a fretted string's length follows from the scale", "add open_only: true")
        return None
    if length is None:
        table.wrong("an open-only string needs its length", "write length: 700", key="length")
        return None
    return length.length(ranges.STRING_LENGTH)


def _check_courses(items: list[Cursor], strings: list[StringSpec]) -> None:
    """Record a fault where strings of one course do not lie side by side."""
    ended: set[str] = set()
    for (_, before), (item, string) in pairwise(zip(items, strings, strict=True)):
        if before.course is not None and before.course != string.course:
            ended.add(before.course)
        if string.course is not None and string.course in ended:
            item.wrong(f"the strings of course {string.course} are not neighbours",
                       "list them side by side")  # fmt: skip


def missing_for_pitch(string: StringSpec) -> str:
    """Say which keys a string lacks before its stopped pitch can be told; empty where none.

    >>> missing_for_pitch(StringSpec(make="plain", material="steel", gauge_mm=0.3))
    ''
    >>> missing_for_pitch(StringSpec(make="plain", material="steel"))
    'gauge'
    """
    if _measured_whole(string) or (string.tension and string.gauge_mm):
        return ""
    if string.make is None:
        return "plain or wound and gauge, or measured figures"
    if string.gauge_mm is None:
        return "gauge"
    if core_unknown(string):
        return "measured figures or a stated tension (wound-core-unknown)"
    return ""


def core_unknown(string: StringSpec) -> bool:
    """Whether a string is wound on a soft core of which nothing has been measured."""
    soft = string.make == "wound" and string.core_material in SOFT_CORES
    return soft and not _measured_whole(string) and string.tension is None


def _measured_whole(string: StringSpec) -> bool:
    """Whether mass and both stiffnesses are known without diameters."""
    mass = string.unit_mass_kg_per_m is not None or string.tension is not None
    axial = any(
        given is not None for given in (string.axial_stiffness_n, string.stretch, string.tension)
    )
    return mass and axial and string.bending_stiffness_n_m2 is not None
