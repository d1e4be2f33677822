"""Folders are written whole or not at all, whatever fails at whichever step."""

import errno
import io
import os
import stat
import sys
from pathlib import Path

import pytest

from pla.errors import InputError
from pla.files import read_bytes, write_folder

NEW = {"dryer.jed": b"new fuses", "report.md": b"new report", "terms.csv": b"new terms"}
OLD = {"dryer.jed": b"old fuses", "report.md": b"old report", "notes.txt": b"kept"}
MIXED = OLD | NEW

# Every call to the system that a run makes; pathlib goes through these.
STEPS = ["mkdir", "rename", "fsync"]


def contents(folder):
    """Plain files by name; folders as ``None``."""
    return {p.name: p.read_bytes() if p.is_file() else None for p in Path(folder).iterdir()}


def fill(folder, files=OLD):
    folder.mkdir()
    for name, data in files.items():
        (folder / name).write_bytes(data)


class Fault:
    """Lets the system calls through until the n-th, which fails, or is interrupted when done."""

    def __init__(self, monkeypatch, at=None, error=None, *, done=False, lasting=False):
        self.calls, self.at, self.error = 0, at, error
        self.done, self.lasting, self.active = done, lasting, True
        for step in STEPS:
            monkeypatch.setattr(os, step, self.wrapped(getattr(os, step)))

    def wrapped(self, call):
        def step(*args, **kwargs):
            if not self.active:
                return call(*args, **kwargs)
            self.calls += 1
            hit = self.at is not None and (
                self.calls >= self.at if self.lasting else self.calls == self.at
            )
            result = call(*args, **kwargs) if self.done or not hit else None
            if hit:
                raise self.error
            return result

        return step


def calls_of(tmp_path, *, force):
    with pytest.MonkeyPatch.context() as patch:
        fault = Fault(patch)
        target = tmp_path / "counted"
        if force:
            fault.active = False
            fill(target)
            fault.active = True
        write_folder(str(target), NEW, "dryer.jed", force=force)
        return fault.calls


def test_new_folder(tmp_path):
    target = tmp_path / "out"
    paths = write_folder(str(target), NEW, "dryer.jed")
    assert paths == tuple(str(target / name) for name in NEW)
    assert contents(target) == NEW
    assert contents(tmp_path) == {"out": None}


def test_new_folder_is_as_open_as_any(tmp_path):
    (tmp_path / "made").mkdir()
    write_folder(str(tmp_path / "out"), NEW)
    modes = [stat.S_IMODE((tmp_path / name).stat().st_mode) for name in ("made", "out")]
    assert modes[0] == modes[1]


def test_relative_path(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    assert write_folder("out/", {"a.txt": b"a"}) == ("out/a.txt",)
    assert contents(tmp_path / "out") == {"a.txt": b"a"}


def test_existing_folder_is_kept_without_force(tmp_path):
    fill(tmp_path / "out")
    with pytest.raises(InputError) as caught:
        write_folder(str(tmp_path / "out"), NEW, "dryer.jed")
    (found,) = caught.value.diagnostics
    assert (found.code, found.location.file) == ("FOLDER-EXISTS", str(tmp_path / "out"))
    assert "--force" in found.hint
    assert contents(tmp_path / "out") == OLD


def test_force_replaces_and_keeps_other_files(tmp_path):
    fill(tmp_path / "out")
    write_folder(str(tmp_path / "out"), NEW, "dryer.jed", force=True)
    assert contents(tmp_path / "out") == MIXED


def test_force_makes_a_folder_too(tmp_path):
    write_folder(str(tmp_path / "out"), NEW, "dryer.jed", force=True)
    assert contents(tmp_path / "out") == NEW


def test_order_of_renames_under_force(tmp_path, monkeypatch):
    fill(tmp_path / "out")
    moves, rename = [], os.rename

    def watched(source, target):
        moves.append((Path(source).parent.name, Path(source).name))
        rename(source, target)

    monkeypatch.setattr(os, "rename", watched)
    write_folder(str(tmp_path / "out"), NEW, "dryer.jed", force=True)
    # The old fuse file goes first, the new one comes last.
    assert moves[0] == ("out", "dryer.jed")
    assert moves[-1] == ("new", "dryer.jed")
    assert len(moves) == 5


@pytest.mark.parametrize("force", [False, True])
@pytest.mark.parametrize(
    "error", [OSError(errno.ENOSPC, "No space left on device"), KeyboardInterrupt()], ids=repr
)
def test_whole_or_nothing_at_every_step(tmp_path, monkeypatch, force, error):
    calls = calls_of(tmp_path, force=force)
    assert calls >= 7
    before = OLD if force else None
    for at in range(1, calls + 1):
        place = tmp_path / f"step{at}"
        place.mkdir()
        target = place / "out"
        if force:
            fill(target)
        expected = InputError if isinstance(error, OSError) else KeyboardInterrupt
        with monkeypatch.context() as patch:
            Fault(patch, at, error)
            with pytest.raises(expected) as caught:
                write_folder(str(target), NEW, "dryer.jed", force=force)
        if expected is InputError:
            (found,) = caught.value.diagnostics
            assert found.code == "CANNOT-WRITE"
            assert "no space left on device; nothing was changed" in found.message
            assert "make room" in found.hint
        left = contents(place)
        whole = left.get("out", 0) is None and contents(target) == (MIXED if force else NEW)
        # Only an interruption may come when all is done.
        assert whole == (expected is KeyboardInterrupt and at == calls and not force)
        if not whole:
            assert left == ({"out": None} if force else {}), at
            assert before is None or contents(target) == before, at


@pytest.mark.parametrize("force", [False, True])
def test_interrupted_right_after_every_step(tmp_path, monkeypatch, force):
    for at in range(1, calls_of(tmp_path, force=force) + 1):
        place = tmp_path / f"step{at}"
        place.mkdir()
        target = place / "out"
        if force:
            fill(target)
        with monkeypatch.context() as patch:
            Fault(patch, at, KeyboardInterrupt(), done=True)
            with pytest.raises(KeyboardInterrupt):
                write_folder(str(target), NEW, "dryer.jed", force=force)
        left = contents(target) if target.exists() else None
        assert left in ((OLD, MIXED) if force else (None, NEW)), at
        assert set(contents(place)) <= {"out"}, at


def test_disk_that_stays_broken_never_mixes(tmp_path, monkeypatch):
    """What cannot be put back is kept, and no old fuse file stands beside new tables."""
    codes = set()
    for at in range(1, calls_of(tmp_path, force=True) + 1):
        target = tmp_path / f"out{at}"
        fill(target)
        with monkeypatch.context() as patch:
            Fault(patch, at, OSError(errno.EROFS, "Read-only file system"), lasting=True)
            with pytest.raises(InputError) as caught:
                write_folder(str(target), NEW, "dryer.jed", force=True)
        (found,) = caught.value.diagnostics
        codes.add(found.code)
        left = contents(target)
        if found.code == "CANNOT-WRITE":
            assert left == OLD
            continue
        if "dryer.jed" in left:
            complete = NEW if left["dryer.jed"] == NEW["dryer.jed"] else OLD
            assert all(left[name] == data for name, data in complete.items())
        (aside,) = [name for name, data in left.items() if data is None]
        kept = contents(target / aside / "old")
        assert str(target / aside / "old") in found.message
        for name in ("dryer.jed", "report.md"):
            assert OLD[name] in (left.get(name), kept.get(name)), at
    assert codes == {"CANNOT-WRITE", "HALF-WRITTEN"}


@pytest.mark.parametrize("second", [OSError(errno.EIO, "I/O error"), KeyboardInterrupt()], ids=repr)
def test_fault_while_undoing_a_fault_loses_nothing(tmp_path, monkeypatch, second):
    """At the last step all is in place; then each step of the undoing fails in its turn."""
    calls = calls_of(tmp_path, force=True)
    stopped = 0
    for later in range(1, 8):
        target = tmp_path / f"out{later}"
        fill(target)
        with monkeypatch.context() as patch:
            Fault(patch, calls, OSError(errno.EIO, "I/O error"))
            Fault(patch, calls + later, second)
            with pytest.raises((InputError, KeyboardInterrupt)):
                write_folder(str(target), NEW, "dryer.jed", force=True)
        left = contents(target)
        asides = [name for name, data in left.items() if data is None]
        if not asides:
            assert left == OLD
            continue
        stopped += 1
        kept = contents(target / asides[0] / "old")
        for name in ("dryer.jed", "report.md"):
            assert OLD[name] in (left.get(name), kept.get(name)), later
        if "dryer.jed" in left:
            complete = NEW if left["dryer.jed"] == NEW["dryer.jed"] else OLD
            assert all(left[name] == data for name, data in complete.items()), later
    assert stopped >= 5


def test_disk_full_while_writing(tmp_path, monkeypatch):
    class Full(io.BytesIO):
        def write(self, _data):
            raise OSError(errno.ENOSPC, "No space left on device")

    monkeypatch.setattr(Path, "open", lambda *_args, **_kwargs: Full())
    with pytest.raises(InputError, match="no space left on device"):
        write_folder(str(tmp_path / "out"), NEW, "dryer.jed")
    monkeypatch.undo()
    assert contents(tmp_path) == {}


def test_no_permission(tmp_path, monkeypatch):
    def refuse(*_args):
        raise PermissionError(errno.EACCES, "Permission denied")

    monkeypatch.setattr(os, "mkdir", refuse)
    with pytest.raises(InputError) as caught:
        write_folder(str(tmp_path / "out"), NEW)
    (found,) = caught.value.diagnostics
    assert "permission denied" in found.message
    assert "in which you may write" in found.hint


def test_folder_that_appears_meanwhile(tmp_path, monkeypatch):
    def appears(folder, target):
        fill(Path(target))
        return real(folder, target)

    real = os.rename
    monkeypatch.setattr(os, "rename", appears)
    with pytest.raises(InputError) as caught:
        write_folder(str(tmp_path / "out"), NEW)
    assert caught.value.diagnostics[0].code == "FOLDER-EXISTS"
    assert contents(tmp_path / "out") == OLD
    assert contents(tmp_path) == {"out": None}


def test_file_system_that_cannot_sync_folders(tmp_path, monkeypatch):
    real = os.fsync

    def fsync(handle):
        if stat.S_ISDIR(os.fstat(handle).st_mode):
            raise OSError(errno.EINVAL, "Invalid argument")
        real(handle)

    monkeypatch.setattr(os, "fsync", fsync)
    write_folder(str(tmp_path / "out"), NEW)
    assert contents(tmp_path / "out") == NEW


@pytest.mark.parametrize(
    ("make", "target", "code", "words"),
    [
        pytest.param(
            lambda p: p.joinpath("out").write_bytes(b""), "out", "NOT-A-FOLDER", "is no folder"
        ),
        pytest.param(
            lambda p: p.joinpath("out").symlink_to("gone"), "out", "NOT-A-FOLDER", "is no folder"
        ),
        pytest.param(
            lambda p: p.joinpath("no").write_bytes(b""), "no/out", "NO-FOLDER", "is no folder"
        ),
        pytest.param(
            lambda p: p.joinpath("out", "report.md").mkdir(parents=True),
            "out",
            "NOT-A-FILE",
            "report.md in it is a folder",
        ),
        pytest.param(
            lambda p: fill(p / "out", {"other.JED": b"old"}),
            "out",
            "OTHER-FUSE-FILE",
            "other.JED in it would stand beside tables that belong to dryer.jed",
        ),
    ],
    ids=["file", "dangling link", "parent a file", "folder in it", "other fuse file"],
)
def test_refused_with_force(tmp_path, make, target, code, words):
    make(tmp_path)
    before = sorted(str(p) for p in tmp_path.rglob("*"))
    with pytest.raises(InputError) as caught:
        write_folder(str(tmp_path / target), NEW, "dryer.jed", force=True)
    (found,) = caught.value.diagnostics
    assert found.code == code
    assert words in found.message
    assert found.hint
    assert sorted(str(p) for p in tmp_path.rglob("*")) == before


def test_no_name():
    with pytest.raises(InputError, match="no name of a folder given"):
        write_folder("", NEW)


@pytest.mark.parametrize("name", ["", ".", "..", "a/b", "/a"])
def test_names_are_plain(tmp_path, name):
    with pytest.raises(ValueError, match="no plain file name"):
        write_folder(str(tmp_path / "out"), {name: b""})
    assert contents(tmp_path) == {}


def test_last_is_one_of_them(tmp_path):
    with pytest.raises(ValueError, match="not among"):
        write_folder(str(tmp_path / "out"), NEW, "other.jed")


def test_reading(tmp_path, monkeypatch):
    path = tmp_path / "a"
    path.write_bytes(b"\x00\xff12345")
    assert read_bytes(str(path)) == b"\x00\xff12345"
    assert read_bytes(str(path), 3) == b"\x00\xff12"
    monkeypatch.setattr(sys, "stdin", io.TextIOWrapper(io.BytesIO(b"\xff\r\n")))
    assert read_bytes("-") == b"\xff\r\n"


@pytest.mark.parametrize(
    ("name", "code"), [("none", "NO-SUCH-FILE"), (".", "NOT-A-FILE"), ("a\0b", "CANNOT-READ")]
)
def test_unreadable(tmp_path, name, code):
    with pytest.raises(InputError) as caught:
        read_bytes(str(tmp_path / name))
    assert caught.value.diagnostics[0].code == code


def test_folders_above_are_made_and_unmade(tmp_path, monkeypatch):
    target = tmp_path / "a" / "b" / "out"
    write_folder(str(target), {"report.md": b"new"})
    assert (target / "report.md").read_bytes() == b"new"

    def full(*_arguments):
        raise OSError(errno.ENOSPC, "No space left on device")

    monkeypatch.setattr("pla.files._sync_folder", full)
    with pytest.raises(InputError):
        write_folder(str(tmp_path / "c" / "d" / "out"), {"report.md": b"new"})
    assert [path.name for path in tmp_path.iterdir()] == ["a"]
