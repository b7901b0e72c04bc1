import numpy as np
import pytest

from layout.errors import NoSolutionError
from layout.strings import phase
from layout.strings.phase import BLOCK_ELEMENTS, end_phases, frequency_hz, solve_wave_number


def residual(a, *, length, h, p_1, p_2, mode=1):
    def shift(p):
        t = a * h
        return np.arctan2(p * t, (1 - p) * (1 + 2 * t * t) + p * np.sqrt(1 + t * t))

    return a * length - shift(p_1) - shift(p_2) - mode * np.pi


@pytest.mark.parametrize("mode", [1, 3, 12])
def test_closes_the_phase_from_wires_to_bars(mode):
    h = np.logspace(-12, 9, 22)[:, None, None]
    p_1, p_2 = np.linspace(0, 1, 6)[:, None], np.linspace(0, 1, 6)
    with np.errstate(all="raise"):
        a = solve_wave_number(650.0, bending_length_mm=h, fixity_1=p_1, fixity_2=p_2, mode=mode)
    left = residual(a, length=650.0, h=h, p_1=p_1, p_2=p_2, mode=mode)
    np.testing.assert_allclose(left, 0.0, rtol=0, atol=8e-16 * (mode + 1) * np.pi)


def test_no_bending_stiffness_is_exactly_the_ideal_string():
    found = frequency_hz(
        [500.0, 650.0, 650.0],
        tension_n=70.0,
        unit_mass_kg_per_m=4e-4,
        bending_stiffness_n_m2=[0.0, 0.0, 4e-5],
        fixity_1=1.0,
        fixity_2=0.5,
    )
    speed = np.sqrt(70.0 / 4e-4)
    np.testing.assert_allclose(found[:2], speed / (2.0 * np.array([0.5, 0.65])), rtol=4e-16)
    assert found[2] > found[1] * 1.001


def test_blocks_do_not_show():
    rng = np.random.default_rng(3)
    shape = (3, BLOCK_ELEMENTS + 17)
    length = rng.uniform(200.0, 700.0, shape)
    h, p = rng.uniform(0.0, 3.0, shape[1]), rng.uniform(0.0, 1.0, (3, 1))
    together = solve_wave_number(length, bending_length_mm=h, fixity_1=p, fixity_2=0.5)
    for row in range(3):
        for column in (0, BLOCK_ELEMENTS - 1, BLOCK_ELEMENTS, shape[1] - 1):
            alone = solve_wave_number(
                length[row, column],
                bending_length_mm=h[column],
                fixity_1=p[row, 0],
                fixity_2=0.5,
            )
            assert together[row, column] == pytest.approx(float(alone), rel=1e-15)


def test_equal_ends_are_computed_once_and_alike():
    t = np.linspace(0.0, 2.0, 7)
    same = np.asarray(0.3)
    for other in (same, np.asarray(0.3), np.full(7, 0.3)):
        np.testing.assert_allclose(
            end_phases(t, same, other), end_phases(t, same, same), rtol=1e-15
        )


def test_slope_is_the_derivative():
    t, step = np.linspace(0.01, 5.0, 40), 1e-6
    for p in (0.0, 0.2, 0.5, 1.0):
        ends = (np.asarray(p), np.asarray(0.7))
        _, slope = end_phases(t, *ends)
        rise = end_phases(t + step, *ends)[0] - end_phases(t - step, *ends)[0]
        np.testing.assert_allclose(slope, rise / (2 * step), rtol=0, atol=1e-9)


def test_nan_stays_nan_and_is_quiet():
    with np.errstate(all="raise"):
        found = solve_wave_number(
            [np.nan, 650.0], bending_length_mm=1.0, fixity_1=0.5, fixity_2=0.5
        )
    assert np.isnan(found[0])
    assert found[1] == pytest.approx(np.pi / 649.0, rel=1e-4)
    alone = solve_wave_number(np.nan, bending_length_mm=1.0, fixity_1=0.5, fixity_2=0.5)
    assert np.isnan(alone)


def test_says_so_when_it_does_not_settle(monkeypatch):
    monkeypatch.setattr(phase, "_MOST_STEPS", 1)
    with pytest.raises(NoSolutionError) as caught:
        solve_wave_number(650.0, bending_length_mm=90.0, fixity_1=1.0, fixity_2=1.0)
    assert caught.value.iterations == 1
    assert str(caught.value).startswith("wave number of a stiff string: no solution after 1 steps")
