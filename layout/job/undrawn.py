"""Which keys of a job are read and checked but do not yet change what is drawn?

One table; a row goes when its drawing comes.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from layout.findings import Finding, Severity
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
    severity
        A warning where ignoring the key would spoil the wood.

    """

    path: str
    what: str
    values: tuple[str, ...] = ()
    unless: tuple[str, str] | None = None
    severity: Severity = "note"


UNDRAWN = (
    Undrawn(
        "frets.kind",
        "loops of gut, and marks and ratios of unfretted boards; stops are scribed",
        ("tied", "lines"),
        severity="warning",
    ),
    Undrawn(
        "frets.placing",
        "stops laid by their predicted pitch",
        ("straight", "each"),
        severity="warning",
    ),
    Undrawn("loops", "the gut of tied frets"),
    Undrawn("tape", "marker tape"),
    Undrawn("stops", "neck stop and body stop in words"),
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
            row.severity,
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
