"""The words by which a device file names lines, sums and rows."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

from pla import wording
from pla.device.layers import LayeredFile
from pla.device.model import Column

if TYPE_CHECKING:
    from collections.abc import Iterable

    from pla.device.model import Source
    from pla.errors import Location
    from pla.tomlfile import Section, TomlFile

__all__ = [
    "MAX_TERMS",
    "beside",
    "mend_line",
    "mend_pin",
    "named",
    "order",
    "read_row_numbers",
    "read_step",
    "rows_in_words",
    "said_in",
    "spans",
    "spare_list",
    "split_words",
    "usable_name",
    "word_of",
]

MAX_TERMS = 65_536
_NAME = r"[A-Za-z][A-Za-z0-9_]*"
_LINE = re.compile(rf"(?:([1-9][0-9]{{0,5}})|({_NAME}))('?)")
_SHOWN = 8


def word_of(word: str) -> Column | None:
    """A pin or the name of a cell, perhaps with the sign of the complement."""
    match = _LINE.fullmatch(word)
    if match is None:
        return None
    return Column(int(match[1]) if match[1] else match[2], match[3] == "'")


def usable_name(text: str) -> bool:
    return re.fullmatch(_NAME, text) is not None


def named(source: Source) -> str:
    """A source as messages name it."""
    return f"pin {source}" if isinstance(source, int) else f"cell {source}"


def mend_line(word: str) -> str | None:
    """A hint for a line in another notation."""
    plain = re.sub('[’′`´"]', "'", word)
    if _LINE.fullmatch(plain):
        return f"write {plain} with the plain quote"
    if re.fullmatch(rf"[/!~-](?:[0-9]+|{_NAME})", word):
        return f"write {word[1:]}' for the complement"
    if "," in word:
        return "separate columns by blanks"
    return None


def mend_pin(word: str) -> str | None:
    """A hint for a pin that has letters in front of its number."""
    match = re.fullmatch(r"[A-Za-z]{1,4}_?([1-9][0-9]*'?)", word)
    return f"a pin is written as a plain number: {match[1]}" if match else None


def split_words(section: Section) -> list[tuple[str, int]] | None:
    """The words of ``columns`` and where each begins in the text."""
    text = section.text("columns", required=True)
    if text is None:
        return None
    found = [(match[0], match.start()) for match in re.finditer(r"\S+", text)]
    if not found:
        message = f"'columns' of {section.title} is empty"
        section.error("COLUMNS-EMPTY", message, section.at("columns"))
        return None
    return found


def read_step(section: Section, key: str, default: int | None = None) -> int | None:
    """Fuses from one row or column to the next: any number but 0."""
    if default is not None and key not in section:
        return default
    step = section.integer(key, required=True)
    if step == 0:
        section.wrong("a whole number other than 0", key)
        return None
    return step


def read_row_numbers(
    section: Section, key: str, count: int | None, at_count: Location | None = None
) -> tuple[int, ...] | None:
    """Rows at a key, each once, in the order of the file.

    Args:
        section: Where.
        key: Which.
        count: How many rows of the AND array there are; ``None`` if the file does not say.
        at_count: The place that says how many.
    """
    ranges = section.ranges(key, low=0)
    if ranges is None:
        return None
    found: dict[int, None] = {}
    good = True
    for numbers, at in ranges:
        if numbers[-1] >= (count or MAX_TERMS):
            good = False
            said = f", as 'terms' of [and] says{beside(at_count, at)}" if at_count else ""
            section.error(
                "ROW-RANGE",
                f"row {numbers[-1]} in {key!r} of {section.title} does not exist: "
                f"rows go from 0 to {(count or MAX_TERMS) - 1}{said}",
                at,
            )
            continue
        again = [row for row in numbers if row in found]
        if again:
            good = False
            message = f"{key!r} of {section.title} names {rows_in_words(again)} twice"
            section.error("ROW-TWICE", message, at)
        found.update(dict.fromkeys(numbers))
    return tuple(found) if good else None


def spans(numbers: Iterable[int]) -> str:
    """Ascending numbers as ``3, 5..7``; no more than eight such parts."""
    return wording.spans(numbers, _SHOWN)


def spare_list(fuses: Iterable[int], most: int = 24) -> str:
    """Fuses as the value of ``spare``; no more than `most` ranges."""
    texts = wording.spans(sorted(fuses)).split(", ")
    shown = [f'"{text}"' for text in texts[:most]]
    return f"[{', '.join(shown)}{', …' if len(texts) > len(shown) else ''}]"


def said_in(file: TomlFile) -> str:
    """The file that has to say what a hint proposes, where another one is extended."""
    extends = isinstance(file, LayeredFile) and len(file.layers) > 1
    return f", in {file.file}" if extends else ""


def rows_in_words(rows: Iterable[int]) -> str:
    """``row 3`` or ``rows 3, 5..7``."""
    listed = list(rows)
    return f"row{'' if len(listed) == 1 else 's'} {spans(listed)}"


def beside(other: Location, at: Location) -> str:
    """The second place of a message in brackets; with the file if that is another one."""
    if other.line is None:
        return ""
    if other.file != at.file:
        return f" ({other.file}:{other.line})"
    return f" (line {other.line} of the file)"


def order(at: Location) -> tuple[str, int, int]:
    """Sorts places: of two that contradict each other the later one is at fault."""
    return at.file, at.line or 0, at.column or 0
