import pytest

from layout.errors import TextError
from layout.strings.material import PLAIN_MATERIALS, WRAP_MATERIALS, find_material


def test_steel_has_the_ratio_of_youngs_paper():
    steel = find_material("steel")
    assert steel.youngs_modulus_pa / steel.density_kg_per_m3 == pytest.approx(2.55e7, rel=0.002)


def test_only_plain_materials_have_a_modulus():
    assert all(m.youngs_modulus_pa for m in PLAIN_MATERIALS.values())
    assert all(m.youngs_modulus_pa is None for m in WRAP_MATERIALS.values())
    assert not PLAIN_MATERIALS.keys() & WRAP_MATERIALS.keys()


def test_every_material_says_where_it_comes_from():
    tables = [*PLAIN_MATERIALS.items(), *WRAP_MATERIALS.items()]
    assert all(name == material.name and material.source for name, material in tables)


def test_unknown_material_lists_the_known_ones():
    with pytest.raises(TextError) as caught:
        find_material("copper")
    assert str(caught.value) == (
        "a string material is one of steel, nylon, fluorocarbon, gut, phosphor bronze, "
        "bronze 80/20, brass, nickel, nickel-plated steel, stainless, silver-plated copper, silver"
    )
