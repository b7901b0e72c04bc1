"""Bytes to nodes: what is refused before anything is built, and what stays as written."""

import time

import pytest

from layout.errors import FileError, JobError
from layout.job.read import read_job
from layout.job.tree import LARGEST_FILE_BYTES, TableNode, TextNode, parse_tree, read_bytes


def said(data: bytes | str) -> list[str]:
    with pytest.raises(JobError) as caught:
        parse_tree(data.encode() if isinstance(data, str) else data, "j.yaml")
    return [str(fault) for fault in caught.value.faults]


@pytest.mark.parametrize(
    "text",
    ["3:2", "012", "no", "~", "null", "1_000", "0x1f", "2024-01-01", ".inf", "1e3", "=", "<<"],
)
def test_texts_stay_as_written(text: str) -> None:
    root = parse_tree(f"a: {text}\n".encode(), "j.yaml")
    assert isinstance(root, TableNode)
    assert root.entries[0].node == TextNode(text, 1)


def test_lines_count_from_one_through_every_kind_of_node() -> None:
    root = parse_tree(b"\n# note\na:\n  - x\n  - {b: 1,\n     c: '2'}\nd:\ne: 3\n", "j.yaml")
    assert isinstance(root, TableNode)
    listed, empty, last = (entry.node for entry in root.entries)
    assert [entry.line for entry in root.entries] == [3, 7, 8]
    assert [item.line for item in listed.items] == [4, 5]  # type: ignore[union-attr]
    assert listed.items[1].entries[1].node == TextNode("2", 6, quoted=True)  # type: ignore[union-attr]
    assert empty == TextNode("", 7)
    assert last == TextNode("3", 8)


def test_carriage_returns_and_a_byte_order_mark_are_no_matter() -> None:
    root = parse_tree(b"\xef\xbb\xbfa: 1\r\nb: 2\r\n", "j.yaml")
    assert isinstance(root, TableNode)
    assert [(entry.key, entry.line) for entry in root.entries] == [("a", 1), ("b", 2)]


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("a: 1\n\tb: 2\n", "j.yaml:2: this line is indented with a tab; indent with spaces"),
        (
            "a: 1\nb: [1, 2\nc: 3\n",
            "j.yaml:2: a bracket opened on this line is not closed well; check commas and brackets",
        ),
        (
            'a: "x\nb: 1\n',
            "j.yaml:1: a quotation mark opened on this line is never closed; close it",
        ),
        (
            "a: 1\nscale:628\nc: 3\n",
            "j.yaml:2: a key on this line has no space after its colon; write it as key: value",
        ),
        (
            "a: b: c\n",
            (
                "j.yaml:1: this line has a colon where no key can stand; line up keys that belong "
                "together, and put text that holds a colon in quotes"
            ),
        ),
        ("a: @x\n", "j.yaml:1: a text may not begin with % @ or `; put it in quotes"),
        ('a: "C:\\q"\n', "j.yaml:1: a backslash stands inside double quotes; use single quotes"),
        (
            "a:\n - 1\n b: 2\n",
            "j.yaml:3: this line does not fit the list above it; begin it with a dash, lined up",
        ),
        (
            "a: 1\nb\nc: 2\n",
            (
                "j.yaml:2: a key on this line has no colon with a space after it; "
                "write it as key: value"
            ),
        ),
        (
            "a: ]\n",
            (
                "j.yaml:1: this line does not fit the ones before it; check its "
                "indentation, and the "
                ""
                "quotes and brackets above it"
            ),
        ),
        ("? [a]\n: 3\n", "j.yaml:1: a key is one word; check the brackets and the ?"),
        ("a: 1\n---\nb: 2\n", "j.yaml:2: a file holds one document; drop what follows the ---"),
        (
            "a: !!float 1\n",
            (
                "j.yaml:1: tag:yaml.org,2002:float is not allowed; tags are not read; put "
                "text that "
                ""
                "begins with ! in quotes"
            ),
        ),
    ],
)
def test_bad_yaml_is_one_fault_with_its_line_and_remedy(text: str, message: str) -> None:
    assert said(text) == [message]


def test_anchors_and_aliases_are_each_refused() -> None:
    assert said("a: &x 1\nb: *x\n") == [
        "j.yaml:1: &x is not allowed; anchors are not read; write the value out",
        "j.yaml:2: *x is not allowed; aliases are not read; write the value out",
    ]


@pytest.mark.parametrize(
    "data", [b"", b"\n\n", b"# only a comment\n", b"---\n", b"~" * 0 + b"\xef\xbb\xbf"]
)
def test_a_file_without_keys(data: bytes) -> None:
    assert said(data) == [
        (
            "j.yaml: the file holds no keys; the least that runs is title, scale, strings, spread "
            "and frets"
        )
    ]


@pytest.mark.parametrize(
    ("data", "message"),
    [
        (
            b"a: 1\n\x00\x01\x02",
            (
                "j.yaml:2: this file holds zero bytes, so it is no text; "
                "save the file as plain text in UTF-8"
            ),
        ),
        (
            "title: Größe\n".encode("latin-1"),
            "j.yaml:1: byte 0xf6 is no part of UTF-8 text; save the file as plain text in UTF-8",
        ),
        (
            b"a: 1\nb: \x07\n",
            (
                "j.yaml:2: the character U+0007 does not belong into text; "
                "save the file as plain text in UTF-8"
            ),
        ),
    ],
)
def test_what_is_no_text(data: bytes, message: str) -> None:
    assert said(data) == [message]


def test_utf_16_is_no_text() -> None:
    assert "zero bytes" in said("title: x\n".encode("utf-16"))[0]


def test_an_alias_bomb_costs_nothing() -> None:
    lines = ["a0: &a0 [x, x, x, x, x, x, x, x, x, x]"]
    lines += [f"a{n}: &a{n} [{', '.join([f'*a{n - 1}'] * 10)}]" for n in range(1, 40)]
    start = time.perf_counter()
    told = said("\n".join(lines))
    assert time.perf_counter() - start < 0.5
    assert len(told) == 20
    assert told[0] == "j.yaml:1: &a0 is not allowed; anchors are not read; write the value out"


@pytest.mark.parametrize("bracket", ["[", "{a: "])
def test_deep_nesting_costs_nothing(bracket: str) -> None:
    start = time.perf_counter()
    told = said(bracket * 100_000)
    assert time.perf_counter() - start < 2
    assert len(told) == 1


def test_the_deepest_nesting() -> None:
    deep = "a: " + "[" * 12 + "1" + "]" * 12
    assert said(deep) == ["j.yaml:1: lists and mappings nest at most 12 deep; check the brackets"]
    parse_tree(b"a: " + b"[" * 11 + b"1" + b"]" * 11, "j.yaml")


def test_a_missing_file_and_a_directory_are_file_errors(tmp_path) -> None:
    with pytest.raises(FileError, match=r"none\.yaml: there is no such file$"):
        read_job(tmp_path / "none.yaml")
    with pytest.raises(FileError, match=r"is a directory; name the job file in it$"):
        read_job(tmp_path)
    with pytest.raises(FileError):
        read_job("a\x00b")


def test_a_file_of_ten_megabytes_is_not_read(tmp_path) -> None:
    path = tmp_path / "big.yaml"
    with path.open("wb") as stream:
        stream.truncate(10_000_000)
    with pytest.raises(JobError) as caught:
        read_job(path)
    assert str(caught.value) == (
        "big.yaml: a file has at most 1 MB; this one has 10.0 MB; check that it is a job file"
    )


def test_the_largest_file_is_read_quickly(tmp_path) -> None:
    path = tmp_path / "long.yaml"
    line = b"key: [1, 2, 3, {a: b}]\n"
    path.write_bytes(line * (LARGEST_FILE_BYTES // len(line)))
    start = time.perf_counter()
    with pytest.raises(JobError):
        read_job(path)
    assert time.perf_counter() - start < 20
    assert len(read_bytes(path)) <= LARGEST_FILE_BYTES


def test_an_endless_device_is_not_read_to_its_end() -> None:
    with pytest.raises(JobError, match="at most 1 MB"):
        read_job("/dev/zero")
