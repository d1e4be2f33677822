"""The device files in a folder of the user's."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING

from pla.device.reader import read_device
from pla.errors import Diagnostic, Diagnostics, InputError, Location

if TYPE_CHECKING:
    from collections.abc import Collection, Iterable

    from pla.device.model import Device

__all__ = ["devices_in"]


def devices_in(
    folder: str, catalogue: Iterable[Device] = ()
) -> tuple[tuple[Device, ...], tuple[Diagnostic, ...]]:
    """The devices that the ``.toml`` files of a folder describe, in order of file names.

    Files whose name begins with a dot are passed over. A file that is wrong, or whose device has a
    name that is taken already, is left out.

    Args:
        folder: Its path.
        catalogue: Devices whose names are taken. A file that says the same as one of them is left
            out without a word.

    Returns:
        The devices, and a warning for every file that is left out and for a folder without device
        files.

    Raises:
        InputError: If the folder cannot be read.
    """
    found: list[Device] = []
    warnings = Diagnostics()
    shipped = tuple(catalogue)
    by_name = {device.name: device for device in shipped}
    paths = _device_files(folder)
    for path in paths:
        try:
            device = read_device(str(path))
        except InputError as fault:
            warnings.found.append(_left_out(fault, path))
            continue
        other = by_name.setdefault(device.name, device)
        if other is device:
            found.append(device)
        elif not _same(device, other):
            warnings.warning(
                "DEVICE-NAME-TAKEN",
                f"left out: {_place(other, shipped)} has another device {device.name}",
                device.location,
                "give this one a name of its own",
            )
    if not paths:
        hint = "device files end in .toml"
        warnings.warning("NO-DEVICE-FILES", "no device files in it", Location(folder), hint)
    return tuple(found), warnings.warnings


def _device_files(folder: str) -> list[Path]:
    try:
        return sorted(
            path
            for path in Path(folder).iterdir()
            if path.suffix.lower() == ".toml" and not path.name.startswith(".")
        )
    except FileNotFoundError:
        code, why, hint = "NO-SUCH-FOLDER", "no such folder", None
    except NotADirectoryError:
        code, why = "NOT-A-FOLDER", "is a file, a folder of device files was expected"
        hint = "fuseplan plan --device takes a single file"
    except (OSError, ValueError) as problem:
        text = problem.strerror if isinstance(problem, OSError) else None
        code, why, hint = "CANNOT-READ", f"cannot be read: {(text or str(problem)).lower()}", None
    raise InputError([Diagnostic(code, why, Location(folder), hint)])


def _left_out(fault: InputError, path: Path) -> Diagnostic:
    """The first error of a file as a warning."""
    first, more = fault.diagnostics[0], len(fault.diagnostics) - 1
    others = f" (and {more} more error{'s' if more > 1 else ''})" if more else ""
    return Diagnostic(
        first.code,
        f"left out: {first.message}{others}",
        first.location,
        f"fuseplan device check {path} shows everything that is wrong with it",
        "warning",
    )


def _place(device: Device, catalogue: Collection[Device]) -> str:
    return "the catalogue" if device in catalogue else device.location.file


def _same(one: Device, other: Device) -> bool:
    """Whether two files say the same of the part; where they stand does not matter."""
    return replace(one, location=other.location, warnings=other.warnings) == other
