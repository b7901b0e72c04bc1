"""How are errors, choices and clash written for a maker to weigh?"""

from __future__ import annotations

from collections.abc import Sequence

from layout.files.columns import align, figure, signed
from layout.plan.model import Plan, Rung, Worst

FRETS_PER_BLOCK = 12
"""Columns of the error table before it wraps."""


def write_pitch(plan: Plan) -> list[str]:
    """Write the sections that concern pitch; empty ones are left out."""
    sections = [_errors(plan), _ladder(plan), _clash(plan)]
    return [section for section in sections if section]


def _errors(plan: Plan) -> str:
    pitch = plan.pitch
    if pitch is None:
        return ""
    labels = plan.instrument.frets.labels
    name = plan.instrument.frets.temperament.name
    text = f"ERRORS in cents against {name}, sharp positive, as planned"
    for start in range(0, len(labels), FRETS_PER_BLOCK):
        block = slice(start, start + FRETS_PER_BLOCK)
        rows = [
            [str(index + 1), *(signed(value, 1) for value in row[block])]
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
    chosen = plan.instrument.compensation
    nut, saddle = (
        rule if isinstance(rule, str) else "listed" for rule in (chosen.nut, chosen.saddle)
    )
    rows = []
    for rung in plan.pitch.ladder:
        left = abs(rung.rms_cents - plan.pitch.rms_cents)
        own = (rung.nut, rung.saddle) == (nut, saddle) and left < 1e-9
        rows.append(_rung(rung, own=own))
    if not any(row[-1] for row in rows):
        planned = Rung(nut, saddle, plan.pitch.rms_cents, abs(plan.pitch.worst.cents))
        rows.append(_rung(planned, own=True))
    return "CHOICES of nut and saddle, error left in cents\n" + align(
        ["nut", "saddle", "rms", "worst", ""], rows, left=2
    )


def _rung(rung: Rung, *, own: bool) -> list[str]:
    mark = "<- this plan" if own else ""
    return [rung.nut, rung.saddle, figure(rung.rms_cents, 2), figure(rung.worst_cents, 2), mark]


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
