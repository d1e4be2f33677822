"""Why a design does not fit, what takes so much, and where it would fit."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.fitting.prices import alone_counts, counts_without
from pla.logic.phases import Polarity
from pla.report.budget import budget_table
from pla.report.inner_hints import inner_hints
from pla.report.notation import plural
from pla.report.sharing import shares
from pla.report.table import Table
from pla.report.text import filled, table_text
from pla.report.verdict import sentence, title
from pla.wording import listed

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from pla.device.model import Cell
    from pla.fitting.model import Fit, Usage
    from pla.fitting.prices import Count
    from pla.logic.minimize import Minimum

__all__ = ["refusal_text"]


def refusal_text(fit: Fit, holders: Sequence[Fit]) -> str:
    """By how much it does not fit, which outputs cost most, which devices would hold it.

    Args:
        fit: What was tried.
        holders: Devices that hold the design.
    """
    tables = [budget_table(fit)]
    own = fit.device.or_array is None
    if not _about_layout(fit):
        pass  # terms and inputs have nothing to do with it
    elif fit.minimum is not None and own and (fit.lacking or not fit.outputs.over):
        tables.append(_gates(fit))
    elif fit.minimum is not None and len(fit.behaviour.outputs) > 1:
        if fit.terms.over:
            tables.append(_term_costs(fit, fit.minimum))
        if fit.inputs.over:
            tables.append(_input_costs(fit, fit.minimum))
    return "\n\n".join(
        [
            f"{title(fit.behaviour)}: does not fit {fit.device.name}",
            "\n".join(filled(sentence(reason, fit.behaviour)) for reason in fit.reasons),
            *([filled(_released(fit))] if fit.released else []),
            *map(filled, inner_hints(fit)),
            *map(table_text, tables),
            _on_holders(holders),
        ]
    )


def _about_layout(fit: Fit) -> bool:
    """Whether any reason is about terms, pins or cells, not the signature or a delay."""
    region, text = fit.device.signature, fit.behaviour.signature
    long = region is not None and text is not None and len(text) > region.length
    late = sum(reason.endswith(" ns are allowed") for reason in fit.reasons)
    return len(fit.reasons) > late + long


def _released(fit: Fit) -> str:
    """The fewest decided pins that stand in the way."""
    places = [f"{place.signal} were not placed on pin {place.pin}" for place in fit.released]
    return f"It would fit if {listed(places)}."


def _gates(fit: Fit) -> Table:
    """Terms that each output needs alone, and the cells whose OR gates have as many."""
    function = fit.behaviour.function
    senses = {c: alone_counts(function, [Polarity(not c, c)] * function.n_outputs) for c in _SENSES}
    placed = {place.signal: place.pin for place in fit.behaviour.places.get(fit.device.name, ())}
    cells = sorted(fit.device.cell_of_pin.items())
    rows = []
    for j, output in enumerate(fit.behaviour.outputs):
        needs = {c: senses[c][j] for c in _SENSES}
        pin = placed.get(output.name)
        holding = [
            str(number)
            for number, cell in cells
            if pin in {None, number} and _holds(cell, output.active_low, needs)
        ]
        rows.append(
            (
                output.name,
                *(f"{'' if need.proven else 'at most '}{need.terms}" for need in needs.values()),
                "any" if pin is None else f"pin {pin}",
                " ".join(holding) or "none",
            )
        )
    capacities: dict[int, list[str]] = {}
    for number, cell in cells:
        capacities.setdefault(cell.capacity, []).append(str(number))
    have = "; ".join(
        f"{plural(count, 'term')} on {'pin' if len(pins) == 1 else 'pins'} {', '.join(pins)}"
        for count, pins in sorted(capacities.items(), reverse=True)
    )
    return Table(
        "Terms that each output needs, and the cells that have as many",
        ("output", "terms", "complemented", "placed on", "cells with enough, on pins"),
        tuple(rows),
        aligned="lrrll",
        wrapped=(0, 4),
        remarks=(
            (
                f"The OR gates of the cells have: {have}. Complemented: the terms of the "
                "complement, for cells that can show it with the right level."
            ),
        ),
    )


_SENSES = (False, True)


def _holds(cell: Cell, active_low: bool, needs: Mapping[bool, Count]) -> bool:
    """Whether a cell has a mode with terms enough in the polarity that it shows."""
    return any(
        mode.pin != "none" and len(mode.terms) >= needs[(mode.pin == "sum'") != active_low].terms
        for mode in cell.modes
    )


def _term_costs(fit: Fit, minimum: Minimum) -> Table:
    names = fit.behaviour.output_names
    polarities = [p for p in fit.polarities if p is not None]
    without = counts_without(fit.behaviour.function, polarities)
    found = shares(minimum.cover, len(names))
    order = sorted(range(len(names)), key=lambda j: without[j].terms)
    return Table(
        "What each output costs in terms",
        ("output", "frees", "left without it", "its terms", "private"),
        tuple(
            (
                names[j],
                _freed(minimum.count, without[j]),
                f"{'' if without[j].proven else 'at most '}{without[j].terms}",
                str(len(found[j].terms)),
                str(len(found[j].private)),
            )
            for j in order
        ),
        aligned="lrrrr",
        wrapped=(0,),
        remarks=(_enough([names[j] for j in order if without[j].terms <= fit.terms.available]),),
    )


def _freed(count: int, without: Count) -> str:
    freed = max(0, count - without.terms)
    return str(freed) if without.proven else f"at least {freed}"


def _enough(names: Sequence[str]) -> str:
    if not names:
        return "Leaving out a single output is not enough."
    either = " or ".join([", ".join(names[:-1]), names[-1]] if len(names) > 1 else names)
    return f"Leaving out {either} would be enough for the terms."


def _input_costs(fit: Fit, minimum: Minimum) -> Table:
    names = fit.behaviour.output_names
    needs = []
    for j in range(len(names)):
        mask = 0
        for cube in minimum.cover.of_output(j):
            mask |= cube.ones | cube.zeros
        needs.append(mask)
    rows = []
    for j, name in enumerate(names):
        others = 0
        for k, mask in enumerate(needs):
            others |= mask if k != j else 0
        own = [n for i, n in enumerate(fit.behaviour.input_names) if needs[j] & ~others & 1 << i]
        rows.append((name, str(needs[j].bit_count()), str(len(own)), " ".join(own)))
    rows.sort(key=lambda row: -int(row[2]))
    return Table(
        "What each output costs in inputs, with these terms",
        ("output", "its inputs", "private", "which"),
        tuple(rows),
        aligned="lrrl",
        wrapped=(0, 3),
    )


def _on_holders(holders: Sequence[Fit]) -> str:
    if not holders:
        return filled(
            "No other device of the catalogue would hold this design; `fuseplan budget` shows what "
            "each of them lacks."
        )
    table = Table(
        "Devices of the catalogue that would hold it",
        ("device", "product terms", "input pins", "output cells", "pins"),
        tuple(_holder(fit) for fit in holders),
        aligned="lrrrr",
    )
    return table_text(table)


def _holder(fit: Fit) -> tuple[str, ...]:
    usages = (fit.terms, fit.inputs, fit.outputs)
    return fit.device.name, *map(_budget, usages), str(fit.device.pins)


def _budget(usage: Usage) -> str:
    return f"{usage.used} of {usage.available}"
