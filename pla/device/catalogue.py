"""The device files that ship with the program."""

from __future__ import annotations

import difflib
from functools import cache
from pathlib import Path
from typing import TYPE_CHECKING

from pla.errors import Diagnostic, InputError

if TYPE_CHECKING:
    from pla.device.model import Device

__all__ = ["catalogue", "find_device"]

_INSTALLED = Path(__file__).parent / "catalogue_files"
_SOURCE_TREE = Path(__file__).parents[2] / "devices"


def catalogue() -> tuple[str, ...]:
    """Names of the devices that ship with the program, from the smallest to the largest."""
    return tuple(_files())


def find_device(name_or_path: str) -> Device:
    """The device with this catalogue name, or the one that a file describes.

    A catalogue name wins over a file of the same name in the working directory; ``./NAME`` means
    the file.

    Raises:
        InputError: If it is neither, or the file is wrong; every error of the file in one go.
    """
    from pla.device.reader import read_device  # noqa: PLC0415 - names alone need no reader

    known = _files()
    if name_or_path in known:
        return read_device(str(known[name_or_path]))
    if _looks_like_path(name_or_path):
        return read_device(name_or_path)
    near = difflib.get_close_matches(name_or_path, known, n=1)
    hint = (
        f"did you mean {near[0]!r}?" if near else "a file is given with its ending, as in my.toml"
    )
    raise InputError(
        [
            Diagnostic(
                "DEVICE-UNKNOWN",
                f"no device {name_or_path!r} in the catalogue, and no such file; "
                f"there are: {', '.join(known)}",
                hint=hint,
            )
        ]
    )


def _looks_like_path(text: str) -> bool:
    return text.lower().endswith(".toml") or "/" in text or "\\" in text or Path(text).is_file()


@cache
def _files() -> dict[str, Path]:
    folder = _INSTALLED if _INSTALLED.is_dir() else _SOURCE_TREE
    return {path.stem: path for path in sorted(folder.glob("*.toml"), key=_by_size)}


def _by_size(path: Path) -> tuple[list[int], str]:
    """Numbers in a name in order of value, so that 8 inputs come before 10."""
    numbers = "".join(c if c.isdigit() else " " for c in path.stem).split()
    return [int(n) for n in numbers], path.stem
