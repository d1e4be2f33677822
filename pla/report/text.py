"""Text for terminals and plain files: titles, paragraphs and tables."""

from __future__ import annotations

import textwrap
from typing import TYPE_CHECKING

from pla.report.layout import WIDTH, drawn

if TYPE_CHECKING:
    from pla.report.table import Table

__all__ = ["WIDTH", "filled", "kept_together", "one_line", "table_text"]

_KEEP = "\u00a0"  # a blank at which no line is broken


def one_line(text: str) -> str:
    """A user's text as a title: no line breaks, nothing that a terminal would obey."""
    return "".join(c if c.isprintable() else "\ufffd" for c in " ".join(text.split()))


def kept_together(text: str) -> str:
    """Text in which `filled` does not break a line."""
    return text.replace(" ", _KEEP)


def filled(paragraph: str, width: int = WIDTH) -> str:
    """A paragraph broken into lines."""
    lines = textwrap.fill(paragraph, width, break_long_words=False, break_on_hyphens=False)
    return lines.replace(_KEEP, " ")


def table_text(table: Table) -> str:
    """Title, paragraphs and table; no newline at the end."""
    parts = [f"{table.title}\n{'-' * len(table.title)}", *map(filled, table.lead)]
    if table.rows:
        parts.append(drawn(table).replace(_KEEP, " "))
    parts += map(filled, table.remarks)
    return "\n\n".join(parts)
