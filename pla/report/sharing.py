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
        private: How many of them no other output uses.
    """

    terms: tuple[int, ...]
    private: int

    @property
    def shared(self) -> int:
        return len(self.terms) - self.private


def shares(cover: Cover, outputs: int) -> tuple[Share, ...]:
    """For each output in order, the terms that feed it."""
    masks = cover.outputs.tolist()
    found = []
    for j in range(outputs):
        own = [k for k, mask in enumerate(masks) if mask >> j & 1]
        private = sum(masks[k] == 1 << j for k in own)
        found.append(Share(tuple(k + 1 for k in own), private))
    return tuple(found)


def term_table(behaviour: Behaviour, minimum: Minimum) -> Table:
    """For each term its product, its literals and the outputs that share it."""
    names = behaviour.output_names
    rows = tuple(
        (
            str(number),
            str(cube.literals),
            str(cube.outputs.bit_count()),
            product(cube, behaviour.input_names),
            ", ".join(name for j, name in enumerate(names) if cube.outputs >> j & 1),
        )
        for number, cube in enumerate(minimum.cover, 1)
    )
    return Table(
        "Term sharing",
        ("term", "literals", "shared by", "product", "in the sums of"),
        rows,
        aligned="rrrll",
    )


def output_table(behaviour: Behaviour, minimum: Minimum, alone: Sequence[Count]) -> Table:
    """For each output its terms, and what it would need by itself."""
    found = shares(minimum.cover, len(behaviour.outputs))
    rows = tuple(
        (
            output.name,
            "C" if complemented else "T",
            str(len(share.terms)),
            str(share.private),
            str(share.shared),
            f"{'' if count.proven else 'at most '}{count.terms}",
            " ".join(map(str, share.terms)) or "none",
        )
        for output, complemented, share, count in zip(
            behaviour.outputs, minimum.complemented, found, alone, strict=True
        )
    )
    return Table(
        "Terms of each output",
        ("output", "sum", "terms", "private", "shared", "alone", "which"),
        rows,
        lead=(
            "Private terms feed this output only. Alone: the terms that the output would need if "
            "it were minimized by itself.",
        ),
        remarks=(_saving(minimum, alone),),
        aligned="llrrrrl",
    )


def _saving(minimum: Minimum, alone: Sequence[Count]) -> str:
    apart = sum(count.terms for count in alone)
    saved = apart - minimum.count
    most = "" if all(count.proven for count in alone) else "at most "
    return (
        f"Minimized one by one the outputs need {most}{plural(apart, 'term')}; together they need "
        f"{minimum.count}. Sharing saves {most}{saved}."
    )
