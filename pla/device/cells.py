"""The cells of a device file: kinds, configuration links, the rows that each cell owns."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.device.consistency import FuseClaim
from pla.device.layers import LayeredFile
from pla.device.limits import CELL_LATER, KIND_LATER, known_keys
from pla.device.modes import read_enable, read_modes, read_states
from pla.device.words import beside, read_row_numbers, rows_in_words, spans, usable_name
from pla.wording import did_you_mean

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.device.model import Enable, Source
    from pla.device.modes import RawMode
    from pla.errors import Location
    from pla.tomlfile import Section

__all__ = ["RawCell", "ReadKind", "read_kinds"]

_CELL_KEYS = ("pin", "name", "links", "rows", "terms", "enable")


@dataclass(frozen=True, slots=True)
class RawCell:
    """A cell as the file gives it.

    Attributes:
        section: Where it stands.
        pin: Its pin.
        name: Its name; a cell has a pin or a name or both.
        links: Its configuration links.
        rows: The rows of the AND array that it owns, ascending or as listed.
        terms: Rows of its OR gate; ``None`` if not given.
        enable: When its pin is driven, if the cell or its kind says so.
        enable_section: Where that is said.
    """

    section: Section
    pin: int | None
    name: str | None
    links: tuple[int, ...]
    rows: tuple[int, ...]
    terms: tuple[int, ...] | None
    enable: Enable | None
    enable_section: Section

    @property
    def key(self) -> Source:
        return self.pin if self.pin is not None else self.name or ""

    @property
    def where(self) -> Location:
        return self.section.at("pin" if self.pin is not None else "name")

    @property
    def at_rows(self) -> Location:
        """The place that says which rows it owns."""
        for key in ("rows", "terms"):
            if key in self.section:
                return self.section.at(key)
        return self.at_enable

    @property
    def at_enable(self) -> Location:
        return self.enable_section.at("enable")

    def __str__(self) -> str:
        return f"the cell on pin {self.pin}" if self.pin is not None else f"cell {self.name}"


@dataclass(frozen=True, slots=True)
class ReadKind:
    """A kind of cell.

    Attributes:
        name: Its name.
        section: Where it stands.
        bits: Names of the configuration links.
        modes: What they select.
        cells: Its cells.
        unused: States of the links of a cell that nothing uses, if the file says so.
    """

    name: str
    section: Section
    bits: tuple[str, ...]
    modes: tuple[RawMode, ...]
    cells: tuple[RawCell, ...]
    unused: str | None

    def claims(self) -> Iterator[FuseClaim]:
        """The configuration links of all cells."""
        for number, cell in enumerate(self.cells):
            for index, fuse in enumerate(cell.links):
                yield FuseClaim(
                    (fuse,),
                    f"cell {self.name} {number} {index}",
                    lambda _, bit=self.bits[index], cell=cell: f"link {bit!r} of {cell}",  # type: ignore[misc]
                    lambda cell=cell, index=index: cell.section.at("links", index),  # type: ignore[misc]
                )


def read_kinds(
    top: Section, count: int | None, at_count: Location | None
) -> tuple[list[ReadKind], bool] | None:
    """The cells of all kinds.

    Args:
        top: The file.
        count: Rows of the AND array, if known.
        at_count: The place that says how many.

    Returns:
        The kinds that could be read, and whether that is all of them; ``None`` if there is none.
    """
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
    found: list[ReadKind] = []
    good = True
    for name in kinds:
        section = kinds.section(name)
        kind = None if section is None else _read_kind(name, section, count, at_count)
        if kind is None:
            good = False
        else:
            found.append(kind)
    return found, good


def _read_kind(
    name: str, kind: Section, count: int | None, at_count: Location | None
) -> ReadKind | None:
    if _misnamed(name, kind):
        return None
    known_keys(kind, ["bits", "modes", "cells", "enable", "unused"], KIND_LATER)
    bits = _read_bits(kind)
    enable = read_enable(kind, count) if "enable" in kind else None
    sections = kind.sections("cells", required=True)
    listed = kind.data.get("cells")
    good = isinstance(listed, list) and len(sections) == len(listed)
    if listed == []:
        hint = None
        if isinstance(kind.file, LayeredFile) and name in kind.file.base_kinds:
            hint = (
                "kinds cannot be taken away: put the cells that stay into a kind of their own in "
                f"{kind.file.layers[1].file}"
            )
        kind.error("KIND-EMPTY", f"{kind.title} has no cells", kind.at("cells"), hint)
    pins_needed = any("pin" in section for section in sections) or not sections
    modes = read_modes(kind, bits, pins_needed)
    cells: list[RawCell] = []
    for section in sections:
        cell = _read_cell(section, kind, enable, bits, count, at_count)
        if cell is None:
            good = False
        else:
            cells.append(cell)
    unused = _read_unused(kind, bits, modes) if "unused" in kind else None
    if enable is None and "enable" in kind:
        good = False
    if bits is None or modes is None or not good or not cells:
        return None
    return ReadKind(name, kind, bits, tuple(modes), tuple(cells), unused)


def _misnamed(name: str, kind: Section) -> bool:
    """Report a kind that would change one of an extended file, which has none of this name."""
    file = kind.file
    if not isinstance(file, LayeredFile) or len(file.layers) < 2 or "cells" in kind:
        return False
    known = file.base_kinds
    if name in known:
        return False
    kind.error(
        "KIND-UNKNOWN",
        f"{kind.title} has no cells, and {file.layers[1].file}, which this file extends, has no "
        f"kind {name!r}",
        None,
        did_you_mean(name, known),
    )
    return True


def _read_cell(
    section: Section,
    kind: Section,
    kind_enable: Enable | None,
    bits: tuple[str, ...] | None,
    count: int | None,
    at_count: Location | None,
) -> RawCell | None:
    known_keys(section, _CELL_KEYS, CELL_LATER)
    before = len(section.diagnostics.errors)
    if "pin" not in section and "name" not in section:
        section.error(
            "KEY-MISSING",
            f"{section.title} has no 'pin' and no 'name'",
            None,
            'add pin = …; a cell without a pin has a name, as in name = "b1"',
        )
    pin = section.integer("pin", low=1)
    name = section.text("name")
    if name is not None and not usable_name(name):
        section.error(
            "CELL-NAME",
            f"the name {name!r} is not usable, expected letters, digits and _, a letter first",
            section.at("name"),
        )
    links = _read_links(section, bits)
    terms = read_row_numbers(section, "terms", count, at_count) if "terms" in section else None
    enable, said = kind_enable, kind
    if "enable" in section:
        enable, said = read_enable(section, count), section
        if pin is None and "pin" not in section:
            section.error(
                "ENABLE-NO-PIN",
                f"{section.title} has 'enable', but no pin that could be driven",
                section.key_at("enable"),
            )
    rows = _read_owned(section, pin, terms, enable, count, at_count)
    if links is None or rows is None or len(section.diagnostics.errors) > before:
        return None
    return RawCell(
        section,
        pin,
        name,
        links,
        rows,
        tuple(sorted(terms)) if terms is not None else None,
        enable if pin is not None else None,
        said,
    )


def _read_owned(
    section: Section,
    pin: int | None,
    terms: tuple[int, ...] | None,
    enable: Enable | None,
    count: int | None,
    at_count: Location | None,
) -> tuple[int, ...] | None:
    """The rows that a cell owns: as ``rows`` lists them, else its terms and its enable."""
    row = enable.row if enable is not None and pin is not None else None
    used = {*(terms or ()), *(() if row is None else (row,))}
    if "rows" not in section:
        return tuple(sorted(used))
    rows = read_row_numbers(section, "rows", count, at_count)
    if rows is None:
        return None
    outside = sorted(used.difference(rows))
    if outside:
        key = "terms" if set(outside) <= set(terms or ()) and "terms" in section else "enable"
        at = section.at(key) if key in section else section.where
        section.error(
            "ROW-OUTSIDE",
            f"{rows_in_words(outside)} in {key!r} of {section.title} "
            f"{'is' if len(outside) == 1 else 'are'} not among its "
            f"'rows'{beside(section.at('rows'), at)}: {spans(sorted(rows))}",
            at,
            "'rows' lists all rows that the cell owns",
        )
        return None
    return tuple(rows)


def _read_unused(
    kind: Section, bits: tuple[str, ...] | None, modes: list[RawMode] | None
) -> str | None:
    states = read_states(kind, "unused", bits)
    if states is None or modes is None or any(mode.set == states for mode in modes):
        return states
    known = ", ".join(mode.set for mode in modes)
    kind.error(
        "UNUSED-MODE",
        f'unused = "{states}" of {kind.title} is none of its modes: {known}',
        kind.at("unused"),
    )
    return None


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
        on = "the cell on pin" if "pin" in section else "cell"
        section.error(
            "LINKS-COUNT",
            f"{on} {section.data.get('pin', section.data.get('name'))} has {len(links)} "
            f"link{'' if len(links) == 1 else 's'}, expected {expected} as 'bits' of its kind says",
            section.at("links"),
        )
        return None
    return tuple(links)
