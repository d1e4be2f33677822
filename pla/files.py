"""Files in and out: reading with errors in words, writing whole or not at all."""

from __future__ import annotations

import contextlib
import errno
import os
import shutil
import sys
from pathlib import Path
from typing import TYPE_CHECKING

from pla.errors import Diagnostic, InputError, Location

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

__all__ = ["read_bytes", "refuse_existing", "write_folder"]

_WHY = {
    errno.ENOSPC: "make room, or choose a folder on another disk",
    errno.EDQUOT: "make room, or choose a folder on another disk",
    errno.EACCES: "choose a folder in which you may write",
    errno.EPERM: "choose a folder in which you may write",
    errno.EROFS: "choose a folder on a disk that can be written",
}


def read_bytes(path: str, limit: int | None = None) -> bytes:
    """The bytes of a file; ``-`` is standard input.

    Args:
        path: Path as the user gave it.
        limit: Read no more than one byte beyond this.

    Raises:
        InputError: If it cannot be read, with the reason.
    """
    size = -1 if limit is None else limit + 1
    try:
        if path == "-":
            return sys.stdin.buffer.read(size)
        with Path(path).open("rb") as file:
            return file.read(size)
    except (OSError, ValueError) as problem:
        code, message = "CANNOT-READ", f"cannot be read: {_reason(problem)}"
        if isinstance(problem, FileNotFoundError):
            code, message = "NO-SUCH-FILE", "no such file"
        elif isinstance(problem, IsADirectoryError):
            code, message = "NOT-A-FILE", "is a folder, a file was expected"
        raise InputError([Diagnostic(code, message, Location(path))]) from problem


def write_folder(
    target: str, files: Mapping[str, bytes], last: str | None = None, *, force: bool = False
) -> tuple[str, ...]:
    """Write all files of a run into a folder: all of them, or none.

    A new folder is made beside its place, with the folders above it that are missing, and gets its
    name by one rename when every file is on the disk. Into an existing folder (only with `force`)
    the order is: every new file aside in a folder within; the old `last` withdrawn; the others
    exchanged; the new `last` put in place. At no moment, power cuts included, does an old fuse file
    stand beside new tables or the other way round; what fails half way is undone in the opposite
    order. A file there that is not of this run and ends as `last` does (the fuse file of another
    run) is not deleted but refused, for the new tables would stand beside it. Other files stay as
    they are.

    Args:
        target: The folder.
        files: Contents by plain file name.
        last: The one to be put in place after all others: the fuse file.
        force: Whether the folder may exist.

    Returns:
        The paths written, in the order of `files`.

    Raises:
        InputError: If the folder exists and `force` is not given, or it cannot be written.
        ValueError: If a name is no plain file name, or `last` is not among them.
    """
    for name in files:
        if name in {"", ".", ".."} or Path(name).name != name:
            raise ValueError(f"{name!r} is no plain file name")
    if last is not None and last not in files:
        raise ValueError(f"{last!r} is not among the files")
    order = sorted(files, key=lambda name: name == last)
    if not target:
        raise _refused("NO-FOLDER", "''", "no name of a folder given")
    place = Path(target)
    try:
        if os.path.lexists(place):
            _check_existing(place, files, last, force=force)
            _exchange(place, files, order, last)
        else:
            _create(place, files, order)
    except OSError as problem:
        message = f"cannot be written: {_reason(problem)}; nothing was changed"
        hint = _WHY.get(problem.errno or 0)
        raise _refused("CANNOT-WRITE", target, message, hint) from problem
    return tuple(str(place / name) for name in files)


def refuse_existing(target: str, *, force: bool) -> None:
    """Say before any work is done that a folder is in the way; `write_folder` looks again.

    Raises:
        InputError: If the target exists and is no folder, or is one and `force` is not given.
    """
    place = Path(target)
    if os.path.lexists(place) and not (force and place.is_dir()):
        raise _exists(place) if place.is_dir() else _no_folder(place)


def _create(target: Path, files: Mapping[str, bytes], order: Sequence[str]) -> None:
    place = target.absolute()
    parent = place.parent
    missing = [folder for folder in (parent, *parent.parents) if not os.path.lexists(folder)]
    standing = parent if not missing else missing[-1].parent
    if not standing.is_dir():
        message = f"{standing}, in which it shall be made, is no folder"
        raise _refused("NO-FOLDER", target, message, "choose another place")
    aside = _unused(parent, place.name)
    try:
        for folder in reversed(missing):
            folder.mkdir()
        aside.mkdir()
        _write_all(aside, files, order)
        try:
            aside.rename(place)
        except OSError as problem:
            if problem.errno in {errno.ENOTEMPTY, errno.EEXIST, errno.ENOTDIR}:
                raise _exists(target) from problem
            raise
        try:
            _sync_folder(parent)
        except OSError:
            place.rename(aside)
            raise
    finally:
        shutil.rmtree(aside, ignore_errors=True)
        for folder in missing:
            # Goes only if nothing came to stand in it.
            with contextlib.suppress(OSError):
                folder.rmdir()


def _exchange(
    target: Path, files: Mapping[str, bytes], order: Sequence[str], last: str | None
) -> None:
    # Within the target, so that it is on the same disk whatever is mounted where.
    aside = _unused(target, "fuseplan")
    new, old = aside / "new", aside / "old"
    keep = False
    try:
        aside.mkdir()
        new.mkdir()
        old.mkdir()
        _write_all(new, files, order)
        try:
            if last is not None:
                _withdraw(target, last, old)
                _sync_folder(target)
            for name in order:
                if name == last:
                    _sync_folder(target)
                else:
                    _withdraw(target, name, old)
                (new / name).rename(target / name)
            _sync_folder(target)
        except BaseException as problem:
            # Whatever stops the restoring, the old files must not be thrown away with `aside`.
            keep = True
            keep = not _restore(target, new, old, order)
            if keep:
                message = (
                    f"cannot be written ({_reason(problem)}), and what was there could not be put "
                    f"back; the old files are in {old}, and {target} holds no old fuse file"
                )
                raise _refused("HALF-WRITTEN", target, message) from problem
            raise
    finally:
        if not keep:
            shutil.rmtree(aside, ignore_errors=True)


def _unused(parent: Path, stem: str) -> Path:
    """A name that nothing has.

    It is known before the folder is made, so that an interruption at any moment finds what to
    remove.
    """
    return parent / f".{stem}.{os.urandom(8).hex()}"


def _withdraw(target: Path, name: str, old: Path) -> None:
    if os.path.lexists(target / name):
        (target / name).rename(old / name)


def _restore(target: Path, new: Path, old: Path, order: Sequence[str]) -> bool:
    """Undo an exchange: first take away every new file, the fuse file first; then put back.

    What was done is read off the disk, so that an interruption between two steps does no harm.
    Whatever cannot be undone stops this, before an old fuse file comes back beside new tables.
    """
    try:
        for name in reversed(order):
            moved = not os.path.lexists(new / name)
            if moved:
                (target / name).rename(new / name)
        for name in order:
            if os.path.lexists(old / name):
                (old / name).rename(target / name)
        _sync_folder(target)
    except OSError:
        return False
    return True


def _check_existing(
    target: Path, files: Mapping[str, bytes], last: str | None, *, force: bool
) -> None:
    if not target.is_dir():
        raise _no_folder(target)
    if not force:
        raise _exists(target)
    there = sorted(target.iterdir())
    for path in there:
        if path.name in files and path.is_dir() and not path.is_symlink():
            message = f"{path.name} in it is a folder, and a file of that name is to be written"
            raise _refused("NOT-A-FILE", target, message, "remove it or choose another folder")
    ending = Path(last).suffix.lower() if last else ""
    others = [
        path.name
        for path in there
        if ending and path.name not in files and path.suffix.lower() == ending
    ]
    if others:
        message = (
            f"{', '.join(others)} in it would stand beside tables that belong to {last}, "
            "and is not of this run"
        )
        hint = "move it away or choose another folder"
        raise _refused("OTHER-FUSE-FILE", target, message, hint)


def _write_all(folder: Path, files: Mapping[str, bytes], order: Sequence[str]) -> None:
    for name in order:
        with (folder / name).open("xb") as file:
            file.write(files[name])
            file.flush()
            os.fsync(file.fileno())
    _sync_folder(folder)


def _sync_folder(folder: Path) -> None:
    """Bring names on the disk, where the system can do that for folders."""
    if os.name != "posix":
        return
    handle = os.open(folder, os.O_RDONLY)
    try:
        os.fsync(handle)
    except OSError as problem:
        # Some network file systems cannot; the files themselves are on the disk.
        if problem.errno not in {errno.EINVAL, errno.ENOTSUP, errno.EBADF}:
            raise
    finally:
        os.close(handle)


def _reason(problem: BaseException) -> str:
    text = problem.strerror if isinstance(problem, OSError) else None
    return (text or str(problem) or type(problem).__name__).lower()


def _exists(target: Path) -> InputError:
    hint = "--force replaces the files of an earlier run in it"
    return _refused("FOLDER-EXISTS", target, "the folder exists already", hint)


def _no_folder(target: Path) -> InputError:
    hint = "choose another name for the folder"
    return _refused("NOT-A-FOLDER", target, "exists and is no folder", hint)


def _refused(code: str, target: Path | str, message: str, hint: str | None = None) -> InputError:
    return InputError([Diagnostic(code, message, Location(str(target)), hint)])
