import re
from math import isnan, log2, nan, pi

import pytest

from layout.strings.material import find_material
from layout.strings.section import (
    axial_stiffness_from_stretch,
    estimate_steel_core_mm,
    plain_section,
    section_from_tension,
    wound_section,
)

STEEL, BRONZE = find_material("steel"), find_material("phosphor bronze")


def test_plain_section_of_a_millimetre_of_steel():
    found = plain_section(1.0, STEEL)
    assert found.unit_mass_kg_per_m == pytest.approx(7850 * pi / 4e6, rel=1e-14)
    assert found.axial_stiffness_n == pytest.approx(200e9 * pi / 4e6, rel=1e-14)
    assert found.bending_stiffness_n_m2 == pytest.approx(200e9 * pi / 64e12, rel=1e-14)


def test_wrap_is_the_mass_of_its_helix():
    # Wire of 0.4 mm round a core of 0.4 mm: pi (c + w)/w = 2 pi of wire on each unit of string.
    wire = BRONZE.density_kg_per_m3 * pi / 4.0 * 0.4e-3**2
    core = plain_section(0.4, STEEL)
    found = wound_section(1.2, 0.4, core=STEEL, wrap=BRONZE)
    assert found.unit_mass_kg_per_m - core.unit_mass_kg_per_m == pytest.approx(
        2.0 * pi * wire, rel=1e-12
    )
    assert found.axial_stiffness_n == core.axial_stiffness_n
    assert found.bending_stiffness_n_m2 == core.bending_stiffness_n_m2


def test_estimated_core():
    assert estimate_steel_core_mm(1.0) == pytest.approx(0.388)


def test_section_from_tension_is_the_published_rule():
    found = section_from_tension(70.0, 650.0, hz=110.0, gauge_mm=0.9)
    assert found.unit_mass_kg_per_m == pytest.approx(70.0 / (2 * 0.65 * 110.0) ** 2, rel=1e-14)
    assert found.axial_stiffness_n == 3500.0
    assert found.bending_stiffness_n_m2 == pytest.approx(3500.0 * 0.9e-3**2 / 16.0, rel=1e-14)
    assert isnan(section_from_tension(70.0, 650.0, hz=110.0, gauge_mm=nan).bending_stiffness_n_m2)


def test_stretch_gives_back_the_stiffness_that_made_it():
    tension, axial, stretch = 68.6, 3306.0, 1.2 / 650.0
    ratio = (tension + axial * stretch) / tension * (1.0 + stretch)
    found = axial_stiffness_from_stretch(tension, 600.0 * log2(ratio), by_mm=1.2, length_mm=650.0)
    assert found == pytest.approx(axial, rel=1e-11)


@pytest.mark.parametrize(
    ("call", "message"),
    [
        (lambda: plain_section(0.0, STEEL), "a gauge is above 0 mm; 0.0 is not"),
        (lambda: plain_section(nan, STEEL), "a gauge is above 0 mm; nan is not"),
        (lambda: plain_section(1.0, BRONZE), "phosphor bronze is a wrap: it carries no tension"),
        (
            lambda: wound_section(0.5, 0.5, core=STEEL, wrap=BRONZE),
            "a core is thinner than its string; 0.5 mm in 0.5 mm is not",
        ),
        (
            lambda: axial_stiffness_from_stretch(70.0, 10.0, by_mm=0.0, length_mm=650.0),
            "a stretch test draws more than 0 over more than 0: 0.0, 650.0",
        ),
    ],
)
def test_what_is_refused(call, message):
    with pytest.raises(ValueError, match=f"^{re.escape(message)}$"):
        call()
