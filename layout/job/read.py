"""What instrument does a job file describe?

One run finds every fault of the file. Groups of keys are read in the order in which they need one
another; faults are told in file order.
"""

from __future__ import annotations

import hashlib
from collections.abc import Iterator
from dataclasses import replace
from pathlib import Path
from typing import Literal

from layout.instrument import Instrument
from layout.job import ranges
from layout.job.board import read_board, read_nut, read_slots, read_wire
from layout.job.cursor import Reading, Table, root_cursor
from layout.job.frets import FretRow, read_fret_row, read_frets
from layout.job.heights import read_heights
from layout.job.places import Places
from layout.job.scale import read_reference, read_scale, read_spread
from layout.job.setup import (
    check_placing,
    read_bridge,
    read_compensation,
    read_finger,
    read_supports,
)
from layout.job.shop import (
    read_layers,
    read_loops,
    read_marks,
    read_paper,
    read_pins,
    read_stops,
    read_tape,
    read_template,
    read_tooling,
)
from layout.job.strings import read_strings
from layout.job.tree import ListNode, Node, TableNode, parse_tree, read_bytes
from layout.job.undrawn import find_undrawn

JOB_KEYS = (
    "title", "hand", "unit", "reference", "scale", "strings", "spread", "frets", "heights",
    "finger", "supports", "compensation", "bridge", "nut", "board", "wire", "slots", "tooling",
    "marks", "pins", "loops", "tape", "stops", "template", "paper", "layers",
)  # fmt: skip

HANDS: tuple[Literal["right", "left"], ...] = ("right", "left")
UNITS: tuple[Literal["mm", "in"], ...] = ("mm", "in")


def read_job(path: Path | str) -> Instrument:
    """Read a job file into an instrument, with every default filled in and listed.

    Raises
    ------
    FileError
        When the file cannot be read.
    JobError
        When the job has faults; all of them are listed, in file order.

    """
    file = Path(path)
    return read_job_text(read_bytes(file), file.name, folder=file.parent)


def read_job_text(data: bytes, name: str, *, folder: Path | None = None) -> Instrument:
    r"""Read a job from its bytes; ``name`` names it in faults.

    Parameters
    ----------
    data
        The bytes of a job file.
    name
        Its name.
    folder
        Where temperament records of the job's own lie; the current directory where None.

    Raises
    ------
    JobError
        When the job has faults; all of them are listed, in file order.

    Examples
    --------
    >>> job = b"title: One string\nscale: 25 1/2 in\nstrings: [A2]\nspread: {nut: 0, saddle: 0}\n"
    >>> instrument = read_job_text(job + b"frets: 12\n", "one.yaml")
    >>> instrument.scale.length_mm, instrument.frets.labels[-1]
    (647.7, '12')

    """
    root_node = parse_tree(data, name)
    reading = Reading(name, folder=folder)
    root = root_cursor(root_node, reading).table(
        JOB_KEYS, rule="a job is a mapping of keys such as title, scale, strings, spread and frets"
    )
    if root is None:
        reading.finish()
    assert root is not None
    instrument = _read_instrument(root, sha256=hashlib.sha256(data).hexdigest())
    reading.findings.extend(find_undrawn(root_node))
    reading.finish()
    assert instrument is not None  # or there was a fault
    return replace(
        instrument,
        assumed=tuple(reading.assumed),
        findings=tuple(reading.findings),
        file=name,
        lines=dict(_list_lines(root_node, "")),
    )


def _list_lines(node: Node, path: str) -> Iterator[tuple[str, int]]:
    """Give every key path, list places counted from 1, and its line."""
    match node:
        case TableNode(entries=entries):
            for entry in entries:
                below = f"{path}.{entry.key}".lstrip(".")
                yield below, entry.line
                yield from _list_lines(entry.node, below)
        case ListNode(items=items):
            for place, item in enumerate(items, start=1):
                yield f"{path}[{place}]", item.line
                yield from _list_lines(item, f"{path}[{place}]")
        case _:
            return


def _read_instrument(root: Table, *, sha256: str) -> Instrument | None:
    title = _read_title(root)
    unit = root.word("unit", UNITS, default="mm")
    root.reading.unit = unit
    hand = root.word("hand", HANDS, default="right")
    reference = read_reference(root)
    row = read_fret_row(root)
    places = read_strings(root, Places(_labels(row)))
    scale = read_scale(root, places)
    frets = read_frets(row, places, reference=reference, scale=scale) if row else None
    spread = read_spread(root, places, required=row is None or row.kind == "slotted")
    nut = read_nut(root)
    heights = read_heights(root, places, zero=nut.zero)
    finger, supports, bridge = read_finger(root), read_supports(root), read_bridge(root)
    compensation = read_compensation(root, places, heights=heights, zero=nut.zero)
    check_placing(root, places, placing=frets.placing if frets else "divided")
    board, wire, slots = read_board(root, places), read_wire(root), read_slots(root)
    tooling, marks, pins = read_tooling(root), read_marks(root, places), read_pins(root)
    loops, tape, stops = read_loops(root), read_tape(root), read_stops(root)
    template, paper, layers = read_template(root), read_paper(root), read_layers(root)
    if title is None or scale is None or places.strings is None or frets is None:
        return None
    return Instrument(
        title=title,
        reference=reference,
        scale=scale,
        strings=places.strings,
        frets=frets,
        spread=spread,
        hand=hand,
        unit=unit,
        heights=heights,
        finger=finger,
        supports=supports,
        compensation=compensation,
        bridge=bridge,
        nut=nut,
        board=board,
        wire=wire,
        slots=slots,
        tooling=tooling,
        marks=marks,
        pins=pins,
        loops=loops,
        tape=tape,
        stops=stops,
        template=template,
        paper=paper,
        layers=layers,
        job_sha256=sha256,
    )


def _labels(row: FretRow | None) -> tuple[str, ...] | None:
    return row.labels if row and row.labels_known else None


def _read_title(root: Table) -> str | None:
    cursor = root.need("title", "the title is missing", "write title: and what you are making")
    return cursor.text("a title is one line of text", most=ranges.LONGEST_TITLE) if cursor else None
