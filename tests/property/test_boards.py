"""What must hold of the plan of any board."""

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from layout.instrument import (
    Board,
    Frets,
    Instrument,
    Margins,
    MultiScale,
    ParallelScale,
    Reference,
    Slots,
    SpreadRule,
    StringSpec,
    TwoRadii,
)
from layout.job.read import read_job_text
from layout.job.records import load_library_record
from layout.pitch.notes import read_note
from layout.pitch.temperament import equal
from layout.plan.make import make_plan

few = settings(max_examples=25, deadline=None, derandomize=True)

NOTES = ["E4", "B3", "G3", "D3", "A2", "E2", "B1", "F#1"]


@st.composite
def boards(draw, keyed=False):
    """Draw a board without string data: parallel or on two scales, any rule of spread."""
    strings = draw(st.integers(2, 8))
    count = draw(st.integers(1, 24))
    short = draw(st.floats(250.0, 900.0))
    nut = draw(st.floats(5.0, 9.0)) * (strings - 1)
    saddle = nut * draw(st.floats(1.0, 1.6))
    scale = ParallelScale(short)
    slant = "square"
    if draw(st.booleans()):
        # Fans as they are built: the nut leans no more than about 20 degrees.
        other = short + draw(st.floats(-0.3, 0.3)) * nut
        scale = MultiScale(short, other, draw(st.sampled_from(["nut", 0.0, 5.0, 7.5, "bridge"])))
        slant = "free"
    gauges = draw(st.lists(st.floats(0.2, 1.6), min_size=strings, max_size=strings))
    temperament = load_library_record("meantone-quarter-comma") if keyed else equal(12)
    return Instrument(
        title="Any",
        reference=Reference(read_note("A4"), 440.0),
        scale=scale,
        strings=tuple(
            StringSpec(note=read_note(name), gauge_mm=gauge)
            for name, gauge in zip(NOTES, gauges, strict=False)
        ),
        frets=Frets(
            count,
            temperament,
            "key" if keyed else "open",
            labels=tuple(str(n) for n in range(1, count + 1)),
            steps=tuple(range(1, count + 1)),
            slant=slant,
        ),
        spread=SpreadRule(nut, saddle, draw(st.sampled_from(["centres", "gaps"]))),
        board=Board(
            Margins(draw(st.floats(1.0, 6.0)), draw(st.floats(1.0, 6.0))),
            tail_end="along",
            top=draw(st.sampled_from([None, TwoRadii(("nut", 250.0), ("tail", 400.0))])),
        ),
    )


def lines_of(plan):
    """Everything that is measured in mm in plan, by name."""
    return {
        "nut": plan.strings.nut_mm,
        "bridge": plan.strings.bridge_mm,
        "frets": plan.frets.at_centre_mm,
        "met": plan.frets.met_mm,
        "wood": plan.board.wood_mm,
        "ends": np.array([(p.cut_treble_mm, p.cut_bass_mm) for p in plan.pieces]),
        "wire": np.array([p.wire_mm for p in plan.pieces]),
    }


def grown(job, by):
    """The same board, every length ``by`` times as long."""
    scale, spread, board = job.scale, job.spread, job.board
    if isinstance(scale, MultiScale):
        scale = MultiScale(scale.treble_mm * by, scale.bass_mm * by, scale.square_at)
    else:
        scale = ParallelScale(scale.length_mm * by)
    top = board.top and TwoRadii(("nut", 250.0 * by), ("tail", 400.0 * by))
    edges = Margins(board.edges.nut_mm * by, board.edges.tail_mm * by)
    return replace(
        job,
        scale=scale,
        spread=replace(spread, nut_mm=spread.nut_mm * by, saddle_mm=spread.saddle_mm * by),
        strings=tuple(replace(s, gauge_mm=s.gauge_mm * by) for s in job.strings),
        board=replace(board, edges=edges, top=top, past_last_fret_mm=board.past_last_fret_mm * by),
        slots=Slots(past_edge_mm=2.0 * by),
    )


@few
@given(job=boards(), by=st.floats(0.5, 2.0))
def test_a_board_grows_as_a_whole(job, by):
    here, there = lines_of(make_plan(job)), lines_of(make_plan(grown(job, by)))
    for name, lengths in here.items():
        np.testing.assert_allclose(there[name], by * lengths, rtol=0, atol=1e-8, err_msg=name)


def mirrored(job):
    """The same board seen in a mirror: strings in reverse, treble and bass changed over."""
    scale = job.scale
    if isinstance(scale, MultiScale):
        scale = MultiScale(scale.bass_mm, scale.treble_mm, scale.square_at)
    return replace(job, strings=job.strings[::-1], scale=scale)


@few
@given(job=st.one_of(boards(), boards(keyed=True)))
def test_the_mirror_image_has_the_same_lengths(job):
    here, there = make_plan(job), make_plan(mirrored(job))
    flip = np.array([1.0, -1.0])
    same = {"rtol": 0, "atol": 1e-8}
    np.testing.assert_allclose(there.strings.nut_mm[::-1] * flip, here.strings.nut_mm, **same)
    np.testing.assert_allclose(there.strings.bridge_mm[::-1] * flip, here.strings.bridge_mm, **same)
    np.testing.assert_allclose(there.frets.at_centre_mm, here.frets.at_centre_mm, **same)
    np.testing.assert_allclose(there.frets.slope, -here.frets.slope, **same)
    np.testing.assert_allclose(there.frets.met_mm[::-1], here.frets.met_mm, **same)
    np.testing.assert_allclose(there.board.wood_mm[::-1] * flip, here.board.wood_mm, **same)
    for one, other in zip(here.pieces, there.pieces, strict=True):
        np.testing.assert_allclose(other.cut_bass_mm * flip, one.cut_treble_mm, **same)
        np.testing.assert_allclose(other.wire_mm, one.wire_mm, **same)
    assert [c.spread_cents for c in there.clash] == pytest.approx(
        [c.spread_cents for c in here.clash], abs=1e-9
    )


@few
@given(job=boards())
def test_stops_advance_along_every_string(job):
    plan = make_plan(job)
    met = np.column_stack((np.zeros(len(job.strings)), plan.frets.met_mm))
    assert (np.diff(met, axis=1) > 0).all()
    assert (plan.frets.met_mm < plan.strings.scale_mm[:, None]).all()
    assert (np.diff(plan.frets.at_centre_mm) > 0).all()


@few
@given(job=boards())
def test_equal_centres_leave_every_string_its_own_stop(job):
    job = replace(job, spread=replace(job.spread, rule="centres"))
    plan = make_plan(job)
    np.testing.assert_allclose(plan.frets.met_mm, plan.own_mm, rtol=0, atol=1e-9)


@few
@given(job=st.one_of(boards(), boards(keyed=True)))
def test_points_lie_on_strings_and_on_frets(job):
    plan = make_plan(job)
    points = plan.strings.points(plan.frets.met_mm)
    for fret in range(job.frets.count):
        on_line = plan.frets.line(fret + 1).x_at(points[:, fret, 1])
        np.testing.assert_allclose(points[:, fret, 0], on_line, rtol=0, atol=1e-8)
    from_nut = np.hypot(*np.moveaxis(points - plan.strings.nut_mm[:, None], -1, 0))
    np.testing.assert_allclose(from_nut, plan.frets.met_mm, rtol=0, atol=1e-8)


@few
@given(job=boards(), turns=st.integers(1, 3))
def test_the_octave_lies_half_way(job, turns):
    steps = tuple(12 * turn for turn in range(1, turns + 1))
    frets = replace(job.frets, count=turns, labels=job.frets.labels[:1] * turns, steps=steps)
    frets = replace(frets, labels=tuple(str(s) for s in steps))
    square_at = {"scale": job.scale}
    if isinstance(job.scale, MultiScale):
        square_at = {"scale": replace(job.scale, square_at="nut")}
    plan = make_plan(replace(job, frets=frets, **square_at))
    halves = plan.strings.scale_mm[:, None] * (1 - 0.5 ** np.arange(1, turns + 1))
    np.testing.assert_allclose(plan.own_mm, halves, rtol=0, atol=1e-9)


JOB = """\
title: Any
unit: {unit}
scale: {scale}
strings: [E4, B3, G3, D3]
spread: {{nut: {nut}, saddle: {saddle}}}
frets: 15
board: {{margin: {margin}, past_last_fret: {past}, thickness: {thick}, radius: {radius}}}
slots: {{width: 0.58 mm, past_edge: {past_edge}}}
"""


@few
@given(
    thousandths=st.fixed_dictionaries(
        {
            "scale": st.integers(15000, 30000),
            "nut": st.integers(800, 1500),
            "saddle": st.integers(1500, 2200),
            "margin": st.integers(60, 200),
            "past": st.integers(300, 600),
            "thick": st.integers(200, 300),
            "radius": st.integers(9500, 16000),
            "past_edge": st.integers(40, 100),
        }
    )
)
def test_inches_and_millimetres_make_one_board(thousandths):
    inch = {name: f"{n // 1000}.{n % 1000:03d}" for name, n in thousandths.items()}
    mm = {name: f"{n * 254 // 10000}.{n * 254 % 10000:04d}" for name, n in thousandths.items()}
    jobs = [JOB.format(unit="in", **inch), JOB.format(unit="mm", **mm)]
    jobs.append(JOB.format(unit="mm", **{name: f"{text} in" for name, text in inch.items()}))
    first, *others = (lines_of(make_plan(read_job_text(j.encode(), "any.yaml"))) for j in jobs)
    for other in others:
        for name, lengths in first.items():
            np.testing.assert_allclose(other[name], lengths, rtol=0, atol=1e-9, err_msg=name)
