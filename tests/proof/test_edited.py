"""Files that another program saved, renamed, cut up or joined still prove."""

from __future__ import annotations

import io
import math
import random
import re
from pathlib import Path

import ezdxf
import pytest
import svgpathtools

import layout
from layout.api import draw_all, make_plan, prove_drawings, read_job, render_files
from layout.files.dxf import render_dxf
from layout.proof.prove import prove_files

EXAMPLES_FOLDER = Path(layout.__file__).parents[1] / "examples"
EXAMPLES = ["five-line", "multiscale-seven"]


@pytest.mark.parametrize("example", ["multiscale-seven"])  # the one with round pocket ends
@pytest.mark.parametrize("version", ["r2000", "r12"])
@pytest.mark.parametrize("arcs", ["bulge", "pieces", "chords"])
def test_every_way_of_writing_arcs_passes(boards, example, version, arcs):
    board = boards(example)
    content = render_dxf(board.sheet, version=version, arcs=arcs)
    report = board.prove("board.dxf", content)
    assert report.problems == ()
    assert report.complete
    assert report.largest_mm <= (0.0021 if arcs == "chords" else 2e-6)


def test_a_file_without_a_unit_says_so(boards):
    board = boards("parlour")
    report = board.prove("board.dxf", render_dxf(board.sheet, version="r12"))
    assert report.unit == "none"
    assert [note.code for note in report.notes] == ["unit"]


@pytest.mark.parametrize("example", EXAMPLES)
def test_a_file_saved_again_passes(boards, edit_dxf, example):
    board = boards(example)
    assert board.prove("board.dxf", edit_dxf(board.dxf, lambda _: None)).complete


@pytest.mark.parametrize("example", EXAMPLES)
def test_renamed_layers_and_another_order_pass(boards, edit_dxf, example):
    board = boards(example)

    def change(document):
        space = document.modelspace()
        for layer in list(document.layers):
            if layer.dxf.name not in {"0", "Defpoints"}:
                layer.rename(f"L-{layer.dxf.name[::-1]}")
        entities = list(space)
        for entity in entities:
            space.unlink_entity(entity)
        random.Random(3).shuffle(entities)
        for entity in entities:
            space.add_entity(entity)

    edited = edit_dxf(board.dxf, change)
    assert b"\nL-TOLS_TUC\n" in edited or b"\nL-TEKCOP_TUC\n" in edited
    report = board.prove("any name.dxf", edited)
    assert report.complete
    assert report.notes == ()


def test_all_on_one_layer_passes_with_a_note(boards, edit_dxf):
    board = boards("parlour")

    def change(document):
        for entity in document.modelspace():
            entity.dxf.layer = "0"

    report = board.prove("board.dxf", edit_dxf(board.dxf, change))
    assert report.complete
    assert [note.code for note in report.notes] == ["layers-mixed"]


@pytest.mark.parametrize("example", EXAMPLES)
def test_polylines_taken_apart_and_lines_turned_round_pass(boards, edit_dxf, example):
    board = boards(example)

    def change(document):
        space = document.modelspace()
        for polyline in list(space.query("LWPOLYLINE")):
            polyline.explode(space)
        for line in space.query("LINE")[::2]:
            line.dxf.start, line.dxf.end = line.dxf.end, line.dxf.start

    report = board.prove("board.dxf", edit_dxf(board.dxf, change))
    assert report.problems == ()
    assert report.complete
    assert report.largest_mm < 1e-6


@pytest.mark.parametrize("example", ["multiscale-seven"])
def test_divided_lines_pass(boards, edit_dxf, example):
    board = boards(example)

    def change(document):
        space = document.modelspace()
        for polyline in list(space.query("LWPOLYLINE")):
            polyline.explode(space)
        for line in list(space.query("LINE")):
            start, end, layer = line.dxf.start, line.dxf.end, {"layer": line.dxf.layer}
            middle = start.lerp(end, 0.37)
            space.delete_entity(line)
            space.add_line(start, middle, layer)
            space.add_line(end, middle, layer)

    report = board.prove("board.dxf", edit_dxf(board.dxf, change))
    assert report.problems == ()
    assert report.complete


def test_joined_lines_pass(boards, edit_dxf):
    """Two reference lines on one line, where the drawing has left something out between them."""
    board = boards("multiscale-seven")

    def change(document):
        space = document.modelspace()
        first, *rest = space.query("LINE[layer=='REF_CENTRE']")
        points = [point for line in (first, *rest) for point in (line.dxf.start, line.dxf.end)]
        points.sort(key=lambda point: point.x)
        # The bridge line and others keep their place; only what touches is joined.
        for line in rest:
            space.delete_entity(line)
        first.dxf.start, first.dxf.end = points[0], points[-1]

    edited = edit_dxf(board.dxf, change)
    report = board.prove("board.dxf", edited)
    strays = [problem for problem in report.problems if problem.code not in {"duplicate", "extra"}]
    assert strays == []


def test_lines_joined_along_an_edge_pass(boards, edit_dxf):
    """A pocket's side is divided in the sheet's file and whole in the edited one, and back."""
    board = boards("bass")

    def divide(document):
        space = document.modelspace()
        for polyline in list(space.query("LWPOLYLINE[layer=='CUT_POCKET']")):
            points = [(x, y) for x, y in polyline.get_points("xy")]
            middle = tuple((a + b) / 2 for a, b in zip(points[0], points[1], strict=True))
            polyline.set_points([points[0], middle, *points[1:]], "xy")

    assert board.prove("board.dxf", edit_dxf(board.dxf, divide)).complete


def test_a_file_with_only_the_cuts_passes_with_notes(boards, edit_dxf):
    board = boards("multiscale-seven")

    def change(document):
        space = document.modelspace()
        for entity in list(space):
            if not entity.dxf.layer.startswith("CUT"):
                space.delete_entity(entity)

    report = board.prove("board.dxf", edit_dxf(board.dxf, change))
    assert report.passed
    assert not report.complete
    assert {note.code for note in report.notes} == {"missing"}


def test_lettering_set_anew_is_a_note(boards, edit_dxf):
    board = boards("parlour")

    def change(document):
        space = document.modelspace()
        labels = list(space.query("LWPOLYLINE[layer=='ENGRAVE_LABEL']"))
        for stroke in labels[:5]:
            stroke.translate(0.2, 0.1, 0)
        space.delete_entity(labels[7])

    report = board.prove("board.dxf", edit_dxf(board.dxf, change))
    assert report.passed
    assert not report.complete


def test_a_drawing_seen_from_below_passes(boards, edit_dxf):
    """Programs that mirror twice leave outlines whose own x axis runs the other way."""
    board = boards("multiscale-seven")

    def change(document):
        for polyline in document.modelspace().query("LWPOLYLINE"):
            points = [(-x, y, -bulge) for x, y, bulge in polyline.get_points("xyb")]
            polyline.set_points(points, "xyb")
            polyline.dxf.extrusion = (0, 0, -1)

    assert board.prove("board.dxf", edit_dxf(board.dxf, change)).complete


@pytest.mark.parametrize("example", EXAMPLES)
def test_an_svg_saved_by_a_path_library_passes(boards, tmp_path, example):
    board = boards(example)
    before, after = tmp_path / "before.svg", tmp_path / "after.svg"
    before.write_bytes(board.svg)
    paths, _, page = svgpathtools.svg2paths2(str(before))
    kept = {key: page[key] for key in ("width", "height", "viewBox")}
    svgpathtools.wsvg(paths, filename=str(after), svg_attributes=kept)
    report = board.prove("board.svg", after.read_bytes())
    assert report.problems == ()
    assert not [row for row in report.layers if row.missing or row.extra]


def in_relative_steps(match: re.Match[bytes]) -> bytes:
    """Write a path's absolute M, L, A and Z as m, l, h, v, a and z, with few blanks."""
    words = match[1].decode().split()
    out, at, begun, place = [], (0.0, 0.0), (0.0, 0.0), 0
    while place < len(words):
        command = words[place]
        count = {"M": 2, "L": 2, "A": 7, "Z": 0}[command]
        numbers = words[place + 1 : place + 1 + count]
        place += 1 + count
        if command == "Z":
            out.append("z")
            at = begun
            continue
        ahead = (float(numbers[-2]), float(numbers[-1]))
        dx, dy = (round(ahead[i] - at[i], 4) for i in (0, 1))
        if command == "A":
            radius, flags = numbers[0], numbers[3] + numbers[4]
            out.append(f"a{radius},{radius} 0 {flags}{dx},{dy}")
        elif command == "L" and dy == 0:
            out.append(f"h{dx}")
        elif command == "L" and dx == 0:
            out.append(f"v{dy}")
        else:
            out.append(f"{command.lower()}{dx},{dy}")
        at = ahead
        begun = at if command == "M" else begun
    return f'd="{"".join(out)}"'.encode()


@pytest.mark.parametrize("example", EXAMPLES)
def test_relative_path_commands_pass(boards, example):
    board = boards(example)
    edited = re.sub(rb'(?<= )d="([^"]*)"', in_relative_steps, board.svg)
    assert len(edited) < len(board.svg)
    report = board.prove("board.svg", edited)
    assert report.problems == ()
    assert report.complete


@pytest.mark.parametrize("example", EXAMPLES)
def test_layers_as_labelled_groups_in_scaled_units_pass(boards, example):
    """Pixels of 1/96 inch in the file, a shift on the layer, and the way back on a group in it."""
    board = boards(example)
    edited = re.sub(rb' viewBox="[^"]*"', b"", board.svg)
    inner = "matrix(3.779527559055118 0 0 3.779527559055118 -11.5 7.25)"
    opening = f'<g id="layer1" transform="translate(11.5,-7.25)"><g transform="{inner}">'
    edited = edited.replace(b"<defs />", opening.encode())
    edited = edited.replace(b"</svg>", b"</g></g></svg>")
    report = board.prove("board.svg", edited)
    assert report.problems == ()
    assert report.complete


def test_an_svg_in_inches_passes(boards):
    board = boards("parlour")
    sizes = re.compile(rb'(width|height)="([0-9.]+)mm"')
    edited = sizes.sub(
        lambda match: match[1] + f'="{float(match[2]) / 25.4!r}in"'.encode(), board.svg
    )
    report = board.prove("board.svg", edited)
    assert report.passed
    assert report.unit == "in"


def test_arcs_saved_as_curves_pass(boards):
    """Many drawing programs know no arcs: they save cubic curves, within 0.0003 of the radius."""
    board = boards("multiscale-seven")

    path = re.compile(rb'(?<= )d="([^"]*)"')
    edited = path.sub(lambda match: f'd="{with_curves(match[1].decode())}"'.encode(), board.svg)
    assert b" C " in edited
    assert b" A " not in edited
    report = board.prove("board.svg", edited)
    assert report.problems == ()


def with_curves(text: str) -> str:
    out: list[str] = []
    at = None
    for piece in svgpathtools.parse_path(text):
        if at != piece.start:
            out.append(f"M {piece.start.real} {piece.start.imag}")
        at = piece.end
        if isinstance(piece, svgpathtools.Arc):
            turn = math.radians(piece.delta)
            reach = 4 / 3 * math.tan(turn / 4)
            one = piece.start + reach * 1j * (piece.start - piece.center)
            two = piece.end - reach * 1j * (piece.end - piece.center)
            numbers = [one.real, one.imag, two.real, two.imag, at.real, at.imag]
            out.append("C " + " ".join(f"{float(number)!r}" for number in numbers))
        else:
            out.append(f"L {at.real} {at.imag}")
    return " ".join(out) + (" Z" if text.endswith("Z") else "")


def test_a_file_of_any_name_finds_its_sheet(boards):
    names = ("parlour", "five-line", "multiscale-seven", "bass")
    sheets = {name: boards(name).sheet for name in names}
    report = prove_files(sheets, {"unnamed 7.dxf": boards("bass").dxf})
    assert report.files[0].sheet == "bass"
    assert report.passed


def test_ezdxf_is_what_saved_these_files(boards):
    """The reader under test is not the library that edits: both agree on what is there."""
    board = boards("parlour")
    document = ezdxf.read(io.StringIO(board.dxf.decode()))
    assert len(document.modelspace()) > 100


@pytest.mark.parametrize("example", ["parlour", "bass", "multiscale-seven", "nylon", "five-line"])
def test_every_drawing_of_a_cut_proves_whole(example):
    plan = make_plan(read_job(EXAMPLES_FOLDER / f"{example}.yaml"))
    drawn = draw_all(plan)
    report = prove_drawings(drawn, render_files(plan, drawn, b""))
    assert report.complete
    assert len(report.files) >= 5
