"""How are rows of text lined up in columns?"""

from __future__ import annotations

import math
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


def figure(value: float | None, digits: int) -> str:
    """Write a figure, or a dash where there is none."""
    return "-" if value is None or math.isnan(value) else f"{value:.{digits}f}"


def signed(value: float, digits: int) -> str:
    """Write a figure with its sign, zero without one, or a dash where there is none.

    >>> signed(0.31, 2), signed(-0.004, 2)
    ('+0.31', '0.00')
    """
    if math.isnan(value):
        return "-"
    text = f"{value:+.{digits}f}"
    return text if text.strip("+-0.") else text.lstrip("+-")
