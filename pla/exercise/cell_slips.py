"""Slips in what a description says of its cells: what is theirs, their modes, their enables."""

from __future__ import annotations

from dataclasses import replace
from itertools import combinations, pairwise
from typing import TYPE_CHECKING, cast

from pla.device.model import ALWAYS, Line
from pla.exercise.slip import Slip

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator, Sequence

    from pla.device.model import Cell, Device, Enable, Mode, Shows

__all__ = ["cell_slips", "enable_slips", "mode_slips"]

_FLIPPED = {"sum": "sum'", "sum'": "sum", "none": "none"}


def cell_slips(device: Device) -> Iterator[Slip]:
    """Slips in what belongs to which cell."""
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
        whole = _as_a_whole(device, one, other)
        if whole is not None:
            yield Slip(f"{_both(one, other)} exchanged", whole)
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


def _both(one: Cell, other: Cell) -> str:
    if one.pin is not None and other.pin is not None:
        return f"the cells on pins {one.pin} and {other.pin}"
    return f"the cells {one} and {other}"


def _as_a_whole(device: Device, one: Cell, other: Cell) -> Device | None:
    """Two cells of a kind with all that is theirs but their pin and their columns exchanged.

    ``None`` where no more is theirs than one of what is exchanged singly.
    """
    columns = device.or_column
    summed = one.key in columns and other.key in columns
    unlike_rows = len(one.rows) != len(other.rows)
    several = bool(one.links) + bool(one.rows or other.rows) + summed > 1
    if one.kind != other.kind or not (several or unlike_rows):
        return None
    changed = _with_cells(device, (_with_all_of(one, other), _with_all_of(other, one)))
    array = device.or_array
    if array is None or not summed:
        return changed
    sums = list(array.sums)
    sums[columns[one.key]], sums[columns[other.key]] = other.key, one.key
    return replace(changed, or_array=replace(array, sums=tuple(sums)))


def _with_all_of(cell: Cell, other: Cell) -> Cell:
    modes = tuple(
        replace(own, terms=theirs.terms, enable=theirs.enable)
        for own, theirs in zip(cell.modes, other.modes, strict=True)
    )
    return replace(cell, links=other.links, rows=other.rows, modes=modes)


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


def mode_slips(device: Device) -> Iterator[Slip]:
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


def _relined(mode: Mode, change: Callable[[Line], Line]) -> Mode:
    return replace(
        mode, lines=tuple((c, None if line is None else change(line)) for c, line in mode.lines)
    )


def enable_slips(device: Device) -> Iterator[Slip]:
    """Slips in what switches the pins of cells."""
    levels: dict[int, Enable] = {}
    for cell in device.cells:
        for mode in cell.modes:
            if mode.enable.pin is not None:
                levels.setdefault(mode.enable.pin, mode.enable)
    for pin in levels:
        yield Slip(
            f"the active level of enable pin {pin} is the other one",
            _with_cells(device, [_enabled(cell, _inverted(pin)) for cell in device.cells]),
        )
    for cell in device.cells:
        driving = [mode.enable for mode in cell.modes if mode.pin != "none"]
        if cell.pin is None or not driving:
            continue
        if any(own.kind != "always" for own in driving):
            always = _enabled(cell, lambda _: ALWAYS)
            yield Slip(f"{cell} always drives and is not switched", _with_cells(device, [always]))
        if any(own.kind == "always" for own in driving):
            for pin, enable in levels.items():
                switched = _enabled(cell, _switched(enable))
                yield Slip(
                    f"{cell} does not always drive but is switched by enable pin {pin}",
                    _with_cells(device, [switched]),
                )


def _enabled(cell: Cell, change: Callable[[Enable], Enable]) -> Cell:
    return replace(cell, modes=tuple(replace(own, enable=change(own.enable)) for own in cell.modes))


def _inverted(pin: int) -> Callable[[Enable], Enable]:
    return lambda own: replace(own, active_low=not own.active_low) if own.pin == pin else own


def _switched(enable: Enable) -> Callable[[Enable], Enable]:
    return lambda own: enable if own.kind == "always" else own
