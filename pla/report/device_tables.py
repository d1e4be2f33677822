"""The pins and the fuses of a device as rows of tables."""

from __future__ import annotations

import re
from itertools import pairwise
from typing import TYPE_CHECKING

from pla.device.consistency import spans
from pla.device.model import Line
from pla.report.device_words import rows_text

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.device.model import Block, Cell, Device, Source

__all__ = ["buried_table", "fuse_table", "pin_table"]


def pin_table(device: Device) -> list[tuple[str, str, str]]:
    """For each pin its number, its role, and where it is in the arrays."""
    roles = dict.fromkeys(device.ground, "ground")
    roles.update(dict.fromkeys(device.power, "power"))
    roles.update(dict.fromkeys(device.unconnected, "not connected"))
    rows = []
    for pin in range(1, device.pins + 1):
        cell = device.cell_of_pin.get(pin)
        if pin in roles:
            rows.append((str(pin), roles[pin], ""))
        elif cell is not None:
            role = "output" if pin in device.output_pins else "input of a cell"
            rows.append((str(pin), role, _place_of_cell(device, cell)))
        else:
            role = "input" if pin in device.input_pins else "enable"
            if role == "input" and pin in device.enable_pins:
                role = "input, enable"
            lines = filter(None, (_columns(device, pin), _by_mode(device, pin)))
            rows.append((str(pin), role, ", ".join(lines)))
    return rows


def buried_table(device: Device) -> list[tuple[str, str]]:
    """For each cell without a pin its name, and where it is in the arrays."""
    return [
        (str(cell.name), _place_of_cell(device, cell)) for cell in device.cells if cell.pin is None
    ]


def _columns(device: Device, source: Source, *, fed_back: bool = False) -> str:
    words = ("unprimed", "primed") if fed_back else ("true", "complement")
    return ", ".join(
        f"{word} in column {device.column_of[source, prime]}"
        for prime, word in zip((False, True), words, strict=True)
        if (source, prime) in device.column_of
    )


def _by_mode(device: Device, pin: int) -> str:
    """Where a pin is that has its lines in the columns of cells, and in how many of their modes."""
    always: dict[bool, set[int]] = {False: set(), True: set()}
    partly: dict[bool, set[int]] = {False: set(), True: set()}
    for cell in device.cells:
        for place, (column, _) in enumerate(cell.modes[0].lines):
            carried = [mode.lines[place][1] for mode in cell.modes]
            for prime in (False, True):
                number = carried.count(Line("pin", pin, prime))
                if number:
                    (always if number == len(carried) else partly)[prime].add(column)
    parts = []
    for found, when in ((always, ""), (partly, "in some modes ")):
        said = [
            f"{word} in column{'' if len(found[prime]) == 1 else 's'} {spans(sorted(found[prime]))}"
            for prime, word in ((False, "true"), (True, "complement"))
            if found[prime]
        ]
        parts += [when + ", ".join(said)] if said else []
    return "; ".join(parts)


def _place_of_cell(device: Device, cell: Cell) -> str:
    parts = []
    if cell.name is not None and cell.pin is not None:
        parts.append(f"cell {cell.name}")
    if cell.key in device.or_column:
        parts.append(f"sum in OR column {device.or_column[cell.key]}")
    if cell.rows:
        parts.append(rows_text(cell.rows))
    if cell.pin is not None and cell.name is not None:
        level = _columns(device, cell.pin)
        parts.append(f"level {level}" if level else "")
        fed_back = _columns(device, cell.name, fed_back=True)
    else:
        fed_back = _columns(device, cell.key, fed_back=True)
    if any(mode.lines and mode.feedback is None for mode in cell.modes):
        columns = spans(sorted({column for column, _ in cell.modes[0].lines}))
        parts.append(f"columns {columns} as its mode says")
    else:
        parts.append(f"fed back {fed_back}" if fed_back else "")
    parts += [f"{bit} is fuse {fuse}" for bit, fuse in zip(cell.bits, cell.links, strict=True)]
    return ", ".join(filter(None, parts))


def fuse_table(device: Device) -> list[tuple[str, str, str]]:
    """Fuse ranges in order of address: first and last, how many, what they do."""
    units: list[list[Block]] = []
    for block in device.blocks():
        if block.what == "spare" and units and units[-1][-1].what != "spare":
            units[-1].append(block)
        else:
            units.append([block])
    groups: list[list[list[Block]]] = []
    for unit in units:
        if groups and _continues(groups[-1], unit):
            groups[-1].append(unit)
        else:
            groups.append([unit])
    return [row for group in groups for row in _fuse_rows(device, group)]


def _continues(group: Sequence[Sequence[Block]], unit: Sequence[Block]) -> bool:
    """Whether a block, with the spare fuses after it, goes on with the counting of a group."""
    stems = [_counted(known[0].what) for known in (*group[-2:], unit)]
    if not stems[-1][0] or len({stem for stem, _ in stems}) > 1:
        return False
    if [block.size for block in group[-1]] != [block.size for block in unit]:
        return False
    numbers = [int(number) for _, number in stems if number.isdigit()]
    steps = {b - a for a, b in pairwise(numbers)}
    return not stems[-1][0].endswith("term") or steps in ({1}, {-1})


def _counted(what: str) -> tuple[str, str]:
    """``OR links of term 3`` as its stem and its number; no stem where nothing is counted."""
    stem, _, number = what.rpartition(" ")
    return ("", "") if number == "array" else (stem, number)


def _fuse_rows(device: Device, group: Sequence[Sequence[Block]]) -> Iterator[tuple[str, str, str]]:
    if len(group) == 1:
        for block in group[0]:
            yield _fuse_row([block], block.what + _parts(device, block))
        return
    first, last = group[0][0], group[-1][0]
    stem, number = _counted(first.what)
    plural = re.sub(r"\b(term|line|sum|pin)\b", r"\1s", stem)
    what = f"{plural} {number} to {_counted(last.what)[1]}, {_fuses(first.size)} each"
    after = f"; {group[0][1].size} spare after each" if len(group[0]) > 1 else ""
    yield _fuse_row([b for unit in group for b in unit], what + _parts(device, first) + after)


def _fuses(number: int) -> str:
    return "1 fuse" if number == 1 else f"{number} fuses"


def _parts(device: Device, block: Block) -> str:
    if not block.what.startswith("term "):
        return ""
    ands = len(device.and_array.columns)
    ors = 0 if device.or_array is None else len(device.or_array.sums)
    return ": AND links" if block.size == ands else f": {ands} AND links, {ors} OR links"


def _fuse_row(blocks: Sequence[Block], what: str) -> tuple[str, str, str]:
    first, last = blocks[0], blocks[-1]
    size = sum(block.size for block in blocks)
    end = last.first + last.size - 1
    return f"{first.first}..{end}", str(size), what
