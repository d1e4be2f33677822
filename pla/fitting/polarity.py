"""Which polarities the cells of a device leave to each output."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.fitting.matching import can_match
from pla.logic.phases import Polarity

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.behaviour.model import Behaviour, Output
    from pla.device.model import Cell, Device, Mode
    from pla.fitting.model import PolarityWish
    from pla.logic.relaxation import Decisions
    from pla.logic.search import Feasible

__all__ = ["allowed_polarities", "mode_for", "tied_polarities", "ties_of", "wished_polarities"]

Ties = tuple[tuple[tuple[str, ...], tuple[int, ...]], ...]
"""For each cell what it offers, and which outputs could have it."""


def mode_for(cell: Cell, active_low: bool, complemented: bool) -> Mode | None:
    """The cell's first mode in which a sum of this polarity gives the pin its level.

    The pin of an active-high output shows the asserted function, that of an active-low one its
    complement; the sum is the one or the other.
    """
    inverted = active_low != complemented
    return next((m for m in cell.modes if m.pin == ("sum'" if inverted else "sum")), None)


def allowed_polarities(
    outputs: Sequence[Output],
    cells: Sequence[Sequence[Cell]],
    wish: PolarityWish,
) -> list[Polarity | None]:
    """What each output may be realised as on some cell that it could have; ``None`` for nothing.

    Args:
        outputs: Outputs of the behaviour.
        cells: For each output the cells that it could have.
        wish: What the user asks for.
    """
    allowed: list[Polarity | None] = []
    for output, own in zip(outputs, cells, strict=True):
        true, complement = (
            any(mode_for(cell, output.active_low, complemented) for cell in own)
            for complemented in (False, True)
        )
        complement = complement and wish == "free"
        allowed.append(Polarity(true, complement) if true or complement else None)
    return allowed


def wished_polarities(behaviour: Behaviour, wish: PolarityWish) -> list[Polarity]:
    """The polarities of every output where no device limits them."""
    return [Polarity(complement=wish == "free")] * len(behaviour.outputs)


def tied_polarities(
    device: Device, outputs: Sequence[Output], cells: Sequence[Sequence[Cell]]
) -> Feasible | None:
    """Which polarities the outputs can have together; ``None`` where all combinations will do.

    Cells that differ in their modes tie them: a choice is then feasible when every output can
    still have a cell of its own that offers its polarity.
    """
    if not _differ(device):
        return None

    def feasible(decisions: Decisions, /) -> bool:
        return can_match(
            [
                [
                    cell.pin
                    for cell in own
                    if any(
                        mode_for(cell, output.active_low, complemented)
                        for complemented in ((False, True) if decided is None else (decided,))
                    )
                ]
                for output, own, decided in zip(outputs, cells, decisions, strict=True)
            ]
        )

    return feasible


def ties_of(device: Device, cells: Sequence[Sequence[Cell]]) -> Ties | None:
    """What `tied_polarities` depends on beside the outputs: equal for devices that tie them alike.

    Args:
        device: Whose cells.
        cells: For each output the cells that it could have.
    """
    if not _differ(device):
        return None
    takers = {
        cell.pin: tuple(j for j, own in enumerate(cells) if cell in own) for cell in device.cells
    }
    return tuple(sorted((_offer(cell), takers[cell.pin]) for cell in device.cells))


def _differ(device: Device) -> bool:
    return len({_offer(cell) for cell in device.cells}) > 1


def _offer(cell: Cell) -> tuple[str, ...]:
    return tuple(sorted({mode.pin for mode in cell.modes}))
