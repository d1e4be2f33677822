"""Outputs that would hold each other through what is read at their pins."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from pla.logic import algebra
from pla.logic.cubes import Cover, Cube
from pla.wording import listed

if TYPE_CHECKING:
    from collections.abc import Container, Iterator, Mapping, Sequence

    from pla.behaviour.description import Claims
    from pla.behaviour.model import Enabling
    from pla.behaviour.signals import Signals
    from pla.errors import Diagnostics, Location
    from pla.logic.function import Function

__all__ = ["report_rings", "where_it_matters"]

Edges = dict[tuple[int, int], Cover]
"""For a pair of pins, the input combinations at which the first follows the second."""


def where_it_matters(on: Cover, off: Cover, position: int) -> Cover:
    """The combinations at which one input alone turns 1 into 0 or 0 into 1, whatever it is."""
    found = (
        algebra.intersection(_cofactor(on, position, value), _cofactor(off, position, 1 - value))
        for value in (0, 1)
    )
    return algebra.union(on.n_inputs, *found)


def _cofactor(cover: Cover, position: int, value: int) -> Cover:
    """The cover as a function of the other inputs while one input has this value."""
    bit = np.uint64(1 << position)
    other = cover.zeros if value else cover.ones
    held = cover.take(other & bit == 0)
    return Cover(cover.n_inputs, held.ones & ~bit, held.zeros & ~bit, held.outputs).feeding(1)


@dataclass(frozen=True, slots=True)
class _Pin:
    """A bidirectional bit.

    Attributes:
        output: Its name.
        signal: The name of the output of which it is a bit.
        position: The input that is read at its pin.
        on: Where it is 1.
        off: Where it is 0.
        enable: When it drives its pin.
        described: Where its value is described.
    """

    output: str
    signal: str
    position: int
    on: Cover
    off: Cover
    enable: Enabling
    described: Location


@dataclass(frozen=True, slots=True)
class _Ring:
    """Pins of which each follows the next, and the last the first.

    Attributes:
        pins: Their numbers, the lowest first.
        example: Inputs at which they do, as far as they matter.
    """

    pins: tuple[int, ...]
    example: Cube


def report_rings(
    function: Function,
    enables: Mapping[str, Enabling],
    never: Cover,
    signals: Signals,
    claims: Claims,
    known: Container[str],
    diagnostics: Diagnostics,
) -> None:
    """Report bidirectional bits that depend on each other in a ring while all of them drive.

    An input combination counts if each output of the ring drives its pin, each changes (by its
    value or its enable) with the level at the next one's pin alone, and every pin that is driven
    outside of such a ring has the level that drives it. Rings of one output are left to
    `pla.behaviour.bidirectional`.

    Args:
        function: The outputs, which are free while they do not drive their pins.
        enables: By the name of the output.
        never: Impossible inputs. Outputs that drive together only there are a warning, since they
            may depend on each other there or not, as the minimizer decides.
        signals: What is declared.
        claims: Where each output is described.
        known: Bits that hold themselves, which was reported; rings of such bits alone are left out.
        diagnostics: Takes one error or warning for all rings of the bits of the same outputs.
    """
    pins = list(_pins(function, enables, signals, claims))
    if len(pins) < 2:
        return
    matters = _dependences(pins)
    together: Edges = {
        (i, j): algebra.intersection(pins[i].enable.on, pins[j].enable.on) for i, j in matters
    }
    active = {at: algebra.intersection(where, together[at]) for at, where in matters.items()}
    certain = list(_rings(_without_untrue(pins, _closed(active), never), active))
    news = [ring for ring in certain if not all(pins[i].output in known for i in ring.pins)]
    for rings in _grouped(news, pins):
        diagnostics.error(
            "HOLDS-ITSELF",
            f"{_names(rings[0], pins)} hold each other: {_chain(rings[0], pins)}, where each "
            "depends on the level at the pin of the next, and all of them drive at once, for "
            f"example at {_example(rings[0], signals)}{_more(rings)}",
            _place(rings[0], pins, matters),
            "outputs that read each other need enables of which never more than one is 1",
        )
    if not len(never):
        return
    held = {i for ring in certain for i in ring.pins}
    for rings in _grouped([*_impossible_rings(together, never, held)], pins):
        diagnostics.warning(
            "HOLDS-IMPOSSIBLE",
            f"at inputs that should never occur {_names(rings[0], pins)} would hold each other: "
            f"{_chain(rings[0], pins)}, where each depends on the level at the pin of the next, "
            "and all of them drive at once then, for example at "
            f"{_example(rings[0], signals)}{_more(rings)}",
            _place(rings[0], pins, matters),
            "make the enables exclude each other for impossible inputs too",
        )


def _pins(
    function: Function, enables: Mapping[str, Enabling], signals: Signals, claims: Claims
) -> Iterator[_Pin]:
    for signal in signals.outputs:
        enable = enables.get(signal.name)
        if enable is None or signal.reads is None:
            continue
        reads = signals.by_name[signal.reads]
        for bit, output, position in zip(
            signal.positions, signal.bit_names(), reads.positions, strict=True
        ):
            if bit in claims.places:
                on, off = function.on.of_output(bit), function.off.of_output(bit)
                place = claims.places[bit][0]
                yield _Pin(output, signal.name, position, on, off, enable, place)


def _dependences(pins: Sequence[_Pin]) -> Edges:
    """Where the value or the enable of each depends on the level at another's pin."""
    switching: dict[tuple[str, int], Cover] = {}
    found = {}
    for i, pin in enumerate(pins):
        support = algebra.support(pin.on, pin.off, pin.enable.on, pin.enable.off)
        for j, other in enumerate(pins):
            if i == j or not support >> other.position & 1:
                continue
            key = (pin.signal, other.position)
            if key not in switching:
                sets = pin.enable.on, pin.enable.off
                switching[key] = where_it_matters(*sets, other.position)
            valued = where_it_matters(pin.on, pin.off, other.position)
            where = algebra.union(valued.n_inputs, valued, switching[key])
            if len(where):
                found[i, j] = where
    return found


def _closed(edges: Edges) -> Edges:
    """For each two pins the combinations at which a chain leads from the one to the other.

    Warshall's method (Warshall, *A theorem on Boolean matrices*, 1962), with sets of input
    combinations instead of truth values.
    """
    paths = {at: where for at, where in edges.items() if len(where)}
    for k in sorted({i for at in paths for i in at}):
        into = [(i, where) for (i, j), where in paths.items() if j == k]
        out = [(j, where) for (i, j), where in paths.items() if i == k]
        for i, first in into:
            for j, second in out:
                both = algebra.intersection(first, second)
                if len(both):
                    known = [paths[i, j]] if (i, j) in paths else []
                    paths[i, j] = algebra.compact(algebra.union(both.n_inputs, both, *known))
    return paths


def _without_untrue(pins: Sequence[_Pin], paths: Edges, never: Cover) -> dict[int, Cover]:
    """For each pin, possible combinations at which it is in a ring and all others are settled."""
    rings = {i: where for (i, j), where in paths.items() if i == j}
    if not rings:
        return rings
    excepted = never
    for i, pin in enumerate(pins):
        bit = 1 << pin.position
        n = pin.on.n_inputs
        untrue = algebra.union(
            n,
            algebra.intersection(pin.on, Cover.of(n, [Cube(0, bit)])),
            algebra.intersection(pin.off, Cover.of(n, [Cube(bit, 0)])),
        )
        untrue = algebra.intersection(untrue, pin.enable.on)
        if i in rings:
            untrue = algebra.difference(untrue, rings[i])
        excepted = algebra.union(n, excepted, untrue)
    return {i: algebra.difference(where, excepted) for i, where in rings.items()}


def _impossible_rings(together: Edges, never: Cover, held: set[int]) -> Iterator[_Ring]:
    """Rings of pins that drive together at impossible inputs, and nowhere else."""
    paths = _closed(together)
    everywhere = {i: where for (i, j), where in paths.items() if i == j and i not in held}
    only = {i: w for i, w in everywhere.items() if not len(algebra.difference(w, never))}
    yield from _rings(only, together)


def _rings(where: Mapping[int, Cover], edges: Edges) -> Iterator[_Ring]:
    """A shortest ring through each pin that is in one, each ring once."""
    seen = set()
    for i in sorted(where):
        if not len(where[i]):
            continue
        cube = min(where[i], key=lambda cube: cube.literals)
        # All of the cube is in some ring; one combination of it is sure to be in a single one.
        point = Cube(cube.ones, ~cube.ones & (1 << where[i].n_inputs) - 1)
        there = [at for at, cover in edges.items() if cover.meeting(point).any()]
        ring = _shortest(i, there)
        low = ring.index(min(ring))
        ring = (*ring[low:], *ring[:low])
        if ring not in seen:
            seen.add(ring)
            steps = [edges[at] for at in zip(ring, (*ring[1:], ring[0]), strict=True)]
            told = algebra.support(*steps) | cube.ones | cube.zeros
            yield _Ring(ring, Cube(cube.ones, told & ~cube.ones))


def _shortest(start: int, edges: Sequence[tuple[int, int]]) -> tuple[int, ...]:
    """The fewest pins on a way from one back to itself."""
    ways: list[tuple[int, ...]] = [(start,)]
    reached = set()
    for way in ways:  # grows while it is walked
        for i, j in edges:
            if i != way[-1]:
                continue
            if j == start:
                return way
            if j not in reached:
                reached.add(j)
                ways.append((*way, j))
    raise AssertionError  # pragma: no cover - the closure says that there is one


def _grouped(rings: Sequence[_Ring], pins: Sequence[_Pin]) -> list[list[_Ring]]:
    """Rings through bits of the same outputs."""
    groups: dict[tuple[str, ...], list[_Ring]] = {}
    for ring in rings:
        key = tuple(sorted({pins[i].signal for i in ring.pins}))
        groups.setdefault(key, []).append(ring)
    return list(groups.values())


def _names(ring: _Ring, pins: Sequence[_Pin]) -> str:
    return listed([pins[i].output for i in ring.pins])


def _chain(ring: _Ring, pins: Sequence[_Pin]) -> str:
    return " -> ".join(pins[i].output for i in (*ring.pins, ring.pins[0]))


def _example(ring: _Ring, signals: Signals) -> str:
    return signals.show_point(ring.example.ones, ring.example.ones | ring.example.zeros)


def _more(rings: Sequence[_Ring]) -> str:
    count = len(rings) - 1
    return (
        f"; so do {count} more rings of their bits"
        if count > 1
        else ("; so does one more ring of their bits" if count else "")
    )


def _place(ring: _Ring, pins: Sequence[_Pin], matters: Edges) -> Location:
    """Where the first pin of the ring is described, or its enable if only that depends."""
    first, second = ring.pins[0], ring.pins[1]
    pin, position = pins[first], pins[second].position
    valued = where_it_matters(pin.on, pin.off, position)
    return pin.described if len(valued) or (first, second) not in matters else pin.enable.location
