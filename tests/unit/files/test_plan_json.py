from __future__ import annotations

import json
import math

import numpy as np
import pytest

from layout.files.plan_json import FORMAT, along_lane_mm, describe_plan, render_plan_json


def test_the_bytes_are_the_description(plan_of) -> None:
    plan = plan_of(strung=True)
    data = render_plan_json(plan)
    assert data.endswith(b"}\n")
    assert json.loads(data) == describe_plan(plan)
    assert json.loads(data)["format"] == FORMAT == "stopwright-plan/1"


def test_numbers_have_nine_places_and_no_minus_zero(plan_of) -> None:
    text = render_plan_json(plan_of(strung=True, scale="{treble: 600, bass: 640, square_at: 5}"))
    numbers = []
    json.loads(text, parse_float=lambda number: numbers.append(number) or 0.0)
    assert len(numbers) > 300
    assert "-0.0" not in numbers
    for number in numbers:
        assert round(float(number), 9) == float(number)
    assert b"NaN" not in text
    assert b"Infinity" not in text


def test_titles_of_any_script_are_written_in_ascii(plan_of) -> None:
    data = render_plan_json(plan_of(title='"Laúd, \\"ocho\\""'))
    assert json.loads(data)["title"] == 'Laúd, "ocho"'
    data.decode("ascii")


def test_a_string_without_a_stop_has_null(plan_of) -> None:
    plan = describe_plan(plan_of(strung=True, frets="{count: 5, only: {3: [2]}}"))
    fret = plan["frets"][2]
    assert fret["strings"] == [2]
    assert fret["points"][0] is None
    assert fret["points"][1] is not None
    assert fret["along"]["treble_string"] is None
    assert fret["along"]["treble_edge"] is None
    assert fret["along"]["bass_edge"] is not None
    for key in ("target_cents", "predicted_cents", "error_cents"):
        assert plan["pitch"][key][0][2] is None
        assert plan["pitch"][key][1][2] is not None


def test_a_split_fret_has_its_pieces(plan_of) -> None:
    plan = describe_plan(plan_of(frets="{count: 5, only: {3: [1, 2, 5, 6]}}"))
    fret = plan["frets"][2]
    assert len(fret["pieces"]) == 2
    # each ends half-way to the string it does not serve, on the finished edge at the other end
    (_, first_bass), (second_treble, _) = fret["pieces"]
    ys = [string["nut_line"][1] for string in plan["strings"]]
    widening = 1 + fret["at_centre"] / 628.65 * (54 / 36 - 1)
    assert first_bass[1] == pytest.approx((ys[1] + ys[2]) / 2 * widening, abs=1e-6)
    assert second_treble[1] == pytest.approx((ys[3] + ys[4]) / 2 * widening, abs=1e-6)
    assert fret["wire_length"] == pytest.approx(sum(math.dist(*p) for p in fret["pieces"]))
    assert fret["ends"]["treble"][1] > fret["pieces"][0][0][1]  # 2 mm past the edge


def test_edges_are_measured_from_the_nut_line(plan_of) -> None:
    plan = describe_plan(plan_of(nut="{fit: trim}", compensation="{nut: [0.4, 0.4]}", strung=True))
    along = plan["frets"][11]["along"]
    # the board begins at 0.4 mm, the measure does not
    assert plan["board"]["face"] == pytest.approx(0.4)
    x = plan["frets"][11]["at_centre"]
    corners = plan["board"]["treble_edge"]
    slope = (corners[-1][1] - corners[0][1]) / (corners[-1][0] - corners[0][0])
    assert along["treble_edge"] == pytest.approx(x * math.hypot(1, slope), abs=1e-6)


def test_along_lane_is_nan_where_there_is_no_point(plan_of) -> None:
    assert math.isnan(along_lane_mm(plan_of(), 0, np.array([np.nan, np.nan])))


def test_a_saddle_strip_has_its_limit_and_cost(plan_of) -> None:
    strip = describe_plan(
        plan_of(strung=True, compensation="{saddle: each, saddle_thickness: 2.5, frets: [1, 12]}")
    )["saddle_strip"]
    assert strip["limit"] == 2.5
    assert 0 <= strip["width"] <= 2.5
    assert strip["limit_cost_cents"] == 0


def test_the_clash_of_a_keyed_record(plan_of) -> None:
    plan = describe_plan(
        plan_of(
            scale="600",
            strings="[G4, D4, A3, F3, C3, G2]",
            frets="{count: 8, temperament: meantone-quarter-comma, key: C}",
        )
    )
    # a chromatic semitone against a diatonic one: 76.05 and 117.11 cents (Pietro Aaron's
    # temperament; five and seven quarter-comma fifths, by hand)
    assert plan["clash"][0]["fret"] == 1
    assert plan["clash"][0]["spread_cents"] == pytest.approx(41.06, abs=0.005)
    places = [600 * (1 - 2 ** (-cents / 1200)) for cents in (76.049, 117.108)]
    assert plan["clash"][0]["spread_mm"] == pytest.approx(places[1] - places[0], abs=0.01)
