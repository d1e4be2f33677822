"""What a design asks for, for people."""

from __future__ import annotations

from typing import TYPE_CHECKING, TypeVar

from pla.behaviour.model import Inner, Input, Output
from pla.logic import algebra
from pla.report.behaviour_counts import OutputCounts, count_outputs
from pla.report.clocked import register_table, state_tables
from pla.report.delays import nanoseconds
from pla.report.layout import WIDTH, broken, drawn
from pla.report.table import Table
from pla.report.text import filled, kept_together, one_line
from pla.wording import spans

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.behaviour.model import Behaviour, Enabling
    from pla.report.clocked import Bits

__all__ = ["behaviour_text"]

Bit = Input | Output | Inner
AnyBit = TypeVar("AnyBit", bound=Bit)

MAX_PLAIN = 1 << 24
"""Up to so many combinations numbers are shown as they are; above, as shares."""

_NAME = 40  # a longer name of an output is broken into lines

_FORMS = {
    "cases": "table",
    "minterms": "minterm list",
    "logic": "equation",
    "address_map": "address map",
    "state_table": "state table",
}
_REASONS = {
    "never": "impossible",
    "others": "others",
    "x": "rows with x",
    "dont_care": "dont_care",
    "elsewhere": "elsewhere",
    "unused": "codes of no state",
    "disabled": "disabled",
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
    present = [i for i in behaviour.inputs if i.present_of is not None]
    what = "Combinations of inputs and present values" if present else "Input combinations"
    lines = [
        title,
        "",
        *_side("inputs", [i for i in behaviour.inputs if i.present_of is None]),
        *_side("outputs", behaviour.outputs),
        *(_side("inner", behaviour.inner) if behaviour.inner else ()),
        *(_side("present", present) if present else ()),
        *_demands(behaviour),
        "",
        f"{what} that ask for 1, for 0 and for nothing, of {total} in all"
        + ("." if plain else ";"),
        *([] if plain else ["each row is reduced to the smallest power of two that shows it."]),
        "",
        *(line.rstrip() for line in table.split("\n")),
        "",
        *(line for table in _more_tables(behaviour) for line in (*drawn(table).split("\n"), "")),
        *(_clocked(behaviour) if present else ()),
        "No errors." if not behaviour.warnings else f"No errors, {_warnings(behaviour)}.",
    ]
    return "\n".join(lines)


def _clocked(behaviour: Behaviour) -> Iterator[str]:
    """Registers and state tables."""
    yield filled(
        "For a registered signal the table says what its next value is; the present value is "
        "among the inputs, and its name means that one wherever it is looked at."
    )
    yield ""
    registers = register_table(behaviour, lambda bits: _all_described(bits, behaviour.file))
    for table in (registers, *state_tables(behaviour)):
        yield drawn(table)
        yield ""
        if table.remarks:
            yield from (filled(remark) for remark in table.remarks)
            yield ""


def _described(bit: Output | Inner, design: str) -> str:
    at = bit.described
    place = f"line {at.line}" if at.file == design else f"{at.file}:{at.line}"
    return f"{_FORMS[bit.form]}, {place}"


def _all_described(bits: Bits, design: str) -> str:
    """Where several bits are described, in one breath where the file and the form are the same."""
    places = {(bit.form, bit.described.file) for bit in bits}
    lines = sorted({bit.described.line for bit in bits if bit.described.line is not None})
    if len(places) > 1 or len(lines) < 2 or bits[0].described.file != design:
        return ", ".join(dict.fromkeys(_described(bit, design) for bit in bits))
    return f"{_FORMS[bits[0].form]}, lines {spans(lines)}"


def _demands(behaviour: Behaviour) -> Iterator[str]:
    """What is asked of the device as a whole."""
    if behaviour.signature is not None:
        yield f"  signature    {behaviour.signature}"
    if behaviour.max_delay is not None:
        yield f"  longest delay of any output  {nanoseconds(behaviour.max_delay)}"


def _more_tables(behaviour: Behaviour) -> Iterator[Table]:
    """Inner signals, and what is special about pins; nothing if there is nothing."""
    inner_signals = [inner for inner in behaviour.inner if inner.register is None]
    if inner_signals:
        named_in: dict[str, list[str]] = {}
        for name, others in behaviour.named.items():
            for other in others:
                named_in.setdefault(other, []).append(name)
        yield Table(
            "",
            ("inner signal", "described by", "named by"),
            tuple(
                (
                    inner.name,
                    _described(inner, behaviour.file),
                    ", ".join(named_in.get(inner.name, ["nothing"])),
                )
                for inner in inner_signals
            ),
            aligned="lll",
            wrapped=(0, 2),
        )
    rows = []
    for group in _groups(behaviour.outputs):
        first = group[0]
        if first.enable is None and first.max_delay is None:
            continue
        read = [i for i in behaviour.inputs if i.read_from in [o.name for o in group]]
        rows.append(
            (
                _span(group),
                _enable(first.enable) if first.enable else "always",
                _span(read) if read else "–",
                nanoseconds(first.max_delay) if first.max_delay else "–",
            )
        )
    if rows:
        headings = ("output", "drives its pin while", "its pin is read as", "longest delay")
        yield Table("", headings, tuple(rows), aligned="lllr", wrapped=(0, 1, 2))


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


def _enable(enable: Enabling) -> str:
    known = algebra.is_tautology(enable.on + enable.off)
    return one_line(enable.text) + ("" if known else "; free at impossible inputs")


def _side(side: str, bits: Sequence[Bit]) -> Iterator[str]:
    """How many, and their names in order, the bits of a bus as one."""
    start = f"  {side:<7}  {len(bits):>2}  "
    for line in filled(_signals(bits), WIDTH - len(start)).split("\n"):
        yield start + line
        start = " " * len(start)


def _signals(bits: Sequence[Bit]) -> str:
    shown: list[str] = []
    for group in _groups(bits):
        text = _span(group)
        low = not isinstance(group[0], Inner) and group[0].active_low
        shown.append(kept_together(f"{text} (active low)") if low else text)
    return ", ".join(shown)


def _groups(bits: Sequence[AnyBit]) -> list[list[AnyBit]]:
    """The bits of each signal."""
    groups: dict[str, list[AnyBit]] = {}
    for bit in bits:
        groups.setdefault(bit.name.partition("[")[0], []).append(bit)
    return list(groups.values())


def _span(group: Sequence[Bit]) -> str:
    """A signal, or a bus with its ends: ``step[3:0]``."""
    first, last = group[0].name, group[-1].name
    name = first.partition("[")[0]
    if len(group) == 1:
        return first
    return f"{name}[{first[len(name) + 1 : -1]}:{last[len(name) + 1 : -1]}]"
