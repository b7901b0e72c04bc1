from __future__ import annotations

import csv
import io
import math

import pytest

from layout.files.tables import HEADER, render_positions


def rows_of(plan) -> list[dict[str, str]]:
    return list(csv.DictReader(io.StringIO(render_positions(plan).decode("utf-8"))))


def test_the_header_is_the_pinned_one(plan_of) -> None:
    assert HEADER == (
        "fret,label,at_centre_mm,treble_string_mm,bass_string_mm,slot_from_mm,slot_to_mm,"
        "treble_end_x,treble_end_y,bass_end_x,bass_end_y,angle_deg,at_centre_in,nearest_64th,"
        "depth_mm,wire_mm"
    )
    assert render_positions(plan_of()).decode().startswith(HEADER + "\n1,1,35.283,")


def test_fret_12_by_hand(plan_of) -> None:
    row = rows_of(plan_of(slots="{width: 0.6}"))[11]
    # 628.65 / 2; the outer strings splay 9 mm on 628.65, so their half is 314.3572
    assert row["at_centre_mm"] == "314.325"
    assert row["treble_string_mm"] == row["bass_string_mm"] == "314.357"
    assert (row["slot_from_mm"], row["slot_to_mm"]) == ("314.025", "314.625")
    assert (row["at_centre_in"], row["nearest_64th"]) == ("12.3750", "12 3/8")
    assert row["angle_deg"] == "0.000"
    # half the spread of 45 mm there, margin 3 and 2 mm past the edge
    assert float(row["treble_end_y"]) == pytest.approx(22.5 + 3 + 2, abs=5.1e-4)
    assert float(row["bass_end_y"]) == -float(row["treble_end_y"])
    assert float(row["wire_mm"]) == pytest.approx(51, abs=1.1e-3)


def test_every_row_agrees_with_the_plan_to_the_last_digit(plan_of) -> None:
    plan = plan_of(scale="{treble: 600, bass: 640, square_at: 5}", board="{radius: 300}")
    rows = rows_of(plan)
    assert [int(row["fret"]) for row in rows] == list(range(1, 21))
    for index, row in enumerate(rows):
        line, piece = plan.frets.line(index + 1), plan.pieces_of(index + 1)[0]
        for name, exact in (
            ("at_centre_mm", line.at_centre_mm),
            ("treble_end_x", piece.cut_treble_mm[0]),
            ("bass_end_y", piece.cut_bass_mm[1]),
            ("angle_deg", math.degrees(line.angle)),
            ("wire_mm", piece.wire_mm),
        ):
            assert abs(float(row[name]) - exact) <= 0.0005 + 1e-9
        assert "-0.000" not in row.values()
    assert float(rows[0]["angle_deg"]) > 0 > float(rows[19]["angle_deg"])


def test_a_fret_that_misses_an_outer_string_leaves_its_place_empty(plan_of) -> None:
    row = rows_of(plan_of(frets="{count: 5, only: {3: [2, 3]}}"))[2]
    assert row["treble_string_mm"] == row["bass_string_mm"] == ""
    assert row["at_centre_mm"] == "100.020"


def test_labels_with_commas_stay_one_cell(plan_of) -> None:
    plan = plan_of(frets='{steps: [1, 2, 3], labels: ["a", "b;c", "d"]}')
    assert [row["label"] for row in rows_of(plan)] == ["a", "b;c", "d"]
