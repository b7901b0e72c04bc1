"""How do the strings run over the board, who holds them, and how may nut and saddle move?"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Literal, cast

from layout.findings import Finding
from layout.instrument import (
    Bridge,
    Compensation,
    CompensationRule,
    Finger,
    Heights,
    Listed,
    PerString,
    Sides,
    Supports,
)
from layout.job import ranges
from layout.job.cursor import Allowed, Cursor, Table, figure
from layout.job.frets import FRET_KEYS
from layout.job.places import Places
from layout.job.strings import core_unknown, missing_for_pitch
from layout.strings.support import CARRIED, CLAMPED, HINGED, Fixity, Support, Tail

COMPENSATION_KEYS = ("nut", "saddle", "bridge", "saddle_thickness", "frets", "weights")
RULES: tuple[CompensationRule, ...] = ("none", "one", "straight", "course", "each")
FINGER_BEHIND_MM = 8.0
"""Common practice, no source."""

# The finger and the supports -------------------------------------------------------------------


def read_finger(root: Table) -> Finger:
    """Read where the finger presses."""
    table = root.inner("finger", ("behind", "press"))
    behind = table.length("behind", ranges.FINGER_BEHIND, default=FINGER_BEHIND_MM)
    press = table.length("press", ranges.FINGER_PRESS, default=0.0)
    if press > 0:
        table.reading.findings.append(
            Finding(
                "finger-press-assumes-slip",
                "note",
                f"finger.press of {figure(press)} mm stretches the string over the stop. A "
                "published trial found the string locked there once it touches, so that only 0 "
                "fits; with free slip 0.5 mm would add 1 to 11 cents. Leave it out unless you "
                "have measured it.",
                amount=press,
                unit="mm",
            )
        )
    return Finger(behind, press)


def read_supports(root: Table) -> Supports:
    """Read how each end carries the string."""
    table = root.inner("supports", ("nut", "stop", "saddle", "bridge", "free"))
    saddle = table.saddle()
    return Supports(
        nut=_support(table, "nut", table.at("nut")),
        stop=_support(table, "stop", table.at("stop")),
        saddle=_support(table, "saddle", saddle),
        free_mm=table.length("free", ranges.FREE, default=0.0),
    )


_NAMED: dict[str, Support] = {"hinged": HINGED, "carried": CARRIED, "clamped": CLAMPED}


def _support(table: Table, key: str, cursor: Cursor | None) -> Support:
    if cursor is None:
        table.reading.assume(table.under(key), "carried")
        return CARRIED
    if cursor.is_table:
        inner = cursor.table(("tail",))
        tail_at = inner.need("tail", "the tail is missing", "write {tail: 12}") if inner else None
        tail = tail_at.length(ranges.TAIL) if tail_at else None
        return CARRIED if tail is None else Tail(tail)
    raw = cursor.raw or ""
    if raw in _NAMED:
        return _NAMED[raw]
    if cursor.is_list or raw[:1].isalpha() or not raw:
        cursor.fault(ranges.FIXITY.rule)
        return CARRIED
    value = cursor.number(ranges.FIXITY)
    return CARRIED if value is None else Fixity(value)


def read_bridge(root: Table) -> Bridge:
    """Read whether the bridge is fixed, in separate pieces, or loose."""
    cursor = root.at("bridge")
    if cursor is None:
        root.reading.assume("bridge", "fixed")
        return Bridge()
    if not cursor.is_table:
        kinds: tuple[Literal["fixed", "loose"], ...] = ("fixed", "loose")
        if cursor.is_word("separate"):
            cursor.fault("separate pieces need their travel", "write {separate: {travel: 10}}")
            return Bridge()
        return Bridge(cursor.word(kinds) or "fixed")
    table = cursor.table(("separate",))
    separate = table.need("separate", "here stands separate: {travel: 10}") if table else None
    inner = separate.table(("travel",)) if separate else None
    travel_at = inner.need("travel", "the travel of the pieces is missing") if inner else None
    return Bridge("separate", travel_at.length(ranges.TRAVEL) if travel_at else None)


# Compensation ------------------------------------------------------------------------------------


def read_compensation(
    root: Table, places: Places, *, heights: Heights | None, zero: str
) -> Compensation:
    """Read how nut and saddle may move, and check that what it needs is there."""
    table = root.inner("compensation", COMPENSATION_KEYS)
    nut_at, saddle_at = table.at("nut"), table.saddle()
    lacking = _lacking(places, with_heights=heights is not None or "heights" in root)
    nut = _moves(nut_at, places, ranges.NUT_SHIFT) if nut_at else None
    if nut_at is None:
        table.reading.assume(table.under("nut"), "none")
    saddle = _moves(saddle_at, places, ranges.SETBACK) if saddle_at else None
    if saddle_at is None:
        saddle = "none" if lacking else "straight"
        why = f"none (no {lacking[0].what})" if lacking else "straight"
        table.reading.assume(table.under("saddle"), why)
    for cursor, rule in ((nut_at, nut), (saddle_at, saddle)):
        if cursor and isinstance(rule, str) and rule != "none":
            for lack in lacking:
                cursor.fault(f"it cannot be computed without {lack.what}", lack.remedy)
    if zero == "fret" and nut == "each" and nut_at:
        nut_at.fault("with a zero fret the strings share one line", "write nut: none")
    asked = any(isinstance(rule, str) and rule != "none" for rule in (nut, saddle))
    if not asked or saddle_at is None:
        _doubt_soft_cores(root, places)
    first, last = _balanced(table, places)
    return Compensation(
        nut=nut or "none",
        saddle=saddle or "none",
        saddle_thickness_mm=table.length_or_none("saddle_thickness", ranges.SADDLE_THICKNESS),
        first_fret=first,
        last_fret=last,
        weights=_weights(table, places),
    )


@dataclass(frozen=True, slots=True)
class _Lack:
    """One thing that is missing, and what to add."""

    what: str
    remedy: str


_NO_HEIGHTS = _Lack("heights", "add heights: {action: {1: 0.4, 12: 2}}")


def _lacking(places: Places, *, with_heights: bool) -> list[_Lack]:
    """Say what is missing before a stopped pitch can be told."""
    numbers: dict[str, list[int]] = {}
    for number, string in enumerate(places.strings or (), start=1):
        if string.fretted and number not in places.faulty:
            missing = missing_for_pitch(string)
            if missing:
                numbers.setdefault(missing, []).append(number)
    lacking = [] if with_heights else [_NO_HEIGHTS]
    for missing, which in numbers.items():
        named = f"string{'s' if len(which) > 1 else ''} {', '.join(map(str, which))}"
        lacking.append(_Lack(f"string data for {named}", f"add {missing}"))
    return lacking


def _doubt_soft_cores(root: Table, places: Places) -> None:
    for number, string in enumerate(places.strings or (), start=1):
        if core_unknown(string):
            root.reading.findings.append(
                Finding(
                    "wound-core-unknown",
                    "warning",
                    f"String {number} is wound on {string.core_material}, whose mass and "
                    "stiffness do not follow from its diameters, so nothing is said about its "
                    "pitch. Give unit_mass, axial_stiffness and bending_stiffness, or the "
                    "tension its maker states.",
                    string=number,
                )
            )


def _moves(cursor: Cursor, places: Places, allowed: Allowed) -> CompensationRule | PerString | None:
    """Read a rule, a list of one figure a string, or figures at both sides."""
    if cursor.is_list or cursor.is_table:
        return cast("Listed | Sides | None", places.per_string(cursor, allowed))
    return cursor.word(RULES)


def _balanced(table: Table, places: Places) -> tuple[int, int]:
    """Read the range of balanced frets; all of them where it is left out."""
    last = len(places.labels) if places.labels else 1
    cursor = table.at("frets")
    if cursor is None:
        labels = places.labels or ("1",)
        table.reading.assume(table.under("frets"), f"{labels[0]} to {labels[-1]}")
        return 1, last
    items = cursor.items("the balanced frets are two labels, such as [1, 12]", least=2, most=2)
    if items is None:
        return 1, last
    begin, end = places.fret(items[0]), places.fret(items[1])
    if begin is None or end is None:
        return 1, last
    if begin > end:
        items[1].fault(f"the last balanced fret does not lie before fret {items[0].raw}")
    return begin, end


def _weights(table: Table, places: Places) -> Mapping[int, float]:
    cursor = table.at("weights")
    found = places.by_fret(cursor, "weights is a mapping {fret: weight}") if cursor else []
    taken = {number: value.number(ranges.WEIGHT) for number, value in found}
    return {number: weight for number, weight in taken.items() if weight is not None}


def check_placing(root: Table, places: Places, *, placing: str) -> None:
    """Record a fault where stops are to be placed by a pitch that cannot be told."""
    if placing == "divided":
        return
    frets = root.inner("frets", FRET_KEYS)
    for lack in _lacking(places, with_heights="heights" in root):
        frets.wrong(
            f"stops cannot be placed by their pitch without {lack.what}", lack.remedy, key="placing"
        )
