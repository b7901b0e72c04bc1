import csv
from pathlib import Path

import numpy as np
import pytest

from layout.strings.stopping import StringBody, StringLie, predict_stops
from layout.strings.support import CLAMPED

BESIDE_BAND_CENTS = 0.3
OPEN_HZ = {
    note: 440.0 * 2.0 ** (semitones / 12.0)
    for note, semitones in {"E4": -5, "B3": -10, "G3": -14, "D3": -19, "A2": -24, "E2": -29}.items()
}
SCALE_MM, CHART_SCALE_M = 652.0, 0.650


def read(name):
    lines = (Path(__file__).parent / name).read_text().splitlines()
    return list(csv.DictReader(line for line in lines if not line.startswith("#")))


def normal_set():
    rows = {row["string"].split()[2]: row for row in read("nylon_setbacks.csv")[:6]}
    tension = np.array([float(rows[note]["tension_n"]) for note in OPEN_HZ])
    stretch_number = np.array([float(rows[note]["kappa"]) for note in OPEN_HZ])
    bending_share = np.array([float(rows[note]["eps0"]) for note in OPEN_HZ])
    return StringBody(
        np.array([float(rows[note]["unit_mass_g_per_m"]) / 1000.0 for note in OPEN_HZ]),
        stretch_number * tension,
        tension * (bending_share * CHART_SCALE_M) ** 2,
    )


def sharpness(ends):
    lie = StringLie(
        open_hz=list(OPEN_HZ.values()),
        scale_mm=SCALE_MM,
        height_at_nut_mm=1.4,
        height_at_saddle_mm=6.9,
        finger_behind_mm=10.0,
        **ends,
    )
    steps = np.array([1.0, 12.0])
    stops_mm = np.broadcast_to(SCALE_MM * (1.0 - 2.0 ** (-steps / 12.0)), (6, 2))
    return predict_stops(normal_set(), lie, stops_mm, setback_mm=-3.5).cents - 100.0 * steps


@pytest.mark.parametrize("row", read("measured_guitar.csv"), ids=lambda r: r["string"] + r["stop"])
def test_within_the_measured_band(row):
    found = sharpness({})[list(OPEN_HZ).index(row["string"]), ["1", "12"].index(row["stop"])]
    assert float(row["low_cents"]) - BESIDE_BAND_CENTS <= found
    assert found <= float(row["high_cents"]) + BESIDE_BAND_CENTS


def test_clamped_at_both_ends_overshoots():
    rows = read("measured_guitar.csv")
    assert len(rows) == 12
    clamped = sharpness({"nut": CLAMPED, "stop": CLAMPED, "saddle": CLAMPED})[:, 1]
    high = [float(row["high_cents"]) for row in rows if row["stop"] == "12"]
    assert (clamped > np.array(high) + BESIDE_BAND_CENTS).all()


def test_unit_mass_of_the_chart_tunes_to_its_tension():
    lie_hz = np.array(list(OPEN_HZ.values()))
    rows = read("nylon_setbacks.csv")[:6]
    tension = np.array([float(row["tension_n"]) for row in rows])
    mass = np.array([float(row["unit_mass_g_per_m"]) for row in rows]) / 1000.0
    np.testing.assert_allclose(mass * (2.0 * CHART_SCALE_M * lie_hz) ** 2, tension, rtol=2e-3)
