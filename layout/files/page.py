"""How is a plan written as the page a maker reads?"""

from __future__ import annotations

import math

import numpy as np

from layout.files.columns import align, figure, signed
from layout.files.pitch_page import write_pitch
from layout.files.plan_json import along_lane_mm
from layout.files.wood_page import write_wood
from layout.findings import Finding
from layout.instrument import MultiScale
from layout.plan.laying import outer_strings
from layout.plan.leaving import measure_left
from layout.plan.model import Plan
from layout.units import MM_PER_INCH, NEWTON_PER_POUND_FORCE, write_sixty_fourths

MOST_ALIKE = 3
"""Findings of one kind that are told one by one."""

LEAST_MISS_MM = 0.0005
"""Smaller misses vanish in the last printed digit."""

STRAIGHT_MM = 0.005
"""Crown points closer to a line than this are said to lie on it."""

CAUTIONS = (
    "Strings under load break and whip: wear eye protection; a computed load is never a promise.",
    "Cutters are sharp and fly; wood dust harms, rosewood and ebony above all; so do laser fumes.",
    "Measure this batch of wire, and cut nut and saddle last, after the action is set.",
    "Try on scrap before you cut the blank. Local rules and the machine maker's word come first.",
)


def render_page(plan: Plan, *, inch: bool = False) -> str:
    """Write the whole page as text; ``inch`` adds decimal inch and the nearest 1/64."""
    parts = [
        _heading(plan),
        _strings(plan),
        _nut_and_saddle(plan),
        _frets(plan, inch=inch),
        *write_wood(plan),
        *write_pitch(plan),
        _assumed(plan),
        _findings(plan),
        "CAUTIONS\n" + "\n".join(f"  - {caution}" for caution in CAUTIONS),
    ]
    return "\n\n".join(part for part in parts if part) + "\n"


def write_finding(finding: Finding) -> str:
    """Write one finding as a line: severity, code, words."""
    return f"{finding.severity:<7} {finding.code}: {finding.text}"


def _heading(plan: Plan) -> str:
    job = plan.instrument
    strings, frets = len(job.strings), job.frets.count
    lines = [
        job.title,
        (
            f"{_count(strings, 'string')}, {_count(frets, 'fret')}, temperament "
            f"{job.frets.temperament.name}, {job.hand}-handed"
        ),
    ]
    if job.hand == "left":
        lines.append("Left-handed: drawings are mirrored, numbers are not")
    if isinstance(job.scale, MultiScale):
        at = job.scale.square_at
        place = f"fret {at:g}" if isinstance(at, (int, float)) else f"the {at}"
        lines.append(
            f"Scale: {job.scale.treble_mm:.2f} mm treble, {job.scale.bass_mm:.2f} mm bass, the "
            f"lengths of the outer strings that are divided; square to the centre line at {place}"
        )
    else:
        lines.append(
            f"Scale: {job.scale.length_mm:.2f} mm, the length from nut line to bridge line that "
            "is divided"
        )
    zero = {
        "edge": "the face of the nut",
        "kerf": "the middle of the saw line at the nut end; the face stands half a kerf on",
        "fret": "the crown of the zero fret",
    }[job.nut.zero]
    lines.append(f"Zero: {zero}, where it crosses the centre line. All places are from zero, in mm")
    return "\n".join(lines)


def _count(number: int, what: str) -> str:
    return f"{number} {what}" if number == 1 else f"{number} {what}s"


def _strings(plan: Plan) -> str:
    header = ["string", "note", "gauge", "scale", "speaking", "at nut", "at saddle", "tension",
              "", "of break"]  # fmt: skip
    units = ["", "", "mm", "mm", "mm", "mm", "mm", "N", "lb", ""]
    rows = [units]
    loads = plan.loads
    for index, string in enumerate(plan.instrument.strings):
        tension = loads.tension_n[index]
        rows.append(
            [
                str(index + 1),
                f"{loads.hz[index]:.2f} Hz" if string.note is None else str(string.note),
                figure(string.gauge_mm, 3),
                figure(plan.strings.scale_mm[index], 3),
                figure(plan.speaking_mm[index], 3),
                figure(plan.height_at_nut_mm[index], 2),
                figure(plan.height_at_saddle_mm[index], 2),
                figure(tension, 1),
                figure(tension / NEWTON_PER_POUND_FORCE, 2),
                figure(loads.share_of_break[index], 2),
            ]
        )
    text = "STRINGS (heights are over the plane of the crowns; string 1 is outermost treble)\n"
    text += align(header, rows, left=2)
    total = loads.total_n
    if total is not None:
        text += (
            f"\n  Pull of all strings on the neck: {total:.1f} N "
            f"({total / NEWTON_PER_POUND_FORCE:.1f} lb)"
        )
    crown = plan.instrument.wire.crown_height_mm
    if crown is not None and plan.instrument.heights is not None:
        text += f"\n  Over the board's own plane add the crown height, {crown:.2f} mm"
    return text


def _nut_and_saddle(plan: Plan) -> str:
    ends, fit = plan.ends, plan.instrument.nut.fit
    both = {"file back": ends.file_back_mm, "reaches over": ends.overhang_mm}
    usual = "file back" if fit == "trim" else "reaches over"
    columns = [name for name, amounts in both.items() if name == usual or amounts.any()]
    rows = [
        [
            str(index + 1),
            signed(ends.nut_shift_mm[index], 3),
            *(figure(both[name][index], 3) for name in columns),
            signed(ends.setback_mm[index], 3),
        ]
        for index in range(len(plan.instrument.strings))
    ]
    shifted = any(amounts.any() for amounts in both.values())
    text = "NUT AND SADDLE, mm along each string (nut shift + toward the saddle, setback + away)\n"
    text += align(["string", "nut shift", *columns, "setback"], rows)
    text += f"\n  {_nut_end(plan, shifted=shifted)}"
    strip = ends.strip
    if strip is not None and np.any(ends.setback_mm) and strip.width_mm < STRAIGHT_MM:
        text += (
            f"\n  The saddle's crown points lie on one straight line, crossing the centre line at "
            f"{strip.at_centre_mm:.2f} mm, {math.degrees(strip.slant):+.2f} degrees off square "
            "(+: treble end further from the nut)"
        )
    elif strip is not None and np.any(ends.setback_mm):
        text += (
            f"\n  Narrowest saddle strip holding every crown point: {strip.width_mm:.2f} mm wide, "
            f"crossing the centre line at {strip.at_centre_mm:.2f} mm, "
            f"{math.degrees(strip.slant):+.2f} degrees off square (+: treble end further from the "
            "nut)"
        )
    if plan.instrument.bridge.kind == "loose":
        first, last = outer_strings(plan.instrument)
        text += (
            f"\n  The bridge is loose: it stands {ends.saddle_mm[first, 0]:.2f} mm from zero at "
            f"the treble and {ends.saddle_mm[last, 0]:.2f} mm at the bass string"
        )
    return text


def _nut_end(plan: Plan, *, shifted: bool) -> str:
    """Say where the board ends, and how the nut shifts are brought about."""
    nut, face = plan.instrument.nut, plan.ends.face_mm
    if nut.zero == "fret":
        return (
            "The zero fret stands on zero; the board runs on to "
            f"{plan.board.nut_end.at_centre_mm:.3f} mm, behind the nut."
        )
    if not shifted:
        return f"The nut is straight: the board ends at {face:.3f} mm, under every string's edge."
    if nut.fit == "trim":
        return (
            f"By trim: the board ends at {face:.3f} mm, the largest shift; every other string's "
            "edge of the nut is filed back from that face."
        )
    return (
        f"By overhang: the board ends at {face:.3f} mm; the strings' edges of the nut reach over "
        "it, or are filed back where the shift is smaller."
    )


def _frets(plan: Plan, *, inch: bool) -> str:
    header = ["fret", "centre", "treble string", "bass string", "slot from", "slot to"]
    if isinstance(plan.instrument.scale, MultiScale):
        header.append("angle*")
    if inch:
        header += ["inch", "nearest 1/64", "left over mm"]
    header.append("step (check only)")
    first, last = outer_strings(plan.instrument)
    points = plan.strings.points(plan.frets.met_mm)
    rows, before = [], 0.0
    if plan.zero_fret is not None:
        half = plan.cut.finished_mm / (2 * math.cos(plan.strings.nut_line.angle))
        zero = ["0", *[figure(0.0, 3)] * 3, figure(-half, 3), figure(half, 3)]
        rows.append([*zero, *[""] * (len(header) - len(zero))])
    for index, label in enumerate(plan.instrument.frets.labels):
        line = plan.frets.line(index + 1)
        at = line.at_centre_mm
        half = plan.cut.finished_mm / (2 * math.cos(line.angle))
        row = [
            label,
            figure(at, 3),
            figure(along_lane_mm(plan, first, points[first, index]), 3),
            figure(along_lane_mm(plan, last, points[last, index]), 3),
            figure(at - half, 3),
            figure(at + half, 3),
        ]
        if isinstance(plan.instrument.scale, MultiScale):
            row.append(signed(math.degrees(line.angle), 3))
        if inch:
            nearest, rest = write_sixty_fourths(at)
            row += [f"{at / MM_PER_INCH:.4f}", nearest, signed(rest, 3)]
        rows.append([*row, figure(at - before, 3)])
        before = at
    slanted = isinstance(plan.instrument.scale, MultiScale)
    return (
        "FRETS, mm from zero: mark each from zero, never from the fret before; slot edges on the "
        f"centre line, {plan.cut.finished_mm:.3f} mm wide as cut\n"
        + align(header, rows)
        + ("\n  *degrees off square, + when the treble end is nearer the bridge" if slanted else "")
        + _left(plan)
    )


def _left(plan: Plan) -> str:
    """Say the most that a straight fret misses a string's own stop by."""
    left = measure_left(plan)
    miss = np.where(np.isfinite(left.mm), np.abs(left.mm), 0.0)
    string, fret = np.unravel_index(int(np.argmax(miss)), miss.shape)
    if miss[string, fret] < LEAST_MISS_MM:
        return "\n  Every fret passes through every string's own stop"
    label = plan.instrument.frets.labels[fret]
    return (
        f"\n  Straight frets miss the strings' own stops by {miss[string, fret]:.3f} mm at most "
        f"({left.cents[string, fret]:+.2f} cents, string {string + 1} at fret {label})"
    )


def _assumed(plan: Plan) -> str:
    if not plan.assumed:
        return ""
    rows = [[item.key, item.value] for item in plan.assumed]
    return "ASSUMED, because the job does not say\n" + align(["key", "value"], rows, left=2)


def _findings(plan: Plan) -> str:
    """Write every finding; many of one kind are told once, by the largest, with their frets."""
    if not plan.findings:
        return "FINDINGS\n  none"
    lines = []
    kinds = dict.fromkeys((finding.code, finding.severity) for finding in plan.findings)
    for code, severity in kinds:
        alike = [f for f in plan.findings if (f.code, f.severity) == (code, severity)]
        frets = [f.fret for f in alike if f.fret is not None]
        if len(alike) <= MOST_ALIKE or len(frets) < len(alike):
            lines += [f"  {write_finding(finding)}" for finding in alike]
            continue
        largest = max(alike, key=lambda finding: abs(finding.amount or 0.0))
        labels = [plan.instrument.frets.labels[fret - 1] for fret in dict.fromkeys(frets)]
        lines.append(f"  {write_finding(largest)} The same at frets {', '.join(labels)}.")
    return "FINDINGS\n" + "\n".join(lines)
