"""A string carried over two supports, by our own cubic finite elements."""

import numpy as np
import pytest
from scipy.sparse import csc_matrix, lil_matrix
from scipy.sparse.linalg import eigsh

from layout.strings.phase import frequency_hz
from layout.strings.support import Tail, fixity

ELEMENT_MM = 0.5


def middle_span_hz(lengths_mm, *, tension, mass, bending):
    """Lowest mode of a beam under tension: cubic Hermite elements, far ends clamped."""
    counts = [round(length / ELEMENT_MM) for length in lengths_mm]
    size = ELEMENT_MM / 1000.0
    nodes = sum(counts) + 1
    bend = np.array([[12, 6, -12, 6], [6, 4, -6, 2], [-12, -6, 12, -6], [6, 2, -6, 4]]) / size**3
    pull = np.array([[36, 3, -36, 3], [3, 4, -3, -1], [-36, -3, 36, -3], [3, -1, -3, 4]]) / (
        30.0 * size
    )
    inert = (
        np.array([[156, 22, 54, -13], [22, 4, 13, -3], [54, 13, 156, -22], [-13, -3, -22, 4]])
        * size
        / 420.0
    )
    # Slopes are scaled by the element, so every entry above has one dimension.
    stiffness, masses = lil_matrix((2 * nodes, 2 * nodes)), lil_matrix((2 * nodes, 2 * nodes))
    for element in range(nodes - 1):
        place = slice(2 * element, 2 * element + 4)
        stiffness[place, place] += bending * bend + tension * pull
        masses[place, place] += mass * inert
    held = {0, 1, 2 * nodes - 2, 2 * nodes - 1, 2 * counts[0], 2 * (counts[0] + counts[1])}
    free = [index for index in range(2 * nodes) if index not in held]
    k, m = csc_matrix(stiffness)[free][:, free], csc_matrix(masses)[free][:, free]
    squared = eigsh(k, k=1, M=m, sigma=0.0, return_eigenvectors=False)
    return float(np.sqrt(squared[0])) / (2.0 * np.pi)


@pytest.mark.parametrize("tails_mm", [(6.0, 25.0), (12.0, 12.0)])
def test_carried_over_two_supports(tails_mm):
    string = {"tension_n": 73.6, "unit_mass_kg_per_m": 1.15e-3, "bending_stiffness_n_m2": 3.5e-4}
    held = {name: string[name] for name in ("tension_n", "bending_stiffness_n_m2")}
    found = frequency_hz(
        300.0,
        fixity_1=fixity(Tail(tails_mm[0]), **held),
        fixity_2=fixity(Tail(tails_mm[1]), **held),
        **string,
    )
    exact = middle_span_hz(
        (tails_mm[0], 300.0, tails_mm[1]), tension=73.6, mass=1.15e-3, bending=3.5e-4
    )
    assert abs(1200.0 * np.log2(float(found) / exact)) <= 0.02
    ideal = frequency_hz(300.0, fixity_1=0, fixity_2=0, **{**string, "bending_stiffness_n_m2": 0.0})
    assert 1200.0 * np.log2(exact / float(ideal)) > 10.0
