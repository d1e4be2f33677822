"""The don't-care audit as tables."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.logic import algebra
from pla.report.cases import joined_cases
from pla.report.notation import groups_of, plural
from pla.report.table import Strip, Table

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.behaviour.model import Behaviour
    from pla.fitting.prices import SafetyPrice
    from pla.logic.cubes import Cube
    from pla.logic.minimize import Minimum
    from pla.report.audit import Settled, Together
    from pla.report.notation import Group

__all__ = ["detail_table", "summary_table", "together_table"]

_REASONS = {
    "never": "impossible",
    "others": "others",
    "x": "x in a row",
    "dont_care": "dont_care",
    "elsewhere": "elsewhere",
}


def summary_table(
    behaviour: Behaviour, found: Sequence[Settled], prices: Sequence[SafetyPrice], minimum: Minimum
) -> Table:
    """For each output how many combinations are open, and what became of them.

    Args:
        behaviour: The design.
        found: What `pla.report.audit.audit` found.
        prices: What demanded values cost.
        minimum: The terms of the design as it is.
    """
    demanded = [o for o in behaviour.outputs if o.impossible is not None]
    settled = len(behaviour.never) and demanded
    return Table(
        "Don't-care audit",
        ("output", "left open by", "combinations", "will be 1", "will be 0"),
        tuple(_summary_rows(behaviour, found)) if found or settled else (),
        aligned="llrrr",
        lead=(
            (
                "Don't cares are freedom, not safety. Where the design leaves an output open, the "
                "minimizer took whatever saves terms, and the part will really do this. All values "
                "are asserted values."
            ),
        ),
        remarks=tuple(_remarks(behaviour, found, prices, minimum)),
        wrapped=(0,),
        repeated=1,
    )


def _summary_rows(
    behaviour: Behaviour, found: Sequence[Settled]
) -> Iterator[tuple[str, str, str, str, str]]:
    impossible = algebra.size(behaviour.never)
    for j, output in enumerate(behaviour.outputs):
        own = [s for s in found if s.output == j]
        if output.impossible is not None and impossible:
            size = str(impossible)
            demanded = (size, "0") if output.impossible else ("0", size)
            yield output.name, f"impossible, demanded {output.impossible}", size, *demanded
        for reason in dict.fromkeys(s.reason for s in own):
            sizes = [sum(s.size for s in own if (s.reason, s.value) == (reason, v)) for v in (0, 1)]
            yield output.name, _REASONS[reason], str(sum(sizes)), str(sizes[1]), str(sizes[0])
        if not own and (output.impossible is None or not impossible):
            yield output.name, "nothing", "0", "0", "0"


def _remarks(
    behaviour: Behaviour, found: Sequence[Settled], prices: Sequence[SafetyPrice], minimum: Minimum
) -> Iterator[str]:
    if not found:
        yield "No output is left open anywhere: all that the part does is demanded by the design."
    for price in prices:
        yield _price(behaviour.outputs[price.output].name, price, minimum)


def _price(name: str, price: SafetyPrice, minimum: Minimum) -> str:
    free = price.freed
    if free is None:
        return (
            f"What impossible = {price.demanded} of {name} costs was not computed: the design is "
            "wide, and its own number of terms not proven smallest."
        )
    cost = minimum.count - free.terms
    costs = f"costs {plural(cost, 'term')}" if cost > 0 else "costs no term"
    doubt = "" if free.proven and minimum.proven else " (best sets found, not proven smallest)"
    return (
        f"impossible = {price.demanded} of {name} {costs}: the design has {minimum.count}, and "
        f"would have {free.terms} if {name} did not care about impossible inputs{doubt}."
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
                str(settled.value),
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
    alike: dict[tuple[int, ...], list[Cube]] = {}
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
        ),
        strips=tuple(
            Strip(column, group.name, ("",), 1)
            for column, group in enumerate(outputs, 1)
            if not group.bits
        ),
        wrapped=(0,),
    )


def _output_values(values: Sequence[int], outputs: Sequence[Group]) -> Iterator[str]:
    bits = "".join(map(str, values))
    for group in outputs:
        own = bits[group.first : group.first + group.size]
        yield f"0b{own}" if group.bits else own
