"""Smallest sums of one design, each found once."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from typing import TYPE_CHECKING

from pla.fitting.netlist import netlist as fed_back
from pla.logic.cubes import Cover
from pla.logic.effort import Effort
from pla.logic.function import Function
from pla.logic.minimize import Minimum, minimize
from pla.logic.phases import Polarity

if TYPE_CHECKING:
    from collections.abc import Callable, Hashable, Sequence

    from pla.behaviour.model import Behaviour
    from pla.fitting.netlist import Netlist, Restriction
    from pla.logic.search import Feasible

__all__ = ["Minima", "joined_minimum"]


@dataclass(slots=True)
class Minima:
    """Minima of one design, to be used again for every device that asks for the same.

    Attributes:
        effort: Makes the budget of each minimization.
    """

    effort: Callable[[], Effort] = Effort
    _known: dict[Hashable, Minimum] = field(default_factory=dict)
    _netlists: dict[Hashable, Netlist | None] = field(default_factory=dict)

    def within(self, effort: Callable[[], Effort]) -> Minima:
        """The same minima, with another budget for those that are still to be found."""
        return Minima(effort, self._known, self._netlists)

    def netlist(
        self, behaviour: Behaviour, fed: Sequence[str] = (), restriction: Restriction | None = None
    ) -> Netlist | None:
        """The design with some signals fed back; see `pla.fitting.netlist.netlist`.

        Args:
            behaviour: The design, with any places.
            fed: Names of the signals.
            restriction: How they may be read.
        """
        key = (tuple(fed), restriction)
        if key not in self._netlists:
            self._netlists[key] = fed_back(behaviour, fed, restriction)
        found = self._netlists[key]
        if found is None or found.design is behaviour:
            return found
        laid = replace(found.behaviour, places=behaviour.places) if fed else behaviour
        return replace(found, design=behaviour, behaviour=laid)

    def alone(self, netlist: Netlist, output: int, complemented: bool) -> Minimum:
        """One output by itself in one polarity; its terms feed this output only."""
        key = ("alone", netlist.key, output, complemented)
        if key not in self._known:
            function = netlist.behaviour.function
            part = Function(
                function.n_inputs, 1, function.on.of_output(output), function.off.of_output(output)
            )
            polarity = Polarity(not complemented, complemented)
            found = minimize(part, [polarity], effort=self.effort())
            self._known[key] = _moved(found, output, netlist)
        return self._known[key]

    def enable(self, netlist: Netlist, output: int) -> Minimum:
        """The smallest sum for the enable of a three-state output."""
        key = ("enable", netlist.key, output)
        if key not in self._known:
            sets = netlist.nets[output].enable
            if sets is None:
                raise ValueError(f"output {output} has no enable")
            part = Function(netlist.behaviour.function.n_inputs, 1, *sets)
            self._known[key] = minimize(part, [Polarity(True, False)], effort=self.effort())
        return self._known[key]

    def joint(
        self,
        netlist: Netlist,
        outputs: Sequence[int],
        polarities: Sequence[Polarity],
        feasible: Feasible | None,
        ties: Hashable,
    ) -> Minimum:
        """Some outputs on one shared OR array; its terms feed these outputs.

        Args:
            netlist: Where they stand.
            outputs: Which.
            polarities: What each may be realised as.
            feasible: Which polarities they can have together.
            ties: What `feasible` depends on; ``None`` where it is.
        """
        key = ("joint", netlist.key, tuple(outputs), tuple(polarities))
        untied = self._known.get((*key, None))
        if untied is not None and (
            feasible is None or feasible(tuple(untied.complemented[j] for j in outputs))
        ):
            return untied
        if (*key, ties) not in self._known:
            part = _part(netlist.behaviour.function, outputs)
            found = minimize(part, polarities, feasible=feasible, effort=self.effort())
            self._known[(*key, ties)] = _spread(found, outputs, netlist)
        return self._known[(*key, ties)]


def joined_minimum(netlist: Netlist, parts: Sequence[Minimum]) -> Minimum:
    """Sums that do not share a term with each other, as one.

    Args:
        netlist: Where they stand.
        parts: Minima whose terms feed different outputs of it.
    """
    if len(parts) == 1:
        return parts[0]
    behaviour = netlist.behaviour
    count = len(behaviour.outputs)
    proofs = {part.proven_by for part in parts}
    scopes = {part.connections for part in parts}
    return Minimum(
        Cover.joined(len(behaviour.inputs), (part.cover for part in parts)),
        tuple(any(part.complemented[j] for part in parts) for j in range(count)),
        sum(part.lower_bound for part in parts),
        None if None in proofs else "solver" if "solver" in proofs else "certificate",
        None if None in scopes or not parts else "these polarities",
        None if any(p.primes is None for p in parts) else sum(p.primes or 0 for p in parts),
        any(part.clock for part in parts),
    )


def _part(function: Function, outputs: Sequence[int]) -> Function:
    if list(outputs) == list(range(function.n_outputs)):
        return function
    return Function.of_outputs(
        function.n_inputs,
        [(function.on.of_output(j), function.off.of_output(j)) for j in outputs],
    )


def _spread(found: Minimum, outputs: Sequence[int], netlist: Netlist) -> Minimum:
    """A minimum of some outputs as one of all, in which the others have no terms."""
    count = len(netlist.behaviour.outputs)
    if list(outputs) == list(range(count)):
        return found
    cubes = [
        (c.ones, c.zeros, sum(1 << j for k, j in enumerate(outputs) if c.outputs >> k & 1))
        for c in found.cover
    ]
    complemented = [False] * count
    for j, inverted in zip(outputs, found.complemented, strict=True):
        complemented[j] = inverted
    return _with(found, Cover.of(found.cover.n_inputs, cubes), complemented)


def _moved(found: Minimum, output: int, netlist: Netlist) -> Minimum:
    return _spread(found, [output], netlist)


def _with(found: Minimum, cover: Cover, complemented: Sequence[bool]) -> Minimum:
    return Minimum(
        cover,
        tuple(complemented),
        found.lower_bound,
        found.proven_by,
        found.connections,
        found.primes,
        found.clock,
    )
