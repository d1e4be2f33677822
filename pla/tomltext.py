"""A TOML text with the place of every key and value."""

from __future__ import annotations

import re
import tomllib
from dataclasses import dataclass
from typing import Any

from pla.errors import Diagnostic, InputError, Location
from pla.textfile import SourceText, read_text
from pla.tomlindex import Path, TomlIndex, decode_string, find_repeated, index_toml

__all__ = ["TomlFile", "parse_toml", "read_toml"]

_PLACE = re.compile(r" ?\(at line (\d+), column (\d+)\)$")
_REPEATED = re.compile(
    r"Cannot overwrite a value|Cannot declare .* twice|Duplicate inline table key"
)
_AT_END = re.compile(r" ?\(at end of document\)$")


@dataclass(frozen=True, slots=True)
class TomlFile:
    """The values of a TOML file and their places.

    Attributes:
        data: The document.
        source: Its text.
        index: Offsets into the text.
    """

    data: dict[str, Any]
    source: SourceText
    index: TomlIndex

    @property
    def file(self) -> str:
        return self.source.file

    @property
    def lines(self) -> tuple[str, ...]:
        return self.source.lines

    def at(self, path: Path) -> Location:
        """Where a value stands; for a table its header."""
        return self._nearest(self.index.values, path)

    def key_at(self, path: Path) -> Location:
        """Where a key stands; for an element of an array the element."""
        return self._nearest(self.index.keys, path)

    def inside(self, path: Path, offset: int) -> Location:
        """Where character `offset` of the decoded string at `path` stands."""
        start = self.index.values.get(path)
        if start is None or self.source.text[start : start + 1] not in ('"', "'"):
            return self.at(path)
        offsets = decode_string(self.source.text, start)[1]
        return self.source.location(offsets[max(0, min(offset, len(offsets) - 1))])

    def _nearest(self, offsets: dict[Path, int], path: Path) -> Location:
        while path and path not in offsets:
            path = path[:-1]
        return self.source.location(offsets[path] if path else 0)


def read_toml(path: str) -> TomlFile:
    """Read a TOML file.

    Raises:
        InputError: If it cannot be read, is not UTF-8, or is not TOML; with the place.
    """
    return _parse(read_text(path))


def parse_toml(text: str, file: str) -> TomlFile:
    """The same from text; `file` is the name that errors show.

    Raises:
        InputError: If it is not TOML; with the place.
    """
    return _parse(SourceText(file, text.removeprefix("\ufeff").replace("\r\n", "\n")))


def _parse(source: SourceText) -> TomlFile:
    try:
        data = tomllib.loads(source.text)
        index = index_toml(source.text)
    except RecursionError:
        message = "brackets are nested too deeply"
        raise InputError([Diagnostic("TOML-SYNTAX", message, Location(source.file))]) from None
    except ValueError as fault:
        raise InputError([_syntax_error(source, str(fault))]) from None
    return TomlFile(data, source, index)


def _syntax_error(source: SourceText, fault: str) -> Diagnostic:
    """The parser's complaint with its place as a location."""
    if "\r" in source.text:
        return _lone_return(source)
    found = _PLACE.search(fault)
    if _REPEATED.match(fault):
        end = _offset(source, int(found[1]), int(found[2])) if found else len(source.text)
        repeated = find_repeated(source.text[:end])
        if repeated is not None:
            return _stands_twice(source, *repeated)
    if found:
        at = source.location_of(int(found[1]), int(found[2]))
    elif _AT_END.search(fault):
        at = source.location(len(source.text))
    else:
        at = Location(source.file)
    if "int_max_str_digits" in fault:
        fault = "a number with too many digits"
    reason = _AT_END.sub(" before the end of the file", _PLACE.sub("", fault))
    hint = None
    text = at.source or ""
    if re.match(r"\s*[^=\[\]\"'#]*\s\S*\s*=", text) and "after a key" in fault:
        hint = "a key with blanks, brackets or other signs is written in quotes"
    elif re.match(r"\s*[A-Za-z0-9_]+\[[0-9:]+\]\s*=", text):
        hint = 'write the name of a bit in quotes: "step[0]" = …'
    return Diagnostic("TOML-SYNTAX", f"not TOML: {reason[:1].lower()}{reason[1:]}", at, hint)


def _offset(source: SourceText, line: int, column: int) -> int:
    """The character offset of a 1-based line and column."""
    return sum(len(text) + 1 for text in source.lines[: line - 1]) + column - 1


def _stands_twice(source: SourceText, path: Path, first: int, second: int) -> Diagnostic:
    name = ".".join(str(part) for part in path if isinstance(part, str))
    earlier = source.location(first)
    at = source.location(second)
    sections = [(place.source or "").lstrip().startswith("[") for place in (earlier, at)]
    if sections == [False, True]:
        message = f"{name!r} is given twice: as a section here, and with a value at {earlier}"
        hint = "leave one of them out, or rename it"
    elif sections[1]:
        message = f"the section [{name}] stands twice: here and at {earlier}"
        hint = "put all its lines under the first one"
    else:
        message = f"the key {path[-1]!r} stands twice: here and at {earlier}"
        hint = f"the other is: {(earlier.source or '').strip()}"
    return Diagnostic("TOML-SYNTAX", message, at, hint)


def _lone_return(source: SourceText) -> Diagnostic:
    """TOML 1.0.0 has no line ends of a carriage return alone, anywhere."""
    lines = SourceText(source.file, source.text.replace("\r", "\n"))
    return Diagnostic(
        "TOML-SYNTAX",
        "a carriage return without a line feed, expected line ends LF or CR LF",
        lines.location(source.text.index("\r")),
        "save the file with one of these line ends",
    )
