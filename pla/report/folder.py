"""The text files beside the fuse file."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.fitting.prices import alone_counts, safety_prices
from pla.report.audit import audit, open_together
from pla.report.audit_tables import detail_table, summary_table, together_table
from pla.report.budget import budget_table
from pla.report.pins import pin_list
from pla.report.programming_table import programming_table
from pla.report.report_markdown import report_markdown
from pla.report.sharing import output_table, term_table
from pla.report.text import table_text
from pla.report.verdict import title

if TYPE_CHECKING:
    from pla.fitting.model import Fit, Plan
    from pla.fuses.program import ProvenFile
    from pla.report.table import Table

__all__ = ["plan_files"]


def plan_files(fit: Fit, proven: ProvenFile) -> dict[str, bytes]:
    """Name and bytes of every file of a plan but the fuse file; UTF-8 with line feeds.

    Raises:
        ValueError: If the design does not fit.
    """
    if fit.plan is None:
        raise ValueError("a design that does not fit has no files")
    tables = _tables(fit, fit.plan, proven)
    head = f"{title(fit.behaviour)}, on {fit.device.name}"
    files = {
        f"{name}.txt": "\n\n".join([head, *map(table_text, shown)]) + "\n"
        for name, shown in tables.items()
    }
    shown = [table for group in tables.values() for table in group]
    files["report.md"] = report_markdown(fit.plan, proven, shown)
    return {name: text.encode() for name, text in files.items()}


def _tables(fit: Fit, plan: Plan, proven: ProvenFile) -> dict[str, list[Table]]:
    """The tables of each text file by its stem, in the order of the report."""
    behaviour, minimum = plan.behaviour, plan.minimum
    polarities = [p for p in fit.polarities if p is not None]
    open_ = audit(behaviour, minimum)
    together = together_table(behaviour, open_together(behaviour, minimum))
    prices = safety_prices(behaviour, polarities, minimum)
    return {
        "pin-list": [pin_list(plan)],
        "programming-table": [programming_table(behaviour, minimum, plan)],
        "term-sharing": [
            term_table(behaviour, minimum),
            output_table(behaviour, minimum, alone_counts(behaviour.function, polarities)),
        ],
        "budget": [budget_table(fit, proven.fuses)],
        "dont-care-audit": [
            summary_table(behaviour, open_, prices, minimum),
            *([detail_table(behaviour, open_)] if open_ else []),
            *([together] if together else []),
        ],
    }
