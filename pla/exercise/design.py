"""The behaviour of an exercised part as a design file.

Each output is the sum of its rows. What a row reads of feedback is folded in: mostly the row is 1
at one step only, at which the feedback has one value, so that the row stands there without it, or
not at all; a row of which this cannot be said is written as the steps at which it is 1. Hence no
output names another, and there is no ring even where the array has one that never closes at once.
"""

from __future__ import annotations

import json
from dataclasses import dataclass
from typing import TYPE_CHECKING, TypeAlias

from pla.errors import Diagnostic, InternalError
from pla.exercise.readings import worth

if TYPE_CHECKING:
    from collections.abc import Mapping

    from pla.device.model import Enable, Line
    from pla.exercise.program import Exercised
    from pla.exercise.words import Word
    from pla.fuses.evaluate import Evaluated
    from pla.fuses.recover import Row, Sum

__all__ = ["exercise_design"]

_WIDTH = 96
# What holds of so many input combinations, `check` can still say in seconds.
_INPUTS = 16

Product: TypeAlias = "frozenset[tuple[int, bool]]"
"""Pins and the levels at which it is 1."""


def exercise_design(exercised: Exercised, number: int) -> str | None:
    """A design file with an input or output ``pinN`` for each pin.

    Args:
        exercised: The part.
        number: Which part of the exercise it is, from 1.

    Returns:
        The file; ``None`` if no pin is ever driven, or there are too many inputs.

    Raises:
        InternalError: If it is not what is expected at every step.
    """
    folding = _Folding(exercised)
    outputs = {}
    for sum_ in folding.realised.sums:
        pin, mode = sum_.cell.pin, sum_.mode
        if pin is None or mode is None or mode.pin == "none":
            continue
        own = _Output(folding.sum(sum_), folding.enable(mode.enable), mode.pin == "sum'")
        if own.enable != ():
            outputs[pin] = own
    for pin, own in outputs.items():
        for k, step in enumerate(exercised.part.steps):
            sign = exercised.expected[pin][k]
            if sign in "HLZ" and sign != own.reading(step.levels):
                message = (
                    f"the design of the exercise is not what step {k + 1} expects at pin {pin}"
                )
                raise InternalError([Diagnostic("NOT-EQUAL", message)])
    if not outputs or len(folding.outside) > _INPUTS:
        return None
    return _written(exercised, number, outputs)


@dataclass(frozen=True, slots=True)
class _Output:
    """What a pin shows: a sum or its complement, while its enable is 1 (``None``: always)."""

    products: tuple[Product, ...]
    enable: tuple[Product, ...] | None
    inverted: bool

    def reading(self, levels: Mapping[int, bool]) -> str:
        if self.enable is not None and not _is_one(self.enable, levels):
            return "Z"
        return "H" if _is_one(self.products, levels) != self.inverted else "L"


def _is_one(products: tuple[Product, ...], levels: Mapping[int, bool]) -> bool:
    return any(all(levels[pin] == level for pin, level in product) for product in products)


class _Folding:
    """Rows as products of the pins that are set at every step."""

    def __init__(self, exercised: Exercised) -> None:
        part = exercised.part
        self.steps = part.steps
        self.outside = set.intersection(*(set(step.levels) for step in part.steps))
        self.realised, self.found = worth(part.device, part)

    def sum(self, sum_: Sum) -> tuple[Product, ...]:
        rows = [self.realised.rows[number] for number in sum_.rows or ()]
        return tuple(dict.fromkeys(product for row in rows for product in self.row(row)))

    def enable(self, enable: Enable) -> tuple[Product, ...] | None:
        if enable.row is not None:
            return self.row(self.realised.rows[enable.row])
        if enable.pin is not None:
            return (frozenset([(enable.pin, not enable.active_low)]),)
        return None

    def row(self, row: Row) -> tuple[Product, ...]:
        """What is left of a row: no product, one, or one for each step at which it is 1."""
        if row.dead or row.floating:
            return ()
        own, rest = set(), []
        for line in row.lines:
            if line.kind == "pin" and line.of in self.outside:
                own.add((int(line.of), not line.complement))
            else:
                rest.append(line)
        product = frozenset(own)
        if not rest:
            return (product,)
        high, low = -1, 0
        for line in rest:
            one, zero = _carried(self.found, line)
            high &= one
            low |= zero
        asked = [k for k, s in enumerate(self.steps) if _is_one((product,), s.levels)]
        ones = [k for k in asked if high >> k & 1]
        if ones and not any(low >> k & 1 for k in asked):
            return (product,)
        return tuple(
            frozenset((pin, self.steps[k].levels[pin]) for pin in self.outside) for k in ones
        )


def _carried(found: Evaluated[Word], line: Line) -> Word:
    if line.kind == "sum":
        high, low = found.sums[line.of]
    else:
        high, low = found.levels.get(int(line.of), (0, 0))
    return (low, high) if line.complement else (high, low)


def _written(exercised: Exercised, number: int, outputs: Mapping[int, _Output]) -> str:
    device = exercised.part.device
    used = {
        pin
        for own in outputs.values()
        for product in (*own.products, *(own.enable or ()))
        for pin, _ in product
    }
    lines = [
        f"# What part {number} of the exercise of {device.name} does at the steps of its table,",
        "# pin by pin. Feedback is folded in.",
        f"name = {json.dumps(f'Exercise of {device.name}, part {number}', ensure_ascii=False)}",
        "",
        "[inputs]",
        *(f"pin{pin} = 1" for pin in sorted(used)),
        "",
        "[outputs]",
    ]
    for pin, own in sorted(outputs.items()):
        if own.enable is None:
            lines.append(f"pin{pin} = 1")
        else:
            lines.append(f'pin{pin} = {{ enable = "{" + ".join(map(_literals, own.enable))}" }}')
    lines += ["", "[logic]"]
    for pin, own in sorted(outputs.items()):
        lines += _equation(pin, list(map(_literals, own.products)), inverted=own.inverted)
    lines += ["", f"[place.{json.dumps(device.name, ensure_ascii=False)}]"]
    lines += [f"pin{pin} = {pin}" for pin in sorted({*used, *outputs})]
    return "\n".join(lines) + "\n"


def _literals(product: Product) -> str:
    return " ".join(f"pin{pin}" + ("" if level else "'") for pin, level in sorted(product)) or "1"


def _equation(pin: int, terms: list[str], *, inverted: bool) -> list[str]:
    if not terms:
        return [f'pin{pin} = "{int(inverted)}"']
    opening, closing = ("(", ")'") if inverted else ("", "")
    text = f"{opening}{' + '.join(terms)}{closing}"
    if len(text) + 12 <= _WIDTH:
        return [f'pin{pin} = "{text}"']
    first, *rest = terms
    body = [f"    {opening}{first}", *(f"  + {term}" for term in rest)]
    return [f'pin{pin} = """', *body[:-1], f'{body[-1]}{closing}"""']
