"""What the rows of a programmed array are worth, read from its fuses."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal, TypeAlias

from pla.fuses.recover import recover

if TYPE_CHECKING:
    from pla.device.model import BlankRow, Cell
    from pla.fitting.model import Plan
    from pla.fuses.fusemap import FuseMap
    from pla.fuses.recover import Realised

__all__ = ["Drive", "Left", "ProgrammedRows"]

Drive: TypeAlias = 'Literal["always", "never", "at times"]'
"""When a pin is driven."""

Left: TypeAlias = 'Literal["left blank", "dropped", "dead", "always 1", "connected"]'
"""How a row stands."""


@dataclass(frozen=True, slots=True)
class ProgrammedRows:
    """A plan with its fuses, and what they make of the rows."""

    plan: Plan
    fuses: FuseMap
    realised: Realised

    @classmethod
    def of(cls, plan: Plan, fuses: FuseMap) -> ProgrammedRows:
        return cls(plan, fuses, recover(plan.device, fuses))

    def worth(self, number: int) -> BlankRow:
        """Whether a row is always 0, always 1, or depends on its lines."""
        row = self.realised.rows[number]
        if row.dead:
            return "dead"
        return "live" if row.lines or row.floating else "true"

    def left(self, number: int) -> Left:
        """How a row stands; ``left blank`` where no link of it is programmed."""
        device = self.plan.device
        links = [*device.and_array.fuses_of(number)]
        drop = device.drop.fuse(number) if device.drop else None
        if drop is not None:
            links.append(drop)
        if all(self.fuses[link] == device.links.blank for link in links):
            return "left blank"
        return "dropped" if self.realised.rows[number].dropped else _LEFT[self.worth(number)]

    def sum_of(self, cell: Cell) -> int | None:
        """The sum of a cell where it does not depend on anything, else ``None``."""
        worths = [self.worth(row) for row in self.realised.sum_of[cell.key].rows or ()]
        if "true" in worths:
            return 1
        return None if "live" in worths else 0

    def level_of(self, cell: Cell) -> int | None:
        """The level that a cell's pin has while driven; ``None`` where that depends."""
        value = self.sum_of(cell)
        inverted = self.plan.modes[cell.key].pin == "sum'"
        return None if value is None else value ^ inverted

    def drive_of(self, cell: Cell) -> Drive:
        """When the pin of a cell is driven; enable pins that carry no signal are at their level."""
        mode = self.plan.modes[cell.key]
        if cell.pin is None or mode.pin == "none":
            return "never"
        enable = mode.enable
        if enable.row is not None:
            return _DRIVES[self.worth(enable.row)]
        if enable.pin is None:
            return "always"
        held = dict(self.plan.tied).get(enable.pin)
        if held is None:
            return "at times"
        return "always" if held != enable.active_low else "never"


_LEFT: dict[BlankRow, Left] = {"dead": "dead", "true": "always 1", "live": "connected"}
_DRIVES: dict[BlankRow, Drive] = {"dead": "never", "true": "always", "live": "at times"}
