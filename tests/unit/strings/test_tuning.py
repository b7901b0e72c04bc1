import numpy as np
import pytest

from layout.errors import NoSolutionError
from layout.strings.phase import frequency_hz
from layout.strings.stopping import StringBody
from layout.strings.support import CARRIED, CLAMPED, HINGED, Tail, fixity
from layout.strings.tuning import solve_open_tension_n


@pytest.mark.parametrize(
    "ends", [(CARRIED, CARRIED), (HINGED, CLAMPED), (Tail(3.0), Tail(20.0)), (Tail(9.0), Tail(9.0))]
)
def test_tuned_string_sounds_its_note(ends):
    hz = np.array([110.0, 220.0, 330.0])
    bending = np.array([[0.0, 1e-4, 5e-4], [1e-6, 2e-3, 3e-2]])
    body = StringBody(np.array([3.3e-3, 1e-3, 4e-4]), np.full(3, 4e3), bending)
    tension = solve_open_tension_n(body, hz, 650.0, nut=ends[0], saddle=ends[1])
    assert tension.shape == (2, 3)
    held = {"tension_n": tension, "bending_stiffness_n_m2": bending}
    found = frequency_hz(
        650.0,
        unit_mass_kg_per_m=body.unit_mass_kg_per_m,
        fixity_1=fixity(ends[0], **held),
        fixity_2=fixity(ends[1], **held),
        **held,
    )
    np.testing.assert_allclose(found, np.broadcast_to(hz, (2, 3)), rtol=2e-15)


def test_ideal_string():
    body = StringBody(np.array([4e-4]), np.array([4e3]), np.array([0.0]))
    found = solve_open_tension_n(body, 330.0, 650.0, nut=CLAMPED, saddle=CARRIED)
    np.testing.assert_allclose(found, 4e-4 * (2 * 0.65 * 330.0) ** 2, rtol=1e-14)


def test_a_bar_that_sounds_higher_by_itself_cannot_be_tuned():
    body = StringBody(np.array([4e-4, 4e-4]), np.array([4e3, 4e3]), np.array([1e-5, 50.0]))
    with pytest.raises(NoSolutionError) as caught:
        solve_open_tension_n(body, 330.0, 650.0, nut=CARRIED, saddle=CARRIED)
    assert caught.value.bracket == pytest.approx((0.0, 4e-4 * (2 * 0.65 * 330.0) ** 2))
    assert caught.value.last < 1e-6
    assert str(caught.value).startswith(
        "tension in newton that tunes open string 2 (stiffness alone sounds higher; take a thinner "
        "or slacker string, or check its gauge, note and scale): no solution between 0 and "
    )


def test_every_string_that_cannot_be_tuned_is_named():
    bending = np.array([[50.0, 1e-5, np.nan, 1e-5], [1e-5, 1e-5, 1e-5, 60.0]])
    body = StringBody(np.full(4, 4e-4), np.full(4, 4e3), bending)
    with pytest.raises(NoSolutionError, match=r"tunes open strings 1 and 4 \("):
        solve_open_tension_n(body, 330.0, 650.0, nut=CARRIED, saddle=CARRIED)


@pytest.mark.parametrize("shape", [(), (1,), (3, 1)])
def test_a_lone_string_is_not_counted(shape):
    body = StringBody(np.full(shape, 4e-4), np.full(shape, 4e3), np.full(shape, 50.0))
    with pytest.raises(NoSolutionError, match=r"tunes the open string \("):
        solve_open_tension_n(body, 330.0, 650.0, nut=CARRIED, saddle=CARRIED)


def test_unknown_strings_stay_unknown():
    body = StringBody(np.array([np.nan, 4e-4]), np.array([4e3, 4e3]), np.array([1e-5, 1e-5]))
    found = solve_open_tension_n(body, 330.0, 650.0, nut=CARRIED, saddle=CARRIED)
    assert np.isnan(found).tolist() == [True, False]
