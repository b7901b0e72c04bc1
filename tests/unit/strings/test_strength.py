import numpy as np
import pytest

from layout.strings.strength import minimum_strength_pa, share_of_break

KSI = 6.8948e6


@pytest.mark.parametrize(
    ("diameter_in", "ksi"), [(0.008, 399), (0.014, 369), (0.051, 303), (0.004, 399), (0.2, 303)]
)
def test_tabulated_and_outside(diameter_in, ksi):
    # ASTM A228 as tabulated by a wire merchant.
    assert float(minimum_strength_pa(diameter_in * 25.4)) == pytest.approx(ksi * KSI, rel=1e-12)


def test_linear_in_the_logarithm_between():
    between = minimum_strength_pa(np.sqrt(0.030 * 0.040) * 25.4)
    assert float(between) == pytest.approx((330 + 315) / 2 * KSI, rel=1e-12)


def test_share_is_one_at_the_least_breaking_load():
    breaking_n = 387 * KSI * np.pi / 4.0 * 0.254e-3**2
    found = share_of_break([breaking_n, breaking_n / 2.0, np.nan], 0.254)
    np.testing.assert_allclose(found, [1.0, 0.5, np.nan], rtol=1e-12)
