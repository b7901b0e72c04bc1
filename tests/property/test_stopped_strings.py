import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st

from layout.strings.phase import frequency_hz
from layout.strings.stopping import (
    StringBody,
    StringLie,
    predict_stops,
    relief_height_mm,
    split_error,
)
from layout.strings.support import Fixity, Tail, tail_fixity

SCALES_MM = st.floats(300.0, 1200.0)
TENSIONS_N = st.floats(20.0, 200.0)
BENDING_LENGTHS_MM = st.floats(0.2, 3.0)
STRETCH_NUMBERS = st.floats(20.0, 250.0)
FIXITIES = st.floats(0.0, 1.0)
SUPPORTS = st.one_of(FIXITIES.map(Fixity), st.floats(1.0, 100.0).map(Tail))


@st.composite
def strings(draw):
    """One string and its lie: everything a stop depends on."""
    scale, tension = draw(SCALES_MM), draw(TENSIONS_N)
    hz = draw(st.floats(60.0, 400.0))
    mass = tension / (2.0 * scale / 1000.0 * hz) ** 2
    bending = tension * (draw(BENDING_LENGTHS_MM) / 1000.0) ** 2
    body = StringBody(
        np.array([mass]), np.array([draw(STRETCH_NUMBERS) * tension]), np.array([bending])
    )
    lie = StringLie(
        open_hz=[hz],
        scale_mm=[scale],
        height_at_nut_mm=[draw(st.floats(0.0, 2.0))],
        height_at_saddle_mm=[draw(st.floats(2.0, 8.0))],
        finger_behind_mm=draw(st.floats(0.0, 12.0)),
        finger_press_mm=draw(st.floats(0.0, 0.5)),
        relief_mm=draw(st.floats(0.0, 0.3)),
        relief_from_mm=[0.056 * scale],
        relief_to_mm=[0.55 * scale],
        free_mm=draw(st.floats(0.0, 200.0)),
        nut=draw(SUPPORTS),
        stop=draw(SUPPORTS),
        saddle=draw(SUPPORTS),
    )
    return body, lie


def replace(lie, **changes):
    return StringLie(**({name: getattr(lie, name) for name in lie.__slots__} | changes))


@settings(deadline=None)
@given(string=strings())
def test_a_stop_nearer_the_saddle_sounds_higher(string):
    body, lie = string
    # From a semitone on: right at the nut the stretch of a pressed string falls steeply.
    places = np.linspace(0.06, 0.8, 60) * lie.scale_mm[0]
    calm = replace(lie, finger_press_mm=0.0, relief_mm=0.0, finger_behind_mm=0.0)
    cents = predict_stops(body, calm, places[None]).cents[0]
    assert (np.diff(cents) > 0).all()


@settings(deadline=None)
@given(string=strings(), factor=st.floats(0.5, 3.0))
def test_the_same_instrument_at_another_size_has_the_same_cents(string, factor):
    body, lie = string
    places = np.array([[0.06, 0.2, 0.5, 0.7]]) * lie.scale_mm[0]
    larger_body = StringBody(
        body.unit_mass_kg_per_m, body.axial_stiffness_n, body.bending_stiffness_n_m2 * factor**2
    )
    sizes = ("scale_mm", "height_at_nut_mm", "height_at_saddle_mm", "finger_behind_mm")
    sizes += ("finger_press_mm", "relief_mm", "relief_from_mm", "relief_to_mm", "free_mm")
    larger_lie = replace(
        lie,
        open_hz=lie.open_hz[0] / factor,
        **{name: factor * np.asarray(getattr(lie, name)) for name in sizes},
        **{
            end: Tail(factor * support.length_mm)
            for end in ("nut", "stop", "saddle")
            if isinstance(support := getattr(lie, end), Tail)
        },
    )
    larger_lie = replace(
        larger_lie,
        **{
            name: float(getattr(larger_lie, name))
            for name in ("finger_behind_mm", "finger_press_mm", "relief_mm", "free_mm")
        },
    )
    small = predict_stops(body, lie, places, nut_shift_mm=0.2, setback_mm=1.0)
    large = predict_stops(
        larger_body, larger_lie, factor * places, nut_shift_mm=0.2 * factor, setback_mm=factor
    )
    np.testing.assert_allclose(large.cents, small.cents, rtol=0, atol=1e-8)


@settings(deadline=None)
@given(string=strings())
def test_the_parts_add_up_to_the_error(string):
    body, lie = string
    targets = np.array([[100.0, 700.0, 1200.0]])
    stopped = predict_stops(body, lie, lie.scale_mm[0] * (1.0 - 2.0 ** (-targets / 1200.0)))
    parts = split_error(stopped, targets)
    total = parts.length + parts.mass + parts.tension + parts.stiffness
    np.testing.assert_allclose(total, stopped.cents - targets, rtol=0, atol=1e-11)


@settings(deadline=None)
@given(string=strings())
def test_a_vanishing_bending_stiffness_is_the_ideal_string(string):
    body, lie = string
    places = np.array([[0.06, 0.5, 0.7]]) * lie.scale_mm[0]
    cents = [
        predict_stops(
            StringBody(body.unit_mass_kg_per_m, body.axial_stiffness_n, np.array([bending])),
            lie,
            places,
        ).cents
        for bending in (0.0, 1e-300, 1e-24)
    ]
    np.testing.assert_allclose(cents[1], cents[0], rtol=0, atol=1e-10)
    np.testing.assert_allclose(cents[2], cents[0], rtol=0, atol=1e-5)


@given(
    length=SCALES_MM,
    tension=TENSIONS_N,
    bending_length=BENDING_LENGTHS_MM,
    other=FIXITIES,
    mode=st.integers(1, 8),
)
def test_a_firmer_end_sounds_higher(length, tension, bending_length, other, mode):
    found = frequency_hz(
        length,
        tension_n=tension,
        unit_mass_kg_per_m=1e-3,
        bending_stiffness_n_m2=tension * (bending_length / 1000.0) ** 2,
        fixity_1=np.linspace(0.0, 1.0, 21),
        fixity_2=other,
        mode=mode,
    )
    assert (np.diff(found) > 0).all()


@given(exponents=st.lists(st.floats(-8.0, 8.0), min_size=2, max_size=2, unique=True))
def test_a_longer_tail_holds_less(exponents):
    shorter, longer = tail_fixity([10.0 ** min(exponents), 10.0 ** max(exponents)])
    assert 1.0 >= shorter >= longer - 4e-16
    assert longer >= 0.5


@given(string=strings())
def test_relief_begins_and_ends_without_a_jump(string):
    _, lie = string
    for end in (lie.relief_from_mm[0], lie.relief_to_mm[0]):
        near = relief_height_mm(lie, end + np.array([[-1e-7, 0.0, 1e-7]]))
        np.testing.assert_allclose(near, 0.0, rtol=0, atol=1e-8)
    middle = (lie.relief_from_mm[0] + lie.relief_to_mm[0]) / 2.0
    np.testing.assert_allclose(relief_height_mm(lie, [[middle]]), -lie.relief_mm, atol=1e-12)


@settings(deadline=None)
@given(string=strings())
def test_a_vanishing_relief_is_a_straight_board(string):
    body, lie = string
    places = np.array([[0.06, 0.2, 0.5, 0.7]]) * lie.scale_mm[0]
    hollow, straight = (
        predict_stops(body, replace(lie, relief_mm=depth), places).cents for depth in (1e-9, 0.0)
    )
    np.testing.assert_allclose(hollow, straight, rtol=0, atol=1e-5)
