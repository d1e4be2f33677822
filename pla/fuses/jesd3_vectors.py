"""Reading the testing fields of a fuse file: vectors and pin sequence."""

from __future__ import annotations

import re
from collections import Counter
from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.fuses.jesd3_model import CONDITIONS, Vector
from pla.fuses.jesd3_values import (
    BEYOND,
    WHITE,
    as_number,
    count,
    name_of,
    numbered_list,
    single,
    word,
)

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.fuses.jesd3_fields import Findings
    from pla.fuses.jesd3_model import Field

__all__ = ["Tests", "read_tests"]

_PINS = re.compile(rb"[0-9]+([ \t\r\n]+[0-9]+)*")
_ALLOWED = "".join(CONDITIONS).encode("ascii")


@dataclass(frozen=True, slots=True)
class Tests:
    """What the testing fields say together.

    Attributes:
        pins: Positions of a vector, QP.
        limit: Largest number of vectors, QV.
        pin_order: Pin of each position, if a pin sequence says so.
        vectors: In order of their number.
    """

    pins: int | None
    limit: int | None
    pin_order: tuple[int, ...] | None
    vectors: tuple[Vector, ...]


def read_tests(findings: Findings, fields: Sequence[Field]) -> Tests:
    """The test vectors in the order in which they are applied."""
    said = single(findings, fields, "QP", count)
    limit = single(findings, fields, "QV", _limit)
    pins = said[0] if said else None
    written = [field for field in fields if field.identifier == "V"]
    width = pins
    kept: dict[int, tuple[Vector, Field]] = {}
    for field in written:
        parts = numbered_list(findings, field, _ALLOWED, "test conditions")
        if parts is None:
            continue
        number, text, offset = parts
        if number == BEYOND:
            message = f"the vector's number is larger than {BEYOND - 1}"
            findings.error("BAD-NUMBER", field.body_offset, "V", message)
            continue
        conditions = text.translate(None, WHITE).decode("ascii")
        if width is None:
            width = len(conditions)
            findings.warning(
                "NO-QP",
                field.offset,
                name_of(field),
                f"no QP field gives the length of a vector; {width}, as of this one, is taken",
            )
        if len(conditions) != width:
            findings.error(
                "VECTOR-LENGTH",
                offset,
                name_of(field),
                f"{len(conditions)} test conditions found, {width} expected"
                + (f" (QP{width})" if pins is not None else " as in the first vector"),
            )
            continue
        if number in kept:
            findings.warning(
                "VECTOR-AGAIN",
                field.offset,
                name_of(field),
                f"vector {number} was given at byte {kept[number][1].offset} before; "
                "the last one counts",
            )
        kept[number] = (Vector(number, conditions), field)
    _check_numbers(findings, kept, limit[0] if limit else None)
    order = _pin_order(findings, fields, written, width)
    return Tests(pins, limit[0] if limit else None, order, tuple(kept[n][0] for n in sorted(kept)))


def _limit(findings: Findings, field: Field) -> int | None:
    """QV; 0 is a lawful way to say that there are no vectors."""
    return count(findings, field, least=0)


def _check_numbers(
    findings: Findings, kept: dict[int, tuple[Vector, Field]], limit: int | None
) -> None:
    for expected, number in enumerate(sorted(kept), 1):
        if number != expected:
            field = kept[number][1]
            findings.warning(
                "VECTOR-NUMBERS",
                field.offset,
                name_of(field),
                f"vectors are numbered from 1 without gaps: {number} found, {expected} expected",
            )
            break
    if limit is not None and len(kept) > limit:
        field = kept[sorted(kept)[limit]][1]
        findings.warning(
            "VECTOR-COUNT",
            field.offset,
            name_of(field),
            f"QV{limit} promises at most {limit} vectors, and there are {len(kept)}",
        )


def _pin_order(
    findings: Findings, fields: Sequence[Field], vectors: Sequence[Field], width: int | None
) -> tuple[int, ...] | None:
    order: tuple[int, ...] | None = None
    for field in fields:
        if field.identifier != "P":
            continue
        text = word(findings, field, _PINS, "pin numbers with white space between them")
        if text is None:
            continue
        pins = tuple(as_number(pin) for pin in text.split())
        twice = [pin for pin, times in Counter(pins).items() if times > 1]
        if vectors and field.offset > vectors[0].offset:
            findings.error(
                "LATE-PIN-SEQUENCE",
                field.offset,
                "P",
                f"the pin sequence comes after the first vector ({name_of(vectors[0])}), so that "
                "it is unclear which vectors it rules",
                "P has to stand before the first V",
            )
        elif order is not None and order != pins:
            findings.error("CONFLICT", field.offset, "P", "contradicts the pin sequence before it")
        elif width is not None and len(pins) != width:
            findings.error(
                "PIN-SEQUENCE",
                field.offset,
                "P",
                f"{len(pins)} pins found, {width} expected, one for each position of a vector",
            )
        elif twice:
            findings.error("PIN-SEQUENCE", field.offset, "P", f"pin {twice[0]} stands here twice")
        elif not all(1 <= pin < BEYOND for pin in pins):
            message = f"pins count from 1, to {BEYOND - 1} at most"
            findings.error("PIN-SEQUENCE", field.offset, "P", message)
        else:
            order = pins
    return order
