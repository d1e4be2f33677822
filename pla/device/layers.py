"""Device files that extend another: the keys of one laid over those of the other.

Tables merge key by key, every other value replaces. Each value keeps the place in the file that
gave it, so that errors point there.
"""

from __future__ import annotations

import os
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any

from pla.errors import Diagnostic, InputError
from pla.textfile import read_text
from pla.tomltext import TomlFile, parse_toml
from pla.wording import did_you_mean, kind_of

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from pla.errors import Location
    from pla.tomlindex import Path

__all__ = ["MAX_LEVELS", "LayeredFile", "layered"]

MAX_LEVELS = 8


@dataclass(frozen=True, slots=True)
class LayeredFile(TomlFile):
    """A file with those that it extends; `data` is the result, places are of the file that gave it.

    Attributes:
        layers: The file itself, the one that it extends, and so on.
    """

    layers: tuple[TomlFile, ...]

    def at(self, path: Path) -> Location:
        file, known = self._giver(path)
        return file.at(known)

    def key_at(self, path: Path) -> Location:
        file, known = self._giver(path)
        return file.key_at(known)

    def inside(self, path: Path, offset: int) -> Location:
        file, known = self._giver(path)
        return file.inside(known, offset)

    def given_here(self, path: Path) -> bool:
        """Whether the file itself says what stands at a path."""
        return _has(self.layers[0].data, _without_positions(path))

    @property
    def family(self) -> Any:
        """The family that a file gives, else the name of the last one that is extended."""
        given = [layer.data["family"] for layer in self.layers if "family" in layer.data]
        return given[0] if given else self.layers[-1].data.get("name")

    @property
    def base_kinds(self) -> tuple[str, ...]:
        """The kinds of cell in the files that are extended."""
        return tuple(_merged(self.layers[1:]).get("kind", ()))

    @property
    def repeats_set(self) -> bool:
        """Whether the file has a [set] with which the mode is that of the file it extends."""
        given = "set" in self.layers[0].data and len(self.layers) > 1
        return given and bool(self.data["set"] == _merged(self.layers[1:]).get("set"))

    def _giver(self, path: Path) -> tuple[TomlFile, Path]:
        """The first layer that has the path, or as much of it as any has; and that much."""
        while path:
            # A list comes from one file as a whole: which one, its key tells.
            key = _without_positions(path)
            for layer in self.layers:
                if _has(layer.data, key):
                    return layer, path
            path = path[:-1]
        return self.layers[0], ()


def layered(file: TomlFile) -> LayeredFile:
    """The file with everything that it extends.

    Raises:
        InputError: If ``extends`` is no text, names a file that cannot be read, leads back to a
            file that extends it, or goes on for more than `MAX_LEVELS` levels.
    """
    layers = [file]
    seen = [os.path.realpath(file.file)]
    while "extends" in layers[-1].data:
        base = _base_of(layers[-1])
        real = os.path.realpath(base)
        at = layers[-1].at(("extends",))
        if real in seen:
            names = " extends ".join([*(layer.file for layer in layers[seen.index(real) :]), base])
            _refuse("EXTENDS-CIRCLE", f"the file extends itself: {names}", at)
        if len(layers) > MAX_LEVELS:
            _refuse("EXTENDS-DEPTH", f"more than {MAX_LEVELS} files extend one another", at)
        layers.append(parse_toml(_text_of(base, layers[-1]), base))
        seen.append(real)
    data = _merged(layers)
    if "name" not in file.data:
        data.pop("name", None)
    return LayeredFile(data, file.source, file.index, tuple(layers))


def _text_of(base: str, file: TomlFile) -> str:
    """The text of the file that another extends."""
    try:
        return read_text(base, named_at=file.at(("extends",))).text
    except InputError as fault:
        raise InputError(
            replace(d, hint=_near(base, file)) if d.code == "NO-SUCH-FILE" else d
            for d in fault.diagnostics
        ) from None


def _near(base: str, file: TomlFile) -> str:
    """A hint: the files that are where a missing one was looked for."""
    folder, name = os.path.split(base)
    where = f"it was looked for in {folder or 'the folder of this file'}"
    try:
        found = sorted(os.listdir(folder or "."))  # noqa: PTH208 - only names are wanted
    except OSError:
        return f"{where}, which cannot be read"
    own = os.path.realpath(file.file)
    paths = {n: os.path.join(folder, n) for n in found if n.endswith(".toml")}  # noqa: PTH118
    names = [n for n, path in paths.items() if os.path.realpath(path) != own]
    if not names:
        return f"{where}, where no other .toml file is"
    return f"{where}: {did_you_mean(name, names)}"


def _base_of(file: TomlFile) -> str:
    named = file.data["extends"]
    at = file.at(("extends",))
    if not isinstance(named, str) or not named.strip():
        found = kind_of(named) if named != "" else "empty"
        expected = "expected the path of a device file in quotes, relative to this one"
        _refuse("VALUE", f"'extends' is {found}, {expected}", at)
    return os.path.join(os.path.dirname(file.file), named)  # noqa: PTH118, PTH120 - keeps the names as they are given


def _refuse(code: str, message: str, at: Location) -> None:
    raise InputError([Diagnostic(code, message, at)])


def _merged(layers: Sequence[TomlFile]) -> dict[str, Any]:
    """What files say together, each laid over the next; without ``extends``."""
    data: dict[str, Any] = {}
    for layer in reversed(layers):
        data = _laid_over(data, layer.data)
        data.pop("extends", None)
    return data


def _laid_over(under: Mapping[str, Any], over: Mapping[str, Any]) -> dict[str, Any]:
    merged = dict(under)
    for key, value in over.items():
        known = merged.get(key)
        if isinstance(known, dict) and isinstance(value, dict):
            merged[key] = _laid_over(known, value)
        else:
            merged[key] = value
    return merged


def _without_positions(path: Path) -> Path:
    """The part of a path in front of the first position in a list."""
    for index, part in enumerate(path):
        if isinstance(part, int):
            return path[:index]
    return path


def _has(data: Any, path: Path) -> bool:
    for part in path:
        if not isinstance(data, dict) or part not in data:
            return False
        data = data[part]
    return True
