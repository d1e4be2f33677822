"""The text files beside the fuse file."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.fitting.prices import alone_counts
from pla.report.audit import at_impossible, audit, open_together
from pla.report.audit_tables import detail_table, enable_table, summary_table, together_table
from pla.report.budget import budget_table
from pla.report.cells import cell_table, row_table
from pla.report.delays import delay_table, output_delays
from pla.report.gates import allowed_polarities, group_prices, own_gates
from pla.report.outcome import outcomes_of_plan
from pla.report.pins import inner_table, pin_list
from pla.report.programming_table import programming_table
from pla.report.report_markdown import report_markdown
from pla.report.rows import ProgrammedRows
from pla.report.sharing import output_table, term_table
from pla.report.text import table_text
from pla.report.verdict import title

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.fitting.model import Fit, Plan
    from pla.fuses.program import ProvenFile
    from pla.logic.phases import Polarity
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
    files["report.md"] = report_markdown(fit.plan, proven, shown, fit.warnings)
    return {name: text.encode() for name, text in files.items()}


def _tables(fit: Fit, plan: Plan, proven: ProvenFile) -> dict[str, list[Table]]:
    """The tables of each text file by its stem, in the order of the report."""
    minimum, laid_out, own = plan.minimum, plan.behaviour, own_gates(plan)
    polarities = allowed_polarities(fit, plan)
    programmed = ProgrammedRows.of(plan, proven.fuses)
    alone = alone_counts(laid_out.function, polarities)
    found: dict[str, list[Table | None]] = {
        "pin-list": [pin_list(programmed), inner_table(plan)],
        "programming-table": [
            programming_table(laid_out, minimum, programmed),
            cell_table(programmed),
            row_table(programmed),
        ],
        "term-sharing": [
            term_table(laid_out, minimum, own),
            output_table(laid_out, minimum, alone, plan),
        ],
        "budget": [budget_table(fit, proven.fuses), delay_table(output_delays(plan))],
        "dont-care-audit": _audit(plan, polarities),
    }
    return {stem: [table for table in group if table] for stem, group in found.items()}


def _audit(plan: Plan, polarities: Sequence[Polarity]) -> list[Table | None]:
    """What the part does where the design leaves it open, told in the design's own signals."""
    design, outcomes = plan.design, outcomes_of_plan(plan)
    open_, impossible = audit(design, outcomes), at_impossible(design, outcomes)
    return [
        summary_table(design, open_, group_prices(plan, polarities)),
        enable_table(design, impossible),
        detail_table(design, open_) if open_ else None,
        together_table(design, open_together(design, outcomes)),
    ]
