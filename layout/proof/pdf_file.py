"""Which pages does a plain PDF file hold?

Plain is what most programs write for drawings: one table of objects, each where the table says,
pages in one list, contents packed by Flate or not at all. Anything else is left to a general
library, which takes longer to import than such a file takes to read.

References
----------
ISO 32000-1 (2008), Document management - Portable document format: 7.4 (filters), 7.5 (file
structure), 7.7.3 (page tree).

"""

from __future__ import annotations

import base64
import re
import zlib
from dataclasses import dataclass
from typing import Final

_TAIL = re.compile(rb"trailer\s*(<<.*>>)\s*startxref\s+([0-9]{1,10})\s+%%EOF\s*\Z", re.DOTALL)
_TAIL_REACH: Final = 4096
_TABLE = re.compile(rb"xref\s+0 ([0-9]{1,7})\s*?\r?\n((?:[0-9]{10} [0-9]{5} [nf][ \r\n]{2})+)")
_OBJECT = re.compile(rb"([0-9]+) 0 obj\b(.*?)\b(endobj|stream\r?\n)", re.DOTALL)
_NUMBER: Final = rb"\s+([+-]?[0-9]+(?:\.[0-9]*)?)"
_BOX = re.compile(rb"/MediaBox\s*\[\s*" + _NUMBER[3:] + _NUMBER * 3 + rb"\s*\]")
_KIDS = re.compile(rb"/Kids\s*\[((?:\s*[0-9]+ 0 R)*)\s*\]")
_FILTERS: Final = {
    b"": (),
    b"FlateDecode": ("flate",),
    b"ASCII85DecodeFlateDecode": ("85", "flate"),
}
_MOST_BYTES: Final = 50_000_000
"""Contents that unpack to more than this are no drawing."""


@dataclass(frozen=True, slots=True)
class PlainPage:
    """A page: its box in its own units, its turn in degrees, its unit in points, its contents."""

    box: tuple[float, float, float, float]
    turn: int
    unit: float
    contents: bytes


class _NotPlainError(Exception):
    """The file holds what only a general library understands, or is damaged."""


def find_plain_pages(content: bytes, *, most: int) -> list[PlainPage] | None:
    """Find the pages of a plain file; None where it is none, is damaged, or has too many."""
    try:
        return _File(content).read_pages(most)
    except (_NotPlainError, zlib.error, ValueError):
        return None


class _File:
    """Objects of a file by number."""

    def __init__(self, content: bytes) -> None:
        self.content = content
        tail = _TAIL.search(content, max(0, len(content) - _TAIL_REACH))
        table = tail and _TABLE.match(content, int(tail[2]))
        if not tail or not table:
            raise _NotPlainError
        self.trailer: bytes = tail[1]
        if re.search(rb"/(?:Prev|Encrypt|XRefStm)\b", self.trailer):
            raise _NotPlainError
        rows = table[2]
        if len(rows) != 20 * int(table[1]) or table.end() > tail.start():
            raise _NotPlainError
        self.places = [int(rows[at : at + 10]) for at in range(0, len(rows), 20)]

    def read_pages(self, most: int) -> list[PlainPage]:
        root, _ = self._find(_reference(self.trailer, b"Root"))
        tree, _ = self._find(_reference(root, b"Pages"))
        kids = _KIDS.search(tree)
        if kids is None or re.search(rb"/(?:Rotate|MediaBox|UserUnit)\b", tree):
            raise _NotPlainError
        numbers = [int(number) for number in re.findall(rb"([0-9]+) 0 R", kids[1])]
        if _whole(tree, b"Count") != len(numbers) or not 0 < len(numbers) <= most:
            raise _NotPlainError
        return [self._read_page(number) for number in numbers]

    def _find(self, number: int) -> tuple[bytes, int]:
        """Give what an object says, and where its stream begins (0: it has none)."""
        if not 0 < number < len(self.places):
            raise _NotPlainError
        match = _OBJECT.match(self.content, self.places[number])
        if match is None or int(match[1]) != number:
            raise _NotPlainError
        return match[2], match.end() if match[3] != b"endobj" else 0

    def _read_page(self, number: int) -> PlainPage:
        said, _ = self._find(number)
        box = _BOX.search(said)
        if box is None or not re.search(rb"/Type\s*/Page\b", said):
            raise _NotPlainError
        left, low, right, high = map(float, box.groups())
        turn = _whole(said, b"Rotate") if b"/Rotate" in said else 0
        unit = float(_single(said, b"UserUnit" + _NUMBER)) if b"/UserUnit" in said else 1.0
        packed = self._unpack(_reference(said, b"Contents")) if b"/Contents" in said else b""
        return PlainPage((left, low, right, high), turn, unit, packed)

    def _unpack(self, number: int) -> bytes:
        said, begin = self._find(number)
        length = _whole(said, b"Length")
        stream = self.content[begin : begin + length]
        ends = re.compile(rb"\s*endstream\b").match(self.content, begin + length)
        if not begin or not ends or b"/DecodeParms" in said:
            raise _NotPlainError
        named = b""
        if b"/Filter" in said:
            named = _single(said, rb"Filter\s*(/[A-Za-z0-9]+|\[[\s/A-Za-z0-9]*\])")
        filters = _FILTERS.get(re.sub(rb"[\s/\[\]]", b"", named))
        if filters is None:
            raise _NotPlainError
        for kind in filters:
            stream = _unpack_85(stream) if kind == "85" else _inflate(stream)
        return stream


def _unpack_85(stream: bytes) -> bytes:
    return base64.a85decode(stream.strip().removesuffix(b"~>"))


def _inflate(stream: bytes) -> bytes:
    packer = zlib.decompressobj()
    plain = packer.decompress(stream, _MOST_BYTES)
    if not packer.eof:
        raise _NotPlainError
    return plain


def _single(said: bytes, pattern: bytes) -> bytes:
    """Find the one value of a name; several, or another kind of value, are not plain."""
    found = re.findall(rb"/" + pattern + rb"(?=[\s/<>\[\]()]|\Z)(?!\s+[0-9]+\s+R)", said)
    if len(found) != 1:
        raise _NotPlainError
    value: bytes = found[0]
    return value


def _whole(said: bytes, name: bytes) -> int:
    return int(_single(said, name + rb"\s+([0-9]{1,9})"))


def _reference(said: bytes, name: bytes) -> int:
    found = re.findall(rb"/" + name + rb"\s+([0-9]+) 0 R\b", said)
    if len(found) != 1 or said.count(b"/" + name + b" ") > 1:
        raise _NotPlainError
    return int(found[0])
