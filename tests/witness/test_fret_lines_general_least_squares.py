"""Fret lines laid again by a general least-squares routine, straight from the definition."""

from dataclasses import replace

import numpy as np
import pytest
from scipy.optimize import least_squares

from layout.geometry.frets import divide_mm, lay_frets, vote_weights
from layout.geometry.strings import lay_strings
from layout.instrument import MultiScale, ParallelScale
from layout.job.records import load_library_record
from layout.pitch.notes import read_note
from layout.pitch.targets import target_cents

COURSES = ["G4", "D4", "A3", "F3", "C3", "G2"]
Q = 1 - 2 ** (-5 / 12)


def lute_cents(count=8):
    notes = [read_note(name) for name in COURSES]
    record = load_library_record("meantone-quarter-comma")
    return target_cents(record, notes, range(1, count + 1), counted_from="key")


def strings_on(scale):
    return lay_strings(
        scale,
        np.linspace(20.0, -20.0, 6),
        np.linspace(34.0, -34.0, 6),
        full=np.ones(6, bool),
        square_fraction=(Q, Q),
    )


def errors(line, strings, own, root_weight):
    """1200 log2((X0 - own)/(X0 - met)), met by intersecting two straight lines."""
    a, b = line
    met = np.empty(len(own))
    for index, (start, way) in enumerate(zip(strings.nut_mm, strings.direction, strict=True)):
        # start + t way = (a + b y, y)
        matrix = np.array([[way[0], -b], [way[1], -1.0]])
        met[index] = np.linalg.solve(matrix, np.array([a, 0.0]) - start)[0]
    return root_weight * 1200 * np.log2((strings.scale_mm - own) / (strings.scale_mm - met))


@pytest.mark.parametrize("slant", ["square", "free"])
@pytest.mark.parametrize("scale", [ParallelScale(600.0), MultiScale(600.0, 640.0, 5.0)])
@pytest.mark.parametrize("course", [[0, 1, 2, 3, 4, 5], [0, 0, 1, 1, 1, 2]])
def test_lute_in_quarter_comma(slant, scale, course):
    strings = strings_on(scale)
    own = divide_mm(strings.scale_mm, lute_cents())
    served = np.ones(own.shape, bool)
    votes = vote_weights(served, np.array(course))
    frets = lay_frets(strings, own, votes=votes, served=served, free=np.full(8, slant == "free"))
    for fret in range(8):
        root = np.sqrt(votes[:, fret])
        guess = float(strings.points(own)[:, fret, 0].mean())

        def full(unknown, fret=fret, root=root):
            line = (unknown[0], unknown[1] / 100 if slant == "free" else 0.0)
            return errors(line, strings, own[:, fret], root)

        found = least_squares(
            full,
            [guess, 0.0] if slant == "free" else [guess],
            method="lm",
            xtol=1e-15,
            ftol=1e-15,
            gtol=1e-15,
        ).x
        # The sum is flat at its least: 1e-6 mm is what so general a routine resolves.
        assert frets.at_centre_mm[fret] == pytest.approx(found[0], abs=1e-5)
        if slant == "free":
            assert frets.slope[fret] == pytest.approx(found[1] / 100, abs=1e-6)
        ours = np.sum(errors((frets.at_centre_mm[fret], frets.slope[fret]), strings,
                             own[:, fret], root) ** 2)  # fmt: skip
        assert ours <= np.sum(full(found) ** 2) * (1 + 1e-9) + 1e-18


def test_the_lines_are_where_no_small_move_helps():
    strings = strings_on(MultiScale(600.0, 640.0, 5.0))
    own = divide_mm(strings.scale_mm, lute_cents())
    served = np.ones(own.shape, bool)
    votes = vote_weights(served, np.arange(6))
    frets = lay_frets(strings, own, votes=votes, served=served, free=np.ones(8, bool))
    for fret in (0, 2, 5, 7):
        a, b = frets.at_centre_mm[fret], frets.slope[fret]
        least = np.sum(errors((a, b), strings, own[:, fret], 1.0) ** 2)
        for move, turn in ((1e-3, 0), (-1e-3, 0), (0, 1e-4), (0, -1e-4)):
            moved = errors((a + move, b + turn), strings, own[:, fret], 1.0)
            assert np.sum(moved**2) > least


def test_a_mirrored_lute_has_mirrored_frets():
    strings = strings_on(ParallelScale(600.0))
    own = divide_mm(strings.scale_mm, lute_cents())
    flipped = replace(
        strings,
        nut_mm=strings.nut_mm * [1, -1],
        bridge_mm=strings.bridge_mm * [1, -1],
        direction=strings.direction * [1, -1],
    )
    served = np.ones(own.shape, bool)
    votes = vote_weights(served, np.arange(6))
    one, other = (
        lay_frets(each, own, votes=votes, served=served, free=np.ones(8, bool))
        for each in (strings, flipped)
    )
    assert one.at_centre_mm == pytest.approx(other.at_centre_mm, abs=1e-9)
    assert one.slope == pytest.approx(-other.slope, abs=1e-11)
