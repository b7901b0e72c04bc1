"""Does the setup make sense: heights, spread, scales, room between frets?"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from layout.findings import Finding
from layout.instrument import MultiScale, SpreadRule
from layout.plan.model import Plan
from layout.plan.sounding import relief_span
from layout.strings.lie import hollow_mm

LEAST_BETWEEN_CROWNS_MM = 2.0
"""Least room for a fingertip between two crowns; common practice, no source."""


def strings_touch_frets(plan: Plan) -> Iterator[Finding]:
    """Find open strings that lie on a crown before anybody stops them."""
    heights = plan.instrument.heights
    if heights is None:
        return
    met = plan.frets.met_mm
    span = relief_span(plan.instrument, plan.own_mm)
    crowns = hollow_mm(met, heights.relief_mm, from_mm=span[0][:, None], to_mm=span[1][:, None])
    start = plan.ends.nut_shift_mm[:, None]
    run = plan.strings.scale_mm[:, None] + plan.ends.setback_mm[:, None] - start
    at_nut, at_saddle = plan.height_at_nut_mm[:, None], plan.height_at_saddle_mm[:, None]
    gap = at_nut + (at_saddle - at_nut) * (met - start) / run - crowns
    for index, row in enumerate(gap):
        if not np.isfinite(row).any():
            continue
        fret = int(np.nanargmin(row)) + 1
        if row[fret - 1] <= 0:
            yield Finding(
                "string-touches-fret",
                "error",
                f"Open string {index + 1} lies {-row[fret - 1]:.2f} mm below the crown of fret "
                f"{fret}. Raise the action there or reduce the relief.",
                string=index + 1,
                fret=fret,
                amount=float(row[fret - 1]),
                unit="mm",
            )


def strings_fall(plan: Plan) -> Iterator[Finding]:
    """Find strings that come nearer to the crowns toward the saddle."""
    fall = plan.height_at_nut_mm - plan.height_at_saddle_mm
    for index in np.flatnonzero(fall > 0):
        yield Finding(
            "string-falls-toward-saddle",
            "warning",
            f"String {index + 1} is {fall[index]:.2f} mm lower at the saddle than at the nut. "
            "Check the two heights and which fret each belongs to.",
            string=int(index) + 1,
            amount=float(fall[index]),
            unit="mm",
        )


def frets_too_close(plan: Plan) -> Iterator[Finding]:
    """Find neighbouring frets whose crowns leave no room for a finger."""
    crown = plan.instrument.wire.crown_width_mm
    if crown is None:
        return
    places = np.concatenate(([0.0], plan.frets.at_centre_mm))
    room = np.diff(places) - crown
    for index in np.flatnonzero(room[1:] < LEAST_BETWEEN_CROWNS_MM) + 1:
        yield Finding(
            "frets-too-close",
            "warning",
            f"Only {room[index]:.2f} mm is left between the crowns of frets {index} and "
            f"{index + 1}. Fit fewer frets or narrower wire.",
            fret=int(index) + 1,
            amount=float(room[index]),
            unit="mm",
        )


def spread_narrows(plan: Plan) -> Iterator[Finding]:
    """Find a spread that is narrower at the saddle than at the nut."""
    spread = plan.instrument.spread
    if isinstance(spread, SpreadRule) and spread.saddle_mm < spread.nut_mm:
        yield Finding(
            "spread-narrows",
            "warning",
            "The strings stand closer at the saddle than at the nut. Check that the two figures "
            "are not changed about.",
            amount=spread.saddle_mm - spread.nut_mm,
            unit="mm",
        )


def treble_longer(plan: Plan) -> Iterator[Finding]:
    """Find a treble scale longer than the bass one."""
    scale = plan.instrument.scale
    if isinstance(scale, MultiScale) and scale.treble_mm > scale.bass_mm:
        yield Finding(
            "treble-longer-than-bass",
            "warning",
            "The treble scale is longer than the bass scale. Check that the two lengths are not "
            "changed about.",
            amount=scale.treble_mm - scale.bass_mm,
            unit="mm",
        )


def laser_widens(plan: Plan) -> Iterator[Finding]:
    """Name a slot that a laser on the line leaves wider by its kerf."""
    tooling = plan.instrument.tooling
    if tooling is None or tooling.machine != "laser" or tooling.lines != "on":
        return
    wider = plan.cut.finished_mm - plan.instrument.slots.width_mm
    if wider > 0:
        yield Finding(
            "laser-widens-slot",
            "note",
            f"Drawn on the line, the laser leaves every slot {wider:.3f} mm wider by its kerf: "
            f"{plan.cut.finished_mm:.3f} mm. Measure the kerf on scrap of this wood first.",
            amount=wider,
            unit="mm",
        )


def wolf_left(plan: Plan) -> Iterator[Finding]:
    """Report the fifth that an open chain leaves over."""
    frets = plan.instrument.frets
    wolf = frets.temperament.wolf if frets.counted_from == "key" else None
    if wolf is not None:
        yield Finding(
            "wolf-fifth",
            "note",
            f"The chain of {frets.temperament.name} leaves the fifth {wolf.lower}-{wolf.upper} "
            f"{wolf.wide_cents:+.1f} cents from pure. Choose the key so that your music avoids it.",
            amount=wolf.wide_cents,
            unit="cents",
        )


SETUP_CHECKS = (
    strings_touch_frets,
    strings_fall,
    frets_too_close,
    spread_narrows,
    treble_longer,
    laser_widens,
    wolf_left,
)
"""These checks, in the order their findings are printed."""
