from __future__ import annotations

import re

import pytest

from layout.files.page import CAUTIONS, render_page, write_finding
from layout.findings import Finding


def part(page: str, head: str) -> str:
    """One part of the page, from its head to the blank line after it."""
    return next(text for text in page.split("\n\n") if text.startswith(head))


def table(text: str) -> list[list[str]]:
    return [line.split() for line in text.splitlines() if line.startswith("  ")]


def test_a_finding_is_one_line() -> None:
    finding = Finding("slot-tight-for-tang", "warning", "Too tight. Widen it.")
    assert write_finding(finding) == "warning slot-tight-for-tang: Too tight. Widen it."
    assert write_finding(Finding("a", "note", "b")) == "note    a: b"


def test_the_heading_defines_scale_and_zero(plan_of) -> None:
    head = render_page(plan_of()).split("\n\n")[0].splitlines()
    assert head[:3] == [
        "Six-string",
        "6 strings, 20 frets, temperament equal-12, right-handed",
        "Scale: 628.65 mm, the length from nut line to bridge line that is divided",
    ]
    zero = "the face of the nut, where it crosses the centre line"
    assert head[3:] == [f"Zero: {zero}. All places are from zero, in mm"]


@pytest.mark.parametrize(
    ("square_at", "said"),
    [("7", "fret 7"), ("7.5", "fret 7.5"), ("nut", "the nut"), ("bridge", "the bridge")],
)
def test_a_fan_says_where_it_is_square(plan_of, square_at: str, said: str) -> None:
    page = render_page(plan_of(scale=f"{{treble: 620, bass: 640, square_at: {square_at}}}"))
    assert "Scale: 620.00 mm treble, 640.00 mm bass, the lengths of the outer strings" in page
    assert f"square to the centre line at {said}\n" in page
    assert "  angle" in part(page, "FRETS").splitlines()[1]


def test_one_string_and_one_fret_are_not_many(plan_of) -> None:
    page = render_page(plan_of(strings="[A2]", spread="{nut: 0, saddle: 0}", frets="1"))
    assert "\n1 string, 1 fret, " in page


@pytest.mark.parametrize(
    ("keys", "said"),
    [
        ({"nut": "{zero: kerf}"}, "Zero: the middle of the saw line at the nut end"),
        ({"nut": "{zero: fret}"}, "Zero: the crown of the zero fret"),
        ({"hand": "left"}, "Left-handed: drawings are mirrored, numbers are not"),
    ],
)
def test_zero_and_hand_are_told(plan_of, keys, said: str) -> None:
    assert said in render_page(plan_of(**keys)).split("\n\n")[0]


@pytest.mark.parametrize(
    ("keys", "said"),
    [
        ({}, "The nut is straight: the board ends at 0.000 mm, under every string's edge."),
        ({"nut": "{zero: kerf}"}, "The nut is straight: the board ends at 0.290 mm"),
        (
            {"nut": "{zero: fret, thickness: 4}", "heights": "{saddle: 3}"},
            "the board runs on to -6.000 mm, behind the nut.",
        ),
        (
            {"compensation": "{nut: [0.1, 0.3]}", "nut": "{fit: trim}"},
            "By trim: the board ends at 0.300 mm, the largest shift;",
        ),
        (
            {"compensation": "{nut: [0.1, 0.3]}", "nut": "{fit: overhang}"},
            "By overhang: the board ends at 0.000 mm; the strings' edges of the nut reach",
        ),
    ],
)
def test_how_the_nut_shifts_are_brought_about(plan_of, keys, said: str) -> None:
    assert said in part(render_page(plan_of(strung=True, **keys)), "NUT AND SADDLE")


def test_trim_and_overhang_say_how_much(plan_of) -> None:
    rule = "{nut: [0.1, 0.3], saddle: [1, 2]}"
    for fit, column, amounts in (
        ("trim", "file back", ["0.200", "0.000"]),
        ("overhang", "reaches over", ["0.100", "0.300"]),
    ):
        page = render_page(plan_of(strung=True, compensation=rule, nut=f"{{fit: {fit}}}"))
        text = part(page, "NUT AND SADDLE")
        assert column in text
        rows = table(text)
        assert [row[1] for row in rows[1:3]] == ["+0.100", "+0.300"]
        assert [row[2] for row in rows[1:3]] == amounts
        assert [row[3] for row in rows[1:3]] == ["+1.000", "+2.000"]


def test_strings_have_loads_in_both_units(plan_of) -> None:
    plan = plan_of(strung=True)
    text = part(render_page(plan), "STRINGS")
    row = table(text)[2]
    assert row[:3] == ["1", "E4", "0.305"]
    newton, pound, share = (float(cell) for cell in row[-3:])
    assert newton == pytest.approx(pound * 4.4482216, abs=0.08)
    assert 0.3 < share < 0.7
    total = re.search(r"Pull of all strings on the neck: ([\d.]+) N", text)[1]
    assert float(total) == pytest.approx(plan.loads.tension_n.sum(), abs=0.051)


def test_what_is_not_known_is_a_dash(plan_of) -> None:
    text = part(render_page(plan_of()), "STRINGS")
    assert table(text)[2][2:] == ["-", "628.714", "628.714", "-", "-", "-", "-", "-"]
    assert "Pull of all strings" not in text


def test_a_string_by_frequency_shows_it(plan_of) -> None:
    page = render_page(plan_of(strings="[{hz: 440}, {hz: 330.5}]"))
    assert "  440.00 Hz  " in page
    assert "  330.50 Hz  " in page


def test_errors_wrap_after_twelve_frets_and_show_no_signed_zero(plan_of) -> None:
    text = part(render_page(plan_of(strung=True)), "ERRORS")
    heads = [line.split()[1:] for line in text.splitlines() if line.startswith("  string")]
    assert heads == [[str(n) for n in range(1, 13)], [str(n) for n in range(13, 21)]]
    assert not re.search(r"[+-]0\.0\b(?!\d)", text)
    assert "Left out: resonance of body and neck" in text


def test_the_chosen_nut_and_saddle_line_up_with_the_choices(plan_of) -> None:
    text = part(render_page(plan_of(strung=True, compensation="{saddle: each}")), "CHOICES")
    lines = [line for line in text.splitlines()[1:] if re.match(r"  (nut|none|each) ", line)]
    assert len(lines) in {5, 6}  # the head, four choices, and this plan where it is none of them
    assert sum(line.endswith("  <- this plan") for line in lines) == 1
    worst = lines[0].index("worst") + len("worst")
    assert all(line[worst - 1].isdigit() for line in lines[1:])
    listed = render_page(plan_of(strung=True, compensation="{saddle: [1, 2]}"))
    assert re.search(r"  none .*<- this plan", listed)


def test_the_worst_error_names_the_fret_by_its_label(plan_of) -> None:
    page = render_page(plan_of(strung=True, frets='{steps: [1, 2], labels: ["low", "high"]}'))
    assert re.search(r"worst [+-]\d\.\d\d on string [12] at fret (low|high)", page)
    assert "Over frets low to high: " in page


def test_clash_is_shown_for_a_keyed_record_only(plan_of) -> None:
    assert "CLASH" not in render_page(plan_of())
    page = render_page(plan_of(frets="{count: 8, temperament: meantone-quarter-comma, key: C}"))
    assert table(part(page, "CLASH"))[0] == ["fret", "cents", "mm"]


def test_a_loose_bridge_is_told_where_it_stands(plan_of) -> None:
    page = render_page(plan_of(bridge="loose"))
    assert "The bridge is loose: it stands 628.65 mm from zero at the treble" in page


def test_what_is_assumed_and_the_cautions_close_the_page(plan_of) -> None:
    page = render_page(plan_of())
    assert re.search(r"^  supports\.nut +carried$", part(page, "ASSUMED"), re.MULTILINE)
    assert page.endswith("\n".join(f"  - {caution}" for caution in CAUTIONS) + "\n")


def test_no_findings_are_said_to_be_none(plan_of) -> None:
    assert part(render_page(plan_of(strung=True)), "FINDINGS") == "FINDINGS\n  none"
    geometry = part(render_page(plan_of()), "FINDINGS").splitlines()
    assert geometry[1].startswith("  note    no-claim-about-pitch: ")
