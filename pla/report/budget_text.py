"""Devices against a design, as tables for people."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.report.budget import own_pin_inputs
from pla.report.delays import nanoseconds, output_delays, plain_number
from pla.report.gates import headroom_text
from pla.report.notation import plural
from pla.report.table import Table
from pla.report.text import filled, table_text
from pla.report.verdict import sentence, title
from pla.wording import listed

if TYPE_CHECKING:
    from collections.abc import Collection, Iterator, Sequence
    from fractions import Fraction

    from pla.behaviour.model import Behaviour
    from pla.device.model import Device
    from pla.fitting.budgets import DeviceBudget, Resource
    from pla.fitting.model import Usage

__all__ = ["RANKING", "budgets_text"]

RANKING = (
    "Best first: devices that hold the design, by fewest pins, then fewest fuses, then name; then "
    "the others, by how many product terms (the reserve included), input pins and output cells are "
    "missing together, of equals the smallest; last those for which the number of product terms is "
    "not known."
)


def budgets_text(
    behaviour: Behaviour,
    found: Sequence[DeviceBudget],
    reserve: int = 0,
    catalogue: Collection[str] = (),
) -> str:
    """Which devices hold a design, what they leave spare, and why the others do not hold it.

    Args:
        behaviour: What is wanted.
        found: Every device, best first.
        reserve: Product terms that have to stay spare.
        catalogue: Names of devices that ship with the program; the others name their file.
    """
    holding = [budget for budget in found if budget.fits]
    others = [budget for budget in found if not budget.fits]
    kept = f" with {plural(reserve, 'product term')} spare" if reserve else ""
    verb = "holds" if len(holding) == 1 else "hold"
    parts = [
        f"{title(behaviour)}: {len(holding)} of {plural(len(found), 'device')} {verb} it{kept}",
        filled(RANKING),
    ]
    if holding:
        parts.append(table_text(_holding(holding)))
        outputs = _outputs(holding)
        parts += [table_text(outputs)] if outputs else []
    if others:
        parts.append(table_text(_others(others)))
    parts += map(filled, _remarks(behaviour, found, catalogue))
    return "\n\n".join(parts)


def _by_family(found: Sequence[DeviceBudget]) -> Iterator[tuple[DeviceBudget, str]]:
    """Devices with their names, modes and variants of one family behind the best of them."""
    families: dict[str, list[DeviceBudget]] = {}
    for budget in found:
        families.setdefault(_family(budget.device), []).append(budget)
    for first, *others in families.values():
        yield first, first.device.name
        for budget in others:
            yield budget, f"{_INDENT}{budget.device.name}"


_INDENT = "  "


def _family(device: Device) -> str:
    return device.family or device.name


def _holding(found: Sequence[DeviceBudget]) -> Table:
    rows = []
    for budget, name in _by_family(found):
        usages = (budget.fit.terms, budget.fit.inputs, budget.fit.outputs)
        cells = [text for u in usages for text in (_used(u), str(u.available - u.used))]
        size = (str(budget.device.pins), str(budget.device.fuses))
        rows.append((name, *cells, budget.tightest, *size))
    return Table(
        "Devices that hold it",
        (
            "device",
            *("terms", "spare", "inputs", "spare", "outputs", "spare"),
            *("tightest", "pins", "fuses"),
        ),
        tuple(rows),
        aligned="lrrrrrrlrr",
    )


def _outputs(found: Sequence[DeviceBudget]) -> Table | None:
    """Terms of each output against its cell, passes and delays; ``None`` if there are none."""
    plans = [(budget.fit.plan, name) for budget, name in _by_family(found)]
    rows = []
    for plan, name in plans:
        if plan is None:
            continue
        delays = output_delays(plan)
        known = [d.worst for d in delays if d.worst is not None]
        asked = [d.asked for d in delays if d.asked is not None]
        late = [d.output for d in delays if d.late]
        rows.append(
            (
                name,
                headroom_text(plan) or "shared terms",
                str(max(d.passes for d in delays)),
                nanoseconds(max(known)) if known else "not known",
                _asked(asked) + (f", too slow: {' '.join(late)}" if late else ""),
            )
        )
    told = any(row[1] != "shared terms" or row[2] != "1" or row[3] != "not known" for row in rows)
    if not told and not any(row[4] for row in rows):
        return None
    width = 5 if any(row[4] for row in rows) else 4
    headings = ("device", "terms of each output, of its cell", "passes", "worst delay", "may be")
    return Table(
        "Outputs on these devices",
        headings[:width],
        tuple(row[:width] for row in rows),
        aligned="llrrl"[:width],
        wrapped=(1,),
        remarks=(
            (
                "Terms of each output: what its sum takes of the terms that its cell has, least to "
                "spare first. Passes: how often the longest way from an input to an output goes "
                "through the array. Worst delay: from any input to any output, by the figures of "
                "the device file."
            ),
        ),
    )


def _asked(delays: Sequence[Fraction]) -> str:
    if not delays:
        return ""
    ends = [plain_number(end) for end in (min(delays), max(delays))]
    return f"{ends[0]} ns" if ends[0] == ends[1] else f"{ends[0]} to {ends[1]} ns"


def _others(found: Sequence[DeviceBudget]) -> Table:
    rows = []
    for budget, name in _by_family(found):
        known = budget.usages
        resources: tuple[Resource, ...] = ("terms", "inputs", "outputs")
        cells = [_used(known[r]) if r in known else "not known" for r in resources]
        why = sentence("; ".join(budget.reasons), budget.fit.behaviour)
        rows.append((name, *cells, budget.tightest, why))
    return Table(
        "Devices that do not",
        ("device", "terms", "inputs", "outputs", "tightest", "why"),
        tuple(rows),
        aligned="lrrrll",
        wrapped=(5,),
    )


def _used(usage: Usage) -> str:
    return f"{usage.used} of {usage.available}"


def _remarks(
    behaviour: Behaviour, found: Sequence[DeviceBudget], catalogue: Collection[str]
) -> Iterator[str]:
    """How to read the tables."""
    yield "Tightest: what is used up by the largest share."
    yield from _proofs(found)
    needed = [b.fit.inputs.used for b in found if b.fit.minimum]
    if any(used < len(own_pin_inputs(behaviour)) for used in needed):
        yield "Inputs that no term needs are not counted."
    yield from _families(found)
    silent = [
        budget.device.name
        for budget in found
        if budget.fits and any(doubt.code == "SIGNATURE-NONE" for doubt in budget.fit.warnings)
    ]
    if silent:
        yield f"No signature fuses, so that the design's text is left out: {listed(silent)}."
    yield from _doubts(found)
    own = [b.device for b in found if b.device.name not in catalogue]
    if own:
        files = listed([f"{device.name} in {device.location.file}" for device in own])
        yield f"Not of the catalogue: {files}."


def _doubts(found: Sequence[DeviceBudget]) -> Iterator[str]:
    """What else is doubtful on devices that hold it: for each kind of doubt the first in full."""
    alike: dict[str, list[tuple[str, str]]] = {}
    for budget in found:
        for doubt in budget.fit.warnings if budget.fits else ():
            if doubt.code != "SIGNATURE-NONE":
                alike.setdefault(doubt.code, []).append((doubt.message, budget.device.name))
    for (message, _), *others in alike.values():
        likewise = f"; likewise {listed([name for _, name in others])}" if others else ""
        yield f"{message}{likewise}."


def _families(found: Sequence[DeviceBudget]) -> Iterator[str]:
    """Which devices are modes or variants of one part."""
    members: dict[str, list[str]] = {}
    for budget in found:
        members.setdefault(_family(budget.device), []).append(budget.device.name)
    for family, names in members.items():
        if len(names) > 1:
            yield (
                f"Modes or variants of one part, {family}, best first and together in each table: "
                f"{', '.join(names)}."
            )


def _proofs(found: Sequence[DeviceBudget]) -> Iterator[str]:
    """How far the numbers of terms are known to be the fewest."""
    minima = [(b.fit.minimum, b.device.name) for b in found if b.fit.minimum]
    gaps: dict[tuple[int, int], list[str]] = {}
    for minimum, name in minima:
        if not minimum.proven:
            gaps.setdefault((minimum.count, minimum.lower_bound), []).append(name)
    for (count, bound), names in gaps.items():
        yield (
            f"{plural(count, 'product term')} for {listed(names)}: NOT proven to be the fewest, "
            f"at least {bound} are needed."
        )
    if any(minimum.proven for minimum, _ in minima):
        which = "Each other number of terms" if gaps else "Each number of terms"
        yield f"{which} is proven to be the fewest for the polarities that the device allows."
