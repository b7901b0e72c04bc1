from dataclasses import replace

import pytest

from layout.geometry.cross import CrossLine
from layout.instrument import (
    Board,
    Compensation,
    Listed,
    Margins,
    MultiScale,
    Nut,
    OneRadius,
    ParallelScale,
    Slots,
    SpreadList,
    SpreadRule,
    Tooling,
    Widths,
    Wire,
)
from layout.pitch.notes import read_note
from layout.plan.doubts import find_doubts
from layout.plan.make import make_plan


def found(job, code):
    return [finding for finding in make_plan(job).findings if finding.code == code]


def only(job, code):
    (finding,) = found(job, code)
    return finding


def test_a_sound_job_raises_no_doubts(parlour):
    assert make_plan(parlour).findings == ()


# Slots -------------------------------------------------------------------------------------------


def cut_with(job, tooling, width=0.58, **wire):
    return replace(job, tooling=tooling, slots=Slots(width), wire=Wire(**wire))


def test_slot_narrower_than_cutter(parlour):
    finding = only(cut_with(parlour, Tooling("router", 0.6)), "slot-narrower-than-cutter")
    assert (finding.severity, finding.unit) == ("error", "mm")
    assert finding.amount == pytest.approx(0.02, abs=1e-12)
    assert "0.02 mm narrower than the cutter" in finding.text
    laser = Tooling("laser", kerf_mm=(0.6, 0.6), lines="offset")
    assert "not wider than the kerf" in only(cut_with(parlour, laser), finding.code).text
    for cutter in (0.59, 0.58, 0.4):
        assert not found(cut_with(parlour, Tooling("router", cutter)), finding.code)


@pytest.mark.parametrize(
    ("tang", "code"),
    [
        (0.58, "slot-tight-for-tang"),
        (0.56, "slot-tight-for-tang"),
        (0.55, None),
        (0.50, None),
        (0.49, "slot-loose-for-tang"),
    ],
)
def test_finished_slot_against_tang(parlour, tang, code):
    job = cut_with(parlour, Tooling("saw", kerf_mm=(0.58, 0.58)), tang_mm=tang)
    codes = {f.code for f in make_plan(job).findings}
    assert codes == ({code} if code else set())
    if code:
        assert only(job, code).amount == pytest.approx(0.58 - tang, abs=1e-12)
        assert only(job, code).severity == "warning"


def test_a_laser_slot_left_wider_by_the_kerf_is_named(parlour):
    on = Tooling("laser", kerf_mm=(0.15, 0.15), lines="on")
    finding = only(cut_with(parlour, on, tang_mm=0.53), "slot-loose-for-tang")
    assert finding.amount == pytest.approx(0.58 + 0.15 - 0.53, abs=1e-12)
    assert "wider by its kerf" in finding.text
    offset = replace(on, lines="offset")
    assert not make_plan(cut_with(parlour, offset, tang_mm=0.53)).findings


def test_little_wood_under_a_slot(parlour):
    flat = replace(parlour, board=Board(thickness_mm=3.8))
    assert not found(flat, "little-wood-under-slot")  # 3.8 - 1.9 - 0.4 is 1.5
    finding = only(replace(flat, board=Board(thickness_mm=3.7)), "little-wood-under-slot")
    assert finding.amount == pytest.approx(1.4, abs=1e-9)
    assert finding.severity == "warning"
    # Over a curve the ends of the longest slot lie lowest.
    curved = replace(parlour, board=Board(thickness_mm=3.8, top=OneRadius(254.0)))
    finding = only(curved, "little-wood-under-slot")
    assert finding.fret == 20
    assert 0.0 < finding.amount < 0.5
    assert only(replace(flat, board=Board(thickness_mm=2.0)), finding.code).severity == "error"
    blind = replace(curved, slots=Slots(run="blind", short_of_edge_mm=8.0))
    assert only(blind, finding.code).amount > finding.amount
    assert not found(replace(curved, wire=Wire()), finding.code)


def test_nut_shift_at_a_zero_fret(parlour):
    zero = replace(parlour, nut=Nut(zero="fret"))
    assert only(zero, "nut-shift-at-zero-fret").severity == "warning"
    still = replace(zero, compensation=Compensation("none", "each", None, 1, 12))
    assert not found(still, "nut-shift-at-zero-fret")
    assert not found(parlour, "nut-shift-at-zero-fret")


# Strings -----------------------------------------------------------------------------------------


@pytest.mark.parametrize(("margin", "severity"), [(1.0, "warning"), (-0.5, "error"), (1.7, None)])
def test_string_near_edge(parlour, margin, severity):
    job = replace(parlour, board=Board(Margins(margin, 4.0)))
    findings = found(job, "string-near-edge")
    # String 1 is 0.3 mm thick, string 6 1.35 mm: the bass one comes nearer.
    if severity is None:
        assert [f.string for f in findings] == [6]
        assert findings[0].amount == pytest.approx(1.7 - 1.3462 / 2, abs=0.02)
        return
    assert [f.string for f in findings] == [1, 6]
    assert findings[0].severity == severity
    assert findings[0].amount == pytest.approx(margin - 0.3048 / 2, abs=0.02)


@pytest.mark.parametrize("tail", [0.5, 3.5])
def test_string_near_edge_at_the_tail(parlour, tail):
    job = replace(parlour, board=Board(Margins(3.5, tail)))
    assert bool(found(job, "string-near-edge")) is (tail < 1)


def test_strings_too_close(parlour):
    job = replace(parlour, spread=SpreadRule(18.0, 54.0), board=Board())
    findings = found(job, "strings-too-close")
    assert {f.severity for f in findings} == {"warning"}
    assert "at the nut" in findings[0].text
    # 3.6 mm between centres less half of 12 and 16 thousandths, and so on.
    assert findings[0].string == 3
    assert findings[0].amount == pytest.approx(3.6 - (24 + 32) / 2 * 0.0254, abs=1e-9)
    touching = replace(parlour, spread=SpreadRule(4.0, 54.0), board=Board())
    assert found(touching, "strings-too-close")[-1].severity == "error"


def test_strings_of_one_course_may_lie_close(parlour):
    paired = tuple(replace(s, course=str(i // 2)) for i, s in enumerate(parlour.strings))
    spread = SpreadRule(36.0, 54.0, pair_nut_mm=1.0, pair_saddle_mm=1.0)
    assert not found(replace(parlour, strings=paired, spread=spread), "strings-too-close")
    none = replace(spread, pair_nut_mm=0.0)
    errors = found(replace(parlour, strings=paired, spread=none), "strings-too-close")
    assert [(f.string, f.severity) for f in errors] == [(1, "error"), (3, "error"), (5, "error")]


def test_near_breaking_load(parlour):
    high = replace(parlour.strings[0], note=read_note("A4"))
    job = replace(parlour, strings=(high, *parlour.strings[1:]))
    finding = only(job, "near-breaking-load")
    assert (finding.string, finding.unit) == (1, "share")
    assert finding.amount > 0.85
    assert "eye protection" in finding.text


# Frets -------------------------------------------------------------------------------------------


def test_stops_out_of_order(six):
    assert not found(six, "stops-out-of-order")
    plan = make_plan(six)
    met = plan.frets.met_mm.copy()
    met[2, 4] = met[2, 3] - 0.5
    findings = find_doubts(replace(plan, frets=replace(plan.frets, met_mm=met)))
    (finding,) = [f for f in findings if f.code == "stops-out-of-order"]
    assert (finding.severity, finding.string, finding.fret) == ("error", 3, 5)
    assert finding.amount == pytest.approx(-0.5, abs=1e-9)


def test_nut_steep(fan):
    steep = replace(fan, scale=MultiScale(600.0, 700.0, 12.0), board=Board(tail_end="along"))
    finding = only(steep, "nut-steep")
    assert finding.amount > 20
    assert not found(fan, "nut-steep")
    assert only(replace(steep, scale=MultiScale(700.0, 600.0, 12.0)), "nut-steep").amount > 20


def test_fret_misses_string(six):
    # A listed string outside the width given for the board.
    spread = SpreadList((18, 10.8, 3.6, -3.6, -10.8, -26), (27, 16.2, 5.4, -5.4, -16.2, -32))
    job = replace(six, spread=spread, board=Board(Widths(("nut", 43.0), ("tail", 56.0))))
    findings = found(job, "fret-misses-string")
    assert {f.string for f in findings} == {6}
    assert findings[0].severity == "error"
    assert not found(six, "fret-misses-string")


def test_fret_runs_off_board(fan):
    # Square at the far end: near the nut the frets lean, and a square nut end cuts them off.
    plan = make_plan(fan)
    short = replace(plan.board, nut_end=CrossLine(plan.frets.at_centre_mm[0] - 1.0))
    doubts = find_doubts(replace(plan, board=short))
    findings = [f for f in doubts if f.code == "fret-runs-off-board"]
    assert [f.fret for f in findings] == [1]
    assert findings[0].amount > 0
    assert not found(fan, "fret-runs-off-board")


def test_strings_disagree(lute, six):
    findings = found(lute, "strings-disagree")
    assert [f.fret for f in findings] == [1, 3, 6, 8]
    assert {f.severity for f in findings} == {"warning"}
    assert findings[0].amount == pytest.approx(41.06, abs=0.005)
    assert not found(six, "strings-disagree")


# Pitch -------------------------------------------------------------------------------------------


def test_no_claim_about_pitch(six, parlour):
    finding = only(six, "no-claim-about-pitch")
    assert finding.severity == "note"
    assert "string data for string 1" in finding.text
    assert "heights" in finding.text
    only_heights = only(replace(parlour, heights=None), "no-claim-about-pitch").text
    assert "string data" not in only_heights
    assert not found(parlour, "no-claim-about-pitch")


def test_a_listed_saddle_that_does_not_fit(parlour):
    listed = Listed((1.0, 4.0, 1.0, 4.0, 1.0, 4.0))
    job = replace(parlour, compensation=Compensation("none", listed, 2.4, 1, 12))
    finding = only(job, "saddle-too-thin")
    assert finding.severity == "warning"
    assert finding.amount == pytest.approx(make_plan(job).ends.strip.width_mm - 2.4, abs=1e-9)
    wide = replace(job, compensation=replace(job.compensation, saddle_thickness_mm=6.0))
    assert not found(wide, "saddle-too-thin")


def test_a_saddle_that_limits_intonation(parlour):
    thin = replace(parlour, compensation=Compensation("each", "each", 0.5, 1, 12))
    finding = only(thin, "saddle-limits-intonation")
    assert finding.severity == "note"
    assert finding.amount == make_plan(thin).ends.limit_cost_cents > 0.01
    assert not found(parlour, "saddle-limits-intonation")


def test_a_thin_saddle_never_exceeds_its_thickness(parlour):
    thin = replace(parlour, compensation=Compensation("each", "each", 0.5, 1, 12))
    assert not found(thin, "saddle-too-thin")


def test_findings_come_in_the_order_a_maker_asks(parlour):
    job = replace(
        parlour,
        scale=ParallelScale(628.65),
        tooling=Tooling("router", 0.6),
        board=Board(Margins(1.0, 1.0), thickness_mm=3.0),
        heights=None,
        compensation=Compensation(),
    )
    codes = list(dict.fromkeys(f.code for f in make_plan(job).findings))
    assert codes == [
        "slot-narrower-than-cutter",
        "string-near-edge",
        "no-claim-about-pitch",
        "little-wood-under-slot",
    ]
