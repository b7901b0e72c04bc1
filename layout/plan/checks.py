"""What is doubtful about strings, frets and board? Each check looks at one question."""

from __future__ import annotations

import math
from collections.abc import Iterator

import numpy as np

from layout.findings import Finding
from layout.geometry.spread import clear_gaps_mm
from layout.plan.laying import courses
from layout.plan.model import Plan

TANG_SQUEEZE_MM = (0.03, 0.08)
"""Normal excess of the finished slot over the tang (geometry page, Slots)."""

NEAREST_EDGE_MM = 1.5
"""Least clear wood beside an outer string; common practice, no source."""

NEAREST_NEIGHBOUR_MM = 3.0
"""Least clear space between courses; common practice, no source."""

TOUCHING_MM = 1e-9
"""Strings closer than the tolerance of algebra touch."""

STEEPEST_NUT_DEG = 20.0
"""Steepest nut line that is still easy to make and play; common practice, no source."""

HIGHEST_SHARE_OF_BREAK = 0.85
"""Share of the breaking load above which a string is likely to break; common practice."""

DEAREST_LIMIT_CENTS = 0.01
"""What a saddle strip may cost before it is mentioned (physics page)."""

CLASH_NOTE_CENTS = 1e-6
CLASH_WARNING_CENTS = 5.0
"""Clash from which a straight fret is heard as wrong (physics page, hearing: about 5 cents)."""


def _slot_and_cutter(plan: Plan) -> Iterator[Finding]:
    short = plan.cut.too_narrow_by_mm
    tooling = plan.instrument.tooling
    if short > 0 and tooling is not None:
        laser = tooling.machine == "laser"
        said = "not wider than the kerf" if laser else f"{short:.3g} mm narrower than the cutter"
        yield Finding(
            "slot-narrower-than-cutter",
            "error",
            f"The slots are {said}, so no pocket is drawn. Use a "
            f"{'finer beam' if laser else 'smaller cutter'} or a wider slot.",
            amount=short,
            unit="mm",
        )


def _tang(plan: Plan) -> Iterator[Finding]:
    tang = plan.instrument.wire.tang_mm
    if tang is None:
        return
    excess = plan.cut.finished_mm - tang
    low, high = TANG_SQUEEZE_MM
    tooling = plan.instrument.tooling
    laser = tooling is not None and tooling.machine == "laser" and tooling.lines == "on"
    because = " The laser leaves the slot wider by its kerf." if laser else ""
    if excess < low - 1e-9:
        yield Finding(
            "slot-tight-for-tang",
            "warning",
            f"The finished slot is {excess:+.3f} mm against the tang; {low} to {high} mm is "
            f"normal. Widen the slot, or the board will bend as the frets go in.{because}",
            amount=excess,
            unit="mm",
        )
    elif excess > high + 1e-9:
        yield Finding(
            "slot-loose-for-tang",
            "warning",
            f"The finished slot is {excess:+.3f} mm against the tang; {low} to {high} mm is "
            f"normal. Narrow the slot, or plan to glue the frets.{because}",
            amount=excess,
            unit="mm",
        )


def _nut_shift_at_zero_fret(plan: Plan) -> Iterator[Finding]:
    asked = plan.instrument.compensation.nut
    if plan.instrument.nut.zero == "fret" and asked != "none":
        yield Finding(
            "nut-shift-at-zero-fret",
            "warning",
            "A zero fret holds every string at zero, so the nut shift asked for is left out. "
            "Write nut: none under compensation, or take zero: edge.",
        )


def _string_near_edge(plan: Plan) -> Iterator[Finding]:
    fretted = np.flatnonzero(plan.fretted)
    for index, edge, side in (
        (int(fretted[0]), plan.board.treble, 1.0),
        (int(fretted[-1]), plan.board.bass, -1.0),
    ):
        radius = (plan.instrument.strings[index].gauge_mm or 0.0) / 2
        start = max(float(plan.ends.nut_mm[index, 0]), plan.board.nut_end.at_centre_mm)
        places = [start, float(plan.board.tail_end.at_centre_mm)]
        clear = min(side * (edge.y_at(x) - plan.strings.y_at(index, x)) - radius for x in places)
        if clear < NEAREST_EDGE_MM:
            yield Finding(
                "string-near-edge",
                "error" if clear < 0 else "warning",
                f"String {index + 1} runs {clear:.2f} mm from the board's edge at the nearest; "
                f"it may slip off. Leave at least {NEAREST_EDGE_MM} mm: widen the board or "
                "narrow the spread.",
                string=index + 1,
                amount=clear,
                unit="mm",
            )


def _strings_too_close(plan: Plan) -> Iterator[Finding]:
    course = courses(plan.instrument)
    for name, points in (("nut", plan.strings.nut_mm), ("saddle", plan.strings.bridge_mm)):
        gaps = clear_gaps_mm(points[:, 1], plan.instrument.strings)
        for index, gap in enumerate(gaps):
            least = 0.0 if course[index] == course[index + 1] else NEAREST_NEIGHBOUR_MM
            touching = gap < TOUCHING_MM
            if gap < least or touching:
                yield Finding(
                    "strings-too-close",
                    "error" if touching else "warning",
                    f"Strings {index + 1} and {index + 2} are {gap:.2f} mm apart at the {name}, "
                    f"clear. Widen the spread there.",
                    string=index + 1,
                    amount=float(gap),
                    unit="mm",
                )


def _stops_out_of_order(plan: Plan) -> Iterator[Finding]:
    met = plan.frets.met_mm
    for index in range(len(met)):
        served = np.flatnonzero(np.isfinite(met[index]))
        step = np.diff(np.concatenate(([0.0], met[index, served])))
        for place in np.flatnonzero(step <= 0):
            fret = int(served[place]) + 1
            yield Finding(
                "stops-out-of-order",
                "error",
                f"Fret {fret} does not lie beyond the one before it on string {index + 1} "
                f"({step[place]:.3f} mm). Check the temperament's order and the favoured pitches.",
                string=index + 1,
                fret=fret,
                amount=float(step[place]),
                unit="mm",
            )


def _nut_slope(plan: Plan) -> Iterator[Finding]:
    slope = abs(math.degrees(plan.strings.nut_line.angle))
    if slope > STEEPEST_NUT_DEG:
        yield Finding(
            "nut-steep",
            "warning",
            f"The nut line lies {slope:.1f} degrees off square; beyond {STEEPEST_NUT_DEG:.0f} "
            "the nut is hard to make and the first frets hard to play. Move the square fret "
            "toward the nut, or bring the two scales closer.",
            amount=slope,
            unit="degrees",
        )


def _frets_that_miss(plan: Plan) -> Iterator[Finding]:
    """A string that lies beyond the ends of its fret, or where a fret crosses the nut or tail."""
    points = plan.strings.points(plan.frets.met_mm)
    for piece in plan.pieces:
        low, high = piece.bass_mm[1], piece.treble_mm[1]
        y = points[:, piece.fret - 1, 1]
        served = plan.frets.served[:, piece.fret - 1]
        alone = len(plan.pieces_of(piece.fret)) == 1
        for index in np.flatnonzero(served & ((y > high) | (y < low))):
            if alone:
                yield Finding(
                    "fret-misses-string",
                    "error",
                    f"Fret {piece.fret} ends before it reaches string {index + 1}. Widen the "
                    "board or narrow the spread.",
                    string=int(index) + 1,
                    fret=piece.fret,
                    amount=float(max(y[index] - high, low - y[index])),
                    unit="mm",
                )
        for line, name, sign in (
            (plan.board.nut_end, "nut end", 1.0),
            (plan.board.tail_end, "tail", -1.0),
        ):
            inside = [
                sign * (float(end[0]) - float(line.x_at(end[1])))
                for end in (piece.treble_mm, piece.bass_mm)
            ]
            if min(inside) < 0:
                yield Finding(
                    "fret-runs-off-board",
                    "error",
                    f"Fret {piece.fret} crosses the {name} of the board by {-min(inside):.2f} mm."
                    " Make the board longer there, or end it along the frets.",
                    fret=piece.fret,
                    amount=-min(inside),
                    unit="mm",
                )


def _near_breaking(plan: Plan) -> Iterator[Finding]:
    for index, share in enumerate(plan.loads.share_of_break):
        if share > HIGHEST_SHARE_OF_BREAK:
            yield Finding(
                "near-breaking-load",
                "error" if share >= 1 else "warning",
                f"String {index + 1} is tuned to {share:.2f} of the least breaking load of its "
                "core. Take a thinner string, a lower note or a shorter scale; wear eye "
                "protection while tuning.",
                string=index + 1,
                amount=float(share),
                unit="share",
            )


def _strip(plan: Plan) -> Iterator[Finding]:
    limit = plan.instrument.compensation.saddle_thickness_mm
    strip, cost = plan.ends.strip, plan.ends.limit_cost_cents
    if limit is None or strip is None:
        return
    if strip.width_mm > limit + 1e-6:
        yield Finding(
            "saddle-too-thin",
            "warning",
            f"The crown points need a strip {strip.width_mm:.2f} mm wide; the saddle has "
            f"{limit:.2f} mm. Take a thicker saddle or list setbacks that fit.",
            amount=strip.width_mm - limit,
            unit="mm",
        )
    elif cost is not None and cost > DEAREST_LIMIT_CENTS:
        yield Finding(
            "saddle-limits-intonation",
            "note",
            f"Keeping all crown points within {limit:.2f} mm costs {cost:.2f} cents rms. A "
            "thicker saddle would win that back.",
            amount=cost,
            unit="cents",
        )


def _clash(plan: Plan) -> Iterator[Finding]:
    for clash in plan.clash:
        favoured = clash.fret in plan.instrument.frets.favour
        if clash.spread_cents > CLASH_NOTE_CENTS and not favoured:
            yield Finding(
                "strings-disagree",
                "warning" if clash.spread_cents > CLASH_WARNING_CENTS else "note",
                f"The strings ask for fret {clash.fret} at places {clash.spread_mm:.2f} mm "
                f"({clash.spread_cents:.1f} cents) apart; one straight fret serves them between. "
                "Favour one pitch, or take another temperament.",
                fret=clash.fret,
                amount=clash.spread_cents,
                unit="cents",
            )


def _claims(plan: Plan) -> Iterator[Finding]:
    if plan.pitch is not None:
        return
    loads = plan.loads
    fretted = plan.fretted
    bare = [int(i) + 1 for i in np.flatnonzero(fretted & ~np.isfinite(loads.tension_n))]
    missing = []
    if bare:
        missing.append("string data for " + ", ".join(f"string {number}" for number in bare))
    if plan.instrument.heights is None:
        missing.append("heights")
    yield Finding(
        "no-claim-about-pitch",
        "note",
        f"Missing: {' and '.join(missing)}. The places are those of the temperament alone; "
        "nothing is said about what the strings will sound. Add them to learn the errors.",
    )


STRING_CHECKS = (
    _slot_and_cutter,
    _tang,
    _nut_shift_at_zero_fret,
    _strings_too_close,
    _string_near_edge,
    _stops_out_of_order,
    _frets_that_miss,
    _nut_slope,
    _near_breaking,
    _strip,
    _clash,
    _claims,
)
"""These checks, in the order their findings are printed."""
