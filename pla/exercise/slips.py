"""The slips that are made when a device is written down from a diagram, one at a time.

Each is a device that the part might really be while the description says something else. What an
exercise cannot tell from the description, it cannot warn of.
"""

from __future__ import annotations

from dataclasses import replace
from itertools import combinations, pairwise
from typing import TYPE_CHECKING, Literal, cast

from pla.exercise.cell_slips import cell_slips, enable_slips, mode_slips
from pla.exercise.slip import Slip

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.device.model import Column, Device, Line, Mode, OrArray, Source

__all__ = ["Slip", "slips"]

_NEAR = 4
# Up to so many sources every pair of them is tried.
_FEW = 16


def slips(device: Device) -> Iterator[Slip]:
    """All single slips of the usual kinds that leave every fuse number within the device."""
    for kind, found in _all(device):
        for slip in found:
            if _within(slip.device):
                yield replace(slip, kind=kind)


def _all(device: Device) -> Iterator[tuple[str, Iterator[Slip]]]:
    reach = "any two sources" if _few(device) else f"two sources at most {_NEAR} places apart"
    yield (
        f"columns beside each other, true and complement lines, or columns of {reach} exchanged",
        _columns(device),
    )
    yield "AND rows that start or step one off, or are shifted or exchanged", _rows(device)
    if device.or_array is not None:
        yield (
            "OR rows that start or step one off or are shifted, or OR columns exchanged",
            _sums(device, device.or_array),
        )
    drop = ", drop links inverted or shifted" if device.drop is not None else ""
    yield f"the state that joins the other one{drop}", _links(device)
    yield "links, rows, or the cells of a kind as a whole exchanged", cell_slips(device)
    yield "the sense of a pin or of feedback, its source, or settings exchanged", mode_slips(device)
    yield (
        "enable pins of the other active level, cells that always drive or are switched after all",
        enable_slips(device),
    )


def _few(device: Device) -> bool:
    return len({source for source, _ in device.column_of}) <= _FEW


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
    few = _few(device)
    for source, own in both.items():
        moves = {own[False]: own[True], own[True]: own[False]}
        if abs(own[False] - own[True]) != 1:
            yield Slip(f"true and complement line of {source} exchanged", _exchanged(device, moves))
    order = {source: place for place, source in enumerate(pairs)}
    for one, other in combinations(pairs, 2):
        mine, others = pairs[one], pairs[other]
        if mine.keys() != others.keys() or not (few or order[other] - order[one] <= _NEAR):
            continue
        if len(mine) == 1 and all(abs(mine[sense] - others[sense]) == 1 for sense in mine):
            continue  # it stands among the columns beside each other
        moves = {}
        for complement in mine:
            moves[mine[complement]] = others[complement]
            moves[others[complement]] = mine[complement]
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
