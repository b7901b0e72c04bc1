"""Every form of record against mpmath at 50 digits, worked out here from the written figures."""

from itertools import pairwise

import mpmath
import numpy as np
import pytest

from layout.job.records import load_library_record, read_record
from layout.pitch.targets import stop_fraction, string_fractions

SCALE_MM = 650
WITHIN_MM = 1e-9
DEGREES = range(-12, 49)
CHAIN = ["Eb", "Bb", "F", "C", "G", "D", "A", "E", "B", "F#", "C#", "G#"]
NOTES = ["C", "C#", "D", "Eb", "E", "F", "F#", "G", "G#", "A", "Bb", "B"]
JUST = ["1", "16/15", "9/8", "6/5", "5/4", "4/3", "45/32", "3/2", "8/5", "5/3", "9/5", "15/8"]
KEYED = f"notes: [{', '.join(NOTES)}]\nfifths:\n  chain: [{', '.join(CHAIN)}]\n  narrow: "
OWN = "name: own\ntitle: Own\nsource: the test\n"


def mp(text):
    above, _, below = text.partition("/")
    return mpmath.mpf(above) / mpmath.mpf(below or 1)


def repeated(ratios, period=2):
    return lambda k: ratios[k % len(ratios)] * mpmath.mpf(period) ** (k // len(ratios))


def chained(narrow):
    """Frequencies up the chain, each fifth divided by its comma part; then octaves by halving."""
    heights = [mpmath.mpf(1)]
    for lower, upper in pairwise(CHAIN):
        heights.append(heights[-1] * mpmath.mpf(3) / 2 / narrow.get(f"{lower}-{upper}", 1))
    raised = {
        name: height / heights[CHAIN.index("C")]
        for name, height in zip(CHAIN, heights, strict=True)
    }
    ratios = []
    for name in NOTES:
        ratio = raised[name]
        while ratio >= 2:
            ratio /= 2
        while ratio < 1:
            ratio *= 2
        ratios.append(ratio)
    return repeated(ratios)


def expectations():
    syntonic = mp("81/80")
    pythagorean = mpmath.mpf(3) ** 12 / mpmath.mpf(2) ** 19
    of = dict.fromkeys
    pure_third = of(["C-G", "G-D", "D-A", "A-E"], syntonic ** mp("3/16"))
    rest = (pythagorean / syntonic ** mp("3/4")) ** mp("1/4")
    young = pure_third | of(["E-B", "B-F#", "Bb-F", "F-C"], rest)
    young_text = ", ".join(
        [f"{pair}: 3/16 syntonic" for pair in pure_third]
        + [f"{pair}: rest" for pair in ("E-B", "B-F#", "Bb-F", "F-C")]
    )
    every = [f"{a}-{b}" for a, b in pairwise(CHAIN)]
    library = {
        "equal-12": lambda k: mpmath.mpf(2) ** (mpmath.mpf(k) / 12),
        "equal-19": lambda k: mpmath.mpf(2) ** (mpmath.mpf(k) / 19),
        "equal-24": lambda k: mpmath.mpf(2) ** (mpmath.mpf(k) / 24),
        "rule-of-18": lambda k: mp("18/17") ** k,
        "just-12": repeated([mp(ratio) for ratio in JUST]),
        "meantone-quarter-comma": chained(of(every, syntonic ** mp("1/4"))),
        "werckmeister-3": chained(of(["C-G", "G-D", "D-A", "B-F#"], pythagorean ** mp("1/4"))),
        "vallotti": chained(
            of(["F-C", "C-G", "G-D", "D-A", "A-E", "E-B"], pythagorean ** mp("1/6"))
        ),
    }
    written = {
        "period: 3\nequal: 13\n": lambda k: mpmath.mpf(3) ** (mpmath.mpf(k) / 13),
        "period: 2\ncents: [0, 90.22, 203.91, 701.955]\n": repeated(
            [mpmath.mpf(2) ** (mp(c) / 1200) for c in ("0", "90.22", "203.91", "701.955")]
        ),
        "period: 2\nstring: [0, 2/33, 1/9, 0.37]\n": repeated(
            [1 / (1 - mp(f)) for f in ("0", "2/33", "1/9", "0.37")]
        ),
        "rule: {part: 0.0561}\n": lambda k: (1 / (1 - mp("0.0561"))) ** k,
        "step_cents: 77.9649896\n": lambda k: mpmath.mpf(2) ** (k * mp("77.9649896") / 1200),
        f"period: 2\n{KEYED}{{{young_text}}}\n": chained(young),
        f"period: 2\n{KEYED}{{C-G: 1 schisma, Bb-F: -1/12 pythagorean}}\n": chained(
            {"C-G": mp("32805/32768"), "Bb-F": pythagorean ** mp("-1/12")}
        ),
    }
    yield from ((load_library_record(name), ratio) for name, ratio in library.items())
    yield from ((read_record((OWN + t).encode(), "own"), ratio) for t, ratio in written.items())


with mpmath.workdps(50):
    CASES = [
        pytest.param(
            record, [SCALE_MM * (1 - 1 / ratio(k)) for k in DEGREES], id=f"{n}-{record.name}"
        )
        for n, (record, ratio) in enumerate(expectations())
    ]


@pytest.mark.parametrize(("record", "places_mm"), CASES)
def test_stops_of_every_form(record, places_mm):
    exact = np.array([float(place) for place in places_mm])
    made = SCALE_MM * string_fractions(record, DEGREES)
    np.testing.assert_allclose(made, exact, rtol=0, atol=WITHIN_MM)
    by_cents = SCALE_MM * stop_fraction([record.cents(k) for k in DEGREES])
    np.testing.assert_allclose(by_cents, exact, rtol=0, atol=WITHIN_MM)
