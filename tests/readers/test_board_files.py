"""Is what independent readers find in the board's files what the plan says in its own numbers?

The expected shapes are computed here from ``plan.json`` and a few words of the job; the sheet
that was drawn is not asked.
"""

from __future__ import annotations

import itertools
import json
import math
import re
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import pytest

import layout
from layout.api import cut_job

EXAMPLES = Path(layout.__file__).parents[1] / "examples"
NAMES = ["bass", "five-line", "multiscale-seven", "nylon", "parlour"]
MM = 0.001
READERS = {
    "dxf by gdal": "read_dxf_gdal",
    "dxf by dxf-parser": "read_dxf_node",
    "svg by svgelements": "read_svg",
}


@dataclass(frozen=True)
class Slotting:
    """What the job says of its slots, and so what stands in the drawing."""

    reach: float
    """How far a slot runs past the finished edge; negative where it stops short."""
    lines: bool = True
    pocket: float | None = None
    """Width of the outline drawn around each slot."""
    corner: float = 0.0
    zero_fret: bool = False


SLOTTING = {
    "bass": Slotting(2.0, lines=False, pocket=0.46, zero_fret=True),
    "five-line": Slotting(2.0),
    "multiscale-seven": Slotting(-1.8, pocket=0.58, corner=0.2),
    "nylon": Slotting(2.0),
    "parlour": Slotting(2.0),
}


@dataclass(frozen=True)
class Expected:
    """Points in the drawing's own frame: slots bass end first, pockets corner by corner."""

    slots: list[np.ndarray]
    pockets: list[tuple[np.ndarray, list[float]]]
    outline: np.ndarray


def expected(plan: dict, slotting: Slotting) -> Expected:
    turn = np.array([1.0, -1.0 if plan["hand"] == "left" else 1.0])
    ends = [piece for fret in plan["frets"] for piece in fret["pieces"]]
    if slotting.zero_fret:
        ends = [_on_the_nut_line(plan), *ends]
    slots, pockets = [], []
    for treble, bass in np.array(ends):
        way = (treble - bass) / math.dist(treble, bass)
        cut = np.array([bass - slotting.reach * way, treble + slotting.reach * way])
        slots.append(cut * turn)
        if slotting.pocket is not None:
            corners, bulges = _pocket(*cut, way, slotting)
            pockets.append((corners * turn, [bulge * turn[1] for bulge in bulges]))
    return Expected(slots, pockets, np.array(plan["board"]["outline"]) * turn)


def _on_the_nut_line(plan: dict) -> list[list[float]]:
    """Where zero crosses the two finished edges of a board whose nut line is x = 0."""
    assert plan["board"]["nut_angle"] == 0
    return [
        [0.0, float(np.interp(0.0, *np.transpose(plan["board"][f"{side}_edge"])))]
        for side in ("treble", "bass")
    ]


def _pocket(
    bass: np.ndarray, treble: np.ndarray, way: np.ndarray, slotting: Slotting
) -> tuple[np.ndarray, list[float]]:
    """A rectangle about the slot; its corners rounded by the cutter where it is blind."""
    half, radius = slotting.pocket / 2, slotting.corner
    side = np.array([way[1], -way[0]])
    square = [
        (bass, side, way), (treble, side, -way), (treble, -side, -way), (bass, -side, way),
    ]  # fmt: skip
    if not radius:
        return np.array([end + half * out for end, out, _ in square]), [0.0] * 4
    quarter = math.tan(math.pi / 8)
    corners, bulges = [], []
    for place, (end, out, inward) in enumerate(square):
        corner = end + half * out
        along, across = corner + radius * inward, corner - radius * out
        # coming along the short side at every even corner, along the long one at every odd
        corners += [across, along] if place % 2 == 0 else [along, across]
        bulges += [quarter, 0.0]
    return np.array(corners), bulges


@pytest.fixture(scope="module")
def made(tmp_path_factory) -> Callable[[str], tuple[dict, Path]]:
    """Cut an example once; give its plan as read from plan.json, and the directory."""
    top = tmp_path_factory.mktemp("boards")
    done: dict[str, tuple[dict, Path]] = {}

    def make(name: str) -> tuple[dict, Path]:
        if name not in done:
            cut_job(EXAMPLES / f"{name}.yaml", top / name)
            done[name] = json.loads((top / name / "plan.json").read_bytes()), top / name
        return done[name]

    return make


@pytest.fixture(params=NAMES)
def name(request) -> str:
    return request.param


@pytest.fixture(params=READERS)
def reader(request) -> tuple[str, Callable]:
    """The ending of a file, and what reads it."""
    form, _, _ = request.param.partition(" by ")
    return form, request.getfixturevalue(READERS[request.param])


def on_layer(reading, layer: str) -> list:
    return [entity for entity in reading.entities if entity.layer == layer]


def corners(entity) -> np.ndarray:
    return np.array([vertex[:2] for vertex in entity.vertices])


def problems(reading, plan: dict, slotting: Slotting) -> list[str]:
    """Everything in which slots, pockets and outline differ from the plan."""
    want = expected(plan, slotting)
    outlines = [(want.outline, [0.0] * len(want.outline))]
    return [
        *_lines_that_differ(on_layer(reading, "CUT_SLOT"), want.slots if slotting.lines else []),
        *_outlines_that_differ(on_layer(reading, "CUT_POCKET"), want.pockets),
        *_outlines_that_differ(on_layer(reading, "CUT_OUTLINE"), outlines),
        *([] if reading.unit in {None, "mm"} else [f"unit {reading.unit}"]),
        *(f"foreign {kind}" for kind in reading.foreign),
    ]


def _lines_that_differ(found: list, wanted: list[np.ndarray]) -> list[str]:
    left = [corners(entity) for entity in found]
    said = []
    for ends in wanted:
        gaps = [
            min(np.abs(line - ends).max(), np.abs(line[::-1] - ends).max())
            for line in left
            if line.shape == ends.shape
        ]
        if not gaps or min(gaps) > MM:
            said.append(f"no slot from {ends[0]} to {ends[1]}")
        else:
            del left[int(np.argmin(gaps))]
    return said + [f"a slot too many at {line[0]}" for line in left]


def _outlines_that_differ(found: list, wanted: list[tuple[np.ndarray, list[float]]]) -> list[str]:
    left, said = list(found), []
    for points, bulges in wanted:
        matching = [entity for entity in left if _is_outline(entity, points, bulges)]
        if not matching:
            said.append(f"no outline at {points[0]}")
        else:
            left.remove(matching[0])
    return said + [f"an outline too many: {entity.where}" for entity in left]


def _is_outline(entity, points: np.ndarray, bulges: list[float]) -> bool:
    """Whether a closed chain goes through these points in order, either way round."""
    drawn = corners(entity)
    if not entity.closed:
        return False
    if entity.chords or (any(bulges) and len(drawn) > len(points)):
        return _passes(drawn, points, bulges)
    if len(drawn) != len(points):
        return False
    for pts, bls in ((points, bulges), _turned_round(points, bulges)):
        first = int(np.abs(pts - drawn[0]).max(axis=1).argmin())
        if np.abs(np.roll(pts, -first, axis=0) - drawn).max() <= MM:
            return bool(np.abs(np.roll(bls, -first) - np.array(entity.bulges)).max() <= 1e-3)
    return False


def _passes(drawn: np.ndarray, points: np.ndarray, bulges: list[float]) -> bool:
    """Whether chords pass every corner, and the top of every arc."""
    steps = np.roll(points, -1, axis=0) - points
    tops = (points + np.roll(points, -1, axis=0)) / 2
    tops += np.array([steps[:, 1], -steps[:, 0]]).T / 2 * np.array(bulges)[:, None]
    curved = tops[np.array(bulges) != 0]
    gaps = np.hypot(*(np.concatenate([points, curved])[:, None] - drawn).transpose(2, 0, 1))
    return bool(gaps.min(axis=1).max() <= MM)


def _turned_round(points: np.ndarray, bulges: list[float]) -> tuple[np.ndarray, list[float]]:
    return points[::-1], [-bulge for bulge in [*bulges[-2::-1], bulges[-1]]]


# --- every example, by every reader --------------------------------------------------------------


def test_slots_pockets_and_outline_are_the_plan_s(name: str, reader, made) -> None:
    plan, directory = made(name)
    form, read = reader
    reading = read(directory / f"board.{form}")
    assert problems(reading, plan, SLOTTING[name]) == []
    frets = len(plan["frets"]) + SLOTTING[name].zero_fret
    drawn = on_layer(reading, "CUT_SLOT") or on_layer(reading, "CUT_POCKET")
    assert len(drawn) == frets


def test_layers_and_kinds_are_the_promised_ones(name: str, reader, made) -> None:
    _, directory = made(name)
    form, read = reader
    reading = read(directory / f"board.{form}")
    cut = {"CUT_SLOT"} if SLOTTING[name].lines else set()
    cut |= {"CUT_POCKET"} if SLOTTING[name].pocket else set()
    wanted = cut | {
        "CUT_OUTLINE", "ENGRAVE_LABEL", "REF_CENTRE", "REF_STRING", "REF_LINE", "REF_BAR",
    }  # fmt: skip
    found = {entity.layer for entity in reading.entities}
    assert wanted <= found <= wanted | {"DRILL_MARK", "DRILL_PIN"}
    if reading.layers is not None:
        assert reading.layers - {"0"} == found
    assert reading.unit in {None, "mm"}
    assert reading.foreign == []
    for entity in reading.entities:
        assert all(vertex[2] == 0 for vertex in entity.vertices)


def test_strings_run_from_nut_to_saddle(name: str, reader, made) -> None:
    plan, directory = made(name)
    form, read = reader
    turn = -1 if plan["hand"] == "left" else 1
    wanted = [np.array([string["nut"], string["saddle"]]) * [1, turn] for string in plan["strings"]]
    found = on_layer(read(directory / f"board.{form}"), "REF_STRING")
    assert _lines_that_differ(found, wanted) == []


def test_a_bar_of_100_mm_is_in_the_file(name: str, reader, made) -> None:
    _, directory = made(name)
    form, read = reader
    lengths = [
        math.dist(*corners(entity))
        for entity in on_layer(read(directory / f"board.{form}"), "REF_BAR")
        if len(entity.vertices) == 2
    ]
    assert min(abs(length - 100) for length in lengths) < 1e-4


def test_nothing_is_drawn_twice_on_any_layer(name: str, made, read_dxf_node) -> None:
    _, directory = made(name)
    edges = [
        (edge, entity.where)
        for entity in read_dxf_node(directory / "board.dxf").entities
        if entity.kind != "circle"  # its halves have one chord
        for edge in entity.edges
    ]
    starts, ends = (np.array([edge[side] for edge, _ in edges]) for side in (0, 1))
    length = np.hypot(*(ends - starts).T)
    assert length.min() > 1e-6
    assert _shared(starts, ends, [bulge for (_, _, bulge), _ in edges]) == []


def _shared(starts: np.ndarray, ends: np.ndarray, bulges: list[float]) -> list[tuple[int, int]]:
    """Pairs of edges that run along one another for more than 0.00001 mm."""
    found = []
    way = ends - starts
    length = np.hypot(*way.T)
    unit = way / length[:, None]
    order = np.argsort(np.minimum(starts[:, 0], ends[:, 0]))
    right = np.maximum(starts[:, 0], ends[:, 0])
    for place, i in enumerate(order):
        for j in order[place + 1 :]:
            if min(starts[j, 0], ends[j, 0]) > right[i] + 1e-5:
                break
            a, b = (i, j) if length[i] >= length[j] else (j, i)
            if abs(bulges[i] - bulges[j]) > 1e-9 and abs(bulges[i] + bulges[j]) > 1e-9:
                continue
            off = [_cross(unit[a], point - starts[a]) for point in (starts[b], ends[b])]
            along = sorted(float(unit[a] @ (point - starts[a])) for point in (starts[b], ends[b]))
            if max(map(abs, off)) < 1e-5 and min(along[1], length[a]) - max(along[0], 0) > 1e-5:
                found.append((int(i), int(j)))
    return found


def _cross(a: np.ndarray, b: np.ndarray) -> float:
    return float(a[0] * b[1] - a[1] * b[0])


def test_the_header_says_millimetres(name: str, made) -> None:
    _, directory = made(name)
    text = (directory / "board.dxf").read_text(encoding="ascii")
    assert re.search(r"\$INSUNITS\n *70\n *4\n", text)
    assert re.search(r"\$MEASUREMENT\n *70\n *1\n", text)
    svg = (directory / "board.svg").read_text(encoding="ascii")
    width, height = re.search(r'viewBox="0 0 ([\d.]+) ([\d.]+)"', svg).groups()
    assert f'width="{width}mm"' in svg
    assert f'height="{height}mm"' in svg


def test_arcs_are_left_as_arcs(made, read_dxf_node, read_svg) -> None:
    _, directory = made("multiscale-seven")
    for reading in (read_dxf_node(directory / "board.dxf"), read_svg(directory / "board.svg")):
        pockets = on_layer(reading, "CUT_POCKET")
        assert len(pockets) == 24
        for pocket in pockets:
            # four round corners of a quarter each, in one arc or two, are one whole turn
            turns = [4 * math.atan(bulge) for bulge in pocket.bulges if bulge]
            assert len(turns) in {4, 8}
            assert abs(sum(turns)) == pytest.approx(math.tau, abs=1e-3)


# --- the other hand ------------------------------------------------------------------------------


def test_a_left_handed_board_is_turned_over_with_its_labels_upright(
    tmp_path, read_dxf_node
) -> None:
    text = (EXAMPLES / "bass.yaml").read_text(encoding="utf-8")
    readings = []
    for hand in ("left", "right"):
        job = tmp_path / f"{hand}.yaml"
        job.write_text(text.replace("hand: left", f"hand: {hand}"), encoding="utf-8")
        cut_job(job, tmp_path / hand)
        readings.append(read_dxf_node(tmp_path / hand / "board.dxf"))
    left, right = readings
    # What is smaller than 3 mm are the names of lines: lettering stays upright.
    for layer in ("CUT_OUTLINE", "CUT_POCKET", "REF_STRING", "REF_LINE"):
        points = [
            np.array(
                sorted(
                    map(tuple, np.concatenate([c for c in drawn if np.ptp(c, axis=0).max() > 3]))
                )
            )
            for drawn in ([corners(e) for e in on_layer(r, layer)] for r in (left, right))
        ]
        turned = np.array(sorted(map(tuple, points[1] * [1, -1] + 0.0)))
        np.testing.assert_allclose(points[0], turned, rtol=0, atol=1e-6)
    # string 1 is the treble one: on the far side for the right hand, on the near one for the left
    # the strokes of "12" are the same strokes, neither mirrored nor upside down
    marks = [_strokes_near_fret_12(reading, side) for reading, side in ((left, 1), (right, -1))]
    assert len(marks[0]) > 3
    np.testing.assert_allclose(marks[0], marks[1], rtol=0, atol=3e-6)


def _strokes_near_fret_12(reading, side: int) -> np.ndarray:
    """Corners of the label beside fret 12, measured from their own lower left."""
    points = [
        corner
        for entity in on_layer(reading, "ENGRAVE_LABEL")
        for corner in corners(entity)
        if abs(corner[0] - 432) < 4 and 25 < side * corner[1] < 50
    ]
    return np.array(points) - np.min(points, axis=0)


# --- mutations of a real file --------------------------------------------------------------------


@pytest.fixture
def board(made) -> tuple[dict, list[str]]:
    """The plan of the fan and the lines of its board.dxf."""
    plan, directory = made("multiscale-seven")
    return plan, (directory / "board.dxf").read_text(encoding="ascii").split("\n")


@pytest.fixture
def caught(tmp_path, read_dxf_node, read_dxf_gdal) -> Callable[[dict, list[str]], list[str]]:
    def look(plan: dict, lines: list[str]) -> list[str]:
        path = tmp_path / "changed.dxf"
        path.write_text("\n".join(lines), encoding="ascii")
        return problems(read_dxf_node(path), plan, SLOTTING["multiscale-seven"])

    return look


def entities(lines: list[str], kind: str, layer: str) -> list[range]:
    """Where the entities of a kind and a layer stand, from their code 0 to the next."""
    start = lines.index("ENTITIES")
    marks = [i for i in range(start - 1, len(lines) - 1, 2) if lines[i].strip() == "0"]
    return [
        range(here, after)
        for here, after in itertools.pairwise(marks)
        if lines[here + 1] == kind and layer in lines[here:after]
    ]


def test_the_file_as_it_is_passes(board, caught) -> None:
    assert caught(*board) == []


def test_inches_for_millimetres_are_caught(board, caught) -> None:
    plan, lines = board
    changed = list(lines)
    for place in range(lines.index("ENTITIES") - 1, len(lines) - 1, 2):
        if lines[place].strip() in {"10", "20", "11", "21"}:
            changed[place + 1] = f"{float(lines[place + 1]) / 25.4:.6f}"
    said = caught(plan, changed)
    assert sum(text.startswith("no slot") for text in said) == 24
    changed = list(lines)
    changed[changed.index("$INSUNITS") + 2] = "     1"
    assert caught(plan, changed) == ["unit in"]


def test_a_dropped_bulge_is_caught(board, caught) -> None:
    plan, lines = board
    pocket = entities(lines, "LWPOLYLINE", "CUT_POCKET")[5]
    bulge = next(i for i in range(pocket.start, pocket.stop, 2) if lines[i].strip() == "42")
    said = caught(plan, lines[:bulge] + lines[bulge + 2 :])
    assert [text.partition(":")[0].partition(" at ")[0] for text in said] == [
        "no outline",
        "an outline too many",
    ]


def test_a_doubled_line_is_caught(board, caught) -> None:
    plan, lines = board
    slot = entities(lines, "LINE", "CUT_SLOT")[0]
    double = lines[slot.start : slot.stop]
    said = caught(plan, lines[: slot.stop] + double + lines[slot.stop :])
    assert len(said) == 1
    assert said[0].startswith("a slot too many")


def test_an_opened_contour_is_caught(board, caught) -> None:
    plan, lines = board
    outline = entities(lines, "LWPOLYLINE", "CUT_OUTLINE")[0]
    flag = next(i for i in range(outline.start, outline.stop, 2) if lines[i].strip() == "70")
    assert lines[flag + 1].strip() == "1"
    said = caught(plan, [*lines[: flag + 1], "     0", *lines[flag + 2 :]])
    assert [text.split(" at ")[0].split(":")[0] for text in said] == [
        "no outline",
        "an outline too many",
    ]


def test_a_slot_moved_by_two_hundredths_is_caught(board, caught) -> None:
    plan, lines = board
    slot = entities(lines, "LINE", "CUT_SLOT")[7]
    x = next(i for i in range(slot.start, slot.stop, 2) if lines[i].strip() == "10")
    moved = [*lines[: x + 1], f"{float(lines[x + 1]) + 0.02:.6f}", *lines[x + 2 :]]
    assert [text.split(" from ")[0].split(" at ")[0] for text in caught(plan, moved)] == [
        "no slot",
        "a slot too many",
    ]
