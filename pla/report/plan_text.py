"""The outcome of a plan on the terminal."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.report.budget import budget_table
from pla.report.cautions import label
from pla.report.delays import delay_table, output_delays
from pla.report.gates import headroom_text, own_gates
from pla.report.pins import pin_summary
from pla.report.text import filled, kept_together, table_text
from pla.report.verdict import (
    count_sentences,
    design_sentences,
    proof_sentence,
    signature_of,
    title,
)

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.fitting.model import Fit
    from pla.fuses.program import ProvenFile

__all__ = ["plan_text"]


def plan_text(fit: Fit, proven: ProvenFile, paths: Sequence[str]) -> str:
    """A summary: count, budget, pins, checksum, proof, files; no newline at the end.

    Raises:
        ValueError: If the design does not fit.
    """
    plan, design = fit.plan, fit.behaviour
    if plan is None:
        raise ValueError("a design that does not fit has no plan")
    own = own_gates(plan)
    sentences = [
        " ".join(count_sentences(plan.minimum, own, plan.fed_back)),
        *design_sentences(plan.behaviour, plan.minimum, own),
        *([f"Terms of each output, and of its cell: {headroom_text(plan)}."] if any(own) else []),
    ]
    delays = delay_table(output_delays(plan))
    text = signature_of(design, fit.device)
    signature = "" if text is None else " " + kept_together(f'Signature: "{text}".')
    return "\n\n".join(
        [
            f"{title(design)}: fits {fit.device.name}",
            "\n".join(map(filled, sentences)),
            table_text(budget_table(fit, proven.fuses)),
            *([table_text(delays)] if delays else []),
            "\n".join(filled(line) for line in pin_summary(plan)),
            filled(
                f"{proof_sentence(proven.proof, design)} Fuse checksum {proven.fuses.checksum:04X}."
                f"{signature}"
            ),
            "\n".join(["Label", *(f"  {line}" for line in label(plan, proven.fuses))]),
            "\n".join(["Files", *(f"  {path}" for path in paths)]),
        ]
    )
