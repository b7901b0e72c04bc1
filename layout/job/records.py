"""Which temperament does a record describe?

A record is a YAML mapping of its own: a file of the library, a file beside the job, or a mapping
in the job file. All are read alike and every fault is placed; figures stay exact.
"""

from __future__ import annotations

import difflib
import re
from functools import lru_cache
from importlib.resources import files
from pathlib import Path

from layout.errors import FileError, JobError, PitchError
from layout.job.cursor import Cursor, Reading, Table, root_cursor
from layout.job.record_forms import FORMS, NEVER_ENDING_FORMS, take_degrees, take_ratio
from layout.job.tree import parse_tree, read_bytes
from layout.pitch.interval import Interval
from layout.pitch.notes import NoteName
from layout.pitch.temperament import Temperament

KEYS = ("name", "title", "source", "period", "notes", *FORMS)

_LIBRARY = "temperaments"
_NAME = re.compile(r"[a-z0-9]+(?:-[a-z0-9]+)*")


@lru_cache(maxsize=1)
def library_names() -> tuple[str, ...]:
    """Return the names of the records that come with the package, in order of name."""
    found = (entry.name for entry in files(_LIBRARY).iterdir())
    return tuple(sorted(name.removesuffix(".yaml") for name in found if name.endswith(".yaml")))


@lru_cache(maxsize=64)
def load_library_record(name: str) -> Temperament:
    """Return a record of the library.

    Raises
    ------
    PitchError
        When the library has no record of this name.

    Examples
    --------
    >>> load_library_record("equal-12").interval(12).fraction
    Fraction(2, 1)

    """
    if name not in library_names():
        raise PitchError(f"there is no temperament {name}; {_library_remedy(name)}")
    file = f"{name}.yaml"
    return read_record(files(_LIBRARY).joinpath(file).read_bytes(), file)


def _library_remedy(name: str) -> str:
    near = difflib.get_close_matches(name[:60], library_names(), n=3)
    if near:
        return f"the nearest in the library: {', '.join(near)}"
    return f"the library has {', '.join(library_names())}"


def load_record_file(path: Path) -> Temperament:
    """Return the record in a file of its own.

    Raises
    ------
    FileError
        When the file cannot be read.
    JobError
        When the record has faults; all of them are listed.

    """
    return read_record(read_bytes(path), path.name)


def read_record(data: bytes, file: str) -> Temperament:
    r"""Read a record from the bytes of a file; ``file`` names it in faults.

    Raises
    ------
    JobError
        When the record has faults; all of them are listed.

    Examples
    --------
    >>> record = b"name: own\ntitle: Own\nsource: me\nperiod: 3/1\nequal: 13\n"
    >>> read_record(record, "own.yaml").interval(13).fraction
    Fraction(3, 1)

    """
    reading = Reading(file)
    record = take_record(root_cursor(parse_tree(data, file), reading))
    reading.finish()
    assert record is not None  # or there was a fault
    return record


def take_temperament(cursor: Cursor) -> Temperament | None:
    """Take what stands under ``temperament``: a library name, a path to a record, or a record.

    A path ends in .yaml or .yml and counts from the folder of the job file. Faults are recorded
    (those of a record file under its own name), and None is returned.
    """
    if cursor.is_table:
        return take_record(cursor, inline=True)
    name = cursor.text("a temperament is a library name, a path to a .yaml record, or a mapping")
    if name is None:
        return None
    if name.endswith((".yaml", ".yml")):
        folder = cursor.reading.folder or Path()
        try:
            return load_record_file(folder / name)
        except FileError as error:
            cursor.fault(f"the record cannot be read: {error}")
        except JobError as error:
            cursor.reading.faults.extend(error.faults)
        return None
    if name not in library_names():
        cursor.fault("there is no such temperament", _library_remedy(name))
        return None
    return load_library_record(name)


def take_record(cursor: Cursor, *, inline: bool = False) -> Temperament | None:
    """Take a record from a mapping; faults are recorded and None is returned.

    One that stands ``inline`` in a job file may leave out its name, title and source.
    """
    before = len(cursor.reading.faults)
    table = cursor.table(KEYS, rule="a temperament record is a mapping")
    if table is None:
        return None
    name = _take_name(table, inline=inline)
    title = _take_words(table, "title", most=80, otherwise=name if inline else None)
    given_here = f"given in {cursor.reading.file}" if inline else None
    source = _take_words(table, "source", most=300, otherwise=given_here)
    form = _take_form(table)
    notes = _take_notes(table)
    period = _take_period(table, form)
    made = None if form is None else take_degrees(form, table, period=period, notes=notes)
    if form is None or made is None or len(cursor.reading.faults) > before:
        return None
    if notes is not None and len(notes) != len(made.degrees):
        table.wrong(f"{len(notes)} names do not fit {len(made.degrees)} degrees", key="notes")
        return None
    try:
        return Temperament(name, title, source, made.degrees, period, made.step, notes, form=form)
    except PitchError as error:
        table.wrong(str(error), key=form)
        return None


def _take_name(table: Table, *, inline: bool) -> str:
    rule = "a record has a name of small letters, digits and hyphens"
    cursor = table.at("name") if inline else table.need("name", rule)
    if cursor is None:
        return "inline"
    name = cursor.text(rule, most=60) or ""
    if name and not _NAME.fullmatch(name):
        cursor.fault(rule)
    return name


def _take_words(table: Table, key: str, *, most: int, otherwise: str | None) -> str:
    rule = f"a record has a {key}"
    cursor = table.need(key, rule) if otherwise is None else table.at(key)
    if cursor is None:
        return otherwise or ""
    return cursor.text(rule, most=most) or ""


def _take_form(table: Table) -> str | None:
    given = [key for key in table.keys if key in FORMS]
    if not given:
        table.wrong(f"a record has exactly one of the keys {', '.join(FORMS)}")
    for extra in given[1:]:
        table.wrong(f"a record has one form, and {given[0]} stands above", key=extra)
    return given[0] if given else None


def _take_notes(table: Table) -> tuple[NoteName, ...] | None:
    cursor = table.at("notes")
    items = cursor and cursor.items("notes is a list of names", least=1, most=1200)
    if not items:
        return None
    notes: list[NoteName] = []
    for item in items:
        name = item.note_name()
        if name in notes:
            item.fault("the name stands twice")
        if name is not None:
            notes.append(name)
    return tuple(notes) if len(notes) == len(items) else None


def _take_period(table: Table, form: str | None) -> Interval | None:
    rule = "period is the ratio after which the degrees repeat, such as 2, or none"
    if form in NEVER_ENDING_FORMS:
        for key in ("period", "notes"):
            if (given := table.at(key)) is not None and not given.is_word("none"):
                given.wrong(f"a record with {form} never ends and has no {key}", "leave it out")
        return None
    cursor = table.need("period", rule)
    if cursor is None:
        return None
    if cursor.is_word("none"):
        if "notes" in table:
            cursor.fault("a record with notes repeats", "give its period, or leave notes out")
        if form in ("equal", "fifths"):
            cursor.fault(f"a record with {form} repeats", "give its period, such as 2")
        return None
    ratio = take_ratio(cursor, rule)
    if ratio == 1:
        cursor.fault("a period is above 1")
        return None
    return None if ratio is None else Interval.of(ratio)
