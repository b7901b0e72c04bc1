"""What do gauge and material say of a string: its mass per length and its two stiffnesses?

References
----------
Steel wire wound closely: the length of wrap wire on a length of string is ``pi (c + w)/w`` for a
core c and a wrap w, because the tilt of the helix and its longer pitch cancel. Anderson and
Beausoleil, J. Acoust. Soc. Am. 156 (2024) 683: bending stiffness from axial stiffness.

"""

from __future__ import annotations

from dataclasses import dataclass
from math import isfinite, pi

from layout.strings.material import Material

MM_PER_M = 1000.0

STEEL_CORE_BASE_MM = 0.24
"""With the next figure: an estimate from a few sets of wound strings; no more than that."""
STEEL_CORE_SHARE = 0.148

AXIAL_STIFFNESS_PER_TENSION = 50.0
"""EA/T of a string of which only the tension is known; 45 to 59 in Anderson and Beausoleil."""


@dataclass(frozen=True, slots=True)
class Section:
    """A string's mass per length (kg/m), axial stiffness EA (N), bending stiffness EI (N m2)."""

    unit_mass_kg_per_m: float
    axial_stiffness_n: float
    bending_stiffness_n_m2: float


def plain_section(gauge_mm: float, material: Material) -> Section:
    """Return the section of a round plain string of one material.

    Raises
    ------
    ValueError
        When the gauge is not above 0, or the material has no modulus.

    Notes
    -----
    Legend: d diameter (m), rho density, E Young's modulus. ``mu = rho pi d^2/4``,
    ``EA = E pi d^2/4``, ``EI = E pi d^4/64``.

    Examples
    --------
    >>> from layout.strings.material import find_material
    >>> section = plain_section(0.3048, find_material("steel"))
    >>> round(section.unit_mass_kg_per_m * 1000, 4), round(section.axial_stiffness_n)
    (0.5728, 14593)

    """
    d = _checked_diameter_m(gauge_mm, "a gauge")
    area = pi * d * d / 4.0
    modulus = _modulus_pa(material)
    return Section(material.density_kg_per_m3 * area, modulus * area, modulus * area * d * d / 16.0)


def wound_section(gauge_mm: float, core_mm: float, *, core: Material, wrap: Material) -> Section:
    """Return the section of a round core closely wound with round wire.

    Parameters
    ----------
    gauge_mm
        Diameter over the winding, mm.
    core_mm
        Diameter of the core, mm.
    core, wrap
        Materials; the core alone carries tension and bending.

    Raises
    ------
    ValueError
        When the core is not thinner than the string, or not above 0.

    Notes
    -----
    Legend: d over all, c core, w = (d - c)/2 wrap (m).
    ``mu = (pi/4) rho_c c^2 + (pi^2/4) rho_w w (c + w)``; EA and EI are the core's. The wrap's
    share of the bending stiffness is left out.

    Examples
    --------
    >>> from layout.strings.material import find_material
    >>> bronze = find_material("phosphor bronze")
    >>> section = wound_section(1.3462, 0.4318, core=find_material("steel"), wrap=bronze)
    >>> round(section.unit_mass_kg_per_m * 1000, 3)
    10.005

    """
    d, c = _checked_diameter_m(gauge_mm, "a gauge"), _checked_diameter_m(core_mm, "a core")
    if not c < d:
        raise ValueError(f"a core is thinner than its string; {core_mm} mm in {gauge_mm} mm is not")
    w = (d - c) / 2.0
    alone = plain_section(core_mm, core)
    winding = pi * pi / 4.0 * wrap.density_kg_per_m3 * w * (c + w)
    return Section(
        alone.unit_mass_kg_per_m + winding, alone.axial_stiffness_n, alone.bending_stiffness_n_m2
    )


def estimate_steel_core_mm(gauge_mm: float) -> float:
    """Estimate the diameter in mm of the steel core of a wound string.

    An estimate from a few sets; whoever uses it lists it among what was assumed.

    Examples
    --------
    >>> round(estimate_steel_core_mm(1.3462), 3)
    0.439

    """
    return STEEL_CORE_BASE_MM + STEEL_CORE_SHARE * gauge_mm


def section_from_tension(
    tension_n: float, length_mm: float, *, hz: float, gauge_mm: float
) -> Section:
    """Return the section of a string whose tension is stated for a length and a note.

    Parameters
    ----------
    tension_n, length_mm, hz
        The statement: that tension tunes that length to that frequency.
    gauge_mm
        Outer diameter; nan leaves the bending stiffness unknown (nan).

    Notes
    -----
    ``mu = T/(2 L f)^2``, ``EA = 50 T``, ``EI = EA d^2/16``: the published rule; direct
    measurements of bending give about a third of it.

    Examples
    --------
    >>> section = section_from_tension(72.12, 647.7, hz=329.6276, gauge_mm=0.254)
    >>> round(section.unit_mass_kg_per_m * 1000, 4), section.axial_stiffness_n
    (0.3955, 3606.0)

    """
    wave_speed = 2.0 * length_mm / MM_PER_M * hz
    axial = AXIAL_STIFFNESS_PER_TENSION * tension_n
    gauge_m = gauge_mm / MM_PER_M
    return Section(tension_n / (wave_speed * wave_speed), axial, axial * gauge_m * gauge_m / 16.0)


def axial_stiffness_from_stretch(
    tension_n: float, rise_cents: float, *, by_mm: float, length_mm: float
) -> float:
    """Return the axial stiffness EA in newton that a stretch test shows.

    Parameters
    ----------
    tension_n
        Tension of the tuned string before the test.
    rise_cents
        How much the pitch rose, at a fixed sounding length.
    by_mm, length_mm
        How much further the end was drawn, over what whole length.

    Raises
    ------
    ValueError
        When nothing was drawn, or over no length.

    Notes
    -----
    Legend: Q stretch. ``EA = T_0 (2^(r/600)/(1 + Q) - 1)/Q``: the mass per length falls with the
    stretch. Stiffness of bending is left out: under 1 % of the rise.

    Examples
    --------
    >>> round(axial_stiffness_from_stretch(70.0, 42.0, by_mm=0.7, length_mm=650.0))
    3158

    """
    if not (by_mm > 0.0 and length_mm > 0.0):
        raise ValueError(f"a stretch test draws more than 0 over more than 0: {by_mm}, {length_mm}")
    stretch = by_mm / length_mm
    tension_ratio = float(2.0 ** (rise_cents / 600.0)) / (1.0 + stretch)
    return tension_n * (tension_ratio - 1.0) / stretch


def _checked_diameter_m(diameter_mm: float, what: str) -> float:
    if not (isfinite(diameter_mm) and diameter_mm > 0.0):
        raise ValueError(f"{what} is above 0 mm; {diameter_mm} is not")
    return diameter_mm / MM_PER_M


def _modulus_pa(material: Material) -> float:
    if material.youngs_modulus_pa is None:
        raise ValueError(f"{material.name} is a wrap: it carries no tension")
    return material.youngs_modulus_pa
