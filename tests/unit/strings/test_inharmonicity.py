import numpy as np

from layout.strings.inharmonicity import inharmonicity_cents, partials_hz
from layout.strings.stopping import StringBody
from layout.strings.support import HINGED, Tail

BODY = StringBody(np.array([4e-4, 1e-3]), np.full(2, 1e4), np.array([4e-5, 0.0]))


def test_hinged_string_follows_the_square_root_law():
    # Exact for hinged ends: f_m = m f_ideal sqrt(1 + (m pi h/L)^2); Fletcher and Rossing, ch. 2.
    modes = np.array([1, 2, 5, 10])
    found = partials_hz(BODY, 650.0, tension_n=72.0, modes=modes, ends=(HINGED, HINGED))
    ideal = np.sqrt(72.0 / 4e-4) / 1.3
    share = np.sqrt(4e-5 / 72.0) / 0.65
    law = modes * ideal * np.sqrt(1.0 + (modes * np.pi * share) ** 2)
    np.testing.assert_allclose(found[0], law, rtol=1e-15)


def test_ideal_string_is_harmonic_and_the_fundamental_is_zero():
    found = inharmonicity_cents(
        BODY, [650.0, 700.0], tension_n=72.0, modes=[1, 2, 9], ends=(Tail(8.0), HINGED)
    )
    assert found.shape == (2, 3)
    np.testing.assert_allclose(found[1], 0.0, rtol=0, atol=1e-11)
    assert found[0, 0] == 0.0
    assert (np.diff(found[0]) > 0).all()
