"""Tables and text as Markdown."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Iterable

    from pla.report.table import Table

__all__ = ["bullets", "escaped", "table_markdown"]

# Characters that would be taken for markup; an underscore inside a word is none, and a bracket
# only where a link would follow.
_MARKUP = re.compile(r"[\\`*<>|~$]|(?<![A-Za-z0-9])_|_(?![A-Za-z0-9])|(?<=\])\(|\[(?=\^)")


def escaped(text: str) -> str:
    """Text of which Markdown shows every character."""
    return _MARKUP.sub(lambda found: "\\" + found[0], text.replace("&", "&amp;"))


def bullets(sentences: Iterable[str]) -> str:
    """A list, one point for each sentence."""
    return "\n".join(f"* {escaped(sentence)}" for sentence in sentences)


def table_markdown(table: Table) -> str:
    """A heading, the paragraphs and the table, which has a bar between columns."""
    parts = [f"## {escaped(table.title)}", *map(escaped, table.lead)]
    if table.rows:
        parts.append(_piped(table))
    parts += map(escaped, table.remarks)
    return "\n\n".join(parts)


def _piped(table: Table) -> str:
    """Headings, alignment and rows between bars, padded so that the source can be read too.

    Written out here since importing tabulate takes longer than everything else in a report.
    """
    lines = [
        [escaped(cell) for cell in row]
        for row in (table.headings, *table.under, *table.shown_rows())
    ]
    widths = [max(3, *map(len, column)) for column in zip(*lines, strict=True)]
    rule = [
        "-" * (width - 1) + ":" if side == "r" else ":" + "-" * (width - 1)
        for width, side in zip(widths, table.aligned, strict=True)
    ]
    padded = [
        [
            cell.rjust(width) if side == "r" else cell.ljust(width)
            for cell, width, side in zip(line, widths, table.aligned, strict=True)
        ]
        for line in lines
    ]
    return "\n".join(f"| {' | '.join(line)} |" for line in (padded[0], rule, *padded[1:]))
