"""The cells of truth tables."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.behaviour.problem import Problem
from pla.behaviour.values import (
    check_boundary,
    granule_span,
    number_in,
    number_masks,
    pattern_masks,
    span_cubes,
)
from pla.numerals import proposal

if TYPE_CHECKING:
    from pla.behaviour.listing import Values
    from pla.behaviour.signals import Field
    from pla.behaviour.values import Masks

__all__ = ["input_cell", "output_cell", "same_value"]

_OPEN = "-"
_FREE = "x"


def input_cell(field: Field, text: str) -> list[Masks]:
    """The cubes of ``-``, a number, a range ``a..b``, or a ``0b`` pattern with ``-``.

    Raises:
        Problem: For anything else, or what does not fit the field.
    """
    if text == _OPEN:
        return [(0, 0)]
    if text in (_FREE, "X"):
        raise Problem("CELL", "x is for outputs, an input that may be either is -", "write -")
    if text.startswith("0b"):
        head, dots, _ = text.partition("..")
        if not dots:
            return [pattern_masks(field, head, _OPEN)[0]]
    if ".." in text:
        return _range_cubes(field, text)
    if not text[:1].isdigit():
        expected = "0, 1 or -" if field.is_bit else "a number, a range a..b, 0b… or -"
        meant = proposal(text)
        hint = f"did you mean {meant}?" if meant else None
        raise Problem("CELL", f"{text!r} means nothing for {field.name}, expected {expected}", hint)
    return span_cubes(field, *granule_span(field, number_in(field, text), text))


def output_cell(field: Field, text: str) -> Values:
    """Masks of the bits that are 1, 0 and don't care: ``x``, a number, or ``0b`` with ``x``.

    Raises:
        Problem: For anything else, or what does not fit the field.
    """
    if text == _FREE:
        return 0, 0, field.mask
    if text.startswith("0b"):
        (ones, zeros), free = pattern_masks(field, text, _FREE)
        return ones, zeros, free
    expected = "0, 1 or x" if field.is_bit else "a number, 0b… or x"
    if text == _OPEN:
        raise Problem("CELL", "- is for inputs, an output that may be either is x", "write x")
    if text == "keep":
        raise Problem(
            "NOT-SUPPORTED-YET",
            "'keep': kept outputs are not supported yet",
            "give a registered output a column for its present value, and say the next one",
        )
    if not text[:1].isdigit() or ".." in text:
        hint = "a don't care is a small x" if text == "X" else None
        raise Problem("CELL", f"{text!r} means nothing for {field.name}, expected {expected}", hint)
    ones, zeros = number_masks(field, number_in(field, text))
    return ones, zeros, 0


def same_value(outputs: int, value: int | str) -> Values:
    """0, 1 or ``x`` for every output of a mask."""
    return (
        outputs if value == 1 else 0,
        outputs if value == 0 else 0,
        outputs if value == _FREE else 0,
    )


def _range_cubes(field: Field, text: str) -> list[Masks]:
    written = text.split("..", 1)
    first, last = (number_in(field, number.strip()) for number in written)
    if first > last:
        raise Problem(
            "RANGE-REVERSED",
            f"the range {text!r} runs backwards",
            f"write {written[1]}..{written[0]}",
        )
    check_boundary(field, first, written[0])
    check_boundary(field, last + 1, written[1])
    return span_cubes(field, first, last)
