from dataclasses import replace

import numpy as np
import pytest

from layout.instrument import (
    Compensation,
    EndHeights,
    Heights,
    Listed,
    Nut,
    Same,
    ShortStart,
    Sides,
    Slots,
    Tooling,
)
from layout.plan.compensating import compensate, unmoved_nut_mm, zero_offset_mm
from layout.plan.laying import lay_out
from layout.plan.sounding import describe_strings
from layout.strings.stopping import predict_stops


def solved(job):
    laid = lay_out(job)
    return compensate(job, laid, describe_strings(job, laid))


def asking(job, nut, saddle, **more):
    return replace(job, compensation=Compensation(nut, saddle, None, 1, 12, **more))


def ends_in_plan(job, figures, *, saddle):
    strings = lay_out(job).strings
    return (strings.bridge_mm if saddle else strings.nut_mm) + figures[:, None] * strings.direction


def off_straight(points):
    """Largest distance along x from the line through the outer two points."""
    x, y = points.T
    line = x[0] + (x[-1] - x[0]) * (y - y[0]) / (y[-1] - y[0])
    return np.abs(x - line).max()


# Nut ---------------------------------------------------------------------------------------------


def test_zero_at_the_edge_and_in_the_kerf(parlour):
    saw = Tooling("saw", kerf_mm=(0.6, 0.6))
    kerf = replace(parlour, nut=Nut(zero="kerf"))
    assert zero_offset_mm(parlour) == 0.0
    assert zero_offset_mm(replace(kerf, tooling=saw)) == 0.3
    assert zero_offset_mm(replace(kerf, tooling=None, slots=Slots(0.5))) == 0.25
    found = solved(asking(replace(kerf, tooling=saw), "none", "straight"))
    assert found.nut_shift_mm.tolist() == [0.3] * 6
    # The ladder's unmoved nut stands there too: its second rung is the choice just made.
    assert found.pitch.ladder[1].rms_cents == pytest.approx(found.pitch.rms_cents, abs=1e-9)


@pytest.mark.parametrize("nut", ["none", "one", "straight", "each", Same(0.4)])
def test_a_zero_fret_holds_every_string_at_zero(parlour, nut):
    found = solved(asking(replace(parlour, nut=Nut(zero="fret")), nut, "each"))
    assert found.nut_shift_mm.tolist() == [0.0] * 6
    assert [(rung.nut, rung.saddle) for rung in found.pitch.ladder] == [
        ("none", "none"),
        ("none", "straight"),
        ("none", "each"),
    ]


def test_a_short_string_stands_behind_its_fret_where_the_job_says_so(banjo):
    strings = (*banjo.strings[:4], replace(banjo.strings[4], starts_at=ShortStart(5, 3.0)))
    job = replace(banjo, strings=strings, nut=Nut(zero="kerf"))
    assert unmoved_nut_mm(job).tolist() == [0.29] * 4 + [-3.0]
    assert solved(job).nut_shift_mm.tolist() == [0.29] * 4 + [-3.0]
    # The longer open string makes every stop sharper by what its length grew.
    behind, plain = (
        solved(asking(each, "none", "none")).pitch.predicted_cents[4, 5:]
        for each in (replace(job, nut=Nut()), banjo)
    )
    scale = lay_out(banjo).strings.scale_mm[4]
    # At its first stop the finger stretches the longer string less.
    assert (behind - plain)[1:] == pytest.approx(1200 * np.log2((scale + 3) / scale), abs=0.6)
    assert 7 < (behind - plain)[0] < 10


# Listed figures ----------------------------------------------------------------------------------

LISTED = (0.1, 0.2, 0.3, 0.4, 0.5, 0.6)


def test_listed_figures_stand_as_they_are(parlour):
    found = solved(asking(parlour, Listed(LISTED), Listed(LISTED)))
    assert tuple(found.nut_shift_mm) == LISTED
    assert tuple(found.setback_mm) == LISTED
    found = solved(asking(parlour, Same(0.4), Same(1.5)))
    assert (set(found.nut_shift_mm), set(found.setback_mm)) == ({0.4}, {1.5})


@pytest.mark.parametrize("name", ["parlour", "fan"])
def test_figures_at_both_sides_lie_on_a_straight_line_in_plan(request, name):
    job = request.getfixturevalue(name)
    found = solved(asking(job, Sides(0.3, 0.9), Sides(1.2, 3.4)))
    assert found.nut_shift_mm[[0, -1]] == pytest.approx([0.3, 0.9], abs=1e-12)
    assert found.setback_mm[[0, -1]] == pytest.approx([1.2, 3.4], abs=1e-12)
    assert off_straight(ends_in_plan(job, found.nut_shift_mm, saddle=False)) < 1e-9
    assert off_straight(ends_in_plan(job, found.setback_mm, saddle=True)) < 1e-9


def test_figures_at_both_sides_leave_a_short_string_s_own_nut(banjo):
    found = solved(asking(banjo, Sides(0.2, 0.5), Sides(1.0, 2.0)))
    assert found.nut_shift_mm[[0, 3, 4]] == pytest.approx([0.2, 0.5, 0.0], abs=1e-12)
    assert off_straight(ends_in_plan(banjo, found.nut_shift_mm, saddle=False)[:4]) < 1e-9
    # Its saddle point is on the line of all.
    assert found.setback_mm[[0, 4]] == pytest.approx([1.0, 2.0], abs=1e-12)
    assert off_straight(ends_in_plan(banjo, found.setback_mm, saddle=True)) < 1e-9


def test_a_listed_short_string_counts_from_where_its_nut_stands(banjo):
    strings = (*banjo.strings[:4], replace(banjo.strings[4], starts_at=ShortStart(5, 3.0)))
    job = replace(banjo, strings=strings)
    found = solved(asking(job, Listed((0.1, 0.1, 0.1, 0.1, 0.2)), "none"))
    assert found.nut_shift_mm.tolist() == pytest.approx([0.1, 0.1, 0.1, 0.1, -2.8], abs=1e-12)


def test_sides_of_one_string(parlour):
    one = replace(parlour, strings=parlour.strings[:1])
    found = solved(asking(one, Sides(0.2, 0.4), Sides(1.0, 2.0)))
    assert (found.nut_shift_mm[0], found.setback_mm[0]) == pytest.approx((0.3, 1.5), abs=1e-12)


# Rules -------------------------------------------------------------------------------------------


def test_straight_lies_straight_and_one_is_one(parlour):
    found = solved(asking(parlour, "one", "straight"))
    assert np.ptp(found.nut_shift_mm) < 1e-12
    assert off_straight(ends_in_plan(parlour, found.setback_mm, saddle=True)) < 1e-9
    assert np.ptp(found.setback_mm) > 0.1


def test_the_prediction_is_that_of_the_stops_as_planned(parlour):
    laid = lay_out(parlour)
    sounding = describe_strings(parlour, laid)
    found = compensate(parlour, laid, sounding)
    cents = predict_stops(
        sounding.body,
        sounding.lie,
        laid.frets.met_mm,
        nut_shift_mm=found.nut_shift_mm,
        setback_mm=found.setback_mm,
    ).cents
    pitch = found.pitch
    assert pitch.predicted_cents == pytest.approx(cents, abs=1e-9)
    assert pitch.error_cents == pytest.approx(cents - laid.target_cents, abs=1e-9)
    assert sum(pitch.parts_cents.values()) == pytest.approx(pitch.error_cents, abs=1e-9)
    balanced = pitch.error_cents[:, :12]
    assert pitch.rms_cents == pytest.approx(np.sqrt(np.mean(balanced**2)), abs=1e-12)
    assert pitch.rms_all_cents == pytest.approx(np.sqrt(np.mean(pitch.error_cents**2)), abs=1e-12)
    worst = pitch.worst
    assert abs(worst.cents) == np.abs(balanced).max()
    assert pitch.error_cents[worst.string - 1, worst.fret - 1] == worst.cents
    assert abs(pitch.worst_all.cents) == np.abs(pitch.error_cents).max()


def test_a_clash_is_heard_where_the_fret_lies_and_never_balanced_away(parlour, lute):
    keyed = replace(
        parlour,
        heights=Heights(EndHeights(Same(0.5), Same(3.5))),
        frets=replace(lute.frets, favour={1: "sharp"}),
        strings=tuple(
            replace(s, note=n.note) for s, n in zip(parlour.strings, lute.strings, strict=True)
        ),
    )
    plain = replace(keyed, frets=lute.frets)
    keyed, plain = (asking(job, "each", "each") for job in (keyed, plain))
    found, other = solved(keyed), solved(plain)
    assert found.setback_mm == pytest.approx(other.setback_mm, abs=1e-9)
    moved = found.pitch.predicted_cents - other.pitch.predicted_cents
    assert np.abs(moved[:, 0]).min() > 10
    assert np.abs(moved[:, 1:]).max() < 1e-9


@pytest.mark.parametrize("name", ["parlour", "banjo"])
def test_more_freedom_is_never_worse(request, name):
    ladder = solved(request.getfixturevalue(name)).pitch.ladder
    assert [(rung.nut, rung.saddle) for rung in ladder] == [
        ("none", "none"),
        ("none", "straight"),
        ("none", "each"),
        ("each", "each"),
    ]
    rms = [rung.rms_cents for rung in ladder]
    assert (np.diff(rms) < 1e-9).all()
    assert rms[0] > 2 * rms[-1]
    assert all(rung.worst_cents >= rung.rms_cents for rung in ladder)


def test_weights_and_range_say_what_is_balanced(parlour):
    heavy = solved(asking(parlour, "none", "each", weights={12: 1000.0}))
    assert np.abs(heavy.pitch.error_cents[:, 11]).max() < 0.05
    plain = solved(asking(parlour, "none", "each"))
    assert np.abs(plain.pitch.error_cents[:, 11]).max() > 0.2
    one = solved(replace(parlour, compensation=Compensation("none", "each", None, 5, 5)))
    assert np.abs(one.pitch.error_cents[:, 4]).max() < 1e-6
    assert one.pitch.worst.fret == 5


def test_a_saddle_s_thickness_limits_and_costs(parlour):
    thin = replace(parlour, compensation=Compensation("each", "each", 0.5, 1, 12))
    found = solved(thin)
    assert found.strip.width_mm <= 0.5 + 1e-9
    assert found.limit_cost_cents > 0.05
    wide = solved(replace(parlour, compensation=Compensation("each", "each", 5.0, 1, 12)))
    assert wide.limit_cost_cents == 0.0
    assert solved(asking(parlour, "each", "each")).limit_cost_cents is None


def test_the_strip_holds_every_crown_point(parlour):
    found = solved(parlour)
    points = ends_in_plan(parlour, found.setback_mm, saddle=True)
    strip = found.strip
    away = (points[:, 0] - strip.at_centre_mm) * np.cos(strip.slant) - points[:, 1] * np.sin(
        strip.slant
    )
    assert np.abs(away).max() == pytest.approx(strip.width_mm / 2, abs=1e-9)


def test_tensions_are_those_over_the_planned_nut_and_saddle(parlour):
    job = asking(parlour, Same(0.0), Same(6.0))
    longer, plain = solved(job).tension_n, solved(asking(parlour, "none", "none")).tension_n
    assert longer / plain == pytest.approx((634.65 / 628.65) ** 2, rel=2e-4)


# Without data ------------------------------------------------------------------------------------


@pytest.mark.parametrize("lacking", ["gauges", "heights"])
def test_without_gauges_or_heights_nothing_is_claimed(six, parlour, lacking):
    job = six if lacking == "gauges" else replace(parlour, heights=None)
    found = solved(asking(job, Listed(LISTED), Sides(1.0, 2.0)))
    assert found.pitch is None
    assert found.tension_n is None
    assert found.limit_cost_cents is None
    assert tuple(found.nut_shift_mm) == LISTED
    assert off_straight(ends_in_plan(job, found.setback_mm, saddle=True)) < 1e-9
    assert found.strip.width_mm < 1e-9


def test_open_strings_stay_where_they_are(parlour):
    bass = replace(parlour.strings[5], open_length_mm=900.0)
    found = solved(replace(parlour, strings=(*parlour.strings, bass)))
    assert (found.nut_shift_mm[6], found.setback_mm[6]) == (0.0, 0.0)
    assert np.isnan(found.pitch.predicted_cents[6]).all()
    assert np.isnan(found.pitch.target_cents[6]).all()
    assert np.isfinite(found.pitch.predicted_cents[:6]).all()


def test_nothing_served_has_no_claim(banjo):
    pitch = solved(banjo).pitch
    assert np.isnan(pitch.predicted_cents[4, :5]).all()
    assert np.isfinite(pitch.predicted_cents[4, 5:]).all()
