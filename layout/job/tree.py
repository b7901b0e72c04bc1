"""Which keys, lists and texts does a file hold, and on which line does each stand?

The only module that takes values from YAML. It reads the parser's events and builds plain nodes
whose texts stay exactly as written: no number, date, truth value or missing value is ever guessed.
What could make a small file large or a plain one clever (aliases, anchors, tags, several
documents) is refused at its event, before anything is built from it.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass, field
from pathlib import Path

import yaml

from layout.errors import Fault, FileError, JobError

LARGEST_FILE_BYTES = 1_000_000
"""A job of a few kilobytes is long; this bounds the time any file can take."""

DEEPEST_NESTING = 12
"""Levels of mappings and lists; the deepest key of a job needs six."""

MOST_SYNTAX_FAULTS = 20
"""Aliases, anchors and tags are listed up to this many."""

_QUOTED_STYLES = ("'", '"', "|", ">")

_Loader = getattr(yaml, "CSafeLoader", yaml.SafeLoader)


@dataclass(frozen=True, slots=True)
class TextNode:
    """One text exactly as written (without its quotation marks), and its line from 1."""

    text: str
    line: int
    quoted: bool = False

    @property
    def missing(self) -> bool:
        """Whether nothing at all is written after the key or dash."""
        return not self.text and not self.quoted


@dataclass(frozen=True, slots=True)
class ListNode:
    """A list and the line it starts on."""

    items: tuple[Node, ...]
    line: int


@dataclass(frozen=True, slots=True)
class Entry:
    """One key of a mapping, the key's line, and what stands under it."""

    key: str
    line: int
    node: Node


@dataclass(frozen=True, slots=True)
class TableNode:
    """A mapping, with keys in file order (a key written twice stands twice)."""

    entries: tuple[Entry, ...]
    line: int


Node = TextNode | ListNode | TableNode


def read_bytes(path: Path) -> bytes:
    """Read a file's bytes, having looked at its kind and size first.

    Raises
    ------
    FileError
        When there is no such file, it is a directory, or it may not be read.
    JobError
        When it is larger than any job.

    """
    if path.is_dir():
        raise FileError(f"{path} is a directory; name the job file in it")
    try:
        size = path.stat().st_size
        with path.open("rb") as stream:
            # One byte more than is allowed tells a pipe or device that has no size of its own.
            found = b"" if size > LARGEST_FILE_BYTES else stream.read(LARGEST_FILE_BYTES + 1)
    except FileNotFoundError:
        raise FileError(f"{path}: there is no such file") from None
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or "it could not be read"
        raise FileError(f"{path}: {reason}") from error
    size = max(size, len(found))
    if size > LARGEST_FILE_BYTES:
        raise JobError([_too_large(path.name, size)])
    return found


def _too_large(name: str, size: int) -> Fault:
    return Fault(
        name, None, "", None, f"a file has at most 1 MB; this one has {size / 1e6:.1f} MB",
        "check that it is a job file",
    )  # fmt: skip


def parse_tree(data: bytes, name: str) -> Node:
    r"""Turn a file's bytes into nodes with line numbers.

    Parameters
    ----------
    data
        The bytes of the file.
    name
        The file's name, for the faults.

    Returns
    -------
    Node
        The root; usually a `TableNode`.

    Raises
    ------
    JobError
        When the bytes are too many, are no UTF-8 text, hold nothing, are not well-formed YAML,
        nest too deep, or use aliases, anchors, tags or a second document.

    Examples
    --------
    >>> root = parse_tree(b"scale: 628.65\nfrets: 012\n", "job.yaml")
    >>> [(entry.line, entry.key, entry.node.text) for entry in root.entries]
    [(1, 'scale', '628.65'), (2, 'frets', '012')]

    """
    if len(data) > LARGEST_FILE_BYTES:
        raise JobError([_too_large(name, len(data))])
    text = _decode(data, name)
    builder = _Builder(name)
    try:
        for event in yaml.parse(text, Loader=_Loader):
            builder.take(event)
    except yaml.YAMLError as error:
        raise JobError([*builder.faults, _explain(error, text, name)]) from None
    if builder.faults:
        raise JobError(builder.faults)
    if builder.root is None:
        raise JobError([Fault(name, None, "", None, "the file holds no keys", _LEAST)])
    return builder.root


_LEAST = "the least that runs is title, scale, strings, spread and frets"

_NOT_TEXT = re.compile("[\x00-\x08\x0b\x0c\x0e-\x1f\x7f-\x9f\u2028\u2029\ufeff\ufffe\uffff]")
"""Control characters, and the line ends only some editors count."""


def _decode(data: bytes, name: str) -> str:
    """Return the text of the bytes; a byte order mark of UTF-8 is dropped."""
    if b"\x00" in data:
        line = data[: data.index(b"\x00")].count(b"\n") + 1
        raise JobError([_not_text(name, line, "this file holds zero bytes, so it is no text")])
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = data[: error.start].count(b"\n") + 1
        shown = f"byte 0x{data[error.start]:02x}"
        raise JobError([_not_text(name, line, f"{shown} is no part of UTF-8 text")]) from None
    if match := _NOT_TEXT.search(text):
        line = text[: match.start()].count("\n") + 1
        shown = f"the character U+{ord(match[0]):04X}"
        raise JobError([_not_text(name, line, f"{shown} does not belong into text")])
    return text.replace("\r\n", "\n").replace("\r", "\n")


def _not_text(name: str, line: int, rule: str) -> Fault:
    return Fault(name, line, "", None, rule, "save the file as plain text in UTF-8")


@dataclass(slots=True)
class _Open:
    """A list or mapping whose end has not come yet."""

    line: int
    table: bool
    items: list[Node] = field(default_factory=list)
    entries: list[Entry] = field(default_factory=list)
    key: TextNode | None = None


@dataclass(slots=True)
class _Builder:
    """Takes events one by one; holds the open lists and mappings, never a call stack."""

    name: str
    root: Node | None = None
    faults: list[Fault] = field(default_factory=list)
    _stack: list[_Open] = field(default_factory=list)
    _documents: int = 0

    def take(self, event: yaml.Event) -> None:
        mark = event.start_mark
        line = 1 if mark is None else mark.line + 1
        if isinstance(event, yaml.DocumentStartEvent):
            self._documents += 1
            if self._documents > 1:
                raise self._stopped(line, "a file holds one document", "drop what follows the ---")
        elif isinstance(event, yaml.AliasEvent):
            self._refuse(line, f"*{event.anchor}", "aliases are not read", "write the value out")
            self._place(TextNode("", line))
        elif isinstance(event, yaml.NodeEvent):
            self._take_node(event, line)
        elif isinstance(event, yaml.CollectionEndEvent):
            done = self._stack.pop()
            self._place(
                TableNode(tuple(done.entries), done.line)
                if done.table
                else ListNode(tuple(done.items), done.line)
            )

    def _take_node(self, event: yaml.NodeEvent, line: int) -> None:
        if event.anchor is not None:
            self._refuse(line, f"&{event.anchor}", "anchors are not read", "write the value out")
        tag = getattr(event, "tag", None)
        if tag is not None:
            self._refuse(line, tag, "tags are not read", "put text that begins with ! in quotes")
        if isinstance(event, yaml.ScalarEvent):
            # An empty value is marked where the next token stands: keep it on its key's line.
            key = self._stack[-1].key if self._stack else None
            quoted = event.style in _QUOTED_STYLES
            written_on = key.line if key and not event.value and not quoted else line
            self._place(TextNode(event.value, written_on, quoted))
        else:
            if len(self._stack) == DEEPEST_NESTING:
                rule = f"lists and mappings nest at most {DEEPEST_NESTING} deep"
                raise self._stopped(line, rule, "check the brackets")
            self._stack.append(_Open(line, isinstance(event, yaml.MappingStartEvent)))

    def _place(self, node: Node) -> None:
        if not self._stack:
            self.root = None if isinstance(node, TextNode) and node.missing else node
            return
        inner = self._stack[-1]
        if not inner.table:
            inner.items.append(node)
        elif inner.key is not None:
            inner.entries.append(Entry(inner.key.text, inner.key.line, node))
            inner.key = None
        elif isinstance(node, TextNode):
            inner.key = node
        else:
            raise self._stopped(node.line, "a key is one word", "check the brackets and the ?")

    def _refuse(self, line: int, value: str, rule: str, remedy: str) -> None:
        self.faults.append(Fault(self.name, line, "", shorten(value), rule, remedy))
        if len(self.faults) >= MOST_SYNTAX_FAULTS:
            raise JobError(self.faults)

    def _stopped(self, line: int, rule: str, remedy: str) -> JobError:
        return JobError([*self.faults, Fault(self.name, line, "", None, rule, remedy)])


def shorten(text: str, *, most: int = 60) -> str:
    """Return a text on one line and not longer than a message bears.

    >>> shorten("a" * 9 + chr(10), most=8)
    'aaaaa...'
    """
    line = "".join(letter if letter.isprintable() else " " for letter in text)
    return line if len(line) <= most else f"{line[: most - 3]}..."


def _explain(error: yaml.YAMLError, text: str, name: str) -> Fault:
    """Say in a maker's words what the parser stumbled over, and on which line."""
    problem = str(getattr(error, "problem", "") or "")
    mark = getattr(error, "problem_mark", None)
    lines = text.split("\n")
    line = min(mark.line + 1, len(lines)) if mark else None
    opened_mark = getattr(error, "context_mark", None)
    opened = min(opened_mark.line + 1, len(lines)) if opened_mark else line
    context = str(getattr(error, "context", "") or "")
    for place, rule, remedy in _known_problems(problem, context, line, opened, lines):
        return Fault(name, place, "", None, rule, remedy)
    return Fault(
        name, line, "", None, "this line does not fit the ones before it",
        "check its indentation, and the quotes and brackets above it",
    )  # fmt: skip


Known = tuple[int | None, str, str]


def _lacks_space(line: str) -> bool:
    """Whether a line reads like key:value, which is one word to YAML."""
    return re.fullmatch(r"[ -]*\w+:[^\s:]\S*", line.partition(" #")[0].rstrip()) is not None


def _known_problems(
    problem: str, context: str, line: int | None, opened: int | None, lines: list[str]
) -> Iterator[Known]:
    """Give what is known of a parser's complaint: line, rule and remedy, the best one first."""
    if line and re.match(r" *\t", lines[line - 1]):
        yield line, "this line is indented with a tab", "indent with spaces"
    if "quoted scalar" in context and "end of stream" in problem:
        yield opened, "a quotation mark opened on this line is never closed", "close it"
    if "flow" in context and "mapping values" not in problem:
        yield opened, "a bracket opened on this line is not closed well", _CHECK_BRACKETS
    # The line before, or the one the key began on, may be where the space is missing.
    above = next((n for n in range((line or 1) - 1, 0, -1) if lines[n - 1].strip()), None)
    suspects = {"mapping values are not allowed": above, "expected ':'": opened}
    for part, suspect in suspects.items():
        if part in problem and suspect and _lacks_space(lines[suspect - 1]):
            yield suspect, "a key on this line has no space after its colon", _KEY_AND_VALUE
    for part, rule, remedy in _SAID_BY_THE_PARSER:
        if part in problem:
            yield opened if part == "expected ':'" else line, rule, remedy


_CHECK_BRACKETS = "check commas and brackets"
_KEY_AND_VALUE = "write it as key: value"

_SAID_BY_THE_PARSER = (
    ("escape", "a backslash stands inside double quotes", "use single quotes"),
    ("cannot start any token", "a text may not begin with % @ or `", "put it in quotes"),
    (
        "mapping values are not allowed",
        "this line has a colon where no key can stand",
        "line up keys that belong together, and put text that holds a colon in quotes",
    ),
    ("expected ':'", "a key on this line has no colon with a space after it", _KEY_AND_VALUE),
    (
        "expected '-' indicator",
        "this line does not fit the list above it",
        "begin it with a dash, lined up",
    ),
)
"""A part of the parser's complaint, with our rule and remedy."""
