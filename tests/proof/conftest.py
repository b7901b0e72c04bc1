"""Files of the example boards, ways to spoil and to edit them, and their proof."""

from __future__ import annotations

import io
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

import ezdxf
import pytest
from ezdxf.document import Drawing

import layout
from layout.api import draw_sheets, make_plan, read_job
from layout.drawing.sheet import Sheet
from layout.files.dxf import render_dxf
from layout.files.svg import render_svg
from layout.proof.prove import prove_files
from layout.proof.report import FileReport

EXAMPLES = Path(layout.__file__).parents[1] / "examples"


@dataclass(frozen=True)
class Board:
    """One example's board sheet and its files."""

    sheet: Sheet
    dxf: bytes
    svg: bytes

    def prove(self, name: str, content: bytes, **options) -> FileReport:
        (report,) = prove_files({self.sheet.name: self.sheet}, {name: content}, **options).files
        return report


@pytest.fixture(scope="session")
def boards() -> Callable[[str], Board]:
    """Give the board of an example by its name."""
    made: dict[str, Board] = {}

    def make(name: str) -> Board:
        if name not in made:
            sheets = draw_sheets(make_plan(read_job(EXAMPLES / f"{name}.yaml")))
            sheet = next(sheet for sheet in sheets if sheet.name == "board")
            made[name] = Board(sheet, render_dxf(sheet), render_svg(sheet))
        return made[name]

    return make


@pytest.fixture(scope="session")
def edit_dxf() -> Callable[[bytes, Callable[[Drawing], None]], bytes]:
    """Open a DXF file with a general library, change it, and save it as that library does."""

    def edit(content: bytes, change: Callable[[Drawing], None]) -> bytes:
        document = ezdxf.read(io.StringIO(content.decode("ascii")))
        change(document)
        stream = io.StringIO()
        document.write(stream)
        return stream.getvalue().encode("utf-8")

    return edit


@pytest.fixture(scope="session")
def codes() -> Callable[[FileReport], set[str]]:
    """Give the codes of everything that fails a file."""
    return lambda report: {problem.code for problem in report.problems}
