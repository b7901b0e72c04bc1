"""What degrees does each form of a temperament record give?

A record writes its degrees down in exactly one form. Each is taken here from the record's table;
figures stay exact and every fault is placed at the figure it is about.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from fractions import Fraction

from layout.errors import PitchError, TextError
from layout.job.cursor import Allowed, Cursor, Table
from layout.pitch.fifths import (
    Pair,
    Rest,
    chain_degrees,
    check_chain,
    check_fifth,
    read_narrowing,
)
from layout.pitch.forms import (
    MOST_EQUAL_STEPS,
    cents_degrees,
    cents_step,
    equal_degrees,
    ratio_degrees,
    rule_step,
    string_degrees,
)
from layout.pitch.interval import UNISON, Interval
from layout.pitch.notes import NoteName, read_note_name
from layout.units import read_ratio

LARGEST_RATIO = 1024
"""Ten octaves; nothing on one string rises further."""

_EQUAL_STEPS = Allowed("a period is divided into", 1, MOST_EQUAL_STEPS, "equal steps")
_PART = Allowed("each fret takes a part of what is left,", 0.001, 0.5)
_STEP_CENTS = Allowed("a step has", 1, 1200, "cents")

_Period = Interval | None
_Notes = tuple[NoteName, ...] | None


@dataclass(frozen=True, slots=True)
class Degrees:
    """What a form gives: the degrees there are, or the step they are powers of."""

    degrees: tuple[Interval, ...] = (UNISON,)
    step: Interval | None = None


def take_ratio(cursor: Cursor, rule: str) -> Fraction | None:
    """Take an exact ratio from 1 up; ``rule`` is said where no text stands."""
    if cursor.raw is None:
        cursor.fault(rule)
        return None
    try:
        ratio = read_ratio(cursor.raw)
    except TextError as error:
        cursor.fault(error.rule, error.remedy)
        return None
    if not 1 <= ratio <= LARGEST_RATIO:
        cursor.fault(f"a ratio rises from the open string: 1 to {LARGEST_RATIO}")
        return None
    return ratio


def _take_equal(table: Table, period: _Period, _notes: _Notes) -> Degrees | None:
    count = table.cursors["equal"].whole(_EQUAL_STEPS)
    return None if count is None or period is None else Degrees(equal_degrees(count, period))


def _take_ratios(table: Table, period: _Period, _notes: _Notes) -> Degrees | None:
    rule = "ratios is a list that begins 1"
    items = table.cursors["ratios"].items(rule, least=1, most=MOST_EQUAL_STEPS)
    ratios = [take_ratio(item, rule) for item in items or ()]
    return _listed(items, ratios, period, ratio_degrees)


def _take_cents(table: Table, period: _Period, _notes: _Notes) -> Degrees | None:
    items = table.cursors["cents"].items("cents is a list that begins 0", least=1, most=1200)
    allowed = Allowed("a degree lies above the open string by", 0, 12000, "cents")
    return _listed(items, _figures(items, allowed), period, cents_degrees)


def _take_string(table: Table, period: _Period, _notes: _Notes) -> Degrees | None:
    rule = "string is a list of fractions of the string that begins 0"
    items = table.cursors["string"].items(rule, least=1, most=1200)
    allowed = Allowed("a stop lies at a fraction of the string,", 0, 0.999)
    return _listed(items, _figures(items, allowed), period, string_degrees)


def _figures(items: Sequence[Cursor] | None, allowed: Allowed) -> list[Fraction | None]:
    """Take exact figures within a range."""
    found: list[Fraction | None] = []
    for item in items or ():
        exact = item.exact(allowed.rule)
        inside = exact is not None and item.within(float(exact), allowed) is not None
        found.append(exact if inside else None)
    return found


def _listed(
    items: Sequence[Cursor] | None,
    figures: Sequence[Fraction | None],
    period: _Period,
    degrees_of: Callable[[Sequence[Fraction]], tuple[Interval, ...]],
) -> Degrees | None:
    """Make degrees of a list's figures; each that does not rise is a fault at its own place."""
    exact = [value for value in figures if value is not None]
    if not items or len(exact) < len(items):
        return None
    degrees = degrees_of(exact)
    if degrees[0] != UNISON:
        items[0].fault("the list begins with the open string itself: 1 in ratios, else 0")
    for item, below, above in zip(items[1:], degrees, degrees[1:], strict=False):
        if above <= below:
            item.fault("degrees rise; this one does not lie above the one before it")
    for item, degree in zip(items, degrees, strict=True):
        if period is not None and degree >= period:
            item.fault("degrees lie below the period, and the period itself is left out")
    return Degrees(degrees)


def _take_rule(table: Table, _period: _Period, _notes: _Notes) -> Degrees | None:
    inner = table.cursors["rule"].table(("part",))
    if inner is None:
        return None
    cursor = inner.need("part", "a rule has the part each fret takes, such as 1/18")
    part = None if cursor is None else cursor.exact(_PART.rule)
    if cursor is None or part is None or cursor.within(float(part), _PART) is None:
        return None
    return Degrees(step=rule_step(part))


def _take_step_cents(table: Table, _period: _Period, _notes: _Notes) -> Degrees | None:
    cursor = table.cursors["step_cents"]
    cents = cursor.exact(_STEP_CENTS.rule)
    if cents is None or cursor.within(float(cents), _STEP_CENTS) is None:
        return None
    return Degrees(step=cents_step(cents))


def _take_fifths(table: Table, period: _Period, notes: _Notes) -> Degrees | None:
    inner = table.cursors["fifths"].table(("chain", "narrow"))
    if inner is None:
        return None
    if notes is None:
        table.need("notes", "a chain of fifths needs notes, whose first is degree 0")
    chain = _take_chain(inner, notes)
    cursor = inner.need("narrow", "narrow says by how much the fifths are narrowed; 0 is pure")
    if chain is None or cursor is None or period is None or notes is None:
        return None
    narrow = _take_narrowings(cursor, chain) if cursor.is_table else _take_narrowing(cursor)
    if narrow is None:
        return None
    try:
        return Degrees(chain_degrees(notes, chain, narrow=narrow, period=period))
    except PitchError as error:
        cursor.wrong(str(error))
        return None


def _take_chain(inner: Table, notes: _Notes) -> tuple[NoteName, ...] | None:
    rule = "chain is a list of names, each a fifth above the one before"
    cursor = inner.need("chain", rule)
    items = cursor and cursor.items(rule, least=2, most=MOST_EQUAL_STEPS)
    names = [item.note_name() for item in items or ()]
    chain = tuple(name for name in names if name is not None)
    if not cursor or not chain or len(chain) < len(names) or notes is None:
        return None
    try:
        check_chain(notes, chain)
    except PitchError as error:
        cursor.wrong(str(error))
        return None
    return chain


def _take_narrowing(cursor: Cursor) -> Interval | None:
    try:
        return read_narrowing(cursor.raw or "")
    except TextError as error:
        cursor.fault(error.rule, error.remedy)
        return None


def _take_narrowings(
    cursor: Cursor, chain: tuple[NoteName, ...]
) -> dict[Pair, Interval | Rest] | None:
    """Take one narrowing a fifth, from a mapping whose keys are pairs such as C-G."""
    narrow: dict[Pair, Interval | Rest] = {}
    entries = cursor.open_table().cursors
    for key, entry in entries.items():
        try:
            lower, _, upper = key.partition("-")
            pair = read_note_name(lower), read_note_name(upper)
            check_fifth(pair, chain)
        except TextError:
            entry.wrong("a fifth is named by its two notes, such as C-G")
            continue
        except PitchError as error:
            entry.wrong(str(error))
            continue
        size: Interval | Rest | None = "rest" if entry.is_word("rest") else _take_narrowing(entry)
        if size is not None:
            narrow[pair] = size
    return narrow if len(narrow) == len(entries) else None


Taker = Callable[[Table, _Period, _Notes], Degrees | None]

_TAKERS: dict[str, Taker] = {
    "equal": _take_equal,
    "ratios": _take_ratios,
    "cents": _take_cents,
    "fifths": _take_fifths,
    "string": _take_string,
    "rule": _take_rule,
    "step_cents": _take_step_cents,
}

FORMS = tuple(_TAKERS)
"""The ways to write the degrees down; a record has exactly one of them."""

NEVER_ENDING_FORMS = ("rule", "step_cents")
"""Forms without a period or an end."""


def take_degrees(form: str, table: Table, *, period: _Period, notes: _Notes) -> Degrees | None:
    """Take the degrees of a record's form; faults are recorded and None is returned.

    Parameters
    ----------
    form
        One of `FORMS`, a key of the table.
    table
        The record.
    period, notes
        Those of the record; None where there are none, or where they have faults of their own.

    """
    return _TAKERS[form](table, period, notes)
