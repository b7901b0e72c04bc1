"""The DXF writer: same bytes every time, plain numbers, only what a cutter reads."""

from __future__ import annotations

import math
import os
import subprocess
import sys
from pathlib import Path

import ezdxf
import pytest

from layout.drawing.shapes import Arc, Circle, Lettering, Line, Outline, Polyline3D
from layout.drawing.sheet import Sheet, make_sheet
from layout.errors import FileError
from layout.files.dxf import render_dxf
from layout.files.layers import COLOURS


def a_sheet() -> Sheet:
    return make_sheet(
        "a",
        "A – title",
        shapes=[
            Outline("CUT_OUTLINE", ((0, 0), (40, 0), (40, 0.00005)), (1e-7, 0, 0)),
            Line("CUT_SLOT", (1e-6, -2e-5), (3, 1e-5)),
            Circle("DRILL_PIN", (-5e-6, 2), 0.00009),
            Arc("SCRIBE_STOP", (0, 0), 9, -1e-9, 1),
            Polyline3D("CUT_FLOOR", ((0, 0, -1e-5), (1, 0, -2.5))),
            Lettering("ENGRAVE_LABEL", "12", (3, 3)),
        ],
    )


def tags_of(content: bytes) -> list[tuple[int, str]]:
    lines = content.decode("ascii").split("\n")
    return [(int(code), value) for code, value in zip(lines[:-1:2], lines[1::2], strict=True)]


def test_tiny_numbers_are_written_out_and_not_lost() -> None:
    content = render_dxf(a_sheet())
    values = [value for code, value in tags_of(content) if 10 <= code < 60]
    assert {"0.000001", "-0.00002", "0.00001", "-0.000005", "0.00009", "0.0000001"} <= set(values)
    for value in values:
        assert "e" not in value.lower()
        assert value.lstrip("-").replace(".", "", 1).isdigit()
        assert not (value.startswith("-") and float(value) == 0)


def test_the_layer_table_lists_what_is_drawn_on_and_layer_0() -> None:
    sheet = a_sheet()
    tags = tags_of(render_dxf(sheet))
    starts = [place for place, tag in enumerate(tags) if tag == (0, "LAYER")]
    names, colours = [], {}
    for place in starts:
        record = dict(reversed(tags[place : place + 12]))
        names.append(record[2])
        colours[record[2]] = int(record[62])
    assert names == ["0", *sheet.layers]
    assert all(colours[layer] == COLOURS[layer].number for layer in sheet.layers)
    assert len({colour.number for colour in COLOURS.values()}) == len(COLOURS)
    assert len({colour.rgb for colour in COLOURS.values()}) == len(COLOURS)


def test_colours_are_the_same_in_every_format() -> None:
    for layer, colour in COLOURS.items():
        red, green, blue = ezdxf.colors.aci2rgb(colour.number)
        assert f"#{red:02x}{green:02x}{blue:02x}" == colour.rgb, layer


def test_two_layers_may_share_a_name() -> None:
    names = {"CUT_OUTLINE": "cut", "CUT_SLOT": "CUT", "CUT_FLOOR": "cut"}
    tags = tags_of(render_dxf(a_sheet(), layers=names))
    used = {value.lower() for code, value in tags if code == 8}
    assert "cut" in used
    assert "cut_slot" not in used


@pytest.mark.parametrize("name", ["", "a b", "1st", "Säge", "x" * 32, "a/b", "<a>", "a\n0"])
def test_names_some_reader_would_refuse(name: str) -> None:
    with pytest.raises(FileError, match="cannot be called"):
        render_dxf(a_sheet(), layers={"CUT_SLOT": name})


def test_a_layer_there_is_not() -> None:
    with pytest.raises(FileError, match="there is no layer CUT_SLOTS; the layers are CUT_OUTLINE"):
        render_dxf(a_sheet(), layers={"CUT_SLOTS": "a"})


def test_same_sheet_same_bytes_and_options_given_back() -> None:
    before = ezdxf.options.write_fixed_meta_data_for_testing
    first = render_dxf(a_sheet())
    assert render_dxf(a_sheet()) == first
    assert ezdxf.options.write_fixed_meta_data_for_testing == before


def test_same_bytes_whatever_the_place_time_zone_hash_seed_and_ini_file(tmp_path: Path) -> None:
    script = (
        "import sys, hashlib; sys.path[:0] = sys.argv[1].split(':')\n"
        "from layout.drawing.shapes import Circle, Lettering, Line\n"
        "from layout.drawing.sheet import make_sheet\n"
        "from layout.files.dxf import render_dxf\n"
        "from layout.files.svg import render_svg\n"
        "sheet = make_sheet('a', 'A', shapes=[Line('CUT_SLOT', (0, 0), (9, 1)),\n"
        "    Circle('DRILL_PIN', (2, 2), 1), Lettering('ENGRAVE_LABEL', 'a1', (3, 3))])\n"
        "print(hashlib.sha256(render_dxf(sheet) + render_svg(sheet)).hexdigest())\n"
    )
    root = str(Path(__file__).parents[3])
    digests = set()
    for seed, zone, ini in (
        ("0", "UTC", ""),
        ("1", "Pacific/Auckland", "[core]\nwrite_fixed_meta_data_for_testing = false\n"),
    ):
        place = tmp_path / f"place{seed}"
        place.mkdir()
        (place / "ezdxf.ini").write_text(ini)
        environment = {**os.environ, "PYTHONHASHSEED": seed, "TZ": zone}
        run = subprocess.run(
            [sys.executable, "-c", script, root],
            cwd=place, env=environment, capture_output=True, text=True, check=True,
        )  # fmt: skip
        digests.add(run.stdout.strip())
    assert len(digests) == 1


def test_angles_of_arcs_are_degrees_from_0_to_360() -> None:
    sheet = make_sheet("a", "A", shapes=[Arc("CUT_SLOT", (0, 0), 5, -math.pi / 2, 0.25)])
    tags = tags_of(render_dxf(sheet))
    place = max(i for i, tag in enumerate(tags) if tag == (0, "ARC"))
    arc = dict(tags[place : place + 14])
    assert float(arc[50]) == pytest.approx(270, abs=1e-9)
    assert float(arc[51]) == pytest.approx(math.degrees(0.25), abs=1e-9)


def test_extents_count_the_floors_depth() -> None:
    document = ezdxf.filemanagement.read(__import__("io").StringIO(render_dxf(a_sheet()).decode()))
    assert document.header["$EXTMIN"][2] == pytest.approx(-2.5)
    assert document.header["$INSUNITS"] == 4
