"""Reading ``[[address_map]]``: select lines by ranges of addresses."""

from __future__ import annotations

from functools import partial
from itertools import pairwise
from typing import TYPE_CHECKING

import numpy as np

from pla.behaviour.cells import same_value
from pla.behaviour.conditions import read_condition
from pla.behaviour.description import Claims, Description
from pla.behaviour.listing import Listing, ListingBuilder, Row, resolve
from pla.behaviour.minterms import one_output
from pla.behaviour.overlaps import AddressMap, Select, report_overlaps
from pla.behaviour.problem import Problem
from pla.behaviour.spans import widened
from pla.behaviour.unsupported import MISPLACED, refuse_unsupported
from pla.behaviour.values import span_cubes
from pla.logic import algebra
from pla.logic.cubes import Cover, Cube

if TYPE_CHECKING:
    from collections.abc import Callable

    from pla.behaviour.equations import Sets
    from pla.behaviour.listing import Solved
    from pla.behaviour.signals import Field, Signals
    from pla.errors import Location
    from pla.tomlfile import Section

__all__ = ["read_address_map"]

_VALUES: tuple[int | str, ...] = (0, 1, "x")

_Addressed = tuple[int, range, "Location"]
"""Outputs selected (a mask), by what addresses, and where that is said."""


def read_address_map(
    section: Section, signals: Signals, claims: Claims, solved: list[AddressMap]
) -> Description | None:
    """One map. What is wrong goes to the section's diagnostics; then there is no result.

    Args:
        section: The map.
        signals: What is declared.
        claims: Takes the outputs that it describes.
        solved: Takes the map once the description has been worked out.
    """
    diagnostics = section.diagnostics
    before = len(diagnostics.errors)
    refused = refuse_unsupported(section, "table")
    section.unknown_keys(("bus", "when", "select", "elsewhere", "overlap", *refused), MISPLACED)
    bus = _read_bus(section, signals)
    condition = None
    text = section.text("when")
    if text is not None:
        condition = read_condition(section, (*section.path, "when"), text, signals)
    good = text is None or condition is not None
    elsewhere: int | str | None = section.choice("elsewhere", _VALUES)
    may_overlap = section.choice("overlap", ("allow",)) is not None
    outputs, selects = _read_selects(section, bus, signals, claims)
    if len(diagnostics.errors) > before or bus is None or not outputs or not good:
        return None
    mask = sum(output.mask for output in outputs)
    rows = _merged(selects) if may_overlap else [(s.mask, s.span, s.at) for s in selects]

    def solve(never: Cover, output_sets: Callable[[int], Sets]) -> Solved | None:
        inside: Sets = (Cover.universe(signals.n_inputs), Cover.of(signals.n_inputs))
        if condition is not None:
            value = condition.value(output_sets)
            if value is None:
                return None
            inside = value
        addresses = AddressMap(section.where, bus, tuple(selects), inside[0], may_overlap)
        if not report_overlaps(addresses, never, signals, diagnostics):
            return None
        solved.append(addresses)
        others = None if elsewhere is None else same_value(mask, elsewhere)
        listing = _listing(section, bus, rows, mask, inside, others)
        return resolve(listing, never, signals, diagnostics)

    return Description(
        outputs=tuple(bit for output in outputs for bit in output.bits if bit is not None),
        needs={} if condition is None else condition.needs(),
        solve=solve,
    )


def _read_bus(section: Section, signals: Signals) -> Field | None:
    name = section.text("bus", required=True)
    if name is None:
        return None
    try:
        bus = signals.find(name, "input")
    except Problem as problem:
        if not problem.known:
            section.diagnostics.error(
                problem.code, problem.message, section.at("bus"), problem.hint
            )
        return None
    if bus.is_bit:
        section.wrong("a bus or a part of one", "bus")
        return None
    return bus


def _read_selects(
    section: Section, bus: Field | None, signals: Signals, claims: Claims
) -> tuple[list[Field], list[Select]]:
    table = section.section("select", required=True)
    outputs: list[Field] = []
    selects: list[Select] = []
    claims.incomplete |= table is None
    if table is None:
        return outputs, selects
    if not table.data:
        claims.incomplete = True
        table.error("SELECT-EMPTY", "'select' names no output")
    for name in table:
        output = one_output(table, name, signals, claims, "address_map")
        highest = None if bus is None else (1 << bus.width) - 1
        spans = table.ranges(name, low=0, high=highest)
        if output is None or spans is None or bus is None:
            continue
        outputs.append(output)
        for span, at in spans:
            try:
                wide = widened(bus, span, at, section.diagnostics)
            except Problem as problem:
                section.diagnostics.error(problem.code, problem.message, at, problem.hint)
                continue
            selects.append(Select(name, output.mask, wide, at))
    return outputs, selects


def _merged(selects: list[Select]) -> list[_Addressed]:
    """Ranges that do not overlap, each with all the outputs that it selects."""
    bounds = sorted({b for select in selects for b in (select.span.start, select.span.stop)})
    merged: list[_Addressed] = []
    for start, stop in pairwise(bounds):
        here = [s for s in selects if s.span.start <= start < s.span.stop]
        if here:
            selected = 0
            for select in here:
                selected |= select.mask
            merged.append((selected, range(start, stop), here[0].at))
    return merged


def _listing(
    section: Section,
    bus: Field,
    rows: list[_Addressed],
    mask: int,
    inside: Sets,
    others: tuple[int, int, int] | None,
) -> Listing:
    builder = ListingBuilder()
    when_true, when_false = inside
    n = when_true.n_inputs
    for selected, span, at in rows:
        addresses = Cover.of(n, (Cube(*m) for m in span_cubes(bus, span[0], span[-1])))
        cubes = [c[:2] for c in algebra.intersection(addresses, when_true)]
        values = (selected, mask & ~selected, 0)
        builder.add(cubes, Row(values, partial(_same, at)))
    idle = Row((0, mask, 0), lambda: section.at("when"), is_written=False)
    builder.add([c[:2] for c in when_false], idle)
    literals = np.concatenate([c.ones | c.zeros for c in inside])
    return builder.build(
        where=section.key_at("select"),
        what="select",
        inputs=bus.mask | int(np.bitwise_or.reduce(literals, initial=np.uint64(0))),
        outputs=mask,
        others=others,
        reasons=("x", "elsewhere"),
        others_key='elsewhere = 0, 1 or "x"',
    )


def _same(at: Location) -> Location:
    return at
