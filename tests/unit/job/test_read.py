"""What instrument a good job gives, and which defaults are listed with it."""

import hashlib
from pathlib import Path

import pytest

from layout.findings import Assumed
from layout.instrument import (
    ActionGaps,
    Board,
    BowedStops,
    Bridge,
    Compensation,
    ConeAtNut,
    EndHeights,
    Finger,
    Frets,
    Heights,
    LevelEdgesAtNut,
    Listed,
    Loops,
    Margins,
    Marks,
    MultiScale,
    Nut,
    OneRadius,
    Paper,
    ParallelScale,
    Pins,
    Reference,
    Same,
    ShortStart,
    Sides,
    Slots,
    SlottingTemplate,
    SpreadList,
    SpreadRule,
    StatedTension,
    Stretch,
    StringSpec,
    Supports,
    Tape,
    Tooling,
    TwoRadii,
    Widths,
    Wire,
)
from layout.job.read import read_job
from layout.job.records import load_library_record
from layout.pitch.notes import read_note
from layout.strings.support import CLAMPED, HINGED, Fixity, Tail

INCH = 25.4

# The table of defaults of the format page, word by word, for the least job.
FIVE_LINE_DEFAULTS = {
    "hand": "right",
    "unit": "mm",
    "reference": "A4 = 440 Hz",
    "spread.rule": "centres",
    "frets.temperament": "equal-12",
    "frets.kind": "slotted",
    "frets.from": "open",
    "frets.placing": "divided",
    "frets.slant": "square",
    "finger.behind": "8 mm",
    "finger.press": "0 mm",
    "supports.nut": "carried",
    "supports.stop": "carried",
    "supports.saddle": "carried",
    "supports.free": "0 mm",
    "compensation.nut": "none",
    "compensation.saddle": "none (no heights)",
    "compensation.frets": "1 to 20",
    "bridge": "fixed",
    "nut.zero": "edge",
    "nut.fit": "overhang",
    "nut.thickness": "5 mm",
    "nut.seat": "end",
    "board.margin.nut": "3 mm",
    "board.margin.tail": "3 mm",
    "board.past_last_fret": "12 mm",
    "board.end_lines.nut": "along",
    "board.end_lines.tail": "square",
    "board.thickness": "6 mm",
    "board.radius": "flat",
    "board.binding": "0 mm",
    "slots.width": "0.58 mm",
    "slots.floor": "flat",
    "slots.clearance": "0.4 mm",
    "slots.run": "open",
    "slots.past_edge": "2 mm",
    "paper.size": "A4",
    "paper.margin": "10 mm",
    "paper.overlap": "15 mm",
    "paper.bars.along": "100 mm",
    "paper.bars.across": "100 mm",
}


def test_the_five_line_job(five, read) -> None:
    job = read(five)
    assert job.title == "Six-string"
    assert job.scale == ParallelScale(628.65)
    assert [str(string.note) for string in job.strings] == ["E4", "B3", "G3", "D3", "A2", "E2"]
    assert all(string == StringSpec(note=string.note) for string in job.strings)
    assert job.spread == SpreadRule(36.0, 54.0, "centres")
    assert job.frets.count == 20
    assert job.frets.labels == tuple(str(number) for number in range(1, 21))
    assert job.frets.steps == tuple(range(1, 21))
    assert job.frets.temperament == load_library_record("equal-12")
    assert job.reference == Reference(read_note("A4"), 440.0)
    assert job.heights is None
    assert (job.finger, job.supports, job.bridge) == (Finger(), Supports(), Bridge())
    assert (job.nut, job.board, job.wire, job.slots) == (Nut(), Board(), Wire(), Slots())
    assert (job.tooling, job.marks, job.paper) == (None, Marks(), Paper())
    assert job.compensation == Compensation("none", "none", None, 1, 20)
    assert job.findings == ()


def test_every_default_of_the_five_line_job_is_listed(five, read) -> None:
    assumed = read(five).assumed
    assert {entry.key: entry.value for entry in assumed} == FIVE_LINE_DEFAULTS
    assert len(assumed) == len(FIVE_LINE_DEFAULTS)


def test_the_full_job(full, read) -> None:
    job = read(full)
    assert job.title == "Parlour guitar, six strings"
    assert job.strings[0] == StringSpec(
        note=read_note("E4"), make="plain", material="steel", gauge_mm=0.012 * INCH
    )
    assert job.strings[2] == StringSpec(
        note=read_note("G3"),
        make="wound",
        material="phosphor bronze",
        gauge_mm=pytest.approx(0.024 * INCH, rel=1e-15),
        core_mm=pytest.approx(0.013 * INCH, rel=1e-15),
    )
    assert job.heights == Heights(ActionGaps(1, Same(0.4), 12, Sides(1.8, 2.3)), 0.1, 14)
    assert job.finger == Finger(8, 0)
    assert job.compensation == Compensation("each", "each", 2.4, 1, 12)
    assert job.nut == Nut("edge", "trim", 5.0)
    assert job.board == Board(
        edges=Margins(3.5, 3.5), thickness_mm=6.4, top=TwoRadii(("nut", 305.0), ("tail", 406.0))
    )
    assert job.wire == Wire(0.53, 1.9, 1.1, 2.3)
    assert job.slots == Slots(0.58)
    assert job.tooling == Tooling("router", 0.58, 0.02)
    assert job.marks == Marks((3, 5, 7, 9, 12), (12,), (3, 5, 7, 9, 12))
    assert job.findings == ()


def test_the_file_is_told_by_its_hash_and_its_folder(five, tmp_path: Path) -> None:
    record = tmp_path / "own.yaml"
    record.write_text("name: own\ntitle: Own\nsource: me\nperiod: 3/1\nequal: 13\n")
    path = tmp_path / "five.yaml"
    path.write_text(five.replace("frets: 20", "frets: {count: 9, temperament: own.yaml}"))
    job = read_job(path)
    assert job.job_sha256 == hashlib.sha256(path.read_bytes()).hexdigest()
    assert job.frets.temperament.name == "own"


def test_strings_in_every_form(five, read) -> None:
    head, tail = five.split("strings:")[0], "\n" + "\n".join(five.split("\n")[3:])
    job = read(
        head
        + """strings:
 - hz: 330.5
 - {note: B3, wound: silver, core_material: gut, gauge: 1, tension: 15.7 lb,
    at: {length: 25 1/2 in, note: A3}}
 - {note: G3, plain: nylon, gauge: 1, unit_mass: 0.9, bending_stiffness: 1e-4,
    stretch: {rise_cents: 42, by: 0.7, length: 650}, course: g}
 - {note: G3, unit_mass: 900 mg/m, axial_stiffness: 3.2 kN, bending_stiffness: 100 N mm2,
    course: g}
 - {note: D3, starts_at: {fret: 5, behind: 2, step: 6}}
 - {note: A2, starts_at: 7}
 - {note: E2, open_only: true, length: 700}"""
        + tail.replace("saddle: 54", "saddle: 54, pair: 2")
    )
    first, second, third, fourth, fifth, sixth, last = job.strings
    assert (first.hz, first.note) == (330.5, None)
    assert second.tension == StatedTension(
        pytest.approx(15.7 * 4.4482216152605), 647.7, read_note("A3")
    )
    assert second.core_material == "gut"
    assert third.stretch == Stretch(42.0, 0.7, 650.0)
    assert third.unit_mass_kg_per_m == pytest.approx(0.9e-3)
    assert fourth.unit_mass_kg_per_m == pytest.approx(0.9e-3)
    assert fourth.axial_stiffness_n == 3200.0
    assert fourth.bending_stiffness_n_m2 == pytest.approx(1e-4)
    assert third.course == fourth.course == "g"
    assert fifth.starts_at == ShortStart(5, 2.0, 6.0)
    assert sixth.starts_at == ShortStart(7)
    assert last.open_length_mm == 700.0
    assert not last.fretted
    for entry in (
        Assumed("strings[3].unit_mass", "a bare figure is read in g/m"),
        Assumed("strings[3].bending_stiffness", "a bare figure is read in N m2"),
        Assumed("strings[6].starts_at.behind", "0 mm"),
        Assumed("strings[6].starts_at.step", "0 mm"),
    ):
        assert entry in job.assumed


@pytest.mark.parametrize(
    ("line", "where", "wanted"),
    [
        ("reference: 415", "reference", Reference(read_note("A4"), 415.0)),
        (
            "reference: {note: C4, hz: 256}",
            "reference",
            Reference(read_note("C4"), 256.0),
        ),
        ("hand: left", "hand", "left"),
        (
            "scale: {treble: 647.7, bass: 685.8, square_at: 7.5}",
            "scale",
            MultiScale(647.7, 685.8, 7.5),
        ),
        (
            "scale: {treble: 25 in, bass: 26 in, square_at: bridge}",
            "scale",
            MultiScale(635.0, 660.4, "bridge"),
        ),
        ("spread: {nut: 36, bridge: 54, rule: gaps}", "spread", SpreadRule(36, 54, "gaps")),
        (
            "spread: {nut: [18, 11, 4, -4, -11, -18], saddle: [27, 16, 5, -5, -16, -27]}",
            "spread",
            SpreadList((18, 11, 4, -4, -11, -18), (27, 16, 5, -5, -16, -27)),
        ),
        (
            "heights: {nut: 0.5, bridge: {treble: 3, bass: 4}}",
            "heights",
            Heights(EndHeights(Same(0.5), Sides(3, 4)), 0.0, 14),
        ),
        (
            "heights: {action: {12: [2, 2, 2, 3, 3, 3], 1: 0.4}, joint: 12}",
            "heights",
            Heights(ActionGaps(1, Same(0.4), 12, Listed((2, 2, 2, 3, 3, 3))), 0.0, 12),
        ),
        ("finger: {behind: 0, press: 0.5}", "finger", Finger(0.0, 0.5)),
        (
            "supports: {nut: hinged, stop: 0.25, bridge: {tail: 12}, free: 100}",
            "supports",
            Supports(HINGED, Fixity(0.25), Tail(12.0), 100.0),
        ),
        ("supports: {saddle: clamped}", "supports", Supports(saddle=CLAMPED)),
        (
            (
                "compensation: {nut: [1, 1, 1, 1, 1, 1], bridge: {treble: 2, bass: -4}, "
                "frets: [2, 15], weights: {5: 2.5}}"
            ),
            "compensation",
            Compensation(Listed((1.0,) * 6), Sides(2.0, -4.0), None, 2, 15, {5: 2.5}),
        ),
        ("bridge: loose", "bridge", Bridge("loose")),
        ("bridge: {separate: {travel: 10}}", "bridge", Bridge("separate", 10.0)),
        ("nut: {seat: channel, behind: 3}", "nut", Nut(seat="channel", behind_mm=3.0)),
        ("board: {margin: 4}", "board", Board(Margins(4, 4))),
        (
            "board: {width: {nut: 43.5, 14: 54}, length: 460, radius: 305, binding: 1.5}",
            "board",
            Board(Widths(("nut", 43.5), (14, 54)), 12.0, 460.0, top=OneRadius(305), binding_mm=1.5),
        ),
        (
            "board: {width: {3: 44, bridge: 70}, end_lines: {nut: square, tail: along}}",
            "board",
            Board(Widths((3, 44), ("bridge", 70)), nut_end="square", tail_end="along"),
        ),
        ("board: {radius: {cone_at_nut: 250}}", "board", Board(top=ConeAtNut(250))),
        ("board: {radius: {level_edges_at_nut: 9 in}}", "board", Board(top=LevelEdgesAtNut(228.6))),
        (
            "board: {radius: {nut: 254, 20: 406.4}, blank: {width: 70}}",
            "board",
            Board(top=TwoRadii(("nut", 254), (20, 406.4)), blank_width_mm=70),
        ),
        ("board: {radius: flat}", "board", Board()),
        ("wire: {stick: 300, over: 2}", "wire", Wire(stick_mm=300, over_mm=2)),
        (
            "slots: {run: blind, floor: follow, clearance: 0.3, short_of_edge: 2}",
            "slots",
            Slots(floor="follow", clearance_mm=0.3, run="blind", short_of_edge_mm=2),
        ),
        ("tooling: {machine: saw, kerf: 0.6}", "tooling", Tooling("saw", kerf_mm=(0.6, 0.6))),
        (
            "tooling: {machine: laser, kerf: {x: 0.15, y: 0.17}, lines: offset}",
            "tooling",
            Tooling("laser", kerf_mm=(0.15, 0.17), lines="offset"),
        ),
        ("marks: {face: [5], face_size: 4}", "marks", Marks((5,), face_size_mm=4)),
        ("pins: {size: 3}", "pins", Pins(3.0)),
        ("loops: {first: 1.1, last: 0.7}", "loops", Loops(1.1, 0.7)),
        ("tape: {width: 3, stop: middle}", "tape", Tape(3.0, "middle")),
        ("stops: {neck: 130, body: 195}", "stops", BowedStops(130.0, 195.0)),
        ("template: {edge: treble}", "template", SlottingTemplate(3.0, "treble")),
        (
            "paper: {size: roll, bars: {along: 99.7, across: 100.1}}",
            "paper",
            Paper("roll", bar_along_mm=99.7, bar_across_mm=100.1),
        ),
        ("layers: {CUT_SLOT: SLOTS_1}", "layers", {"CUT_SLOT": "SLOTS_1"}),
    ],
)
def test_one_key(five, read, line: str, where: str, wanted: object) -> None:
    key = line.partition(":")[0]
    kept = [old for old in five.splitlines() if not old.startswith(f"{key}:")]
    assert getattr(read("\n".join([*kept, line])), where) == wanted


@pytest.mark.parametrize(
    ("frets", "wanted"),
    [
        ("{count: 3, labels: [a, 1+, 2]}", {"labels": ("a", "1+", "2"), "steps": (1, 2, 3)}),
        ("{steps: [2, 4, 5, 7]}", {"count": 4, "steps": (2, 4, 5, 7)}),
        ("{count: 5, kind: tied, placing: divided}", {"kind": "tied"}),
        (
            "{count: 9, temperament: meantone-quarter-comma}",
            {"counted_from": "key", "slant": "square"},
        ),
        ("{count: 9, temperament: meantone-quarter-comma, from: open}", {"counted_from": "open"}),
        ("{count: 9, key: D}", {"counted_from": "key"}),
        (
            "{count: 9, favour: {1: flat, 3: sharp, 4: [2, 1]}}",
            {"favour": {1: "flat", 3: "sharp", 4: (1, 2)}},
        ),
        ("{count: 9, only: {9: [1, 2]}}", {"only": {9: (1, 2)}}),
        ("{count: 9, slant: free}", {"slant": "free"}),
        ("{count: 13, temperament: {period: 3/1, equal: 13}}", {"counted_from": "open"}),
    ],
)
def test_frets(five, read, frets: str, wanted: dict[str, object]) -> None:
    made: Frets = read(five.replace("frets: 20", f"frets: {frets}")).frets
    assert {name: getattr(made, name) for name in wanted} == wanted


def test_multi_scale_frets_are_free_to_slant(five, read) -> None:
    fan = five.replace("628.65", "{treble: 640, bass: 660, square_at: 7}")
    assert read(fan).frets.slant == "free"
    assert (
        read(fan.replace("frets: 20", "frets: {count: 20, slant: square}")).frets.slant == "square"
    )


def test_labels_name_frets_everywhere(five, read) -> None:
    diatonic = """frets: {count: 5, steps: [2, 4, 5, 7, 9], labels: [I, II, III, IV, V]}
heights: {action: {I: 0.4, IV: 1.5}, joint: V}
marks: {face: [III]}
board: {width: {nut: 40, V: 45}}
"""
    job = read(five.replace("frets: 20\n", diatonic))
    assert job.heights is not None
    assert job.heights.given == ActionGaps(1, Same(0.4), 4, Same(1.5))
    assert job.heights.joint == 5
    assert job.marks.face == (3,)
    assert job.board.edges == Widths(("nut", 40.0), (5, 45.0))


def test_the_joint_is_the_last_fret_where_there_are_fewer(five, read) -> None:
    short = five.replace("frets: 20", "frets: 12\nheights: {nut: 1, saddle: 4}")
    job = read(short)
    assert job.heights is not None
    assert job.heights.joint == 12
    assert Assumed("heights.joint", "12") in job.assumed


@pytest.mark.parametrize("row", ["steel", "nylon", "electric", "bass", "mandolin", "banjo"])
def test_a_named_row_of_heights_is_listed_with_its_figures(five, read, row: str) -> None:
    job = read(f"{five}heights: {row}\n")
    assert job.heights is not None
    assert isinstance(job.heights.given, ActionGaps)
    listed = {entry.key: entry.value for entry in job.assumed}
    for key in ("heights.action.1", "heights.action.12", "heights.relief"):
        assert f"({row} row: common practice, no source)" in listed[key]


def test_the_saddle_is_straight_by_default_once_it_can_be_computed(full, read) -> None:
    line = next(text for text in full.splitlines() if text.startswith("compensation"))
    job = read(full.replace(line, ""))
    assert job.compensation == Compensation("none", "straight", None, 1, 20)
    assert Assumed("compensation.saddle", "straight") in job.assumed
    without = read(full.replace(line, "").replace(", gauge: 0.016 in", "", 1))
    assert without.compensation.saddle == "none"
    assert Assumed("compensation.saddle", "none (no string data for string 2)") in without.assumed


def test_blind_slots_list_how_short_they_end_and_open_ones_how_far_they_run(five, read) -> None:
    blind = {entry.key for entry in read(five + "slots: {run: blind}\n").assumed}
    assert "slots.short_of_edge" in blind
    assert "slots.past_edge" not in blind


def test_a_zero_fret_sets_the_height_at_the_nut(five, read) -> None:
    job = read(five + "nut: {zero: fret}\nheights: {saddle: 4}\n")
    assert job.heights is not None
    assert job.heights.given == EndHeights(Same(0.0), Same(4.0))
    assert Assumed("heights.nut", "0 mm (zero fret)") in job.assumed


def test_unfretted_boards_need_no_spread(five, read) -> None:
    lines = [line for line in five.splitlines() if not line.startswith(("spread", "frets"))]
    job = read("\n".join([*lines, "frets: {count: 12, kind: lines}"]))
    assert job.spread is None
