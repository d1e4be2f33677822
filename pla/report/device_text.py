"""A device in words, and drawn as an array of lines, terms and sums."""

from __future__ import annotations

import re
import textwrap
from itertools import pairwise
from typing import TYPE_CHECKING

from tabulate import tabulate

from pla.device.consistency import spans
from pla.report.layout import drawn
from pla.report.table import Table

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.device.model import Block, Cell, Device, Mode

__all__ = ["catalogue_table", "draw", "explain", "fuse_table", "pin_table"]

WIDTH = 100
_SHOWN_ROWS = 20
_HEAD, _TAIL = 8, 4
_KEEP = "\u00a0"  # a blank at which no line is broken
_STATE = {0: "closed", 1: "open"}


def explain(device: Device) -> str:
    """What the device is and does, for someone about to trust a file about it with a part."""
    parts = [
        _title(device),
        _section("Links", _on_links(device)),
        _section("Rows", _on_rows(device)),
        _section("Outputs", _on_outputs(device)),
        "Pins\n"
        + textwrap.indent(_table(pin_table(device), ["pin", "role", "in the arrays"]), "  "),
        "Fuses\n" + textwrap.indent(_table(fuse_table(device), ["fuses", "number", "what"]), "  "),
    ]
    return "\n\n".join(parts) + "\n"


def _title(device: Device) -> str:
    head = f"{device.name}: {device.summary}" if device.summary else device.name
    kind = "programmed once" if device.technology == "one-time" else "erasable"
    return f"{head}\n{kind}, {device.pins} pins, {device.fuses} fuses (0..{device.fuses - 1})"


def _section(title: str, sentences: Sequence[str]) -> str:
    wrapped = [
        textwrap.fill(s, WIDTH, initial_indent="  ", subsequent_indent=_hanging(s))
        for s in sentences
    ]
    return "\n".join([title, *wrapped])


def _hanging(sentence: str) -> str:
    return " " * (4 + len(sentence) - len(sentence.lstrip()))


def _table(rows: Sequence[Sequence[str]], head: Sequence[str]) -> str:
    return str(tabulate(rows, head, tablefmt="plain", disable_numparse=True, colalign=("right",)))


def _on_links(device: Device) -> list[str]:
    links = device.links
    blank, other = _STATE[links.blank], _STATE[1 - links.blank]
    joined, apart = _STATE[links.connected], _STATE[1 - links.connected]
    undone = (
        "What is programmed cannot be undone."
        if device.technology == "one-time"
        else f"Erasing makes every link {blank} again."
    )
    joins = f"{_a(joined)} link ({links.connected}) joins a line to a term, and a term to a sum."
    return [
        f"Blank: every link is {blank} ({links.blank}).",
        f"{joins} {_a(apart)} link ({1 - links.connected}) keeps them apart.",
        f"Programming makes a link {other} ({1 - links.blank}). {undone}",
    ]


def _a(state: str) -> str:
    return f"An {state}" if state == "open" else f"A {state}"


def _on_rows(device: Device) -> list[str]:
    return [*_on_blank_row(device), _on_unused_row(device)]


def _on_blank_row(device: Device) -> list[str]:
    if device.blank_row == "true":
        return [
            "A blank row is always 1: no line is joined to it, and a product of nothing is 1.",
            "It does no harm: its OR links are apart too, so it reaches no sum.",
        ]
    which = (
        "every line and its complement are joined to it"
        if len(device.paired_sources) == len(device.input_pins)
        else f"line and complement of pins {spans(device.paired_sources)} are joined to it"
    )
    return [
        f"A blank row is dead, always 0: {which}.",
        "Its OR links are joined too; a row that is 0 adds nothing to a sum.",
    ]


def _on_unused_row(device: Device) -> str:
    once = device.technology == "one-time"
    later = " It can take a term later." if once else ""
    if device.links.unused_term == "blank":
        return f"A row without a term is left blank.{later}"
    filled = "A row without a term is made dead: every line and its complement are joined to it."
    if device.links.blank_connected:
        return f"{filled} It is so when blank.{later}"
    return f"{filled} It can take no term later: what is joined stays so." if once else filled


def _on_outputs(device: Device) -> list[str]:
    said: list[str] = []
    for kind in dict.fromkeys(cell.kind for cell in device.cells):
        cells = [cell for cell in device.cells if cell.kind == kind]
        said.extend(_on_kind(device, kind, cells))
    return said


def _on_kind(device: Device, kind: str, cells: Sequence[Cell]) -> Iterator[str]:
    pins = spans(sorted(cell.pin for cell in cells))
    model = cells[0]
    some = f"{'Pins' if len(cells) > 1 else 'Pin'} {pins} (kind {kind!r})"
    if not model.links:
        yield f"{some}: nothing to set. {_shows(model.modes[0]).capitalize()}."
    else:
        names = ", ".join(model.bits)
        number = "one link" if len(model.links) == 1 else f"{len(model.links)} links"
        yield f"{some}: {number} to set, {names}."
        for mode in model.modes:
            mark = " (blank)" if mode is device.blank_mode(model) else ""
            yield f"  {mode.set}{mark}: {_shows(mode)}."
        yield from _on_unlisted(device, model)
    yield _on_unused_output(device, model)


def _shows(mode: Mode) -> str:
    return {
        "sum": "the pin shows the sum: high when a term joined to it is 1, else low",
        "sum'": "the pin shows the complement of the sum: low when a term joined to it is 1, "
        "else high",
        "none": "the pin shows nothing",
    }[mode.pin]


def _on_unlisted(device: Device, cell: Cell) -> Iterator[str]:
    unlisted = 2 ** len(cell.links) - len(cell.modes)
    if unlisted:
        noun = "setting has" if unlisted == 1 else "settings have"
        yield f"  {unlisted} other {noun} no mode and must not be made."
    if device.blank_mode(cell) is None:
        yield f"  Blank is none of them: a cell must be set to {cell.modes[0].set} even if unused."


def _on_unused_output(device: Device, cell: Cell) -> str:
    level = {"sum": "low", "sum'": "high", "none": "floating"}
    blank = device.blank_mode(cell)
    first = f"On a blank part every sum is 0, and the pin is {level[blank.pin]}. " if blank else ""
    idle = level[device.idle_mode(cell).pin]
    return f"{first}An output that a design does not use has no term in its sum: its pin is {idle}."


def pin_table(device: Device) -> list[tuple[str, str, str]]:
    """For each pin its number, its role, and where it is in the arrays."""
    roles = {**dict.fromkeys(device.ground, "ground"), **dict.fromkeys(device.power, "power")}
    roles.update(dict.fromkeys(device.unconnected, "not connected"))
    sums = {pin: column for column, pin in enumerate(device.or_array.sums)}
    rows = []
    for pin in range(1, device.pins + 1):
        if pin in roles:
            rows.append((str(pin), roles[pin], ""))
        elif pin in sums:
            rows.append((str(pin), "output", _place_of_cell(device.cell_of_pin[pin], sums[pin])))
        else:
            columns = [
                f"{word} in column {device.column_of[pin, prime]}"
                for prime, word in ((False, "true"), (True, "complement"))
                if (pin, prime) in device.column_of
            ]
            rows.append((str(pin), "input", ", ".join(columns)))
    return rows


def _place_of_cell(cell: Cell, column: int) -> str:
    links = [f"{bit} is fuse {fuse}" for bit, fuse in zip(cell.bits, cell.links, strict=True)]
    return ", ".join([f"sum in OR column {column}", *links])


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
    ands, ors = len(device.and_array.columns), len(device.or_array.sums)
    return ": AND links" if block.size == ands else f": {ands} AND links, {ors} OR links"


def _fuse_row(blocks: Sequence[Block], what: str) -> tuple[str, str, str]:
    first, last = blocks[0], blocks[-1]
    size = sum(block.size for block in blocks)
    return f"{first.first}..{last.first + last.size - 1}", str(size), what


def draw(device: Device) -> str:
    """The array: a line is a column, a term a row, ``+`` a link; sums stand to the right.

    At most 100 characters wide if the device allows it; rows in the middle are left out of long
    arrays.
    """
    lines, sums = device.and_array.columns, device.or_array.sums
    rows = _shown_rows(device.terms)
    left = [_extent(device.and_array.fuses_of(term)) for term in range(device.terms)]
    right = [_extent(device.or_array.fuses_of(term)) for term in range(device.terms)]
    margin = max(len("AND links"), *map(len, left))
    fixed = 4 + 2 + margin + 2 + 3 + 2 + max(len("OR links"), *map(len, right))
    gap = 1 if fixed + 2 * (len(lines) + len(sums)) + 2 <= WIDTH else 0
    indent = " " * (4 + 2 + margin + 2)

    drawn = [
        f"{indent}{_fit('lines', len(lines) * (gap + 1) + gap)}   sums".rstrip(),
    ]
    for one, other in _labels(device):
        text = indent + _spread(one, " ", gap) + "   " + _spread(other, " ", gap)
        drawn.append(text.rstrip())
    head = f"{'term':>4}  {'AND links':>{margin}}  "
    bars = ["|" if line else " " for line in lines]
    drawn.append(
        f"{head}{_spread(bars, ' ', gap)}   {_spread('|' * len(sums), ' ', gap)}  OR links"
    )
    links = ["+" if line else "." for line in lines]
    for term in rows:
        if term is None:
            dots = _spread([":" if line else " " for line in lines], " ", gap)
            drawn.append(
                f"{'...':>4}  {'...':>{margin}}  {dots}   {_spread(':' * len(sums), ' ', gap)}"
            )
            continue
        drawn.append(
            f"{term:>4}  {left[term]:>{margin}}  {_spread(links, '-', gap)}-->"
            f"{_spread('+' * len(sums), '-', gap)}  {right[term]}"
        )
    return "\n".join([*drawn, "", *_legend(device)]) + "\n"


def _legend(device: Device) -> Iterator[str]:
    yield "+ is a link. Fuse numbers: first..last of a row, with the step where it is not 1."
    if None in device.and_array.columns:
        yield ". is a link in a column with no line: it does nothing."
    cells = ["; ".join(_links_of(cell)) for cell in device.cells if cell.links]
    if cells:
        listed = textwrap.fill(
            f"Links of the cells: {'; '.join(cells)}", WIDTH, subsequent_indent="  "
        )
        yield listed.replace(_KEEP, " ")


def _links_of(cell: Cell) -> list[str]:
    return [
        f"pin {cell.pin} {bit}: {fuse}".replace(" ", _KEEP)
        for bit, fuse in zip(cell.bits, cell.links, strict=True)
    ]


def _shown_rows(terms: int) -> list[int | None]:
    if terms <= _SHOWN_ROWS:
        return list(range(terms))
    return [*range(_HEAD), None, *range(terms - _TAIL, terms)]


def _extent(fuses: range) -> str:
    first, last = fuses[0], fuses[-1]
    if len(fuses) == 1:
        return str(first)
    return f"{first}..{last}" if fuses.step == 1 else f"{first}..{last} by {fuses.step}"


def _spread(cells: Sequence[str], filler: str, gap: int) -> str:
    """One character for each column, apart by `gap`, and as much before and after."""
    between = filler * gap
    return between + between.join(cells) + between


def _fit(text: str, width: int) -> str:
    return (text if len(text) <= width else "").ljust(width)


def _labels(device: Device) -> Iterator[tuple[list[str], list[str]]]:
    """Rows of characters above lines and sums: the digits of the pins, then the primes."""
    lines, sums = device.and_array.columns, device.or_array.sums
    digits = len(str(device.pins))
    above = [f"{line.source if line else '':>{digits}}" for line in lines]
    beside = [f"{pin:>{digits}}" for pin in sums]
    for k in range(digits):
        yield [pin[k] for pin in above], [pin[k] for pin in beside]
    yield ["'" if line and line.complement else " " for line in lines], [" "] * len(sums)


def catalogue_table(devices: Sequence[Device]) -> str:
    """A row for each device: the figures by which it is chosen."""
    rows = [
        (
            d.name,
            str(len(d.input_pins)),
            str(d.terms),
            str(len(d.output_pins)),
            str(d.pins),
            str(d.fuses),
            d.technology,
            d.summary,
        )
        for d in devices
    ]
    head = ("name", "inputs", "terms", "outputs", "pins", "fuses", "technology", "summary")
    return drawn(Table("", head, tuple(rows), aligned="lrrrrrll", wrapped=(7,)))
