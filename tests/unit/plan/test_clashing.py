from dataclasses import replace

import numpy as np
import pytest

from layout.instrument import MultiScale
from layout.plan.clashing import measure_clash
from layout.plan.laying import lay_out


def clash(job):
    return measure_clash(lay_out(job))


def test_a_lute_in_quarter_comma(lute):
    # A diesis of 41.06 cents: 128/125; places of the plan page on 600 mm, 25.79 and 39.24 mm.
    found = clash(lute)
    diesis = 1200 * np.log2(128 / 125)
    assert [round(item.spread_cents, 6) for item in found] == pytest.approx(
        [diesis, 0, diesis, 0, 0, diesis, 0, diesis], abs=1e-6
    )
    assert found[0].spread_cents == pytest.approx(41.06, abs=0.005)
    assert found[0].spread_mm == pytest.approx(13.46, abs=0.01)
    assert [item.fret for item in found] == list(range(1, 9))


@pytest.mark.parametrize("name", ["six", "fan", "parlour"])
def test_equal_temperament_never_clashes(request, name):
    assert max(item.spread_cents for item in clash(request.getfixturevalue(name))) < 1e-9


def test_a_short_string_counts_from_the_board_s_nut(banjo):
    found = clash(banjo)
    assert max(item.spread_cents for item in found) < 1e-8
    assert max(item.spread_mm for item in found) < 1e-8


def test_a_short_string_on_a_fan_does_not_clash(banjo):
    scale = MultiScale(660.0, 690.0, 5.0)
    fanned = replace(banjo, scale=scale, frets=replace(banjo.frets, slant="free"))
    assert max(item.spread_cents for item in clash(fanned)) < 1e-7


def test_only_the_strings_served_can_clash(lute):
    served = replace(lute, frets=replace(lute.frets, only={1: (1, 6)}))
    assert clash(served)[0].spread_cents < 1e-9  # both strings are tuned to G
    assert clash(served)[2].spread_cents > 41


def test_favouring_a_pitch_does_not_hide_the_clash(lute):
    favoured = replace(lute, frets=replace(lute.frets, favour={1: "flat"}))
    assert clash(favoured)[0].spread_cents == pytest.approx(41.06, abs=0.005)
