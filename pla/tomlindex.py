"""Where each key and value of a TOML text stands.

The standard library's parser reads values but forgets places. This index is made from a text that
the parser has already accepted, so it needs no error handling of its own. Grammar: TOML 1.0.0.
"""

from __future__ import annotations

import re
from contextlib import suppress
from dataclasses import dataclass, field
from functools import lru_cache

__all__ = ["Path", "TomlIndex", "decode_string", "find_repeated", "index_toml"]

Path = tuple[str | int, ...]
"""Keys and positions in arrays, from the top of the document."""

_BARE = re.compile(r"[A-Za-z0-9_-]+")
_SPACE = re.compile(r"[ \t]*")
_BLANK = re.compile(r"(?:[ \t\n]|#[^\n]*)*")
_SCALAR = re.compile(r"[^,\]}#\n]*")
_LONG_BASIC = re.compile(r'"""[^"\\]*(?:(?:\\.|"{1,2}(?!"))[^"\\]*)*"{3,5}', re.DOTALL)
_LONG_LITERAL = re.compile(r"'''[^']*(?:'{1,2}(?!')[^']*)*'{3,5}")
_BASIC = re.compile(r'"[^"\\\n]*(?:\\.[^"\\\n]*)*"')
_LITERAL = re.compile(r"'[^'\n]*'")
_LINE_CONTINUES = re.compile(r"\\[ \t]*\n[ \t\n]*")
_ESCAPES = {
    "b": "\b",
    "t": "\t",
    "n": "\n",
    "f": "\f",
    "r": "\r",
    "e": "\x1b",
    '"': '"',
    "\\": "\\",
}
_HEX_DIGITS = {"x": 2, "u": 4, "U": 8}


@dataclass(frozen=True, slots=True)
class TomlIndex:
    """Character offsets into the text.

    Attributes:
        keys: Of the last part of each key; of each element for positions in arrays.
        values: Of the first character of each value; of the opening bracket for table headers.
    """

    keys: dict[Path, int] = field(default_factory=dict)
    values: dict[Path, int] = field(default_factory=dict)


def index_toml(text: str) -> TomlIndex:
    """Index a valid TOML text whose line ends are ``\\n``."""
    scanner = _Scanner(text)
    scanner.document()
    return scanner.index


def find_repeated(text: str) -> tuple[Path, int, int] | None:
    """The first key or section that stands twice: its path, and the offsets of both.

    Args:
        text: The part of a text in front of the place where the parser refused it for such a
            reason. It may end within a statement.
    """
    scanner = _Scanner(text)
    with suppress(IndexError, ValueError):  # at the end of the part
        scanner.document()
    return scanner.repeated


@lru_cache(maxsize=16)
def decode_string(text: str, start: int) -> tuple[str, tuple[int, ...]]:
    """The value of the string literal at `start`, and where each of its characters comes from.

    Returns:
        The decoded string, and one offset into `text` for each of its characters and for its end.
    """
    end = _string_end(text, start)
    quote = text[start]
    size = 3 if end - start >= 6 and text.startswith(quote * 3, start) else 1
    position, end = start + size, end - size
    if size == 3 and text.startswith("\n", position):
        position += 1
    characters: list[str] = []
    offsets: list[int] = []
    while position < end:
        character, after = text[position], position + 1
        if character == "\\" and quote == '"':
            continued = _LINE_CONTINUES.match(text, position)
            if continued:
                position = continued.end()
                continue
            kind = text[position + 1]
            after = position + 2 + _HEX_DIGITS.get(kind, 0)
            if kind in _HEX_DIGITS:
                character = chr(int(text[position + 2 : after], 16))
            else:
                character = _ESCAPES[kind]
        characters.append(character)
        offsets.append(position)
        position = after
    return "".join(characters), (*offsets, end)


def _string_end(text: str, start: int) -> int:
    if text[start] == '"':
        pattern = _LONG_BASIC if text.startswith('"""', start) else _BASIC
    else:
        pattern = _LONG_LITERAL if text.startswith("'''", start) else _LITERAL
    found = pattern.match(text, start)
    if found is None:  # pragma: no cover - the parser has accepted the text
        raise ValueError(f"no string at offset {start}")
    return found.end()


class _Scanner:
    """Walks once over a valid text."""

    def __init__(self, text: str) -> None:
        self.text = text
        self.position = 0
        self.index = TomlIndex()
        self.array_sizes: dict[Path, int] = {}
        self.written: dict[Path, int] = {}
        self.repeated: tuple[Path, int, int] | None = None

    def skip(self, pattern: re.Pattern[str]) -> None:
        found = pattern.match(self.text, self.position)
        if found:
            self.position = found.end()

    def write(self, path: Path, offset: int) -> None:
        """Note that a key or section is given, at most once in a valid text."""
        if path in self.written and self.repeated is None:
            self.repeated = (path, self.written[path], offset)
        self.written.setdefault(path, offset)

    def document(self) -> None:
        table: Path = ()
        while True:
            self.skip(_BLANK)
            if self.position >= len(self.text):
                return
            if self.text[self.position] == "[":
                table = self.header()
            else:
                self.pair(table)

    def header(self) -> Path:
        start = self.position
        is_array = self.text.startswith("[[", start)
        self.position += 2 if is_array else 1
        parts = self.key()
        self.position += 2 if is_array else 1
        path: Path = ()
        for depth, (name, offset) in enumerate(parts, start=1):
            path = (*path, name)
            if depth < len(parts):
                self.index.keys.setdefault(path, offset)
                self.index.values.setdefault(path, start)
                if path in self.array_sizes:
                    path = (*path, self.array_sizes[path] - 1)
            elif is_array:
                self.index.keys.setdefault(path, offset)
                self.index.values.setdefault(path, start)
                size = self.array_sizes.get(path, 0)
                self.array_sizes[path] = size + 1
                path = (*path, size)
                self.index.keys[path] = offset
                self.index.values[path] = start
            else:
                self.index.keys[path] = offset
                self.index.values[path] = start
        self.write(path, parts[-1][1])
        return path

    def key(self) -> list[tuple[str, int]]:
        """The parts of a dotted key and their offsets; stops behind it and its blanks."""
        parts: list[tuple[str, int]] = []
        while True:
            self.skip(_SPACE)
            start = self.position
            if self.text[start] in "\"'":
                name = decode_string(self.text, start)[0]
                self.position = _string_end(self.text, start)
            else:
                self.skip(_BARE)
                name = self.text[start : self.position]
            parts.append((name, start))
            self.skip(_SPACE)
            if not self.text.startswith(".", self.position):
                return parts
            self.position += 1

    def pair(self, table: Path) -> None:
        path = table
        for name, offset in self.key():
            path = (*path, name)
            self.index.keys.setdefault(path, offset)
            self.index.values.setdefault(path, offset)
        self.write(path, offset)
        self.position += 1  # the equals sign
        self.skip(_SPACE)
        self.value(path)

    def value(self, path: Path) -> None:
        self.index.values[path] = self.position
        first = self.text[self.position]
        if first in "\"'":
            self.position = _string_end(self.text, self.position)
        elif first == "[":
            self.array(path)
        elif first == "{":
            self.inline_table(path)
        else:
            self.skip(_SCALAR)

    def array(self, path: Path) -> None:
        self.position += 1
        number = 0
        while True:
            self.skip(_BLANK)
            if self.text[self.position] == "]":
                break
            self.index.keys[*path, number] = self.position
            self.value((*path, number))
            number += 1
            self.skip(_BLANK)
            if self.text[self.position] == ",":
                self.position += 1
        self.position += 1

    def inline_table(self, path: Path) -> None:
        self.position += 1
        while True:
            self.skip(_BLANK)
            if self.text[self.position] == "}":
                break
            self.pair(path)
            self.skip(_BLANK)
            if self.text[self.position] == ",":
                self.position += 1
        self.position += 1
