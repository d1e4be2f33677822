"""The smallest set of product terms, for people."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.fitting.prices import alone_counts
from pla.report.clocked_terms import clocked_sentences, controls_table
from pla.report.enable_sums import enables_table, folded_sentence
from pla.report.programming_table import programming_table
from pla.report.sharing import output_table, term_table
from pla.report.text import filled, table_text
from pla.report.verdict import count_sentences, design_sentences, title

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.behaviour.model import Behaviour
    from pla.logic.minimize import Minimum
    from pla.logic.phases import Polarity
    from pla.report.clocked_terms import ControlSum
    from pla.report.enable_sums import EnableSum

__all__ = ["terms_text"]


def terms_text(
    behaviour: Behaviour,
    minimum: Minimum,
    polarities: Sequence[Polarity],
    enables: tuple[EnableSum, ...] = (),
    controls: tuple[ControlSum, ...] = (),
) -> str:
    """How good the count is, programming table, term sharing; no newline at the end.

    Args:
        behaviour: The design.
        minimum: Its terms.
        polarities: What was allowed to each output.
        enables: What the enables of its outputs need.
        controls: What resets and presets need.
    """
    tables = (
        programming_table(behaviour, minimum),
        term_table(behaviour, minimum),
        output_table(behaviour, minimum, alone_counts(behaviour.function, polarities)),
        *([enables_table(behaviour, enables)] if enables else []),
        *([controls_table(behaviour, controls)] if controls else []),
    )
    sentences = [
        " ".join(count_sentences(minimum)),
        *design_sentences(behaviour, minimum),
        *folded_sentence(behaviour),
        *clocked_sentences(behaviour),
    ]
    verdict = "\n".join(map(filled, sentences))
    return "\n\n".join([title(behaviour), verdict, *map(table_text, tables)])
