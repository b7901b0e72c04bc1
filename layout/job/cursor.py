"""How is one value of a file read, and how is a fault in it reported with its place?

A `Cursor` stands on one node of the tree and knows its key path; its takers return the value, or
record a fault and return None, so that one run finds every fault of the file. A `Table` is a
cursor on a mapping that hands out cursors by key and fills in defaults, each of which is noted.
"""

from __future__ import annotations

import difflib
import re
from collections.abc import Collection, Sequence
from dataclasses import dataclass, field
from fractions import Fraction
from pathlib import Path
from typing import Literal, TypeVar

from layout.errors import Fault, JobError, TextError
from layout.findings import Assumed, Finding
from layout.job.tree import ListNode, Node, TableNode, TextNode, shorten
from layout.pitch.notes import Note, NoteName, read_note, read_note_name
from layout.units import LENGTH_UNITS_MM, MM_PER_INCH, read_number, read_quantity

W = TypeVar("W", bound=str)


@dataclass(frozen=True, slots=True)
class Allowed:
    """The range a figure must lie in, both ends allowed, and how that is said.

    >>> Allowed("a plain string needs", 0.05, 5, "mm").rule
    'a plain string needs 0.05 to 5 mm'
    """

    said: str
    low: float
    high: float
    unit: str = ""

    @property
    def rule(self) -> str:
        """The range as half a sentence."""
        return f"{self.said} {figure(self.low)} to {figure(self.high)} {self.unit}".rstrip()

    def __contains__(self, value: float) -> bool:
        return self.low <= value <= self.high


def figure(value: float) -> str:
    """Write a figure shortly, without an exponent.

    >>> figure(1000000.0), figure(0.3048), figure(2.0)
    ('1000000', '0.3048', '2')
    """
    shown = f"{value:.9f}".rstrip("0").rstrip(".")
    return "0" if shown == "-0" else shown


@dataclass(slots=True)
class Reading:
    """What one run over a file gathers: faults, assumed values and findings."""

    file: str
    folder: Path | None = None
    unit: Literal["mm", "in"] = "mm"
    faults: list[Fault] = field(default_factory=list)
    assumed: list[Assumed] = field(default_factory=list)
    findings: list[Finding] = field(default_factory=list)

    def assume(self, key: str, value: str) -> None:
        """Note a value the file left out and the product filled in."""
        self.assumed.append(Assumed(key, value))

    def finish(self) -> None:
        """Raise the faults there are, in file order.

        Raises
        ------
        JobError
            When there is any fault.

        """
        if self.faults:
            once = dict.fromkeys(self.faults)
            raise JobError(sorted(once, key=self._place))

    def _place(self, fault: Fault) -> tuple[bool, int]:
        # Faults of a record file that the job names come after the job's own.
        return fault.file != self.file, fault.line or 0


@dataclass(frozen=True, slots=True)
class Cursor:
    """One node, its key path (lists count from 1), its line, and the run it belongs to."""

    node: Node
    path: str
    line: int
    reading: Reading

    # Faults -----------------------------------------------------------------------------------

    def fault(self, rule: str, remedy: str = "", *, value: str | None = None) -> None:
        """Record a fault here; ``value`` defaults to the text as written."""
        shown = self.shown if value is None else value
        self._record(rule, remedy, shown)

    def wrong(self, rule: str, remedy: str = "") -> None:
        """Record a fault that no single value is to blame for."""
        self._record(rule, remedy, None)

    def _record(self, rule: str, remedy: str, value: str | None) -> None:
        fault = Fault(self.reading.file, self.line, self.path, value, rule, remedy)
        self.reading.faults.append(fault)

    @property
    def shown(self) -> str:
        """The value as a message shows it."""
        match self.node:
            case TextNode(text=text) if text.strip():
                return shorten(text)
            case TextNode():
                return "nothing"
            case ListNode():
                return "a list"
            case TableNode():
                return "a mapping"

    # What kind of node ------------------------------------------------------------------------

    @property
    def is_text(self) -> bool:
        """Whether one text stands here."""
        return isinstance(self.node, TextNode)

    @property
    def is_list(self) -> bool:
        """Whether a list stands here."""
        return isinstance(self.node, ListNode)

    @property
    def is_table(self) -> bool:
        """Whether a mapping stands here."""
        return isinstance(self.node, TableNode)

    @property
    def raw(self) -> str | None:
        """The text as written, or None where a list or mapping stands."""
        return self.node.text if isinstance(self.node, TextNode) else None

    def is_word(self, *words: str) -> bool:
        """Whether one of these words stands here."""
        return self.raw in words

    # Lists and mappings -----------------------------------------------------------------------

    def items(self, rule: str, *, least: int = 0, most: int | None = None) -> list[Cursor] | None:
        """Give a cursor for each item of a list; ``rule`` says what the list holds."""
        if not isinstance(self.node, ListNode):
            self.fault(rule)
            return None
        count = len(self.node.items)
        if count < least or (most is not None and count > most):
            self.wrong(f"{rule}; here are {count}")
            return None
        return [
            Cursor(item, f"{self.path}[{number}]", item.line, self.reading)
            for number, item in enumerate(self.node.items, start=1)
        ]

    def table(self, known: Sequence[str], *, rule: str = "") -> Table | None:
        """Give a table of these keys; duplicate and unknown keys are faults."""
        if not isinstance(self.node, TableNode):
            self.fault(rule or f"here stands a mapping with the keys {', '.join(known)}")
            return None
        table = self.open_table()
        table.refuse_unknown(known)
        return table

    def open_table(self) -> Table:
        """Give a table whose keys are the file's own (labels); duplicate keys are faults."""
        assert isinstance(self.node, TableNode)
        cursors: dict[str, Cursor] = {}
        for entry in self.node.entries:
            path = f"{self.path}.{shorten(entry.key, most=40)}".lstrip(".")
            cursor = Cursor(entry.node, path, entry.line, self.reading)
            if entry.key in cursors:
                first = cursors[entry.key].line
                cursor.wrong(f"the key stands twice, first on line {first}", "keep one of them")
            else:
                cursors[entry.key] = cursor
        return Table(cursors, self.path, self.line, self.reading)

    # Texts ------------------------------------------------------------------------------------

    def text(self, rule: str, *, most: int = 80) -> str | None:
        """Take one line of text of 1 to ``most`` characters."""
        raw = self.raw
        if raw is None or not raw.strip():
            self.fault(rule)
            return None
        if len(raw) > most:
            self.fault(f"{rule}; at most {most} characters, here are {len(raw)}")
            return None
        if not raw.isprintable():
            self.fault(f"{rule}; on one line, without control characters")
            return None
        return raw.strip()

    def word(self, choices: Sequence[W]) -> W | None:
        """Take one of a few words, written exactly so."""
        raw = self.raw
        for choice in choices:
            if raw == choice:
                return choice
        said = f"it is one of {', '.join(choices)}" if len(choices) > 1 else f"it is {choices[0]}"
        self.fault(said, _nearest(raw or "", choices))
        return None

    def flag(self) -> bool | None:
        """Take ``true`` or ``false``; yes, no, on and off are faults."""
        taken = self.word(("true", "false"))
        return None if taken is None else taken == "true"

    def note(self) -> Note | None:
        """Take a note with its octave, such as ``Bb3`` or ``E4 -50c``."""
        raw = self.raw
        if raw is None:
            self.fault("a note is written like E4, Bb3, F#2 or E4 -50c")
            return None
        try:
            return read_note(raw)
        except TextError as error:
            self.fault(error.rule, error.remedy)
            return None

    def note_name(self) -> NoteName | None:
        """Take a note without an octave, such as ``Bb``."""
        raw = self.raw
        if raw is None:
            self.fault("a note name is written like C, Bb or F#")
            return None
        try:
            return read_note_name(raw)
        except TextError as error:
            self.fault(error.rule, error.remedy)
            return None

    # Figures ----------------------------------------------------------------------------------

    def exact(
        self, said: str = "a number is written like 12, 0.53, 3/8 or 25 1/2"
    ) -> Fraction | None:
        """Take a number exactly as written; ``said`` is the rule where no text stands here."""
        raw = self.raw
        if raw is None or not raw.strip():
            self.fault(said)
            return None
        try:
            return read_number(raw)
        except TextError as error:
            self.fault(error.rule, error.remedy)
            return None

    def number(self, allowed: Allowed) -> float | None:
        """Take a number within a range."""
        exact = self.exact(allowed.rule)
        if exact is None:
            return None
        return self.within(float(exact), allowed)

    def whole(self, allowed: Allowed) -> int | None:
        """Take a whole number within a range."""
        exact = self.exact(allowed.rule)
        if exact is None:
            return None
        if exact.denominator != 1:
            self.fault(f"{allowed.rule}, in whole numbers")
            return None
        return None if self.within(int(exact), allowed) is None else int(exact)

    def length(self, allowed: Allowed, *, thousandths: bool = False) -> float | None:
        """Take a length in mm within a range; a bare one is in the job's unit.

        ``thousandths``: string makers say 12 for 0.012 in; the remedy then says how to write it.
        """
        value = self.quantity(
            LENGTH_UNITS_MM, bare=self.reading.unit, what="a length", rule=allowed.rule
        )
        if value is None:
            return None
        return self.within(
            value, allowed, remedy=self._length_remedy(allowed, thousandths=thousandths)
        )

    def quantity(
        self, units: dict[str, Fraction], *, bare: str | None, what: str, rule: str
    ) -> float | None:
        """Take a number with one of some units, in the unit whose factor is 1."""
        raw = self.raw
        if raw is None or not raw.strip():
            self.fault(rule)
            return None
        try:
            return float(read_quantity(raw, units, bare=bare, what=what))
        except TextError as error:
            self.fault(error.rule, error.remedy)
            return None

    def within(self, value: float, allowed: Allowed, *, remedy: str = "") -> float | None:
        """Check a value already read against a range."""
        if value in allowed:
            return value
        self.fault(allowed.rule, remedy)
        return None

    def _length_remedy(self, allowed: Allowed, *, thousandths: bool) -> str:
        """Say what a bare figure in the other unit would be written like, if that would do."""
        raw = (self.raw or "").strip()
        if not re.fullmatch(r"\d+(?:\.\d+)?", raw):
            return ""
        bare = float(raw)
        if thousandths and bare >= 4 and bare / 1000 * MM_PER_INCH in allowed:
            inches = figure(bare / 1000)
            return f"write {inches} in or {bare / 1000 * MM_PER_INCH:.3f} mm"
        if self.reading.unit == "mm" and bare * MM_PER_INCH in allowed:
            return f"write {raw} in or {figure(round(bare * MM_PER_INCH, 3))} mm"
        if self.reading.unit == "in" and bare in allowed:
            return f"write {raw} mm or {figure(round(bare / MM_PER_INCH, 4))} in"
        return ""


@dataclass(frozen=True, slots=True)
class Table:
    """The cursors of one mapping by key; an absent mapping is an empty table."""

    cursors: dict[str, Cursor]
    path: str
    line: int
    reading: Reading

    def __contains__(self, key: str) -> bool:
        return key in self.cursors

    @property
    def keys(self) -> list[str]:
        """The keys there are, in file order."""
        return list(self.cursors)

    def at(self, key: str) -> Cursor | None:
        """Give the cursor of a key, or None where the key is left out."""
        return self.cursors.get(key)

    def under(self, key: str) -> str:
        """Give the path of a key of this table."""
        return f"{self.path}.{key}".lstrip(".")

    def wrong(self, rule: str, remedy: str = "", *, key: str = "") -> None:
        """Record a fault of the mapping as a whole, or at one of its keys."""
        cursor = self.cursors.get(key)
        line = self.line if cursor is None else cursor.line
        path = self.under(key) if key else self.path
        self.reading.faults.append(Fault(self.reading.file, line, path, None, rule, remedy))

    def need(self, key: str, rule: str, remedy: str = "") -> Cursor | None:
        """Give the cursor of a key that may not be left out; its absence is a fault."""
        if key not in self.cursors:
            self.wrong(rule, remedy, key=key)
        return self.cursors.get(key)

    def saddle(self) -> Cursor | None:
        """Give the cursor of ``saddle``, which may also be written ``bridge``, but not both."""
        if "saddle" in self.cursors and "bridge" in self.cursors:
            self.wrong("saddle and bridge mean the same here", "keep one of them", key="bridge")
        return self.cursors.get("saddle") or self.cursors.get("bridge")

    def refuse_unknown(self, known: Collection[str]) -> None:
        """Record a fault for every key that is not among these, naming the nearest."""
        before = ""
        for key, cursor in self.cursors.items():
            if key not in known:
                cursor.wrong(*self._unknown(key, cursor, before, known))
            before = cursor.raw or ""

    def _unknown(
        self, key: str, cursor: Cursor, before: str, known: Collection[str]
    ) -> tuple[str, str]:
        if re.fullmatch(r"\d+(?: ?[a-z\"]+)?", key) and cursor.raw == "" and before.isdigit():
            # {nut: 0,53}: the comma ended the value and began a key.
            return "a number has a decimal point", f"write {before}.{key}"
        nearest = _nearest(key, tuple(known))
        return "there is no such key", nearest or f"the keys here are {', '.join(known)}"

    def inner(self, key: str, known: Sequence[str]) -> Table:
        """Give the table under a key; where it is left out (or is no mapping) an empty one."""
        cursor = self.cursors.get(key)
        table = None if cursor is None else cursor.table(known)
        if table is not None:
            return table
        line = self.line if cursor is None else cursor.line
        return Table({}, self.under(key), line, self.reading)

    # Values with defaults ---------------------------------------------------------------------

    def word(self, key: str, choices: Sequence[W], *, default: W) -> W:
        """Take a word, or note and return the default."""
        cursor = self.cursors.get(key)
        if cursor is None:
            self.reading.assume(self.under(key), default)
            return default
        return cursor.word(choices) or default

    def length(self, key: str, allowed: Allowed, *, default: float) -> float:
        """Take a length in mm, or note and return the default."""
        cursor = self.cursors.get(key)
        if cursor is None:
            self.reading.assume(self.under(key), f"{figure(default)} mm")
            return default
        taken = cursor.length(allowed)
        return default if taken is None else taken

    def length_or_none(self, key: str, allowed: Allowed) -> float | None:
        """Take a length in mm where the key is given."""
        cursor = self.cursors.get(key)
        return None if cursor is None else cursor.length(allowed)

    def whole(self, key: str, allowed: Allowed, *, default: int) -> int:
        """Take a whole number, or note and return the default."""
        cursor = self.cursors.get(key)
        if cursor is None:
            self.reading.assume(self.under(key), str(default))
            return default
        taken = cursor.whole(allowed)
        return default if taken is None else taken


def root_cursor(node: Node, reading: Reading) -> Cursor:
    """Give the cursor of a whole file."""
    return Cursor(node, "", node.line, reading)


def _nearest(word: str, known: Sequence[str]) -> str:
    """Name the known word nearest to what was written, if any is near."""
    near = difflib.get_close_matches(word[:60], known, n=1, cutoff=0.6)
    if not near:
        folded = {name.lower(): name for name in known}
        near = [folded[word.lower()]] if word.lower() in folded else []
    return f"the nearest is {near[0]}" if near else ""
