from fractions import Fraction

import numpy as np
import pytest

from layout.errors import PitchError
from layout.pitch.forms import ratio_degrees, rule_step
from layout.pitch.interval import UNISON, Interval
from layout.pitch.notes import NoteName, read_note, read_note_name
from layout.pitch.targets import (
    nearest_degree,
    open_hz,
    stop_fraction,
    string_fractions,
    target_cents,
)
from layout.pitch.temperament import Temperament, equal

A4 = read_note("A4")
JUST_NOTES = ["C", "Db", "D", "Eb", "E", "F", "F#", "G", "Ab", "A", "Bb", "B"]
JUST = ["1", "16/15", "9/8", "6/5", "5/4", "4/3", "45/32", "3/2", "8/5", "5/3", "9/5", "15/8"]


def just():
    return Temperament(
        "just",
        "Just",
        "the test",
        ratio_degrees([Fraction(r) for r in JUST]),
        Interval.of(2),
        notes=tuple(read_note_name(n) for n in JUST_NOTES),
    )


def notes(text):
    return [read_note(n) for n in text.split()]


def test_open_strings_counted_from_themselves_are_equal():
    hz = open_hz(
        just(), notes("E2 A2 Gb3"), reference_note=A4, reference_hz=440.0, counted_from="open"
    )
    np.testing.assert_allclose(hz, 440 * 2.0 ** (np.array([-29, -24, -15]) / 12), rtol=1e-14)


def test_open_strings_of_a_keyed_record_are_tuned_in_it():
    hz = open_hz(
        just(), notes("C4 E4 D3"), reference_note=A4, reference_hz=440.0, counted_from="key"
    )
    np.testing.assert_allclose(hz, [264, 330, 148.5], rtol=1e-14)


def test_detunings_of_string_and_reference_are_kept():
    detuned = read_note("E4 -50c")
    hz = open_hz(
        equal(12), [detuned], reference_note=detuned, reference_hz=320.0, counted_from="open"
    )
    np.testing.assert_allclose(hz, [320], rtol=1e-15)
    keyed = open_hz(just(), [detuned], reference_note=A4, reference_hz=440.0, counted_from="key")
    np.testing.assert_allclose(keyed, [330 * 2 ** (-50 / 1200)], rtol=1e-14)


def test_strings_of_a_keyed_record_meet_different_steps():
    cents = target_cents(just(), notes("C4 D4"), [1, 2, 12], counted_from="key")
    ratios = [[16 / 15, 9 / 8, 2], [(6 / 5) / (9 / 8), (5 / 4) / (9 / 8), 2]]
    np.testing.assert_allclose(cents, 1200 * np.log2(ratios), atol=1e-9, rtol=0)


def test_counted_from_the_open_string_all_are_alike():
    cents = target_cents(just(), notes("C4 D4"), [2, 4], counted_from="open")
    np.testing.assert_allclose(cents, 1200 * np.log2([[9 / 8, 5 / 4]] * 2), atol=1e-9, rtol=0)


def test_a_short_string_sounds_the_record_between_its_start_and_the_fret():
    steps = [2, 4, 5, 7]
    cents = target_cents(just(), [None, None], steps, counted_from="open", starts=[None, 2])
    own = np.array([9 / 8, 5 / 4, 4 / 3, 3 / 2])
    np.testing.assert_allclose(cents[0], 1200 * np.log2(own), atol=1e-9, rtol=0)
    np.testing.assert_allclose(cents[1], 1200 * np.log2(own / own[1]), atol=1e-9, rtol=0)
    assert cents[1, 0] < 0
    assert cents[1, 1] == 0


def test_a_keyed_short_string_sounds_its_own_note_at_its_start():
    # Its nut lies at board fret 2, on degree 5: degree 2 is three steps below G4, degree 7 two up.
    cents = target_cents(just(), notes("G4"), [2, 5, 7], counted_from="key", starts=[2])
    expected = [(5 / 4) / (3 / 2), 1.0, (5 / 3) / (3 / 2)]
    np.testing.assert_allclose(cents[0], 1200 * np.log2(expected), atol=1e-9, rtol=0)


def test_a_string_ordered_by_frequency_is_counted_by_the_nearest_degree():
    near = {"reference_note": A4, "reference_hz": 440.0}
    assert nearest_degree(just(), 331.0, **near) == just().degree_of(read_note("E4"))
    assert nearest_degree(just(), 66.1, **near) == just().degree_of(read_note("C2"))
    assert nearest_degree(just(), 65.9, **near) == just().degree_of(read_note("C2"))
    detuned = {"reference_note": read_note("A4 +80c"), "reference_hz": 440.0}
    assert nearest_degree(just(), 440.0, **detuned) == just().degree_of(read_note("Bb4"))
    by_degree = target_cents(just(), [4], [1, 2], counted_from="key")
    by_note = target_cents(just(), notes("E4"), [1, 2], counted_from="key")
    np.testing.assert_array_equal(by_degree, by_note)


def test_a_string_without_a_note_cannot_be_counted_from_the_key():
    with pytest.raises(PitchError, match="needs its open note"):
        target_cents(just(), [None], [1], counted_from="key")


def test_a_spelling_the_record_lacks_and_a_fret_past_its_end_are_errors():
    with pytest.raises(PitchError, match="just has no G#"):
        target_cents(just(), notes("G#3"), [1], counted_from="key")
    short = Temperament(
        "short", "Short", "the test", ratio_degrees([Fraction(1), Fraction(9, 8)]), None
    )
    with pytest.raises(PitchError, match="there is no degree 2"):
        target_cents(short, [None], [1, 2], counted_from="open")


def test_a_keyed_equal_record_takes_every_spelling():
    keyed = equal(12).keyed_from(NoteName("D"))
    cents = target_cents(keyed, notes("Gb3 F#3"), [1, 2], counted_from="key")
    np.testing.assert_allclose(cents, [[100, 200]] * 2, atol=1e-9, rtol=0)


def test_a_stop_fraction_keeps_the_digits_of_a_small_interval():
    np.testing.assert_allclose(stop_fraction(1e-9), 1e-9 * np.log(2) / 1200, rtol=1e-12)
    np.testing.assert_allclose(
        stop_fraction([[0.0, 1200.0], [2400.0, -1200.0]]), [[0, 0.5], [0.75, -1.0]], rtol=1e-15
    )


def test_string_fractions_of_a_rule():
    rule = Temperament("rule", "Rule", "the test", (UNISON,), None, step=rule_step(Fraction(1, 18)))
    exact = [float(1 - Fraction(17, 18) ** k) for k in (1, 2, 24)]
    np.testing.assert_allclose(string_fractions(rule, [1, 2, 24]), exact, rtol=1e-15)
