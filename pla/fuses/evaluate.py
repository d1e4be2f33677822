"""What every sum and pin of an array is worth, in any logic that knows 0, 1 and unknown.

Unknown is what a pin carries that nothing drives, and what a ring carries that does not settle. It
spreads as in three-valued simulation (E. B. Eichelberger, "Hazard detection in combinational and
sequential switching circuits", IBM Journal of Research and Development 9(2), 1965): a product with
a 0 is 0 and a sum with a 1 is 1 whatever else is unknown. A ring starts out unknown and is gone
round until nothing can change any more, so that one whose parts are never closed together settles.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Generic, Literal, Protocol, TypeVar

from pla.device.model import Line
from pla.fuses.network import in_order, is_ring, needs_of

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from pla.device.model import Source
    from pla.fuses.network import Needs
    from pla.fuses.recover import Realised, Sum

__all__ = ["Evaluated", "Logic", "Outside", "evaluate"]

V = TypeVar("V")


class Logic(Protocol[V]):
    """Values over all input combinations at once."""

    def constant(self, value: bool, /) -> V: ...

    @property
    def unknown(self) -> V: ...

    def inverse(self, value: V, /) -> V: ...

    def conjunction(self, values: Sequence[V], /) -> V:
        """1 where all are 1, 0 where one is 0; of no values 1."""
        ...

    def disjunction(self, values: Sequence[V], /) -> V:
        """1 where one is 1, 0 where all are 0; of no values 0."""
        ...

    def same(self, one: V, other: V, /) -> bool:
        """Whether two values are seen to be equal; equal ones that look different may be missed."""
        ...


@dataclass(frozen=True, slots=True)
class Outside(Generic[V]):
    """What comes to a pin from outside.

    Attributes:
        level: The level.
        rule: What happens while the part drives the pin as well. ``holds``: both drive, and the
            level is unknown. ``yields``: the outside lets go, as on a bus that keeps to its
            protocol. ``free``: lines carry the outside level whatever the part does, so that all
            levels are tried that it might have.
    """

    level: V
    rule: Literal["holds", "yields", "free"] = "holds"


@dataclass(frozen=True, slots=True)
class Evaluated(Generic[V]):
    """The array for given levels from outside.

    Attributes:
        sums: Of every cell by its key.
        shown: For each cell's pin the level that the part gives it while it drives.
        driven: For each cell's pin whether the part drives it.
        levels: For each cell's pin its level, whoever drives it.
        needs: What depends on what.
        rings: Sums and pins that feed themselves through connected lines, settled or not.
    """

    sums: dict[Source, V]
    shown: dict[int, V]
    driven: dict[int, V]
    levels: dict[int, V]
    needs: Needs
    rings: tuple[tuple[Line, ...], ...]


def evaluate(
    realised: Realised, logic: Logic[V], outside: Mapping[int, Outside[V]]
) -> Evaluated[V]:
    """The worth of every sum and pin; a pin that nothing drives is unknown."""
    free = {pin for pin, given in outside.items() if given.rule == "free"}
    needs = needs_of(realised, free)
    run = _Run(realised, logic, outside)
    rings = []
    for group in in_order(needs):
        ring = is_ring(group, needs)
        if ring:
            rings.append(group)
        run.settle(group, ring=ring)
    pins = {s.cell.pin: s for s in realised.sums if s.cell.pin is not None}
    return Evaluated(
        {key: run.values[Line("sum", key)] for key in realised.sum_of},
        {pin: run.shown(sum_) for pin, sum_ in pins.items()},
        {pin: run.driven(sum_) for pin, sum_ in pins.items()},
        {pin: run.values[Line("pin", pin)] for pin in pins},
        needs,
        tuple(rings),
    )


@dataclass(slots=True)
class _Run(Generic[V]):
    realised: Realised
    logic: Logic[V]
    outside: Mapping[int, Outside[V]]
    values: dict[Line, V] = field(default_factory=dict)
    products: dict[int, V] = field(default_factory=dict)

    def settle(self, group: tuple[Line, ...], *, ring: bool) -> None:
        for node in group:
            self.values[node] = self.logic.unknown
        # In each round at least one member becomes known where anything does.
        for _ in range(len(group) if ring else 1):
            before = [self.values[node] for node in group]
            for node in group:
                self.values[node] = self.worth(node)
                if ring:
                    self.products.clear()
            after = [self.values[node] for node in group]
            if ring and all(map(self.logic.same, before, after)):
                break

    def worth(self, node: Line) -> V:
        device = self.realised.device
        if node.kind == "sum":
            rows = self.realised.sum_of[node.of].rows
            if rows is None:
                return self.logic.unknown
            return self.logic.disjunction([self.product(row) for row in rows])
        cell = device.cell_of_pin[int(node.of)]
        return self.level(int(node.of), self.realised.sum_of[cell.key])

    def product(self, number: int) -> V:
        if number not in self.products:
            row = self.realised.rows[number]
            if row.dead:
                self.products[number] = self.logic.constant(False)
            else:
                parts = [self.carried(line) for line in row.lines]
                if row.floating:
                    parts.append(self.logic.unknown)
                self.products[number] = self.logic.conjunction(parts)
        return self.products[number]

    def carried(self, line: Line) -> V:
        node = Line(line.kind, line.of)
        if node in self.values:
            value = self.values[node]
        else:
            given = self.outside.get(int(line.of))
            value = self.logic.unknown if given is None else given.level
        return self.logic.inverse(value) if line.complement else value

    def driven(self, sum_: Sum) -> V:
        mode = sum_.mode
        if mode is None:
            return self.logic.unknown
        if mode.pin == "none":
            return self.logic.constant(False)
        if mode.enable.row is not None:
            return self.product(mode.enable.row)
        if mode.enable.pin is not None:
            return self.carried(Line("pin", mode.enable.pin, mode.enable.active_low))
        return self.logic.constant(True)

    def shown(self, sum_: Sum) -> V:
        mode = sum_.mode
        if mode is None or mode.pin == "none":
            return self.logic.unknown
        # A pin that is off for good is settled before its sum, which does not matter then.
        value = self.values.get(Line("sum", sum_.cell.key), self.logic.unknown)
        return self.logic.inverse(value) if mode.pin == "sum'" else value

    def level(self, pin: int, sum_: Sum) -> V:
        logic, given = self.logic, self.outside.get(pin)
        if given is not None and given.rule == "free":
            return given.level
        driven, shown = self.driven(sum_), self.shown(sum_)
        mode = sum_.mode
        always = mode is not None and mode.pin != "none" and mode.enable.kind == "always"
        if always and (given is None or given.rule == "yields"):
            return shown
        let_go = logic.inverse(driven)
        if given is None:
            floats = logic.conjunction([let_go, logic.unknown])
            return logic.disjunction([logic.conjunction([driven, shown]), floats])
        alone = logic.conjunction([let_go, given.level])
        if given.rule == "holds":
            return logic.disjunction([alone, logic.conjunction([driven, logic.unknown])])
        agreed = logic.conjunction([shown, given.level])
        return logic.disjunction([logic.conjunction([driven, shown]), alone, agreed])
