"""How many product terms the enables of three-state outputs need, as sums of their own."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from pla.logic.function import Function
from pla.logic.minimize import Minimum, minimize
from pla.logic.phases import Polarity
from pla.report.notation import product
from pla.report.table import Table
from pla.report.text import one_line
from pla.wording import listed

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.behaviour.model import Behaviour, Enabling

__all__ = [
    "EnableSum",
    "enable_sums",
    "enables_document",
    "enables_table",
    "folded_sentence",
    "smallest_sum",
]


@dataclass(frozen=True, slots=True)
class EnableSum:
    """The smallest sum for the enable of some outputs.

    Attributes:
        outputs: Names of the outputs that are switched together.
        text: The enable as written.
        minimum: Its terms; the one output is true, as the enable row of a cell is.
    """

    outputs: tuple[str, ...]
    text: str
    minimum: Minimum


def enable_sums(behaviour: Behaviour) -> tuple[EnableSum, ...]:
    """For each enable in order of the outputs; outputs of one declaration share one."""
    names: dict[int, list[str]] = {}
    enables: dict[int, Enabling] = {}
    for output in behaviour.outputs:
        if output.enable is not None:
            names.setdefault(id(output.enable), []).append(output.name)
            enables[id(output.enable)] = output.enable
    n = len(behaviour.inputs)
    return tuple(
        EnableSum(
            tuple(names[key]),
            enable.text,
            smallest_sum(enable, n),
        )
        for key, enable in enables.items()
    )


def smallest_sum(switch: Enabling, n_inputs: int) -> Minimum:
    """The smallest sum that is 1 while something is switched on."""
    function = Function.of_outputs(n_inputs, [(switch.on, switch.off)])
    return minimize(function, [Polarity(True, False)])


def enables_table(behaviour: Behaviour, sums: tuple[EnableSum, ...]) -> Table:
    """For each enable its smallest sum."""
    rows = tuple(
        (
            ", ".join(found.outputs),
            one_line(found.text),
            f"{'' if found.minimum.proven else 'at most '}{found.minimum.count}",
            " + ".join(product(cube, behaviour.input_names) for cube in found.minimum.cover) or "0",
        )
        for found in sums
    )
    return Table(
        "Enables",
        ("output", "drives its pin while", "terms", "as the smallest sum"),
        rows,
        aligned="llrl",
        wrapped=(0, 1, 3),
        remarks=(
            (
                "These terms are not among the product terms above. A cell with an enable row "
                "takes one term; an enable of more terms has to be made by a cell and fed back."
            ),
        ),
    )


def enables_document(behaviour: Behaviour, sums: tuple[EnableSum, ...]) -> dict[str, Any]:
    """What ``terms --json`` adds for a design with three-state outputs."""
    if not sums:
        return {}
    return {
        "enables": {
            name: {
                "text": found.text,
                "terms": found.minimum.count,
                "proven": found.minimum.proven,
                "sum": [cube.text(len(behaviour.inputs)) for cube in found.minimum.cover],
            }
            for found in sums
            for name in found.outputs
        }
    }


def folded_sentence(behaviour: Behaviour) -> Iterator[str]:
    """Which signals are not seen in the terms."""
    names = [inner.name for inner in behaviour.inner]
    if names:
        word, them = ("signal is", "it") if len(names) == 1 else ("signals are", "them")
        yield f"The inner {word} folded into the sums that name {them}: {listed(names)}."
