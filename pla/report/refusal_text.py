"""Why a design does not fit, what it would take, and where it would fit."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.fitting.prices import counts_without
from pla.report.budget import budget_table
from pla.report.sharing import shares
from pla.report.table import Table, as_text, filled, one_line

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.fitting.model import Fit, Usage
    from pla.logic.minimize import Minimum

__all__ = ["refusal_text"]


def refusal_text(fit: Fit, holders: Sequence[Fit]) -> str:
    """By how much it does not fit, which outputs cost most, which devices would hold it.

    Args:
        fit: What was tried.
        holders: Devices that hold it.
    """
    parts = [
        f"{one_line(fit.behaviour.name)}: does not fit {fit.device.name}",
        "\n".join(filled(f"{r}.", "  ", "  ") for r in fit.reasons),
        as_text(budget_table(fit)).rstrip(),
    ]
    if fit.minimum is not None and fit.terms.over and len(fit.behaviour.outputs) > 1:
        parts.append(as_text(_costs(fit, fit.minimum)).rstrip())
    parts.append(as_text(_holders(holders)).rstrip())
    return "\n\n".join(parts)


def _costs(fit: Fit, minimum: Minimum) -> Table:
    polarities = [p for p in fit.polarities if p is not None]
    without = counts_without(fit.behaviour.function, polarities)
    found = shares(minimum.cover, len(fit.behaviour.outputs))
    order = sorted(range(len(without)), key=lambda j: (without[j].terms, j))
    rows = tuple(
        (
            fit.behaviour.outputs[j].name,
            str(minimum.count - without[j].terms),
            f"{'' if without[j].proven else 'at most '}{without[j].terms}",
            str(len(found[j].terms)),
            str(found[j].private),
        )
        for j in order
    )
    return Table(
        "What each output costs",
        ("output left out", "frees", "terms left", "its terms", "private"),
        rows,
        aligned="lrrrr",
    )


def _holders(holders: Sequence[Fit]) -> Table:
    rows = tuple(
        (f.device.name, _budget(f.terms), _budget(f.inputs), _budget(f.outputs)) for f in holders
    )
    lead = () if rows else ("No other device of the catalogue would hold the design.",)
    return Table(
        "Devices that would hold it",
        ("device", "product terms", "input pins", "output cells"),
        rows,
        lead=lead,
        aligned="lrrr",
    )


def _budget(usage: Usage) -> str:
    return f"{usage.used} of {usage.available}"
