"""The report of a plan: everything, in Markdown."""

from __future__ import annotations

from pathlib import PurePath
from typing import TYPE_CHECKING

from pla.fuses.program import fuse_file_name
from pla.report.budget import links_sentence
from pla.report.cautions import CAUTIONS, label
from pla.report.gates import own_gates
from pla.report.markdown import bullets, escaped, table_markdown
from pla.report.text import one_line
from pla.report.verdict import (
    count_sentences,
    design_sentences,
    proof_sentence,
    signature_of,
    title,
)

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.errors import Diagnostic
    from pla.fitting.model import Plan
    from pla.fuses.program import ProvenFile
    from pla.report.table import Table

__all__ = ["report_markdown"]


def report_markdown(
    plan: Plan, proven: ProvenFile, tables: Sequence[Table], warnings: Sequence[Diagnostic] = ()
) -> str:
    """The whole report; ends with a newline.

    Args:
        plan: The design on its device.
        proven: Its fuse file.
        tables: Pins, programming table and all the others, in order.
        warnings: What is doubtful about the fit.
    """
    return "\n\n".join([*_front(plan, proven, warnings), *map(table_markdown, tables)]) + "\n"


def _front(plan: Plan, proven: ProvenFile, doubts: Sequence[Diagnostic]) -> Iterator[str]:
    design, device, minimum, fuses = plan.design, plan.device, plan.minimum, proven.fuses
    own = own_gates(plan)
    yield f"# {escaped(title(design))}"
    signature = signature_of(design, device)
    summary = f": {one_line(device.summary)}" if device.summary else ""
    yield bullets(
        [
            f"Design: {one_line(design.name)}",
            f"Revision: {one_line(design.revision) or 'not given'}",
            f"Device: {device.name}{summary}",
            f"Fuse file: {one_line(fuse_file_name(design))}",
            f"Fuse checksum: {fuses.checksum:04X}",
            *([] if signature is None else [f'Signature: "{signature}"']),
        ]
    )
    yield "Label for the part:"
    yield "\n".join(f"    {line}" for line in label(plan, fuses))
    yield "## Verdict"
    yield bullets(
        [
            *count_sentences(minimum, own, plan.fed_back),
            *design_sentences(plan.behaviour, minimum, own),
            proof_sentence(proven.proof, design),
            links_sentence(device, fuses),
        ]
    )
    warnings = [*map(_warning, (*design.warnings, *device.warnings, *doubts))]
    if warnings:
        yield "## Warnings"
        yield bullets(warnings)
    yield "## Cautions"
    yield bullets(CAUTIONS)


def _warning(warning: Diagnostic) -> str:
    """A warning with its place; of paths only the name, which is the same on every machine."""
    at = warning.location
    place = f"{one_line(PurePath(at.file).name)}" if at else ""
    line = f", line {at.line}" if at and at.line else ""
    hint = f" ({warning.hint})" if warning.hint else ""
    return f"{place}{line}{': ' if place else ''}{one_line(warning.message)}{one_line(hint)}"
