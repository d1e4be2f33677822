"""Which outputs share which terms, and what that saves."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.report.gates import own_gates
from pla.report.notation import plural, product
from pla.report.table import Table
from pla.report.verdict import connections
from pla.wording import listed

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.behaviour.model import Behaviour
    from pla.fitting.model import Plan
    from pla.fitting.prices import Count
    from pla.logic.cubes import Cover
    from pla.logic.minimize import Minimum

__all__ = ["Share", "output_table", "shares", "term_table"]


@dataclass(frozen=True, slots=True)
class Share:
    """The terms of one output.

    Attributes:
        terms: Numbers of its terms, from 1.
        private: Numbers of those that no other output uses.
    """

    terms: tuple[int, ...]
    private: tuple[int, ...]


def shares(cover: Cover, outputs: int) -> tuple[Share, ...]:
    """For each output in order, the terms that feed it."""
    masks = list(enumerate(cover.outputs.tolist(), 1))
    return tuple(
        Share(
            tuple(number for number, mask in masks if mask >> j & 1),
            tuple(number for number, mask in masks if mask == 1 << j),
        )
        for j in range(outputs)
    )


def term_table(behaviour: Behaviour, minimum: Minimum, own: Sequence[bool] = ()) -> Table:
    """For each term its product, its literals and the outputs that share it.

    Args:
        behaviour: Whose terms they are.
        minimum: The terms.
        own: For each output whether its OR gate has terms of its own; by default none has.
    """
    names = behaviour.output_names
    apart = bool(own) and all(own)
    rows = tuple(
        (
            str(number),
            product(cube, behaviour.input_names),
            str(cube.literals),
            *(() if apart else (str(cube.outputs.bit_count()),)),
            " ".join(name for j, name in enumerate(names) if cube.outputs >> j & 1),
        )
        for number, cube in enumerate(minimum.cover, 1)
    )
    none = ("There is no product term: every sum is 0.",) if not rows else ()
    return Table(
        "Terms" if apart else "Term sharing",
        (
            *("term", "product", "literals"),
            *(("in the sum of",) if apart else ("shared by", "in the sums of")),
        ),
        rows,
        aligned="rlrl" if apart else "rlrrl",
        wrapped=(1, 3 if apart else 4),
        remarks=(*none, *_twice(behaviour, minimum, own)),
    )


def _twice(behaviour: Behaviour, minimum: Minimum, own: Sequence[bool]) -> Iterator[str]:
    """Products that sharing could not save."""
    if not any(own):
        return
    names = [name for name, alone in zip(behaviour.output_names, own, strict=True) if alone]
    whose = "Each sum has" if all(own) else f"The sum of {listed(names)} has"
    if len(names) > 1 and not all(own):
        whose = f"The sums of {listed(names)} have each"
    products = [(cube.ones, cube.zeros) for cube in minimum.cover]
    again = len(products) - len(set(products))
    more = (
        f" Here {plural(again, 'row repeats', 'rows repeat')} a product that another row has."
        if again
        else ""
    )
    yield (
        f"{whose} terms of its own: a product that stands in two sums is programmed twice.{more}"
    )


def output_table(
    behaviour: Behaviour, minimum: Minimum, alone: Sequence[Count], plan: Plan | None = None
) -> Table:
    """For each output its terms, and what it would need by itself or what its cell has.

    Args:
        behaviour: Whose terms they are.
        minimum: The terms.
        alone: What each output needs if it is minimized by itself.
        plan: Tells which outputs have an OR gate of their own.
    """
    own = own_gates(plan) if plan else ()
    if plan is not None and all(own):
        return _own_table(behaviour, minimum, alone, plan)
    found = shares(minimum.cover, len(behaviour.outputs))
    rows = tuple(
        (
            output.name,
            "C" if complemented else "T",
            str(len(share.terms)),
            str(len(share.private)),
            str(len(share.terms) - len(share.private)),
            f"{'' if count.proven else 'at most '}{count.terms}",
            " ".join(map(str, share.terms)) or "none",
        )
        for output, complemented, share, count in zip(
            behaviour.outputs, minimum.complemented, found, alone, strict=True
        )
    )
    return Table(
        "Terms of each output",
        ("output", "sum", "terms", "private", "shared", "alone", "numbers of the terms"),
        rows,
        aligned="llrrrrl",
        wrapped=(0, 6),
        remarks=(
            (
                "Sum T: the asserted function; C: its complement. Private terms are in no other "
                "sum. Alone: what the output would need if it were minimized by itself."
            ),
            _saving(minimum, alone),
            f"{connections(minimum, own)}.",
        ),
    )


def _own_table(behaviour: Behaviour, minimum: Minimum, alone: Sequence[Count], plan: Plan) -> Table:
    rows = []
    for output, placed, share, count in zip(
        behaviour.outputs,
        plan.outputs,
        shares(minimum.cover, len(behaviour.outputs)),
        alone,
        strict=True,
    ):
        used, has = len(share.terms), len(placed.mode.terms)
        sense = "C" if placed.complemented else "T"
        fewest = f"{'' if count.proven else 'at most '}{count.terms}"
        numbers = " ".join(map(str, share.terms)) or "none"
        rows.append((output.name, sense, str(used), str(has), str(has - used), fewest, numbers))
    return Table(
        "Terms of each output",
        ("output", "sum", "terms", "cell has", "spare", "fewest", "numbers of the terms"),
        tuple(rows),
        aligned="llrrrrl",
        wrapped=(0, 6),
        remarks=(
            (
                "Sum T: the asserted function; C: its complement. Fewest: what the output needs in "
                "the best polarity that it may have."
            ),
            f"{connections(minimum, own_gates(plan))}.",
        ),
    )


def _saving(minimum: Minimum, alone: Sequence[Count]) -> str:
    apart = sum(count.terms for count in alone)
    most = "" if all(count.proven for count in alone) else "at most "
    saved = apart - minimum.count
    first = (
        f"Minimized one by one the outputs need {most}{plural(apart, 'term')}, together they need "
        f"{minimum.count}"
    )
    return f"{first}: sharing saves {most}{saved}." if saved else f"{first}: sharing saves nothing."
