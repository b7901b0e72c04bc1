"""What is each string, how hard does it pull, and how does it lie over the crowns?

Turns the job's string data into the arrays of the physics, and lists every figure that was
estimated instead of given.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from layout.errors import Fault, JobError
from layout.findings import Assumed
from layout.instrument import (
    ActionGaps,
    Instrument,
    Listed,
    PerString,
    Same,
    StringSpec,
)
from layout.pitch.notes import Note
from layout.pitch.targets import open_hz
from layout.plan.laying import Laid, outer_strings
from layout.plan.model import Loads
from layout.strings.material import find_material
from layout.strings.section import (
    Section,
    axial_stiffness_from_stretch,
    estimate_steel_core_mm,
    plain_section,
    section_from_tension,
    wound_section,
)
from layout.strings.stopping import StringBody, StringLie, heights_from_gaps
from layout.strings.strength import share_of_break
from layout.strings.tuning import solve_open_tension_n

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Sounding:
    """The strings as the physics sees them.

    Attributes
    ----------
    body, lie
        Every string that runs over the board, in order; None while data or heights are missing.
    loads
        Every string, nan where nothing is known of it.
    assumed
        What was estimated.

    """

    body: StringBody | None
    lie: StringLie | None
    loads: Loads
    height_at_nut_mm: Array
    height_at_saddle_mm: Array
    assumed: tuple[Assumed, ...]


def describe_strings(instrument: Instrument, laid: Laid) -> Sounding:
    """Describe every string's body, load and lie."""
    hz = open_pitches(instrument)
    assumed: list[Assumed] = []
    sections, cores = [], []
    for index, string in enumerate(instrument.strings):
        path = f"strings[{index + 1}]"
        own = _Own(path, float(hz[index]), float(laid.strings.scale_mm[index]))
        section, core = _section(string, own, instrument, assumed)
        sections.append(section)
        cores.append(core)
    body = StringBody(
        unit_mass_kg_per_m=np.array([s.unit_mass_kg_per_m for s in sections], float),
        axial_stiffness_n=np.array([s.axial_stiffness_n for s in sections], float),
        bending_stiffness_n_m2=np.array([s.bending_stiffness_n_m2 for s in sections], float),
    )
    at_nut, at_saddle = string_heights(instrument, laid)
    length = _open_length_mm(laid, at_nut, at_saddle)
    tension = _tension(body, hz, length, instrument)
    loads = Loads(
        hz=hz,
        unit_mass_kg_per_m=np.asarray(body.unit_mass_kg_per_m),
        axial_stiffness_n=np.asarray(body.axial_stiffness_n),
        bending_stiffness_n_m2=np.asarray(body.bending_stiffness_n_m2),
        tension_n=tension,
        share_of_break=_shares(tension, np.array(cores, float)),
    )
    fretted = np.array([string.fretted for string in instrument.strings])
    complete = bool(np.isfinite(tension[fretted]).all())
    known = complete and bool(np.isfinite(at_nut[fretted]).all())
    return Sounding(
        body=_chosen_body(body, fretted) if known else None,
        lie=_lie(instrument, laid, hz, at_nut=at_nut, at_saddle=at_saddle, fretted=fretted)
        if known
        else None,
        loads=loads,
        height_at_nut_mm=at_nut,
        height_at_saddle_mm=at_saddle,
        assumed=tuple(assumed),
    )


def open_pitches(instrument: Instrument) -> Array:
    """Give every open string's pitch in Hz, shape (S,)."""
    job, reference = instrument.frets, instrument.reference
    ordered = np.array([string.hz or np.nan for string in instrument.strings])
    named = [i for i, string in enumerate(instrument.strings) if string.note is not None]
    ordered[named] = open_hz(
        job.temperament,
        [note for string in instrument.strings if (note := string.note) is not None],
        reference_note=reference.note,
        reference_hz=reference.hz,
        counted_from=job.counted_from,
    )
    return ordered


def figure_per_string(figure: PerString, instrument: Instrument, nut_y_mm: Array) -> Array:
    """Spread a figure over the strings: the same, listed, or linear in y at the nut."""
    count = len(instrument.strings)
    if isinstance(figure, Same):
        return np.full(count, figure.value)
    if isinstance(figure, Listed):
        return np.array(figure.values, float)
    first, last = outer_strings(instrument)
    if nut_y_mm[first] == nut_y_mm[last]:
        return np.full(count, (figure.treble + figure.bass) / 2)
    share = (nut_y_mm[first] - nut_y_mm) / (nut_y_mm[first] - nut_y_mm[last])
    return np.asarray(figure.treble + share * (figure.bass - figure.treble))


def string_heights(instrument: Instrument, laid: Laid) -> tuple[Array, Array]:
    """Give heights over the plane of the crowns at nut and bridge line, (S,) each, in mm.

    nan for every string while the job gives no heights.
    """
    count = len(instrument.strings)
    if instrument.heights is None:
        return np.full(count, np.nan), np.full(count, np.nan)
    given = instrument.heights.given
    nut_y = laid.strings.nut_mm[:, 1]
    if not isinstance(given, ActionGaps):
        at_nut = figure_per_string(given.nut, instrument, nut_y)
        at_saddle = figure_per_string(given.saddle, instrument, nut_y)
    else:
        places = (laid.own_mm[:, given.first_fret - 1], laid.own_mm[:, given.second_fret - 1])
        relief_from, relief_to = relief_span(instrument, laid.own_mm)
        at_nut, at_saddle = heights_from_gaps(
            laid.strings.scale_mm,
            places_mm=places,
            gaps_mm=(
                figure_per_string(given.first_gap, instrument, nut_y),
                figure_per_string(given.second_gap, instrument, nut_y),
            ),
            relief_mm=instrument.heights.relief_mm,
            relief_from_mm=relief_from,
            relief_to_mm=relief_to,
        )
    if instrument.nut.zero == "fret":
        at_nut = np.where(laid.strings.full, 0.0, at_nut)
    return at_nut, at_saddle


def relief_span(instrument: Instrument, own_mm: Array) -> tuple[Array, Array]:
    """Give where relief begins and ends on every string, (S,) each; nan where there is none."""
    heights = instrument.heights
    joint = min(heights.joint if heights else 0, instrument.frets.count)
    if joint <= 1:
        nothing = np.full(len(instrument.strings), np.nan)
        return nothing, nothing
    return own_mm[:, 0], own_mm[:, joint - 1]


@dataclass(frozen=True, slots=True)
class _Own:
    """A string's key path, pitch and length."""

    path: str
    hz: float
    length_mm: float


SOFT_MODULI = {
    "nylon": "from a mean modulus of 5.5 GPa; published strings vary from 3.9 to 8.3",
    "fluorocarbon": "from a mean modulus of 8.9 GPa; published strings vary from 5.6 to 13.4",
    "gut": "from a modulus of 6.0 GPa, a string maker's figure; strings vary",
}
"""What is assumed of a soft string that nobody stretched (physics page, table of materials)."""

_UNKNOWN = Section(float("nan"), float("nan"), float("nan"))


def _section(
    string: StringSpec, own: _Own, instrument: Instrument, assumed: list[Assumed]
) -> tuple[Section, float]:
    """Give a string's section and the diameter of its steel core (nan unless it is steel)."""
    section, core_mm = _made(string, own, assumed)
    if string.tension is not None:
        section = _by_tension(string, own, instrument, made=section, assumed=assumed)
    mass, axial, bending = (
        measured if measured is not None else made
        for measured, made in (
            (string.unit_mass_kg_per_m, section.unit_mass_kg_per_m),
            (string.axial_stiffness_n, section.axial_stiffness_n),
            (string.bending_stiffness_n_m2, section.bending_stiffness_n_m2),
        )
    )
    if string.stretch is not None and string.axial_stiffness_n is None:
        axial = _by_stretch(string, own, instrument, mass=float(mass), bending=float(bending))
    return Section(mass, axial, bending), core_mm


def _made(string: StringSpec, own: _Own, assumed: list[Assumed]) -> tuple[Section, float]:
    """What follows from material and gauge alone."""
    nothing = float("nan")
    if string.make is None or string.gauge_mm is None or string.material is None:
        return _UNKNOWN, nothing
    if string.make == "plain":
        better = string.axial_stiffness_n, string.stretch, string.tension
        if string.material in SOFT_MODULI and better == (None, None, None):
            assumed.append(
                Assumed(
                    f"{own.path}.axial_stiffness",
                    SOFT_MODULI[string.material],
                )
            )
        core = string.gauge_mm if string.material == "steel" else nothing
        return plain_section(string.gauge_mm, find_material(string.material)), core
    core_mm = string.core_mm
    if string.core_material != "steel":
        return _UNKNOWN, nothing
    if core_mm is None:
        core_mm = float(estimate_steel_core_mm(string.gauge_mm))
        if core_mm >= string.gauge_mm:
            rule = "a wound string this thin has no room for the estimated core"
            gauge = f"{string.gauge_mm:g} mm"
            raise JobError([Fault("job", None, f"{own.path}.gauge", gauge, rule, "give its core")])
        assumed.append(
            Assumed(f"{own.path}.core", f"{core_mm:.3f} mm (estimate: 0.24 mm + 0.148 x gauge)")
        )
    section = wound_section(
        string.gauge_mm,
        core_mm,
        core=find_material(string.core_material),
        wrap=find_material(string.material),
    )
    return section, core_mm


def _by_tension(
    string: StringSpec,
    own: _Own,
    instrument: Instrument,
    *,
    made: Section,
    assumed: list[Assumed],
) -> Section:
    """A stated tension gives the mass; the stiffnesses of steel follow from its diameter."""
    stated = string.tension
    assert stated is not None
    hz = own.hz if stated.note is None else note_hz(stated.note, instrument)
    length = own.length_mm if stated.length_mm is None else stated.length_mm
    ruled = section_from_tension(
        stated.newton, length, hz=hz, gauge_mm=string.gauge_mm or float("nan")
    )
    if np.isfinite(made.axial_stiffness_n) and _is_steel(string):
        assumed.append(
            Assumed(f"{own.path}.axial_stiffness", "from its steel; only the mass from the tension")
        )
        return Section(
            ruled.unit_mass_kg_per_m, made.axial_stiffness_n, made.bending_stiffness_n_m2
        )
    if string.axial_stiffness_n is None and string.stretch is None:
        assumed.append(Assumed(f"{own.path}.axial_stiffness", "50 x the stated tension"))
    if string.bending_stiffness_n_m2 is None and string.gauge_mm is not None:
        assumed.append(
            Assumed(
                f"{own.path}.bending_stiffness",
                "axial stiffness x gauge squared / 16; bending tests give about a third of it",
            )
        )
    return ruled


def _is_steel(string: StringSpec) -> bool:
    return (string.material if string.make == "plain" else string.core_material) == "steel"


def note_hz(note: Note, instrument: Instrument) -> float:
    """Give the pitch of a note in equal temperament from the job's reference, in Hz."""
    reference = instrument.reference
    steps = note.semitone - reference.note.semitone
    cents = 100 * steps + float(note.cents - reference.note.cents)
    return float(reference.hz * 2 ** (cents / 1200))


def _by_stretch(
    string: StringSpec, own: _Own, instrument: Instrument, *, mass: float, bending: float
) -> float:
    """A stretch test gives the axial stiffness at the tension of the tuned string."""
    test = string.stretch
    assert test is not None
    if not (np.isfinite(mass) and np.isfinite(bending)):
        return float("nan")
    body = StringBody(
        unit_mass_kg_per_m=np.array([mass]),
        axial_stiffness_n=np.array([0.0]),
        bending_stiffness_n_m2=np.array([bending]),
    )
    tension = solve_open_tension_n(
        body,
        np.array([own.hz]),
        np.array([own.length_mm]),
        nut=instrument.supports.nut,
        saddle=instrument.supports.saddle,
    )
    return float(
        axial_stiffness_from_stretch(
            float(tension[0]),
            test.rise_cents,
            by_mm=test.by_mm,
            length_mm=test.length_mm,
        )
    )


def _open_length_mm(laid: Laid, at_nut: Array, at_saddle: Array) -> Array:
    rise = np.where(np.isfinite(at_nut), at_saddle - at_nut, 0.0)
    return np.hypot(laid.strings.scale_mm, rise)


def _tension(body: StringBody, hz: Array, length: Array, instrument: Instrument) -> Array:
    """Tension of every open string; nan where nothing is known of it."""
    return solve_open_tension_n(
        body, hz, length, nut=instrument.supports.nut, saddle=instrument.supports.saddle
    )


def _shares(tension: Array, core_mm: Array) -> Array:
    share = np.full(len(tension), np.nan)
    known = np.isfinite(tension) & np.isfinite(core_mm)
    if known.any():
        share[known] = share_of_break(tension[known], core_mm[known])
    return share


def _chosen_body(body: StringBody, chosen: NDArray[np.bool_]) -> StringBody:
    return StringBody(
        unit_mass_kg_per_m=body.unit_mass_kg_per_m[chosen],
        axial_stiffness_n=body.axial_stiffness_n[chosen],
        bending_stiffness_n_m2=body.bending_stiffness_n_m2[chosen],
    )


def _lie(
    instrument: Instrument,
    laid: Laid,
    hz: Array,
    *,
    at_nut: Array,
    at_saddle: Array,
    fretted: NDArray[np.bool_],
) -> StringLie:
    assert instrument.heights is not None
    relief_from, relief_to = relief_span(instrument, laid.own_mm)
    return StringLie(
        open_hz=hz[fretted],
        scale_mm=laid.strings.scale_mm[fretted],
        height_at_nut_mm=at_nut[fretted],
        height_at_saddle_mm=at_saddle[fretted],
        relief_mm=instrument.heights.relief_mm,
        relief_from_mm=relief_from[fretted],
        relief_to_mm=relief_to[fretted],
        finger_behind_mm=instrument.finger.behind_mm,
        finger_press_mm=instrument.finger.press_mm,
        free_mm=instrument.supports.free_mm,
        nut=instrument.supports.nut,
        stop=instrument.supports.stop,
        saddle=instrument.supports.saddle,
    )
