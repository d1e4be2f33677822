"""The report of a plan: everything, in Markdown."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.report.budget import programmed
from pla.report.cautions import CAUTIONS, label
from pla.report.table import as_markdown, escaped, one_line
from pla.report.verdict import (
    connections_sentence,
    count_sentences,
    polarity_sentence,
    proof_sentence,
)

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from pla.fitting.model import Plan
    from pla.fuses.program import ProvenFile
    from pla.report.table import Table

__all__ = ["report_markdown"]


def report_markdown(plan: Plan, proven: ProvenFile, tables: Mapping[str, Sequence[Table]]) -> str:
    """The whole report; `tables` by the names of their text files."""
    behaviour, device, minimum = plan.behaviour, plan.device, plan.minimum
    fuses = proven.fuses
    state = "closed" if device.links.blank else "opened"
    facts = [
        ("Design", one_line(behaviour.name)),
        ("Revision", one_line(behaviour.revision) or "not given"),
        ("Device", f"{device.name}: {device.summary}" if device.summary else device.name),
        ("Fuse checksum", f"{fuses.checksum:04X}"),
        ("Links to be programmed", f"{programmed(device, fuses)} of {len(fuses)} ({state})"),
        ("Label", label(plan, fuses)),
    ]
    parts = [
        f"# {escaped(one_line(behaviour.name))}\n",
        "\n".join(f"* {name}: {escaped(text)}" for name, text in facts) + "\n",
        "## Verdict\n\n"
        + "\n".join(
            f"* {escaped(s)}"
            for s in (
                *count_sentences(minimum),
                connections_sentence(minimum),
                polarity_sentence(behaviour.output_names, minimum.complemented),
                proof_sentence(proven.proof),
            )
        )
        + "\n",
        "## Cautions\n\n" + "\n".join(f"* {escaped(s)}" for s in CAUTIONS) + "\n",
    ]
    notes = [f"* {escaped(_warning(w))}" for w in behaviour.warnings]
    if notes:
        parts.append("## Warnings about the design\n\n" + "\n".join(notes) + "\n")
    parts += [
        as_markdown(table)
        for name in ("pin-list", "programming-table", "term-sharing", "budget", "dont-care-audit")
        for table in tables[name]
    ]
    return "\n".join(parts)


def _warning(warning: object) -> str:
    from pla.errors import Diagnostic  # noqa: PLC0415

    if not isinstance(warning, Diagnostic):
        return str(warning)
    return warning.message
