import csv
from pathlib import Path

import numpy as np
import pytest

from layout.strings.balance import Balance, EndLines
from layout.strings.compensation import solve_compensation
from layout.strings.lie import StringLie
from layout.strings.stopping import StringBody

SETBACK_MM, NUT_SHIFT_MM, RMS_CENTS = 0.04, 0.01, 0.012
SCALE_MM = 650.0
OPEN_HZ = {
    note: 440.0 * 2.0 ** (semitones / 12.0)
    for note, semitones in {"E4": -5, "B3": -10, "G3": -14, "D3": -19, "A2": -24, "E2": -29}.items()
}
STEPS = np.arange(1, 13)


def read_rows():
    lines = (Path(__file__).parent / "nylon_setbacks.csv").read_text().splitlines()
    return list(csv.DictReader(line for line in lines if not line.startswith("#")))


@pytest.mark.parametrize("row", read_rows(), ids=lambda row: row["string"])
def test_setback_nut_shift_and_rms(row):
    tension = np.array([float(row["tension_n"])])
    bending = tension * (float(row["eps0"]) * SCALE_MM / 1000) ** 2
    body = StringBody(
        np.array([float(row["unit_mass_g_per_m"]) / 1000]), float(row["kappa"]) * tension, bending
    )
    lie = StringLie(
        open_hz=OPEN_HZ[row["string"].split()[2]],
        scale_mm=SCALE_MM,
        height_at_nut_mm=1.0,
        height_at_saddle_mm=5.0,
        finger_behind_mm=0.0,
    )
    found = solve_compensation(
        body,
        lie,
        balance=Balance(
            SCALE_MM * (1 - 2.0 ** (-STEPS[None] / 12)), 100.0 * STEPS[None], np.ones((1, 12))
        ),
        ends=EndLines(
            np.zeros((1, 2)), np.array([[SCALE_MM, 0.0]]), np.zeros(1, int), np.zeros(1, bool)
        ),
        nut="each",
        saddle="each",
    )
    assert abs(found.setback_mm[0] - float(row["setback_mm"])) < SETBACK_MM
    assert abs(found.nut_shift_mm[0] - float(row["nut_shift_mm"])) < NUT_SHIFT_MM
    assert abs(found.misfit.rms_cents - float(row["rms_cents"])) < RMS_CENTS


def test_every_printed_string_is_tried():
    assert len(read_rows()) == 12
