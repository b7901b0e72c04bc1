"""What shape has the board, how is the nut seated, and how are slots and wire?"""

from __future__ import annotations

from typing import Literal

from layout.instrument import (
    Board,
    ConeAtNut,
    LevelEdgesAtNut,
    Margins,
    Nut,
    OneRadius,
    Place,
    Slots,
    TopRule,
    TwoRadii,
    Widths,
    Wire,
)
from layout.job import ranges
from layout.job.cursor import Allowed, Cursor, Table
from layout.job.places import Places

NUT_KEYS = ("zero", "fit", "thickness", "seat", "behind")
BOARD_KEYS = (
    "margin", "width", "past_last_fret", "length", "end_lines", "thickness", "radius", "binding",
    "blank",
)  # fmt: skip
WIRE_KEYS = ("tang", "tang_depth", "crown_height", "crown_width", "stick", "over")
SLOT_KEYS = ("width", "floor", "clearance", "run", "past_edge", "short_of_edge")

ZEROS: tuple[Literal["edge", "kerf", "fret"], ...] = ("edge", "kerf", "fret")
FITS: tuple[Literal["trim", "overhang"], ...] = ("trim", "overhang")
SEATS: tuple[Literal["end", "channel"], ...] = ("end", "channel")
END_LINES: tuple[Literal["along", "square"], ...] = ("along", "square")
FLOORS: tuple[Literal["flat", "follow"], ...] = ("flat", "follow")
RUNS: tuple[Literal["open", "blind"], ...] = ("open", "blind")


def read_nut(root: Table) -> Nut:
    """Read where zero is, and how the nut is fitted and seated."""
    table = root.inner("nut", NUT_KEYS)
    zero = table.word("zero", ZEROS, default="edge")
    fit = table.word("fit", FITS, default="overhang")
    thickness = table.length("thickness", ranges.NUT_THICKNESS, default=5.0)
    seat = table.word("seat", SEATS, default="end")
    behind = table.length_or_none("behind", ranges.CHANNEL_BEHIND)
    if seat == "end" and "behind" in table:
        table.wrong("only a channel lies behind zero", "add seat: channel", key="behind")
    if seat == "channel" and "behind" not in table:
        table.wrong("a channel lies some way behind zero", "write behind: 3", key="behind")
    return Nut(zero, fit, thickness, seat, behind)


def read_board(root: Table, places: Places) -> Board:
    """Read edges, ends, thickness and top of the board."""
    table = root.inner("board", BOARD_KEYS)
    edges = _read_edges(table, places)
    length = table.length_or_none("length", ranges.BOARD_LENGTH)
    past = 12.0
    if "length" not in table:
        past = table.length("past_last_fret", ranges.PAST_LAST_FRET, default=past)
    elif "past_last_fret" in table:
        table.wrong("the length says where the board ends", "keep one of the two",
                    key="past_last_fret")  # fmt: skip
    ends = table.inner("end_lines", ("nut", "tail"))
    blank = table.inner("blank", ("width",)) if "blank" in table else None
    return Board(
        edges=edges,
        past_last_fret_mm=past,
        length_mm=length,
        nut_end=ends.word("nut", END_LINES, default="along"),
        tail_end=ends.word("tail", END_LINES, default="square"),
        thickness_mm=table.length("thickness", ranges.BOARD_THICKNESS, default=6.0),
        top=_read_top(table, places),
        binding_mm=table.length("binding", ranges.BINDING, default=0.0),
        blank_width_mm=blank.length_or_none("width", ranges.BOARD_WIDTH) if blank else None,
    )


def _read_edges(table: Table, places: Places) -> Margins | Widths:
    """Read the edges: margins beyond the outer strings, or widths at two places."""
    width_at, margin_at = table.at("width"), table.at("margin")
    if width_at is not None:
        if margin_at is not None:
            margin_at.wrong("the widths say where the edges lie", "keep one of the two")
        rule = "width is a mapping of two places, such as {nut: 43.5, 14: 54}"
        pair = _two_places(width_at, places, rule, ranges.BOARD_WIDTH)
        return Margins() if pair is None else Widths(*pair)
    if margin_at is not None and margin_at.is_text:
        both = margin_at.length(ranges.MARGIN)
        return Margins() if both is None else Margins(both, both)
    margin = table.inner("margin", ("nut", "tail"))
    return Margins(
        margin.length("nut", ranges.MARGIN, default=3.0),
        margin.length("tail", ranges.MARGIN, default=3.0),
    )


PlacePair = tuple[tuple[Place, float], tuple[Place, float]]


def _two_places(cursor: Cursor, places: Places, rule: str, allowed: Allowed) -> PlacePair | None:
    """Take lengths at two different places along the board."""
    if not cursor.is_table:
        cursor.fault(rule)
        return None
    found: dict[Place, float] = {}
    faults = len(cursor.reading.faults)
    table = cursor.open_table()
    for key, value in table.cursors.items():
        place, length = places.place(value, key), value.length(allowed)
        if place is not None and length is not None:
            found[place] = length
    if len(table.cursors) != 2:
        cursor.wrong(f"{rule}; here are {len(table.cursors)}")
    if len(found) != 2 or len(cursor.reading.faults) > faults:
        return None
    first, second = found.items()
    return first, second


def _read_top(table: Table, places: Places) -> TopRule:
    """Read how the top is curved: flat, one radius, two, or one of the two cones."""
    cursor = table.at("radius")
    if cursor is None:
        table.reading.assume(table.under("radius"), "flat")
        return None
    if cursor.is_word("flat"):
        return None
    if not cursor.is_table:
        radius = cursor.length(ranges.RADIUS)
        return None if radius is None else OneRadius(radius)
    inner = cursor.open_table()
    for key, rule in (("cone_at_nut", ConeAtNut), ("level_edges_at_nut", LevelEdgesAtNut)):
        if key in inner:
            inner.refuse_unknown((key,))
            radius = inner.length_or_none(key, ranges.RADIUS)
            return None if radius is None else rule(radius)
    said = "two radii stand at two places, such as {nut: 254, 22: 406}"
    pair = _two_places(cursor, places, said, ranges.RADIUS)
    return None if pair is None else TwoRadii(*pair)


def read_wire(root: Table) -> Wire:
    """Read the fretwire as measured."""
    table = root.inner("wire", WIRE_KEYS)
    return Wire(
        tang_mm=table.length_or_none("tang", ranges.TANG),
        tang_depth_mm=table.length_or_none("tang_depth", ranges.TANG_DEPTH),
        crown_height_mm=table.length_or_none("crown_height", ranges.CROWN_HEIGHT),
        crown_width_mm=table.length_or_none("crown_width", ranges.CROWN_WIDTH),
        stick_mm=table.length_or_none("stick", ranges.STICK),
        over_mm=table.length_or_none("over", ranges.WIRE_OVER),
    )


def read_slots(root: Table) -> Slots:
    """Read width, floor and run of the slots."""
    table = root.inner("slots", SLOT_KEYS)
    run = table.word("run", RUNS, default="open")
    width = table.length("width", ranges.SLOT_WIDTH, default=0.58)
    floor = table.word("floor", FLOORS, default="flat")
    clearance = table.length("clearance", ranges.SLOT_CLEARANCE, default=0.4)
    usual = Slots()
    past, short = usual.past_edge_mm, usual.short_of_edge_mm
    if run == "open" or "past_edge" in table:
        past = table.length("past_edge", ranges.PAST_EDGE, default=past)
    if run == "blind" or "short_of_edge" in table:
        short = table.length("short_of_edge", ranges.SHORT_OF_EDGE, default=short)
    return Slots(width, floor, clearance, run, past, short)
