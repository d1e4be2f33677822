"""TOML files whose every key and value knows its place, and checked access to them.

`Section` is how the readers of designs and devices take values: each wrong or missing value becomes
an error with a place, and reading goes on, so that all errors of a file are found in one go.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, TypeVar, overload

from pla.numerals import is_hexadecimal, parse_span, proposal
from pla.tomlindex import Path
from pla.tomltext import TomlFile, parse_toml, read_toml
from pla.wording import did_you_mean, kind_of, span_of_numbers

if TYPE_CHECKING:
    from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence

    from pla.errors import Diagnostics, Location

__all__ = [
    "Path",
    "Section",
    "TomlFile",
    "parse_toml",
    "read_toml",
]

T = TypeVar("T")


@dataclass(frozen=True, slots=True)
class Section:
    """A table of a TOML file whose values are checked as they are taken.

    Every accessor returns the value, or its default (``None`` if not given) when the key is absent
    or wrong; what is wrong goes to `diagnostics`. With ``required=True`` an absent key is an error
    at the header of the section.

    Attributes:
        file: Where it stands.
        path: Which table.
        diagnostics: Collects what is wrong.
    """

    file: TomlFile
    path: Path
    diagnostics: Diagnostics

    @classmethod
    def top(cls, file: TomlFile, diagnostics: Diagnostics) -> Section:
        """The whole document."""
        return cls(file, (), diagnostics)

    @property
    def data(self) -> Mapping[str, Any]:
        value: Any = self.file.data
        for part in self.path:
            value = value[part]
        table: Mapping[str, Any] = value
        return table

    @property
    def where(self) -> Location:
        """The header, or the opening brace of an inline table."""
        return self.file.at(self.path)

    @property
    def title(self) -> str:
        """How messages name this section."""
        if not self.path:
            return "the file"
        text = ""
        for part in self.path:
            text += f"[{part}]" if isinstance(part, int) else f".{part}" if text else part
        if isinstance(self.path[-1], int):
            return text
        return f"[{text}]"

    def __contains__(self, key: str) -> bool:
        return key in self.data

    def __iter__(self) -> Iterator[str]:
        return iter(self.data)

    def at(self, key: str, *more: str | int) -> Location:
        """Where the value of a key (or an element in it) stands."""
        return self.file.at((*self.path, key, *more))

    def key_at(self, key: str) -> Location:
        return self.file.key_at((*self.path, key))

    def inside(self, key: str, offset: int, *more: str | int) -> Location:
        """Where a character of the decoded string at a key stands."""
        return self.file.inside((*self.path, key, *more), offset)

    def error(
        self, code: str, message: str, location: Location | None = None, hint: str | None = None
    ) -> None:
        """Report something wrong; at the header if no place is given."""
        self.diagnostics.error(code, message, location or self.where, hint)

    def unknown_keys(
        self, allowed: Iterable[str], meant: Mapping[str, str] | None = None
    ) -> set[str]:
        """Report every key that is not in `allowed`, and return what was probably meant by them.

        Args:
            allowed: Names of keys.
            meant: For wrong keys that people try, the hint.
        """
        names = list(allowed)
        near = set()
        for key in self.data:
            if key not in names:
                message = f"unknown key {key!r} in {self.title}"
                hint = (meant or {}).get(key) or did_you_mean(key, names)
                self.diagnostics.error("KEY-UNKNOWN", message, self.key_at(key), hint)
                near |= {name for name in names if hint == f"did you mean {name!r}?"}
        return near

    def raw(self, key: str, *, required: bool = False, hint: str | None = None) -> Any:
        """The value of a key as parsed, or ``None``; `hint` is how to mend an absent one."""
        if key in self.data:
            return self.data[key]
        if required:
            message = f"{self.title} has no {key!r}"
            self.diagnostics.error("KEY-MISSING", message, self.where, hint or f"add {key} = …")
        return None

    def wrong(self, expected: str, key: str, *more: str | int) -> None:
        """Report that the value of a key (or an element in it) is not what was expected."""
        value: Any = self.data[key]
        for part in more:
            value = value[part]
        at = self.at(key, *more)
        found = kind_of(value)
        if _is_integer(value, 0, None) and _starts_hexadecimal(at):
            found = f"the number 0x{value:X}"
        self.diagnostics.error("VALUE", f"{key!r} is {found}, expected {expected}", at)

    @overload
    def integer(
        self, key: str, *, low: int | None = None, high: int | None = None, default: int
    ) -> int: ...
    @overload
    def integer(
        self,
        key: str,
        *,
        low: int | None = None,
        high: int | None = None,
        default: None = None,
        required: bool = False,
    ) -> int | None: ...
    def integer(
        self,
        key: str,
        *,
        low: int | None = None,
        high: int | None = None,
        default: int | None = None,
        required: bool = False,
    ) -> int | None:
        """A whole number from `low` to `high`."""
        value = self.raw(key, required=required)
        if value is None:
            return default
        if not _is_integer(value, low, high):
            self.wrong(span_of_numbers("a whole number", low, high), key)
            return default
        return int(value)

    @overload
    def text(self, key: str, *, default: str) -> str: ...
    @overload
    def text(self, key: str, *, default: None = None, required: bool = False) -> str | None: ...
    def text(self, key: str, *, default: str | None = None, required: bool = False) -> str | None:
        """A string."""
        value: str | None = self._checked(
            key, lambda v: isinstance(v, str), "text in quotes", default, required
        )
        return value

    @overload
    def choice(self, key: str, options: Sequence[T], *, default: T) -> T: ...
    @overload
    def choice(
        self, key: str, options: Sequence[T], *, default: None = None, required: bool = False
    ) -> T | None: ...
    def choice(
        self, key: str, options: Sequence[T], *, default: T | None = None, required: bool = False
    ) -> T | None:
        """One of `options`, which are strings or whole numbers."""
        value = self.raw(key, required=required)
        if value is None:
            return default
        for option in options:
            if type(value) is type(option) and value == option:
                return option
        shown = [f'"{o}"' if isinstance(o, str) else str(o) for o in options]
        expected = " or ".join(filter(None, (", ".join(shown[:-1]), shown[-1])))
        self.wrong(expected, key)
        return default

    @overload
    def flag(self, key: str, *, default: bool) -> bool: ...
    @overload
    def flag(self, key: str, *, default: None = None, required: bool = False) -> bool | None: ...
    def flag(self, key: str, *, default: bool | None = None, required: bool = False) -> bool | None:
        """``true`` or ``false``."""
        value: bool | None = self._checked(
            key, lambda v: isinstance(v, bool), "true or false", default, required
        )
        return value

    def items(self, key: str, *, required: bool = False) -> list[Any] | None:
        """A list of anything; its elements stand at ``at(key, index)``."""
        value: list[Any] | None = self._checked(
            key, lambda v: isinstance(v, list), "a list", None, required
        )
        return value

    def integers(
        self,
        key: str,
        *,
        low: int | None = None,
        high: int | None = None,
        required: bool = False,
    ) -> list[int] | None:
        """A list of whole numbers from `low` to `high`; ``None`` if any is wrong."""
        values = self.items(key, required=required)
        if values is None:
            return None
        good = True
        for index, value in enumerate(values):
            if not _is_integer(value, low, high):
                self.wrong(span_of_numbers("a whole number", low, high), key, index)
                good = False
        return values if good else None

    def texts(self, key: str, *, required: bool = False) -> list[str] | None:
        """A list of strings; ``None`` if any element is something else."""
        values = self.items(key, required=required)
        if values is None:
            return None
        bad = [i for i, value in enumerate(values) if not isinstance(value, str)]
        for index in bad:
            self.wrong("text in quotes", key, index)
        return None if bad else values

    def ranges(
        self,
        key: str,
        *,
        low: int | None = None,
        high: int | None = None,
        required: bool = False,
    ) -> list[tuple[range, Location]] | None:
        """Numbers and ranges ``"a..b"`` (both ends included), one or a list; with their places.

        Numbers in quotes may be written ``0x…`` and ``0b…``. ``None`` if anything is wrong.
        """
        value = self.raw(key, required=required)
        if value is None:
            return None
        listed = isinstance(value, list)
        found: list[tuple[range, Location]] = []
        good = True
        for index, element in enumerate(value if listed else [value]):
            more = (index,) if listed else ()
            span = self._range(key, more, element, low, high)
            if span is None:
                good = False
            else:
                found.append((span, self.at(key, *more)))
        return found if good else None

    def section(
        self, key: str, *, required: bool = False, hint: str | None = None
    ) -> Section | None:
        """A table; `hint` is how to mend an absent one."""
        self.raw(key, required=required, hint=hint)
        value = self._checked(key, lambda v: isinstance(v, dict), "a table", None, False)
        return None if value is None else Section(self.file, (*self.path, key), self.diagnostics)

    def sections(self, key: str, *, required: bool = False) -> list[Section]:
        """An array of tables, of either notation; elements that are no tables are left out."""
        value = self.raw(key, required=required)
        if value is None:
            return []
        if not isinstance(value, list):
            hint = f"write [[{key}]] with two brackets" if isinstance(value, dict) else None
            message = f"{key!r} is {kind_of(value)}, expected a list of tables"
            self.diagnostics.error("VALUE", message, self.at(key), hint)
            return []
        found = []
        for index, element in enumerate(value):
            if isinstance(element, dict):
                found.append(Section(self.file, (*self.path, key, index), self.diagnostics))
            else:
                self.wrong("a table", key, index)
        return found

    def _checked(
        self, key: str, good: Callable[[Any], bool], expected: str, default: Any, required: bool
    ) -> Any:
        value = self.raw(key, required=required)
        if value is None:
            return default
        if not good(value):
            self.wrong(expected, key)
            return default
        return value

    def _range(
        self, key: str, more: Path, element: Any, low: int | None, high: int | None
    ) -> range | None:
        at = self.at(key, *more)
        if isinstance(element, str):
            hexadecimal = is_hexadecimal(element)
        else:
            hexadecimal = _starts_hexadecimal(at)
        span = span_of_numbers("a whole number", low, high, hexadecimal=hexadecimal)
        expected = f'{span}, or a range "a..b" of such'
        if _is_integer(element, None, None):
            first = last = element
        elif isinstance(element, str):
            try:
                first, last = parse_span(element)
            except ValueError as fault:
                message = f"{element!r} in {key!r} is {fault}, expected {expected}"
                self.diagnostics.error("VALUE", message, at, _meant(element))
                return None
        else:
            self.wrong(expected, key, *more)
            return None
        if first > last:
            message = f"the range {element!r} runs backwards"
            head, _, tail = element.partition("..")
            hint = f'write "{tail.strip()}..{head.strip()}"'
            self.diagnostics.error("RANGE-REVERSED", message, at, hint)
            return None
        if not (_is_integer(first, low, high) and _is_integer(last, low, high)):
            self.wrong(expected, key, *more)
            return None
        return range(first, last + 1)


def _meant(element: str) -> str | None:
    """A hint for a number or range in another notation."""
    meant = proposal(element)
    if meant is None:
        return None
    ranged = ".." in meant and ".." not in element
    return f'a range is written "{meant}"' if ranged else f'did you mean "{meant}"?'


def _starts_hexadecimal(at: Location) -> bool:
    """Whether the value at a place is written ``0x…``."""
    start = (at.column or 1) - 1
    return (at.source or "")[start : start + 2] == "0x"


def _is_integer(value: Any, low: int | None, high: int | None) -> bool:
    return (
        isinstance(value, int)
        and not isinstance(value, bool)
        and (low is None or value >= low)
        and (high is None or value <= high)
    )
