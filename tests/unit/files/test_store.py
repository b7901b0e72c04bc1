"""Files are written whole or not at all, and nothing else is touched."""

from __future__ import annotations

import errno
import os
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest

from layout.errors import FileError
from layout.files import store
from layout.files.store import store_files

FILES = {"board.dxf": b"d" * 3000, "board.svg": b"s" * 10, "job.yaml": b""}


def skip_or_fail(reason: str) -> None:
    if os.environ.get("STOPWRIGHT_NO_SKIPS") == "1":
        pytest.fail(reason)
    pytest.skip(reason)


def everything(directory: Path) -> dict[str, bytes]:
    return {path.name: path.read_bytes() for path in directory.iterdir()}


def test_a_new_directory(tmp_path: Path) -> None:
    written = store_files(tmp_path / "out", FILES)
    assert written == tuple(tmp_path / "out" / name for name in FILES)
    assert everything(tmp_path / "out") == FILES
    assert [path.name for path in tmp_path.iterdir()] == ["out"]


def test_modes_follow_the_umask(tmp_path: Path) -> None:
    before = os.umask(0o027)
    try:
        store_files(tmp_path / "out", FILES)
    finally:
        os.umask(before)
    assert (tmp_path / "out").stat().st_mode & 0o777 == 0o750
    assert (tmp_path / "out" / "job.yaml").stat().st_mode & 0o777 == 0o640


def test_an_existing_directory_gets_files_added(tmp_path: Path) -> None:
    (tmp_path / "mine.txt").write_text("mine")
    store_files(tmp_path, FILES)
    assert everything(tmp_path) == {**FILES, "mine.txt": b"mine"}


def test_existing_files_are_named_and_kept_without_force(tmp_path: Path) -> None:
    (tmp_path / "board.svg").write_text("old")
    (tmp_path / "job.yaml").symlink_to("nowhere")
    with pytest.raises(FileError) as caught:
        store_files(tmp_path, FILES)
    assert str(caught.value) == (
        f"{tmp_path}: board.svg, job.yaml already there; --force replaces them"
    )
    assert (tmp_path / "board.svg").read_text() == "old"
    assert sorted(path.name for path in tmp_path.iterdir()) == ["board.svg", "job.yaml"]


def test_force_replaces_ours_only(tmp_path: Path) -> None:
    store_files(tmp_path / "out", {**FILES, "floors.dxf": b"old"})
    (tmp_path / "out" / "notes.txt").write_text("mine")
    changed = {name: content + b"!" for name, content in FILES.items()}
    store_files(tmp_path / "out", changed, force=True)
    assert everything(tmp_path / "out") == {**changed, "floors.dxf": b"old", "notes.txt": b"mine"}


def test_a_linked_directory_is_followed_and_a_linked_file_is_replaced(tmp_path: Path) -> None:
    real, precious = tmp_path / "real", tmp_path / "precious"
    real.mkdir()
    precious.write_text("precious")
    (real / "job.yaml").symlink_to(precious)
    (tmp_path / "link").symlink_to(real)
    store_files(tmp_path / "link", FILES, force=True)
    assert everything(real) == FILES
    assert not (real / "job.yaml").is_symlink()
    assert precious.read_text() == "precious"
    assert (tmp_path / "link").is_symlink()


def test_a_link_to_a_directory_that_is_not_there_yet(tmp_path: Path) -> None:
    (tmp_path / "link").symlink_to(tmp_path / "real")
    store_files(tmp_path / "link", FILES)
    assert everything(tmp_path / "real") == FILES
    assert (tmp_path / "link").is_symlink()


@pytest.mark.parametrize(
    "name",
    ["", ".", "..", "../a", "a/b", "/a", "a\\b", "C:a", "a\x00", ".hidden", "a.", "con", "LPT1.dxf",
     "a b", "é", "-o", "a\n", "x" * 200],
)  # fmt: skip
def test_bad_names(tmp_path: Path, name: str) -> None:
    with pytest.raises(FileError, match="is no name for a file"):
        store_files(tmp_path / "out", {"good": b"", name: b""})
    assert list(tmp_path.iterdir()) == []


def test_names_that_are_one_on_some_disks(tmp_path: Path) -> None:
    with pytest.raises(FileError, match="board and Board are one file on some disks"):
        store_files(tmp_path / "out", {"board": b"", "Board": b""})


def test_nothing_to_write(tmp_path: Path) -> None:
    with pytest.raises(FileError, match="there is nothing to write"):
        store_files(tmp_path / "out", {})


def test_places_that_cannot_be_written_to(tmp_path: Path) -> None:
    (tmp_path / "file").write_text("x")
    (tmp_path / "loop").symlink_to("loop")
    for place, reason in (
        ("file", "is a file, not a directory"),
        ("file/out", "the directory file to make it in is not there"),
        ("none/out", "the directory none to make it in is not there"),
        ("x" * 300, "its path is too long"),
    ):
        with pytest.raises(FileError, match=reason):
            store_files(tmp_path / place, FILES)
    with pytest.raises(FileError):
        store_files(tmp_path / "loop", FILES)
    (tmp_path / "out" / "board.svg").mkdir(parents=True)
    with pytest.raises(FileError, match=r"board\.svg is a directory"):
        store_files(tmp_path / "out", FILES, force=True)
    assert sorted(path.name for path in tmp_path.iterdir()) == ["file", "loop", "out"]
    assert [path.name for path in (tmp_path / "out").iterdir()] == ["board.svg"]


@pytest.mark.parametrize("existing", [False, True])
@pytest.mark.parametrize(
    ("code", "reason"),
    [
        (errno.ENOSPC, "the disk is full"),
        (errno.EIO, "input/output error"),
        (errno.EROFS, "the disk is read-only"),
        (errno.EACCES, "writing there is not permitted"),
    ],
)
def test_a_fault_part_way_leaves_what_was_there(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, existing, code, reason
) -> None:
    out = tmp_path / "out"
    if existing:
        store_files(out, dict.fromkeys(FILES, b"old"))
    write, count = store._write_whole, iter(range(9))

    def fail_at_second(path: Path, content: bytes) -> None:
        write(path, content[: len(content) // 2])
        if next(count) == 1:
            raise OSError(code, os.strerror(code))

    monkeypatch.setattr(store, "_write_whole", fail_at_second)
    with pytest.raises(FileError, match=f"out could not be written: {reason}"):
        store_files(out, FILES, force=True)
    if existing:
        assert everything(out) == dict.fromkeys(FILES, b"old")
    assert [path.name for path in tmp_path.iterdir()] == (["out"] if existing else [])


def test_an_interrupt_leaves_nothing(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def interrupt(path: Path, content: bytes) -> None:
        path.write_bytes(content)
        raise KeyboardInterrupt

    monkeypatch.setattr(store, "_write_whole", interrupt)
    with pytest.raises(KeyboardInterrupt):
        store_files(tmp_path / "out", FILES)
    with pytest.raises(KeyboardInterrupt):
        store_files(tmp_path, FILES)
    assert list(tmp_path.iterdir()) == []


def test_a_directory_removed_or_made_meanwhile(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    write = store._write_whole

    def remove_first(path: Path, content: bytes) -> None:
        path.parent.rmdir()
        write(path, content)

    monkeypatch.setattr(store, "_write_whole", remove_first)
    (tmp_path / "out").mkdir()
    with pytest.raises(FileError, match="out could not be written: the directory went away"):
        store_files(tmp_path / "out", FILES)

    def make_first(path: Path, content: bytes) -> None:
        write(path, content)
        (tmp_path / "out").mkdir(exist_ok=True)
        (tmp_path / "out" / "board.dxf").write_text("theirs")

    monkeypatch.setattr(store, "_write_whole", make_first)
    with pytest.raises(FileError, match="another program wrote there"):
        store_files(tmp_path / "out", FILES)
    assert everything(tmp_path / "out") == {"board.dxf": b"theirs"}
    assert [path.name for path in tmp_path.iterdir()] == ["out"]


def mounted(kind: str, *options: str):
    done = subprocess.run(["mount", "-t", kind, *options], capture_output=True, check=False)
    if done.returncode:
        skip_or_fail(f"mounting needs rights: {done.stderr.decode(errors='replace').strip()}")


def test_a_full_disk(tmp_path: Path) -> None:
    disk = tmp_path / "disk"
    disk.mkdir()
    mounted("tmpfs", "-o", "size=64k", "tmpfs", str(disk))
    try:
        store_files(disk / "old", FILES)
        large = {"board.dxf": b"new", "board.svg": b"n" * 200_000}
        for place in ("new", "old"):
            with pytest.raises(FileError, match=f"{place} could not be written: the disk is full"):
                store_files(disk / place, large, force=True)
        assert everything(disk / "old") == FILES
        assert [path.name for path in disk.iterdir()] == ["old"]
    finally:
        subprocess.run(["umount", str(disk)], check=True)


def test_a_read_only_disk(tmp_path: Path) -> None:
    disk = tmp_path / "disk"
    disk.mkdir()
    mounted("tmpfs", "-o", "size=64k", "tmpfs", str(disk))
    try:
        store_files(disk / "old", FILES)
        subprocess.run(["mount", "-o", "remount,ro", str(disk)], check=True)
        for place in ("new", "old"):
            with pytest.raises(FileError, match=f"{place} could not be written: the disk is read-"):
                store_files(disk / place, FILES, force=True)
        assert everything(disk / "old") == FILES
    finally:
        subprocess.run(["umount", str(disk)], check=True)


KILLED = """
import sys, time
from layout.files import store
from pathlib import Path
write = store._write_whole
def slow(path, content):
    write(path, content[:1]); path.write_bytes(content); time.sleep(0.002)
store._write_whole = slow
files = {f"f{i}.dxf": bytes([65 + i]) * 50_000 for i in range(8)}
print("go", flush=True)
for force in (False, True):
    store.store_files(sys.argv[1], files, force=force)
time.sleep(9)
"""


@pytest.mark.parametrize("batch", range(4))
def test_a_kill_at_any_moment_leaves_whole_files_or_none(tmp_path: Path, batch: int) -> None:
    """Twenty moments in four batches: files that stand are whole, the rest is cleared."""
    root = str(Path(__file__).parents[3])
    environment = {**os.environ, "PYTHONPATH": root}
    running = []
    for moment in range(5):
        out = tmp_path / f"{moment}" / "out"
        out.parent.mkdir()
        process = subprocess.Popen(
            [sys.executable, "-c", KILLED, str(out)],
            env=environment, stdout=subprocess.PIPE, cwd=tmp_path,
        )  # fmt: skip
        running.append((process, out, 0.003 * (batch + 4 * moment)))
    for process, out, wait in running:
        with process:
            assert process.stdout.readline() == b"go\n"
            time.sleep(wait)
            process.send_signal(signal.SIGKILL)
        files = {f"f{i}.dxf": bytes([65 + i]) * 50_000 for i in range(8)}
        if out.exists():
            named = {n: c for n, c in everything(out).items() if not n.startswith(".")}
            assert named == files
        # The next run clears what the killed one left.
        store_files(out, files, force=True)
        assert everything(out) == files
        assert [path.name for path in out.parent.iterdir()] == ["out"]


def test_leftovers_are_cleared_only_when_surely_dead_and_ours(tmp_path: Path) -> None:
    gone = subprocess.run([sys.executable, "-c", "import os; print(os.getpid())"],
                          capture_output=True, check=True, text=True).stdout.strip()  # fmt: skip
    host = store._host()
    stays = [
        f".stopwright-{host}-{os.getppid()}-0123abcd.tmp",
        f".stopwright-ffffffff-{gone}-0123abcd.tmp",
        f".stopwright-{host}-{gone}-0123abcd.tmp.txt",
        f"stopwright-{host}-{gone}-0123abcd.tmp",
        f".stopwright-{host}-{gone}-0123abcX.tmp",
    ]
    precious = tmp_path / "precious"
    precious.mkdir()
    (precious / "kept").write_text("kept")
    for name in stays:
        (tmp_path / name).write_text("")
    (tmp_path / f".stopwright-{host}-{gone}-00000001.tmp").write_text("")
    (tmp_path / f".stopwright-{host}-{gone}-00000002.tmp").mkdir()
    (tmp_path / f".stopwright-{host}-{gone}-00000002.tmp" / "part").write_text("half")
    (tmp_path / f".stopwright-{host}-{gone}-00000003.tmp").symlink_to(precious)
    store_files(tmp_path / "out", FILES)
    assert sorted(path.name for path in tmp_path.iterdir()) == sorted([*stays, "out", "precious"])
    assert (precious / "kept").read_text() == "kept"
