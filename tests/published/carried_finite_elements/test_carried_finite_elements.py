import csv
from pathlib import Path

import numpy as np
import pytest

from layout.strings.material import Material
from layout.strings.phase import frequency_hz
from layout.strings.section import plain_section
from layout.strings.support import Tail, fixity

STEEL = Material("steel of the table", 7850.0, 207e9, "carried_finite_elements.csv")
ROWS = [
    {name: float(value) for name, value in row.items()}
    for row in csv.DictReader(
        line
        for line in (Path(__file__).parent / "carried_finite_elements.csv").read_text().splitlines()
        if not line.startswith("#")
    )
]


@pytest.mark.parametrize("row", ROWS, ids=lambda row: "-".join(str(v) for v in row.values()))
def test_within_two_hundredths_of_a_cent(row):
    section = plain_section(row["diameter_mm"], STEEL)
    held = {
        "tension_n": row["tension_n"],
        "bending_stiffness_n_m2": section.bending_stiffness_n_m2,
    }
    found = frequency_hz(
        row["span_mm"],
        unit_mass_kg_per_m=section.unit_mass_kg_per_m,
        fixity_1=fixity(Tail(row["tail_1_mm"]), **held),
        fixity_2=fixity(Tail(row["tail_2_mm"]), **held),
        **held,
    )
    assert abs(1200.0 * np.log2(float(found) / row["hz"])) <= 0.02


def test_the_whole_table_was_read():
    assert len(ROWS) == 18
