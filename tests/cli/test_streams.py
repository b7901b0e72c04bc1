"""What happens when whoever reads the output goes away, the disk is full, or the user stops it?"""

from __future__ import annotations

import os
import signal
import subprocess
import sys
from pathlib import Path

import pytest

pytestmark = pytest.mark.skipif(os.name != "posix", reason="pipes and signals of a POSIX system")

HEAR_INTERRUPTS = (
    "import signal; signal.signal(signal.SIGINT, signal.default_int_handler);"
    "from layout.cli import main; main()"
)


@pytest.mark.parametrize("more", [(), ("--json",)])
def test_a_reader_that_goes_away_leaves_no_traceback(apart, examples, more) -> None:
    gone, mine = os.pipe()
    os.close(gone)
    started = apart("plan", examples / "five-line.yaml", *more, stdout=mine)
    os.close(mine)
    _, said = started.communicate(timeout=60)
    assert started.returncode in {0, 1}
    assert said == ""


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="no device that is always full")
@pytest.mark.parametrize(
    "words", [["plan", "five-line.yaml"], ["plan", "five-line.yaml", "--json"], ["--help"]]
)
def test_a_full_disk_behind_the_output_ends_with_3(apart, examples, words) -> None:
    with Path("/dev/full").open("w") as full:
        started = apart(*words, stdout=full, cwd=examples)
        _, said = started.communicate(timeout=60)
    assert started.returncode == 3
    assert said == "stopwright: standard output: No space left on device\n"


def test_a_closed_output_ends_with_3_before_anything_is_done(apart, examples, tmp_path) -> None:
    # a shell closes it, as a script's `>&-` does
    shell = 'exec "$0" -c "from layout.cli import main; main()" "$@" >&-'
    job, directory = examples / "five-line.yaml", tmp_path / "out"
    env = os.environ | {"PYTHONPATH": str(examples.parent)}
    ran = subprocess.run(
        ["sh", "-c", shell, sys.executable, "cut", str(job), "-o", str(directory)],
        check=False, stderr=subprocess.PIPE, text=True, timeout=60, env=env,
    )  # fmt: skip
    assert ran.returncode == 3
    assert ran.stderr == "stopwright: standard output is closed\n"
    assert not directory.exists()


def test_an_interrupt_leaves_no_traceback_and_no_file(apart, tmp_path) -> None:
    job, directory = tmp_path / "job.yaml", tmp_path / "out"
    os.mkfifo(job)
    started = apart("cut", job, "-o", directory, program=HEAR_INTERRUPTS)
    with job.open("wb"):  # opens once the command waits for the job
        started.send_signal(signal.SIGINT)
        out, said = started.communicate(timeout=60)
    assert started.returncode not in {0, 2, 3}
    assert out == ""
    assert said.strip() == "Aborted!"
    assert not directory.exists()


def test_a_terminal_without_the_title_s_letters_gets_their_numbers(
    apart, write_job, tmp_path, monkeypatch
) -> None:
    monkeypatch.setenv("PYTHONIOENCODING", "latin-1")
    job = write_job("bass.yaml", title="Bass in B\u266d")
    started = apart("plan", job)
    out, said = started.communicate(timeout=60)
    assert (started.returncode, said) == (0, "")
    assert out.startswith("Bass in B\\u266d\n")
    started = apart("cut", job, "-o", tmp_path / os.fsdecode(b"b\xfcnde"))
    out, said = started.communicate(timeout=60)
    assert started.returncode == 0
    assert "Traceback" not in said
    assert out.splitlines()[0].endswith("b\\udcfcnde/board.dxf")


def test_a_command_runs_from_anywhere_as_a_user_runs_it(apart, examples, tmp_path) -> None:
    started = apart("cut", examples / "parlour.yaml", "-o", "cut", cwd=tmp_path)
    out, _ = started.communicate(timeout=60)
    assert started.returncode == 0
    assert out.splitlines()[0] == str(Path("cut") / "board.dxf")
    assert (tmp_path / "cut" / "board.dxf").stat().st_size > 10_000
