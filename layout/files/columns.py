"""How are rows of text lined up in columns?"""

from __future__ import annotations

from collections.abc import Iterable, Sequence


def align(header: Sequence[str], rows: Iterable[Sequence[str]], *, left: int = 0) -> str:
    """Align a table: the first ``left`` columns to the left, the rest to the right.

    >>> print(align(["fret", "mm"], [["1", "35.283"], ["12", "314.325"]]))
      fret       mm
         1   35.283
        12  314.325
    """
    table = [list(header), *(list(row) for row in rows)]
    widths = [max(len(row[i]) for row in table) for i in range(len(header))]
    return "\n".join(
        "  "
        + "  ".join(
            cell.ljust(width) if i < left else cell.rjust(width)
            for i, (cell, width) in enumerate(zip(row, widths, strict=True))
        ).rstrip()
        for row in table
    )
