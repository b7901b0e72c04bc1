"""How is a plan written as the page a maker reads?"""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np

from layout.files.columns import align
from layout.files.plan_json import along_lane_mm
from layout.findings import Finding
from layout.instrument import MultiScale
from layout.plan.laying import outer_strings
from layout.plan.model import Plan, Worst
from layout.units import MM_PER_INCH, NEWTON_PER_POUND_FORCE, write_sixty_fourths

FRETS_PER_BLOCK = 12
"""Columns of the error table before it wraps."""

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
        _errors(plan),
        _ladder(plan),
        _clash(plan),
        _assumed(plan),
        _findings(plan.findings),
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
                _figure(string.gauge_mm, 3),
                _figure(plan.strings.scale_mm[index], 3),
                _figure(plan.speaking_mm[index], 3),
                _figure(plan.height_at_nut_mm[index], 2),
                _figure(plan.height_at_saddle_mm[index], 2),
                _figure(tension, 1),
                _figure(tension / NEWTON_PER_POUND_FORCE, 2),
                _figure(loads.share_of_break[index], 2),
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
    column = "file back" if fit == "trim" else "reaches over"
    amounts = ends.file_back_mm if fit == "trim" else ends.overhang_mm
    rows = [
        [str(index + 1), _signed(ends.nut_shift_mm[index], 3), _figure(amounts[index], 3),
         _signed(ends.setback_mm[index], 3)]
        for index in range(len(plan.instrument.strings))
    ]  # fmt: skip
    text = "NUT AND SADDLE, mm along each string (nut shift + toward the saddle, setback + away)\n"
    text += align(["string", "nut shift", column, "setback"], rows)
    text += f"\n  {_nut_end(plan, shifted=bool(np.any(amounts)))}"
    strip = ends.strip
    if strip is not None and np.any(ends.setback_mm):
        text += (
            f"\n  Narrowest saddle strip holding every crown point: {strip.width_mm:.2f} mm wide, "
            f"crossing the centre line at {strip.at_centre_mm:.2f} mm, "
            f"{math.degrees(strip.slant):+.2f} degrees off square"
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
        f"By overhang: the board ends at {face:.3f} mm and the strings' edges of the nut reach "
        "over it."
    )


def _frets(plan: Plan, *, inch: bool) -> str:
    header = ["fret", "centre", "treble string", "bass string", "slot from", "slot to"]
    if isinstance(plan.instrument.scale, MultiScale):
        header.append("angle")
    if inch:
        header += ["inch", "nearest 1/64", "left over mm"]
    header.append("step (check only)")
    first, last = outer_strings(plan.instrument)
    points = plan.strings.points(plan.frets.met_mm)
    rows, before = [], 0.0
    for index, label in enumerate(plan.instrument.frets.labels):
        line = plan.frets.line(index + 1)
        at = line.at_centre_mm
        half = plan.cut.finished_mm / (2 * math.cos(line.angle))
        row = [
            label,
            _figure(at, 3),
            _figure(along_lane_mm(plan, first, points[first, index]), 3),
            _figure(along_lane_mm(plan, last, points[last, index]), 3),
            _figure(at - half, 3),
            _figure(at + half, 3),
        ]
        if isinstance(plan.instrument.scale, MultiScale):
            row.append(_signed(math.degrees(line.angle), 3))
        if inch:
            nearest, rest = write_sixty_fourths(at)
            row += [f"{at / MM_PER_INCH:.4f}", nearest, _signed(rest, 3)]
        rows.append([*row, _figure(at - before, 3)])
        before = at
    return (
        "FRETS, mm from zero: mark each from zero, never from the fret before; slot edges on the "
        f"centre line, {plan.cut.finished_mm:.3f} mm wide as cut\n" + align(header, rows)
    )


def _errors(plan: Plan) -> str:
    pitch = plan.pitch
    if pitch is None:
        return ""
    labels = plan.instrument.frets.labels
    text = "ERRORS in cents, sharp positive, as planned"
    for start in range(0, len(labels), FRETS_PER_BLOCK):
        block = slice(start, start + FRETS_PER_BLOCK)
        rows = [
            [str(index + 1), *(_signed(value, 1) for value in row[block])]
            for index, row in enumerate(pitch.error_cents)
        ]
        text += "\n" + align(["string", *labels[block]], rows)
    compensation = plan.instrument.compensation
    first, last = (labels[n - 1] for n in (compensation.first_fret, compensation.last_fret))
    text += (
        f"\n  Over frets {first} to {last}: rms {pitch.rms_cents:.2f}, worst "
        f"{_worst(pitch.worst, labels)}"
        f"\n  Over every fret: rms {pitch.rms_all_cents:.2f}, worst "
        f"{_worst(pitch.worst_all, labels)}"
        "\n  Left out: resonance of body and neck (several cents on some notes), roundness of the"
        "\n  crown (under 0.5), loudness (2 to 6, decays), warmth (-1 to -3 a kelvin until retuned)"
    )
    return text


def _worst(worst: Worst, labels: Sequence[str]) -> str:
    return f"{worst.cents:+.2f} on string {worst.string} at fret {labels[worst.fret - 1]}"


def _ladder(plan: Plan) -> str:
    if plan.pitch is None:
        return ""
    rows = [
        [rung.nut, rung.saddle, f"{rung.rms_cents:.2f}", f"{rung.worst_cents:.2f}", ""]
        for rung in plan.pitch.ladder
    ]
    chosen = plan.instrument.compensation
    rows.append(
        [
            chosen.nut if isinstance(chosen.nut, str) else "as listed",
            chosen.saddle if isinstance(chosen.saddle, str) else "as listed",
            f"{plan.pitch.rms_cents:.2f}",
            f"{abs(plan.pitch.worst.cents):.2f}",
            "<- this plan",
        ]
    )
    return "CHOICES of nut and saddle, error left in cents\n" + align(
        ["nut", "saddle", "rms", "worst", ""], rows, left=2
    )


def _clash(plan: Plan) -> str:
    heard = [clash for clash in plan.clash if clash.spread_cents > 1e-6]
    if not heard:
        return ""
    labels = plan.instrument.frets.labels
    rows = [
        [labels[clash.fret - 1], f"{clash.spread_cents:.2f}", f"{clash.spread_mm:.2f}"]
        for clash in heard
    ]
    return (
        "CLASH: how far the strings disagree about a straight fret, before compensation\n"
        + align(["fret", "cents", "mm"], rows)
    )


def _assumed(plan: Plan) -> str:
    if not plan.assumed:
        return ""
    rows = [[item.key, item.value] for item in plan.assumed]
    return "ASSUMED, because the job does not say\n" + align(["key", "value"], rows, left=2)


def _findings(findings: Sequence[Finding]) -> str:
    if not findings:
        return "FINDINGS\n  none"
    return "FINDINGS\n" + "\n".join(f"  {write_finding(finding)}" for finding in findings)


def _figure(value: float | None, digits: int) -> str:
    return "-" if value is None or math.isnan(value) else f"{value:.{digits}f}"


def _signed(value: float, digits: int) -> str:
    if math.isnan(value):
        return "-"
    text = f"{value:+.{digits}f}"
    return text if text.strip("+-0.") else text.lstrip("+-")
