"""Can nut, bridge pieces and slotting template be made as planned?"""

from __future__ import annotations

import math
from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from layout.findings import Finding
from layout.plan.compensating import zero_offset_mm
from layout.plan.model import Plan

Array = NDArray[np.float64]

SQUARE = 1e-9
"""Slope below which a fret counts as square: no more than 1e-7 mm across any board."""

LEAST_NOTCH_GAP_MM = 2.0
"""Least wood between notches (geometry page, Other parts)."""

LARGE_NUT_SHIFT_MM = 3.0
"""Nut shift beyond which a figure is likely mistaken; our own judgement, no source."""


def steepest_fret(plan: Plan) -> int | None:
    """Give the number of the fret furthest off square; None where all are square."""
    slopes = np.abs(plan.frets.slope)
    steepest = int(np.argmax(slopes))
    return steepest + 1 if slopes[steepest] > SQUARE else None


def notch_gaps_mm(plan: Plan) -> Array:
    """Give the wood before each fret's notch, shape (F,), in mm; the first is next to zero's."""
    template = plan.instrument.template
    notch = 0.0 if template is None else template.notch_mm
    return np.asarray(np.diff(plan.frets.at_centre_mm, prepend=0.0) - notch)


def template_needs_square_frets(plan: Plan) -> Iterator[Finding]:
    """Find a notched template asked for where frets are slanted."""
    if plan.instrument.template is None:
        return
    fret = steepest_fret(plan)
    if fret is not None:
        angle = math.degrees(plan.frets.line(fret).angle)
        yield Finding(
            "template-needs-square-frets",
            "error",
            f"Fret {plan.instrument.frets.labels[fret - 1]} lies {angle:+.2f} degrees off square; "
            "a notched template leads a saw that is square to it, so none is drawn. Leave "
            "template out and slot by the board's own sheet or the paper template.",
            fret=fret,
            amount=angle,
            unit="degrees",
        )


def notches_too_close(plan: Plan) -> Iterator[Finding]:
    """Find the least wood between notches of the template."""
    if plan.instrument.template is None or steepest_fret(plan) is not None:
        return
    gaps = notch_gaps_mm(plan)
    fret = int(np.argmin(gaps)) + 1
    gap = float(gaps[fret - 1])
    if gap < LEAST_NOTCH_GAP_MM - 1e-9:
        label = plan.instrument.frets.labels[fret - 1]
        meets = " The notches meet, so no template is drawn." if gap <= 0 else ""
        yield Finding(
            "notches-too-close",
            "error" if gap <= 0 else "warning",
            f"Before fret {label} {max(gap, 0.0):.2f} mm is left between the template's notches; "
            f"less than {LEAST_NOTCH_GAP_MM:g} mm breaks.{meets} Take a smaller notch and pin.",
            fret=fret,
            amount=gap,
            unit="mm",
        )


def nut_shift_large(plan: Plan) -> Iterator[Finding]:
    """Find nut shifts far beyond what strings ask for."""
    moved = plan.ends.nut_shift_mm - zero_offset_mm(plan.instrument)
    at_nut = np.flatnonzero(plan.strings.full & plan.fretted)
    for index in at_nut[np.abs(moved[at_nut]) > LARGE_NUT_SHIFT_MM]:
        yield Finding(
            "nut-shift-large",
            "warning",
            f"String {index + 1} moves {moved[index]:+.2f} mm at the nut; more than "
            f"{LARGE_NUT_SHIFT_MM:g} mm is seldom meant. Check heights, gauges and the listed "
            "shifts.",
            string=int(index) + 1,
            amount=float(moved[index]),
            unit="mm",
        )


def nut_too_thin(plan: Plan) -> Iterator[Finding]:
    """Find a step that is filed back through the whole nut."""
    thickness = plan.instrument.nut.thickness_mm
    index = int(np.argmax(plan.ends.file_back_mm))
    back = float(plan.ends.file_back_mm[index])
    if back >= thickness:
        yield Finding(
            "nut-too-thin",
            "error",
            f"String {index + 1} asks for {back:.2f} mm to be filed back from a nut "
            f"{thickness:.2f} mm thick. Take a thicker nut, or fit it by overhang.",
            string=index + 1,
            amount=back - thickness,
            unit="mm",
        )


def bridge_travel(plan: Plan) -> Iterator[Finding]:
    """Find separate bridge pieces whose travel does not reach every setback."""
    bridge = plan.instrument.bridge
    if bridge.kind != "separate" or bridge.travel_mm is None:
        return
    asked = plan.ends.setback_mm[plan.fretted]
    used = float(asked.max() - asked.min())
    if used > bridge.travel_mm + 1e-9:
        yield Finding(
            "bridge-travel-too-short",
            "warning",
            f"The strings ask for setbacks {used:.2f} mm apart; the bridge pieces travel "
            f"{bridge.travel_mm:.2f} mm. Slant the bridge, or take one with more travel.",
            amount=used - bridge.travel_mm,
            unit="mm",
        )


PART_CHECKS = (
    template_needs_square_frets,
    notches_too_close,
    nut_shift_large,
    nut_too_thin,
    bridge_travel,
)
"""Every check of this file, in the order its findings are printed."""
