import csv
from pathlib import Path

import numpy as np
import pytest

from layout.strings.phase import frequency_hz
from layout.strings.stopping import StringBody, StringLie, predict_stops, split_error
from layout.strings.support import CLAMPED, HINGED

TOLERANCE_CENTS = 0.003
ROWS = [
    {name: float(value) for name, value in row.items()}
    for row in csv.DictReader(
        line
        for line in (Path(__file__).parent / "decomposition.csv").read_text().splitlines()
        if not line.startswith("#")
    )
]
STEPS = np.array([row["stop"] for row in ROWS])
SCALE_MM, TENSION_N, UNIT_MASS = 650.0, 70.0, 4e-4


def parts(finger_behind_mm):
    bending = TENSION_N * (0.00236 * SCALE_MM / 1000.0) ** 2
    body = StringBody(np.array([UNIT_MASS]), np.array([51.0 * TENSION_N]), np.array([bending]))
    hz = frequency_hz(
        np.hypot(SCALE_MM, 4.0),
        tension_n=TENSION_N,
        unit_mass_kg_per_m=UNIT_MASS,
        bending_stiffness_n_m2=bending,
        fixity_1=0.0,
        fixity_2=1.0,
    )
    lie = StringLie(
        open_hz=hz,
        scale_mm=[SCALE_MM],
        height_at_nut_mm=[1.0],
        height_at_saddle_mm=[5.0],
        finger_behind_mm=finger_behind_mm,
        nut=HINGED,
        stop=HINGED,
        saddle=CLAMPED,
    )
    stopped = predict_stops(body, lie, SCALE_MM * (1.0 - 2.0 ** (-STEPS[None] / 12.0)))
    np.testing.assert_allclose(stopped.tension_open_n, TENSION_N, rtol=1e-12)
    return split_error(stopped, 100.0 * STEPS), stopped.cents - 100.0 * STEPS


@pytest.mark.parametrize("name", ["length", "mass", "tension", "stiffness"])
def test_each_part(name):
    found = getattr(parts(0.0)[0], name)[0]
    expected = [row[name] for row in ROWS]
    np.testing.assert_allclose(found, expected, rtol=0, atol=TOLERANCE_CENTS)


@pytest.mark.parametrize(("behind_mm", "name"), [(0.0, "total"), (10.0, "total_finger_10mm")])
def test_total(behind_mm, name):
    expected = [row[name] for row in ROWS]
    np.testing.assert_allclose(parts(behind_mm)[1][0], expected, rtol=0, atol=TOLERANCE_CENTS)


def test_the_whole_table_was_read():
    assert len(ROWS) == 7
