"""The text files beside the fuse file."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.fitting.prices import alone_counts, safety_prices
from pla.report.audit import audit, audit_table
from pla.report.budget import budget_table
from pla.report.pins import pin_list
from pla.report.programming_table import programming_table
from pla.report.report_markdown import report_markdown
from pla.report.sharing import output_table, term_table
from pla.report.table import as_text, one_line

if TYPE_CHECKING:
    from pla.fitting.model import Fit
    from pla.fuses.program import ProvenFile
    from pla.report.table import Table

__all__ = ["plan_files"]


def plan_files(fit: Fit, proven: ProvenFile) -> dict[str, bytes]:
    """Name and bytes of every file of a plan but the fuse file; UTF-8 with line feeds.

    Raises:
        ValueError: If the design does not fit.
    """
    plan, minimum, behaviour = fit.plan, fit.minimum, fit.behaviour
    if plan is None or minimum is None:
        raise ValueError("a design that does not fit has no files")
    polarities = [p for p in fit.polarities if p is not None]
    tables = {
        "programming-table": (programming_table(behaviour, minimum, plan),),
        "term-sharing": (
            term_table(behaviour, minimum),
            output_table(behaviour, minimum, alone_counts(behaviour.function, polarities)),
        ),
        "pin-list": (pin_list(plan),),
        "budget": (budget_table(fit, proven.fuses),),
        "dont-care-audit": (
            audit_table(
                behaviour,
                audit(behaviour, minimum),
                safety_prices(behaviour, polarities),
                minimum.count,
            ),
        ),
    }
    files = {f"{name}.txt": _text(fit, shown) for name, shown in tables.items()}
    report = report_markdown(plan, proven, tables)
    return {**files, "report.md": report.encode()}


def _text(fit: Fit, tables: tuple[Table, ...]) -> bytes:
    behaviour = fit.behaviour
    revision = f", revision {one_line(behaviour.revision)}" if behaviour.revision else ""
    head = f"{one_line(behaviour.name)}{revision}, on {fit.device.name}\n"
    return "\n".join([head, *map(as_text, tables)]).encode()
