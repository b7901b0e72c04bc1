"""How is a first job file made for a maker to change: a starter, with a few keys set?

Values are put into the text where they stand, so that the comments and the order of a starter
stay. The result is read like any other job before it is given out.
"""

from __future__ import annotations

import difflib
import re
from collections.abc import Sequence
from functools import lru_cache
from importlib.resources import files

import yaml

from layout.errors import TextError
from layout.job.read import read_job_text

_STARTERS = files("layout.job").joinpath("starters")
_SETTING = re.compile(r"\s*([^\s=]+(?: ?[^\s=]+)*?)\s*=\s*(.*?)\s*", re.DOTALL)
_SAFE_PLAIN = re.compile(r"[A-Za-z0-9+.-](?:[\w+./() \"'#-]*[\w+./()\"'#-])?")
"""Texts that YAML takes as they stand, in and out of brackets; all others are quoted."""


@lru_cache(maxsize=1)
def starter_kinds() -> tuple[str, ...]:
    """Return the kinds of starter there are, in order of name."""
    names = (entry.name for entry in _STARTERS.iterdir())
    return tuple(sorted(name.removesuffix(".yaml") for name in names if name.endswith(".yaml")))


def make_starter(kind: str, settings: Sequence[str] = ()) -> str:
    """Make the text of a first job file.

    Parameters
    ----------
    kind
        One of `starter_kinds`.
    settings
        ``key=value`` each: a dotted key path (list positions from 1) and what to write there,
        such as ``scale=640``, ``frets.count=21`` or ``strings.1.gauge=0.011 in``.

    Returns
    -------
    str
        YAML text that reads without faults.

    Raises
    ------
    TextError
        When there is no such kind, or a setting is no ``key=value`` or names no place.
    JobError
        When the job so made has faults.

    Examples
    --------
    >>> text = make_starter("steel-six", ["scale=640", "frets.key=C"])
    >>> [line for line in text.splitlines() if line.startswith(("scale", "frets"))]
    ['scale: 640', 'frets: {count: 20, temperament: equal-12, key: C}']

    """
    kinds = starter_kinds()
    if kind not in kinds:
        near = difflib.get_close_matches(kind[:60], kinds, n=1)
        remedy = f"the nearest is {near[0]}" if near else f"the kinds are {', '.join(kinds)}"
        raise TextError(f"there is no starter {kind}", remedy)
    text = _STARTERS.joinpath(f"{kind}.yaml").read_text(encoding="utf-8")
    for setting in settings:
        path, value = _read_setting(setting)
        text = set_key(text, path, value=value)
    read_job_text(text.encode(), f"{kind}.yaml")
    return text


def _read_setting(setting: str) -> tuple[list[str], str]:
    match = _SETTING.fullmatch(setting)
    if match is None or not match[2] or not match[2].isprintable():
        raise TextError(f"{setting!r} is no setting", "write key=value, such as scale=640")
    # strings[1].gauge, as faults write it, means strings.1.gauge.
    path = re.sub(r"\[(\d+)\]", r".\1", match[1]).split(".")
    if not all(path):
        raise TextError(f"{match[1]} is no key", "write it like strings.1.gauge")
    return path, match[2]


def set_key(text: str, path: Sequence[str], *, value: str) -> str:
    r"""Set one key in the text of a job, leaving everything else as it stands.

    Raises
    ------
    TextError
        When a step of the path is neither a mapping nor a list, or is no place in the list.

    Examples
    --------
    >>> set_key("scale: 628 # short\nfrets: {count: 20}\n", ["scale"], value="640")
    'scale: 640 # short\nfrets: {count: 20}\n'

    """
    node = yaml.compose(text, Loader=yaml.SafeLoader)
    assert node is not None  # a starter holds keys
    for depth, step in enumerate(path):
        inner = _step_into(node, step, path[:depth])
        if inner is None:
            return _insert(text, node, path[depth:], value=value)
        node = inner
    return text[: _start(node).index] + _written(value) + text[_end(node) :]


def _step_into(node: yaml.Node, step: str, above: Sequence[str]) -> yaml.Node | None:
    """Give the node under one key or list position; None where it is yet to be inserted."""
    where = ".".join(above)
    if isinstance(node, yaml.MappingNode):
        return next((inner for key, inner in node.value if key.value == step), None)
    if not isinstance(node, yaml.SequenceNode):
        raise TextError(f"{where} is {node.value}, with nothing under it", f"set {where} itself")
    count = len(node.value)
    if not re.fullmatch(r"[1-9]\d{0,3}", step) or int(step) > count + 1:
        raise TextError(
            f"{where} is a list; {step} is none of its places",
            f"places are 1 to {count}, and {count + 1} adds one",
        )
    return node.value[int(step) - 1] if int(step) <= count else None


def _insert(text: str, node: yaml.Node, steps: Sequence[str], *, value: str) -> str:
    """Put a new key (or list item) at the end of a mapping (or list)."""
    written = _written(value)
    for step in reversed(steps[1:]):
        written = f"{{{step}: {written}}}"
    assert isinstance(node, yaml.CollectionNode)  # or no step led from it
    is_list = isinstance(node, yaml.SequenceNode)
    end = _end(node)
    if node.flow_style:
        entry = written if is_list else f"{steps[0]}: {written}"
        comma = ", " if node.value else ""
        return f"{text[: end - 1].rstrip()}{comma}{entry}{text[end - 1 :]}"
    entry = f"- {written}" if is_list else f"{steps[0]}: {written}"
    line_end = text.find("\n", end)
    if line_end < 0:
        line_end = len(text)
    indent = " " * _start(node).column
    return f"{text[:line_end]}\n{indent}{entry}{text[line_end:] or chr(10)}"


def _start(node: yaml.Node) -> yaml.Mark:
    assert node.start_mark is not None  # composed from text
    return node.start_mark


def _end(node: yaml.Node) -> int:
    """Give where a node's own text ends; a block's mark lies behind the comments after it."""
    if not isinstance(node, yaml.CollectionNode) or node.flow_style or not node.value:
        assert node.end_mark is not None  # composed from text
        return int(node.end_mark.index)
    last = node.value[-1]
    return _end(last[1] if isinstance(last, tuple) else last)


def _written(value: str) -> str:
    """Write a value so that YAML takes it whole: brackets as they are, other text quoted."""
    if value.startswith(("{", "[")):
        try:
            yaml.compose(value, Loader=yaml.SafeLoader)
        except yaml.YAMLError:
            raise TextError(f"the brackets of {value} do not close", "check them") from None
        return value
    if _SAFE_PLAIN.fullmatch(value) and " #" not in value:
        return value
    return "'" + value.replace("'", "''") + "'"
