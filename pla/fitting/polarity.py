"""Which polarities outputs may have where no device limits them."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.logic.phases import Polarity

if TYPE_CHECKING:
    from pla.behaviour.model import Behaviour
    from pla.fitting.model import PolarityWish

__all__ = ["wished_polarities"]


def wished_polarities(behaviour: Behaviour, wish: PolarityWish) -> list[Polarity]:
    """The polarities of every output where no device limits them."""
    return [Polarity(complement=wish == "free")] * len(behaviour.outputs)
