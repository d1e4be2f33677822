"""Why some output can be on no cell at all."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING, TypeAlias

from pla.fitting.crowding import listed
from pla.fitting.spots import Spots

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.device.model import Enable
    from pla.fitting.netlist import Net
    from pla.fitting.problem import Problem
    from pla.fitting.scenario import Scenario, Switch

__all__ = ["Ways", "barred_reasons", "offered"]

Ways: TypeAlias = "Sequence[tuple[Scenario, frozenset[int]]]"
"""What could be decided beforehand."""


def offered(problem: Problem, ways: Ways, net: Net) -> list[bool]:
    """The polarities that some cell offers a net, whatever room it has: ``True`` complemented."""
    return [
        c
        for c in problem.polarities(net)
        if any(Spots(problem, s, g).of_net(net, c, {}, room=False) for s, g in ways)
    ]


def barred_reasons(problem: Problem, ways: Ways) -> Iterator[str]:
    """Outputs without a polarity; those with the same trouble in one sentence."""
    barred = [net for net in problem.netlist.nets if not offered(problem, ways, net)]
    troubles: dict[str, list[str]] = {}
    plain: list[Net] = []
    for net in barred:
        trouble = _trouble(problem, ways, net)
        if trouble is None:
            plain.append(net)
        else:
            troubles.setdefault(trouble, []).append(net.name)
    yield from (trouble.format(listed(names)) for trouble, names in troubles.items())
    if not plain:
        return
    which = f"output{'s' if len(plain) > 1 else ''} {', '.join(net.name for net in plain)}"
    free = replace(problem, wish="free")
    if problem.wish == "true" and all(offered(free, ways, net) for net in plain):
        yield (
            f"{which} can only be realised by a complemented sum, which --polarity true rules out"
        )
    else:
        yield f"no cell can show {which} with the active level that the design asks for"


def _trouble(problem: Problem, ways: Ways, net: Net) -> str | None:
    """Why its enable, or that its pin is read, rules out every cell; {} stands for its name."""
    if net.enable is not None and problem.enables[net.index] is None:
        needed = problem.minima.enable(problem.netlist, net.index)
        least = "" if needed.proven else f" (at least {needed.lower_bound} are needed)"
        if not _has_enables(problem):
            return "no cell has an output enable, which {} would need"
        return (
            f"the enable of {{}} needs {needed.count} product terms{least}, and no cell has more "
            "than one for it"
        )
    placed = problem.place_of(net)
    where = "no cell" if placed is None else f"the cell on pin {placed} does not"
    if net.reads is not None and offered(problem, ways, replace(net, reads=None)):
        verb = "reads" if placed is None else "read"
        return f"{where} {verb} its pin back, as is asked for {{}}"
    if net.enable is not None and offered(problem, ways, replace(net, enable=None, reads=None)):
        pins, switch = problem.device.enable_pins, problem.switches[net.index]
        if not _has_enables(problem):
            return "no cell has an output enable, which {} would need"
        if pins and switch is None:
            named = f"pin {pins[0]}" if len(pins) == 1 else f"pins {listed(list(map(str, pins)))}"
            return (
                f"the enable of {{}} is not one input alone, and cells are enabled by {named} only"
            )
        if switch is not None and _wrong_level(problem, switch):
            name = problem.netlist.design.inputs[switch.index].name
            high = switch.value != problem.netlist.design.inputs[switch.index].active_low
            level, other = ("high", "low") if high else ("low", "high")
            return (
                f"{{}} drives while the pin of {name} is {level}, and cells are enabled only while "
                f"their enable pin is {other}"
            )
        verb = "has" if placed is None else "have"
        return f"{where} {verb} an output enable that {{}} could use"
    return None


def _enables(problem: Problem) -> list[Enable]:
    return [
        mode.enable
        for cell in problem.device.cells
        for mode in cell.modes
        if mode.pin != "none" and mode.enable.kind != "always"
    ]


def _has_enables(problem: Problem) -> bool:
    return bool(_enables(problem))


def _wrong_level(problem: Problem, switch: Switch) -> bool:
    """Whether an input would enable at the other level only than every enable pin."""
    enables = _enables(problem)
    active_low = switch.value == problem.netlist.design.inputs[switch.index].active_low
    return all(e.kind == "pin" and e.active_low != active_low for e in enables)
