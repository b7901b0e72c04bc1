"""Instruments that the tests of planning change one thing at a time."""

from dataclasses import replace

import pytest

from layout.instrument import (
    ActionGaps,
    Board,
    Compensation,
    Frets,
    Heights,
    Instrument,
    Margins,
    MultiScale,
    Nut,
    ParallelScale,
    Reference,
    Same,
    ShortStart,
    Sides,
    SpreadRule,
    StringSpec,
    Tooling,
    TwoRadii,
    Wire,
)
from layout.job.records import load_library_record
from layout.pitch.notes import read_note
from layout.pitch.temperament import equal

INCH = 25.4
STEEL_SET = (
    ("E4", 12, None),
    ("B3", 16, None),
    ("G3", 24, 13),
    ("D3", 32, 14.5),
    ("A2", 42, 16),
    ("E2", 53, 17),
)
"""Note, gauge and core in thousandths of an inch; common practice, no source."""


def rows(count, temperament=None, *, counted_from="open", slant="square", **more):
    return Frets(
        count,
        temperament or equal(12),
        counted_from,
        labels=tuple(str(number) for number in range(1, count + 1)),
        steps=tuple(range(1, count + 1)),
        slant=slant,
        **more,
    )


def steel(note, gauge, core):
    if core is None:
        return StringSpec(
            note=read_note(note), make="plain", material="steel", gauge_mm=gauge / 1000 * INCH
        )
    return StringSpec(
        note=read_note(note),
        make="wound",
        material="phosphor bronze",
        gauge_mm=gauge / 1000 * INCH,
        core_mm=core / 1000 * INCH,
    )


def bare(*names):
    return tuple(StringSpec(note=read_note(name)) for name in names)


A440 = Reference(read_note("A4"), 440.0)


@pytest.fixture(scope="session")
def fret_rows():
    """Give ``fret_rows(count, temperament, ...)``."""
    return rows


@pytest.fixture(scope="session")
def six():
    """Six strings without gauges or heights: geometry alone."""
    return Instrument(
        title="Six",
        reference=A440,
        scale=ParallelScale(628.65),
        strings=bare("E4", "B3", "G3", "D3", "A2", "E2"),
        frets=rows(20),
        spread=SpreadRule(36.0, 54.0),
    )


@pytest.fixture(scope="session")
def fan(six):
    """Six strings on two scales."""
    return replace(
        six,
        scale=MultiScale(647.7, 685.8, 7.0),
        frets=rows(24, slant="free"),
        spread=SpreadRule(36.0, 52.5),
    )


@pytest.fixture(scope="session")
def parlour(six):
    """A whole steel-string guitar."""
    return replace(
        six,
        strings=tuple(steel(*row) for row in STEEL_SET),
        heights=Heights(ActionGaps(1, Same(0.4), 12, Sides(1.8, 2.3)), 0.1, 14),
        compensation=Compensation("each", "each", 2.4, 1, 12),
        nut=Nut(fit="trim"),
        board=Board(Margins(3.5, 3.5), thickness_mm=6.4, top=TwoRadii(("nut", 305), ("tail", 406))),
        wire=Wire(0.53, 1.9, 1.1, 2.3),
        tooling=Tooling("router", 0.58, 0.02),
    )


@pytest.fixture(scope="session")
def lute(six):
    """Six courses of one string in quarter-comma meantone, counted from the key."""
    return replace(
        six,
        scale=ParallelScale(600.0),
        strings=bare("G4", "D4", "A3", "F3", "C3", "G2"),
        frets=rows(8, load_library_record("meantone-quarter-comma"), counted_from="key"),
    )


@pytest.fixture(scope="session")
def banjo(six):
    """Five strings, the fifth from fret 5; the gauges common practice, no source."""
    set_ = (("D4", 10, None), ("B3", 12, None), ("G3", 16, None), ("D3", 23, 12), ("G4", 10, None))
    full = tuple(steel(*row) for row in set_)
    return replace(
        six,
        scale=ParallelScale(666.75),
        strings=(*full[:4], replace(full[4], starts_at=ShortStart(5, 0.0, 9.0))),
        frets=rows(22),
        spread=SpreadRule(24.0, 33.0),
        heights=Heights(ActionGaps(1, Same(0.4), 12, Sides(2.2, 2.6)), 0.0, 14),
        compensation=Compensation("none", "straight", None, 1, 12),
    )
