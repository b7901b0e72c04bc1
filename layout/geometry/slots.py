"""How wide is each slot, how far does it run, and what outline must a cutter follow?"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from layout.instrument import Slots, Tooling

Array = NDArray[np.float64]

SAME_WIDTH_MM = 0.01
"""A slot within this of the cutter is cut on its centre line alone (geometry page, Slots)."""


@dataclass(frozen=True, slots=True)
class SlotCut:
    """How slots are cut on this machine.

    Attributes
    ----------
    finished_mm
        The width the slot has when cut.
    drawn_mm
        Width of the outline that is drawn; None where the centre line alone is cut.
    corner_mm
        Corner radius of a blind slot's outline; half of ``drawn_mm`` is a full round end.
    centre_line
        Whether the centre line is drawn to be cut.
    too_narrow_by_mm
        How much the slot is narrower than the cutter; 0 where it is not.
    kerf_mm
        The kerf in x and y where outlines are drawn inward by half of it; ``drawn_mm`` is then
        that of a slot square to the centre line.

    """

    finished_mm: float
    drawn_mm: float | None
    corner_mm: float
    centre_line: bool
    too_narrow_by_mm: float = 0.0
    kerf_mm: tuple[float, float] | None = None


@dataclass(frozen=True, slots=True)
class Pocket:
    """A closed outline: corners in order, each with the bulge of the piece that follows it."""

    points_mm: Array
    bulges: tuple[float, ...]


def choose_cut(slots: Slots, tooling: Tooling | None) -> SlotCut:
    """Choose how the slots are cut, and say how wide they come out.

    Without a machine the centre line is drawn and the slot is taken to come out as wanted.
    """
    width = slots.width_mm
    if tooling is None:
        return SlotCut(width, None, 0.0, centre_line=True)
    if tooling.machine == "saw":
        kerf = tooling.kerf_mm[0] if tooling.kerf_mm else width
        return SlotCut(kerf, None, 0.0, centre_line=True)
    return _lasered(width, tooling) if tooling.machine == "laser" else _routed(width, tooling)


def _lasered(width: float, tooling: Tooling) -> SlotCut:
    """A laser on the line leaves the slot wider by the kerf; else half the kerf is left all round.

    The kerf's x goes across the slot and its y along it. A kerf as wide as the slot leaves no
    outline to draw inward.
    """
    kerf = tooling.kerf_mm or (0.0, 0.0)
    across = kerf[0]
    if tooling.lines != "offset":
        return SlotCut(width + across, width, 0.0, centre_line=False)
    if across >= width:
        short = across - width
        return SlotCut(across, None, 0.0, centre_line=True, too_narrow_by_mm=short)
    return SlotCut(width, width - across, 0.0, centre_line=False, kerf_mm=kerf)


def _routed(width: float, tooling: Tooling) -> SlotCut:
    """A router cuts the centre line where its cutter fills the slot, else a pocket.

    With a cutter wider than the slot there is no pocket to cut.
    """
    cutter = width if tooling.cutter_mm is None else tooling.cutter_mm
    if abs(width - cutter) <= SAME_WIDTH_MM + 1e-12:
        return SlotCut(cutter + tooling.runout_mm, None, cutter / 2, centre_line=True)
    if width < cutter:
        return SlotCut(
            cutter + tooling.runout_mm,
            None,
            cutter / 2,
            centre_line=True,
            too_narrow_by_mm=cutter - width,
        )
    return SlotCut(width + tooling.runout_mm, width, cutter / 2, centre_line=True)


def run_slot(
    slots: Slots,
    treble_mm: Array,
    bass_mm: Array,
    *,
    at_edge: tuple[bool, bool] = (True, True),
) -> tuple[Array, Array]:
    """Give a slot's ends as cut: past the finished edges when open, short of them when blind.

    ``at_edge`` says of the treble and the bass end whether it lies on a finished edge: a partial
    fret ends inside the board, and there its slot ends with it.

    Raises
    ------
    ValueError
        When a blind slot has no length left.

    """
    length = np.hypot(*(treble_mm - bass_mm))
    way = (treble_mm - bass_mm) / length
    reach = slots.past_edge_mm if slots.run == "open" else -slots.short_of_edge_mm
    at_treble, at_bass = (reach if edge else 0.0 for edge in at_edge)
    if length + at_treble + at_bass <= 0:
        raise ValueError("a blind slot has no length left")
    return treble_mm + at_treble * way, bass_mm - at_bass * way


def outline_slot(
    cut: SlotCut, treble_mm: Array, bass_mm: Array, *, run: Literal["open", "blind"]
) -> Pocket:
    """Draw the closed outline of one slot between its ends as cut.

    Open: a rectangle. Blind: round ends where the cutter fills the slot, else corners of the
    cutter's radius (square ones on a laser). The outline runs counter-clockwise for a slot from
    bass to treble.
    """
    assert cut.drawn_mm is not None
    way = (treble_mm - bass_mm) / np.hypot(*(treble_mm - bass_mm))
    half, inset = _drawn_half_and_inset(cut, way)
    treble_mm, bass_mm = treble_mm - inset * way, bass_mm + inset * way
    side = np.array([way[1], -way[0]]) * half  # toward the bridge for a slot along +y
    radius = 0.0 if run == "open" else min(cut.corner_mm, half)
    if radius == 0.0:
        corners = np.array([bass_mm + side, treble_mm + side, treble_mm - side, bass_mm - side])
        return Pocket(corners, (0.0,) * 4)
    back = way * radius
    if half - radius <= SAME_WIDTH_MM / 2:
        corners = np.array(
            [
                bass_mm + side + way * half,
                treble_mm + side - way * half,
                treble_mm - side - way * half,
                bass_mm - side + way * half,
            ]
        )
        return Pocket(corners, (0.0, 1.0, 0.0, 1.0))
    inner = side * (1 - radius / half)
    corners = np.array(
        [
            bass_mm + side + back,
            treble_mm + side - back,
            treble_mm + inner,
            treble_mm - inner,
            treble_mm - side - back,
            bass_mm - side + back,
            bass_mm - inner,
            bass_mm + inner,
        ]
    )
    quarter = float(np.tan(np.pi / 8))  # bulge of a quarter circle: tan(90 deg / 4)
    return Pocket(corners, (0.0, quarter) * 4)


def _drawn_half_and_inset(cut: SlotCut, way: Array) -> tuple[float, float]:
    """Half the drawn width, and how far the outline stays short of the ends, for one slot.

    A beam whose kerf differs by axis removes sqrt((k_x n_x)^2 + (k_y n_y)^2) along a unit
    direction n, so a slanted slot is drawn a little differently from a square one.
    """
    assert cut.drawn_mm is not None
    if cut.kerf_mm is None:
        return cut.drawn_mm / 2, 0.0
    kerf_x, kerf_y = cut.kerf_mm
    across = float(np.hypot(kerf_x * way[1], kerf_y * way[0]))
    along = float(np.hypot(kerf_x * way[0], kerf_y * way[1]))
    return (cut.drawn_mm + kerf_x - across) / 2, along / 2
