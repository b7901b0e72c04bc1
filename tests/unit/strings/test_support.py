import numpy as np
import pytest

from layout.strings.support import CARRIED, CLAMPED, HINGED, Fixity, Tail, fixity, tail_fixity


@pytest.mark.parametrize(("support", "p"), [(HINGED, 0.0), (CARRIED, 0.5), (CLAMPED, 1.0)])
def test_named_supports(support, p):
    found = fixity(support, tension_n=70.0, bending_stiffness_n_m2=4e-5)
    assert (float(found), found.ndim) == (p, 0)
    assert support == Fixity(p)


def test_a_tail_takes_the_shape_of_the_strings():
    found = fixity(Tail(8.0), tension_n=[[60.0], [70.0]], bending_stiffness_n_m2=[4e-5, 0.0, 1e-4])
    assert found.shape == (2, 3)
    assert (found[:, 1] == 0.5).all()


def test_a_tail_of_no_length_is_clamped():
    assert (fixity(Tail(0.0), tension_n=70.0, bending_stiffness_n_m2=[0.0, 4e-5]) == 1.0).all()


def test_a_tail_without_bending_stiffness_is_quiet():
    with np.errstate(all="raise"):
        assert float(fixity(Tail(1e4), tension_n=70.0, bending_stiffness_n_m2=0.0)) == 0.5


def test_both_limits_of_the_tail_formula():
    long, short = 1e4, 1e-4
    k = (long - 1.0) / (long - 2.0)
    assert float(tail_fixity(long)) == pytest.approx(k / (1.0 + k), rel=1e-15)
    k = 4.0 / short * (1.0 + short**2 / 30.0)
    assert float(tail_fixity(short)) == pytest.approx(k / (1.0 + k), rel=1e-15)


def test_where_series_and_exponentials_meet():
    below, above = tail_fixity([np.nextafter(2.0, 0.0), 2.0])
    assert above == pytest.approx(below, rel=5e-16)
