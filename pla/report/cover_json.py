"""Covers and plans as documents for other programs: the stable part of the contract."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.behaviour.model import Behaviour
    from pla.fitting.model import Fit, Usage
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
    return cover_document(fit.behaviour, fit.minimum) | {
        "device": fit.device.name,
        "fits": fit.fits,
        "reasons": list(fit.reasons),
        "pins": fit.plan.pins if fit.plan else None,
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
        "files": list(files),
        "would_fit": None if holders is None else list(holders),
    }


def _usage(usage: Usage, *, known: bool = True) -> dict[str, int | None]:
    return {"used": usage.used if known else None, "available": usage.available}
