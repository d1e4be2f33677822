"""The slips that are made when a device is written down from a diagram, one at a time.

Each is a device that the part might really be while the description says something else. What an
exercise cannot tell from the description, it cannot warn of.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import combinations, pairwise
from typing import TYPE_CHECKING, Literal, cast

from pla.device.model import Line

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator, Sequence

    from pla.device.model import Cell, Column, Device, Mode, OrArray, Shows, Source

__all__ = ["Slip", "slips"]

_NEAR = 4
_FLIPPED = {"sum": "sum'", "sum'": "sum", "none": "none"}


@dataclass(frozen=True, slots=True)
class Slip:
    """Something that may be wrong in a description.

    Attributes:
        what: In words.
        device: What the part would really be then.
    """

    what: str
    device: Device


def slips(device: Device) -> Iterator[Slip]:
    """All single slips of the usual kinds that leave every fuse number within the device."""
    for slip in _all(device):
        if _within(slip.device):
            yield slip


def _all(device: Device) -> Iterator[Slip]:
    yield from _columns(device)
    yield from _rows(device)
    if device.or_array is not None:
        yield from _sums(device, device.or_array)
    yield from _links(device)
    yield from _cells(device)
    yield from _modes(device)


def _within(device: Device) -> bool:
    firsts = [device.and_array.fuses_of(row) for row in range(device.terms)]
    if device.or_array is not None:
        firsts += [device.or_array.fuses_of(row) for row in range(len(device.or_array.rows))]
    return all(0 <= fuse < device.fuses for row in firsts for fuse in (row[0], row[-1]))


def _columns(device: Device) -> Iterator[Slip]:
    """What stands in some columns stands in others.

    Columns that carry nothing in any mode are left out: what a row does that is joined to one is
    not known.
    """
    columns = device.and_array.columns
    by_mode: dict[int, list[Line | None]] = {column: [] for column in range(len(columns))}
    for cell in device.cells:
        for mode in cell.modes:
            for column, line in mode.lines:
                by_mode[column].append(line)
    empty = {c for c, lines in by_mode.items() if lines and not any(lines)}
    for a, b in pairwise(c for c in range(len(columns)) if c not in empty):
        if columns[a] != columns[b]:
            yield Slip(
                f"columns {a} and {b} exchanged ({_named(columns[a])}, {_named(columns[b])})",
                _exchanged(device, {a: b, b: a}),
            )
    pairs: dict[Source, dict[bool, int]] = {}
    for (source, complement), column in device.column_of.items():
        if column not in empty:
            pairs.setdefault(source, {})[complement] = column
    both = {source: own for source, own in pairs.items() if len(own) == 2}
    for source, own in both.items():
        moves = {own[False]: own[True], own[True]: own[False]}
        if abs(own[False] - own[True]) != 1:
            yield Slip(f"true and complement line of {source} exchanged", _exchanged(device, moves))
    order = list(both)
    for one, other in combinations(both, 2):
        if abs(order.index(one) - order.index(other)) > _NEAR:
            continue
        moves = {}
        for complement in (False, True):
            moves[both[one][complement]] = both[other][complement]
            moves[both[other][complement]] = both[one][complement]
        yield Slip(f"the columns of {one} and of {other} exchanged", _exchanged(device, moves))
    flipped = {own[c]: own[not c] for own in both.values() for c in (False, True)}
    if flipped:
        yield Slip("all true and complement lines exchanged", _exchanged(device, flipped))


def _named(column: Column | None) -> str:
    return "no line" if column is None else str(column)


def _exchanged(device: Device, moves: dict[int, int]) -> Device:
    """The device with what stands in some columns in others."""
    columns = list(device.and_array.columns)
    for old, new in moves.items():
        columns[new] = device.and_array.columns[old]

    def mode(own: Mode) -> Mode:
        return replace(own, lines=tuple((moves.get(c, c), line) for c, line in own.lines))

    return replace(
        device,
        and_array=replace(device.and_array, columns=tuple(columns)),
        cells=tuple(
            replace(cell, modes=tuple(mode(own) for own in cell.modes)) for cell in device.cells
        ),
    )


def _rows(device: Device) -> Iterator[Slip]:
    array = device.and_array

    def with_rows(what: str, rows: Sequence[int]) -> Slip:
        return Slip(what, replace(device, and_array=replace(array, rows=tuple(rows))))

    for way in (-1, 1):
        yield with_rows(
            f"the first fuse of every AND row {_by(way)}", [row + way for row in array.rows]
        )
        yield with_rows(
            f"the step from AND row to AND row {_by(way)}",
            [row + k * way for k, row in enumerate(array.rows)],
        )
        if array.column_step + way:
            yield Slip(
                f"the step from AND column to AND column {_by(way)}",
                replace(device, and_array=replace(array, column_step=array.column_step + way)),
            )
    if device.terms > 1:
        yield with_rows("all AND rows shifted by one", [*array.rows[1:], array.rows[0]])
        yield with_rows("AND rows in reverse order", array.rows[::-1])
    owners = _owners(device)
    for a, b in pairwise(range(device.terms)):
        if owners[a] != owners[b]:
            rows = list(array.rows)
            rows[a], rows[b] = rows[b], rows[a]
            yield with_rows(f"AND rows {a} and {b} exchanged", rows)


def _by(way: int) -> str:
    return "one too small" if way > 0 else "one too large"


def _owners(device: Device) -> list[tuple[object, ...]]:
    """What each row is for; rows of one OR gate do the same."""
    owners: list[tuple[object, ...]] = [("none",)] * device.terms
    for place, row in enumerate(device.shared_rows):
        owners[row] = ("shared", place)
    for cell in device.cells:
        for row in cell.rows:
            uses = tuple((row in mode.terms, row == mode.enable.row) for mode in cell.modes)
            owners[row] = (cell.key, uses)
    return owners


def _sums(device: Device, array: OrArray) -> Iterator[Slip]:
    def changed(what: str, other: OrArray) -> Slip:
        return Slip(what, replace(device, or_array=other))

    for way in (-1, 1):
        first = tuple(row + way for row in array.rows)
        yield changed(f"the first fuse of every OR row {_by(way)}", replace(array, rows=first))
        stepped = tuple(row + k * way for k, row in enumerate(array.rows))
        yield changed(f"the step from OR row to OR row {_by(way)}", replace(array, rows=stepped))
    if len(array.rows) > 1:
        shifted = (*array.rows[1:], array.rows[0])
        yield changed("all OR rows shifted by one", replace(array, rows=shifted))
    for a, b in combinations(range(len(array.sums)), 2):
        sums = list(array.sums)
        sums[a], sums[b] = sums[b], sums[a]
        yield changed(
            f"the OR columns of {array.sums[a]} and {array.sums[b]} exchanged",
            replace(array, sums=tuple(sums)),
        )


def _links(device: Device) -> Iterator[Slip]:
    links = device.links
    connected = cast("Literal[0, 1]", 1 - links.connected)
    yield Slip(
        "the state that joins is the other one",
        replace(device, links=replace(links, connected=connected)),
    )
    drop = device.drop
    if drop is None:
        return
    dropped = cast("Literal[0, 1]", 1 - drop.dropped)
    yield Slip(
        "the state that drops a term is the other one",
        replace(device, drop=replace(drop, dropped=dropped)),
    )
    if len(drop.fuses) > 1:
        shifted = (*drop.fuses[1:], drop.fuses[0])
        yield Slip(
            "all drop links shifted by one", replace(device, drop=replace(drop, fuses=shifted))
        )


def _cells(device: Device) -> Iterator[Slip]:
    for one, other in combinations(device.cells, 2):
        if len(one.links) == len(other.links) > 0:
            pair = (replace(one, links=other.links), replace(other, links=one.links))
            yield Slip(
                f"the configuration links of {one} and {other} exchanged",
                _with_cells(device, pair),
            )
        if len(one.rows) == len(other.rows) > 0 and one.kind == other.kind:
            moves = dict(zip((*one.rows, *other.rows), (*other.rows, *one.rows), strict=True))
            pair = (_moved(one, moves), _moved(other, moves))
            yield Slip(f"the rows of {one} and {other} exchanged", _with_cells(device, pair))
    for cell in device.cells:
        for a, b in pairwise(range(len(cell.links))):
            links = list(cell.links)
            links[a], links[b] = links[b], links[a]
            yield Slip(
                f"links {cell.bits[a]!r} and {cell.bits[b]!r} of {cell} exchanged",
                _with_cells(device, (replace(cell, links=tuple(links)),)),
            )
        for row in cell.enable_rows:
            term = next((t for m in cell.modes if m.enable.row == row for t in m.terms), None)
            if term is not None:
                moves = {row: term, term: row}
                yield Slip(
                    f"the enable row {row} and row {term} of {cell} exchanged",
                    _with_cells(device, (_moved(cell, moves),)),
                )


def _moved(cell: Cell, moves: dict[int, int]) -> Cell:
    """A cell with other rows."""

    def mode(own: Mode) -> Mode:
        enable = own.enable
        if enable.row is not None:
            enable = replace(enable, row=moves.get(enable.row, enable.row))
        return replace(own, terms=tuple(sorted(moves.get(r, r) for r in own.terms)), enable=enable)

    rows = tuple(sorted(moves.get(row, row) for row in cell.rows))
    return replace(cell, rows=rows, modes=tuple(mode(own) for own in cell.modes))


def _with_cells(device: Device, changed: Sequence[Cell]) -> Device:
    new = {cell.key: cell for cell in changed}
    return replace(device, cells=tuple(new.get(cell.key, cell) for cell in device.cells))


def _modes(device: Device) -> Iterator[Slip]:
    """Slips in what a mode is said to do; modes are shared by the cells of a kind."""
    kinds: dict[str, list[Cell]] = {}
    for cell in device.cells:
        kinds.setdefault(cell.kind, []).append(cell)
    for kind, cells in kinds.items():
        modes = cells[0].modes
        for index, mode in enumerate(modes):
            name = f'mode "{mode.set}" of kind {kind}' if mode.set else f"kind {kind}"
            for what, change in _changes(cells, index):
                yield Slip(
                    f"{what} in {name}",
                    _with_cells(device, [_with_mode(cell, index, change) for cell in cells]),
                )
        for a, b in combinations(range(len(modes)), 2):
            yield Slip(
                f'the settings "{modes[a].set}" and "{modes[b].set}" of kind {kind} exchanged',
                _with_cells(device, [_reset(cell, a, b) for cell in cells]),
            )


def _with_mode(cell: Cell, index: int, change: Callable[[Cell, Mode], Mode]) -> Cell:
    modes = list(cell.modes)
    modes[index] = change(cell, modes[index])
    return replace(cell, modes=tuple(modes))


def _reset(cell: Cell, a: int, b: int) -> Cell:
    modes = list(cell.modes)
    modes[a], modes[b] = (
        replace(modes[a], set=modes[b].set),
        replace(modes[b], set=modes[a].set),
    )
    return replace(cell, modes=tuple(modes))


def _changes(
    cells: Sequence[Cell], index: int
) -> Iterator[tuple[str, Callable[[Cell, Mode], Mode]]]:
    modes = [cell.modes[index] for cell in cells]
    mode = modes[0]
    if mode.pin != "none":
        yield (
            "the sense of the pin is the other one",
            lambda _, own: replace(own, pin=cast("Shows", _FLIPPED[own.pin])),
        )
    if any(line is not None for own in modes for _, line in own.lines):
        yield (
            "the sense of the feedback is the other one",
            lambda _, own: _relined(own, lambda line: line.inverse),
        )
    carried = {line.kind for own in modes for _, line in own.lines if line is not None}
    # A pin that is always driven carries the sum anyway.
    differ = mode.pin == "none" or mode.enable.kind != "always"
    if "pin" in carried and mode.feedback is not None and differ:
        yield (
            "the feedback carries the sum and not the pin",
            lambda cell, own: _relined(
                own, lambda line: Line("sum", cell.key, line.complement != (own.pin == "sum'"))
            ),
        )
    if "sum" in carried and all(cell.pin is not None for cell in cells) and differ:
        yield (
            "the feedback carries the pin and not the sum",
            lambda cell, own: _relined(
                own,
                lambda line: Line(
                    "pin", cast("int", cell.pin), line.complement != (own.pin == "sum'")
                ),
            ),
        )
    if mode.enable.pin is not None:
        yield (
            "the active level of the enable pin is the other one",
            lambda _, own: replace(
                own, enable=replace(own.enable, active_low=not own.enable.active_low)
            ),
        )


def _relined(mode: Mode, change: Callable[[Line], Line]) -> Mode:
    return replace(
        mode, lines=tuple((c, None if line is None else change(line)) for c, line in mode.lines)
    )
