"""A device drawn as an array of lines, terms and sums."""

from __future__ import annotations

import textwrap
from typing import TYPE_CHECKING

from pla.device.consistency import spans

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.device.model import Cell, Device

__all__ = ["draw", "owner_of"]

WIDTH = 100
_SHOWN_ROWS = 20
_SHOWN_OWN_ROWS = 256
_HEAD, _TAIL = 8, 4
_KEEP = "\u00a0"  # a blank at which no line is broken


def draw(device: Device) -> str:
    """The array: a line is a column, a term a row, ``+`` a link; sums stand to the right.

    A row of a cell says whose it is instead. At most 100 characters wide if the device allows it;
    rows in the middle are left out of long arrays.
    """
    lines = device.and_array.columns
    sums = () if device.or_array is None else device.or_array.sums
    rows = _shown_rows(device)
    left = [_extent(device.and_array.fuses_of(term)) for term in range(device.terms)]
    right = [_at_right(device, term) for term in range(device.terms)]
    margin = max(len("AND links"), *map(len, left))
    fixed = 4 + 2 + margin + 2 + 3 + 2 + max(len("OR links"), *map(len, right))
    gap = 1 if fixed + 2 * (len(lines) + len(sums)) + 2 <= WIDTH else 0
    indent = " " * (4 + 2 + margin + 2)

    drawn = [
        f"{indent}{_fit('lines', len(lines) * (gap + 1) + gap)}{'   sums' if sums else ''}".rstrip()
    ]
    for one, other in _labels(device):
        text = indent + _spread(one, " ", gap) + "   " + _spread(other, " ", gap)
        drawn.append(text.rstrip())
    head = f"{'term':>4}  {'AND links':>{margin}}  "
    bars = _spread(["|" if line else " " for line in lines], " ", gap)
    sum_bars = f"   {_spread('|' * len(sums), ' ', gap)}  OR links" if sums else ""
    drawn.append(f"{head}{bars}{sum_bars}".rstrip())
    links = _spread(["+" if line else "." for line in lines], "-", gap)
    apart = _spread(" " * len(sums), " ", gap) if sums else ""
    joined = _spread("+" * len(sums), "-", gap) if sums else ""
    shared = set(device.shared_rows)
    for term in rows:
        if term is None:
            dots = _spread([":" if line else " " for line in lines], " ", gap)
            sum_dots = f"   {_spread(':' * len(sums), ' ', gap)}" if sums else ""
            drawn.append(f"{'...':>4}  {'...':>{margin}}  {dots}{sum_dots}")
            continue
        drawn.append(
            f"{term:>4}  {left[term]:>{margin}}  {links}-->"
            f"{joined if term in shared else apart}  {right[term]}"
        )
    return "\n".join([*drawn, "", *_legend(device)]) + "\n"


def _at_right(device: Device, term: int) -> str:
    """The OR links of a row that is shared, else whose row it is."""
    array = device.or_array
    if array is not None and term in array.terms:
        return _extent(array.fuses_of(array.terms.index(term)))
    return owner_of(device, term)


def owner_of(device: Device, row: int) -> str:
    """What a row is: a shared term, or a term or the enable of a cell."""
    if row in device.shared_rows:
        return "shared term"
    for cell in device.cells:
        numbers = sorted({m.terms.index(row) + 1 for m in cell.modes if row in m.terms})
        roles = ["enable"] if any(mode.enable.row == row for mode in cell.modes) else []
        if numbers:
            roles.append(f"term {' or '.join(map(str, numbers))}")
        whose = f"pin {cell.pin}" if cell.pin is not None else f"cell {cell.name}"
        if roles:
            return f"{' or '.join(roles)} of {whose}"
        if row in cell.rows:
            return f"unused row of {whose}"
    return "nothing"


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
    if device.drop is not None:
        drops = [
            f"row {term}: {fuse}".replace(" ", _KEEP)
            for term, fuse in zip(device.drop.terms, device.drop.fuses, strict=True)
        ]
        listed = textwrap.fill(f"Drop links: {'; '.join(drops)}", WIDTH, subsequent_indent="  ")
        yield listed.replace(_KEEP, " ")
    if device.mode_fuses:
        states = "; ".join(f"{fuse} is {state}" for fuse, state in device.mode_fuses)
        yield f"Fuses that select the mode of the device: {states}"
    if device.signature is not None:
        yield f"Signature: {spans(device.signature.fuses)}"


def _links_of(cell: Cell) -> list[str]:
    whose = f"pin {cell.pin}" if cell.pin is not None else f"cell {cell.name}"
    return [
        f"{whose} {bit}: {fuse}".replace(" ", _KEEP)
        for bit, fuse in zip(cell.bits, cell.links, strict=True)
    ]


def _shown_rows(device: Device) -> list[int | None]:
    """All rows where they belong to cells; of alike shared ones the first and the last."""
    terms = device.terms
    if terms <= (_SHOWN_ROWS if len(device.shared_rows) == terms else _SHOWN_OWN_ROWS):
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
    lines = device.and_array.columns
    sums = () if device.or_array is None else device.or_array.sums
    words = [str(line.source) for line in lines if line is not None]
    digits = max(map(len, [*words, *map(str, sums)]))
    above = [f"{line.source if line else '':>{digits}}" for line in lines]
    beside = [f"{pin:>{digits}}" for pin in sums]
    for k in range(digits):
        yield [pin[k] for pin in above], [pin[k] for pin in beside]
    yield ["'" if line and line.complement else " " for line in lines], [" "] * len(sums)
