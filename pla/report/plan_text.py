"""The outcome of a plan on the terminal."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.report.budget import budget_table
from pla.report.pins import pin_list
from pla.report.table import as_text, filled, one_line
from pla.report.verdict import (
    connections_sentence,
    count_sentences,
    polarity_sentence,
    proof_sentence,
)

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.fitting.model import Fit
    from pla.fuses.program import ProvenFile

__all__ = ["plan_text"]


def plan_text(fit: Fit, proven: ProvenFile, paths: Sequence[str]) -> str:
    """A summary: count, budget, pins, checksum, proof, files.

    Raises:
        ValueError: If the design does not fit.
    """
    plan, minimum, behaviour = fit.plan, fit.minimum, fit.behaviour
    if plan is None or minimum is None:
        raise ValueError("a design that does not fit has no plan")
    sentences = [
        " ".join(count_sentences(minimum)),
        connections_sentence(minimum),
        polarity_sentence(behaviour.output_names, minimum.complemented),
    ]
    parts = [
        f"{one_line(behaviour.name)}: fits {fit.device.name}",
        "\n".join(map(filled, sentences)),
        as_text(budget_table(fit, proven.fuses)).rstrip(),
        as_text(pin_list(plan)).rstrip(),
        filled(proof_sentence(proven.proof)),
        f"Fuse checksum {proven.fuses.checksum:04X}",
        "\n".join(["Files", *(f"  {path}" for path in paths)]),
    ]
    return "\n\n".join(parts)
