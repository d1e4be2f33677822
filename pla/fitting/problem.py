"""What has to be laid out on a device, and under which conditions."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

from pla.fitting.offers import Wish
from pla.fitting.scenario import Switch

if TYPE_CHECKING:
    from collections.abc import Mapping

    from pla.device.model import Device
    from pla.fitting.minima import Minima
    from pla.fitting.model import PolarityWish
    from pla.fitting.netlist import Net, Netlist
    from pla.logic.cubes import Cube
    from pla.logic.minimize import Minimum

__all__ = ["Problem"]


@dataclass(frozen=True)
class Problem:
    """What has to be laid out, and under which conditions.

    Attributes:
        netlist: The nets and inputs.
        device: Where they go.
        wish: Polarities that the user allows.
        places: Pins that are decided, by signal.
        minima: Finds the sums.
        reserve: Terms that have to stay spare in the OR gate of every output.
    """

    netlist: Netlist
    device: Device
    wish: PolarityWish
    places: Mapping[str, int]
    minima: Minima
    reserve: int = 0

    def polarities(self, net: Net) -> tuple[bool, ...]:
        """The polarities that a net may have: ``True`` for the complement."""
        allowed = (False, True) if self.wish == "free" or net.inner else (False,)
        restriction = self.netlist.restriction
        if restriction is not None and net.index in self.netlist.restricted:
            return tuple(c for c in allowed if c == restriction.complemented)
        return allowed

    def alone(self, net: Net, complemented: bool) -> Minimum:
        """The smallest sum of a net by itself."""
        return self.minima.alone(self.netlist, net.index, complemented)

    @cached_property
    def enables(self) -> tuple[Cube | None, ...]:
        """For each net the product that enables it; ``None`` where it is no single product."""
        found: list[Cube | None] = []
        for net in self.netlist.nets:
            cube = None
            if net.enable is not None:
                cover = self.minima.enable(self.netlist, net.index).cover
                cube = next(iter(cover)) if len(cover) == 1 else None
            found.append(cube)
        return tuple(found)

    @cached_property
    def switches(self) -> tuple[Switch | None, ...]:
        """For each net the input that could enable it by a pin."""
        real = len(self.netlist.design.inputs)
        found: list[Switch | None] = []
        for cube in self.enables:
            switch = None
            if cube is not None and cube.literals == 1:
                index = (cube.ones | cube.zeros).bit_length() - 1
                if index < real and index not in self.bound:
                    switch = Switch(index, bool(cube.ones))
            found.append(switch)
        return tuple(found)

    @cached_property
    def bound(self) -> frozenset[int]:
        """Inputs that have no pin of their own: fed back, or read from an output's pin."""
        read = {net.reads for net in self.netlist.nets if net.reads is not None}
        real = len(self.netlist.design.inputs)
        return frozenset(read) | frozenset(range(real, len(self.netlist.behaviour.inputs)))

    @cached_property
    def placed_inputs(self) -> dict[int, int]:
        """The decided pins of inputs that have one of their own."""
        inputs = self.netlist.design.inputs
        return {
            i: self.places[signal.name]
            for i, signal in enumerate(inputs)
            if i not in self.bound and signal.name in self.places
        }

    def place_of(self, net: Net) -> int | None:
        """The pin that is decided for an output."""
        return self.places.get(net.name)

    def wish_of(self, net: Net, complemented: bool) -> Wish:
        """A net in one polarity, as a cell is asked for it."""
        return Wish(net, complemented, self.switches[net.index])
