"""The output cells of a device file: kinds, modes, configuration links."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, cast

from pla.device.consistency import FuseClaim, PinClaim
from pla.device.limits import (
    BURIED,
    CELL_LATER,
    FEEDBACK,
    KIND_LATER,
    MODE_LATER,
    REGISTERS,
    known_keys,
    not_yet,
)
from pla.device.model import Cell, Mode

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.device.model import Shows
    from pla.errors import Location
    from pla.tomlfile import Section

__all__ = ["ReadCell", "read_kinds"]

_SHOWS = ("sum", "sum'", "none")
_SHOWS_LATER = ("q", "q'", "pin")


@dataclass(frozen=True, slots=True)
class ReadCell:
    """A cell with the place that says what it is."""

    cell: Cell
    section: Section

    def at_pin(self) -> Location:
        return self.section.at("pin")

    def claims(self) -> Iterator[FuseClaim]:
        pin = self.cell.key
        for index, fuse in enumerate(self.cell.links):
            yield FuseClaim(
                (fuse,),
                f"cell {pin} {index}",
                lambda _, bit=self.cell.bits[index]: f"link {bit!r} of the cell on pin {pin}",  # type: ignore[misc]
                lambda index=index: self.section.at("links", index),  # type: ignore[misc]
            )

    def pin_claim(self) -> PinClaim:
        return PinClaim(cast("int", self.cell.pin), "an output", self.at_pin)


def read_kinds(top: Section) -> list[ReadCell] | None:
    """The cells of all kinds, or ``None`` if something in them is wrong."""
    if "kind" not in top:
        hint = "add [kind.NAME]: bits, modes and cells of the outputs"
        top.error("KEY-MISSING", "the file has no [kind.NAME]", None, hint)
        return None
    kinds = top.section("kind")
    if kinds is None:
        return None
    if not list(kinds):
        top.error("KEY-MISSING", "[kind] describes no kind of output cell", kinds.where)
        return None
    found: list[ReadCell] = []
    good = True
    for name in kinds:
        kind = kinds.section(name)
        cells = None if kind is None else _read_kind(name, kind)
        if cells is None:
            good = False
        else:
            found.extend(cells)
    return found if good else None


def _read_kind(name: str, kind: Section) -> list[ReadCell] | None:
    known_keys(kind, ["bits", "modes", "cells"], KIND_LATER)
    bits = _read_bits(kind)
    modes = _read_modes(kind, bits)
    cells: list[ReadCell] = []
    sections = kind.sections("cells", required=True)
    good = bits is not None and modes is not None and len(sections) == _listed(kind, "cells")
    if "cells" in kind and not sections and kind.data["cells"] == []:
        kind.error("KIND-EMPTY", f"{kind.title} has no cells", kind.at("cells"))
    for section in sections:
        known_keys(section, ["pin", "links"], CELL_LATER)
        if "pin" not in section:
            not_yet(section, BURIED, section.where, f"{section.title} has no 'pin'")
            good = False
            continue
        pin = section.integer("pin", low=1)
        links = _read_links(section, bits)
        if pin is None or links is None or bits is None or modes is None:
            good = False
        else:
            cells.append(ReadCell(Cell(pin, pin, name, links, modes, bits), section))
    return cells if good and cells else None


def _listed(kind: Section, key: str) -> int:
    value = kind.data.get(key)
    return len(value) if isinstance(value, list) else 0


def _read_bits(kind: Section) -> tuple[str, ...] | None:
    if "bits" not in kind:
        return ()
    bits = kind.texts("bits")
    if bits is None:
        return None
    twice = [i for i, bit in enumerate(bits) if bit in bits[:i]]
    for index in twice:
        kind.error(
            "BIT-TWICE",
            f"bits {bits.index(bits[index])} and {index} of {kind.title} "
            f"are both named {bits[index]!r}",
            kind.at("bits", index),
        )
    return None if twice else tuple(bits)


def _read_links(section: Section, bits: tuple[str, ...] | None) -> tuple[int, ...] | None:
    if "links" not in section and bits == ():
        return ()
    links = section.integers("links", low=0, required=True)
    if links is None or bits is None:
        return None
    if len(links) != len(bits):
        expected = f"{len(bits)} ({', '.join(bits)})" if bits else "none"
        section.error(
            "LINKS-COUNT",
            f"the cell on pin {section.data['pin']} has {len(links)} "
            f"link{'' if len(links) == 1 else 's'}, expected {expected} as 'bits' of its kind says",
            section.at("links"),
        )
        return None
    return tuple(links)


def _read_modes(kind: Section, bits: tuple[str, ...] | None) -> tuple[Mode, ...] | None:
    sections = kind.sections("modes", required=True)
    if "modes" in kind and kind.data["modes"] == []:
        kind.error("KIND-EMPTY", f"{kind.title} has no modes", kind.at("modes"))
    modes: list[Mode] = []
    good = bool(sections) and len(sections) == _listed(kind, "modes")
    first: dict[str, Section] = {}
    for section in sections:
        mode = _read_mode(section, bits)
        if mode is None:
            good = False
            continue
        known = first.setdefault(mode.set, section)
        if known is not section:
            good = False
            section.error(
                "MODE-TWICE",
                f'two modes of {kind.title} have set = "{mode.set}": this one and the one '
                f"on line {known.at('pin').line} of the file",
                section.at("set") if "set" in section else section.where,
                "each mode has states of its own",
            )
        modes.append(mode)
    if not good:
        return None
    return tuple(modes) if _judge_modes(kind, modes, sections) else None


def _judge_modes(kind: Section, modes: list[Mode], sections: list[Section]) -> bool:
    if all(mode.pin == "none" for mode in modes):
        kind.error(
            "MODE-NONE",
            f"no mode of {kind.title} shows the sum at the pin",
            kind.at("modes"),
            'expected at least one with pin = "sum" or pin = "sum\'"',
        )
        return False
    for index, mode in enumerate(modes):
        earlier = next((m for m in modes[:index] if m.pin == mode.pin), None)
        if earlier is not None:
            kind.diagnostics.warning(
                "MODE-SAME",
                f'modes "{earlier.set}" and "{mode.set}" of {kind.title} do the same: '
                f"the pin shows {mode.pin}",
                sections[index].at("pin"),
                "is the sense of one of them wrong?",
            )
    return True


def _read_mode(section: Section, bits: tuple[str, ...] | None) -> Mode | None:
    known_keys(section, ["set", "pin"], MODE_LATER)
    states: str | None = ""
    if "set" in section or bits:
        states = section.text("set", required=True)
    good = states is not None
    if states is not None:
        wrong = next((i for i, c in enumerate(states) if c not in "01"), None)
        if wrong is not None:
            good = False
            section.error(
                "MODE-SET",
                f"'set' has {states[wrong]!r} where a link is 0 (closed) or 1 (open)",
                section.inside("set", wrong),
            )
        elif bits is not None and len(states) != len(bits):
            good = False
            expected = f"{len(bits)} ({', '.join(bits)})" if bits else "none"
            section.error(
                "MODE-SET",
                f"'set' has {len(states)} state{'' if len(states) == 1 else 's'}, "
                f"expected {expected} as 'bits' of its kind says",
                section.at("set"),
            )
    if section.data.get("pin") in _SHOWS_LATER:
        found = f'pin = "{section.data["pin"]}"'
        what = FEEDBACK if section.data["pin"] == "pin" else REGISTERS
        not_yet(section, what, section.at("pin"), found)
        return None
    shows = section.choice("pin", _SHOWS, required=True)
    if shows is None or not good:
        return None
    return Mode(cast("str", states), cast("Shows", shows))
