"""What equations mean: from a tree to the input combinations where it is 1 and where it is 0.

A value is a pair of covers, so complement is a swap and no 2^n combinations are listed. Both covers
together need not hold everything: what a named output leaves open stays open.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.behaviour.problem import Problem
from pla.behaviour.syntax import Comparison, Constant, Gate, Node, Number, Reference, references
from pla.behaviour.values import check_boundary, granule_span, number_in, span_cubes
from pla.logic import algebra
from pla.logic.cubes import Cover, Cube
from pla.numerals import parse_number

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator

    from pla.behaviour.signals import Field, Signals, Wanted
    from pla.behaviour.values import Masks

__all__ = ["Sets", "check_tree", "evaluate", "granule_points", "named_bits"]

Sets = tuple[Cover, Cover]
"""Single-output covers: where the value is 1, where it is 0."""

_MOST_CUBES = 1 << 17


def check_tree(tree: Node, signals: Signals, wanted: Wanted | None = None) -> list[Problem]:
    """Everything in a tree that cannot be meant, with offsets; in order of the text.

    Args:
        tree: The equation.
        signals: What is declared.
        wanted: ``outside`` if only inputs from outside may be named.
    """
    found: list[Problem] = []
    _check(tree, signals, wanted, found)
    return sorted(found, key=lambda p: p.offset)


def named_bits(tree: Node, signals: Signals) -> dict[int, int]:
    """Described bits that a checked tree names, by position, and where each is named first."""
    found: dict[int, int] = {}
    for reference in references(tree):
        field = _field(reference, signals, None)
        if not field.is_input:
            for bit in field.bits:
                if bit is not None:
                    found.setdefault(bit, reference.start)
    return found


def granule_points(tree: Node, signals: Signals) -> Iterator[tuple[int, str]]:
    """Comparisons of a partial bus with a single number: (offset, what the number stands for)."""
    if isinstance(tree, Gate):
        for item in tree.items:
            yield from granule_points(item, signals)
    elif isinstance(tree, Comparison) and tree.operator in ("==", "!="):
        field = _field(tree.reference, signals, None)
        if field.unreached:
            first, last = granule_span(field, number_in(field, tree.first.text), tree.first.text)
            yield tree.first.start, f"0x{first:X}..0x{last:X}"


def evaluate(tree: Node, signals: Signals, output_sets: Callable[[int], Sets]) -> Sets:
    """The value of a checked tree over all inputs.

    Args:
        tree: A tree without problems.
        signals: What is declared.
        output_sets: The value of an output or inner signal, by position.

    Raises:
        Problem: If the value needs too many cubes.
    """
    n = signals.n_inputs
    if isinstance(tree, Gate):
        values = [evaluate(item, signals, output_sets) for item in tree.items]
        return _combine(n, tree.operator, values)
    if isinstance(tree, Constant):
        everything, nothing = Cover.universe(n), Cover.of(n)
        return (everything, nothing) if tree.number.text == "1" else (nothing, everything)
    if isinstance(tree, Comparison):
        return _compare(tree, signals, output_sets)
    field = _field(tree, signals, None)
    bit = field.bits[0]
    if bit is None:  # pragma: no cover - refused by Signals.select
        return Cover.of(n), Cover.universe(n)
    if not field.is_input:
        return output_sets(bit)
    return Cover.of(n, [Cube(1 << bit, 0)]), Cover.of(n, [Cube(0, 1 << bit)])


def _field(reference: Reference, signals: Signals, wanted: Wanted | None) -> Field:
    high, low = (None if n is None else _bit_number(n) for n in (reference.high, reference.low))
    return signals.select(reference.name, high, low, wanted=wanted)


def _bit_number(number: Number) -> int:
    try:
        return parse_number(number.text)
    except ValueError as fault:
        raise Problem(
            "NUMBER", f"{number.text!r} is {fault}, expected the number of a bit", None
        ) from None


def _check(tree: Node, signals: Signals, wanted: Wanted | None, found: list[Problem]) -> None:
    if isinstance(tree, Gate):
        for item in tree.items:
            _check(item, signals, wanted, found)
    elif isinstance(tree, Constant):
        if tree.number.text not in ("0", "1"):
            found.append(
                Problem(
                    "CONSTANT",
                    f"found the number {tree.number.text!r} where one bit is wanted, "
                    "the constants are 0 and 1",
                    "a number stands behind a comparison: step == 7",
                    offset=tree.number.start,
                )
            )
    elif isinstance(tree, Comparison):
        field = _checked_field(tree.reference, signals, wanted, found)
        if field is not None:
            _check_comparison(tree, field, found)
    else:
        field = _checked_field(tree, signals, wanted, found)
        if field is not None and not field.is_bit:
            found.append(
                Problem(
                    "BUS-AS-BIT",
                    f"{field.name!r} has {field.width} bits where one bit is wanted",
                    f"name a bit, such as {tree.name}[{tree.low.text if tree.low else 0}], "
                    f"or compare: {field.name} == 0",
                    offset=tree.start,
                )
            )


def _checked_field(
    reference: Reference, signals: Signals, wanted: Wanted | None, found: list[Problem]
) -> Field | None:
    try:
        return _field(reference, signals, wanted)
    except Problem as problem:
        hint = problem.hint
        if reference.name.lower() in ("and", "or", "xor", "not", "in"):
            hint = f"operators are written in small letters: {reference.name.lower()}"
        found.append(
            Problem(
                problem.code, problem.message, hint, offset=reference.start, known=problem.known
            )
        )
        return None


def _check_comparison(tree: Comparison, field: Field, found: list[Problem]) -> None:
    if field.is_bit:
        found.append(
            Problem(
                "BIT-COMPARED",
                f"{field.name!r} is one bit, expected a bus or part before {tree.operator!r}",
                f"write {field.name} or {field.name}'",
                offset=tree.reference.start,
            )
        )
        return
    numbers = [tree.first] if tree.operator != "in" else [tree.first, tree.last]
    values = []
    for number in numbers:
        try:
            values.append(number_in(field, number.text))
        except Problem as problem:
            found.append(_moved(problem, number.start))
    if len(values) < len(numbers):
        return
    if values[0] > values[-1]:
        found.append(
            Problem(
                "RANGE-REVERSED",
                f"the range {tree.first.text}..{tree.last.text} runs backwards",
                f"write {tree.last.text}..{tree.first.text}",
                offset=tree.first.start,
            )
        )
        return
    # "<= 7" and "> 7" part the numbers behind 7, all others in front of it.
    behind = {"<=": 0, ">": 0, "in": 1}.get(tree.operator)
    for index, (number, value) in enumerate(zip(numbers, values, strict=True)):
        try:
            check_boundary(field, value + (index == behind), number.text)
        except Problem as problem:
            found.append(_moved(problem, number.start))


def _moved(problem: Problem, offset: int) -> Problem:
    return Problem(problem.code, problem.message, problem.hint, offset=offset)


def _compare(tree: Comparison, signals: Signals, output_sets: Callable[[int], Sets]) -> Sets:
    field = _field(tree.reference, signals, None)
    first, last = number_in(field, tree.first.text), number_in(field, tree.last.text)
    top = (1 << field.width) - 1
    if tree.operator in ("==", "!="):
        first, last = granule_span(field, first, tree.first.text)
    elif tree.operator == "<":
        first, last = 0, first - 1
    elif tree.operator == "<=":
        first = 0
    elif tree.operator == ">":
        first, last = first + 1, top
    elif tree.operator == ">=":
        last = top
    if first > last:
        inside, outside = [], span_cubes(field, 0, top)
    else:
        inside = span_cubes(field, first, last)
        outside = span_cubes(field, 0, first - 1) + span_cubes(field, last + 1, top)
    if tree.operator == "!=":
        inside, outside = outside, inside
    if field.is_input:
        n = signals.n_inputs
        return (
            Cover.of(n, (Cube(*masks) for masks in inside)),
            Cover.of(n, (Cube(*masks) for masks in outside)),
        )
    on = _any_of(inside, signals.n_inputs, output_sets)[0]
    off = _any_of(outside, signals.n_inputs, output_sets)[0]
    return on, off


def _any_of(cubes: list[Masks], n: int, output_sets: Callable[[int], Sets]) -> Sets:
    """The value of a sum of products of outputs."""
    products = []
    for ones, zeros in cubes:
        literals = []
        for bit in range((ones | zeros).bit_length()):
            if ones >> bit & 1:
                literals.append(output_sets(bit))
            elif zeros >> bit & 1:
                literals.append(output_sets(bit)[::-1])
        products.append(_combine(n, "and", literals))
    return _combine(n, "or", products)


def _combine(n: int, operator: str, values: list[Sets]) -> Sets:
    everything, nothing = Cover.universe(n), Cover.of(n)
    if operator == "not":
        return values[0][1], values[0][0]
    if operator == "xor":
        on, off = nothing, everything
        for a, b in values:
            on, off = (
                _union(n, _meet(on, b), _meet(off, a)),
                _union(n, _meet(on, a), _meet(off, b)),
            )
        return on, off
    if operator == "or":
        off, on = _combine(n, "and", [(b, a) for a, b in values])
        return on, off
    on = everything
    for a, _ in values:
        on = _meet(on, a)
    return on, _union(n, *(b for _, b in values))


def _meet(a: Cover, b: Cover) -> Cover:
    if len(a) * len(b) > _MOST_CUBES**2:
        raise _too_large()
    return _bounded(algebra.intersection(a, b))


def _union(n: int, *covers: Cover) -> Cover:
    return _bounded(algebra.union(n, *covers))


def _bounded(cover: Cover) -> Cover:
    if len(cover) > _MOST_CUBES:
        raise _too_large()
    return cover


def _too_large() -> Problem:
    return Problem(
        "EQUATION-LARGE",
        f"the equation needs more than {_MOST_CUBES} cubes for its 1s or its 0s",
        "describe the output by a table, or split the equation over several outputs",
    )
