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
    """A paragraph for each kind of cell; sentences that belong to one above are indented."""
    for kind in dict.fromkeys(cell.kind for cell in device.cells):
        yield from _on_kind(device, [cell for cell in device.cells if cell.kind == kind])


def _on_kind(device: Device, cells: Sequence[Cell]) -> Iterator[str]:
    model = cells[0]
    some = f"{_cells(cells)} (kind {model.kind!r})"
    if not model.links:
        done = _in_mode(device, cells, model.modes[0])
        yield f"{some}: nothing to set. {done[:1].upper()}{done[1:]}."
    else:
        names = ", ".join(model.bits)
        number = "one link" if len(model.links) == 1 else f"{len(model.links)} links"
        yield f"{some}: {number} to set, {names}."
        for mode in model.modes:
            mark = " (blank)" if mode is device.blank_mode(model) else ""
            yield f"  {mode.set}{mark}: {_in_mode(device, cells, mode)}."
        yield from _on_unlisted(device, model)
    yield from _on_idle(device, cells)


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


def _in_mode(device: Device, cells: Sequence[Cell], mode: Mode) -> str:
    """What cells of a kind do in a mode; `mode` is that of the first of them."""
    said = []
    if any(cell.pin is not None for cell in cells):
        pinned = next(cell for cell in cells if cell.pin is not None)
        of_pinned = _likewise(pinned, mode)
        said.append(_shows(device, pinned, of_pinned))
        if of_pinned.pin != "none":
            said += _when_driven(cells, of_pinned)
    said += _fed_back(device, cells, mode)
    return "; ".join(said) or "no pin, and nothing is fed back"


def _likewise(cell: Cell, mode: Mode) -> Mode:
    """The mode with the same setting of another cell of the kind."""
    return cell.mode_of(mode.set) or cell.modes[0]


def _shows(device: Device, cell: Cell, mode: Mode) -> str:
    term = "a term joined to it" if cell.key in device.or_column else "one of its terms"
    return {
        "sum": f"the pin shows the sum: high when {term} is 1, else low",
        "sum'": f"the pin shows the complement of the sum: low when {term} is 1, else high",
        "none": "the pin shows nothing",
    }[mode.pin]


def _when_driven(cells: Sequence[Cell], mode: Mode) -> Iterator[str]:
    """When the pin is driven, where that is not always so."""
    always = all(m.enable.kind == "always" for cell in cells for m in cell.modes)
    if not always:
        always_driven = mode.enable.kind == "always"
        yield "always driven" if always_driven else f"driven {enable_words(mode.enable)}"


def enable_words(enable: Enable) -> str:
    """When a pin is driven, as the end of a sentence."""
    if enable.kind == "row":
        return "while its enable row is 1"
    if enable.kind == "pin":
        return f"while pin {enable.pin} is {'low' if enable.active_low else 'high'}"
    return "always"


def _fed_back(device: Device, cells: Sequence[Cell], mode: Mode) -> Iterator[str]:
    fed = [cell for cell in cells if cell.modes[0].lines]
    if not fed:
        return
    senses = {_is_primed(device, column) for cell in fed for column, _ in cell.modes[0].lines}
    model = _likewise(fed[0], mode)
    some = "" if len(fed) == len(cells) else f" ({_cells(fed).lower()} only)"
    if model.feedback == "none" or all(line is None for _, line in model.lines):
        yield f"its columns in the AND array carry nothing{some}"
    elif model.feedback is None:
        listed = [
            f"column {column} carries {line if line is not None else 'nothing'}"
            for column, line in model.lines
        ]
        yield ", ".join(listed)
    else:
        plain, primed = _CARRIED[model.feedback]
        alone = _PRIMED_ALONE[model.feedback]
        both = senses == {False, True}
        if both:
            yield f"its unprimed column carries {plain}, the primed {primed}{some}"
        else:
            which, what = ("unprimed", plain) if False in senses else ("primed", alone)
            yield f"its {which} column carries {what}{some}"


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


def _on_idle(device: Device, cells: Sequence[Cell]) -> Iterator[str]:
    """What the pins do on a blank part, and where a design does not use them."""
    pinned = [cell for cell in cells if cell.pin is not None]
    if not any(mode.pin != "none" for cell in pinned for mode in cell.modes):
        return
    model = pinned[0]
    shared = model.key in device.or_column
    blank, idle = device.blank_mode(model), device.idle_mode(model)
    first = ""
    if blank is not None:
        worth = _blank_sum(device, model, blank)
        level = _pin_level(blank, worth)
        driven = _driven(device, blank, filled=False)
        every = f"every sum is {worth}" if shared else f"the sum is {worth}"
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
