"""What ``terms`` says of registers: which values were minimized, and what controls take."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from pla.report.clocked import register_groups
from pla.report.enable_sums import smallest_sum
from pla.report.notation import product
from pla.report.table import Table
from pla.report.text import one_line
from pla.wording import listed

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.behaviour.model import Behaviour, Enabling
    from pla.logic.minimize import Minimum

__all__ = [
    "ControlSum",
    "clocked_sentences",
    "control_sums",
    "controls_document",
    "controls_table",
]


@dataclass(frozen=True, slots=True)
class ControlSum:
    """The smallest sum for the reset or preset of some bits.

    Attributes:
        bits: Names of the bits that it acts on, and whether they become 0 or 1.
        asynchronous: It acts at once.
        text: As written.
        minimum: Its terms; the one output is true, as the control row of a device is.
    """

    bits: tuple[tuple[str, int], ...]
    asynchronous: bool
    text: str
    minimum: Minimum


def control_sums(behaviour: Behaviour) -> tuple[ControlSum, ...]:
    """For each reset and preset in order of the registers; bits that share one stand together."""
    bits: dict[int, list[tuple[str, int]]] = {}
    known: dict[int, tuple[Enabling, bool]] = {}
    for bit in behaviour.registered:
        register = bit.register
        if register is None:  # pragma: no cover - they are registered
            continue
        for control, value, at_once in (
            (register.reset, 0, register.reset_asynchronous),
            (register.preset, 1, register.preset_asynchronous),
        ):
            if control is not None:
                bits.setdefault(id(control), []).append((bit.name, value))
                known[id(control)] = control, at_once
    n = len(behaviour.inputs)
    return tuple(
        ControlSum(tuple(bits[key]), at_once, control.text, smallest_sum(control, n))
        for key, (control, at_once) in known.items()
    )


def clocked_sentences(behaviour: Behaviour) -> Iterator[str]:
    """What the terms of registered signals are, and what was not tried."""
    groups = register_groups(behaviour)
    if not groups:
        return
    yield (
        f"Of {listed([group.name for group in groups])} the next value is minimized, as D "
        "registers take it; the present value is among the inputs."
    )
    other = [g for g in groups if g.register.kind != "D"]
    if other:
        named = listed([f"{group.name} ({group.register.kind})" for group in other])
        yield f"Other registers than D were not tried: {named}."
    free = [machine.name for machine in behaviour.machines if machine.style == "free"]
    if free:
        yield f"Free codes ({listed(free)}) count in binary; no other codes were tried."


def controls_table(behaviour: Behaviour, sums: tuple[ControlSum, ...]) -> Table:
    """For each reset and preset its smallest sum."""
    rows = tuple(
        (
            ", ".join(f"{name} to {value}" for name, value in found.bits),
            "at once" if found.asynchronous else "at the clock",
            one_line(found.text),
            f"{'' if found.minimum.proven else 'at most '}{found.minimum.count}",
            " + ".join(product(cube, behaviour.input_names) for cube in found.minimum.cover) or "0",
        )
        for found in sums
    )
    return Table(
        "Resets and presets",
        ("sets", "when", "while", "terms", "as the smallest sum"),
        rows,
        aligned="lllrl",
        wrapped=(0, 2, 4),
        remarks=(
            (
                "These terms are not among the product terms above. A control row of a device "
                "takes one term."
            ),
        ),
    )


def controls_document(behaviour: Behaviour, sums: tuple[ControlSum, ...]) -> dict[str, Any]:
    """What ``terms --json`` adds for a design with resets or presets."""
    if not sums:
        return {}
    return {
        "controls": [
            {
                "sets": dict(found.bits),
                "when": "asynchronous" if found.asynchronous else "clock",
                "text": found.text,
                "terms": found.minimum.count,
                "proven": found.minimum.proven,
                "sum": [cube.text(len(behaviour.inputs)) for cube in found.minimum.cover],
            }
            for found in sums
        ]
    }
