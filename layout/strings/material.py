"""How heavy and how stiff are the materials of strings, by the names a job file uses?

References
----------
Steel: density from the data sheet of spring wire to EN 10270-1; Young's modulus from R. W. Young,
J. Acoust. Soc. Am. 24 (1952) 267: E/rho = 2.55e7 m2/s2. Nylon and fluorocarbon: means of the plain
strings in Anderson and Beausoleil, J. Acoust. Soc. Am. 156 (2024) 683. Gut: a string
maker's formula, and J. Woodhouse and N. Lynch-Aird, Acta Acustica 105 (2019), second-hand.
Wraps: handbook values, from memory.

"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from types import MappingProxyType

from layout.errors import TextError

_MEMORY = "handbook value, from memory"


@dataclass(frozen=True, slots=True)
class Material:
    """A material by its job-file name, with where its figures come from.

    Attributes
    ----------
    density_kg_per_m3
        Density.
    youngs_modulus_pa
        Young's modulus; None for a wrap, which carries no tension.
    source
        Where the figures come from, and how far they may be off.

    """

    name: str
    density_kg_per_m3: float
    youngs_modulus_pa: float | None
    source: str


def _by_name(*materials: Material) -> Mapping[str, Material]:
    return MappingProxyType({material.name: material for material in materials})


PLAIN_MATERIALS = _by_name(
    Material("steel", 7850.0, 200e9, "EN 10270-1 data sheet; Young 1952"),
    Material(
        "nylon",
        1010.0,
        5.5e9,
        "Anderson and Beausoleil 2024, mean; 3.9 to 8.3 GPa with string and load",
    ),
    Material(
        "fluorocarbon",
        1610.0,
        8.9e9,
        "Anderson and Beausoleil 2024, mean; 5.6 to 13.4 GPa with string and load",
    ),
    Material("gut", 1300.0, 6.0e9, "a string maker's formula; Woodhouse and Lynch-Aird 2019"),
)
"""Materials of plain strings and of cores."""

WRAP_MATERIALS = _by_name(
    Material("phosphor bronze", 8830.0, None, _MEMORY),
    Material("bronze 80/20", 8800.0, None, _MEMORY),
    Material("brass", 8500.0, None, _MEMORY),
    Material("nickel", 8900.0, None, _MEMORY),
    Material("nickel-plated steel", 7850.0, None, _MEMORY),
    Material("stainless", 7900.0, None, _MEMORY),
    Material("silver-plated copper", 8960.0, None, _MEMORY),
    Material("silver", 10490.0, None, _MEMORY),
)
"""Materials wound round a core."""


def find_material(name: str) -> Material:
    """Find a material, plain or wrap, by its job-file name.

    Raises
    ------
    TextError
        When there is no material of that name.

    Examples
    --------
    >>> find_material("phosphor bronze").density_kg_per_m3
    8830.0

    """
    for table in (PLAIN_MATERIALS, WRAP_MATERIALS):
        if name in table:
            return table[name]
    names = ", ".join((*PLAIN_MATERIALS, *WRAP_MATERIALS))
    raise TextError(f"a string material is one of {names}")
