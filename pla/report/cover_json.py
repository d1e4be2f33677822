"""Covers and plans as documents for other programs: the stable part of the contract."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from pla.report.cautions import label
from pla.report.cells import holder_of, link_states
from pla.report.delays import output_delays, plain_number
from pla.report.verdict import signature_of

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.behaviour.model import Behaviour
    from pla.device.model import Cell
    from pla.fitting.model import Fit, Plan, Usage
    from pla.fuses.program import ProvenFile
    from pla.logic.minimize import Minimum

__all__ = ["cover_document", "fit_document"]


def cover_document(behaviour: Behaviour, minimum: Minimum | None) -> dict[str, Any]:
    """What ``terms --json`` prints; all that is unknown is null."""
    names = behaviour.output_names
    document: dict[str, Any] = {
        "name": behaviour.name,
        "inputs": list(behaviour.input_names),
        "outputs": list(names),
        "complemented": None,
        "terms": None,
        "count": None,
        "lower_bound": None,
        "proven": None,
        "proven_by": None,
        "connections": None,
        "connections_proven": None,
        "primes": None,
    }
    if minimum is not None:
        document |= {
            "complemented": [n for n, c in zip(names, minimum.complemented, strict=True) if c],
            "terms": [
                {
                    "number": number,
                    "inputs": cube.text(len(behaviour.inputs)),
                    "outputs": [n for j, n in enumerate(names) if cube.outputs >> j & 1],
                }
                for number, cube in enumerate(minimum.cover, 1)
            ],
            "count": minimum.count,
            "lower_bound": minimum.lower_bound,
            "proven": minimum.proven,
            "proven_by": minimum.proven_by,
            "connections": minimum.cover.links,
            "connections_proven": minimum.connections,
            "primes": minimum.primes,
        }
    return document


def fit_document(
    fit: Fit, proven: ProvenFile | None, files: Sequence[str], holders: Sequence[str] | None = None
) -> dict[str, Any]:
    """What ``plan --json`` prints.

    Args:
        fit: The outcome of fitting.
        proven: The fuse file, if there is one.
        files: Paths written.
        holders: Where it does not fit, devices of the catalogue that would hold it.
    """
    plan = fit.plan
    return (
        cover_document(fit.laid_out, fit.minimum)
        | {
            "device": fit.device.name,
            "fits": fit.fits,
            "reasons": list(fit.reasons),
            "released": {place.signal: place.pin for place in fit.released} or None,
            "pins": plan.pins if plan else None,
            "budget": {
                "terms": _usage(fit.terms, known=fit.minimum is not None),
                "inputs": _usage(fit.inputs),
                "outputs": _usage(fit.outputs),
            },
            "fuse_checksum": f"{proven.fuses.checksum:04X}" if proven else None,
            "proof": {
                "method": proven.proof.method,
                "cases": proven.proof.cases,
                "equal": proven.proof.equal,
            }
            if proven
            else None,
            "signature": signature_of(fit.behaviour, fit.device),
            "label": list(label(plan, proven.fuses)) if plan and proven else None,
            "files": list(files),
            "would_fit": None if holders is None else list(holders),
        }
        | (_layout(plan) if plan else dict.fromkeys(_LAYOUT))
    )


_LAYOUT = ("cells", "delay", "enables", "inner", "passes", "tied")


def _layout(plan: Plan) -> dict[str, Any]:
    """Where everything is that has no pin, and how long it takes."""
    delays = output_delays(plan)
    n = len(plan.inputs)
    cell_of = {placed.name: placed.cell.key for placed in plan.outputs}
    return {
        "cells": {str(cell.key): _cell(plan, cell) for cell in plan.device.cells},
        "delay": {d.output: None if d.worst is None else plain_number(d.worst) for d in delays},
        "enables": {
            placed.name: {
                "row": placed.enable.row,
                "pin": placed.enable.pin,
                "inputs": placed.enable.cube.text(n),
            }
            for placed in plan.outputs
            if placed.enable is not None
        },
        # A signal that is folded into the logic has no cell.
        "inner": {
            signal.name: None if signal.name not in cell_of else str(cell_of[signal.name])
            for signal in plan.design.inner
        },
        "passes": {d.output: d.passes for d in delays},
        "tied": {str(pin): level for pin, level in plan.tied},
    }


def _cell(plan: Plan, cell: Cell) -> dict[str, Any]:
    """How a cell is set, what it holds, and the terms of an OR gate of its own."""
    mode, placed = plan.modes[cell.key], holder_of(plan, cell)
    used = 0 if placed is None else len(plan.minimum.cover.of_output(placed.index))
    shared = cell.key in plan.device.or_column
    return {
        "pin": cell.pin,
        "signal": placed.name if placed else None,
        "set": mode.set,
        "fuses": {str(fuse): int(state) for _, fuse, state in link_states(cell, mode)},
        "terms": None if shared else {"used": used, "available": len(mode.terms)},
    }


def _usage(usage: Usage, *, known: bool = True) -> dict[str, int | None]:
    return {"used": usage.used if known else None, "available": usage.available}
