"""How does an instrument become a plan? Pitch, strings and geometry, called in order."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from layout.findings import Assumed
from layout.geometry.board import BoardShape, shape_board
from layout.geometry.slots import choose_cut
from layout.geometry.surface import shape_top
from layout.instrument import Instrument
from layout.plan.clashing import measure_clash
from layout.plan.compensating import Compensated, compensate, zero_offset_mm
from layout.plan.cutting import cut_pieces, cut_zero_fret
from layout.plan.doubts import find_doubts
from layout.plan.fault_places import placing_faults
from layout.plan.laying import Laid, lay_out
from layout.plan.model import Loads, NutAndSaddle, Plan
from layout.plan.sounding import describe_strings

Array = NDArray[np.float64]

BEHIND_ZERO_FRET_MM = 2.0
"""How far a board runs on behind its nut when a zero fret lies on zero (geometry page, Board)."""


def make_plan(instrument: Instrument) -> Plan:
    """Make the plan of one instrument.

    Parameters
    ----------
    instrument
        What is to be built, with every default filled in.

    Returns
    -------
    Plan

    Raises
    ------
    JobError
        When the geometry is impossible, with the key that says so and its line.
    PitchError
        When the temperament has no such degree.
    NoSolutionError
        When the physics finds no answer.

    """
    with placing_faults(instrument):
        return _plan(instrument)


def _plan(instrument: Instrument) -> Plan:
    laid = lay_out(instrument)
    sounding = describe_strings(instrument, laid)
    compensated = compensate(instrument, laid, sounding)
    ends = _place_ends(instrument, laid, compensated)
    board = _shape(instrument, laid, ends)
    surface = shape_top(instrument.board.top, board, laid.strings, laid.frets)
    plan = Plan(
        instrument=instrument,
        target_cents=laid.target_cents,
        own_mm=laid.own_mm,
        strings=laid.strings,
        frets=laid.frets,
        board=board,
        surface=surface,
        cut=choose_cut(instrument.slots, instrument.tooling),
        pieces=cut_pieces(instrument, laid, board, surface),
        zero_fret=cut_zero_fret(instrument, laid, board, surface),
        ends=ends,
        height_at_nut_mm=sounding.height_at_nut_mm,
        height_at_saddle_mm=sounding.height_at_saddle_mm,
        speaking_mm=_speaking(ends, sounding.height_at_nut_mm, sounding.height_at_saddle_mm),
        loads=_tuned_loads(sounding.loads, compensated),
        pitch=compensated.pitch,
        clash=measure_clash(laid),
        assumed=_assumed(instrument, sounding.assumed),
        findings=instrument.findings,
    )
    return replace(plan, findings=(*instrument.findings, *find_doubts(plan)))


def _place_ends(instrument: Instrument, laid: Laid, compensated: Compensated) -> NutAndSaddle:
    """Say where each string leaves, and how its nut shift is brought about."""
    shift, setback = compensated.nut_shift_mm, compensated.setback_mm
    strings = laid.strings
    reaching = strings.full & np.array([string.fretted for string in instrument.strings])
    zero = zero_offset_mm(instrument)
    face = float(shift[reaching].max()) if instrument.nut.fit == "trim" else zero
    return NutAndSaddle(
        nut_shift_mm=shift,
        setback_mm=setback,
        face_mm=face,
        file_back_mm=np.where(reaching, np.maximum(face - shift, 0.0), 0.0),
        overhang_mm=np.where(reaching, np.maximum(shift - face, 0.0), 0.0),
        nut_mm=strings.nut_mm + shift[:, None] * strings.direction,
        saddle_mm=strings.bridge_mm + setback[:, None] * strings.direction,
        strip=compensated.strip,
        limit_cost_cents=compensated.limit_cost_cents,
    )


def _shape(instrument: Instrument, laid: Laid, ends: NutAndSaddle) -> BoardShape:
    zero = instrument.nut.zero
    nut_line = laid.strings.nut_line
    return shape_board(
        instrument.board,
        laid.strings,
        laid.frets,
        face=nut_line if zero == "fret" else nut_line.moved(ends.face_mm),
        before_face_mm=instrument.nut.thickness_mm + BEHIND_ZERO_FRET_MM if zero == "fret" else 0.0,
        fretted=np.array([string.fretted for string in instrument.strings]),
        short_starts=tuple(string.starts_at for string in instrument.strings),
    )


def _speaking(ends: NutAndSaddle, at_nut: Array, at_saddle: Array) -> Array:
    run = np.hypot(*(ends.saddle_mm - ends.nut_mm).T)
    rise = np.where(np.isfinite(at_nut), at_saddle - at_nut, 0.0)
    return np.asarray(np.hypot(run, rise))


def _tuned_loads(loads: Loads, compensated: Compensated) -> Loads:
    """Tensions of the strings as tuned over the planned nut and saddle."""
    if compensated.tension_n is None:
        return loads
    tuned = np.where(np.isfinite(compensated.tension_n), compensated.tension_n, loads.tension_n)
    share = loads.share_of_break * tuned / loads.tension_n
    return replace(loads, tension_n=tuned, share_of_break=share)


def _assumed(instrument: Instrument, estimated: tuple[Assumed, ...]) -> tuple[Assumed, ...]:
    machine = (
        (Assumed("tooling", "no machine named: slots as centre lines, cut to slots.width"),)
        if instrument.tooling is None
        else ()
    )
    return (*instrument.assumed, *estimated, *machine)
