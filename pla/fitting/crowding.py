"""Signals that have fewer pins between them than they are."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, TypeAlias

from pla import wording
from pla.fitting.matching import deficient

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

    from pla.fitting.offers import Needs
    from pla.fitting.spots import Resource, Spots

__all__ = ["Choices", "Crowd", "choices_of", "crowd_of", "joined_choices", "listed"]

_LISTED = 12

Choices: TypeAlias = "dict[str, dict[Resource, None]]"
"""For each output and each input that needs a pin, the pins that it could have."""


@dataclass(frozen=True, slots=True)
class Crowd:
    """Signals that have too few pins between them.

    Attributes:
        signals: Which.
        pins: All pins that any of them could have.
    """

    signals: tuple[str, ...]
    pins: tuple[Resource, ...]

    def sentence(self, condition: str = "") -> str:
        """What is wrong; the condition is one that rules out further pins."""
        named = listed(self.signals)
        if not self.pins:
            return f"no cell or pin is left that {named} could have{condition}"
        verb = "has" if len(self.signals) == 1 else "have"
        return (
            f"{named} {verb} only {listed([f'pin {pin}' for pin in self.pins])} to be on"
            f"{condition}: {len(self.signals)} signals, "
            f"{len(self.pins)} place{'s' if len(self.pins) != 1 else ''}"
        )


def choices_of(spots: Spots, inputs: Iterable[int], needs: Needs) -> Choices:
    """Where each signal could be, once it is decided what enable pins carry and so on.

    Args:
        spots: What is decided; nothing is fed back.
        inputs: Inputs that need a pin.
        needs: Literals that terms have of them.
    """
    problem = spots.problem
    found: Choices = {}
    for net in problem.netlist.nets:
        resources: dict[Resource, None] = {}
        for c in problem.polarities(net):
            resources.update(dict.fromkeys(spots.of_net(net, c, {})))
        found[net.name] = resources
    for i in inputs:
        name = problem.netlist.design.inputs[i].name
        if i in spots.carried:
            found[name] = {spots.carried[i]: None}
        else:
            found[name] = dict.fromkeys(spots.of_input(i, needs.get(i, frozenset())))
    return found


def joined_choices(every: Iterable[Choices]) -> Choices:
    """Where each signal could be, whichever way it is decided."""
    joined: Choices = {}
    for choices in every:
        for name, resources in choices.items():
            joined.setdefault(name, {}).update(resources)
    return joined


def crowd_of(choices: Choices) -> Crowd | None:
    """Signals that have too few pins; ``None`` if each can have one of its own."""
    names = list(choices)
    found = deficient([list(resources) for resources in choices.values()])
    if found is None:
        return None
    members, pins = found
    return Crowd(tuple(names[m] for m in sorted(members)), tuple(sorted(pins, key=_order)))


def listed(words: Sequence[str]) -> str:
    """``a, b and c``; no more than a dozen of them."""
    return wording.listed(words, _LISTED)


def _order(pin: Resource) -> tuple[bool, int, str]:
    return not isinstance(pin, int), pin if isinstance(pin, int) else 0, str(pin)
