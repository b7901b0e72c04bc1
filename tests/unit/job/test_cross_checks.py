"""Keys that contradict one another, and legal ones that are doubtful."""

import pytest


def one_fault(faults, text: str) -> str:
    (told,) = faults(text)
    return told


@pytest.mark.parametrize(
    ("frets", "message"),
    [
        (
            "{count: 8, labels: [a, b]}",
            "frets.labels: 8 frets have 8 labels; here are 2",
        ),
        (
            "{count: 3, labels: [a, b, a]}",
            "frets.labels[3]: a is not allowed; labels differ; fret 1 has this one",
        ),
        (
            "{count: 2, labels: [nut, b]}",
            (
                "frets.labels[1]: nut is not allowed; this names a place that is no fret; "
                "choose another label"
            ),
        ),
        (
            "{steps: [1, 3, 2]}",
            "frets.steps[3]: 2 is not allowed; steps rise; the one before is 3",
        ),
        (
            "{count: 4, steps: [1, 2, 3]}",
            "frets.count: 4 is not allowed; there are 3 steps; leave the count out, or match it",
        ),
        ("{temperament: equal-12}", "frets.count: the number of frets is missing; write count: 20"),
        (
            "{count: 30, temperament: {period: none, ratios: [1, 9/8, 5/4]}}",
            (
                "frets.count: inline ends at degree 2; the last fret needs degree 30; have fewer "
                "frets, or take a record that repeats"
            ),
        ),
        (
            "{count: 9, from: key}",
            "frets.from: equal-12 names no notes, so it has no key; add key: C",
        ),
        (
            "{count: 9, key: D, from: open}",
            "frets.key: a record counted from every open string has no key; leave it out",
        ),
        (
            "{count: 9, temperament: equal-19, key: D}",
            (
                "frets.key: D is not allowed; a key moves a record of 12 notes to the period; "
                "equal-19 has 19 notes"
            ),
        ),
        (
            "{count: 9, favour: {10: flat}}",
            "frets.favour.10: there is no fret 10; the frets are 1 to 9",
        ),
        (
            "{count: 9, favour: {1: low}}",
            "frets.favour.1: low is not allowed; flat, sharp or a list of strings stands here",
        ),
        ("{count: 9, only: {9: [7]}}", "frets.only.9[1]: 7 is not allowed; the strings are 1 to 6"),
        (
            "{count: 9, only: {9: [2, 2]}}",
            "frets.only.9[2]: 2 is not allowed; a string stands in the list once",
        ),
        (
            "{count: 9, placing: each}",
            (
                "frets.placing: stops cannot be placed by their pitch without heights; "
                "add heights: {action: {1: 0.4, 12: 2}}"
            ),
        ),
    ],
)
def test_frets(five, faults, frets: str, message: str) -> None:
    told = faults(five.replace("frets: 20", f"frets: {frets}"))
    assert told[0] == f"job.yaml:5 {message}"
    assert len(told) == (2 if "placing" in frets else 1)


def test_a_note_the_record_does_not_spell(five, faults) -> None:
    job = five.replace("B3", "Cb4").replace(
        "frets: 20", "frets: {count: 9, temperament: meantone-quarter-comma}"
    )
    told = one_fault(faults, job)
    assert told.startswith(
        "job.yaml:5 frets.temperament: string 2: meantone-quarter-comma has no Cb; its notes are"
    )
    assert told.endswith("respell the note, or choose another key")


@pytest.mark.parametrize(
    ("string", "message"),
    [
        (
            "{plain: steel, gauge: 0.3}",
            ("strings[1].note: a string needs its note; write note: E4 (or hz: 329.6)"),
        ),
        (
            "{note: E4, hz: 330}",
            ("strings[1].hz: a string has a note or a frequency, not both; keep one of them"),
        ),
        (
            "{note: E4, plain: steel, wound: brass}",
            ("strings[1].wound: a string is plain or wound, not both; keep one of them"),
        ),
        (
            "{note: E4, plain: steel, core: 0.2}",
            ("strings[1].core: only a wound string has a core; leave it out"),
        ),
        (
            "{note: E4, gauge: 1, length: 700}",
            (
                "strings[1].length: a fretted string's length "
                "follows from the scale; add open_only: true"
            ),
        ),
        (
            "{note: E4, open_only: true}",
            ("strings[1].length: an open-only string needs its length; write length: 700"),
        ),
        (
            "{note: E4, at: {length: 700}}",
            ("strings[1].at: this says for what a tension is stated; add tension: 70 N"),
        ),
        (
            "{note: E4, starts_at: 20}",
            (
                "strings[1].starts_at: 20 is not allowed; a short string has "
                "frets after its start; start it before the last fret"
            ),
        ),
        (
            "{note: E4, starts_at: 21}",
            ("strings[1].starts_at: 21 is not allowed; the frets are 1 to 20"),
        ),
        (
            "{note: E4, axial_stiffness: 9000, stretch: {rise_cents: 9, by: 1, length: 650}}",
            "strings[1].stretch: the axial stiffness stands there too; keep one of the two",
        ),
    ],
)
def test_one_string(five, faults, string: str, message: str) -> None:
    assert one_fault(faults, five.replace("[E4", f"[{string}")) == f"job.yaml:3 {message}"


def test_courses_lie_side_by_side(five, faults) -> None:
    job = five.replace("[E4, B3, G3", "[{note: E4, course: a}, B3, {note: E4, course: a}")
    job = job.replace("saddle: 54", "saddle: 54, pair: 2")
    assert one_fault(faults, job) == (
        "job.yaml:3 strings[3]: the strings of course a are not neighbours; list them side by side"
    )


def test_some_string_reaches_the_nut(five, faults) -> None:
    strings = "strings: [{note: A2, open_only: true, length: 700}]"
    job = "\n".join(strings if x.startswith("strings") else x for x in five.splitlines())
    assert one_fault(faults, job).startswith("job.yaml:3 strings: no string reaches the nut")


@pytest.mark.parametrize(("count", "right"), [(1, True), (64, True), (65, False), (0, False)])
def test_one_to_sixty_four_strings(five, faults, count: int, right: bool) -> None:
    strings = f"strings: [{', '.join(['E4'] * count)}]"
    job = "\n".join(strings if x.startswith("strings") else x for x in five.splitlines())
    told = faults(job.replace("{nut: 36, saddle: 54}", "{nut: 300, saddle: 300}"))
    assert told == (
        []
        if right
        else [
            (
                "job.yaml:3 strings: strings is a list of 1 to 64 notes or mappings, treble side "
                f"first; here are {count}"
            )
        ]
    )


@pytest.mark.parametrize(
    ("spread", "message"),
    [
        ("{nut: 36}", "spread.saddle: the spread at the saddle is missing"),
        (
            "{nut: 36, saddle: 54, bridge: 54}",
            ("spread.bridge: saddle and bridge mean the same here; keep one of them"),
        ),
        ("{nut: [1, 2], saddle: 54}", "spread.nut: one length a string is 6 of them; here are 2"),
        ("{nut: 0, saddle: 54}", "spread.nut: 0 is not allowed; strings lie apart"),
        (
            "{nut: 36, saddle: 54, pair: 3}",
            ("spread.pair: a pair gap needs courses; give the strings of a course the same course"),
        ),
        (
            "{nut: [-3, -2, -1, 1, 2, 3], saddle: [3, 2, 1, -1, -2, -3]}",
            (
                "spread.nut: string 1 is the outermost on the treble side, and + is toward it; "
                "list falling figures"
            ),
        ),
        (
            "{nut: [3, 2, 1, -1, -2, -3], saddle: [3, 2, 1, -1, -2, -3], rule: gaps}",
            "spread.rule: listed strings follow no rule; leave it out",
        ),
    ],
)
def test_spread(five, faults, spread: str, message: str) -> None:
    told = faults(five.replace("{nut: 36, saddle: 54}", spread))
    assert told[0] == f"job.yaml:4 {message}"


def test_a_slotted_board_needs_its_spread(five, faults) -> None:
    job = "\n".join(line for line in five.splitlines() if not line.startswith("spread"))
    assert one_fault(faults, job) == (
        "job.yaml:1 spread: a slotted board needs its spread; "
        "write spread: {nut: 36, saddle: 54}, the outer string centres"
    )


@pytest.mark.parametrize("place", ["21", "-1", "x", "7;5"])
def test_the_square_fret_lies_on_the_board(five, faults, place: str) -> None:
    job = five.replace("628.65", f"{{treble: 640, bass: 660, square_at: {place}}}")
    assert one_fault(faults, job).startswith(f"job.yaml:2 scale.square_at: {place} is not allowed")


LINES = [
    (
        "heights: {relief: 0.1}",
        ("heights: heights need their figures; write action: {1: 0.4, 12: 2}, or nut and saddle"),
    ),
    ("heights: {nut: 1}", "heights.saddle: the height at the saddle is missing"),
    (
        "heights: {action: {1: 0.4}}",
        ("heights.action: action is a mapping of two frets, such as {1: 0.4, 12: 2}; here are 1"),
    ),
    (
        "heights: sitar",
        (
            "heights: sitar is not allowed; it is one of steel, nylon, electric, bass, "
            "mandolin, banjo"
        ),
    ),
    (
        "compensation: {saddle: [1, 2]}",
        ("compensation.saddle: one length a string is 6 of them; here are 2"),
    ),
    (
        "compensation: {frets: [12, 3]}",
        (
            "compensation.frets[2]: 3 is not allowed; the last balanced "
            "fret does not lie before fret 12"
        ),
    ),
    (
        "bridge: separate",
        (
            "bridge: separate is not allowed; separate pieces need their travel; "
            "write {separate: {travel: 10}}"
        ),
    ),
    (
        "supports: {nut: 1.5}",
        (
            "supports.nut: 1.5 is not allowed; a support is hinged, carried, "
            "clamped, {tail: 12} or a number from 0 to 1"
        ),
    ),
    ("nut: {behind: 3}", "nut.behind: only a channel lies behind zero; add seat: channel"),
    ("nut: {seat: channel}", "nut.behind: a channel lies some way behind zero; write behind: 3"),
    (
        "board: {width: {nut: 40, 9: 44}, margin: 3}",
        ("board.margin: the widths say where the edges lie; keep one of the two"),
    ),
    (
        "board: {length: 450, past_last_fret: 12}",
        ("board.past_last_fret: the length says where the board ends; keep one of the two"),
    ),
    (
        "board: {width: {nut: 40, 21: 44}}",
        (
            "board.width.21: there is no place 21; places are nut, "
            "tail, bridge; the frets are 1 to 20"
        ),
    ),
    ("tooling: {machine: router}", "tooling.cutter: a router needs its cutter; write cutter: 0.58"),
    ("tooling: {machine: saw, cutter: 0.6}", "tooling.cutter: a saw has no cutter; leave it out"),
    ("marks: {face: [3, 5, 3]}", "marks.face[3]: 3 is not allowed; a fret stands in the list once"),
    (
        "loops: {first: 0.7, last: 1.1}",
        ("loops.last: 1.1 is not allowed; the first loop is the thickest"),
    ),
    (
        "layers: {CUT_SLOT: slots}",
        (
            "layers.CUT_SLOT: slots is not allowed; a layer's name starts with a "
            "letter and is up to 31 of A to Z, 0 to 9, _ and -; write SLOTS"
        ),
    ),
    (
        "layers: {CUT_SLOT: REF_LINE}",
        (
            "layers.CUT_SLOT: REF_LINE is not allowed; layers keep names "
            "of their own; REF_LINE has this one"
        ),
    ),
    ("layers: {CUT_SLOTS: A}", "layers.CUT_SLOTS: there is no such key; the nearest is CUT_SLOT"),
]


@pytest.mark.parametrize(("line", "message"), LINES)
def test_one_more_line(five, faults, line: str, message: str) -> None:
    assert one_fault(faults, f"{five}{line}\n") == f"job.yaml:6 {message}"


def test_compensation_names_what_it_lacks(five, faults) -> None:
    assert faults(five + "compensation: {nut: each}\n") == [
        (
            "job.yaml:6 compensation.nut: each is not allowed; it cannot be computed without "
            "heights; "
            "add heights: {action: {1: 0.4, 12: 2}}"
        ),
        (
            "job.yaml:6 compensation.nut: each is not allowed; it cannot be computed without "
            "string "
            "data for strings 1, 2, 3, 4, 5, 6; add plain or wound and gauge, or measured figures"
        ),
    ]


SOFT = "{note: D3, wound: silver, core_material: nylon, gauge: 0.75"


def test_a_soft_core_of_unknown_stiffness_is_a_warning_until_compensation_is_asked(
    five, read, faults
) -> None:
    job = five.replace("D3", f"{SOFT}}}")
    (finding,) = read(job).findings
    assert (finding.code, finding.severity, finding.string) == ("wound-core-unknown", "warning", 4)
    told = faults(job + "heights: steel\ncompensation: {saddle: straight}\n")
    assert "string data for string 4; add measured figures or a stated tension " in told[1]
    assert told[1].endswith("(wound-core-unknown)")


@pytest.mark.parametrize(
    "data",
    [
        "tension: 70 N",
        "unit_mass: 1.9, axial_stiffness: 3200, bending_stiffness: 1e-4",
        "unit_mass: 1.9, bending_stiffness: 1e-4, stretch: {rise_cents: 40, by: 1, length: 650}",
    ],
)
def test_a_soft_core_with_figures_is_known(full, read, data: str) -> None:
    line = next(x for x in full.splitlines() if "note: D3" in x)
    job = read(full.replace(line, f"  - {SOFT}, {data}}}"))
    assert {finding.code for finding in job.findings} == set()


def test_clear_gaps_without_gauges_are_doubtful(five, read) -> None:
    (finding,) = read(five.replace("saddle: 54", "saddle: 54, rule: gaps")).findings
    assert (finding.code, finding.severity) == ("gap-without-gauge", "warning")


def test_a_pressing_finger_is_explained(five, read) -> None:
    (finding,) = read(five + "finger: {press: 0.5}\n").findings
    assert (finding.code, finding.amount) == ("finger-press-assumes-slip", 0.5)


def test_keys_that_are_not_drawn_yet_are_noted_once_each(five, read) -> None:
    more = "loops: {first: 1.0, last: 0.7}\ntape: {width: 3}\nstops: {neck: 121, body: 183}\n"
    findings = read(five + more).findings
    assert [f.text.split(" ")[0] for f in findings] == ["loops", "tape", "stops"]
    assert {f.severity for f in findings} == {"note"}


def test_what_would_spoil_the_wood_is_more_than_a_note(five, read) -> None:
    for value in ("kind: tied", "kind: lines"):
        (finding,) = read(five.replace("frets: 20", f"frets: {{count: 20, {value}}}")).findings
        assert (finding.code, finding.severity) == ("not-drawn-yet", "warning")


COURSES = "[{note: E4, course: a, gauge: 0.3}, {note: E4, course: a, gauge: 0.3}, B3, G3"


@pytest.mark.parametrize(
    ("pair", "wanted"), [("2.5", (2.5, 2.5)), ("{nut: 2, bridge: 3}", (2.0, 3.0))]
)
def test_the_gap_inside_a_course(five, read, pair: str, wanted: tuple[float, float]) -> None:
    job = read(
        five.replace("[E4, B3, G3", COURSES).replace("saddle: 54", f"saddle: 54, pair: {pair}")
    )
    assert (job.spread.pair_nut_mm, job.spread.pair_saddle_mm) == wanted


def test_the_reference_is_spelled_in_a_keyed_record(five, faults) -> None:
    job = five.replace("frets: 20", "frets: {count: 9, temperament: meantone-quarter-comma}")
    told = one_fault(faults, f"{job}reference: {{note: Gb4, hz: 370}}\n")
    assert "the reference: meantone-quarter-comma has no Gb" in told


@pytest.mark.parametrize(
    ("line", "path"),
    [
        ("frets: [1, 2]", "frets"),
        ("scale: {treble: 640}", "scale.bass"),
        ("scale: [1]", "scale"),
        ("scale: {treble: 640, bass: 660, square_at: [1]}", "scale.square_at"),
        ("strings: E4", "strings"),
        ("strings: [[E4]]", "strings[1]"),
        ("spread: 36", "spread"),
        ("reference: {note: A4}", "reference.hz"),
        ("heights: {action: 2}", "heights.action"),
        ("heights: {saddle: 3}", "heights.nut"),
        ("heights: {action: {1: {treble: 1}, 12: 2}}", "heights.action.1.bass"),
        ("compensation: {weights: {3: heavy}}", "compensation.weights.3"),
        ("board: {radius: {nut: 1, tail: 300}}", "board.radius.nut"),
        ("board: {width: 43}", "board.width"),
        ("supports: {nut: soft}", "supports.nut"),
        ("marks: [3, 5]", "marks"),
        ("marks: {face: [[3]]}", "marks.face[1]"),
    ],
)
def test_wrong_kinds_are_told_at_their_place(five, faults, line: str, path: str) -> None:
    key = line.partition(":")[0]
    kept = [old for old in five.splitlines() if not old.startswith(f"{key}:")]
    assert faults("\n".join([*kept, line]))[0].partition(": ")[0].split(" ")[-1] == path
