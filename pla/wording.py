"""Words that messages about values share."""

from __future__ import annotations

import difflib
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

__all__ = ["did_you_mean", "kind_of", "listed", "span_of_numbers", "spans"]


def did_you_mean(name: str, valid: Iterable[str]) -> str:
    """A hint: the nearest valid name, or all of them when none is near."""
    names = list(dict.fromkeys(valid))
    if not names:
        return "there is none to choose from"
    folded = {n.casefold(): n for n in reversed(names)}
    near = difflib.get_close_matches(name.casefold(), folded, n=1)
    if near:
        return f"did you mean {folded[near[0]]!r}?"
    shown = names[:20]
    rest = f" and {len(names) - len(shown)} more" if len(names) > len(shown) else ""
    return f"valid are: {', '.join(shown)}{rest}"


def kind_of(value: Any) -> str:
    """A TOML value in words, for messages."""
    if isinstance(value, bool):
        return f"{'true' if value else 'false'}"
    if isinstance(value, int):
        return f"the number {value}" if abs(value) < 10**20 else "a huge number"
    if isinstance(value, float):
        return f"the number {value}"
    if isinstance(value, str):
        return f"the text {value!r}" if len(value) <= 40 else f"the text {value[:37] + '…'!r}"
    if isinstance(value, list):
        return "a list"
    if isinstance(value, dict):
        return "a table"
    return "a date or time"


def listed(words: Sequence[str], most: int | None = None) -> str:
    """``a``, ``a and b``, ``a, b and c``; beyond `most` of them only how many more there are."""
    shown = list(words[:most])
    if len(words) > len(shown):
        shown.append(f"{len(words) - len(shown)} more")
    if len(shown) < 2:
        return "".join(shown)
    return f"{', '.join(shown[:-1])} and {shown[-1]}"


def spans(numbers: Iterable[int], most: int | None = None) -> str:
    """Ascending numbers, neighbours joined, as ``3, 5..7``; no more than `most` such parts."""
    parts: list[list[int]] = []
    for number in numbers:
        if parts and parts[-1][1] == number - 1:
            parts[-1][1] = number
        else:
            parts.append([number, number])
    texts = [str(a) if a == b else f"{a}..{b}" for a, b in parts[:most]]
    if len(parts) > len(texts):
        texts.append(f"and {len(parts) - len(texts)} more ranges")
    return ", ".join(texts)


def span_of_numbers(
    what: str, low: int | None, high: int | None, *, hexadecimal: bool = False
) -> str:
    """Which numbers are wanted, such as "a whole number from 0 to 7"."""
    shown = (lambda limit: f"0x{limit:X}" if limit else "0") if hexadecimal else str
    if low is not None and high is not None:
        return f"{what} from {shown(low)} to {shown(high)}"
    if low is not None:
        return f"{what} of at least {shown(low)}"
    if high is not None:
        return f"{what} of at most {shown(high)}"
    return what
