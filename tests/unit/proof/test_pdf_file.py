"""Plain PDF files are opened without a general library, and give what that library gives."""

from __future__ import annotations

import io
import re
import subprocess
import sys
import zlib

import pypdf
import pytest
from reportlab import rl_config
from reportlab.pdfgen.canvas import Canvas

from layout.proof.pdf_file import find_plain_pages
from layout.proof.read_pdf import read_pdf


def make(*, compressed=1, letters=0, sizes=((500, 300), (200, 100)), **options):
    before, rl_config.useA85 = rl_config.useA85, letters
    try:
        stream = io.BytesIO()
        canvas = Canvas(stream, invariant=1, pageCompression=compressed, **options)
        for number, size in enumerate(sizes):
            canvas.setPageSize(size)
            canvas.line(10, 20 + number, 90.5, 20)
            canvas.circle(50, 50, 20)
            canvas.showPage()
        canvas.save()
        return stream.getvalue()
    finally:
        rl_config.useA85 = before


def saved(content, change=lambda _: None, **options):
    writer = pypdf.PdfWriter(clone_from=io.BytesIO(content))
    change(writer)
    stream = io.BytesIO()
    writer.write(stream, **options)
    return stream.getvalue()


def turn(writer):
    writer.pages[0].rotate(90)


@pytest.mark.parametrize(
    "content",
    [
        make(),
        make(letters=1),
        make(compressed=0),
        make(sizes=((841.8898, 595.2756),)),
        saved(make()),
        saved(make(), turn),
    ],
    ids=["packed", "letters", "open", "one", "saved", "turned"],
)
def test_pages_are_what_a_general_library_finds(content):
    plain = find_plain_pages(content, most=9)
    assert plain is not None
    pages = pypdf.PdfReader(io.BytesIO(content)).pages
    assert len(plain) == len(pages)
    for page, known in zip(plain, pages, strict=True):
        assert page.box == tuple(map(float, known.mediabox))
        assert page.turn == known.get("/Rotate", 0)
        assert page.contents.strip() == known.get_contents().get_data().strip()


def split_objects(writer):
    writer.pages[0].compress_content_streams()
    writer.encrypt("", algorithm="RC4-128")


@pytest.mark.parametrize(
    "content",
    [
        b"",
        b"%PDF-1.4\n%%EOF",
        saved(make(), split_objects),
        make()[:-200] + make()[-150:],
        make().replace(b"/Kids [ ", b"/Kids [ 99 0 R "),
        make().replace(b"/Count 2", b"/Count 3"),
        make().replace(b"/FlateDecode", b"/LZWDecoder "),
        re.sub(rb"/MediaBox \[[^]]*\]", b"", make()),
        make().replace(b"/Length ", b"/Length 1"),
        make().replace(b"trailer\n<<", b"trailer\n<< /Prev 9"),
    ],
)
def test_other_files_are_left_to_it(content):
    assert find_plain_pages(content, most=9) is None


def test_too_many_pages_are_left_to_it():
    assert find_plain_pages(make(), most=1) is None


def test_contents_that_unpack_without_end_are_left_to_it():
    content = make()
    begin = content.index(b"stream\n") + 7
    end = content.index(b"endstream") - 1
    bomb = zlib.compress(bytes(60_000_000), 9)
    length = re.search(rb"/Length ([0-9]+)", content)
    swollen = content[:begin] + bomb + content[end:]
    swollen = swollen.replace(length[0], b"/Length %d" % len(bomb), 1)
    table = swollen.rindex(b"xref\n", 0, swollen.rindex(b"startxref"))
    assert find_plain_pages(swollen, most=9) is None
    assert table > begin


def test_incremental_changes_are_followed_by_the_library():
    """A file that was added to keeps its old pages; the last ones count."""
    writer = pypdf.PdfWriter(io.BytesIO(make()), incremental=True)
    writer.pages[0].rotate(90)
    stream = io.BytesIO()
    writer.write(stream)
    content = stream.getvalue()
    assert find_plain_pages(content, most=9) is None
    first, second = read_pdf(content).pages
    assert first.height_mm == pytest.approx(500 * 25.4 / 72)
    assert second.height_mm == pytest.approx(100 * 25.4 / 72)


def test_a_plain_file_imports_no_general_library(tmp_path):
    (tmp_path / "a.pdf").write_bytes(make())
    code = (
        "import sys; from pathlib import Path; from layout.proof.read_pdf import read_pdf\n"
        "assert len(read_pdf(Path(sys.argv[1]).read_bytes()).pages) == 2\n"
        "assert 'pypdf' not in sys.modules\n"
    )
    subprocess.run([sys.executable, "-c", code, str(tmp_path / "a.pdf")], check=True)
