"""What does a finished plan hold? Frozen results; arrays are [string_index, fret_index]."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from layout.findings import Assumed, Finding
from layout.geometry.board import BoardShape
from layout.geometry.frets import FretLines
from layout.geometry.slots import SlotCut
from layout.geometry.strings import StringLines
from layout.geometry.surface import Surface
from layout.instrument import Instrument
from layout.strings.strip import Strip

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Piece:
    """One slot of a fret: its ends on the finished edges, and as cut. Points (2,), mm."""

    fret: int
    treble_mm: Array
    bass_mm: Array
    cut_treble_mm: Array
    cut_bass_mm: Array
    wire_mm: float


@dataclass(frozen=True, slots=True)
class NutAndSaddle:
    """Where the strings really leave: shifts along each string, shape (S,), in mm.

    Attributes
    ----------
    nut_shift_mm
        + toward the saddle.
    setback_mm
        + away from the nut.
    face_mm
        Where the board's nut end stands, as a shift.
    file_back_mm
        How far each string's edge of the nut is filed back from that face.
    overhang_mm
        How far each string's edge reaches over the board's end.
    nut_mm, saddle_mm
        Shape (S, 2): the points where the strings leave.

    """

    nut_shift_mm: Array
    setback_mm: Array
    face_mm: float
    file_back_mm: Array
    overhang_mm: Array
    nut_mm: Array
    saddle_mm: Array
    strip: Strip | None = None
    limit_cost_cents: float | None = None


@dataclass(frozen=True, slots=True)
class Loads:
    """What each string is and how hard it pulls, shape (S,); nan where nothing is known."""

    hz: Array
    unit_mass_kg_per_m: Array
    axial_stiffness_n: Array
    bending_stiffness_n_m2: Array
    tension_n: Array
    share_of_break: Array

    @property
    def total_n(self) -> float | None:
        """Sum of the tensions on the neck; None while any of them is unknown."""
        return None if np.isnan(self.tension_n).any() else float(self.tension_n.sum())


@dataclass(frozen=True, slots=True)
class Rung:
    """One choice of nut and saddle, and the error it leaves over the balanced range."""

    nut: str
    saddle: str
    rms_cents: float
    worst_cents: float


@dataclass(frozen=True, slots=True)
class Worst:
    """The largest error: where it is and how large, sharp positive."""

    string: int
    fret: int
    cents: float


@dataclass(frozen=True, slots=True)
class Pitch:
    """What the planned stops sound, above each open string as tuned; (S, F), nan where none."""

    target_cents: Array
    predicted_cents: Array
    rms_cents: float
    rms_all_cents: float
    worst: Worst
    worst_all: Worst
    ladder: tuple[Rung, ...]
    parts_cents: dict[str, Array]

    @property
    def error_cents(self) -> Array:
        """Predicted less target."""
        return np.asarray(self.predicted_cents - self.target_cents)


@dataclass(frozen=True, slots=True)
class Clash:
    """How far the strings disagree about one fret."""

    fret: int
    spread_cents: float
    spread_mm: float


@dataclass(frozen=True, slots=True)
class Plan:
    """Everything that is cut, and what it will sound like."""

    instrument: Instrument
    target_cents: Array
    own_mm: Array
    strings: StringLines
    frets: FretLines
    board: BoardShape
    surface: Surface
    cut: SlotCut
    pieces: tuple[Piece, ...]
    zero_fret: Piece | None
    ends: NutAndSaddle
    height_at_nut_mm: Array
    height_at_saddle_mm: Array
    speaking_mm: Array
    loads: Loads
    pitch: Pitch | None
    clash: tuple[Clash, ...]
    assumed: tuple[Assumed, ...]
    findings: tuple[Finding, ...]

    def pieces_of(self, fret: int) -> tuple[Piece, ...]:
        """Give the slots cut for one fret, treble side first."""
        return tuple(piece for piece in self.pieces if piece.fret == fret)

    @property
    def fretted(self) -> NDArray[np.bool_]:
        """Which strings run over the board, shape (S,)."""
        return np.array([string.fretted for string in self.instrument.strings])
