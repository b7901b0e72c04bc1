"""How is a proof said to a maker?"""

from __future__ import annotations

from collections.abc import Iterator

from layout.proof.paper import PAPER_MM
from layout.proof.report import FileReport, Report

_HEADS = ("layer", "planned", "found", "missing", "extra", "largest mm")


def write_report(report: Report) -> str:
    """Write a table a file, what fails, what is to be noted, and the verdict.

    Examples
    --------
    >>> from layout.proof.report import LayerReport
    >>> row = LayerReport("CUT_SLOT", 20, 20, 0, 0, 0.00012)
    >>> print(write_report(Report((FileReport("b.dxf", "board", "mm", (row,), (), ()),), 0.01)))
    b.dxf: sheet board, unit mm
      layer     planned  found  missing  extra  largest mm
      CUT_SLOT       20     20        0      0      0.0001
      passed: the largest deviation is 0.0001 mm
    <BLANKLINE>
    1 of 1 files passed; tolerance 0.01 mm.
    <BLANKLINE>

    """
    lines = [line for file in report.files for line in (*_write_file(file), "")]
    passed = sum(file.passed for file in report.files)
    said = f"{passed} of {len(report.files)} files passed; tolerance {report.tolerance_mm:g} mm"
    on_paper_mm = max(PAPER_MM, report.tolerance_mm)
    paper = any(file.name.lower().endswith(".pdf") for file in report.files)
    said += f", {on_paper_mm:g} mm on paper." if paper else "."
    return "\n".join([*lines, said, ""])


def _write_file(file: FileReport) -> Iterator[str]:
    sheet = f"sheet {file.sheet}" if file.sheet else "no sheet"
    yield f"{file.name}: {sheet}, unit {file.unit}"
    if file.layers:
        rows = [
            (
                row.layer,
                str(row.planned),
                str(row.found),
                str(row.missing),
                str(row.extra),
                f"{row.largest_mm:.4f}",
            )
            for row in file.layers
        ]
        yield from _write_table([_HEADS, *rows])
    for problem in file.problems:
        yield f"  FAILS {problem.code}: {problem.text}"
    for note in file.notes:
        yield f"  note {note.code}: {note.text}"
    if file.passed:
        yield f"  passed: the largest deviation is {file.largest_mm:.4f} mm"


def _write_table(rows: list[tuple[str, ...]]) -> Iterator[str]:
    widths = [max(map(len, column)) for column in zip(*rows, strict=True)]
    for first, *rest in rows:
        cells = [first.ljust(widths[0])]
        cells += [cell.rjust(width) for cell, width in zip(rest, widths[1:], strict=True)]
        yield "  " + "  ".join(cells)
