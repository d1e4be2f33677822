"""What each output will really do where the design leaves it open."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.logic import algebra
from pla.report.notation import case, groups_of, plural
from pla.report.table import Table

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.behaviour.model import Behaviour
    from pla.fitting.prices import SafetyPrice
    from pla.logic.cubes import Cover
    from pla.logic.minimize import Minimum

__all__ = ["Settled", "audit", "audit_table"]

_REASONS = {
    "never": "impossible",
    "others": "others",
    "x": "x in a row",
    "dont_care": "dont_care",
    "elsewhere": "elsewhere",
}


@dataclass(frozen=True, slots=True)
class Settled:
    """Input combinations that the design leaves open, and what an output does there.

    Attributes:
        output: Index of the output.
        reason: Why it is open (see `pla.behaviour.model.DontCareSource`).
        value: Asserted value that the output really has.
        cubes: The combinations, as cubes without common ones.
        size: How many.
    """

    output: int
    reason: str
    value: int
    cubes: Cover
    size: int


def audit(behaviour: Behaviour, minimum: Minimum) -> tuple[Settled, ...]:
    """Every open combination of every output once, by output, source and value."""
    return tuple(_settled(behaviour, minimum))


def _settled(behaviour: Behaviour, minimum: Minimum) -> Iterator[Settled]:
    for j in range(len(behaviour.outputs)):
        sum_ = minimum.cover.of_output(j)
        for source in behaviour.dont_cares:
            open_ = source.cubes.of_output(j)
            if not len(open_):
                continue
            inside = algebra.intersection(open_, sum_)
            outside = algebra.difference(open_, sum_)
            if minimum.complemented[j]:
                inside, outside = outside, inside
            for value, cubes in ((0, outside), (1, inside)):
                if len(cubes):
                    apart = _disjoint(cubes)
                    n = apart.n_inputs
                    size = sum(1 << (n - cube.literals) for cube in apart)
                    yield Settled(j, source.reason, value, apart, size)


def _disjoint(cover: Cover) -> Cover:
    """The same combinations as cubes that have none in common, in order."""
    return algebra.complement(algebra.complement(cover)).merged()


def audit_table(
    behaviour: Behaviour, found: Sequence[Settled], prices: Sequence[SafetyPrice], count: int
) -> Table:
    """The audit with its prices.

    Args:
        behaviour: The design.
        found: What `audit` found.
        prices: What demanded values cost.
        count: Terms of the design as it is.
    """
    groups = groups_of(behaviour.input_names)
    rows = [
        (
            behaviour.outputs[s.output].name,
            _REASONS[s.reason],
            str(s.value),
            case(cube, groups),
            str(1 << (cube_n - cube.literals)),
        )
        for s in found
        for cube_n in (s.cubes.n_inputs,)
        for cube in s.cubes
    ]
    return Table(
        "Don't-care audit",
        ("output", "left open by", "will be", "at inputs", "cases"),
        tuple(rows),
        lead=(
            "Don't cares are freedom, not safety. The design leaves these input combinations "
            "open; the terms settle them, and this is what each output will really do there. "
            "Asserted values.",
        )
        if rows
        else (
            "Don't cares are freedom, not safety. This design leaves nothing open: every output "
            "has a demanded value for every input combination.",
        ),
        remarks=tuple(_price(behaviour, price, count) for price in prices),
        aligned="lllrr".replace("rr", "lr"),
        repeated=3,
    )


def _price(behaviour: Behaviour, price: SafetyPrice, count: int) -> str:
    name = behaviour.outputs[price.output].name
    cost = count - price.freed.terms
    if cost > 0:
        costs = f"costs {'' if price.freed.proven else 'at least '}{plural(cost, 'term')}"
    else:
        costs = "costs no term"
    return (
        f"impossible = {price.demanded} of {name} {costs}: {plural(count, 'term')} with it, "
        f"{price.freed.terms} without."
    )
