"""A design with some of its signals fed back through the array instead of folded in.

Where a signal ``s`` is fed back, every output that names it becomes a function of the inputs and of
``s``. Input combinations and values of ``s`` that do not go together cannot occur: they are don't
cares (satisfiability don't cares: K. A. Bartlett et al., "Multilevel logic minimization using
implicit don't cares", IEEE Trans. CAD 7(6), 1988). Where ``s`` itself is free, both its values may
occur, and the outputs have to be right for both.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property
from itertools import combinations, product
from typing import TYPE_CHECKING

import numpy as np

from pla.behaviour.model import Input, Output
from pla.logic import algebra
from pla.logic.cubes import MAX_INPUTS, Cover
from pla.logic.function import Function

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping, Sequence

    from pla.behaviour.model import Behaviour

__all__ = ["Net", "Netlist", "Restriction", "candidates", "choices", "netlist", "restrictions"]

Sets = tuple[Cover, Cover]

_MOST_CUBES = 5_000
_MOST_TRIED = 4


@dataclass(frozen=True, slots=True)
class Net:
    """What one cell has to hold: an output, or an inner signal that is fed back.

    Attributes:
        index: Which of the outputs of the laid out behaviour.
        name: Its name.
        active_low: The pin carries the complement of the asserted value.
        inner: It needs no pin.
        fed: The input of the laid out behaviour that it is fed back as, if it is.
        reads: The input that is the level at its pin, for a bidirectional pin.
        enable: When it drives its pin: its ON-set and OFF-set; ``None`` for always.
    """

    index: int
    name: str
    active_low: bool
    inner: bool
    fed: int | None
    reads: int | None
    enable: Sets | None


@dataclass(frozen=True, slots=True)
class Restriction:
    """Fed-back signals that have one line only.

    A sum can do with one sense of a signal when what it must not cover grows or shrinks with the
    signal alone; that is a demand on the sum and not on the function, so the polarity of every net
    that reads such a signal is settled beforehand.

    Attributes:
        senses: These signals, with the sense that can be read: ``True`` for the asserted signal.
        complemented: The polarity of the nets that read them.
    """

    senses: tuple[tuple[str, bool], ...]
    complemented: bool


@dataclass(frozen=True)
class Netlist:
    """A design with the signals that are fed back.

    Attributes:
        design: What is wanted.
        behaviour: The same with the fed-back signals behind the inputs and those of them that are
            inner behind the outputs, and with every output free of what is read at its own pin; the
            design itself if it has no such signals.
        nets: What the cells have to hold, in order of the outputs of `behaviour`.
        fed: Names of the fed-back signals, in order of the inputs that they are.
        restriction: How fed-back signals may be read.
        restricted: Nets that read a fed-back signal of which there is one sense only.
    """

    design: Behaviour
    behaviour: Behaviour
    nets: tuple[Net, ...]
    fed: tuple[str, ...] = ()
    restriction: Restriction | None = None
    restricted: frozenset[int] = frozenset()

    @property
    def key(self) -> tuple[tuple[str, ...], Restriction | None]:
        """What tells it from the other ways to feed back signals of the same design."""
        return self.fed, self.restriction

    @cached_property
    def real_inputs(self) -> range:
        """The inputs that come from outside."""
        return range(len(self.design.inputs))

    @cached_property
    def essential(self) -> frozenset[int]:
        """Inputs without which some output cannot do: it differs where they alone do."""
        return frozenset(i for i in range(len(self.behaviour.inputs)) if self._depends(1 << i))

    def _depends(self, bit: int) -> bool:
        function = self.behaviour.function
        for j in range(function.n_outputs):
            on, off = function.on.of_output(j), function.off.of_output(j)
            for one, zero in ((on, off), (off, on)):
                low, high = _cofactor(one, bit, high=False), _cofactor(zero, bit, high=True)
                if algebra.find_common(low, high) is not None:
                    return True
        return False


def candidates(behaviour: Behaviour) -> tuple[str, ...]:
    """Signals that could be fed back: inner ones and outputs, as far as others name them."""
    named = {name for names in behaviour.named.values() for name in names}
    every = (*(i.name for i in behaviour.inner), *behaviour.output_names)
    return tuple(name for name in every if name in named)


def choices(behaviour: Behaviour) -> Iterator[tuple[str, ...]]:
    """Which signals to feed back, nothing first, then by number.

    All sets of them where there are few; where there are many, each by itself, all inner signals,
    and everything.
    """
    names = candidates(behaviour)
    room = MAX_INPUTS - len(behaviour.inputs)
    if len(names) <= _MOST_TRIED:
        sizes = range(min(len(names), room) + 1)
        yield from (chosen for size in sizes for chosen in combinations(names, size))
        return
    inner = tuple(name for name in names if name not in behaviour.output_names)
    found = [(), *((name,) for name in names), inner, names]
    yield from dict.fromkeys(chosen for chosen in found if len(chosen) <= room)


def restrictions(fed: Sequence[str]) -> Iterator[Restriction]:
    """Ways to read all fed-back signals in one sense only."""
    if len(fed) > _MOST_TRIED:
        return
    for complemented in (False, True):
        for senses in product((False, True), repeat=len(fed)):
            yield Restriction(tuple(zip(fed, senses, strict=True)), complemented)


def netlist(
    behaviour: Behaviour, fed: Sequence[str] = (), restriction: Restriction | None = None
) -> Netlist | None:
    """The design with some signals fed back; ``None`` if that takes too many cubes.

    Args:
        behaviour: The design.
        fed: Names of the signals.
        restriction: How they may be read.
    """
    design, behaviour = behaviour, _deaf(behaviour)
    if not fed:
        return Netlist(design, behaviour, _nets(design, behaviour, ()))
    inner = [i for i in behaviour.inner if i.name in fed]
    n = len(behaviour.inputs) + len(fed)
    of_input = {name: len(behaviour.inputs) + k for k, name in enumerate(fed)}
    sets = {name: _sets(behaviour, name) for name in (*fed, *behaviour.output_names)}
    held = {name: _consistent(sets[name], n, of_input[name]) for name in fed}
    reach = _reach(behaviour, {name: algebra.support(*sets[name]) for name in fed})
    every = (*behaviour.output_names, *(i.name for i in inner))
    functions: list[Sets] = []
    for name in every:
        used = [s for s in fed if s in reach[name]]
        found = _within(sets[name], [held[s] for s in used], n)
        if found is None:
            return None
        if restriction is not None:
            found = _monotone(found, restriction, used, {s: of_input[s] for s in used})
        functions.append(found)
    outputs = []
    for output in behaviour.outputs:
        if output.enable is None:
            outputs.append(output)
            continue
        used = [s for s in fed if s in reach[output.name]]
        found = _within((output.enable.on, output.enable.off), [held[s] for s in used], n)
        if found is None:
            return None
        outputs.append(replace(output, enable=replace(output.enable, on=found[0], off=found[1])))
    laid = replace(
        behaviour,
        inputs=(*behaviour.inputs, *(_as_input(behaviour, name) for name in fed)),
        outputs=(
            *outputs,
            *(Output(i.name, False, None, i.location, i.described, i.form) for i in inner),
        ),
        function=Function.of_outputs(n, functions),
    )
    nets = _nets(design, laid, fed)
    readers = frozenset(
        net.index
        for net in nets
        if restriction is not None and any(s in reach[net.name] for s, _ in restriction.senses)
    )
    return Netlist(design, laid, nets, tuple(fed), restriction, readers)


def _deaf(behaviour: Behaviour) -> Behaviour:
    """The design with every output free of what is read at its own pin.

    No value that is asked for depends on that. Where something is left open, a term with a literal
    of the own pin would do as well, and the output would hold itself.
    """
    if all(output.reads is None for output in behaviour.outputs):
        return behaviour
    n = len(behaviour.inputs)
    functions, outputs = [], []
    for j, output in enumerate(behaviour.outputs):
        on, off = (cover.of_output(j) for cover in (behaviour.function.on, behaviour.function.off))
        if output.reads is not None:
            bit = 1 << behaviour.input_names.index(output.reads)
            on, off = _without(on, bit), _without(off, bit)
            if output.enable is not None:
                enable = output.enable
                free = replace(enable, on=_without(enable.on, bit), off=_without(enable.off, bit))
                output = replace(output, enable=free)  # noqa: PLW2901
        functions.append((on, off))
        outputs.append(output)
    return replace(behaviour, outputs=tuple(outputs), function=Function.of_outputs(n, functions))


def _without(cover: Cover, bit: int) -> Cover:
    """The same without literals of an input."""
    kept = np.uint64(~bit & (2**64 - 1))
    return Cover(cover.n_inputs, cover.ones & kept, cover.zeros & kept, cover.outputs).absorbed()


def _nets(design: Behaviour, laid: Behaviour, fed: Sequence[str]) -> tuple[Net, ...]:
    first = len(design.inputs)
    of_input = {name: first + k for k, name in enumerate(fed)}
    readers = {signal.name: i for i, signal in enumerate(laid.inputs)}
    return tuple(
        Net(
            j,
            output.name,
            output.active_low,
            j >= len(design.outputs),
            of_input.get(output.name),
            None if output.reads is None else readers[output.reads],
            None if output.enable is None else (output.enable.on, output.enable.off),
        )
        for j, output in enumerate(laid.outputs)
    )


def _as_input(behaviour: Behaviour, name: str) -> Input:
    places = {s.name: s.location for s in behaviour.outputs}
    places.update((s.name, s.location) for s in behaviour.inner)
    return Input(name, False, places[name])


def _sets(behaviour: Behaviour, name: str) -> Sets:
    """ON-set and OFF-set over the design's inputs."""
    if name in behaviour.output_names:
        function, index = behaviour.function, behaviour.output_names.index(name)
    elif behaviour.inner_function is None:  # pragma: no cover - inner signals have one
        raise AssertionError
    else:
        function = behaviour.inner_function
        index = [i.name for i in behaviour.inner].index(name)
    return function.on.of_output(index), function.off.of_output(index)


def _reach(behaviour: Behaviour, support: Mapping[str, int]) -> dict[str, frozenset[str]]:
    """For each output and inner signal the fed-back signals that it may be a function of.

    Those that it names, directly or through what it names; not those that depend on its own pin.

    Args:
        behaviour: The design.
        support: For each fed-back signal the inputs that it depends on, as a mask.
    """
    found: dict[str, frozenset[str]] = {}

    def visit(name: str) -> frozenset[str]:
        if name not in found:
            direct = behaviour.named.get(name, ())
            found[name] = frozenset(direct).union(*(visit(other) for other in direct))
        return found[name]

    own = {
        output.name: 1 << behaviour.input_names.index(output.reads)
        for output in behaviour.outputs
        if output.reads is not None
    }
    return {
        name: frozenset(s for s in visit(name) if not support.get(s, 0) & own.get(name, 0))
        for name in (*behaviour.output_names, *(i.name for i in behaviour.inner))
    }


def _consistent(sets: Sets, n: int, variable: int) -> Cover:
    """Where a signal is 1 and may be, or is 0 and may be."""
    on, off = sets
    bit = np.uint64(1 << variable)
    may_be_1, may_be_0 = (_lifted(algebra.complement(cover), n) for cover in (off, on))
    one = Cover(n, may_be_1.ones | bit, may_be_1.zeros, may_be_1.outputs)
    zero = Cover(n, may_be_0.ones, may_be_0.zeros | bit, may_be_0.outputs)
    return one + zero


def _monotone(
    sets: Sets, restriction: Restriction, used: Sequence[str], of_input: dict[str, int]
) -> Sets:
    """With the 0s of the sum closed, so that no prime has a literal that cannot be read.

    Where the sum must be 0 in the sense that can be read, it has to be 0 in the other one too: a
    term that covers the other has no literal of the signal, so it covers both.
    """
    on, off = sets
    zeros = on if restriction.complemented else off
    for name, sense in restriction.senses:
        if name not in used:
            continue
        bit = np.uint64(1 << of_input[name])
        other = zeros.zeros if sense else zeros.ones
        loose = zeros.take(other & bit == 0)
        zeros = zeros + Cover(zeros.n_inputs, loose.ones & ~bit, loose.zeros & ~bit, loose.outputs)
        zeros = zeros.absorbed()
    return (zeros, off) if restriction.complemented else (on, zeros)


def _cofactor(cover: Cover, bit: int, *, high: bool) -> Cover:
    other = np.uint64(bit)
    kept = cover.take((cover.zeros if high else cover.ones) & other == 0)
    return Cover(kept.n_inputs, kept.ones & ~other, kept.zeros & ~other, kept.outputs)


def _lifted(cover: Cover, n: int) -> Cover:
    return Cover(n, cover.ones, cover.zeros, cover.outputs)


def _within(sets: Sets, holds: Sequence[Cover], n: int) -> Sets | None:
    found = []
    for cover in sets:
        part = _lifted(cover, n)
        for held in holds:
            if len(part) * len(held) > _MOST_CUBES * 64:
                return None
            part = algebra.compact(algebra.intersection(part, held))
            if len(part) > _MOST_CUBES:
                return None
        found.append(part)
    return found[0], found[1]
