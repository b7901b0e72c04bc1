"""The DXF writer's releases and spellings of arcs, checked tag by tag."""

from __future__ import annotations

import logging
import math
import os
import re
import subprocess
import sys
from collections.abc import Callable
from io import StringIO
from pathlib import Path

import ezdxf.filemanagement
import mpmath
import numpy as np
import pytest
from scipy.spatial import cKDTree

from layout.drawing.outlines import round_corners
from layout.drawing.shapes import Arc, Circle, Lettering, Line, Outline, Polyline3D, Shape
from layout.drawing.sheet import Sheet, make_sheet
from layout.files.dxf import render_dxf

Tags = list[tuple[int, str]]
JOINT_MM = 1e-9


def a_sheet() -> Sheet:
    return make_sheet(
        "a",
        "A",
        shapes=[
            Outline("CUT_OUTLINE", ((0, 0), (40, 0), (40, 9)), (0.1, 0.5, 0)),
            Outline("CUT_OUTLINE", ((50, 0), (60, 0), (60, 9))),
            Line("CUT_SLOT", (1e-6, -2e-5), (3, 1e-5)),
            Circle("DRILL_PIN", (-5e-6, 2), 0.00009),
            Arc("SCRIBE_STOP", (0, 0), 9, -1e-9, 1),
            Polyline3D("CUT_FLOOR", ((0, 0, -1e-5), (1, 0, -2.5), (2, 0, -3))),
            Lettering("ENGRAVE_LABEL", "12", (3, 3)),
        ],
    )


def tags_of(content: bytes) -> Tags:
    lines = content.decode("ascii").split("\n")
    assert lines[-1] == ""
    return [(int(code), value) for code, value in zip(lines[:-1:2], lines[1::2], strict=True)]


def entities_of(content: bytes) -> list[Tags]:
    """The tags of each entity of the ENTITIES section, VERTEX and SEQEND apart."""
    tags = tags_of(content)
    start = tags.index((2, "ENTITIES")) + 1
    entities: list[Tags] = []
    for tag in tags[start:]:
        if tag == (0, "ENDSEC"):
            return entities
        if tag[0] == 0:
            entities.append([])
        entities[-1].append(tag)
    raise AssertionError("the section is not closed")


def kinds_of(content: bytes, layer: str | None = None) -> list[str]:
    return [
        entity[0][1] for entity in entities_of(content) if layer is None or dict(entity)[8] == layer
    ]


def header_of(content: bytes) -> dict[str, Tags]:
    tags = tags_of(content)
    header: dict[str, Tags] = {}
    for tag in tags[2 : tags.index((0, "ENDSEC"))]:
        if tag[0] == 9:
            values = header.setdefault(tag[1], [])
        else:
            values.append(tag)
    return header


# --- release 12 ----------------------------------------------------------------------------------


def test_release_12_header() -> None:
    sheet = a_sheet()
    header = header_of(render_dxf(sheet, version="r12"))
    assert header["$ACADVER"] == [(1, "AC1009")]
    assert header["$HANDLING"] == [(70, "0")]
    assert not {"$INSUNITS", "$MEASUREMENT", "$HANDSEED", "$LWDISPLAY"} & set(header)
    corners = {
        name: [float(value) for _, value in header[name]] for name in header if "MIN" in name
    }
    assert corners["$EXTMIN"] == [*sheet.extents[:2], -3.0]
    assert corners["$LIMMIN"] == [*sheet.extents[:2]]
    assert [float(value) for _, value in header["$EXTMAX"]] == [*sheet.extents[2:], -1e-5]
    assert [float(value) for _, value in header["$LIMMAX"]] == [*sheet.extents[2:]]


def test_release_12_holds_nothing_that_came_later() -> None:
    content = render_dxf(a_sheet(), version="r12")
    tags = tags_of(content)
    codes = {code for code, _ in tags}
    assert not {100, 102, 330, 360, 370, 390, 410} & codes
    assert not [tag for tag in tags if tag[0] in {5, 105} and tag[1]]  # no handles
    sections = [tags[i + 1][1] for i, tag in enumerate(tags) if tag == (0, "SECTION")]
    assert sections == ["HEADER", "TABLES", "BLOCKS", "ENTITIES"]
    allowed = {"LINE", "POLYLINE", "VERTEX", "SEQEND", "CIRCLE", "ARC"}
    assert set(kinds_of(content)) == allowed
    starts = [place for place, tag in enumerate(tags) if tag[0] == 0 and tag[1] == "LAYER"]
    assert [tags[place + 1] for place in starts] == [(2, "0"), *((2, n) for n in a_sheet().layers)]


def test_release_12_polylines() -> None:
    entities = entities_of(render_dxf(a_sheet(), version="r12"))
    heads = [dict(entity) for entity in entities if entity[0] == (0, "POLYLINE")]
    flags = [head[70] for head in heads if head[8].startswith("CUT")]
    assert sorted(flags) == ["1", "1", "8"]  # two closed, one in space
    vertices = [dict(e) for e in entities if e[0] == (0, "VERTEX") and dict(e)[8] == "CUT_OUTLINE"]
    assert len(vertices) == 6  # none repeated
    assert [vertex.get(42) for vertex in vertices] == ["0.1", "0.5", None, None, None, None]
    assert {vertex[30] for vertex in vertices} == {"0.0"}
    deep = [dict(e) for e in entities if e[0] == (0, "VERTEX") and dict(e)[8] == "CUT_FLOOR"]
    assert [(vertex[30], vertex[70]) for vertex in deep] == [
        ("-0.00001", "32"),
        ("-2.5", "32"),
        ("-3.0", "32"),
    ]


def test_release_12_names_are_upper_case() -> None:
    names = {"CUT_SLOT": "saw_058", "CUT_OUTLINE": "Saw_058"}
    tags = tags_of(render_dxf(a_sheet(), version="r12", layers=names))
    used = {value for code, value in tags if code == 8}
    assert "SAW_058" in used
    assert not {name for name in used if name != name.upper()} - {"$Model_Space"}
    newer = {value for code, value in tags_of(render_dxf(a_sheet(), layers=names)) if code == 8}
    assert "saw_058" in {name.lower() for name in newer}
    assert {"saw_058", "Saw_058"} & newer


@pytest.mark.parametrize("version", ["r2000", "r12"])
@pytest.mark.parametrize("arcs", ["bulge", "pieces", "chords"])
def test_plain_ascii_numbers_and_a_clean_audit(version, arcs, caplog) -> None:
    with caplog.at_level(logging.WARNING):
        content = render_dxf(a_sheet(), version=version, arcs=arcs)
    assert caplog.records == []
    assert b"\r" not in content
    numbers = [value for code, value in tags_of(content) if 10 <= code < 60 or 140 <= code < 150]
    assert [n for n in numbers if not re.fullmatch(r"-?\d+(\.\d+)?", n)] == []
    assert [n for n in numbers if n.startswith("-") and float(n) == 0] == []
    document = ezdxf.filemanagement.read(StringIO(content.decode("ascii")))
    audit = document.audit()
    assert audit.errors == []
    assert audit.fixes == []
    assert document.dxfversion == ("AC1009" if version == "r12" else "AC1015")


def test_same_bytes_whatever_the_hash_seed(tmp_path: Path) -> None:
    script = (
        "import sys, hashlib; sys.path[:0] = sys.argv[1:]\n"
        "from layout.drawing.shapes import Circle, Lettering, Line, Outline\n"
        "from layout.drawing.sheet import make_sheet\n"
        "from layout.files.dxf import render_dxf\n"
        "sheet = make_sheet('a', 'A', shapes=[Line('CUT_SLOT', (0, 0), (9, 1)),\n"
        "    Outline('CUT_OUTLINE', ((0, 20), (9, 20)), (1, 0.2)),\n"
        "    Circle('DRILL_PIN', (2, 2), 1), Lettering('ENGRAVE_LABEL', 'a1', (3, 3))])\n"
        "for arcs in ('bulge', 'pieces', 'chords'):\n"
        "    content = render_dxf(sheet, version='r12', arcs=arcs)\n"
        "    assert content == render_dxf(sheet, version='r12', arcs=arcs)\n"
        "    print(hashlib.sha256(content).hexdigest())\n"
    )
    root = str(Path(__file__).parents[3])
    said = {
        subprocess.run(
            [sys.executable, "-c", script, root],
            cwd=tmp_path, env={**os.environ, "PYTHONHASHSEED": seed, "TZ": zone},
            capture_output=True, text=True, check=True,
        ).stdout
        for seed, zone in (("0", "UTC"), ("1", "Pacific/Auckland"))
    }  # fmt: skip
    assert len(said) == 1
    assert len(set(said.pop().split())) == 3


# --- pieces --------------------------------------------------------------------------------------

# Three ways a reader may compute where an arc ends, from the digits in the file.


def by_math(radius: str, degrees: str, centre: str, *, up: bool) -> float:
    angle = float(degrees) * math.pi / 180
    return float(centre) + float(radius) * (math.sin(angle) if up else math.cos(angle))


def by_numpy(radius: str, degrees: str, centre: str, *, up: bool) -> float:
    angle = np.deg2rad(np.float64(degrees))
    return float(centre) + float(radius) * float(np.sin(angle) if up else np.cos(angle))


def exactly(radius: str, degrees: str, centre: str, *, up: bool) -> float:
    with mpmath.workdps(40):
        angle = mpmath.radians(mpmath.mpf(degrees))
        turn = mpmath.sin(angle) if up else mpmath.cos(angle)
        return float(mpmath.mpf(centre) + mpmath.mpf(radius) * turn)


Reader = Callable[..., float]
WAYS: list[Reader] = [by_math, by_numpy, exactly]


def loose_ends(content: bytes, way: Reader) -> list[tuple[float, float]]:
    """Both ends of every LINE and ARC."""
    ends = []
    for entity in entities_of(content):
        tags = dict(entity)
        if tags[0] == "LINE":
            ends += [(float(tags[c]), float(tags[c + 10])) for c in (10, 11)]
        elif tags[0] == "ARC":
            ends += [
                (
                    way(tags[40], tags[code], tags[10], up=False),
                    way(tags[40], tags[code], tags[20], up=True),
                )
                for code in (50, 51)
            ]
    return ends


def widest_gap(ends: list[tuple[float, float]]) -> float:
    """The largest distance of an end from the nearest other one."""
    nearest, _ = cKDTree(ends).query(ends, k=2)  # each is its own nearest
    return float(nearest[:, 1].max())


def hard_outlines() -> list[Shape]:
    slanted = [(700.1, -27.123456), (700.68, -27.2), (706.7, 29.9), (706.12, 29.95)]
    generator = np.random.default_rng(12)
    blobs = [
        Outline(
            "CUT_OUTLINE",
            tuple(
                (
                    float(900 * math.cos(step) + generator.uniform(0, 9)),
                    float(300 * math.sin(step) + 1000 * row),
                )
                for step in np.linspace(0, 6, 12)
            ),
            tuple(
                map(float, generator.normal(0, 0.3, 12) * 10.0 ** generator.uniform(-3, 0.6, 12))
            ),
        )
        for row in range(12)
    ]
    return [
        *blobs,
        round_corners("CUT_POCKET", slanted, radius_mm=0.25),
        round_corners("CUT_POCKET", [(x, -y - 70) for x, y in slanted], radius_mm=0.28),
        Outline("CUT_OUTLINE", ((0, 0), (600.0, 1.3), (600, 19), (0, 19)), (0, 0, 0.00153, 0)),
        Outline("CUT_OUTLINE", ((0, -40), (600, -40), (600, -20), (0, -20)), (0.001, 0, 1e-5, 0)),
        Outline("CUT_OUTLINE", ((-900, 0), (-899.9999, 0)), (1.0, 0.4)),
        Outline("CUT_OUTLINE", ((-950, 0), (-940, 0)), (1.0, 1.0)),
    ]


@pytest.mark.parametrize("way", WAYS)
@pytest.mark.parametrize("version", ["r2000", "r12"])
def test_pieces_close_to_a_millionth_of_a_micrometre(version, way) -> None:
    sheet = make_sheet("a", "A", shapes=hard_outlines())
    content = render_dxf(sheet, version=version, arcs="pieces")
    assert set(kinds_of(content)) == {"LINE", "ARC"}
    ends = loose_ends(content, way)
    assert len(ends) > 300
    assert widest_gap(ends) < JOINT_MM
    # The corners of the sheet are where they were.
    corners = [vertex for shape in sheet.shapes for vertex in shape.vertices]
    assert cKDTree(ends).query(corners)[0].max() < JOINT_MM


def test_fewer_digits_of_an_angle_would_not_close(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("layout.files.dxf._ANGLE_DIGITS", 10)
    content = render_dxf(make_sheet("a", "A", shapes=hard_outlines()), arcs="pieces")
    assert widest_gap(loose_ends(content, exactly)) > JOINT_MM


@pytest.mark.parametrize("version", ["r2000", "r12"])
def test_straight_outlines_stay_polylines(version) -> None:
    polyline = {"r2000": ["LWPOLYLINE"], "r12": ["POLYLINE", *["VERTEX"] * 3, "SEQEND"]}[version]
    kinds = kinds_of(render_dxf(a_sheet(), version=version, arcs="pieces"), "CUT_OUTLINE")
    assert kinds == ["ARC", "ARC", "LINE", *polyline]


def test_chords_leave_holes_and_drop_arcs() -> None:
    content = render_dxf(a_sheet(), arcs="chords")
    assert set(kinds_of(content)) == {
        "LWPOLYLINE",
        "LINE",
        "CIRCLE",
        "POLYLINE",
        "VERTEX",
        "SEQEND",
    }
    assert not [tag for entity in entities_of(content) for tag in entity if tag[0] == 42]
