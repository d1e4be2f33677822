"""What a cell, in one of its modes, can do for a signal."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, TypeAlias

from pla.device.model import Line
from pla.fitting.scenario import Switch

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping, Sequence

    from pla.device.model import Cell, Mode, Shows
    from pla.fitting.netlist import Net
    from pla.fitting.scenario import Scenario

__all__ = ["Needs", "Offer", "Wish", "column_pair", "fed_lines", "input_mode", "offers", "shown"]

Needs: TypeAlias = "Mapping[int, frozenset[bool]]"
"""For each input the literals that terms have of it: ``True`` for the asserted signal."""


@dataclass(frozen=True, slots=True)
class Wish:
    """A net in one polarity.

    Attributes:
        net: What has to be held.
        complemented: The sum is the complement of the asserted function.
        enable: For a three-state output whose enable is one literal, that literal.
    """

    net: Net
    complemented: bool
    enable: Switch | None = None


@dataclass(frozen=True, slots=True)
class Offer:
    """A mode that will do.

    Attributes:
        mode: The mode.
        shows: An inner signal drives the pin of the cell.
    """

    mode: Mode
    shows: bool


def shown(active_low: bool, complemented: bool) -> Shows:
    """What the pin has to show of a sum.

    The pin of an active-high output shows the asserted function, that of an active-low one its
    complement; the sum is the one or the other.
    """
    return "sum'" if active_low != complemented else "sum"


def offers(scenario: Scenario, cell: Cell, wish: Wish, needs: Needs) -> list[Offer]:
    """The modes in which a cell can hold a net, those in which no inner signal shows first."""
    apart = cell.key in scenario.split
    found = []
    net = wish.net
    possible = [
        (mode, shows)
        for mode in scenario.modes[cell.key]
        for shows in _ways(scenario, cell, mode, wish, apart)
    ]
    for mode, shows in possible:
        if net.reads is not None and not _has(
            _lines(scenario, mode), Line("pin", _pin(cell)), needs.get(net.reads), net
        ):
            continue
        if net.fed is not None and not _feeds(scenario, cell, mode, wish, needs, shows=shows):
            continue
        found.append(Offer(mode, shows))
    return sorted(found, key=lambda offer: offer.shows)


def fed_lines(scenario: Scenario, cell: Cell, mode: Mode, wish: Wish, *, shows: bool) -> list[Line]:
    """Lines that are 1 while a net is asserted, as far as the cell could provide them.

    Args:
        scenario: What is decided.
        cell: The cell that holds the net.
        mode: How it is set.
        wish: The net in its polarity.
        shows: Whether it drives the pin, where it is an inner signal.
    """
    lines = [Line("sum", cell.key, wish.complemented)]
    if (
        cell.pin is not None
        and wish.net.enable is None
        and scenario.drive(mode) in {"always", "row"}
        and (shows or not wish.net.inner)
    ):
        # What the pin shows is the sum or its complement; it is the level that comes back.
        lines.append(Line("pin", cell.pin, wish.complemented != (mode.pin == "sum'")))
    return lines


def input_mode(scenario: Scenario, cell: Cell, senses: frozenset[bool]) -> Mode | None:
    """A mode in which the pin of a cell serves as an input that has lines of these senses.

    Args:
        scenario: What is decided.
        cell: A cell with a pin.
        senses: Lines that are needed: ``True`` for the complement of the pin's level.
    """
    candidates = sorted(
        (m for m in scenario.modes[cell.key] if scenario.drive(m) in {"never", "row"}),
        key=lambda m: scenario.drive(m) == "row",
    )
    for mode in candidates:
        lines = _lines(scenario, mode)
        if all(Line("pin", _pin(cell), sense) in lines for sense in senses):
            return mode
    return None


def column_pair(
    lines: Sequence[Line | None], asserted: Iterable[Line]
) -> tuple[int | None, int | None]:
    """The columns that are 1 while a signal is asserted and while it is not.

    Args:
        lines: What each column carries.
        asserted: Lines that are 1 while the signal is asserted.
    """
    wanted = list(asserted)
    return (
        next((lines.index(line) for line in wanted if line in lines), None),
        next((lines.index(line.inverse) for line in wanted if line.inverse in lines), None),
    )


def _ways(scenario: Scenario, cell: Cell, mode: Mode, wish: Wish, apart: bool) -> tuple[bool, ...]:
    """Whether an inner signal would show at the pin; empty if the mode will not do at all."""
    drive, net = scenario.drive(mode), wish.net
    if net.inner:
        if cell.pin is None or drive == "never":
            return (False,)
        if apart:
            return (False,) if drive == "row" else ()
        return {"row": (False, True), "always": (True,)}.get(str(drive), ())
    if cell.pin is None or apart or mode.pin != shown(net.active_low, wish.complemented):
        return ()
    if net.enable is None:
        return (False,) if drive in {"always", "row"} else ()
    by_pin = isinstance(drive, Switch) and drive == wish.enable
    return (False,) if drive == "row" or by_pin else ()


def _feeds(
    scenario: Scenario, cell: Cell, mode: Mode, wish: Wish, needs: Needs, *, shows: bool
) -> bool:
    """Whether the feedback of a cell has the lines that are needed."""
    lines = _lines(scenario, mode)
    asserted = fed_lines(scenario, cell, mode, wish, shows=shows)
    true = any(line in lines for line in asserted)
    complement = any(line.inverse in lines for line in asserted)
    senses = needs.get(wish.net.fed if wish.net.fed is not None else -1)
    if senses is None:
        return true or complement
    return (True not in senses or true) and (False not in senses or complement)


def _has(lines: frozenset[Line], high: Line, senses: frozenset[bool] | None, net: Net) -> bool:
    """Whether lines of a pin that is read have the literals that are needed."""
    asserted = high.inverse if net.active_low else high
    if senses is None:
        return asserted in lines or asserted.inverse in lines
    return all((asserted if sense else asserted.inverse) in lines for sense in senses)


def _lines(scenario: Scenario, mode: Mode) -> frozenset[Line]:
    """What columns carry as far as this mode decides, or no cell's mode changes it any more."""
    return scenario.passed.union(line for _, line in mode.lines if line is not None)


def _pin(cell: Cell) -> int:
    if cell.pin is None:  # pragma: no cover - callers ask for cells with a pin
        raise ValueError(f"{cell} has no pin")
    return cell.pin
