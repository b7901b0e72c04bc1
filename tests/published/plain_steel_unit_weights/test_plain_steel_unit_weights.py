import csv
from pathlib import Path

import numpy as np
import pytest

from layout.strings.material import Material, find_material
from layout.strings.section import plain_section, wound_section
from layout.strings.stopping import StringBody
from layout.strings.support import CARRIED
from layout.strings.tuning import solve_open_tension_n
from layout.units import MM_PER_INCH, NEWTON_PER_POUND_FORCE

KG_PER_M_OF_LB_PER_IN = 0.45359237 / 0.0254
CHART_STEEL = Material("steel of the chart", 7806.0, 200e9, "implied by the chart")
ROWS = [
    (float(row["diameter_in"]), float(row["weight_1e-5_lb_per_in"]))
    for row in csv.DictReader(
        line
        for line in (
            (Path(__file__).parent / "plain_steel_unit_weights.csv").read_text().splitlines()
        )
        if not line.startswith("#")
    )
]


@pytest.mark.parametrize(
    ("material", "share"),
    [(CHART_STEEL, 0.001), (find_material("steel"), 0.0065)],
    ids=["chart density", "data-sheet density"],
)
@pytest.mark.parametrize(("diameter_in", "weight"), ROWS)
def test_unit_weight(diameter_in, weight, material, share):
    found = plain_section(diameter_in * MM_PER_INCH, material).unit_mass_kg_per_m
    assert found == pytest.approx(weight * 1e-5 * KG_PER_M_OF_LB_PER_IN, rel=share)


def test_the_whole_table_was_read():
    assert len(ROWS) == 14


def test_tension_of_the_ten_thousandths_string():
    body = StringBody(np.array([0.39555e-3]), np.array([1e4]), np.array([0.0]))
    hz = 440.0 * 2.0 ** (-5.0 / 12.0)
    newton = solve_open_tension_n(body, hz, 647.7, nut=CARRIED, saddle=CARRIED)
    assert newton == pytest.approx([72.12], abs=0.005)
    assert newton / NEWTON_PER_POUND_FORCE == pytest.approx([16.213], abs=0.0005)
    # The chart's own 16.2003 lb comes of its rounded 386.4 in/s2 for standard gravity.
    rounded = newton / NEWTON_PER_POUND_FORCE * (9.80665 / 0.0254) / 386.4
    assert rounded == pytest.approx([16.2003], abs=0.0005)


def test_wound_string_of_the_chart():
    steel = find_material("steel")
    wrap = find_material("nickel-plated steel")
    section = wound_section(0.046 * MM_PER_INCH, 0.016 * MM_PER_INCH, core=steel, wrap=wrap)
    assert section.unit_mass_kg_per_m == pytest.approx(6.825e-3, rel=0.01)
