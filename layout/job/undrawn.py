"""Which keys of a job are read and checked but do not yet change what is drawn?

One table; a row goes when its drawing comes.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from layout.findings import Finding
from layout.job.tree import ListNode, Node, TableNode, TextNode


@dataclass(frozen=True, slots=True)
class Undrawn:
    """A key without an effect on drawings yet.

    Attributes
    ----------
    path
        The key, list positions left out: ``strings.starts_at``.
    what
        What it will affect.
    values
        The values that count; empty for all of them.
    unless
        A path and value that give the key its effect already.

    """

    path: str
    what: str
    values: tuple[str, ...] = ()
    unless: tuple[str, str] | None = None


UNDRAWN = (
    Undrawn("strings.starts_at", "the step of the board's edge before a short string"),
    Undrawn("strings.open_only", "strings that run beside the board", ("true",)),
    Undrawn("frets.kind", "loops and stop lines in place of slots", ("tied", "lines")),
    Undrawn("frets.placing", "stops laid by their predicted pitch", ("straight", "each")),
    Undrawn("frets.only", "partial frets"),
    Undrawn("bridge", "the pieces or the printed place of the bridge", ("loose", "separate")),
    Undrawn("bridge.separate", "the travel of the bridge pieces"),
    Undrawn("nut.seat", "the channel behind the nut", ("channel",)),
    Undrawn("nut.thickness", "the nut's own sheet", unless=("nut.zero", "fret")),
    Undrawn("board.blank", "knife marks on the square blank"),
    Undrawn("wire.stick", "the cutting list of fretwire"),
    Undrawn("wire.over", "the cutting list of fretwire"),
    Undrawn("slots.floor", "the floors of the slots", ("follow",)),
    Undrawn("slots.clearance", "the depth of the slots"),
    Undrawn("tooling.lines", "outlines drawn inward by half the kerf", ("offset",)),
    Undrawn("marks", "position marks"),
    Undrawn("pins", "locating pins"),
    Undrawn("loops", "the gut of tied frets"),
    Undrawn("tape", "marker tape"),
    Undrawn("stops", "neck stop and body stop in words"),
    Undrawn("template", "the notched slotting template"),
    Undrawn("paper", "the paper template"),
)


def find_undrawn(root: Node) -> Iterator[Finding]:
    """Give a note for every key in the job that this version does not draw yet."""
    given = dict(_given(root, ""))
    for row in UNDRAWN:
        value = given.get(row.path)
        if value is None or (row.values and value not in row.values):
            continue
        if row.unless and given.get(row.unless[0]) == row.unless[1]:
            continue
        yield Finding(
            "not-drawn-yet",
            "note",
            f"{row.path} is read and checked, but this version does not draw what it asks for: "
            f"{row.what}. Lay that out by hand, or leave the key out.",
        )


def _given(node: Node, path: str) -> Iterator[tuple[str, str]]:
    """Give every key path, list positions left out, with its text (empty where it has none)."""
    match node:
        case TextNode(text=text):
            yield path, text
        case ListNode(items=items):
            yield path, ""
            for item in items:
                yield from _given(item, path)
        case TableNode(entries=entries):
            yield path, ""
            for entry in entries:
                yield from _given(entry.node, f"{path}.{entry.key}".lstrip("."))
