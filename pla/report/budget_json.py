"""Devices against a design, as a document for other programs."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from pla.report.delays import output_delays, plain_number
from pla.report.gates import headroom

if TYPE_CHECKING:
    from collections.abc import Collection, Sequence
    from fractions import Fraction

    from pla.behaviour.model import Behaviour
    from pla.errors import Diagnostic
    from pla.fitting.budgets import DeviceBudget
    from pla.fitting.model import Plan, PolarityWish, Usage

__all__ = ["budgets_document"]


def budgets_document(
    behaviour: Behaviour,
    found: Sequence[DeviceBudget],
    wish: PolarityWish,
    reserve: int,
    catalogue: Collection[str] = (),
    left_out: Sequence[Diagnostic] = (),
    warnings: Sequence[Diagnostic] = (),
) -> dict[str, Any]:
    """What ``budget --json`` prints; all that is unknown is null, a negative ``spare`` is lacking.

    Args:
        behaviour: What is wanted.
        found: Every device, best first.
        wish: Polarities that the user allows.
        reserve: Product terms that have to stay spare.
        catalogue: Names of devices that ship with the program; the others name their file.
        left_out: Why files of a folder were left out.
        warnings: What is doubtful about the design and the device files; these among them.
    """
    return {
        "name": behaviour.name,
        "polarity": wish,
        "reserve": reserve,
        "devices": [_device(budget, catalogue) for budget in found],
        "left_out": [diagnostic.as_json() for diagnostic in left_out],
        "warnings": [diagnostic.as_json() for diagnostic in warnings],
    }


def _device(budget: DeviceBudget, catalogue: Collection[str]) -> dict[str, Any]:
    device, minimum, usages = budget.device, budget.fit.minimum, budget.usages
    return {
        "device": device.name,
        "file": None if device.name in catalogue else device.location.file,
        "fits": budget.fits,
        "reasons": list(budget.reasons),
        "missing": budget.missing,
        "budget": {
            "terms": _usage(budget.fit.terms, known="terms" in usages),
            "inputs": _usage(budget.fit.inputs),
            "outputs": _usage(budget.fit.outputs),
        },
        "tightest": budget.tightest,
        "count": minimum.count if minimum else None,
        "lower_bound": minimum.lower_bound if minimum else None,
        "proven": minimum.proven if minimum else None,
        "proven_by": minimum.proven_by if minimum else None,
        "pins": device.pins,
        "fuses": device.fuses,
        "family": device.family or device.name,
        "warnings": [doubt.as_json() for doubt in budget.fit.warnings],
        **_outputs(budget.fit.plan),
    }


def _outputs(plan: Plan | None) -> dict[str, Any]:
    """Headroom of each output against its cell, passes and delays; null where nothing fits."""
    if plan is None:
        return dict.fromkeys(("cells", "delay", "max_delay", "passes"))
    delays = output_delays(plan)
    return {
        "cells": {
            name: {"used": used, "available": has, "spare": has - used}
            for name, (used, has) in headroom(plan).items()
        },
        "delay": {d.output: _number(d.worst) for d in delays},
        "max_delay": {d.output: _number(d.asked) for d in delays},
        "passes": {d.output: d.passes for d in delays},
    }


def _number(value: Fraction | None) -> int | float | None:
    return None if value is None else plain_number(value)


def _usage(usage: Usage, *, known: bool = True) -> dict[str, int | None]:
    return {
        "used": usage.used if known else None,
        "available": usage.available,
        "spare": usage.available - usage.used if known else None,
    }
