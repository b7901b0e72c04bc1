"""Pages of the paper template are measured one by one."""

from __future__ import annotations

import io
from dataclasses import replace

import pypdf
import pytest
from pypdf.generic import DecodedStreamObject, NameObject

from layout.api import make_plan, read_job
from layout.drawing.template import draw_template
from layout.drawing.tiles import plan_tiles
from layout.files.pdf import render_pdf
from layout.proof.prove import prove_files
from layout.proof.read_pdf import read_pdf

POINT = 72 / 25.4


class Paper:
    """A template on pages, its file, and its proof."""

    def __init__(self, path, **paper):
        plan = make_plan(read_job(path))
        self.sheet = draw_template(plan)
        self.tiling = plan_tiles(self.sheet, replace(plan.instrument.paper, **paper))
        self.pdf = render_pdf(self.sheet, self.tiling)

    def prove(self, content, **options):
        sheets, tilings = {"template": self.sheet}, {"template": self.tiling}
        files = {"template.pdf": content}
        return prove_files(sheets, files, tilings=tilings, **options).files[0]

    def edit(self, change):
        writer = pypdf.PdfWriter(clone_from=io.BytesIO(self.pdf))
        change(writer)
        stream = io.BytesIO()
        writer.write(stream)
        return stream.getvalue()


@pytest.fixture(scope="module")
def examples(request):
    return request.path.parents[2] / "examples"


@pytest.fixture(scope="module")
def parlour(examples):
    return Paper(examples / "parlour.yaml")


@pytest.mark.parametrize(
    ("example", "paper"),
    [
        ("parlour", {}),
        ("bass", {"size": "Letter"}),
        ("multiscale-seven", {"size": "A3"}),
        ("nylon", {"size": "roll"}),
        ("parlour", {"bar_along_mm": 99.2, "bar_across_mm": 100.4}),
    ],
)
def test_a_template_as_written_passes(examples, example, paper):
    made = Paper(examples / f"{example}.yaml", **paper)
    report = made.prove(made.pdf)
    assert report.problems == ()
    assert report.complete
    assert report.largest_mm < 2e-3


def test_a_file_saved_again_passes(parlour):
    assert parlour.prove(parlour.edit(lambda _: None)).complete


def test_a_page_turned_for_the_screen_passes(parlour):
    """The page's content is turned one way and its rotation turns it back."""

    def change(writer):
        page = writer.pages[0]
        width, height = (float(side) for side in page.mediabox[2:])
        turned = pypdf.Transformation().rotate(90).translate(height, 0)
        page.add_transformation(turned)
        page.mediabox.upper_right = (height, width)
        page.rotate(90)

    report = parlour.prove(parlour.edit(change))
    assert report.problems == ()


@pytest.mark.parametrize("shift", [(1.0, 0.0), (0.0, -1.0), (0.1, 0.0)])
def test_a_moved_tile_is_named(parlour, codes, shift):
    def change(writer):
        moved = pypdf.Transformation().translate(shift[0] * POINT, shift[1] * POINT)
        writer.pages[1].add_transformation(moved)

    report = parlour.prove(parlour.edit(change))
    assert codes(report) == {"shifted"}
    (problem,) = report.problems
    assert problem.text.startswith("page 2: everything is shifted by")
    assert problem.amount == pytest.approx(abs(complex(*shift)), abs=1e-3)


def test_a_page_fitted_by_the_print_dialogue_is_named(parlour, codes):
    def change(writer):
        for page in writer.pages:
            page.add_transformation(pypdf.Transformation().scale(0.97))

    report = parlour.prove(parlour.edit(change))
    assert codes(report) == {"scale"}
    assert "0.97 of its size" in report.problems[0].text


def test_a_page_of_another_size_is_named(parlour, codes):
    def change(writer):
        for page in writer.pages:
            page.mediabox.upper_right = (792, 612)

    report = parlour.prove(parlour.edit(change))
    assert codes(report) == {"scale"}
    assert "not 297.0 x 210.0" in report.problems[0].text


def test_a_missing_page_is_named(parlour, codes):
    def change(writer):
        writer.remove_page(writer.pages[1])

    report = parlour.prove(parlour.edit(change))
    assert codes(report) == {"missing"}
    assert report.problems[0].text == "1 pages are there, 2 are planned"


def with_contents(parlour, page, change):
    """Change what a page draws, as text."""

    def edit(writer):
        sheet = writer.pages[page]
        stream = DecodedStreamObject()
        stream.set_data(change(sheet.get_contents().get_data()))
        sheet[NameObject("/Contents")] = writer._add_object(stream)

    return parlour.edit(edit)


def first_fret(parlour):
    """The first fret line of page 1, as the file draws it."""
    line = next(shape for shape in parlour.sheet.shapes if shape.layer == "SCRIBE_STOP")
    tile = parlour.tiling.tiles[0]
    start, end = (parlour.tiling.to_page(tile, point) for point in (line.start, line.end))
    return [value * POINT for value in (*start, *end)]


def test_a_deleted_fret_is_missing(parlour, codes):
    wanted = first_fret(parlour)

    def change(content):
        lines = content.split(b"\n")
        kept = [line for line in lines if not draws(line, wanted)]
        assert len(kept) == len(lines) - 1
        return b"\n".join(kept)

    report = parlour.prove(with_contents(parlour, 0, change))
    assert codes(report) == {"missing"}
    assert "SCRIBE_STOP: 1 of" in report.problems[0].text


def test_a_fret_out_of_place_is_measured(parlour, codes):
    wanted = first_fret(parlour)

    def change(content):
        lines = content.split(b"\n")
        place = next(place for place, line in enumerate(lines) if draws(line, wanted))
        assert lines[place + 1].strip() == b"S"
        moved = [b"q 1 0 0 1 %f 0 cm" % (0.3 * POINT), lines[place], b"S Q"]
        return b"\n".join([*lines[:place], *moved, *lines[place + 2 :]])

    report = parlour.prove(with_contents(parlour, 0, change))
    assert codes(report) == {"deviation"}
    assert report.problems[0].amount == pytest.approx(0.3, abs=0.002)


def draws(line, wanted):
    words = line.split()
    numbers = [float(word) for word in words if word.replace(b".", b"").lstrip(b"-").isdigit()]
    return line.rstrip().endswith(b"l") and numbers == pytest.approx(wanted, abs=2e-3)


def test_a_line_nobody_planned_is_extra(parlour, codes):
    place = parlour.tiling.to_page(parlour.tiling.tiles[0], (60.0, 0.0))
    x, y = (value * POINT for value in place)

    def change(content):
        return content + b"\n%f %f m %f %f l S\n" % (x, y - 40, x + 9, y + 40)

    assert codes(parlour.prove(with_contents(parlour, 0, change))) == {"extra"}


def test_a_file_cut_off_anywhere_fails(parlour):
    whole = len(parlour.pdf.rstrip())
    for part in range(40):
        assert not parlour.prove(parlour.pdf[: whole * part // 40]).passed
    for left in range(1, 6):
        assert not parlour.prove(parlour.pdf[: whole - left]).passed


def test_a_hole_in_the_file_never_escapes(parlour):
    for part in range(1, 20):
        start = len(parlour.pdf) * part // 20
        assert not parlour.prove(parlour.pdf[:start] + parlour.pdf[start + 300 :]).complete


def test_without_pages_planned_nothing_is_claimed(parlour):
    (report,) = prove_files({"template": parlour.sheet}, {"template.pdf": parlour.pdf}).files
    assert [problem.code for problem in report.problems] == ["no-sheet"]


def test_pages_are_read_in_mm(parlour):
    pages = read_pdf(parlour.pdf).pages
    assert [round(page.width_mm, 3) for page in pages] == [297.0, 297.0]
    assert all(page.reading.unit == "pt" for page in pages)
