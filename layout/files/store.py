"""How do files reach the disk whole or not at all?

Everything is rendered before anything is written. A new directory is built beside its place and
renamed into it; files in an existing directory are written beside their places and renamed over
them one by one. A crash, a full disk or a kill leaves at worst temporary entries, whose names
carry the number of the process that made them; the next run clears those whose process is gone.
"""

from __future__ import annotations

import errno
import os
import re
import shutil
import socket
from collections.abc import Iterable, Iterator, Mapping
from contextlib import contextmanager, suppress
from hashlib import blake2s
from pathlib import Path
from secrets import token_hex

from layout.errors import FileError

_FILE_NAME = re.compile(r"[A-Za-z0-9_][A-Za-z0-9._-]{0,120}(?<!\.)")
"""Names every file system takes, and none that hides or leads elsewhere."""
_DEVICE = re.compile(r"(?:con|prn|aux|nul|com\d|lpt\d)(?:\..*)?", re.IGNORECASE)
"""Names that Windows keeps for devices."""
_LEFTOVER = re.compile(r"\.stopwright-([0-9a-f]{8})-(\d{1,10})-[0-9a-f]{8}\.tmp")

_REASONS = {
    errno.ENOSPC: "the disk is full",
    errno.EDQUOT: "the disk quota is used up",
    errno.EFBIG: "the file is larger than the disk allows",
    errno.EROFS: "the disk is read-only",
    errno.EACCES: "writing there is not permitted",
    errno.EPERM: "writing there is not permitted",
    errno.ENOENT: "the directory went away",
    errno.ENOTDIR: "part of its path is a file, not a directory",
    errno.ELOOP: "its links lead in a circle",
    errno.ENAMETOOLONG: "its path is too long",
    errno.ENOTEMPTY: "another program wrote there at the same moment",
    errno.EEXIST: "another program wrote there at the same moment",
}


def store_files(
    directory: Path | str, files: Mapping[str, bytes], *, force: bool = False
) -> tuple[Path, ...]:
    """Write a set of files into a directory, whole or not at all.

    Parameters
    ----------
    directory
        A new one (its parent exists), or an existing one that gets the files added. A link is
        followed to the directory it means.
    files
        Name to contents.
    force
        Whether files of these names may be replaced. A link of that name is itself replaced;
        what it points to stays as it is.

    Returns
    -------
    tuple of Path
        The files written, in the given order.

    Raises
    ------
    FileError
        For a name that does not suit every file system; when one of the files is there and
        ``force`` is not given (all of them are named); when the place cannot be written to or the
        disk is full. Nothing of the new files is then left behind, and what was there is
        untouched, except where a disk fails between two of the final renames.

    """
    _check_names(files)
    target = Path(os.path.realpath(directory))
    shown = str(directory)
    with _faults_named(shown):
        if target.is_dir():
            _check_free(target, files, shown=shown, force=force)
            _clear_leftovers(target)
            _write_into(target, files)
        else:
            _check_parent(target, shown)
            _clear_leftovers(target.parent)
            _write_new(target, files)
    return tuple(Path(directory) / name for name in files)


def _check_names(files: Mapping[str, bytes]) -> None:
    if not files:
        raise FileError("there is nothing to write")
    folded: dict[str, str] = {}
    for name in files:
        if not _FILE_NAME.fullmatch(name) or _DEVICE.fullmatch(name):
            raise FileError(
                f"{name!r} is no name for a file; use letters, digits, and . - _ within it"
            )
        if name.lower() in folded:
            raise FileError(f"{folded[name.lower()]} and {name} are one file on some disks")
        folded[name.lower()] = name


def _check_free(target: Path, names: Iterable[str], *, shown: str, force: bool) -> None:
    there = [name for name in names if os.path.lexists(target / name)]
    if there and not force:
        raise FileError(
            f"{shown}: {', '.join(there)} already there; --force replaces "
            f"{'it' if len(there) == 1 else 'them'}"
        )
    for name in there:
        place = target / name
        if place.is_dir() and not place.is_symlink():
            raise FileError(f"{shown}: {name} is a directory, and no file can replace it")


def _check_parent(target: Path, shown: str) -> None:
    if os.path.lexists(target):
        raise FileError(f"{shown} is a file, not a directory")
    if not target.parent.is_dir():
        raise FileError(f"{shown}: the directory {target.parent.name} to make it in is not there")


def _write_new(target: Path, files: Mapping[str, bytes]) -> None:
    building = target.parent / _temporary_name()
    try:
        building.mkdir()
        for name, content in files.items():
            _write_whole(building / name, content)
        _sync_directory(building)
        building.rename(target)
    except BaseException:
        shutil.rmtree(building, ignore_errors=True)
        raise
    _sync_directory(target.parent)


def _write_into(target: Path, files: Mapping[str, bytes]) -> None:
    waiting: dict[Path, Path] = {}
    try:
        # All are on the disk before the first is moved: a full disk leaves the old set whole.
        for name, content in files.items():
            temporary = target / _temporary_name()
            waiting[temporary] = target / name
            _write_whole(temporary, content)
        for temporary, place in waiting.items():
            temporary.replace(place)
    except BaseException:
        for temporary in waiting:
            with suppress(OSError):
                temporary.unlink()
        raise
    _sync_directory(target)


def _write_whole(path: Path, content: bytes) -> None:
    with path.open("xb") as stream:
        stream.write(content)
        stream.flush()
        os.fsync(stream.fileno())


def _sync_directory(directory: Path) -> None:
    """Make renames last through a power cut, where the system lets a directory be synced."""
    with suppress(OSError):
        handle = os.open(directory, os.O_RDONLY)
        try:
            os.fsync(handle)
        finally:
            os.close(handle)


def _temporary_name() -> str:
    return f".stopwright-{_host()}-{os.getpid()}-{token_hex(4)}.tmp"


def _host() -> str:
    """Eight hexadecimal digits for this machine: on shared disks, process numbers repeat."""
    return blake2s(socket.gethostname().encode(), digest_size=4).hexdigest()


def _clear_leftovers(directory: Path) -> None:
    """Remove what killed runs on this machine left, and nothing else."""
    for entry in list(os.scandir(directory)):
        match = _LEFTOVER.fullmatch(entry.name)
        if match is None or match[1] != _host() or _is_alive(int(match[2])):
            continue
        with suppress(OSError):
            if entry.is_dir(follow_symlinks=False):
                shutil.rmtree(entry.path, ignore_errors=True)
            else:
                Path(entry.path).unlink()


def _is_alive(process: int) -> bool:
    if os.name != "posix":
        return True  # elsewhere asking could end the process: leave its files alone
    try:
        os.kill(process, 0)
    except ProcessLookupError:
        return False
    except (OSError, OverflowError):
        return True
    return True


@contextmanager
def _faults_named(shown: str) -> Iterator[None]:
    """Turn what the system says into a sentence about the directory the user named."""
    try:
        yield
    except FileError:
        raise
    except OSError as fault:
        reason = _REASONS.get(fault.errno or 0) or (fault.strerror or str(fault)).lower()
        raise FileError(f"{shown} could not be written: {reason}") from fault
