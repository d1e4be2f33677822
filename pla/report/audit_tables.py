"""The don't-care audit as tables."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.logic import algebra
from pla.report.cases import joined_cases
from pla.report.notation import groups_of, plural
from pla.report.table import Strip, Table
from pla.report.text import one_line
from pla.wording import listed

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.behaviour.model import Behaviour
    from pla.logic.cubes import Cube
    from pla.report.audit import AtImpossible, Level, Settled, Together
    from pla.report.gates import GroupPrice
    from pla.report.notation import Group

__all__ = ["detail_table", "enable_table", "summary_table", "together_table"]

_REASONS = {
    "never": "impossible",
    "others": "others",
    "x": "x in a row",
    "dont_care": "dont_care",
    "unused": "codes of no state",
    "elsewhere": "elsewhere",
}


def summary_table(
    behaviour: Behaviour, found: Sequence[Settled], prices: Sequence[GroupPrice]
) -> Table:
    """For each output how many combinations are open, and what became of them.

    Args:
        behaviour: The design.
        found: What `pla.report.audit.audit` found.
        prices: What demanded values cost.
    """
    demanded = [o for o in behaviour.outputs if o.impossible is not None]
    settled = len(behaviour.never) and demanded
    switched = any(output.enable for output in behaviour.outputs)
    rows = tuple(_summary_rows(behaviour, found)) if found or settled else ()
    width = None if switched else 5
    return Table(
        "Don't-care audit",
        ("output", "left open by", "combinations", "will be 1", "will be 0", "high impedance")[
            :width
        ],
        tuple(row[:width] for row in rows),
        aligned="llrrrr"[:width],
        lead=(
            (
                "Don't cares are freedom, not safety. Where the design leaves an output open, the "
                "minimizer took whatever saves terms, and the part will really do this. All values "
                "are asserted values."
            ),
        ),
        remarks=tuple(_remarks(behaviour, found, prices)),
        wrapped=(0,),
        repeated=1,
    )


def _summary_rows(behaviour: Behaviour, found: Sequence[Settled]) -> Iterator[tuple[str, ...]]:
    everywhere = algebra.size(behaviour.never)
    for j, output in enumerate(behaviour.outputs):
        own = [s for s in found if s.output == j]
        # Where the output is switched off no value is demanded.
        demanded = everywhere - sum(s.size for s in own if s.reason == "never")
        if output.impossible is not None and demanded:
            size = str(demanded)
            values = (size, "0") if output.impossible else ("0", size)
            yield output.name, f"impossible, demanded {output.impossible}", size, *values, "0"
        for reason in dict.fromkeys(s.reason for s in own):
            sizes = [
                sum(s.size for s in own if (s.reason, s.value) == (reason, value))
                for value in (1, 0, None)
            ]
            yield output.name, _REASONS[reason], str(sum(sizes)), *map(str, sizes)
        if not own and (output.impossible is None or not demanded):
            yield output.name, "nothing", "0", "0", "0", "0"


def _remarks(
    behaviour: Behaviour, found: Sequence[Settled], prices: Sequence[GroupPrice]
) -> Iterator[str]:
    if not found:
        yield "No output is left open anywhere: all that the part does is demanded by the design."
    yield from _while_disabled(behaviour)
    for price in prices if len(behaviour.never) else ():
        yield _price(behaviour.output_names, price)


def _while_disabled(behaviour: Behaviour) -> Iterator[str]:
    """One line for all outputs that have the same enable."""
    alike: dict[str, list[str]] = {}
    for output in behaviour.outputs:
        if output.enable is not None:
            alike.setdefault(output.enable.text, []).append(output.name)
    for text, names in alike.items():
        value = "its value" if len(names) == 1 else "their values"
        yield (
            f"{listed(names)} while disabled (enable {one_line(text)} is 0): high impedance, so "
            f"{value} there did not matter and {'is' if len(names) == 1 else 'are'} not listed."
        )


def _price(names: Sequence[str], found: GroupPrice) -> str:
    price, name = found.price, names[found.price.output]
    free = price.freed
    if free is None:
        return (
            f"What impossible = {price.demanded} of {name} costs was not computed: the design is "
            "wide, and its own number of terms not proven smallest."
        )
    cost = found.terms - free.terms
    costs = f"costs {plural(cost, 'term')}" if cost > 0 else "costs no term"
    doubt = "" if free.proven and found.proven else " (best sets found, not proven smallest)"
    who, care = ("its sum", "it") if found.alone else ("the design", name)
    return (
        f"impossible = {price.demanded} of {name} {costs}: {who} has {found.terms}, and would have "
        f"{free.terms} if {care} did not care about impossible inputs{doubt}."
    )


def enable_table(behaviour: Behaviour, found: Sequence[AtImpossible]) -> Table | None:
    """What outputs that can be switched off do at impossible inputs; ``None`` if there are none.

    Args:
        behaviour: The design.
        found: What `pla.report.audit.at_impossible` found.
    """
    if not any(output.enable for output in behaviour.outputs):
        return None
    groups = groups_of(behaviour.input_names)
    lead = (
        "A fight on a bus is not a don't care: where two parts drive one line, both can be "
        "damaged. This is what each output that can be switched off does at inputs that should "
        "never occur."
    )
    none = () if found else ("No input is impossible.",)
    return Table(
        "Enables at impossible inputs",
        ("output", "the pin", "combinations", "at inputs"),
        tuple(
            (
                behaviour.outputs[entry.output].name,
                "drives" if entry.drives else "high impedance",
                str(case.size),
                case.text,
            )
            for entry in found
            for case in joined_cases(entry.cubes, groups)
        ),
        aligned="llrl",
        lead=(lead, *none, *((_READING,) if found else ())),
        remarks=tuple(_both_ways(behaviour)),
        wrapped=(0, 3),
        repeated=2,
    )


def _both_ways(behaviour: Behaviour) -> Iterator[str]:
    pairs = [f"{o.reads} is {o.name}" for o in behaviour.outputs if o.reads is not None]
    if pairs:
        yield (
            f"Read at the pin that drives: {listed(pairs)} for as long as that is driven; "
            "combinations in which the two differ then cannot last."
        )


def detail_table(behaviour: Behaviour, found: Sequence[Settled]) -> Table:
    """Every open combination of every output once."""
    groups = groups_of(behaviour.input_names)
    return Table(
        "Don't cares one by one",
        ("output", "left open by", "will be", "combinations", "at inputs"),
        tuple(
            (
                behaviour.outputs[settled.output].name,
                _REASONS[settled.reason],
                _level(settled.value),
                str(case.size),
                case.text,
            )
            for settled in found
            for case in joined_cases(settled.cubes, groups)
        ),
        aligned="lllrl",
        lead=(_READING,) if found else ("There are none.",),
        wrapped=(0, 4),
        repeated=3,
    )


_READING = (
    "Signals that are not named may have any value. Numbers and ranges are those of the whole bus, "
    "a comma stands between several; in 0b… a - stands for either value."
)


def together_table(behaviour: Behaviour, together: Sequence[Together] | None) -> Table | None:
    """What all outputs do at open inputs, side by side; ``None`` if there are none.

    Args:
        behaviour: The design.
        together: What `pla.report.audit.open_together` found.
    """
    title = "Open inputs, all outputs"
    groups, outputs = groups_of(behaviour.input_names), groups_of(behaviour.output_names)
    headings = ("at inputs", *(group.name for group in outputs))
    aligned = "l" * len(headings)
    if together is None:
        remark = (
            "Left out: the outputs change too often among the open inputs to be listed side by "
            "side. Each output by itself is listed above."
        )
        return Table(title, headings, (), aligned, lead=(remark,))
    if not together:
        return None
    alike: dict[tuple[Level, ...], list[Cube]] = {}
    for entry in together:
        alike.setdefault(entry.values, []).append(entry.cube)
    cases = [
        (case, values) for values, cubes in alike.items() for case in joined_cases(cubes, groups)
    ]
    cases.sort(key=lambda found: found[0].lowest)
    rows = [(case.text, *_output_values(values, outputs)) for case, values in cases]
    return Table(
        title,
        headings,
        tuple(rows),
        aligned,
        lead=(
            (
                "Every input combination that is impossible, or at which some output is open, with "
                "the values that are demanded there as well: what to expect in a test."
            ),
            *((_IMPEDANCE,) if any(None in values for _, values in cases) else ()),
        ),
        strips=tuple(
            Strip(column, group.name, ("",), 1)
            for column, group in enumerate(outputs, 1)
            if not group.bits
        ),
        wrapped=(0,),
    )


_IMPEDANCE = "Z: high impedance, the part does not drive the pin."


def _output_values(values: Sequence[Level], outputs: Sequence[Group]) -> Iterator[str]:
    bits = "".join(map(_level, values))
    for group in outputs:
        own = bits[group.first : group.first + group.size]
        yield f"0b{own}" if group.bits else own


def _level(value: Level) -> str:
    return "Z" if value is None else str(value)
