"""Which outputs share which terms, and what that saves."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.report.notation import plural, product
from pla.report.table import Table

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.behaviour.model import Behaviour
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


def term_table(behaviour: Behaviour, minimum: Minimum) -> Table:
    """For each term its product, its literals and the outputs that share it."""
    names = behaviour.output_names
    rows = tuple(
        (
            str(number),
            product(cube, behaviour.input_names),
            str(cube.literals),
            str(cube.outputs.bit_count()),
            " ".join(name for j, name in enumerate(names) if cube.outputs >> j & 1),
        )
        for number, cube in enumerate(minimum.cover, 1)
    )
    return Table(
        "Term sharing",
        ("term", "product", "literals", "shared by", "in the sums of"),
        rows,
        aligned="rlrrl",
        wrapped=(1, 4),
        remarks=("There is no product term: every sum is 0.",) if not rows else (),
    )


def output_table(behaviour: Behaviour, minimum: Minimum, alone: Sequence[Count]) -> Table:
    """For each output its terms, and what it would need by itself."""
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
    cover = minimum.cover
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
            (
                f"{plural(cover.links, 'connection')}: {plural(cover.literals, 'literal')} and "
                f"{plural(cover.links - cover.literals, 'OR link')}."
            ),
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
