"""The behaviour of an exercised part as a design file.

Each output is the sum of its rows. What a row reads of feedback is not said: a row is 1 at one
step only, at which the feedback has one value; so the row stands there without it, or not at all.
Hence no output names another, and there is no ring even where the array has one that never closes
at once.
"""

from __future__ import annotations

import json
from typing import TYPE_CHECKING

from pla.exercise.readings import worth
from pla.fuses.recover import recover

if TYPE_CHECKING:
    from collections.abc import Iterable

    from pla.device.model import Line
    from pla.exercise.program import Exercised
    from pla.exercise.words import Word
    from pla.fuses.evaluate import Evaluated
    from pla.fuses.recover import Row, Sum

__all__ = ["exercise_design"]

_WIDTH = 96

Product = frozenset[tuple[int, bool]]
"""Pins and the levels at which it is 1."""


def exercise_design(exercised: Exercised, number: int) -> str | None:
    """A design file with an input or output ``pinN`` for each pin.

    Args:
        exercised: The part.
        number: Which part of the exercise it is, from 1.

    Returns:
        The file; ``None`` if no output is free of feedback in this way, so that sums of products
        of inputs cannot say what is expected at every step.
    """
    part = exercised.part
    outside = set.intersection(*(set(step.levels) for step in part.steps))
    folding = _Folding(exercised, outside)
    outputs = {}
    for sum_ in recover(part.device, part.fuses).sums:
        pin, mode = sum_.cell.pin, sum_.mode
        if pin is None or pin in outside or mode is None:
            continue
        products = folding.sum(sum_)
        enable = folding.enable(sum_)
        if products is None or enable is False:
            return None
        inverted = mode.pin == "sum'"
        if not folding.agrees(pin, products, enable, inverted=inverted):
            return None
        outputs[pin] = (products, enable, inverted)
    if not outputs:
        return None
    return _written(exercised, number, outputs)


class _Folding:
    def __init__(self, exercised: Exercised, outside: set[int]) -> None:
        self.exercised, self.outside = exercised, outside
        self.steps = exercised.part.steps
        self.realised, self.found = worth(exercised.part.device, exercised.part)

    def sum(self, sum_: Sum) -> list[Product] | None:
        found = [self.product(self.realised.rows[number]) for number in sum_.rows or ()]
        return (
            None if None in found else list(dict.fromkeys(p for own in found if own for p in own))
        )

    def product(self, row: Row) -> list[Product] | None:
        """What is left of a row, as no product or one; ``None`` if that depends on the step."""
        if row.dead:
            return []
        own = frozenset(
            (int(line.of), not line.complement)
            for line in row.lines
            if line.kind == "pin" and line.of in self.outside
        )
        rest = [line for line in row.lines if line.kind != "pin" or line.of not in self.outside]
        if not rest:
            return [own]
        high = low = -1 if not row.floating else 0
        low = 0
        for line in rest:
            one, zero = _carried(self.found, self.exercised, line)
            high &= one
            low |= zero
        asked = [k for k in range(len(self.steps)) if self.is_one(own, k)]
        if all(low >> k & 1 for k in asked):
            return []
        return [own] if all(high >> k & 1 for k in asked) else None

    def is_one(self, product: Product, step: int) -> bool:
        return all(self.steps[step].levels[pin] == level for pin, level in product)

    def enable(self, sum_: Sum) -> Product | bool | None:
        """When a pin is driven: ``None`` always, ``False`` if no product of inputs says it."""
        if sum_.mode is None:
            return False
        enable = sum_.mode.enable
        if enable.row is not None:
            row = self.realised.rows[enable.row]
            found = None if row.dead else self.product(row)
            return found[0] if found else False
        if enable.pin is not None:
            return frozenset([(enable.pin, not enable.active_low)])
        return None

    def agrees(
        self, pin: int, products: list[Product], enable: Product | bool | None, *, inverted: bool
    ) -> bool:
        """Whether this is what is expected at every step."""
        for k in range(len(self.steps)):
            on = not isinstance(enable, frozenset) or self.is_one(enable, k)
            value = any(self.is_one(product, k) for product in products) != inverted
            sign = "Z" if not on else "H" if value else "L"
            expected = self.exercised.expected[pin][k]
            if expected in "HLZ" and expected != sign:
                return False
        return True


def _carried(found: Evaluated[Word], exercised: Exercised, line: Line) -> Word:
    if line.kind == "sum":
        high, low = found.sums[line.of]
    else:
        high, low = found.levels.get(int(line.of), (0, 0))
    return (low, high) if line.complement else (high, low)


def _written(
    exercised: Exercised,
    number: int,
    outputs: dict[int, tuple[list[Product], Product | bool | None, bool]],
) -> str:
    device = exercised.part.device
    used: set[int] = set()
    for products, enable, _ in outputs.values():
        used.update(pin for product in products for pin, _ in product)
        if isinstance(enable, frozenset):
            used.update(pin for pin, _ in enable)
    lines = [
        f"# What part {number} of the exercise of {device.name} does, pin by pin, at the steps of",
        "# its table. Feedback is folded in.",
        f"name = {json.dumps(f'Exercise of {device.name}, part {number}', ensure_ascii=False)}",
        "",
        "[inputs]",
        *(f"pin{pin} = 1" for pin in sorted(used)),
        "",
        "[outputs]",
    ]
    for pin, (_, enable, _) in sorted(outputs.items()):
        if isinstance(enable, frozenset):
            lines.append(f'pin{pin} = {{ enable = "{_literals(enable)}" }}')
        else:
            lines.append(f"pin{pin} = 1")
    lines += ["", "[logic]"]
    for pin, (products, _, inverted) in sorted(outputs.items()):
        lines += _equation(pin, list(map(_literals, products)), inverted=inverted)
    lines += ["", f"[place.{json.dumps(device.name, ensure_ascii=False)}]"]
    lines += [f"pin{pin} = {pin}" for pin in sorted({*used, *outputs})]
    return "\n".join(lines) + "\n"


def _literals(product: Iterable[tuple[int, bool]]) -> str:
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
