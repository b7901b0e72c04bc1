"""What does ``stopwright cut`` write, and what does it leave alone?"""

from __future__ import annotations

import json
from pathlib import Path

import pytest

FILES = {"board.dxf", "board.svg", "positions.csv", "plan.json", "job.yaml"}
"""What is written for every job; there may be more."""


@pytest.fixture
def job(write_job) -> Path:
    return write_job("parlour.yaml", scale="25 1/2 in")


@pytest.fixture
def directory(tmp_path: Path) -> Path:
    return tmp_path / "out"


def contents(directory: Path) -> dict[str, bytes]:
    return {path.name: path.read_bytes() for path in directory.iterdir()}


def test_the_files_are_written_and_named(run, job, directory) -> None:
    ran = run("cut", job, "-o", directory)
    assert ran.status == 0
    assert sorted(ran.out.splitlines()) == sorted(map(str, directory.iterdir()))
    assert set(contents(directory)) >= FILES
    assert contents(directory)["job.yaml"] == job.read_bytes()
    assert contents(directory)["plan.json"].decode("ascii") == run("plan", job, "--json").out


def test_talk_goes_to_standard_error(run, job, directory, examples) -> None:
    talk = run("cut", job, "-o", directory).err.splitlines()
    assert talk[0].startswith("note    no-claim-about-pitch: ")
    assert talk[-3].endswith(f" values were assumed; stopwright plan {job} lists them.")
    assert talk[-2].startswith("Read back and measured: ")
    assert talk[-1].startswith("Try on scrap before you cut the blank.")
    pitched = run("cut", examples / "nylon.yaml", "-o", directory.with_name("nylon"))
    assert "Error left over the balanced frets: 0.60 cents rms, 1.63 at worst." in pitched.err


def test_existing_files_are_kept_without_force(run, job, directory) -> None:
    directory.mkdir()
    (directory / "board.dxf").write_text("mine")
    (directory / "notes.txt").write_text("mine too")
    before = contents(directory)
    ran = run("cut", job, "-o", directory)
    assert (ran.status, ran.out) == (3, "")
    assert ran.err == (f"stopwright: {directory}: board.dxf already there; --force replaces it\n")
    assert contents(directory) == before


def test_force_replaces_the_files_and_nothing_else(run, job, directory) -> None:
    directory.mkdir()
    (directory / "board.dxf").write_text("mine")
    (directory / "notes.txt").write_text("mine too")
    assert run("cut", job, "-o", directory, "--force").status == 0
    assert set(contents(directory)) >= {*FILES, "notes.txt"}
    assert contents(directory)["notes.txt"] == b"mine too"
    assert contents(directory)["board.dxf"].startswith(b"  0\nSECTION")
    again = contents(directory)
    assert run("cut", job, "-o", directory).status == 3
    assert run("cut", job, "-o", directory, "--force").status == 0
    assert contents(directory) == again


def test_an_existing_empty_directory_is_filled(run, job, directory) -> None:
    directory.mkdir()
    assert run("cut", job, "-o", directory).status == 0
    assert set(contents(directory)) >= FILES


@pytest.mark.parametrize("place", ["none/deeper", "parlour.yaml", "parlour.yaml/inside", "/proc/x"])
def test_a_place_that_cannot_be_written_ends_with_3(run, job, tmp_path, place: str) -> None:
    before = sorted(tmp_path.rglob("*"))
    ran = run("cut", job, "-o", tmp_path / place)
    assert (ran.status, ran.out) == (3, "")
    assert ran.err.startswith("stopwright: ")
    assert ran.err.count("\n") == 1
    assert sorted(tmp_path.rglob("*")) == before


def test_strict_writes_nothing_when_there_are_warnings(run, write_job, directory) -> None:
    job = write_job(tooling="{machine: router, cutter: 0.8}")
    ran = run("cut", job, "-o", directory, "--strict")
    assert (ran.status, ran.out) == (1, "")
    assert ran.err.splitlines()[-1] == "--strict: 1 findings are warnings or errors"
    assert not directory.exists()
    easy = run("cut", job, "-o", directory)
    assert easy.status == 0
    assert easy.err.startswith("error   slot-narrower-than-cutter: ")


def test_layers_are_renamed_in_both_drawings(run, write_job, directory) -> None:
    job = write_job(layers="{CUT_SLOT: SAW}")
    assert run("cut", job, "-o", directory).status == 0
    for name, mark in (("board.dxf", b"\nSAW\n"), ("board.svg", b'id="SAW"')):
        assert mark in contents(directory)[name]
        assert b"CUT_SLOT" not in contents(directory)[name]


def test_the_job_keeps_its_bytes(run, job, directory) -> None:
    job.write_bytes(b"\xef\xbb\xbf# kept\r\n" + job.read_bytes().replace(b"\n", b"\r\n"))
    assert run("cut", job, "-o", directory).status == 0
    assert (directory / "job.yaml").read_bytes() == job.read_bytes()
    assert json.loads((directory / "plan.json").read_bytes())["title"] == "Six-string"
