"""Bringing free text into the few characters that a fuse file may hold."""

from __future__ import annotations

import textwrap
import unicodedata

__all__ = ["plain_lines", "printable"]

# What normalization does not take apart, or takes apart badly.
_REPLACED = {
    "*": " ",  # closes a field
    "Æ": "AE",
    "æ": "ae",
    "Ø": "O",
    "ø": "o",
    "Œ": "OE",
    "œ": "oe",
    "Ð": "D",
    "ð": "d",
    "Þ": "Th",
    "þ": "th",
    "ß": "ss",
    "Ł": "L",
    "ł": "l",
    "Đ": "D",
    "đ": "d",
    "ı": "i",
    "µ": "u",
    "μ": "u",
    "Ω": "Ohm",
    "°": " deg",
    "±": "+/-",
    "×": "x",
    "÷": "/",
    "·": ".",
    "•": "-",
    "⊕": " xor ",
    "–": "-",
    "—": "-",
    "‐": "-",
    "‑": "-",
    "−": "-",
    "‘": "'",
    "’": "'",
    "′": "'",
    "“": '"',
    "”": '"',
    "„": '"',
    "″": '"',
    "«": '"',
    "»": '"',
    "€": "EUR",
    "→": "->",
    "←": "<-",
    "≤": "<=",
    "≥": ">=",
    "≠": "!=",
}
_TABLE = str.maketrans(_REPLACED)


def printable(text: str) -> str:
    """One line of printable ASCII without ``*``.

    Accents are dropped, common signs spelled out, white space of every kind becomes one blank,
    control and format characters (a byte-order mark among them) vanish; what is left over becomes
    ``?``.
    """
    kept = []
    composed = unicodedata.normalize("NFC", text).translate(_TABLE)
    for character in unicodedata.normalize("NFKD", composed):
        if character.isspace():
            kept.append(" ")
        elif "!" <= character <= "~":
            kept.append(character)
        elif unicodedata.category(character) not in {"Mn", "Cc", "Cf", "Me"}:
            kept.append("?")
    return " ".join("".join(kept).translate(_TABLE).split())


def plain_lines(text: str, width: int) -> list[str]:
    """The lines of a text, each printable and none longer than `width`; no empty ones."""
    lines = []
    for line in text.splitlines():
        lines += textwrap.wrap(
            printable(line), width, break_on_hyphens=False, break_long_words=True
        )
    return lines
