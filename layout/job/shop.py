"""Which machine cuts, which marks and patterns are wanted, and on what paper?"""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Literal

from layout.instrument import (
    BowedStops,
    Loops,
    Marks,
    Paper,
    Pins,
    SlottingTemplate,
    Tape,
    Tooling,
)
from layout.job import ranges
from layout.job.cursor import Cursor, Table
from layout.job.places import Places

MACHINES: tuple[Literal["saw", "router", "laser"], ...] = ("saw", "router", "laser")
LINES: tuple[Literal["on", "offset"], ...] = ("on", "offset")
PIN_PLACES: tuple[Literal["waste", "face"], ...] = ("waste", "face")
StopSide = Literal["bridge_side", "nut_side", "middle"]
STOP_SIDES: tuple[StopSide, ...] = ("bridge_side", "nut_side", "middle")
TEMPLATE_EDGES: tuple[Literal["treble", "bass"], ...] = ("treble", "bass")
PaperSize = Literal["A4", "A3", "Letter", "Tabloid", "roll"]
PAPER_SIZES: tuple[PaperSize, ...] = ("A4", "A3", "Letter", "Tabloid", "roll")

LAYERS = (
    "CUT_OUTLINE", "CUT_SLOT", "CUT_POCKET", "CUT_FLOOR", "DRILL_MARK", "DRILL_PIN",
    "SCRIBE_STOP", "ENGRAVE_LABEL", "REF_CENTRE", "REF_STRING", "REF_LINE", "REF_BAR",
)  # fmt: skip
"""Layers of the drawings (drawings page)."""

_LAYER_NAME = re.compile(r"[A-Z_][A-Z0-9_-]{0,30}")
"""What every reader of drawings takes: 31 characters is the limit of the oldest format."""


# Tooling -----------------------------------------------------------------------------------------


def read_tooling(root: Table) -> Tooling | None:
    """Read the machine and its cutter or kerf."""
    if "tooling" not in root:
        return None
    table = root.inner("tooling", ("machine", "cutter", "runout", "kerf", "lines"))
    machine_at = table.need("machine", "the machine is missing", "write saw, router or laser")
    machine = machine_at.word(MACHINES) if machine_at else None
    if machine is None:
        return None
    _refuse_foreign(table, machine)
    if machine == "router":
        cutter_at = table.need("cutter", "a router needs its cutter", "write cutter: 0.58")
        cutter = cutter_at.length(ranges.CUTTER) if cutter_at else None
        return Tooling(machine, cutter, table.length("runout", ranges.RUNOUT, default=0.0))
    kerf = _kerf(table, machine)
    if machine == "saw":
        return Tooling(machine, kerf_mm=kerf)
    lines_at = table.need(
        "lines",
        "a laser needs to know what the lines mean",
        "write lines: on (the kerf widens the slot) or lines: offset (it is allowed for)",
    )
    return Tooling(machine, kerf_mm=kerf, lines=lines_at.word(LINES) if lines_at else None)


_FOREIGN = {"saw": ("cutter", "runout", "lines"), "router": ("kerf", "lines"),
            "laser": ("cutter", "runout")}  # fmt: skip


def _refuse_foreign(table: Table, machine: str) -> None:
    for key in _FOREIGN[machine]:
        if key in table:
            table.wrong(f"a {machine} has no {key}", "leave it out", key=key)


def _kerf(table: Table, machine: str) -> tuple[float, float] | None:
    """Read the kerf, one figure or one along each axis; a saw's may follow from the slots."""
    cursor = table.at("kerf")
    if cursor is None:
        if machine == "laser":
            table.wrong("a laser needs its kerf", "write kerf: 0.15, as measured", key="kerf")
        else:
            table.reading.assume(table.under("kerf"), "slots.width")
        return None
    if not cursor.is_table:
        both = cursor.length(ranges.KERF)
        return None if both is None else (both, both)
    inner = cursor.table(("x", "y"))
    if inner is None:
        return None
    x_at, y_at = (inner.need(axis, f"the kerf along {axis} is missing") for axis in ("x", "y"))
    x = x_at.length(ranges.KERF) if x_at else None
    y = y_at.length(ranges.KERF) if y_at else None
    return None if x is None or y is None else (x, y)


# Marks, pins and patterns ------------------------------------------------------------------------


def read_marks(root: Table, places: Places) -> Marks:
    """Read the position marks."""
    if "marks" not in root:
        return Marks()
    table = root.inner("marks", ("face", "double", "side", "face_size", "side_size"))
    face, double, side = (
        places.frets(cursor) if (cursor := table.at(key)) else ()
        for key in ("face", "double", "side")
    )
    return Marks(
        face,
        double,
        side,
        table.length("face_size", ranges.FACE_SIZE, default=6.0),
        table.length("side_size", ranges.SIDE_SIZE, default=2.0),
    )


def read_pins(root: Table) -> Pins | None:
    """Read the locating pins."""
    if "pins" not in root:
        return None
    table = root.inner("pins", ("size", "where"))
    size_at = table.need("size", "the size of the pins is missing", "write size: 3")
    size = size_at.length(ranges.PIN_SIZE) if size_at else None
    where = table.word("where", PIN_PLACES, default="waste")
    return None if size is None else Pins(size, where)


def read_loops(root: Table) -> Loops | None:
    """Read the gut of tied frets."""
    if "loops" not in root:
        return None
    table = root.inner("loops", ("first", "last", "turns", "stop"))
    first_at, last_at = (
        table.need(key, f"the gut of the {key} loop is missing") for key in ("first", "last")
    )
    first = first_at.length(ranges.LOOP_GUT, thousandths=True) if first_at else None
    last = last_at.length(ranges.LOOP_GUT, thousandths=True) if last_at else None
    if first is not None and last is not None and last_at and last > first:
        last_at.fault("the first loop is the thickest")
    turns = table.whole("turns", ranges.LOOP_TURNS, default=1)
    stop = table.word("stop", STOP_SIDES, default="bridge_side")
    return None if first is None or last is None else Loops(first, last, turns, stop)


def read_tape(root: Table) -> Tape | None:
    """Read the marker tape of an unfretted board."""
    if "tape" not in root:
        return None
    table = root.inner("tape", ("width", "stop"))
    width_at = table.need("width", "the width of the tape is missing", "write width: 3")
    width = width_at.length(ranges.TAPE_WIDTH) if width_at else None
    stop = table.word("stop", STOP_SIDES, default="bridge_side")
    return None if width is None else Tape(width, stop)


def read_stops(root: Table) -> BowedStops | None:
    """Read neck stop and body stop of a bowed instrument."""
    if "stops" not in root:
        return None
    table = root.inner("stops", ("neck", "body"))
    neck_at, body_at = (table.need(key, f"the {key} stop is missing") for key in ("neck", "body"))
    neck = neck_at.length(ranges.BOWED_STOP) if neck_at else None
    body = body_at.length(ranges.BOWED_STOP) if body_at else None
    return None if neck is None or body is None else BowedStops(neck, body)


def read_template(root: Table) -> SlottingTemplate | None:
    """Read the notched slotting template."""
    if "template" not in root:
        return None
    table = root.inner("template", ("notch", "edge"))
    notch = table.length("notch", ranges.NOTCH, default=3.0)
    return SlottingTemplate(notch, table.word("edge", TEMPLATE_EDGES, default="bass"))


# Paper and layers --------------------------------------------------------------------------------


@dataclass(frozen=True, slots=True)
class _Bars:
    along: float
    across: float


def read_paper(root: Table) -> Paper:
    """Read the paper of the 1:1 template."""
    table = root.inner("paper", ("size", "margin", "overlap", "bars"))
    bars = _bars(table)
    return Paper(
        table.word("size", PAPER_SIZES, default="A4"),
        table.length("margin", ranges.PAPER_MARGIN, default=10.0),
        table.length("overlap", ranges.PAPER_OVERLAP, default=15.0),
        bars.along,
        bars.across,
    )


def _bars(table: Table) -> _Bars:
    """Read what the 100 mm bars measured in the last print."""
    inner = table.inner("bars", ("along", "across"))
    return _Bars(
        inner.length("along", ranges.CHECK_BAR, default=100.0),
        inner.length("across", ranges.CHECK_BAR, default=100.0),
    )


def read_layers(root: Table) -> Mapping[str, str]:
    """Read new names for the layers of drawings."""
    if "layers" not in root:
        return {}
    table = root.inner("layers", LAYERS)
    renamed: dict[str, str] = {}
    for layer, cursor in table.cursors.items():
        name = _layer_name(cursor)
        if name is not None and layer in LAYERS:
            renamed[layer] = name
    _check_distinct(table, renamed)
    return renamed


def _layer_name(cursor: Cursor) -> str | None:
    raw = cursor.raw or ""
    if _LAYER_NAME.fullmatch(raw):
        return raw
    remedy = f"write {raw.upper()}" if _LAYER_NAME.fullmatch(raw.upper()) else ""
    cursor.fault(
        "a layer's name starts with a letter and is up to 31 of A to Z, 0 to 9, _ and -", remedy
    )
    return None


def _check_distinct(table: Table, renamed: Mapping[str, str]) -> None:
    taken = {layer: renamed.get(layer, layer) for layer in LAYERS}
    for layer, name in renamed.items():
        twin = next((other for other in LAYERS if other != layer and taken[other] == name), None)
        if twin is not None:
            table.cursors[layer].fault(f"layers keep names of their own; {twin} has this one")
