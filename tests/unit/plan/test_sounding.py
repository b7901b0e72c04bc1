from dataclasses import replace
from math import pi

import numpy as np
import pytest

from layout.instrument import (
    ActionGaps,
    EndHeights,
    Heights,
    Listed,
    Nut,
    Same,
    ShortStart,
    Sides,
    StatedTension,
    Stretch,
    StringSpec,
)
from layout.pitch.notes import read_note
from layout.plan.laying import lay_out
from layout.plan.sounding import (
    describe_strings,
    figure_per_string,
    note_hz,
    open_pitches,
    relief_span,
    string_heights,
)

E4_HZ = 440.0 * 2 ** (-5 / 12)


def sounding(job):
    return describe_strings(job, lay_out(job))


def with_first(job, **changes):
    return replace(job, strings=(replace(job.strings[0], **changes), *job.strings[1:]))


def assumed_keys(job):
    return [item.key for item in sounding(job).assumed]


# Heights -----------------------------------------------------------------------------------------


def relief(x, job, laid, index):
    """c(x) of the physics page, Stopping it."""
    r, x1, x_j = job.heights.relief_mm, laid.own_mm[index, 0], laid.own_mm[index, 13]
    inside = (x > x1) & (x < x_j)
    return np.where(inside, -4 * r * (x - x1) * (x_j - x) / (x_j - x1) ** 2, 0.0)


def test_heights_from_action_gaps(parlour):
    laid = lay_out(parlour)
    at_nut, at_saddle = string_heights(parlour, laid)
    for index, second in enumerate(np.linspace(1.8, 2.3, 6)):
        a, x0 = laid.own_mm[index, [0, 11]], laid.strings.scale_mm[index]
        over = at_nut[index] + (at_saddle[index] - at_nut[index]) * a / x0
        assert over - relief(a, parlour, laid, index) == pytest.approx([0.4, second], abs=1e-12)


def test_sides_run_linearly_by_y_at_the_nut(parlour):
    y = np.array([20.0, 10.0, 8.0, -4.0, -12.0, -20.0])
    figures = figure_per_string(Sides(1.0, 3.0), parlour, y)
    assert figures.tolist() == pytest.approx([1.0, 1.5, 1.6, 2.2, 2.6, 3.0], abs=1e-12)


def test_sides_are_those_of_the_fretted_strings(parlour):
    bass = StringSpec(note=read_note("D2"), open_length_mm=900.0)
    job = replace(parlour, strings=(*parlour.strings, bass))
    y = np.array([18.0, 10.8, 3.6, -3.6, -10.8, -18.0, -25.2])
    assert figure_per_string(Sides(1.0, 3.0), job, y)[:6].tolist() == pytest.approx(
        [1.0, 1.4, 1.8, 2.2, 2.6, 3.0], abs=1e-12
    )


def test_same_listed_and_one_string(parlour):
    y = np.linspace(18, -18, 6)
    assert figure_per_string(Same(2.0), parlour, y).tolist() == [2.0] * 6
    listed = (1.0, 2.0, 3.0, 4.0, 5.0, 6.0)
    assert tuple(figure_per_string(Listed(listed), parlour, y)) == listed
    one = replace(parlour, strings=parlour.strings[:1])
    assert figure_per_string(Sides(1.0, 2.0), one, np.zeros(1)).tolist() == [1.5]
    # Strings on one line have no sides.
    assert figure_per_string(Sides(1.0, 2.0), parlour, np.zeros(6)).tolist() == [1.5] * 6


def test_heights_at_the_ends_are_taken_as_given(parlour):
    job = replace(parlour, heights=Heights(EndHeights(Same(0.5), Sides(3.0, 4.0))))
    at_nut, at_saddle = string_heights(job, lay_out(job))
    assert at_nut.tolist() == [0.5] * 6
    assert at_saddle.tolist() == pytest.approx([3.0, 3.2, 3.4, 3.6, 3.8, 4.0], abs=1e-12)


def test_over_a_zero_fret_the_strings_leave_at_the_crowns(parlour, banjo):
    at_nut, _ = string_heights(replace(parlour, nut=Nut(zero="fret")), lay_out(parlour))
    assert at_nut.tolist() == [0.0] * 6
    at_nut, _ = string_heights(replace(banjo, nut=Nut(zero="fret")), lay_out(banjo))
    assert at_nut[:4].tolist() == [0.0] * 4
    assert at_nut[4] > 0  # a short string has a nut of its own


def test_without_heights_nothing_is_known(six):
    at_nut, at_saddle = string_heights(six, lay_out(six))
    assert np.isnan(at_nut).all()
    assert np.isnan(at_saddle).all()


@pytest.mark.parametrize(("joint", "count", "ends_at"), [(14, 20, 14), (14, 12, 12), (1, 20, None)])
def test_relief_runs_from_fret_1_to_the_joint(parlour, fret_rows, joint, count, ends_at):
    heights = replace(parlour.heights, joint=joint)
    job = replace(parlour, heights=heights, frets=fret_rows(count))
    laid = lay_out(job)
    start, end = relief_span(job, laid.own_mm)
    if ends_at is None:
        assert np.isnan(start).all()
        assert np.isnan(end).all()
        return
    assert start == pytest.approx(laid.own_mm[:, 0], abs=1e-12)
    assert end == pytest.approx(laid.own_mm[:, ends_at - 1], abs=1e-12)


def test_a_short_string_reads_the_board_s_labels_from_its_own_start(banjo):
    laid = lay_out(banjo)
    at_nut, at_saddle = string_heights(banjo, laid)
    a, x0 = laid.own_mm[4, [0, 11]], laid.strings.scale_mm[4]
    assert a[0] < 0 < a[1]
    assert at_nut[4] + (at_saddle[4] - at_nut[4]) * a / x0 == pytest.approx([0.4, 2.6], abs=1e-12)


# Strings -----------------------------------------------------------------------------------------


def test_open_pitches(parlour, lute):
    hz = open_pitches(parlour)
    semitones = np.array([-5, -10, -14, -19, -24, -29])
    assert hz == pytest.approx(440 * 2.0 ** (semitones / 12), rel=1e-12)
    assert open_pitches(with_first(parlour, note=None, hz=330.0))[0] == 330.0
    # Quarter comma: G lies two fifths of 5^(1/4) below A, an octave up.
    assert open_pitches(lute)[0] == pytest.approx(440 * 2 / 5 ** (2 / 4), rel=1e-12)


def test_a_plain_string_from_material_and_gauge(parlour):
    loads = sounding(parlour).loads
    d = 0.012 * 25.4e-3
    assert loads.unit_mass_kg_per_m[0] == pytest.approx(7850 * pi * d**2 / 4, rel=1e-12)
    assert loads.axial_stiffness_n[0] == pytest.approx(200e9 * pi * d**2 / 4, rel=1e-12)
    assert loads.bending_stiffness_n_m2[0] == pytest.approx(200e9 * pi * d**4 / 64, rel=1e-12)


def test_what_is_measured_wins(parlour):
    job = with_first(
        parlour,
        unit_mass_kg_per_m=0.6e-3,
        axial_stiffness_n=15000.0,
        bending_stiffness_n_m2=9e-5,
        stretch=Stretch(42.0, 0.7, 650.0),
        tension=StatedTension(70.0),
    )
    loads = sounding(job).loads
    assert loads.unit_mass_kg_per_m[0] == 0.6e-3
    assert loads.axial_stiffness_n[0] == 15000.0
    assert loads.bending_stiffness_n_m2[0] == 9e-5


def test_a_core_left_out_is_estimated_and_said(parlour):
    job = replace(parlour, strings=tuple(replace(s, core_mm=None) for s in parlour.strings))
    assert assumed_keys(job) == [f"strings[{n}].core" for n in (3, 4, 5, 6)]
    assert assumed_keys(parlour) == []
    core = (0.24 + 0.148 * 53 * 0.0254) / 1000
    assert sounding(job).loads.axial_stiffness_n[5] == pytest.approx(
        200e9 * pi * core**2 / 4, rel=1e-12
    )


def nylon(**more):
    return {
        "make": "plain",
        "material": "nylon",
        "gauge_mm": 0.71,
        "core_mm": None,
        **more,
    }


def test_a_stated_tension_gives_the_mass(parlour):
    job = with_first(parlour, **nylon(tension=StatedTension(70.0, 650.0, read_note("D4"))))
    found = sounding(job)
    d4 = 440 * 2 ** (-7 / 12)
    assert found.loads.unit_mass_kg_per_m[0] == pytest.approx(70 / (2 * 0.65 * d4) ** 2, rel=1e-12)
    assert found.loads.axial_stiffness_n[0] == pytest.approx(3500.0, rel=1e-12)
    assert found.loads.bending_stiffness_n_m2[0] == pytest.approx(3500 * 0.71e-3**2 / 16, rel=1e-12)
    # What the material would have given was not used, so it is not listed.
    said = {item.key: item.value for item in found.assumed}
    assert said == {
        "strings[1].axial_stiffness": "50 x the stated tension",
        "strings[1].bending_stiffness": (
            "axial stiffness x gauge squared / 16; bending tests give about a third of it"
        ),
    }


def test_a_tension_without_a_place_is_for_the_strings_own_length_and_note(parlour):
    job = with_first(parlour, **nylon(tension=StatedTension(70.0)))
    scale = np.hypot(628.65, 9.0) / 1000
    assert sounding(job).loads.unit_mass_kg_per_m[0] == pytest.approx(
        70 / (2 * scale * E4_HZ) ** 2, rel=1e-12
    )


@pytest.mark.parametrize("index", [0, 5])
def test_steel_with_a_stated_tension_keeps_the_stiffnesses_of_its_diameters(parlour, index):
    # On purpose: a steel core's stiffness is known better from its diameter than from tension.
    job = replace(
        parlour,
        strings=tuple(
            replace(s, tension=StatedTension(100.0)) if i == index else s
            for i, s in enumerate(parlour.strings)
        ),
    )
    found, plain = sounding(job), sounding(parlour)
    assert found.loads.axial_stiffness_n[index] == plain.loads.axial_stiffness_n[index]
    assert found.loads.bending_stiffness_n_m2[index] == plain.loads.bending_stiffness_n_m2[index]
    assert found.loads.unit_mass_kg_per_m[index] != plain.loads.unit_mass_kg_per_m[index]
    assert found.loads.tension_n[index] == pytest.approx(100.0, rel=0.03)
    assert [item.key for item in found.assumed] == [f"strings[{index + 1}].axial_stiffness"]


def test_a_stretch_test_gives_the_axial_stiffness(parlour):
    job = with_first(parlour, **nylon(stretch=Stretch(42.0, 0.7, 650.0)))
    found = sounding(job)
    q = 0.7 / 650
    tension = found.loads.tension_n[0]
    # The tension of the string as laid; heights lengthen it by some parts in a million.
    assert found.loads.axial_stiffness_n[0] == pytest.approx(
        tension * (2 ** (42 / 600) / (1 + q) - 1) / q, rel=1e-4
    )
    assert found.assumed == ()


def test_a_mean_modulus_is_said(parlour):
    assert assumed_keys(with_first(parlour, **nylon())) == ["strings[1].axial_stiffness"]
    measured = with_first(parlour, **nylon(axial_stiffness_n=3000.0))
    assert assumed_keys(measured) == []


def test_wound_on_a_soft_core_is_never_estimated(parlour):
    job = with_first(
        parlour, make="wound", material="silver-plated copper", gauge_mm=0.7, core_material="nylon"
    )
    found = sounding(job)
    assert np.isnan(found.loads.tension_n[0])
    assert np.isfinite(found.loads.tension_n[1:]).all()
    assert found.body is None
    assert found.lie is None
    assert found.loads.total_n is None


def test_tension_tunes_the_open_string(parlour):
    # A string far from stiff: T = mu (2 L f)^2 but for its own bending, under 1 %.
    loads = sounding(parlour).loads
    ideal = loads.unit_mass_kg_per_m[0] * (2 * 0.62865 * E4_HZ) ** 2
    assert loads.tension_n[0] == pytest.approx(ideal, rel=0.01)
    assert loads.tension_n[0] < ideal
    assert loads.total_n == pytest.approx(loads.tension_n.sum(), rel=1e-15)


def test_shares_of_the_breaking_load_are_those_of_steel(parlour):
    share = sounding(with_first(parlour, **nylon())).loads.share_of_break
    assert np.isnan(share[0])
    assert ((share[1:] > 0.2) & (share[1:] < 0.9)).all()


def test_open_strings_have_loads_and_no_stops(parlour):
    bass = replace(parlour.strings[5], note=read_note("D2"), open_length_mm=900.0)
    found = sounding(replace(parlour, strings=(*parlour.strings, bass)))
    assert found.loads.tension_n.shape == (7,)
    assert np.isfinite(found.loads.tension_n[6])
    assert found.body.axial_stiffness_n.shape == (6,)
    assert np.shape(found.lie.scale_mm) == (6,)


def test_without_heights_loads_are_still_told(parlour):
    found = sounding(replace(parlour, heights=None))
    assert found.body is None
    assert np.isfinite(found.loads.tension_n).all()


def test_the_lie_carries_finger_supports_and_relief(parlour):
    lie = sounding(parlour).lie
    assert (lie.finger_behind_mm, lie.finger_press_mm, lie.free_mm) == (8.0, 0.0, 0.0)
    assert lie.relief_mm == 0.1


def test_a_note_s_pitch(parlour):
    assert note_hz(read_note("E4 -50c"), parlour) == pytest.approx(
        E4_HZ * 2 ** (-50 / 1200), rel=1e-12
    )


def test_gaps_may_be_given_at_any_two_frets(parlour, banjo):
    for job in (parlour, banjo):
        gaps = ActionGaps(
            3, Same(0.8), 15, Listed(tuple(2.0 + 0.1 * i for i in range(len(job.strings))))
        )
        changed = replace(job, heights=Heights(gaps))
        laid = lay_out(changed)
        at_nut, at_saddle = string_heights(changed, laid)
        over = at_nut[:, None] + (at_saddle - at_nut)[:, None] * (
            laid.own_mm[:, [2, 14]] / laid.strings.scale_mm[:, None]
        )
        assert over[:, 0] == pytest.approx(0.8, abs=1e-12)
        assert over[:, 1] == pytest.approx(gaps.second_gap.values, abs=1e-12)


def test_standing_behind_a_fret_leaves_heights_alone(banjo):
    strings = (*banjo.strings[:4], replace(banjo.strings[4], starts_at=ShortStart(5, 6.0)))
    behind = replace(banjo, strings=strings)
    for one, other in zip(
        string_heights(banjo, lay_out(banjo)), string_heights(behind, lay_out(behind)), strict=True
    ):
        assert one == pytest.approx(other, abs=1e-12)
