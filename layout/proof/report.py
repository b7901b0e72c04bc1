"""What does a proof find?"""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Problem:
    """One thing a proof has to say about a file.

    Attributes
    ----------
    code
        In words: ``scale``, ``mirrored``, ``turned``, ``stretched``, ``shifted``, ``missing``,
        ``open-contour``, ``extra``, ``deviation``, ``duplicate``, ``zero-length``, ``truncated``,
        ``bad-number``, ``not-understood``, ``unreadable``, ``unit``, ``no-sheet``,
        ``layers-mixed``, ``hidden-layer``.
    text
        One sentence a maker reads.
    amount
        The figure behind it: mm, a factor, degrees or a count, as the text says.

    """

    code: str
    text: str
    amount: float | None = None


@dataclass(frozen=True, slots=True)
class LayerReport:
    """How one planned layer fared.

    Attributes
    ----------
    layer
        The layer's name on the sheet, whatever the file calls it.
    planned, found
        Shapes (slots, outlines, lines, texts) on the sheet, and those that are there entirely.
    missing
        Shapes of which nothing, or only a part, is there.
    extra
        Edges in the file that serve nothing on the sheet.
    largest_mm
        The largest distance between what is planned and what is drawn, both ways; what is missing
        or extra does not count.

    """

    layer: str
    planned: int
    found: int
    missing: int
    extra: int
    largest_mm: float


@dataclass(frozen=True, slots=True)
class FileReport:
    """The proof of one file.

    Attributes
    ----------
    name, sheet
        The file, and the sheet it was measured against; None where none fits.
    unit
        What the file says it counts in.
    layers
        In the order of the sheet. Where the whole drawing was found enlarged, mirrored, turned or
        moved, that is named among the problems and the layers are measured with it taken out.
    problems
        What fails the proof.
    notes
        What a maker should know and may accept: lettering or reference lines left out.

    """

    name: str
    sheet: str | None
    unit: str
    layers: tuple[LayerReport, ...]
    problems: tuple[Problem, ...]
    notes: tuple[Problem, ...]

    @property
    def passed(self) -> bool:
        """Whether nothing fails."""
        return not self.problems

    @property
    def complete(self) -> bool:
        """Whether it passed and not even lettering or a reference line is missing or changed."""
        return self.passed and not any(layer.missing or layer.extra for layer in self.layers)

    @property
    def largest_mm(self) -> float:
        """The largest deviation on any layer but lettering, mm."""
        sizes = (layer.largest_mm for layer in self.layers if layer.layer != "ENGRAVE_LABEL")
        return max(sizes, default=0.0)


@dataclass(frozen=True, slots=True)
class Report:
    """The proof of several files."""

    files: tuple[FileReport, ...]
    tolerance_mm: float

    @property
    def passed(self) -> bool:
        """Whether there are files, and every one passed."""
        return bool(self.files) and all(file.passed for file in self.files)

    @property
    def complete(self) -> bool:
        """Whether every file passed with nothing missing or changed at all."""
        return bool(self.files) and all(file.complete for file in self.files)

    @property
    def largest_mm(self) -> float:
        """The largest deviation in any file, lettering apart, mm."""
        return max((file.largest_mm for file in self.files), default=0.0)
