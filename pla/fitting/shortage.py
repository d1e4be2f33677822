"""Why a design does not fit a device, in sentences, and what it lacks."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

from pla.fitting.assignment import cheapest_assignment
from pla.fitting.barred import barred_reasons, offered
from pla.fitting.crowding import choices_of, crowd_of, joined_choices, listed
from pla.fitting.layout import joint_minimum, literals_of
from pla.fitting.minima import joined_minimum
from pla.fitting.spots import Spots
from pla.logic.phases import Polarity

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.fitting.crowding import Choices, Crowd
    from pla.fitting.netlist import Net
    from pla.fitting.problem import Problem
    from pla.fitting.scenario import Scenario
    from pla.fitting.spots import Resource
    from pla.logic.minimize import Minimum

__all__ = ["Shortage"]


@dataclass(frozen=True)
class Shortage:
    """What stands in the way of a design with nothing fed back.

    Attributes:
        problem: The design and the device.
        ways: What could be decided beforehand.
    """

    problem: Problem
    ways: Sequence[tuple[Scenario, frozenset[int]]]

    @cached_property
    def reasons(self) -> tuple[str, ...]:
        """One sentence each; never empty."""
        found = [
            *barred_reasons(self.problem, self.ways),
            *self._shared_terms(),
            *self._own_terms(),
        ]
        found += [*self._too_many_inputs(), *self._too_many_outputs()]
        if not found:
            found += self._carried_in_vain() or self._crowded()
        if not found and self._left_over is not None:
            found.append(self._left_over[1])
        if not found:
            found += self._crowded_somehow()
        return tuple(found) or ("no way was found to put all signals in their places",)

    @cached_property
    def polarities(self) -> tuple[Polarity | None, ...]:
        """What each output may be realised as on some cell that it could have."""
        return tuple(
            Polarity(False in offered, True in offered) if offered else None
            for offered in (self._offered(net) for net in self.problem.netlist.nets)
        )

    @cached_property
    def minimum(self) -> Minimum | None:
        """The smallest sums; ``None`` if some output has no polarity left."""
        problem = self.problem
        if None in self.polarities:
            return None
        shared = self._sharing
        parts = []
        if shared:
            spots = [self._spots(s, g) for s, g in self.ways if g == shared]
            known = [c for own in spots if (c := joint_minimum(own)) is not None]
            # Where the inputs are too many, what the outputs need is of interest all the same.
            known = known or [c for s in spots if (c := joint_minimum(s, pins=False)) is not None]
            if known:
                parts.append(min(known, key=lambda m: m.count))
            elif self._overcrowded:
                group = sorted(shared)
                polarities = [p for j in group if (p := self.polarities[j]) is not None]
                parts.append(problem.minima.joint(problem.netlist, group, polarities, None, None))
            else:
                return self._smallest_of_any_sharing()
        return joined_minimum(problem.netlist, [*parts, *self._alone(shared)])

    def _alone(self, shared: frozenset[int]) -> list[Minimum]:
        """The smallest sums of the nets that do not share."""
        return [
            min((self.problem.alone(net, c) for c in self._offered(net)), key=lambda m: m.count)
            for net in self.problem.netlist.nets
            if net.index not in shared
        ]

    def _smallest_of_any_sharing(self) -> Minimum | None:
        """The smallest sums over all that a device with both kinds of gates could share."""
        found = []
        for scenario, shared in self.ways:
            joint = joint_minimum(self._spots(scenario, shared), pins=False) if shared else None
            if joint is not None:
                parts = [joint, *self._alone(shared)]
                found.append(joined_minimum(self.problem.netlist, parts))
        return min(found, key=lambda m: m.count) if found else None

    @cached_property
    def lacking(self) -> int:
        """Terms that are missing in all; 0 if that is not the trouble."""
        if self.minimum is None:
            return 0
        return min(self._short_by(scenario, shared) for scenario, shared in self.ways)[1]

    def _short_by(self, scenario: Scenario, shared: frozenset[int]) -> tuple[bool, int]:
        """Terms that are missing once these nets share, with the others on the best cells.

        Before it, whether that is no more than a guess, as the others cannot all have cells.
        """
        problem, spots = self.problem, self._spots(scenario, shared)
        over, guessed = 0, False
        if shared:
            joint = joint_minimum(spots)
            guessed = joint is None
            count = self._joint_count() if joint is None else joint.count
            over = max(0, count - len(problem.device.shared_rows))
        costs: list[dict[Resource, int]] = []
        for net in problem.netlist.nets:
            short: dict[Resource, int] = {}
            for c in problem.polarities(net):
                for resource, spot in spots.of_net(net, c, {}, room=False).items():
                    has = len(spot.mode.terms) - problem.reserve
                    shared_or_held = net.index in shared or problem.alone(net, c).count <= has
                    lacks = 0 if shared_or_held else problem.alone(net, c).count - has
                    short[resource] = min(lacks, short.get(resource, lacks))
            costs.append(short)
        partners = cheapest_assignment(costs)
        if partners is None:  # too few cells: each net as if it had its choice
            return True, over + sum(min(short.values(), default=0) for short in costs)
        return guessed, over + sum(short[r] for short, r in zip(costs, partners, strict=True))

    @cached_property
    def needed_inputs(self) -> tuple[int, ...]:
        """Inputs that need a pin of their own: those with a literal in a term, or placed."""
        problem = self.problem
        every = range(len(problem.netlist.design.inputs))
        own = [i for i in every if i not in problem.bound]
        if self.minimum is None:
            return tuple(own)
        switching = {s.index for s in problem.switches if s is not None}
        needs = literals_of(problem, [self.minimum.cover])
        return tuple(i for i in own if needs[i] or i in problem.placed_inputs or i in switching)

    @cached_property
    def _left_over(self) -> tuple[int, str] | None:
        """What cells of their own leave to shared OR gates, where that is too much: how much."""
        nets, has = self.problem.netlist.nets, len(self.problem.device.shared_rows)
        best: tuple[int, str] | None = None
        for scenario, shared in self.ways:
            spots = self._spots(scenario, shared)
            joint = joint_minimum(spots) if shared else None
            if joint is None or joint.count <= has:
                continue
            own = [net.name for net in nets if net.index not in shared]
            on_own = f" with {listed(own)} on cells with terms of their own" if own else ""
            words = (
                f"{listed([nets[j].name for j in sorted(shared)])} "
                f"{'need' if len(shared) > 1 else 'needs'} {joint.count} shared "
                f"product terms{on_own}, the device has {has}: {joint.count - has} too many"
            )
            if best is None or joint.count - has < best[0]:
                best = joint.count - has, words
        return best

    def _spots(self, scenario: Scenario, shared: frozenset[int]) -> Spots:
        return Spots(self.problem, scenario, shared)

    @cached_property
    def _sharing(self) -> frozenset[int]:
        """Nets that the shared OR array has to hold: all it can, where there is no other."""
        groups = [shared for _, shared in self.ways]
        return groups[0] if len(set(groups)) == 1 else frozenset.intersection(*groups)

    @property
    def _all_shared(self) -> bool:
        device = self.problem.device
        return len(device.or_column) == len(device.cells)

    @property
    def _overcrowded(self) -> bool:
        device = self.problem.device
        return len(self.problem.netlist.design.outputs) > len(device.output_pins)

    def _offered(self, net: Net) -> list[bool]:
        return offered(self.problem, self.ways, net)

    def _joint_count(self) -> int:
        mask = sum(1 << j for j in self._sharing)
        cover = self.minimum.cover if self.minimum is not None else ()
        return sum(bool(cube.outputs & mask) for cube in cover)

    def _too_many_outputs(self) -> Iterator[str]:
        used, has = (
            len(self.problem.netlist.design.outputs),
            len(self.problem.device.output_pins),
        )
        if used > has:
            yield (
                f"{used} outputs are needed, the device has {has} output cells: "
                f"{used - has} too many"
            )

    def _too_many_inputs(self) -> Iterator[str]:
        device, design = self.problem.device, self.problem.netlist.design
        used, has = len(self.needed_inputs), len(device.readable_pins)
        outputs = len(design.outputs)
        pins = {*device.readable_pins, *device.output_pins, *device.enable_pins}
        if self.minimum is not None and used > has + len(device.enable_pins):
            yield (
                f"{used} inputs are needed, the device has {has} input pins: {used - has} too many"
            )
        elif (
            self.minimum is not None
            and used + outputs > len(pins)
            and outputs <= len(device.output_pins)
        ):
            yield (
                f"{used} inputs and {outputs} outputs need {used + outputs} pins, the device has "
                f"{len(pins)}: {used + outputs - len(pins)} too many"
            )

    def _shared_terms(self) -> Iterator[str]:
        minimum, has = self.minimum, len(self.problem.device.shared_rows)
        used = self._joint_count()
        if minimum is None or used <= has:
            return
        if minimum.proven:
            claim = "the smallest set has"
        elif minimum.lower_bound - (minimum.count - used) > has:
            claim = f"every set has at least {minimum.lower_bound}, the best found has"
        else:
            claim = f"the best set found (at least {minimum.lower_bound} are needed) has"
        shared = "" if self._all_shared else "shared "
        yield f"{claim} {used} {shared}product terms, the device {has}: {used - has} too many"

    def _short_sums(self) -> Iterator[tuple[Net, int, str]]:
        """Nets whose smallest sum is too large for every cell: by how much, and in words."""
        problem = self.problem
        for net in problem.netlist.nets:
            if net.index in self._sharing:
                continue
            best: tuple[int, str] | None = None
            sizes = []
            for c in self._offered(net):
                has = max(self._rooms(net, c))
                found = problem.alone(net, c)
                bound = "" if found.proven else f" (at least {found.lower_bound})"
                noun = "product term" if found.count == 1 else "product terms"
                sizes.append(f"{found.count} {noun}{bound}{' as the complement' if c else ''}")
                short = found.count - has
                if best is None or short < best[0]:
                    best = short, str(has + problem.reserve)
            if best is not None and best[0] > 0:
                words = f"{' or '.join(sizes)}, and the largest cell it could have holds {best[1]}"
                if problem.reserve:
                    words += f", {problem.reserve} of them to be kept spare"
                yield net, best[0], words

    def _rooms(self, net: Net, complemented: bool) -> Iterator[int]:
        """Terms that cells could give a net in a polarity."""
        for scenario, shared in self.ways:
            found = self._spots(scenario, shared).of_net(net, complemented, {}, room=False)
            for spot in found.values():
                own = len(spot.mode.terms) - self.problem.reserve
                yield len(self.problem.device.shared_rows) if net.index in shared else own

    def _own_terms(self) -> Iterator[str]:
        if self.minimum is None:
            return
        for net, short, words in self._short_sums():
            yield f"{net.name} needs {words}: {short} too many"

    def _carried_in_vain(self) -> list[str]:
        """Inputs that would have to be on an enable pin, where terms cannot read them."""
        nets, inputs = self.problem.netlist.nets, self.problem.netlist.design.inputs
        troubles: dict[str, None] = {}
        for scenario, shared in self.ways:
            choices, spots = self._choices(scenario, shared), self._spots(scenario, shared)
            if not all(choices[net.name] for net in nets):
                continue
            needs = self._needs
            deaf = [(i, p) for i, p in spots.carried.items() if not spots.carries(p, i, needs[i])]
            if not deaf:
                return []
            for i, pin in deaf:
                name = inputs[i].name
                troubles[
                    f"{name} would have to be on enable pin {pin}, and terms need {name} too, but "
                    "that pin has no line for them in the AND array: give them an input of its own "
                    "that is wired to the same signal"
                ] = None
        return list(troubles)

    @cached_property
    def _needs(self) -> dict[int, frozenset[bool]]:
        """Literals of each input, as far as the terms are known."""
        return literals_of(self.problem, [self.minimum.cover] if self.minimum is not None else [])

    def _crowded(self) -> Iterator[str]:
        """Signals that have too few pins between them, whatever is decided beforehand."""
        crowd = crowd_of(joined_choices(self._choices(s, g) for s, g in self.ways))
        if crowd is not None:
            yield self._sentence(crowd)
        elif self.minimum is None and self._all_shared:
            yield "the cells cannot give all outputs a polarity that they may have together"

    def _crowded_somehow(self) -> Iterator[str]:
        """The same for the way that leaves the fewest of them."""
        found: list[tuple[Crowd, frozenset[int]]] = []
        for scenario, shared in self.ways:
            crowd = crowd_of(self._choices(scenario, shared))
            if crowd is not None:
                found.append((crowd, shared))
        if not found:
            return
        crowd, shared = min(found, key=lambda pair: len(pair[0].signals))
        nets = self.problem.netlist.nets
        names = listed([nets[j].name for j in sorted(shared)]) if shared else "no output"
        several = len({g for _, g in self.ways}) > 1
        where = f"with {names} on shared OR gates, " if several else ""
        yield where + self._sentence(crowd)

    def _choices(self, scenario: Scenario, shared: frozenset[int]) -> Choices:
        return choices_of(self._spots(scenario, shared), self.needed_inputs, self._needs)

    def _sentence(self, crowd: Crowd) -> str:
        nets = {net.name: net for net in self.problem.netlist.nets}
        outputs = [nets[name] for name in crowd.signals if name in nets]
        if not crowd.pins and not outputs:
            which = listed(crowd.signals)
            return f"{which} has no pin with the true and complement lines that its terms need"
        narrowed = self.problem.wish == "true" and any(
            self._spots(s, g).of_net(net, True, {}) for net in outputs for s, g in self.ways
        )
        return crowd.sentence(" with --polarity true" if narrowed else "")
