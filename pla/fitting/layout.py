"""Outputs, inner signals and inputs on cells and pins, in the cheapest way."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.fitting.assignment import cheapest_assignment
from pla.fitting.matching import can_match
from pla.fitting.minima import joined_minimum
from pla.fitting.spots import Spots
from pla.logic.cubes import Cover
from pla.logic.phases import Polarity

if TYPE_CHECKING:
    from collections.abc import Hashable, Iterable, Mapping, Sequence

    from pla.device.model import Mode, Source
    from pla.fitting.netlist import Net
    from pla.fitting.offers import Needs
    from pla.fitting.problem import Problem
    from pla.fitting.scenario import Scenario
    from pla.fitting.spots import Resource, Spot
    from pla.logic.minimize import Minimum
    from pla.logic.relaxation import Decisions
    from pla.logic.search import Feasible

__all__ = ["Layout", "joint_minimum", "layout", "literals_of"]

Options = dict[int, dict[bool, "dict[Resource, Spot]"]]
"""For each net and polarity its spots."""

_NO_PIN = "no pin"


@dataclass(frozen=True)
class Layout:
    """Everything in its place.

    Attributes:
        problem: What was laid out.
        scenario: What was decided beforehand.
        minimum: All terms; those of own OR gates feed one output each.
        shared: Nets on the shared OR array.
        spots: For each net its cell.
        input_pins: For each input that has a pin of its own, this pin.
        input_modes: For the key of each cell whose pin serves as an input, its mode.
    """

    problem: Problem
    scenario: Scenario
    minimum: Minimum
    shared: frozenset[int]
    spots: tuple[Spot, ...]
    input_pins: Mapping[int, int]
    input_modes: Mapping[Source, Mode]


@dataclass(frozen=True, slots=True)
class _Assigned:
    complemented: dict[int, bool]
    spots: dict[int, Spot]
    input_pins: dict[int, int]
    input_modes: dict[Source, Mode]


def layout(problem: Problem, scenario: Scenario, shared: frozenset[int]) -> Layout | None:
    """The cheapest layout with these nets on the shared OR array; ``None`` if there is none.

    Cheapest is, one behind the other: fewest terms, fewest connections, fewest inputs without a
    pin, fewest inputs on pins of cells and inner signals that show, lowest pins in order of the
    outputs and then of the inputs.
    """
    spots = Spots(problem, scenario, shared)
    nets = problem.netlist.nets
    polarities = {net.index: problem.polarities(net) for net in nets}
    joint: Minimum | None = None
    if shared:
        joint = joint_minimum(spots)
        if joint is None or joint.count > len(problem.device.shared_rows):
            return None
        polarities.update({j: (joint.complemented[j],) for j in shared})
    # Every sum that a net could have is asked for its literals; those it gets may need fewer.
    own = [net for net in nets if net.index not in shared]
    possible = [problem.alone(net, c).cover for net in own for c in polarities[net.index]]
    covers = [joint.cover] if joint else []
    first = _assigned(spots, polarities, literals_of(problem, [*covers, *possible]))
    if first is None:
        first = _assigned(spots, polarities, literals_of(problem, covers))
    if first is None:
        return None
    polarities = {j: (c,) for j, c in first.complemented.items()}
    parts = [joint] if joint else []
    parts += [problem.alone(net, first.complemented[net.index]) for net in own]
    needs = literals_of(problem, [part.cover for part in parts], scenario, first.spots)
    final = _assigned(spots, polarities, needs)
    if final is None:
        return None
    return Layout(
        problem,
        scenario,
        joined_minimum(problem.netlist, parts),
        shared,
        tuple(final.spots[net.index] for net in nets),
        final.input_pins | spots.carried,
        final.input_modes,
    )


def literals_of(
    problem: Problem,
    covers: Iterable[Cover],
    scenario: Scenario | None = None,
    spots: Mapping[int, Spot] | None = None,
) -> dict[int, frozenset[bool]]:
    """For each input the literals that terms and enable rows have of it.

    Args:
        problem: What is laid out.
        covers: The terms.
        scenario: What is decided.
        spots: Where the nets are; without it an enable that is one input alone is left out, since
            a pin may carry it.
    """
    rows = Cover.of(len(problem.netlist.behaviour.inputs), [])
    cubes = [
        (cube.ones, cube.zeros, 1)
        for net, cube in zip(problem.netlist.nets, problem.enables, strict=True)
        if cube is not None
        and (
            problem.switches[net.index] is None
            if spots is None or scenario is None
            else scenario.drive(spots[net.index].mode) == "row"
        )
    ]
    every = [*covers, Cover.of(rows.n_inputs, cubes)]
    ones = zeros = 0
    for cover in every:
        for cube in cover:
            ones |= cube.ones
            zeros |= cube.zeros
    return {
        i: frozenset(sense for sense, mask in ((True, ones), (False, zeros)) if mask >> i & 1)
        for i in range(rows.n_inputs)
    }


def joint_minimum(spots: Spots, *, pins: bool = True) -> Minimum | None:
    """The smallest set of terms for the nets on the shared OR array; ``None`` if they never fit.

    Args:
        spots: Where the signals could be.
        pins: Whether the inputs have to find pins besides.
    """
    problem = spots.problem
    options: Options = {
        net.index: {c: spots.of_net(net, c, {}) for c in problem.polarities(net)}
        for net in problem.netlist.nets
    }
    group = sorted(spots.shared)
    if not all(any(own.values()) for own in options.values()):
        return None
    inputs = [
        set(spots.of_input(i, frozenset()))
        for i in spots.inputs
        if pins and (i in problem.placed_inputs or i in problem.netlist.essential)
    ]
    feasible = _feasible(spots, options, group, inputs)
    if not feasible((None,) * len(group)):
        return None
    allowed = [Polarity(bool(options[j].get(False)), bool(options[j].get(True))) for j in group]
    tied = any(
        set(options[j][False]) != set(options[j][True])
        for j, polarity in zip(group, allowed, strict=True)
        if polarity.true and polarity.complement
    )
    return problem.minima.joint(
        problem.netlist,
        group,
        allowed,
        feasible if tied else None,
        _ties(options, inputs) if tied else None,
    )


def _feasible(
    spots: Spots, options: Options, group: Sequence[int], inputs: Sequence[set[Resource]]
) -> Feasible:
    """Whether polarities of the group, as far as decided, leave a place to every signal."""
    ranks = spots.ranks
    others = [
        sorted({ranks[r] for own in options[j].values() for r in own})
        for j in options
        if j not in group
    ]
    pins = [sorted(ranks[r] for r in own) for own in inputs]
    by_polarity = {
        j: {
            None: sorted({ranks[r] for own in options[j].values() for r in own}),
            **{c: sorted(ranks[r] for r in own) for c, own in options[j].items()},
        }
        for j in group
    }

    def feasible(decisions: Decisions, /) -> bool:
        own = [by_polarity[j].get(d, []) for j, d in zip(group, decisions, strict=True)]
        return can_match([*own, *others, *pins])

    return feasible


def _ties(options: Options, inputs: Sequence[set[Resource]]) -> Hashable:
    """What `_feasible` depends on: equal for devices that tie polarities alike."""
    resources: set[Resource] = {
        r for own in options.values() for found in own.values() for r in found
    }
    resources = resources.union(*inputs)
    wanted = [set(found) for own in options.values() for found in own.values()]
    takers = [tuple(r in own for own in (*wanted, *inputs)) for r in resources]
    return tuple(sorted(takers))


def _assigned(
    spots: Spots, polarities: Mapping[int, Sequence[bool]], needs: Needs
) -> _Assigned | None:
    """The cheapest assignment in which each net has one of these polarities.

    Where some input goes without a pin, those that are needed take the lowest pins.
    """
    found = _in_order(spots, polarities, needs, spots.inputs)
    if found is None or len(found.input_pins) == len(spots.inputs):
        return found
    return _in_order(spots, polarities, needs, sorted(spots.inputs, key=lambda i: not needs[i]))


def _most_links(spots: Spots, net: Net, polarities: Sequence[bool]) -> int:
    """Connections of a sum of its own, in the polarity that takes more."""
    if net.index in spots.shared:
        return 0
    return max(spots.problem.alone(net, c).cover.links for c in polarities)


def _in_order(
    spots: Spots,
    polarities: Mapping[int, Sequence[bool]],
    needs: Needs,
    inputs: Sequence[int],
) -> _Assigned | None:
    problem, nets = spots.problem, spots.problem.netlist.nets
    if not all(spots.carries(pin, i, needs[i]) for i, pin in spots.carried.items()):
        return None
    members = len(nets) + len(inputs)
    # Costs of lower rank never add up to one of higher rank.
    base = len(spots.ranks) + len(inputs) + 1
    unit = base**members
    absent = unit * (2 * members + 1)
    per_link = absent * (members + 1)
    per_term = per_link * (1 + sum(_most_links(spots, net, polarities[net.index]) for net in nets))
    costs: list[dict[Resource, int]] = []
    chosen: list[dict[Resource, tuple[bool, Spot]]] = []
    for place, net in enumerate(nets):
        weight = base ** (members - 1 - place)
        best: dict[Resource, int] = {}
        how: dict[Resource, tuple[bool, Spot]] = {}
        for c in polarities[net.index]:
            found = spots.of_net(net, c, needs)
            price = 0
            if found and net.index not in spots.shared:
                cover = problem.alone(net, c).cover
                price = len(cover) * per_term + cover.links * per_link
            for resource, spot in found.items():
                cost = price + spot.shows * unit + spots.ranks[resource] * weight
                if cost < best.get(resource, cost + 1):
                    best[resource], how[resource] = cost, (c, spot)
        costs.append(best)
        chosen.append(how)
    modes: list[dict[Resource, Mode | None]] = []
    for place, i in enumerate(inputs, len(nets)):
        weight = base ** (members - 1 - place)
        pins = spots.of_input(i, needs[i])
        found_costs = {
            pin: (unit if mode is not None else 0) + spots.ranks[pin] * weight
            for pin, mode in pins.items()
        }
        if not needs[i] and i not in problem.placed_inputs:
            found_costs[_NO_PIN, i] = absent + (base - 1) * weight
        costs.append(found_costs)
        modes.append(pins)
    assigned = cheapest_assignment(costs)
    if assigned is None:
        return None
    on_cells, on_pins = assigned[: len(nets)], assigned[len(nets) :]
    picked = [how[r] for how, r in zip(chosen, on_cells, strict=True)]
    cell_of = problem.device.cell_of_pin
    return _Assigned(
        {net.index: c for net, (c, _) in zip(nets, picked, strict=True)},
        {net.index: spot for net, (_, spot) in zip(nets, picked, strict=True)},
        {i: pin for i, pin in zip(inputs, on_pins, strict=True) if isinstance(pin, int)},
        {
            cell_of[pin].key: mode
            for pin, own in zip(on_pins, modes, strict=True)
            if isinstance(pin, int) and (mode := own[pin]) is not None
        },
    )
