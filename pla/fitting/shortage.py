"""Why a design does not fit a device, in sentences, and what it lacks."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property
from typing import TYPE_CHECKING

from pla.fitting.layout import joint_minimum, literals_of
from pla.fitting.matching import deficient
from pla.fitting.minima import joined_minimum
from pla.fitting.spots import Spots
from pla.logic.phases import Polarity

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.fitting.netlist import Net
    from pla.fitting.problem import Problem
    from pla.fitting.scenario import Scenario
    from pla.fitting.spots import Resource
    from pla.logic.minimize import Minimum

__all__ = ["Shortage"]

_LISTED = 12


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
        found = [*self._barred(), *self._shared_terms(), *self._own_terms()]
        found += [*self._too_many_inputs(), *self._too_many_outputs()]
        if not found:
            found += self._crowded()
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
        nets = problem.netlist.nets
        shared = self._sharing
        parts = []
        if shared:
            candidates = [joint_minimum(Spots(problem, s, g)) for s, g in self.ways if g == shared]
            known = [c for c in candidates if c is not None]
            if known:
                parts.append(min(known, key=lambda m: m.count))
            elif self._overcrowded:
                group = sorted(shared)
                polarities = [p for j in group if (p := self.polarities[j]) is not None]
                parts.append(problem.minima.joint(problem.netlist, group, polarities, None, None))
            else:
                return None
        parts += [
            min((problem.alone(net, c) for c in self._offered(net)), key=lambda m: m.count)
            for net in nets
            if net.index not in shared
        ]
        return joined_minimum(problem.netlist, parts)

    @cached_property
    def lacking(self) -> int:
        """Terms that are missing in all; 0 if that is not the trouble."""
        if self.minimum is None:
            return 0
        over = sum(short for _, short, _ in self._short_sums())
        return over + max(0, self._joint_count() - len(self.problem.device.shared_rows))

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
    def _sharing(self) -> frozenset[int]:
        """Nets that the shared OR array has to hold: all it can, where there is no other."""
        groups = [shared for _, shared in self.ways]
        return groups[0] if len(set(groups)) == 1 else frozenset.intersection(*groups)

    @property
    def _overcrowded(self) -> bool:
        device = self.problem.device
        return len(self.problem.netlist.design.outputs) > len(device.output_pins)

    def _offered(self, net: Net) -> list[bool]:
        return [
            c
            for c in self.problem.polarities(net)
            if any(Spots(self.problem, s, g).of_net(net, c, {}, room=False) for s, g in self.ways)
        ]

    def _joint_count(self) -> int:
        mask = sum(1 << j for j in self._sharing)
        cover = self.minimum.cover if self.minimum is not None else ()
        return sum(bool(cube.outputs & mask) for cube in cover)

    def _barred(self) -> Iterator[str]:
        nets = self.problem.netlist.nets
        barred = [net for net, p in zip(nets, self.polarities, strict=True) if p is None]
        plain: list[str] = []
        for net in barred:
            reason = self._switching(net)
            if reason is None:
                plain.append(net.name)
            else:
                yield reason
        if not plain:
            return
        which = f"output{'s' if len(plain) > 1 else ''} {', '.join(plain)}"
        if self.problem.wish == "true" and not self._barred_anyway(plain):
            yield (
                f"{which} can only be realised by a complemented sum, which --polarity true rules "
                "out"
            )
        else:
            yield f"no cell can show {which} with the active level that the design asks for"

    def _barred_anyway(self, names: Sequence[str]) -> bool:
        free = Shortage(replace(self.problem, wish="free"), self.ways)
        return any(not free._offered(net) for net in self.problem.netlist.nets if net.name in names)

    def _switching(self, net: Net) -> str | None:
        """Why its enable, or that its pin is read, rules out every cell."""
        problem = self.problem
        if net.enable is not None and problem.enables[net.index] is None:
            needed = problem.minima.enable(problem.netlist, net.index)
            least = "" if needed.proven else f" (at least {needed.lower_bound} are needed)"
            return (
                f"the enable of {net.name} needs {needed.count} product terms{least}, and no cell "
                "has more than one for it"
            )
        placed = problem.place_of(net)
        where = "no cell" if placed is None else f"the cell on pin {placed} does not"
        if net.reads is not None and self._would(replace(net, reads=None)):
            verb = "reads" if placed is None else "read"
            return f"{where} {verb} its pin back, as {net.name} asks for"
        if net.enable is not None and self._would(replace(net, enable=None, reads=None)):
            pins = problem.device.enable_pins
            if pins and problem.switches[net.index] is None:
                named = _pins(pins)
                return (
                    f"the enable of {net.name} is not one input alone, and cells are enabled by "
                    f"{named} only"
                )
            verb = "has" if placed is None else "have"
            return f"{where} {verb} an output enable that {net.name} could use"
        return None

    def _would(self, net: Net) -> bool:
        return bool(self._offered(net))

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
        yield f"{claim} {used} product terms, the device {has}: {used - has} too many"

    def _short_sums(self) -> Iterator[tuple[Net, int, str]]:
        """Nets whose smallest sum is too large for every cell: by how much, and in words."""
        problem = self.problem
        for net in problem.netlist.nets:
            if net.index in self._sharing:
                continue
            best: tuple[int, str] | None = None
            sizes = []
            for c in self._offered(net):
                has = max(
                    len(spot.mode.terms) - problem.reserve
                    for s, g in self.ways
                    if net.index not in g
                    for spot in Spots(problem, s, g).of_net(net, c, {}, room=False).values()
                )
                found = problem.alone(net, c)
                bound = "" if found.proven else f" (at least {found.lower_bound})"
                sizes.append(
                    f"{found.count} product terms{bound}{' as the complement' if c else ''}"
                )
                short = found.count - has
                if best is None or short < best[0]:
                    best = short, str(has)
            if best is not None and best[0] > 0:
                words = f"{' or '.join(sizes)}, and the largest cell it could have holds {best[1]}"
                yield net, best[0], words

    def _own_terms(self) -> Iterator[str]:
        if self.minimum is None:
            return
        for net, short, words in self._short_sums():
            kept = f", {self.problem.reserve} kept spare" if self.problem.reserve else ""
            yield f"{net.name} needs {words}{kept}: {short} too many"

    def _crowded(self) -> list[str]:
        """Signals that have too few pins or cells between them."""
        problem = self.problem
        best: tuple[int, list[str]] | None = None
        for scenario, shared in self.ways:
            found = self._crowd(Spots(problem, scenario, shared))
            if found is not None and (best is None or found[0] < best[0]):
                best = found
        return best[1] if best else []

    def _crowd(self, spots: Spots) -> tuple[int, list[str]] | None:
        problem = self.problem
        needs = literals_of(problem, [self.minimum.cover]) if self.minimum is not None else {}
        names: list[str] = []
        choices: list[list[Resource]] = []
        for net in problem.netlist.nets:
            resources: dict[Resource, None] = {}
            for c in problem.polarities(net):
                resources.update(dict.fromkeys(spots.of_net(net, c, {})))
            names.append(net.name)
            choices.append(list(resources))
        for i in self.needed_inputs:
            if i in spots.inputs:
                names.append(problem.netlist.design.inputs[i].name)
                choices.append(list(spots.of_input(i, needs.get(i, frozenset()))))
        found = deficient(choices)
        if found is None:
            if self.minimum is None:
                return 0, [
                    "the cells cannot give all outputs a polarity that they may have together"
                ]
            return None
        members, resources_of = found
        lone = [m for m in members if m >= len(problem.netlist.nets)]
        if lone and not resources_of:
            return len(members), [
                "the input pins lack a true or complement line that the terms need"
            ]
        signals = [names[m] for m in sorted(members)]
        where = [
            f"pin {r}" if isinstance(r, int) else f"cell {r[1] if isinstance(r, tuple) else r}"
            for r in sorted(resources_of, key=spots.ranks.__getitem__)
        ]
        narrowed = problem.wish == "true" and any(
            spots.of_net(problem.netlist.nets[m], True, {}) for m in members - set(lone)
        )
        return len(members), [_too_few(signals, where, narrowed=narrowed)]


def _too_few(signals: Sequence[str], where: Sequence[str], *, narrowed: bool) -> str:
    named = _listed(signals)
    if not where:
        return f"no cell or pin is left that {named} could have"
    verb = "has" if len(signals) == 1 else "have"
    return (
        f"{named} {verb} only {_listed(where)} to be on"
        f"{' with --polarity true' if narrowed else ''}: {len(signals)} signals, "
        f"{len(where)} place{'s' if len(where) != 1 else ''}"
    )


def _listed(words: Sequence[str]) -> str:
    shown = list(words[:_LISTED])
    if len(words) > _LISTED:
        shown.append(f"{len(words) - _LISTED} more")
    return shown[0] if len(shown) == 1 else f"{', '.join(shown[:-1])} and {shown[-1]}"


def _pins(pins: Sequence[int]) -> str:
    return f"pin {pins[0]}" if len(pins) == 1 else f"pins {_listed([str(p) for p in pins])}"
