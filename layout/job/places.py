"""Which fret does a label name, and which strings do numbers name?

Other groups of keys refer to frets by their labels and to strings by their numbers. Where the
frets or strings themselves are faulty nothing is looked up, so that one slip is told once.
"""

from __future__ import annotations

from dataclasses import dataclass

from layout.instrument import Listed, PerString, Place, Same, Sides, StringSpec
from layout.job.cursor import Allowed, Cursor, Table

NOT_LABELS = ("nut", "tail", "bridge", "saddle", "0")
"""Names of places that are no frets."""


@dataclass(frozen=True, slots=True)
class Places:
    """The board's fret labels and strings; None where the job has faults there."""

    labels: tuple[str, ...] | None
    strings: tuple[StringSpec, ...] | None = None
    faulty: frozenset[int] = frozenset()
    """Numbers of the strings that have faults, of which no more is asked."""

    # Frets ------------------------------------------------------------------------------------

    def number(self, label: str) -> int | None:
        """Give the number of the fret of a label, or None."""
        if self.labels is None or label not in self.labels:
            return None
        return self.labels.index(label) + 1

    def fret(self, cursor: Cursor) -> int | None:
        """Take a fret label and give its number."""
        raw = cursor.raw
        if raw is None or not raw.strip():
            cursor.fault("here stands the label of a fret")
            return None
        number = self.number(raw.strip())
        if number is None and self.labels is not None:
            cursor.fault(self._which_frets())
        return number

    def fret_keyed(self, cursor: Cursor, label: str) -> int | None:
        """Give the number of a fret whose label is the key the cursor stands under."""
        number = self.number(label)
        if number is None and self.labels is not None:
            cursor.wrong(f"there is no fret {label}", self._which_frets())
        return number

    def frets(self, cursor: Cursor) -> tuple[int, ...]:
        """Take a list of fret labels and give their numbers, each once."""
        items = cursor.items("here stands a list of fret labels, such as [3, 5, 7]", most=200)
        return self._each_once(items or [])

    def _each_once(self, items: list[Cursor]) -> tuple[int, ...]:
        numbers: list[int] = []
        for item in items:
            number = self.fret(item)
            if number is not None and number in numbers:
                item.fault("a fret stands in the list once")
            elif number is not None:
                numbers.append(number)
        return tuple(numbers)

    def by_fret(self, cursor: Cursor, rule: str) -> list[tuple[int, Cursor]]:
        """Take a mapping keyed by fret labels; give number and value of each."""
        if not cursor.is_table:
            cursor.fault(rule)
            return []
        found = []
        for label, value in cursor.open_table().cursors.items():
            number = self.fret_keyed(value, label)
            if number is not None:
                found.append((number, value))
        return found

    def _which_frets(self) -> str:
        assert self.labels is not None
        if self.labels == tuple(str(number) for number in range(1, len(self.labels) + 1)):
            return f"the frets are 1 to {len(self.labels)}"
        return f"the frets are {', '.join(self.labels[:30])}"

    def place(self, cursor: Cursor, key: str) -> Place | None:
        """Give the place along the board that a key names: an end, or a fret by label."""
        if key == "nut":
            return "nut"
        if key == "tail":
            return "tail"
        if key in ("bridge", "saddle"):
            return "bridge"
        if self.labels is not None and key not in self.labels:
            cursor.wrong(
                f"there is no place {key}", f"places are nut, tail, bridge; {self._which_frets()}"
            )
        return self.number(key)

    # Strings ----------------------------------------------------------------------------------

    @property
    def count(self) -> int | None:
        """How many strings there are."""
        return None if self.strings is None else len(self.strings)

    def string_numbers(self, cursor: Cursor) -> tuple[int, ...] | None:
        """Take a list of the numbers of strings that run over the board, each once."""
        rule = "here stands a list of string numbers, such as [1, 2]"
        items = cursor.items(rule, least=1, most=64)
        if items is None or self.strings is None:
            return None
        allowed = Allowed("the strings are", 1, len(self.strings))
        numbers: list[int] = []
        for item in items:
            number = item.whole(allowed)
            if number is None:
                continue
            if number in numbers:
                item.fault("a string stands in the list once")
            elif not self.strings[number - 1].fretted and number not in self.faulty:
                item.fault("an open-only string has no stops")
            else:
                numbers.append(number)
        return tuple(sorted(numbers))

    def per_string(self, cursor: Cursor, allowed: Allowed) -> PerString | None:
        """Take a length for every string: one, one at each side, or a list."""
        if cursor.is_list:
            values = self.listed(cursor, allowed)
            return None if values is None else Listed(values)
        if cursor.is_table:
            return sides(cursor, allowed)
        value = cursor.length(allowed)
        return None if value is None else Same(value)

    def listed(self, cursor: Cursor, allowed: Allowed) -> tuple[float, ...] | None:
        """Take a list of one length a string."""
        least = self.count or 0
        what = f"one length a string is {least} of them" if least else "here stands a list"
        items = cursor.items(what, least=least, most=self.count)
        if items is None:
            return None
        values = [item.length(allowed) for item in items]
        return tuple(value for value in values if value is not None)


def sides(cursor: Cursor, allowed: Allowed) -> Sides | None:
    """Take lengths at the treble and at the bass side."""
    table = cursor.table(("treble", "bass"))
    if table is None:
        return None
    treble, bass = (_side(table, side, allowed) for side in ("treble", "bass"))
    return None if treble is None or bass is None else Sides(treble, bass)


def _side(table: Table, side: str, allowed: Allowed) -> float | None:
    cursor = table.need(side, f"a figure for the {side} side is missing", "give treble and bass")
    return None if cursor is None else cursor.length(allowed)
