"""Conditions of Kuhn and Tucker, and the strip's own, on anything drawn."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from layout.strings.inequality import solve_bounded, solve_least_distance, solve_nonnegative
from layout.strings.strip import narrowest_strip

SEEDS = st.integers(0, 10**6)
few = settings(max_examples=60, deadline=None, derandomize=True)


@few
@given(seed=SEEDS, rows=st.integers(1, 9), columns=st.integers(1, 12))
def test_nonnegative_meets_kuhn_and_tucker(seed, rows, columns):
    rng = np.random.default_rng(seed)
    # Whole numbers make ties and dependent columns common.
    matrix, target = rng.integers(-2, 3, (rows, columns)) * 1.0, rng.integers(-3, 4, rows) * 1.0
    found = solve_nonnegative(matrix, target)
    gain = matrix.T @ (target - matrix @ found)
    assert (found >= 0).all()
    assert gain.max() < 1e-10
    assert np.abs(gain[found > 0]).max(initial=0.0) < 1e-10


@few
@given(seed=SEEDS, sides=st.integers(1, 10), unknowns=st.integers(1, 6))
def test_bounded_is_feasible_and_lowest(seed, sides, unknowns):
    rng = np.random.default_rng(seed)
    matrix, wanted = rng.normal(size=(unknowns + 2, unknowns)), rng.normal(size=unknowns + 2)
    normals, inside = rng.normal(size=(sides, unknowns)), rng.normal(size=unknowns)
    at_least = normals @ inside - rng.uniform(0, 1, sides)
    found = solve_bounded(matrix, wanted, normals, at_least)
    assert (normals @ found - at_least).min() > -1e-10
    # Toward any feasible point the sum must not fall.
    slope = 2 * matrix.T @ (matrix @ found - wanted)
    assert slope @ (inside - found) > -1e-9 * (1 + np.abs(slope).max())


@few
@given(seed=SEEDS)
def test_least_distance_is_the_nearest_of_many(seed):
    rng = np.random.default_rng(seed)
    normals = rng.normal(size=(4, 3))
    at_least = normals @ rng.normal(size=3) - rng.uniform(0, 0.5, 4)
    found = solve_least_distance(normals, at_least, question="trial")
    tried = rng.normal(size=(2000, 3))
    feasible = tried[(tried @ normals.T >= at_least).all(axis=1)]
    assert np.linalg.norm(found) <= np.linalg.norm(feasible, axis=1).min(initial=np.inf) + 1e-12


@few
@given(
    seed=SEEDS,
    count=st.integers(1, 9),
    turn=st.floats(-0.2, 0.2),
    shift_mm=st.floats(-50, 50),
)
def test_strip_turns_and_shifts_with_its_points(seed, count, turn, shift_mm):
    rng = np.random.default_rng(seed)
    points = np.column_stack([rng.uniform(-2, 2, count), rng.uniform(-27, 27, count)])
    here = narrowest_strip(points)
    turned = points @ np.array([[np.cos(turn), -np.sin(turn)], [np.sin(turn), np.cos(turn)]])
    there = narrowest_strip(turned + np.array([shift_mm, 0.0]), along=turn)
    if abs(here.slant) < np.pi / 3 - 0.2:
        assert there.width_mm == pytest.approx(here.width_mm, abs=1e-9)
    off = (turned[:, 0] + shift_mm - there.at_centre_mm) * np.cos(there.slant)
    off -= turned[:, 1] * np.sin(there.slant)
    assert np.abs(off).max() <= there.width_mm / 2 + 1e-9
