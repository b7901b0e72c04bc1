"""``stopwright prove``: what it prints, and with which status it ends."""

from __future__ import annotations

import shutil

import pytest

from layout.api import cut_job

EXAMPLE = "examples/parlour.yaml"


@pytest.fixture
def job(request):
    return request.path.parents[2] / EXAMPLE


@pytest.fixture(scope="module")
def written(request, tmp_path_factory):
    """Cut once for all tests of this file."""
    directory = tmp_path_factory.mktemp("prove") / "cut"
    cut_job(request.path.parents[2] / EXAMPLE, directory)
    return directory


@pytest.fixture
def cut(written, tmp_path):
    """Give a directory of files to spoil."""
    return shutil.copytree(written, tmp_path / "cut")


def test_a_cut_proves(run, job, cut):
    ran = run("prove", job, cut)
    assert (ran.status, ran.err) == (0, "")
    assert "CUT_SLOT" in ran.out
    assert "files passed; tolerance 0.01 mm, 0.02 mm on paper." in ran.out
    assert "FAILS" not in ran.out


def test_one_file_proves(run, job, cut):
    ran = run("prove", job, cut / "board.svg")
    assert ran.status == 0
    assert "1 of 1 files passed" in ran.out
    assert ran.out.count("sheet board, unit mm") == 1


def test_a_spoilt_file_fails(run, job, cut):
    board = cut / "board.dxf"
    lines = board.read_text().split("\n")
    place = lines.index("AcDbLine")
    lines[place + 2] = str(float(lines[place + 2]) + 0.05)
    board.write_text("\n".join(lines))
    ran = run("prove", job, cut)
    assert ran.status == 1
    assert (
        "FAILS deviation: CUT_SLOT: 1 of 20 lines is out of place, the worst by 0.0500" in ran.out
    )
    assert run("prove", job, board, "--tolerance", "0.06").status == 0
    assert run("prove", job, board, "--tolerance", "0.003 in").status == 0


def test_a_truncated_file_fails(run, job, cut):
    board = cut / "board.dxf"
    board.write_bytes(board.read_bytes()[:40_000])
    ran = run("prove", job, board)
    assert ran.status == 1
    assert "FAILS truncated: " in ran.out


def test_another_job_fails(run, job, cut):
    ran = run("prove", job.with_name("nylon.yaml"), cut)
    assert ran.status == 1
    assert "FAILS" in ran.out


@pytest.mark.parametrize("tolerance", ["0", "-1", "2 mm", "fine", "nan"])
def test_a_tolerance_is_a_small_length(run, job, cut, tolerance):
    ran = run("prove", job, cut, "--tolerance", tolerance)
    assert ran.status == 2
    assert "--tolerance" in ran.err


def test_wrong_words_are_wrong_usage(run, job, cut):
    assert run("prove", job).status == 2
    ran = run("prove", job, cut / "positions.csv")
    assert ran.status == 2
    assert "a proof reads .dxf, .svg and .pdf files" in ran.err


def test_what_is_not_there_cannot_be_read(run, job, tmp_path):
    ran = run("prove", job, tmp_path / "none.dxf")
    assert ran.status == 3
    assert "none.dxf could not be read: No such file or directory" in ran.err
    ran = run("prove", job, tmp_path)
    assert ran.status == 3
    assert "holds no .dxf, .svg or .pdf file" in ran.err
    assert run("prove", tmp_path / "no.yaml", tmp_path).status == 3


def test_its_help_says_what_it_does(run):
    ran = run("prove", "--help")
    assert ran.status == 0
    assert "Exit status 1 when a file fails" in " ".join(ran.out.split())


@pytest.mark.parametrize(
    "words",
    [["--positive"], ["--dxf", "r12", "--arcs", "pieces"], ["--arcs", "chords", "--positive"]],
)
def test_drawings_of_every_form_prove(run, examples, tmp_path, words):
    job, directory = examples / "multiscale-seven.yaml", tmp_path / "cut"
    ran = run("cut", job, "-o", directory, *words)
    assert ran.status == 0
    assert (directory / ("board-mm.dxf" if "r12" in words else "board.dxf")).exists()
    moved = ["--positive"] if "--positive" in words else []
    assert run("prove", job, directory, *moved).status == 0
    if moved:  # without the word they are not where the job puts them
        told = run("prove", job, directory)
        assert told.status == 1
        assert "FAILS shifted" in told.out
