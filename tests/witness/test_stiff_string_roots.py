"""The phase equation beside 30-digit roots of the beam equation itself, by mpmath."""

import mpmath as mp
import numpy as np
import pytest

from layout.strings.phase import frequency_hz, solve_wave_number
from layout.strings.support import tail_fixity

LENGTH, TENSION, MASS = 0.65, 70.0, 4e-4


def beam_hz(bending_length, fixity_1, fixity_2, mode):
    """Root of the 4 x 4 determinant of a beam under tension between two rotational springs."""
    with mp.workdps(30):
        length, h = mp.mpf(LENGTH), mp.mpf(bending_length)
        p_1, p_2 = mp.mpf(fixity_1), mp.mpf(fixity_2)

        def determinant(a):
            b = mp.sqrt(a * a + 1 / (h * h))
            s, c, e = mp.sin(a * length), mp.cos(a * length), mp.exp(-b * length)
            # Functions sin, cos, exp(-b x), exp(-b (L - x)); spring/EI = p/((1 - p) h).
            return mp.det(
                mp.matrix(
                    [
                        [0, 1, 1, e],
                        [
                            -p_1 * a / h,
                            -(1 - p_1) * a * a,
                            (1 - p_1) * b * b + p_1 * b / h,
                            e * ((1 - p_1) * b * b - p_1 * b / h),
                        ],
                        [s, c, e, 1],
                        [
                            -(1 - p_2) * a * a * s + p_2 * a * c / h,
                            -(1 - p_2) * a * a * c - p_2 * a * s / h,
                            e * ((1 - p_2) * b * b - p_2 * b / h),
                            (1 - p_2) * b * b + p_2 * b / h,
                        ],
                    ]
                )
            )

        low = mode * mp.pi / length
        guess = mode * mp.pi / (length - (p_1 + p_2) * h)
        a = mp.findroot(determinant, (guess, guess * (1 + mp.mpf(10) ** -4)), tol=1e-40)
        assert low * (1 - mp.mpf(10) ** -20) <= a < low * (1 + mp.mpf(1) / (2 * mode))
        b = mp.sqrt(a * a + 1 / (h * h))
        bending = mp.mpf(TENSION) * h * h
        return mp.sqrt(bending / mp.mpf(MASS)) * a * b / (2 * mp.pi)


@pytest.mark.parametrize("ends", [(0, 0), (0, 1), (1, 1), (0.5, 0.5), (0.2, 0.9)])
@pytest.mark.parametrize("share", [0.0005, 0.003, 0.01, 0.02])
@pytest.mark.parametrize("mode", [1, 4])
def test_frequency_beside_the_determinant(ends, share, mode):
    exact = beam_hz(share * LENGTH, *ends, mode)
    found = frequency_hz(
        1000.0 * LENGTH,
        tension_n=TENSION,
        unit_mass_kg_per_m=MASS,
        bending_stiffness_n_m2=TENSION * (share * LENGTH) ** 2,
        fixity_1=ends[0],
        fixity_2=ends[1],
        mode=mode,
    )
    # exp(-L/h) is 2e-22 at the stiffest.
    assert float(found) == pytest.approx(float(exact), rel=4e-15)


@pytest.mark.parametrize("share", [0.001, 0.01])
def test_frequency_beside_the_classic_equations(share):
    with mp.workdps(30):
        length, h = mp.mpf(LENGTH), mp.mpf(share) * mp.mpf(LENGTH)

        def hinged_clamped(a):
            b = mp.sqrt(a * a + 1 / (h * h))
            return b * mp.sin(a * length) - a * mp.tanh(b * length) * mp.cos(a * length)

        def clamped(a):
            b = mp.sqrt(a * a + 1 / (h * h))
            falling = 1 / mp.cosh(b * length) - mp.cos(a * length)
            return 2 * a * b * falling + mp.tanh(b * length) * mp.sin(a * length) / (h * h)

        roots = {
            (0.0, 1.0): mp.findroot(hinged_clamped, mp.pi / (length - h)),
            (1.0, 1.0): mp.findroot(clamped, mp.pi / (length - 2 * h)),
        }
    for ends, root in roots.items():
        found = solve_wave_number(
            LENGTH, bending_length_mm=share * LENGTH, fixity_1=ends[0], fixity_2=ends[1]
        )
        assert float(found) == pytest.approx(float(root), rel=4e-15)


@pytest.mark.parametrize("exponent", range(-8, 9))
@pytest.mark.parametrize("digits", [1.0, 1.999, 2.0, 3.7])
def test_tail_fixity_to_the_last_digits(exponent, digits):
    value = digits * 10.0**exponent
    # Both parts cancel as u^4, and cosh u has u/2.3 digits.
    with mp.workdps(60):
        u = mp.mpf(value)
        cosh, sinh = mp.cosh(u), mp.sinh(u)
        k = (u * cosh - sinh) / (u * sinh - 2 * cosh + 2)
        exact = k / (1 + k)
    with np.errstate(all="raise"):
        found = float(tail_fixity(value))
    assert found == pytest.approx(float(exact), rel=2e-15)
