"""The smallest set of product terms, for people."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.fitting.prices import alone_counts
from pla.report.programming_table import programming_table
from pla.report.sharing import output_table, term_table
from pla.report.table import as_text, filled, one_line
from pla.report.verdict import connections_sentence, count_sentences, polarity_sentence

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.behaviour.model import Behaviour
    from pla.logic.minimize import Minimum
    from pla.logic.phases import Polarity

__all__ = ["terms_text"]


def terms_text(behaviour: Behaviour, minimum: Minimum, polarities: Sequence[Polarity]) -> str:
    """Programming table, term sharing, and how good the count is."""
    title = one_line(behaviour.name)
    if behaviour.revision:
        title += f", revision {one_line(behaviour.revision)}"
    sentences = [
        " ".join(count_sentences(minimum)),
        connections_sentence(minimum),
        polarity_sentence(behaviour.output_names, minimum.complemented),
    ]
    tables = [
        programming_table(behaviour, minimum),
        term_table(behaviour, minimum),
        output_table(behaviour, minimum, alone_counts(behaviour.function, polarities)),
    ]
    return "\n\n".join(
        [title, *(as_text(t).rstrip() for t in tables), "\n".join(map(filled, sentences))]
    )
