"""How far do nut and saddle move, string by string, and what error is left at every stop?"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from layout.errors import NoSolutionError
from layout.geometry.cross import line_through
from layout.instrument import CompensationRule, Instrument, PerString, Sides
from layout.plan.laying import Laid, courses, outer_strings
from layout.plan.model import Pitch, Rung, Worst
from layout.plan.sounding import Sounding, figure_per_string
from layout.strings.balance import Balance, EndLines
from layout.strings.compensation import Compensation, solve_compensation
from layout.strings.moves import Move
from layout.strings.stopping import Stopped, predict_stops, split_error
from layout.strings.strip import Strip, narrowest_strip

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

LADDER: tuple[tuple[CompensationRule, CompensationRule], ...] = (
    ("none", "none"),
    ("none", "straight"),
    ("none", "each"),
    ("each", "each"),
)
"""The choices of nut and saddle that every plan compares."""


@dataclass(frozen=True, slots=True)
class Compensated:
    """Nut and saddle as chosen, shape (S,); what they leave; tensions as tuned (nan unknown)."""

    nut_shift_mm: Array
    setback_mm: Array
    strip: Strip | None
    limit_cost_cents: float | None
    pitch: Pitch | None
    tension_n: Array | None


@dataclass(frozen=True, slots=True)
class _Strung:
    """The fretted strings and their stops, ready for the physics."""

    instrument: Instrument
    laid: Laid
    sounding: Sounding
    fretted: Mask
    weights: Array
    none_mm: Array

    def solve(self, nut: Move, saddle: Move, *, strip_mm: float | None) -> Compensation:
        """Choose nut and saddle for the strings' own divided places."""
        body, lie = self.sounding.body, self.sounding.lie
        assert body is not None
        assert lie is not None
        chosen, strings = self.fretted, self.laid.strings
        balance = Balance(
            np.where(self.laid.served, self.laid.own_mm, np.nan)[chosen],
            self.laid.target_cents[chosen],
            self.weights[chosen],
        )
        ends = EndLines(
            strings.nut_mm[chosen],
            strings.bridge_mm[chosen],
            courses(self.instrument)[chosen],
            ~strings.full[chosen],
        )
        return solve_compensation(
            body,
            lie,
            balance=balance,
            ends=ends,
            nut=self.none_mm[chosen] if isinstance(nut, str) and nut == "none" else nut,
            saddle=saddle,
            strip_mm=strip_mm,
        )

    def predict(self, nut_shift_mm: Array, setback_mm: Array) -> Stopped:
        """Predict the planned stops, where the fret lines really meet the strings."""
        body, lie = self.sounding.body, self.sounding.lie
        assert body is not None
        assert lie is not None
        return predict_stops(
            body,
            lie,
            self.laid.frets.met_mm[self.fretted],
            nut_shift_mm=nut_shift_mm,
            setback_mm=setback_mm,
        )


def compensate(instrument: Instrument, laid: Laid, sounding: Sounding) -> Compensated:
    """Choose nut and saddle as the job asks, and predict every stop.

    Without string data or heights only figures the job lists are applied, and no claim is made
    about pitch.
    """
    fretted = np.array([string.fretted for string in instrument.strings])
    weights = _balance(instrument, laid)
    none_mm = unmoved_nut_mm(instrument)
    strung = _Strung(instrument, laid, sounding, fretted, weights, none_mm)
    rules = instrument.compensation
    # A zero fret holds every string at zero, whatever is asked of the nut behind it.
    nut = none_mm if instrument.nut.zero == "fret" else _nut_move(rules.nut, instrument, laid)
    saddle = _saddle_move(rules.saddle, instrument, laid)
    if sounding.body is None:
        return _listed_only(laid, nut, saddle, none_mm=none_mm, fretted=fretted)
    fixed_nut = nut if isinstance(nut, str) else nut[fretted]
    fixed_saddle = saddle if isinstance(saddle, str) else saddle[fretted]
    chosen = strung.solve(fixed_nut, fixed_saddle, strip_mm=rules.saddle_thickness_mm)
    stopped = strung.predict(chosen.nut_shift_mm, chosen.setback_mm)
    return Compensated(
        nut_shift_mm=_scattered(chosen.nut_shift_mm, fretted, 0.0),
        setback_mm=_scattered(chosen.setback_mm, fretted, 0.0),
        strip=chosen.strip,
        limit_cost_cents=chosen.limit_cost_cents,
        pitch=_pitch(strung, stopped, _climb(strung)),
        tension_n=_scattered(stopped.tension_open_n, fretted, np.nan),
    )


def zero_offset_mm(instrument: Instrument) -> float:
    """Give where an unmoved nut stands: half a kerf on from zero when a saw line sets it."""
    if instrument.nut.zero != "kerf":
        return 0.0
    tooling = instrument.tooling
    kerf = tooling.kerf_mm[0] if tooling and tooling.kerf_mm else instrument.slots.width_mm
    return kerf / 2


def unmoved_nut_mm(instrument: Instrument) -> Array:
    """Give where each string leaves an unmoved nut, from its zero, shape (S,), in mm.

    Strings that reach the nut start half a kerf on where a saw line sets it; a short string
    starts behind its fret where the job says so.
    """
    offset = zero_offset_mm(instrument)
    return np.array(
        [
            offset if string.full else -string.starts_at.behind_mm if string.starts_at else 0.0
            for string in instrument.strings
        ]
    )


def _balance(instrument: Instrument, laid: Laid) -> Array:
    """Weights of every stop, 0 where it is not balanced, shape (S, F)."""
    rules = instrument.compensation
    number = np.arange(1, instrument.frets.count + 1)
    within = (number >= rules.first_fret) & (number <= rules.last_fret)
    weight = np.array([rules.weights.get(int(fret), 1.0) for fret in number])
    return np.where(laid.served & within, weight, 0.0)


def _nut_move(rule: CompensationRule | PerString, instrument: Instrument, laid: Laid) -> Move:
    """Turn the job's rule for the nut into the physics' own: a rule, or one figure a string.

    Figures at both sides make a straight line through the outer strings that reach the nut; a
    short string has a nut of its own, which that line leaves where it is. A listed figure of a
    short string counts from where its nut stands.
    """
    if isinstance(rule, str):
        return rule
    strings = laid.strings
    unmoved = unmoved_nut_mm(instrument)
    if isinstance(rule, Sides):
        full = np.flatnonzero(strings.full)
        line = _straight_mm(rule, strings.nut_mm, strings.direction, int(full[0]), int(full[-1]))
        return np.where(strings.full, line, unmoved)
    figures = figure_per_string(rule, instrument, strings.nut_mm[:, 1])
    return np.where(strings.full, figures, figures + unmoved)


def _saddle_move(rule: CompensationRule | PerString, instrument: Instrument, laid: Laid) -> Move:
    """Turn the job's rule for the saddle into the physics' own."""
    if isinstance(rule, str):
        return rule
    strings = laid.strings
    if isinstance(rule, Sides):
        first, last = outer_strings(instrument)
        return _straight_mm(rule, strings.bridge_mm, strings.direction, first, last)
    return figure_per_string(rule, instrument, strings.nut_mm[:, 1])


def _straight_mm(rule: Sides, start_mm: Array, direction: Array, first: int, last: int) -> Array:
    """Move every string to the straight line in plan that two of them fix, shape (S,)."""
    if start_mm[first, 1] == start_mm[last, 1]:
        return np.full(len(start_mm), (rule.treble + rule.bass) / 2)
    edge = line_through(
        start_mm[first] + rule.treble * direction[first],
        start_mm[last] + rule.bass * direction[last],
    )
    return edge.distance_along(start_mm, direction)


def _listed_only(
    laid: Laid, nut: Move, saddle: Move, *, none_mm: Array, fretted: Mask
) -> Compensated:
    setback = np.zeros(len(none_mm)) if isinstance(saddle, str) else saddle
    shift = none_mm if isinstance(nut, str) else nut
    points = laid.strings.bridge_mm + setback[:, None] * laid.strings.direction
    strip = narrowest_strip(points[fretted], along=laid.strings.bridge_line.angle)
    return Compensated(shift, setback, strip, None, None, None)


def _climb(strung: _Strung) -> tuple[Rung, ...]:
    """Compare the choices of nut and saddle; a zero fret leaves the nut where it is."""
    rungs = []
    for nut, saddle in LADDER:
        if nut == "each" and strung.instrument.nut.zero == "fret":
            continue
        rungs.append(_rung(strung, nut, saddle))
    return tuple(rungs)


def _rung(strung: _Strung, nut: CompensationRule, saddle: CompensationRule) -> Rung:
    """One choice; nan where the strings have no such answer, so that the others still stand."""
    try:
        solved = strung.solve(nut, saddle, strip_mm=None)
        stopped = strung.predict(solved.nut_shift_mm, solved.setback_mm)
    except NoSolutionError:
        return Rung(nut, saddle, float("nan"), float("nan"))
    error = stopped.cents - strung.laid.target_cents[strung.fretted]
    weights = strung.weights[strung.fretted]
    worst = np.max(np.abs(error[weights > 0]), initial=0.0)
    return Rung(nut, saddle, _rms(error, weights), float(worst))


def _pitch(strung: _Strung, stopped: Stopped, ladder: tuple[Rung, ...]) -> Pitch:
    fretted = strung.fretted
    target = np.where(strung.laid.served, strung.laid.target_cents, np.nan)
    predicted = _scattered(stopped.cents, fretted, np.nan)
    error = predicted - target
    parts = split_error(stopped, target[fretted])
    heard = np.where(strung.weights > 0, error, np.nan)
    return Pitch(
        target_cents=target,
        predicted_cents=predicted,
        rms_cents=_rms(error, strung.weights),
        rms_all_cents=_rms(error, np.ones_like(error)),
        worst=_worst(heard),
        worst_all=_worst(error),
        ladder=ladder,
        parts_cents={
            name: _scattered(getattr(parts, name), fretted, np.nan)
            for name in ("length", "mass", "tension", "stiffness")
        },
    )


def _rms(error: Array, weights: Array) -> float:
    """Weighted root of the mean square, over stops of weight above 0."""
    known = np.isfinite(error) & (weights > 0)
    if not known.any():
        return 0.0
    return float(np.sqrt(np.average(error[known] ** 2, weights=weights[known])))


def _worst(error: Array) -> Worst:
    size = np.where(np.isfinite(error), np.abs(error), -1.0)
    string, fret = np.unravel_index(int(np.argmax(size)), size.shape)
    return Worst(int(string) + 1, int(fret) + 1, float(error[string, fret]))


def _scattered(chosen: Array, fretted: Mask, elsewhere: float) -> Array:
    """Put the fretted strings' figures back among all strings."""
    whole = np.full((len(fretted), *chosen.shape[1:]), elsewhere)
    whole[fretted] = chosen
    return whole
