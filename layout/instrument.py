"""What is to be built: frozen descriptions of one instrument; no computation.

Lengths are millimetres, everything else SI. Frets are named by their number, counted from 1 at
the nut end (0 is the nut); strings from 1 on the treble side. The reader of job files has already
turned labels into numbers and filled in every default, which it lists in ``assumed``.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Literal

from layout.findings import Assumed, Finding
from layout.pitch.notes import Note
from layout.pitch.temperament import Temperament
from layout.strings.support import CARRIED, Support

# A figure for every string: one for all, one at each side (linear in between), or one a string.


@dataclass(frozen=True, slots=True)
class Same:
    """The same figure for every string."""

    value: float


@dataclass(frozen=True, slots=True)
class Sides:
    """A figure at the first and at the last fretted string, linear in y at the nut between."""

    treble: float
    bass: float


@dataclass(frozen=True, slots=True)
class Listed:
    """One figure a string, string 1 first."""

    values: tuple[float, ...]


PerString = Same | Sides | Listed
Place = Literal["nut", "tail", "bridge"] | int
"""A place along the board: an end by name, or a fret by number."""


@dataclass(frozen=True, slots=True)
class Reference:
    """The pitch everything is tuned from."""

    note: Note
    hz: float


@dataclass(frozen=True, slots=True)
class ParallelScale:
    """One scale length: the nut line and the bridge line are square to the centre line."""

    length_mm: float


@dataclass(frozen=True, slots=True)
class MultiScale:
    """Plan lengths of the outer strings, and the fret that is square to the centre line."""

    treble_mm: float
    bass_mm: float
    square_at: float | Literal["nut", "bridge"]


@dataclass(frozen=True, slots=True)
class Stretch:
    """A stretch test: the pitch rises by so much when the end is drawn ``by_mm`` further."""

    rise_cents: float
    by_mm: float
    length_mm: float


@dataclass(frozen=True, slots=True)
class StatedTension:
    """A tension somebody states, with the length and pitch it is stated for (None: its own)."""

    newton: float
    length_mm: float | None = None
    note: Note | None = None


@dataclass(frozen=True, slots=True)
class ShortStart:
    """A short string starts at (or ``behind_mm`` behind) a fret; the board steps out before it."""

    fret: int
    behind_mm: float = 0.0
    step_mm: float = 0.0


@dataclass(frozen=True, slots=True)
class StringSpec:
    """One string as ordered: its open pitch, its make, and what has been measured of it."""

    note: Note | None = None
    hz: float | None = None
    make: Literal["plain", "wound"] | None = None
    material: str | None = None
    gauge_mm: float | None = None
    core_mm: float | None = None
    core_material: str = "steel"
    unit_mass_kg_per_m: float | None = None
    axial_stiffness_n: float | None = None
    bending_stiffness_n_m2: float | None = None
    stretch: Stretch | None = None
    tension: StatedTension | None = None
    course: str | None = None
    starts_at: ShortStart | None = None
    open_length_mm: float | None = None

    @property
    def fretted(self) -> bool:
        """Whether the string runs over the board and has stops."""
        return self.open_length_mm is None

    @property
    def full(self) -> bool:
        """Whether the string runs all the way from the nut."""
        return self.fretted and self.starts_at is None


@dataclass(frozen=True, slots=True)
class SpreadRule:
    """Outer string centres at nut and saddle, square to the centre line, and how to share them."""

    nut_mm: float
    saddle_mm: float
    rule: Literal["centres", "gaps"] = "centres"
    pair_nut_mm: float | None = None
    pair_saddle_mm: float | None = None


@dataclass(frozen=True, slots=True)
class SpreadList:
    """Every string's y at its nut and at the saddle, + toward the treble side."""

    nut_y_mm: tuple[float, ...]
    saddle_y_mm: tuple[float, ...]


Spread = SpreadRule | SpreadList


@dataclass(frozen=True, slots=True)
class Frets:
    """How many stops, by which temperament, and how they are laid."""

    count: int
    temperament: Temperament
    counted_from: Literal["key", "open"]
    labels: tuple[str, ...]
    steps: tuple[int, ...]
    kind: Literal["slotted", "tied", "lines"] = "slotted"
    placing: Literal["divided", "straight", "each"] = "divided"
    slant: Literal["square", "free"] = "square"
    favour: Mapping[int, Literal["flat", "sharp"] | tuple[int, ...]] = field(default_factory=dict)
    only: Mapping[int, tuple[int, ...]] = field(default_factory=dict)


@dataclass(frozen=True, slots=True)
class ActionGaps:
    """The gap between string and crown at two frets."""

    first_fret: int
    first_gap: PerString
    second_fret: int
    second_gap: PerString


@dataclass(frozen=True, slots=True)
class EndHeights:
    """String heights over the plane of the crowns at nut and saddle."""

    nut: PerString
    saddle: PerString


@dataclass(frozen=True, slots=True)
class Heights:
    """Where the strings run above the crowns, and how much the board is relieved."""

    given: ActionGaps | EndHeights
    relief_mm: float = 0.0
    joint: int = 14


@dataclass(frozen=True, slots=True)
class Finger:
    """Where the finger presses: ``behind_mm`` behind the stop, ``press_mm`` lower."""

    behind_mm: float = 8.0
    press_mm: float = 0.0


@dataclass(frozen=True, slots=True)
class Supports:
    """How each end carries the string, and the further length that shares the stretch."""

    nut: Support = CARRIED
    stop: Support = CARRIED
    saddle: Support = CARRIED
    free_mm: float = 0.0


CompensationRule = Literal["none", "one", "straight", "course", "each"]


@dataclass(frozen=True, slots=True)
class Compensation:
    """How nut and saddle may move, which frets are balanced, and with what weights."""

    nut: CompensationRule | PerString = "none"
    saddle: CompensationRule | PerString = "none"
    saddle_thickness_mm: float | None = None
    first_fret: int = 1
    last_fret: int = 1
    weights: Mapping[int, float] = field(default_factory=dict)


@dataclass(frozen=True, slots=True)
class Bridge:
    """One fixed bridge, separate pieces with a travel each, or a loose one."""

    kind: Literal["fixed", "separate", "loose"] = "fixed"
    travel_mm: float | None = None


@dataclass(frozen=True, slots=True)
class Nut:
    """Where zero is, how nut shift is brought about, and how the nut is seated."""

    zero: Literal["edge", "kerf", "fret"] = "edge"
    fit: Literal["trim", "overhang"] = "overhang"
    thickness_mm: float = 5.0
    seat: Literal["end", "channel"] = "end"
    behind_mm: float | None = None


@dataclass(frozen=True, slots=True)
class Margins:
    """Edge beyond the outer string centres, square to the centre line, at nut and tail."""

    nut_mm: float = 3.0
    tail_mm: float = 3.0


@dataclass(frozen=True, slots=True)
class Widths:
    """Full widths about the centre line at two places."""

    first: tuple[Place, float]
    second: tuple[Place, float]


@dataclass(frozen=True, slots=True)
class OneRadius:
    """The same top radius all along."""

    radius_mm: float


@dataclass(frozen=True, slots=True)
class TwoRadii:
    """Top radii at two places, straight-line in x between and beyond."""

    first: tuple[Place, float]
    second: tuple[Place, float]


@dataclass(frozen=True, slots=True)
class ConeAtNut:
    """The radius at the nut; elsewhere in proportion to the strings' spread."""

    radius_mm: float


@dataclass(frozen=True, slots=True)
class LevelEdgesAtNut:
    """The radius at the nut; elsewhere whatever keeps the edge drop of the nut."""

    radius_mm: float


TopRule = OneRadius | TwoRadii | ConeAtNut | LevelEdgesAtNut | None
"""How the top is curved; None is flat."""


@dataclass(frozen=True, slots=True)
class Board:
    """Edges, ends, thickness and top of the fingerboard."""

    edges: Margins | Widths = Margins()
    past_last_fret_mm: float = 12.0
    length_mm: float | None = None
    nut_end: Literal["along", "square"] = "along"
    tail_end: Literal["along", "square"] = "square"
    thickness_mm: float = 6.0
    top: TopRule = None
    binding_mm: float = 0.0
    blank_width_mm: float | None = None


@dataclass(frozen=True, slots=True)
class Wire:
    """Fretwire, as measured."""

    tang_mm: float | None = None
    tang_depth_mm: float | None = None
    crown_height_mm: float | None = None
    crown_width_mm: float | None = None
    stick_mm: float | None = None
    over_mm: float | None = None


@dataclass(frozen=True, slots=True)
class Slots:
    """The slots as wanted: width, floor, and how far they run."""

    width_mm: float = 0.58
    floor: Literal["flat", "follow"] = "flat"
    clearance_mm: float = 0.4
    run: Literal["open", "blind"] = "open"
    past_edge_mm: float = 2.0
    short_of_edge_mm: float = 1.5


@dataclass(frozen=True, slots=True)
class Tooling:
    """The machine that cuts, and its cutter or kerf."""

    machine: Literal["saw", "router", "laser"]
    cutter_mm: float | None = None
    runout_mm: float = 0.0
    kerf_mm: tuple[float, float] | None = None
    lines: Literal["on", "offset"] | None = None


@dataclass(frozen=True, slots=True)
class Marks:
    """Position marks, by fret number."""

    face: tuple[int, ...] = ()
    double: tuple[int, ...] = ()
    side: tuple[int, ...] = ()
    face_size_mm: float = 6.0
    side_size_mm: float = 2.0


@dataclass(frozen=True, slots=True)
class Pins:
    """Locating pins."""

    size_mm: float
    where: Literal["waste", "face"] = "waste"


@dataclass(frozen=True, slots=True)
class Loops:
    """Tied frets: gut of the first and last loop, turns, and which side stops the string."""

    first_mm: float
    last_mm: float
    turns: int = 1
    stop: Literal["bridge_side", "nut_side", "middle"] = "bridge_side"


@dataclass(frozen=True, slots=True)
class Tape:
    """Marker tape, and which edge of it is the stop."""

    width_mm: float
    stop: Literal["bridge_side", "nut_side", "middle"] = "bridge_side"


@dataclass(frozen=True, slots=True)
class BowedStops:
    """Neck stop and body stop of a bowed instrument."""

    neck_mm: float
    body_mm: float


@dataclass(frozen=True, slots=True)
class SlottingTemplate:
    """A strip with a notch at every fret."""

    notch_mm: float = 3.0
    edge: Literal["treble", "bass"] = "bass"


@dataclass(frozen=True, slots=True)
class Paper:
    """Paper of the 1:1 template, and what its 100 mm bars measured in the last print."""

    size: Literal["A4", "A3", "Letter", "Tabloid", "roll"] = "A4"
    margin_mm: float = 10.0
    overlap_mm: float = 15.0
    bar_along_mm: float = 100.0
    bar_across_mm: float = 100.0


@dataclass(frozen=True, slots=True)
class Instrument:
    """One instrument, whole: everything a plan is made from."""

    title: str
    reference: Reference
    scale: ParallelScale | MultiScale
    strings: tuple[StringSpec, ...]
    frets: Frets
    spread: Spread | None = None
    hand: Literal["right", "left"] = "right"
    unit: Literal["mm", "in"] = "mm"
    heights: Heights | None = None
    finger: Finger = Finger()
    supports: Supports = Supports()
    compensation: Compensation = Compensation()
    bridge: Bridge = Bridge()
    nut: Nut = Nut()
    board: Board = Board()
    wire: Wire = Wire()
    slots: Slots = Slots()
    tooling: Tooling | None = None
    marks: Marks = Marks()
    pins: Pins | None = None
    loops: Loops | None = None
    tape: Tape | None = None
    stops: BowedStops | None = None
    template: SlottingTemplate | None = None
    paper: Paper = Paper()
    layers: Mapping[str, str] = field(default_factory=dict)
    assumed: tuple[Assumed, ...] = ()
    findings: tuple[Finding, ...] = ()
    job_sha256: str = ""
    file: str = "job"
    lines: Mapping[str, int] = field(default_factory=dict, repr=False, compare=False)
