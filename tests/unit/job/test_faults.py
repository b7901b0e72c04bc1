"""Faults in the values of a job: each with file, line, key path, value, rule and remedy."""

import re

import pytest

SPEC_SENTENCE = "job.yaml:6 strings[2].gauge: 0 is not allowed; a plain string needs 0.05 to 5 mm"


def swapped(text: str, old: str, new: str) -> str:
    assert old in text
    return text.replace(old, new, 1)


FULL_CHANGES = [
    # old, new, the one fault
    (
        "gauge: 0.016 in",
        "gauge: 0",
        "job.yaml:6 strings[2].gauge: 0 is not allowed; a plain string needs 0.05 to 5 mm",
    ),
    (
        "gauge: 0.012 in",
        "gauge: 12",
        (
            "job.yaml:5 strings[1].gauge: 12 is not allowed; a plain string needs 0.05 to 5 mm; "
            "write 0.012 in or 0.305 mm"
        ),
    ),
    (
        "gauge: 0.012 in",
        "gauge: 0.012",
        (
            "job.yaml:5 strings[1].gauge: 0.012 is not allowed; a plain string needs 0.05 to 5 mm; "
            "write 0.012 in or 0.305 mm"
        ),
    ),
    (
        "gauge: 0.012 in",
        "gauge: 0.012 inch",
        (
            "job.yaml:5 strings[1].gauge: 0.012 inch is not allowed; a length has one of the units "
            'mm, cm, m, in, ", ft'
        ),
    ),
    (
        "tang: 0.53",
        "tang: '0,53'",
        "job.yaml:16 wire.tang: 0,53 is not allowed; a number has a decimal point; write 0.53",
    ),
    (
        "tang: 0.53",
        "tang: 0,53",
        "job.yaml:16 wire.53: a number has a decimal point; write 0.53",
    ),
    (
        "scale: 628.65 ",
        "scale: 25.5 ",
        (
            "job.yaml:4 scale: 25.5 is not allowed; a scale needs 100 to 2000 mm; "
            "write 25.5 in or 647.7 mm"
        ),
    ),
    (
        "scale: 628.65 ",
        "scale: 16 m ",
        "job.yaml:4 scale: 16 m is not allowed; a scale needs 100 to 2000 mm",
    ),
    (
        "scale: 628.65 ",
        "scale: 3:2 ",
        "job.yaml:4 scale: 3:2 is not allowed; a number is written like 12, 0.53, 3/8 or 25 1/2",
    ),
    (
        "scale: 628.65 ",
        "scale: .nan ",
        (
            "job.yaml:4 scale: .nan is not allowed; a length is a number with one of the units "
            'mm, cm, m, in, ", ft'
        ),
    ),
    (
        "scale: 628.65 ",
        "scale: 628650 ",
        "job.yaml:4 scale: 628650 is not allowed; a scale needs 100 to 2000 mm",
    ),
    (
        "scale: 628.65 ",
        "scale: ",
        "job.yaml:4 scale: nothing is not allowed; a scale needs 100 to 2000 mm",
    ),
    (
        "count: 20",
        "count: 012",
        "job.yaml:12 frets.count: 012 is not allowed; a number has no leading zero; write 12",
    ),
    (
        "count: 20",
        "count: 20.5",
        "job.yaml:12 frets.count: 20.5 is not allowed; a board has 1 to 200, in whole numbers",
    ),
    (
        "count: 20",
        "count: 201",
        "job.yaml:12 frets.count: 201 is not allowed; a board has 1 to 200",
    ),
    (
        "hand: right",
        "hand: Right",
        "job.yaml:2 hand: Right is not allowed; it is one of right, left; the nearest is right",
    ),
    (
        "note: B3",
        "note: B",
        (
            "job.yaml:6 strings[2].note: B is not allowed; a note is written like E4, Bb3, F#2 or "
            "E4 -50c; add the octave: B4"
        ),
    ),
    (
        "plain: steel, gauge: 0.012 in",
        "plian: steel, gauge: 0.012 in",
        "job.yaml:5 strings[1].plian: there is no such key; the nearest is plain",
    ),
    (
        "temperament: equal-12",
        "temperament: equal-21",
        (
            "job.yaml:12 frets.temperament: equal-21 is not allowed; there is no such temperament; "
            "the nearest in the library:"
        ),
    ),
    (
        "core: 0.013 in",
        "core: 0.03 in",
        "job.yaml:7 strings[3].core: 0.03 in is not allowed; a core is thinner than its string",
    ),
    (
        "12: {treble: 1.8, bass: 2.3}",
        "21: {treble: 1.8, bass: 2.3}",
        "job.yaml:13 heights.action.21: there is no fret 21; the frets are 1 to 20",
    ),
    (
        "12: {treble: 1.8, bass: 2.3}",
        "1: {treble: 1.8, bass: 2.3}",
        "job.yaml:13 heights.action.1: the key stands twice, first on line 14; keep one of them",
    ),
    (
        "12: {treble: 1.8, bass: 2.3}",
        "12: [1, 2, 3]",
        "job.yaml:13 heights.action.12: one length a string is 6 of them; here are 3",
    ),
    (
        "relief: 0.1",
        "saddle: 3",
        (
            "job.yaml:13 heights.saddle: heights are given as action at two frets, or at nut and "
            "saddle, not both; keep one of the two forms"
        ),
    ),
    (
        "joint: 14",
        "joint: 22",
        "job.yaml:13 heights.joint: 22 is not allowed; the frets are 1 to 20",
    ),
    (
        "nut: {zero: edge",
        "nut: {zero: fret",
        (
            "job.yaml:16 compensation.nut: each is not allowed; with a zero fret the strings share "
            "one line; write nut: none"
        ),
    ),
    (
        "machine: router",
        "machine: laser",
        (
            "job.yaml:19 tooling.lines: a laser needs to know what the lines mean; write lines: on "
            "(the kerf widens the slot) or lines: offset (it is allowed for)"
        ),
    ),
    (
        "side: [3, 5, 7, 9, 12]",
        "side: [3, 5, 7, 9, 24]",
        "job.yaml:20 marks.side[5]: 24 is not allowed; the frets are 1 to 20",
    ),
    (
        "side: [3, 5, 7, 9, 12]",
        "side: no",
        (
            "job.yaml:20 marks.side: no is not allowed; here stands a list of fret labels, such as "
            "[3, 5, 7]"
        ),
    ),
    (
        "title: Parlour guitar, six strings",
        f"title: {'x' * 81}",
        (
            "job.yaml:1 title: xxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxx... is not "
            "allowed; a title is one line of text; at most 80 characters, here are 81"
        ),
    ),
    (
        "title: Parlour guitar, six strings",
        'title: "a\\tb"',
        (
            "job.yaml:1 title: a b is not allowed; a title is one line of text; on one line, "
            "without "
            "control characters"
        ),
    ),
    (
        "thickness: 6.4",
        "thicknes: 6.4",
        "job.yaml:15 board.thicknes: there is no such key; the nearest is thickness",
    ),
    (
        "radius: {nut: 305, tail: 406}",
        "radius: {nut: 305}",
        "board.radius: two radii stand at two places, such as {nut: 254, 22: 406}; here are 1",
    ),
]


@pytest.mark.parametrize(("old", "new", "message"), FULL_CHANGES)
def test_one_slip_in_the_full_job_is_told_exactly(full, faults, old, new, message) -> None:
    changed = swapped(full, old, new)
    line = full[: full.index(old)].count("\n") + 1
    told = faults(changed)
    wanted = re.sub(r"^(job\.yaml:\d+ )?", "", message)
    found = [fault for fault in told if wanted in fault]
    assert len(found) == 1, told
    if "compensation.nut" not in wanted:
        assert found[0].startswith(f"job.yaml:{line} ")


@pytest.mark.parametrize(
    ("old", "new"),
    [(old, new) for old, new, _ in FULL_CHANGES if new not in ("machine: laser", "tang: 0,53")],
)
def test_one_slip_makes_one_fault(full, faults, old, new) -> None:
    assert len(faults(swapped(full, old, new))) == 1


TEN = """\
title: Ten slips
hand: rigth
scale: 25.5
strings:
  - {note: E4, plain: steel, gauge: 12}
  - {note: B, plain: steel, gauge: 0.016 in}
  - {note: G3, wond: nickel}
spread: {nut: 3:2, saddle: 54}
frets: {steps: [1, 2, 2]}
heights: {action: {1: 0.4, 30: 2}}
tooling: {machine: saw, kerf: .inf}
marks: {side: no}
colour: red
"""


def test_ten_slips_are_all_told_in_file_order(faults) -> None:
    told = faults(TEN)
    places = [re.match(r"job\.yaml:(\d+) (\S+):", fault) for fault in told]
    assert [(int(place[1]), place[2]) for place in places if place] == [
        (2, "hand"),
        (3, "scale"),
        (5, "strings[1].gauge"),
        (6, "strings[2].note"),
        (7, "strings[3].wond"),
        (8, "spread.nut"),
        (9, "frets.steps[3]"),
        (10, "heights.action.30"),
        (11, "tooling.kerf"),
        (12, "marks.side"),
        (13, "colour"),
    ]


def test_the_sentence_of_the_format_page(faults) -> None:
    job = (
        "title: T\nscale: 628\nfrets: 12\nstrings:\n  - E4\n"
        "  - {note: B3, plain: steel, gauge: 0}\nspread: {nut: 36, saddle: 54}\n"
    )
    assert faults(job) == [SPEC_SENTENCE]


def test_an_empty_mapping_tells_every_key_that_is_missing(faults) -> None:
    assert faults("{}") == [
        "job.yaml:1 title: the title is missing; write title: and what you are making",
        "job.yaml:1 frets: the frets are missing; write frets: 20",
        "job.yaml:1 strings: the strings are missing; write strings: [E4, B3, ...]",
        "job.yaml:1 scale: the scale is missing; write scale: and the length to be divided",
        (
            "job.yaml:1 spread: a slotted board needs its spread; write spread: {nut: 36, saddle: "
            "54},"
            " the outer string centres"
        ),
    ]


@pytest.mark.parametrize("text", ["word", "[1, 2]", "'quoted'"])
def test_a_job_is_a_mapping(faults, text) -> None:
    (told,) = faults(text)
    assert "a job is a mapping of keys such as title, scale" in told


def test_a_key_that_stands_twice(five, faults) -> None:
    assert faults(five + "scale: 640\n") == [
        "job.yaml:6 scale: the key stands twice, first on line 2; keep one of them"
    ]


def test_inches_as_the_unit_of_bare_lengths(five, read, faults) -> None:
    inches = five.replace("628.65", "24 3/4").replace("36", "1.5").replace("54", "2 1/8")
    assert read("unit: in\n" + inches).scale.length_mm == pytest.approx(628.65, abs=1e-12)
    assert faults("unit: in\n" + inches.replace("24 3/4", "628")) == [
        (
            "job.yaml:3 scale: 628 is not allowed; a scale needs 100 to 2000 mm; "
            "write 628 mm or 24.7244 in"
        )
    ]


@pytest.mark.parametrize("flag", ["no", "yes", "on", "True", "1"])
def test_a_flag_is_true_or_false(five, faults, flag) -> None:
    job = five.replace("[E4", f"[{{note: E4, open_only: {flag}, length: 700}}")
    assert faults(job)[0].startswith(
        f"job.yaml:3 strings[1].open_only: {flag} is not allowed; it is one of true, false"
    )


@pytest.mark.parametrize(("tension", "right"), [("70", False), ("70 N", True), ("15.7 lb", True)])
def test_a_tension_needs_its_unit(five, faults, tension, right) -> None:
    job = five.replace("[E4", f"[{{note: E4, gauge: 0.3, tension: {tension}}}")
    told = faults(job)
    assert (
        told == []
        if right
        else told
        == [
            (
                "job.yaml:3 strings[1].tension: 70 is not allowed; a tension needs its unit; "
                "write 70 N or 15.7 lb"
            )
        ]
    )
