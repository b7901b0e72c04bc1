import csv
from pathlib import Path

import numpy as np
import pytest

from layout.strings.phase import frequency_hz

LINES = (Path(__file__).parent / "stiff_string_exact.csv").read_text().splitlines()
ROWS = list(csv.DictReader(line for line in LINES if not line.startswith("#")))
FIXITY = {"h": 0.0, "c": 1.0}


@pytest.mark.parametrize("row", ROWS, ids=lambda row: f"{row['eps']}-{row['ends']}")
@pytest.mark.parametrize("mode", [1, 2, 3, 5, 10])
def test_ratio_to_the_ideal_string(row, mode):
    length_mm, tension_n, unit_mass = 650.0, 70.0, 4e-4
    bending = tension_n * (float(row["eps"]) * length_mm / 1000.0) ** 2
    found = frequency_hz(
        length_mm,
        tension_n=tension_n,
        unit_mass_kg_per_m=unit_mass,
        bending_stiffness_n_m2=bending,
        fixity_1=FIXITY[row["ends"][0]],
        fixity_2=FIXITY[row["ends"][1]],
        mode=mode,
    )
    ideal = mode * np.sqrt(tension_n / unit_mass) / (2.0 * length_mm / 1000.0)
    assert abs(float(found / ideal) - float(row[f"m{mode}"])) <= 1e-8


def test_the_whole_table_was_read():
    assert len(ROWS) == 12
