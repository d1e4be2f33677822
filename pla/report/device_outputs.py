"""What the cells of a device do in each mode, in sentences."""

from __future__ import annotations

from itertools import groupby
from typing import TYPE_CHECKING

from pla.device.consistency import spans
from pla.report.device_words import rows_text

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.device.model import Cell, Device, Enable, Mode

__all__ = ["enable_words", "on_outputs", "term_table"]

_LEVEL = {"sum": "low", "sum'": "high"}


def on_outputs(device: Device) -> Iterator[str]:
    """A paragraph for cells of a kind of which the same is said; what belongs to it is indented."""
    for kind in dict.fromkeys(cell.kind for cell in device.cells):
        cells = [cell for cell in device.cells if cell.kind == kind]
        always = all(m.enable.kind == "always" for cell in cells for m in cell.modes)
        alike: dict[tuple[str, ...], list[Cell]] = {}
        for cell in cells:
            alike.setdefault(_key(device, cell, always=always), []).append(cell)
        for same in alike.values():
            yield from _on_alike(device, same, always=always)


def _key(device: Device, cell: Cell, *, always: bool) -> tuple[str, ...]:
    """All that is said of a cell beside its own numbers."""
    modes = [_in_mode(device, cell, mode, always=always) for mode in cell.modes]
    carried = [_handed_over([cell], mode, numbered=False) for mode in cell.modes]
    return (*modes, *carried, *_on_idle(device, cell))


def _on_alike(device: Device, cells: Sequence[Cell], *, always: bool) -> Iterator[str]:
    model = cells[0]
    done = [
        "; ".join(
            filter(None, [_in_mode(device, model, mode, always=always), _handed_over(cells, mode)])
        )
        or "no pin, and nothing is fed back"
        for mode in model.modes
    ]
    some = f"{_cells(cells)} (kind {model.kind!r})"
    if not model.links:
        yield f"{some}: nothing to set. {done[0][:1].upper()}{done[0][1:]}."
    else:
        names = ", ".join(model.bits)
        number = "one link" if len(model.links) == 1 else f"{len(model.links)} links"
        yield f"{some}: {number} to set, {names}."
        for mode, said in zip(model.modes, done, strict=True):
            mark = " (blank)" if mode is device.blank_mode(model) else ""
            yield f"  {mode.set}{mark}: {said}."
        yield from _on_unlisted(device, model)
    yield from _on_idle(device, model)


def _cells(cells: Sequence[Cell]) -> str:
    pins = sorted(cell.pin for cell in cells if cell.pin is not None)
    names = [str(cell.key) for cell in cells if cell.pin is None]
    parts = []
    if pins:
        parts.append(f"{'Pins' if len(pins) > 1 else 'Pin'} {spans(pins)}")
    if names:
        noun = "cells" if len(names) > 1 else "cell"
        parts.append(f"{noun if parts else noun.capitalize()} {', '.join(names)} without a pin")
    return " and ".join(parts)


def _in_mode(device: Device, cell: Cell, mode: Mode, *, always: bool) -> str:
    """What a cell does in a mode; `always` if all cells of its kind are driven in every mode."""
    said = []
    if cell.pin is not None:
        said.append(_shows(device, cell, mode))
        if mode.pin != "none" and not always:
            driven = enable_words(mode.enable)
            said.append("always driven" if driven == "always" else f"driven {driven}")
    said += _fed_back(device, mode)
    return "; ".join(said)


def _shows(device: Device, cell: Cell, mode: Mode) -> str:
    term = "a term joined to it" if cell.key in device.or_column else "one of its terms"
    return {
        "sum": f"the pin shows the sum: high when {term} is 1, else low",
        "sum'": f"the pin shows the complement of the sum: low when {term} is 1, else high",
        "none": "the pin shows nothing",
    }[mode.pin]


def enable_words(enable: Enable) -> str:
    """When a pin is driven, as the end of a sentence."""
    if enable.kind == "row":
        return "while its enable row is 1"
    if enable.kind == "pin":
        return f"while pin {enable.pin} is {'low' if enable.active_low else 'high'}"
    return "always"


def _fed_back(device: Device, mode: Mode) -> Iterator[str]:
    """What the columns of a cell carry, where that is not handed over to another pin."""
    if not mode.lines:
        return
    if mode.feedback == "none" or all(line is None for _, line in mode.lines):
        yield "its columns in the AND array carry nothing"
    elif mode.feedback is not None:
        plain, primed = _CARRIED[mode.feedback]
        senses = {_is_primed(device, column) for column, _ in mode.lines}
        if senses == {False, True}:
            yield f"its unprimed column carries {plain}, the primed {primed}"
        elif senses == {False}:
            yield f"its unprimed column carries {plain}"
        else:
            yield f"its primed column carries {_PRIMED_ALONE[mode.feedback]}"


def _handed_over(cells: Sequence[Cell], mode: Mode, *, numbered: bool = True) -> str:
    """What columns that a mode hands over carry: one for each of the cells, of which `mode` is."""
    if mode.feedback is not None or all(line is None for _, line in mode.lines):
        return ""
    listed = []
    for place, (_, line) in enumerate(mode.lines):
        carried = str(line) if line is not None else "nothing"
        if not numbered:
            listed.append(carried)
            continue
        columns = sorted(cell.modes[0].lines[place][0] for cell in cells)
        noun, verb = ("column", "carries") if len(columns) == 1 else ("columns", "carry")
        listed.append(f"{noun} {spans(columns)} {verb} {carried}")
    return ", ".join(listed)


_CARRIED = {
    "sum": ("the sum", "its complement"),
    "sum'": ("the complement of the sum", "the sum itself"),
    "pin": ("the level of the pin", "the complement of that level"),
}
_PRIMED_ALONE = {
    "sum": "the complement of the sum",
    "sum'": "the sum itself",
    "pin": "the complement of the level of the pin",
}


def _is_primed(device: Device, column: int) -> bool:
    word = device.and_array.columns[column]
    return word is not None and word.complement


def _on_unlisted(device: Device, cell: Cell) -> Iterator[str]:
    unlisted = 2 ** len(cell.links) - len(cell.modes)
    if unlisted:
        noun = "setting has" if unlisted == 1 else "settings have"
        yield f"  {unlisted} other {noun} no mode and must not be made."
    if device.blank_mode(cell) is None:
        idle = device.idle_mode(cell).set
        yield f"  Blank is none of them: a cell must be set to {idle} even if unused."
    elif device.idle_mode(cell) is not device.blank_mode(cell):
        yield f"  A cell that nothing uses is set to {device.idle_mode(cell).set}."


def _on_idle(device: Device, model: Cell) -> Iterator[str]:
    """What the pin of a cell does on a blank part, and where a design does not use it."""
    if model.pin is None or all(mode.pin == "none" for mode in model.modes):
        return
    shared = model.key in device.or_column
    blank, idle = device.blank_mode(model), device.idle_mode(model)
    first = ""
    if blank is not None:
        worth = _blank_sum(device, model, blank)
        level = _pin_level(blank, worth)
        driven = _driven(device, blank, filled=False)
        all_shared = len(device.or_column) == len(device.cells)
        every = f"every sum is {worth}" if all_shared else f"the sum is {worth}"
        if worth is None:
            every = "the sum follows the lines"
        first = f"On a blank part {every}, and the pin {_is(level, driven)}. "
    kept = device.technology == "one-time"
    worth = 0 if shared or not kept else _blank_sum(device, model, idle)
    because = {
        0: "has no term in its sum" if shared else "has a sum of 0",
        1: "has blank rows, so that its sum is 1",
        None: "has blank rows",
    }[worth]
    level = _pin_level(idle, worth)
    pin = _is(level, _driven(device, idle, filled=True))
    yield f"{first}An output that a design does not use {because}: its pin {pin}."


def _blank_sum(device: Device, cell: Cell, mode: Mode) -> int | None:
    """What the sum is while all its rows are blank; ``None`` if that depends on the inputs."""
    if cell.key in device.or_column:
        worth = {device.blank_row_at(row) for row in device.shared_rows}
        # Where a blank row is always 1 its OR links are apart as well.
        return None if "live" in worth else 0
    worth = {device.blank_row_at(row) for row in mode.terms}
    if "true" in worth:
        return 1
    return None if "live" in worth else 0


def _pin_level(mode: Mode, worth: int | None) -> str:
    if mode.pin == "none":
        return "floating"
    if worth is None:
        return "high or low"
    return ("high" if mode.pin == "sum" else "low") if worth else _LEVEL[mode.pin]


def _driven(device: Device, mode: Mode, *, filled: bool) -> bool | str:
    """Whether an enable lets the pin be driven, or when."""
    enable = mode.enable
    if enable.kind == "pin":
        return enable_words(enable)
    if enable.row is None:
        return True
    how = device.links.unused_enable if filled else "blank"
    if how == "blank":
        worth = device.blank_row_at(enable.row)
        return "while all lines are 1" if worth == "live" else worth == "true"
    return how == "on"


def _is(level: str, driven: bool | str) -> str:
    if level == "floating":
        return "is floating"
    if driven is False:
        return "is not driven (high impedance)"
    return f"is {level}" + ("" if driven is True else f" {driven}, else high impedance")


def term_table(device: Device) -> list[tuple[str, str, str, str]]:
    """For each cell and modes that agree: its sum's terms, their rows, its enable."""
    found = []
    for cell in device.cells:
        for what, modes in groupby(cell.modes, key=lambda mode: _terms(device, cell, mode)):
            same = list(modes)
            every = len(same) == len(cell.modes)
            which = "" if every else ", ".join(mode.set for mode in same)
            name = f"pin {cell.pin}" if cell.pin is not None else str(cell.name)
            found.append((name, which, *what))
    return found


def _terms(device: Device, cell: Cell, mode: Mode) -> tuple[str, str]:
    if cell.key in device.or_column:
        terms = f"up to {len(device.shared_rows)}, shared"
    else:
        terms = str(len(mode.terms))
        if mode.terms:
            terms += f": {rows_text(mode.terms)}"
    enable = mode.enable
    if cell.pin is None or mode.pin == "none":
        return terms, "not driven"
    return terms, f"row {enable.row}" if enable.kind == "row" else enable_words(enable)
