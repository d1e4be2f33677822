"""Reading ``[minterms.X]``: lists of numbers where an output is 1, 0 or free."""

from __future__ import annotations

from functools import partial
from typing import TYPE_CHECKING

from pla.behaviour.cells import same_value
from pla.behaviour.description import Claims, Description, Form
from pla.behaviour.listing import ListingBuilder, Row, resolve
from pla.behaviour.problem import Problem
from pla.behaviour.signals import Field
from pla.behaviour.spans import span_of
from pla.behaviour.unsupported import MISPLACED, refuse_unsupported

if TYPE_CHECKING:
    from collections.abc import Callable

    from pla.behaviour.equations import Sets
    from pla.behaviour.listing import Solved
    from pla.behaviour.signals import Signals
    from pla.errors import Location
    from pla.logic.cubes import Cover
    from pla.tomlfile import Section

__all__ = ["one_output", "read_minterms"]

_LISTS: tuple[tuple[str, int | str], ...] = (("on", 1), ("off", 0), ("dont_care", "x"))


def read_minterms(top: Section, name: str, signals: Signals, claims: Claims) -> Description | None:
    """The lists of one output. What is wrong goes to the diagnostics; then there is no result."""
    diagnostics = top.diagnostics
    before = len(diagnostics.errors)
    output = one_output(top, name, signals, claims, "minterms")
    section = top.section(name)
    if section is None:
        return None
    refused = refuse_unsupported(section, "table")
    section.unknown_keys(("of", "on", "off", "dont_care", "others", *refused), MISPLACED)
    inputs = _read_of(section, signals)
    others = section.choice("others", tuple(value for _, value in _LISTS))
    if not any(key in section for key, _ in _LISTS):
        section.error("MINTERMS-EMPTY", f"{section.title} lists nothing", None, "on = [1, 4]")
    if inputs is None or output is None:
        return None
    builder = ListingBuilder()
    for key, value in _LISTS:
        values = same_value(output.mask, value)
        for span, at in section.ranges(key, low=0, high=(1 << inputs.width) - 1) or ():
            try:
                cubes = span_of(inputs, span, at, diagnostics)
            except Problem as problem:
                diagnostics.error(problem.code, problem.message, at, problem.hint)
                continue
            builder.add(cubes, Row(values, partial(_same, at)))
    if len(diagnostics.errors) > before:
        return None

    def solve(never: Cover, _: Callable[[int], Sets]) -> Solved | None:
        listing = builder.build(
            where=section.key_at("of"),
            what="entry",
            inputs=inputs.mask,
            outputs=output.mask,
            others=None if others is None else same_value(output.mask, others),
            reasons=("dont_care", "others"),
            others_key='others = 0, 1 or "x"',
        )
        return resolve(listing, never, signals, diagnostics)

    outputs = tuple(bit for bit in output.bits if bit is not None)
    return Description(outputs, {}, solve)


def one_output(
    section: Section, name: str, signals: Signals, claims: Claims, form: Form
) -> Field | None:
    """The output bit that a key of `section` names; it is claimed there."""
    at = section.key_at(name)
    try:
        output = signals.find(name, "output")
    except Problem as problem:
        claims.incomplete = True
        if not problem.known:
            section.diagnostics.error(problem.code, problem.message, at, problem.hint)
        return None
    claims.claim(output, at, form)
    if not output.is_bit:
        what = "output " if output.role == "output" else ""
        section.diagnostics.error(
            "BUS-AS-BIT",
            f"{name!r} has {output.width} bits, expected one {what}bit",
            at,
            f'give each bit: "{name.partition("[")[0]}[0]"',
        )
        return None
    return output


def _read_of(section: Section, signals: Signals) -> Field | None:
    """The inputs whose number is listed, most significant first."""
    value = section.raw("of", required=True)
    if value is None:
        return None
    if isinstance(value, str):
        names = [value]
    else:
        if not isinstance(value, list):
            section.wrong('a bus, "step", or a list of inputs, ["start", "hatch"]', "of")
            return None
        listed = section.texts("of")
        if listed is None:
            return None
        names = listed
    if not names:
        section.error("MINTERMS-OF", "'of' names no input", section.at("of"))
        return None
    bits: list[int | None] = []
    good = True
    for index, name in enumerate(names):
        at = section.at("of") if isinstance(value, str) else section.at("of", index)
        problem = _add_bits(name, signals, bits, single=len(names) == 1)
        if problem is not None:
            good = False
            if not problem.known:
                section.diagnostics.error(problem.code, problem.message, at, problem.hint)
    shown = names[0] if len(names) == 1 else f"({', '.join(names)})"
    return Field(shown, "input", tuple(bits), is_bit=False) if good else None


def _add_bits(
    name: str, signals: Signals, bits: list[int | None], *, single: bool
) -> Problem | None:
    try:
        field = signals.find(name, "input")
    except Problem as problem:
        return problem
    if field.unreached and not single:
        return Problem(
            "GRANULE",
            f"{name!r} has bits that do not reach the device and cannot stand among others",
            "name only the part that reaches the device",
        )
    if any(bit in bits for bit in field.bits if bit is not None):
        return Problem("COLUMN-TWICE", f"{name!r} stands twice in 'of'")
    bits += field.bits
    return None


def _same(at: Location) -> Location:
    return at
