"""The best of all ways to lay out a design on a device."""

from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import product
from typing import TYPE_CHECKING

from pla.fitting.barred import offered
from pla.fitting.delays import late_outputs
from pla.fitting.layout import layout
from pla.fitting.netlist import choices, restrictions
from pla.fitting.placing import plan_of
from pla.fitting.scenario import has_single_lines, scenarios, taken_apart
from pla.fitting.spots import Spots
from pla.logic.phases import Polarity

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.fitting.layout import Layout
    from pla.fitting.netlist import Netlist
    from pla.fitting.problem import Problem
    from pla.fitting.scenario import Scenario

__all__ = ["Found", "best_layout", "ways"]

_MOST_FLEXIBLE = 6


@dataclass(frozen=True, slots=True)
class Found:
    """A layout and how it compares: late outputs, terms, passes, signals fed back, connections."""

    layout: Layout
    rank: tuple[int, int, int, int, int]


def best_layout(problem: Problem) -> Found | None:
    """The best layout of a design over all signals that could be fed back; ``None`` if none fits.

    Args:
        problem: The design with nothing fed back.
    """
    design, device, minima = problem.netlist.design, problem.device, problem.minima
    if len(design.outputs) > len(device.output_pins):
        return None
    best: Found | None = None
    for chosen in choices(design):
        nets = minima.netlist(design, chosen)
        found = _of(problem, nets, best)
        if found is None and nets is not None and chosen and has_single_lines(device):
            for restriction in restrictions(chosen):
                tried = _of(problem, minima.netlist(design, chosen, restriction), best)
                found = _better(found, tried)
            if found is not None:
                found = replace(found, layout=_with_honest_bound(found.layout, nets))
        best = _better(best, found)
    return best


def ways(problem: Problem) -> Iterator[tuple[Scenario, frozenset[int]]]:
    """All decisions to be made beforehand: enable pins and so on, and nets for shared OR gates."""
    switches = [switch for switch in problem.switches if switch is not None]
    found = scenarios(problem.device, problem.netlist.design, switches, problem.placed_inputs)
    for scenario in found:
        for shared in _partitions(problem, scenario):
            yield scenario, shared


def _of(problem: Problem, nets: Netlist | None, known: Found | None) -> Found | None:
    """The best layout of one netlist; ``None`` if there is none that could beat a known one."""
    if nets is None:
        return None
    own = replace(problem, netlist=nets)
    if any(
        net.enable is not None and cube is None
        for net, cube in zip(nets.nets, own.enables, strict=True)
    ):
        return None
    inner = sum(net.inner for net in nets.nets)
    best: Found | None = None
    for scenario, shared in ways(own):
        if not _hopeless(own, shared, _better(known, best)):
            best = _better(best, _judged(layout(own, scenario, shared)))
    if best is None and inner:
        for scenario, shared in ways(own):
            if _hopeless(own, shared, _better(known, best)):
                continue
            for apart in taken_apart(scenario, inner):
                best = _better(best, _judged(layout(own, apart, shared)))
    return best


def _with_honest_bound(found: Layout, netlist: Netlist) -> Layout:
    """A layout whose nets read signals in one sense only, with the bound of all layouts.

    Its own bound holds for the polarities that go with that sense.

    Args:
        found: The layout.
        netlist: The same signals fed back, in both senses.
    """
    problem = replace(found.problem, netlist=netlist)
    every = list(ways(problem))
    allowed = [offered(problem, every, n) or problem.polarities(n) for n in netlist.nets]
    bound = 0
    for net, own in zip(netlist.nets, allowed, strict=True):
        if net.index not in found.shared:
            bound += min(problem.alone(net, c).lower_bound for c in own)
    if found.shared:
        group = sorted(found.shared)
        polarities = [Polarity(False in allowed[j], True in allowed[j]) for j in group]
        bound += problem.minima.joint(netlist, group, polarities, None, None).lower_bound
    minimum = found.minimum
    if bound >= minimum.lower_bound:
        return found
    return replace(
        found, minimum=replace(minimum, lower_bound=bound, proven_by=None, connections=None)
    )


def _hopeless(problem: Problem, shared: frozenset[int], known: Found | None) -> bool:
    """Whether the sums alone take more terms than a known layout that is not late."""
    if known is None or known.rank[0]:
        return False
    own, joint = 0, [0]
    for net in problem.netlist.nets:
        sums = [problem.alone(net, c) for c in problem.polarities(net)]
        if net.index in shared:
            joint.append(min(found.lower_bound for found in sums))
        else:
            own += min(found.count for found in sums)
    return own + max(joint) > known.rank[1]


def _judged(found: Layout | None) -> Found | None:
    if found is None:
        return None
    plan = plan_of(found)
    late, passes = len(late_outputs(plan)), max(plan.passes, default=0)
    minimum, fed = found.minimum, len(found.problem.netlist.fed)
    return Found(found, (late, minimum.count, passes, fed, minimum.cover.links))


def _better(one: Found | None, other: Found | None) -> Found | None:
    """The first where they are equal."""
    if one is None or other is None:
        return one or other
    return other if other.rank < one.rank else one


def _partitions(problem: Problem, scenario: Scenario) -> list[frozenset[int]]:
    """Which nets go onto the shared OR array, all of them first.

    Where a device has both kinds of OR gates: all ways where few nets could be on either; where
    many, those in which the nets with the largest or with the smallest sums share.
    """
    everyone = frozenset(range(len(problem.netlist.nets)))
    device = problem.device
    own_cells = [cell for cell in device.cells if cell.key not in device.or_column]
    if not own_cells:
        return [everyone]
    if not device.or_column:
        return [frozenset()]
    forced: set[int] = set()
    flexible: list[int] = []
    for net in problem.netlist.nets:
        by_class = [
            any(Spots(problem, scenario, group).of_net(net, c, {}) for c in problem.polarities(net))
            for group in (frozenset(), everyone)
        ]
        if all(by_class):
            flexible.append(net.index)
        elif by_class[1]:
            forced.add(net.index)
    if len(flexible) <= _MOST_FLEXIBLE:
        ways_to_share = product((True, False), repeat=len(flexible))
        picked = [[j for j, yes in zip(flexible, way, strict=True) if yes] for way in ways_to_share]
    else:
        nets = problem.netlist.nets
        ordered = sorted(
            flexible,
            key=lambda j: min(problem.alone(nets[j], c).count for c in problem.polarities(nets[j])),
        )
        picked = [part for k in range(len(ordered) + 1) for part in (ordered[k:], ordered[:k])]
    return list(dict.fromkeys(frozenset(forced.union(part)) for part in picked))
