"""Is a part that cannot be made, or hardly, found?"""

from __future__ import annotations

from dataclasses import replace

import pytest

from layout.instrument import Bridge, Compensation, Listed, Nut, ParallelScale, SlottingTemplate
from layout.plan.make import make_plan
from layout.plan.part_checks import PART_CHECKS, notch_gaps_mm, steepest_fret


def found(instrument):
    plan = make_plan(instrument)
    return {finding.code: finding for check in PART_CHECKS for finding in check(plan)}


def listed(nut, saddle=(0.0,) * 6):
    return Compensation(Listed(tuple(nut)), Listed(tuple(saddle)))


def test_an_ordinary_job_has_none_of_these(six, parlour, fan) -> None:
    for job in (six, parlour, fan, replace(six, template=SlottingTemplate())):
        assert found(job) == {}


def test_a_template_needs_square_frets(fan) -> None:
    job = replace(fan, template=SlottingTemplate())
    plan = make_plan(job)
    # The steepest fret lies furthest from the square one: the last.
    assert steepest_fret(plan) == 24
    finding = found(job)["template-needs-square-frets"]
    assert finding.severity == "error"
    assert finding.fret == 24
    assert finding.unit == "degrees"
    assert finding.amount < -5
    assert set(found(job)) == {"template-needs-square-frets"}


@pytest.mark.parametrize(("notch", "severity"), [(9.7, None), (9.9, "warning"), (12.0, "error")])
def test_notches_leave_two_millimetres(six, notch, severity) -> None:
    job = replace(six, template=SlottingTemplate(notch))
    # By hand: frets 19 and 20 of 628.65 mm are 628.65 (2^(-19/12) - 2^(-20/12)) = 11.774 apart.
    apart = 628.65 * (2 ** (-19 / 12) - 2 ** (-20 / 12))
    assert notch_gaps_mm(make_plan(job))[-1] == pytest.approx(apart - notch, abs=1e-9)
    findings = found(job)
    if severity is None:
        assert findings == {}
        return
    finding = findings["notches-too-close"]
    assert (finding.severity, finding.fret) == (severity, 20)
    assert finding.amount == pytest.approx(apart - notch, abs=1e-9)
    assert ("no template is drawn" in finding.text) == (severity == "error")


def test_the_first_notch_is_close_to_zero_s(six) -> None:
    job = replace(six, scale=ParallelScale(100.0), template=SlottingTemplate(5.0))
    gaps = notch_gaps_mm(make_plan(job))
    assert gaps[0] == pytest.approx(100 * (1 - 2 ** (-1 / 12)) - 5, abs=1e-9)


@pytest.mark.parametrize(("shift", "count"), [(2.99, 0), (3.01, 1), (-3.01, 1)])
def test_a_large_nut_shift(six, shift, count) -> None:
    finding = found(replace(six, compensation=listed((0, 0, shift, 0, 0, 0)))).get(
        "nut-shift-large"
    )
    assert (finding is not None) == bool(count)
    if finding:
        assert finding.severity == "warning"
        assert finding.string == 3
        assert finding.amount == pytest.approx(shift)


def test_half_a_kerf_is_no_shift(six) -> None:
    job = replace(six, compensation=listed((3.2,) * 6), nut=Nut(zero="kerf"))
    assert "nut-shift-large" not in found(job)  # 3.2 less half of 0.58


def test_a_step_through_the_whole_nut(six) -> None:
    nut = Nut(fit="trim", thickness_mm=2.0)
    finding = found(replace(six, nut=nut, compensation=listed((2.5, 0.2, 1, 1, 1, 1))))
    assert finding["nut-too-thin"].severity == "error"
    assert finding["nut-too-thin"].string == 2
    assert finding["nut-too-thin"].amount == pytest.approx(0.3)
    assert found(replace(six, nut=nut, compensation=listed((2.1, 0.2, 1, 1, 1, 1)))) == {}


@pytest.mark.parametrize(("travel", "short"), [(2.1, False), (1.5, True)])
def test_bridge_pieces_reach_every_setback(six, travel, short) -> None:
    job = replace(
        six,
        bridge=Bridge("separate", travel),
        compensation=listed((0,) * 6, (1, 2.5, 1.2, 1.5, 2.2, 3)),
    )
    findings = found(job)
    assert ("bridge-travel-too-short" in findings) == short
    if short:
        assert findings["bridge-travel-too-short"].amount == pytest.approx(0.5)
        assert findings["bridge-travel-too-short"].severity == "warning"


def test_codes_read_as_words_and_texts_say_what_to_do(six) -> None:
    job = replace(six, compensation=listed((6, 0, 0, 0, 0, -4)), nut=Nut(fit="trim"))
    findings = found(job)
    assert set(findings) == {"nut-shift-large", "nut-too-thin"}
    for finding in findings.values():
        assert finding.text.endswith(".")
        assert finding.unit == "mm"
