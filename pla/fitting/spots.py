"""Which cells and pins each signal could have."""

from __future__ import annotations

from collections.abc import Hashable
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING, TypeAlias

from pla.fitting.offers import input_mode, offers

if TYPE_CHECKING:
    from collections.abc import Mapping

    from pla.device.model import Cell, Mode, Source
    from pla.fitting.netlist import Net
    from pla.fitting.offers import Needs
    from pla.fitting.problem import Problem
    from pla.fitting.scenario import Scenario

__all__ = ["Resource", "Spot", "Spots"]

Resource: TypeAlias = Hashable
"""A pin, the key of a buried cell, or ``("sum", key)`` for the inside of a cell taken apart."""


@dataclass(frozen=True, slots=True)
class Spot:
    """A cell and how it is set, and whether an inner signal shows at its pin."""

    cell: Cell
    mode: Mode
    shows: bool


@dataclass(frozen=True)
class Spots:
    """The spots of every signal, once it is decided what enable pins carry and so on.

    Attributes:
        problem: The signals.
        scenario: What is decided.
        shared: Nets that go onto the shared OR array; the others have terms of their own.
    """

    problem: Problem
    scenario: Scenario
    shared: frozenset[int]

    @cached_property
    def carried(self) -> dict[int, int]:
        """Pins of inputs that switch outputs by an enable pin."""
        uses = self.scenario.enable_pins.items()
        return {use.index: pin for pin, use in uses if use.index is not None}

    @cached_property
    def inputs(self) -> tuple[int, ...]:
        """Inputs that need a pin of their own, those that an enable pin carries left out."""
        every = range(len(self.problem.netlist.design.inputs))
        return tuple(i for i in every if i not in self.problem.bound and i not in self.carried)

    def of_net(
        self, net: Net, complemented: bool, needs: Needs, *, room: bool = True
    ) -> dict[Resource, Spot]:
        """Cells that could hold a net in a polarity, each in the mode that serves best.

        Args:
            net: What has to be held.
            complemented: Whether the sum is the complement.
            needs: Literals that terms have of fed-back signals and of pins that are read.
            room: Whether an OR gate of the cell's own needs room for the sum; if not, the mode
                with the most terms serves best.
        """
        problem = self.problem
        if net.enable is not None and problem.enables[net.index] is None:
            return {}
        wish = problem.wish_of(net, complemented)
        place = problem.place_of(net)
        in_shared = net.index in self.shared
        found: dict[Resource, Spot] = {}
        for cell in problem.device.cells:
            if place is not None and cell.pin != place:
                continue
            if (cell.key in problem.device.or_column) != in_shared:
                continue
            possible = [
                offer
                for offer in offers(self.scenario, cell, wish, needs)
                if in_shared
                or not room
                or len(offer.mode.terms) - problem.reserve >= problem.alone(net, complemented).count
            ]
            if possible:
                largest = max(possible, key=lambda offer: len(offer.mode.terms))
                offer = possible[0] if room else largest
                found[self._inside(cell)] = Spot(cell, offer.mode, offer.shows)
        return found

    def of_input(self, index: int, senses: frozenset[bool]) -> dict[Resource, Mode | None]:
        """Pins for an input, those of cells with the mode that makes it an input.

        Args:
            index: Which input.
            senses: The literals that are needed: ``True`` for the asserted signal.
        """
        signal = self.problem.netlist.design.inputs[index]
        lines = frozenset(signal.active_low == sense for sense in senses)
        place = self.problem.places.get(signal.name)
        found: dict[Resource, Mode | None] = {}
        for pin, has in self.scenario.pin_lines.items():
            if lines <= has and self._open(pin) and place in {None, pin}:
                found[pin] = None
        for cell in self.problem.device.cells:
            if cell.pin is None or place not in {None, cell.pin}:
                continue
            mode = input_mode(self.scenario, cell, lines)
            if mode is not None:
                found[cell.pin] = mode
        return found

    def carries(self, pin: int, index: int, senses: frozenset[bool]) -> bool:
        """Whether an input that an enable pin carries has the lines that are needed there."""
        signal = self.problem.netlist.design.inputs[index]
        lines = frozenset(signal.active_low == sense for sense in senses)
        return lines <= self.scenario.pin_lines.get(pin, frozenset())

    @cached_property
    def ranks(self) -> Mapping[Resource, int]:
        """Pins first, ascending; then buried cells in order of the file, then insides."""
        cells = self.problem.device.cells
        buried: list[Source] = [cell.key for cell in cells if cell.pin is None]
        inside = [("sum", cell.key) for cell in cells if cell.key in self.scenario.split]
        every: list[Resource] = [*range(1, self.problem.device.pins + 1), *buried, *inside]
        return {resource: rank for rank, resource in enumerate(every)}

    def _inside(self, cell: Cell) -> Resource:
        return ("sum", cell.key) if cell.key in self.scenario.split else cell.key

    def _open(self, pin: int) -> bool:
        """Whether an enable pin, if it is one, is left to other inputs."""
        use = self.scenario.enable_pins.get(pin)
        return use is None or (use.level is None and use.index is None)
