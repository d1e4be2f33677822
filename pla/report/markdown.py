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
_ALIGN = {"l": "left", "r": "right"}


def escaped(text: str) -> str:
    """Text of which Markdown shows every character."""
    return _MARKUP.sub(lambda found: "\\" + found[0], text.replace("&", "&amp;"))


def bullets(sentences: Iterable[str]) -> str:
    """A list, one point for each sentence."""
    return "\n".join(f"* {escaped(sentence)}" for sentence in sentences)


def table_markdown(table: Table) -> str:
    """A heading, the paragraphs and the table, which has a bar between columns."""
    from tabulate import tabulate  # noqa: PLC0415 - slow to import

    parts = [f"## {escaped(table.title)}", *map(escaped, table.lead)]
    if table.rows:
        cells = [[escaped(cell) for cell in row] for row in (*table.under, *table.shown_rows())]
        parts.append(
            tabulate(
                cells,
                [escaped(heading) for heading in table.headings],
                tablefmt="pipe",
                disable_numparse=True,
                colalign=[_ALIGN[letter] for letter in table.aligned],
            )
        )
    parts += map(escaped, table.remarks)
    return "\n\n".join(parts)
