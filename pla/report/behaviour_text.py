"""What a design asks for, for people."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.report.behaviour_counts import OutputCounts, count_outputs
from pla.report.layout import WIDTH, broken
from pla.report.text import filled, kept_together

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.behaviour.model import Behaviour, Input, Output

__all__ = ["behaviour_text"]

MAX_PLAIN = 1 << 24
"""Up to so many combinations numbers are shown as they are; above, as shares."""

_NAME = 40  # a longer name of an output is broken into lines

_FORMS = {
    "cases": "table",
    "minterms": "minterm list",
    "logic": "equation",
    "address_map": "address map",
}
_REASONS = {
    "never": "impossible",
    "others": "others",
    "x": "rows with x",
    "dont_care": "dont_care",
    "elsewhere": "elsewhere",
}


def behaviour_text(behaviour: Behaviour) -> str:
    """Title, signals, and for each output how many input combinations ask for what."""
    from tabulate import tabulate  # noqa: PLC0415 - slow to import

    title = behaviour.name
    if behaviour.revision:
        title += f", revision {behaviour.revision}"
    counts = count_outputs(behaviour)
    total = counts[0].total
    plain = total <= MAX_PLAIN
    rows = [
        [
            "\n".join(broken(output.name, _NAME)),
            _described(output, behaviour.file),
            *_shares(count, plain=plain),
            ", ".join(_sources(count, plain=plain)),
        ]
        for output, count in zip(behaviour.outputs, counts, strict=True)
    ]
    header = ["output", "described by", "1", "0", "free", "of", "why free"]
    table = tabulate(
        rows,
        header,
        tablefmt="simple",
        disable_numparse=True,
        colalign=["left", "left", "right", "right", "right", "right", "left"],
    )
    lines = [
        title,
        "",
        *_side("inputs", behaviour.inputs),
        *_side("outputs", behaviour.outputs),
        "",
        f"Input combinations that ask for 1, for 0 and for nothing, of {total} in all"
        + ("." if plain else ";"),
        *([] if plain else ["each row is reduced to the smallest power of two that shows it."]),
        "",
        *(line.rstrip() for line in table.split("\n")),
        "",
        "No errors." if not behaviour.warnings else f"No errors, {_warnings(behaviour)}.",
    ]
    return "\n".join(lines)


def _described(output: Output, design: str) -> str:
    at = output.described
    place = f"line {at.line}" if at.file == design else f"{at.file}:{at.line}"
    return f"{_FORMS[output.form]}, {place}"


def _warnings(behaviour: Behaviour) -> str:
    count = len(behaviour.warnings)
    return "1 warning" if count == 1 else f"{count} warnings"


def _shares(count: OutputCounts, *, plain: bool) -> Iterator[str]:
    numbers = [count.one, count.zero, count.free, count.total]
    while not plain and not any(number & 1 for number in numbers):
        numbers = [number >> 1 for number in numbers]
    return map(str, numbers)


def _sources(count: OutputCounts, *, plain: bool) -> Iterator[str]:
    for reason, size in count.reasons:
        if plain:
            yield f"{_REASONS[reason]} {size}"
            continue
        top, bottom = size, count.total
        while not (top | bottom) & 1:
            top, bottom = top >> 1, bottom >> 1
        yield f"{_REASONS[reason]} {top}/{bottom}"


def _side(side: str, bits: Sequence[Input | Output]) -> Iterator[str]:
    """How many, and their names in order, the bits of a bus as one."""
    start = f"  {side:<7}  {len(bits):>2}  "
    for line in filled(_signals(bits), WIDTH - len(start)).split("\n"):
        yield start + line
        start = " " * len(start)


def _signals(bits: Sequence[Input | Output]) -> str:
    shown: list[str] = []
    groups: dict[str, list[Input | Output]] = {}
    for bit in bits:
        groups.setdefault(bit.name.partition("[")[0], []).append(bit)
    for name, group in groups.items():
        first, last = group[0].name, group[-1].name
        text = first
        if len(group) > 1:
            text = f"{name}[{first[len(name) + 1 : -1]}:{last[len(name) + 1 : -1]}]"
        shown.append(kept_together(f"{text} (active low)") if group[0].active_low else text)
    return ", ".join(shown)
