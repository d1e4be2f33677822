"""Modes of a kind of cell, and output enables, as the file writes them."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, cast

from pla.device.limits import MODE_LATER, REGISTERS, SHOWS_LATER, known_keys, not_yet
from pla.device.model import ALWAYS, Enable
from pla.device.words import MAX_TERMS, mend_line, mend_pin, read_row_numbers, split_words, word_of

if TYPE_CHECKING:
    from pla.device.model import Carries, Column, Shows
    from pla.errors import Location
    from pla.tomlfile import Section

__all__ = ["RawMode", "read_enable", "read_modes", "read_states"]

_KEYS = ("set", "pin", "feedback", "columns", "terms", "enable")
_SHOWS = ("sum", "sum'", "none")
_CARRIES = ("sum", "sum'", "pin", "none")


@dataclass(frozen=True, slots=True)
class RawMode:
    """A mode as the file gives it, for all cells of its kind.

    Attributes:
        section: Where it stands.
        set: State of each configuration link.
        pin: What the pin shows; ``None`` if not given.
        feedback: What the unprimed column carries; ``None`` if not given.
        columns: What the cell's columns carry one by one; ``None`` if not given.
        terms: Rows of the OR gate, counted within the rows of the cell; ``None`` if not given.
        enable: When the pin is driven, rows counted likewise; ``None`` if not given.
    """

    section: Section
    set: str
    pin: Shows | None = None
    feedback: Carries | None = None
    columns: tuple[Column | None, ...] | None = None
    terms: tuple[int, ...] | None = None
    enable: Enable | None = None

    @property
    def where(self) -> Location:
        """The mode; by what its pin shows if it says so."""
        return self.section.at("pin") if "pin" in self.section else self.section.where

    @property
    def at_set(self) -> Location:
        return self.section.at("set") if "set" in self.section else self.section.where


def read_modes(
    kind: Section, bits: tuple[str, ...] | None, pins_needed: bool
) -> list[RawMode] | None:
    """The modes of a kind, or ``None`` if something in them is wrong.

    Args:
        kind: Its section.
        bits: Names of its configuration links; ``None`` if they are wrong.
        pins_needed: Whether some cell has a pin, so that a mode must say what it shows.
    """
    sections = kind.sections("modes", required=True)
    if "modes" in kind and kind.data["modes"] == []:
        kind.error("KIND-EMPTY", f"{kind.title} has no modes", kind.at("modes"))
    good = bool(sections) and len(sections) == len(kind.data["modes"])
    modes: list[RawMode] = []
    first: dict[str, RawMode] = {}
    for section in sections:
        mode = _read_mode(section, bits, pins_needed)
        if mode is None:
            good = False
            continue
        known = first.setdefault(mode.set, mode)
        if known is not mode:
            good = False
            section.error(
                "MODE-TWICE",
                f'two modes of {kind.title} have set = "{mode.set}": this one and the one '
                f"on line {known.where.line} of the file",
                mode.at_set,
                "each mode has states of its own",
            )
        modes.append(mode)
    return modes if good else None


def _read_mode(section: Section, bits: tuple[str, ...] | None, pins_needed: bool) -> RawMode | None:
    known_keys(section, _KEYS, MODE_LATER)
    before = len(section.diagnostics.errors)
    states: str | None = ""
    if "set" in section or bits:
        states = read_states(section, "set", bits)
    shows = _read_shows(section, required=pins_needed)
    feedback = None
    if section.data.get("feedback") in SHOWS_LATER:
        found = f'feedback = "{section.data["feedback"]}"'
        not_yet(section, REGISTERS, section.at("feedback"), found)
    else:
        feedback = section.choice("feedback", _CARRIES)
    columns = _read_columns(section) if "columns" in section else None
    if "columns" in section and "feedback" in section:
        section.error(
            "FEEDBACK-TWICE",
            f"{section.title} has 'columns' and 'feedback'; expected one of them",
            section.key_at("columns"),
            "'columns' says what each column of the cell carries, instead of 'feedback'",
        )
    terms = read_row_numbers(section, "terms", None) if "terms" in section else None
    enable = read_enable(section, MAX_TERMS) if "enable" in section else None
    if states is None or len(section.diagnostics.errors) > before:
        return None
    return RawMode(
        section,
        states,
        cast("Shows | None", shows),
        cast("Carries | None", feedback),
        columns,
        tuple(sorted(terms)) if terms is not None else None,
        enable,
    )


def read_states(section: Section, key: str, bits: tuple[str, ...] | None) -> str | None:
    """States of the configuration links of a cell; ``None`` if they are wrong."""
    states = section.text(key, required=True)
    if states is None:
        return None
    wrong = next((i for i, c in enumerate(states) if c not in "01"), None)
    if wrong is not None:
        section.error(
            "MODE-SET",
            f"{key!r} has {states[wrong]!r} where a link is 0 (closed) or 1 (open)",
            section.inside(key, wrong),
        )
        return None
    if bits is not None and len(states) != len(bits):
        expected = f"{len(bits)} ({', '.join(bits)})" if bits else "none"
        section.error(
            "MODE-SET",
            f"{key!r} has {len(states)} state{'' if len(states) == 1 else 's'}, "
            f"expected {expected} as 'bits' of its kind says",
            section.at(key),
        )
        return None
    return states


def read_enable(section: Section, count: int | None) -> Enable | None:
    """When a pin is driven: a row, always, or by the level of a pin; ``None`` if it is wrong.

    `count` is the number of rows that there are to choose from, if it is known.
    """
    value: Any = section.data["enable"]
    if value == "always":
        return ALWAYS
    if isinstance(value, dict):
        table = section.section("enable")
        if table is None:
            return None
        table.unknown_keys(("pin", "active"))
        pin = table.integer("pin", low=1, required=True)
        active = table.choice("active", ("high", "low"), default="high")
        if pin is None or table.data.get("active", "high") != active:
            return None
        return Enable("pin", pin=pin, active_low=active == "low")
    top = (count or MAX_TERMS) - 1
    if isinstance(value, bool) or not isinstance(value, int) or not 0 <= value <= top:
        expected = f'a row from 0 to {top}, "always", or {{ pin = … }}'
        section.wrong(expected, "enable")
        return None
    return Enable("row", row=value)


def _read_shows(section: Section, *, required: bool) -> str | None:
    shows = section.data.get("pin")
    if shows in SHOWS_LATER:
        not_yet(section, REGISTERS, section.at("pin"), f'pin = "{shows}"')
        return None
    return section.choice("pin", _SHOWS, required=required)


def _read_columns(section: Section) -> tuple[Column | None, ...] | None:
    words = split_words(section)
    if words is None:
        return None
    lines: list[Column | None] = []
    good = True
    for index, (word, offset) in enumerate(words):
        line = word_of(word)
        if word != "." and (line is None or isinstance(line.source, str)):
            good = False
            hint = None
            if line is not None:
                hint = mend_pin(word) or "what a cell feeds back is said with 'feedback'"
            section.error(
                "COLUMN",
                f"column {index} of {section.title} is {word!r}, expected a pin such as 5, its "
                "complement such as 5', or . for nothing",
                section.inside("columns", offset),
                hint or mend_line(word),
            )
            continue
        lines.append(line)
    return tuple(lines) if good else None
