"""What a design asks for at single input combinations: by definition, without cover algebra."""

from __future__ import annotations

import itertools

from pla.behaviour.reader import behaviour_of
from pla.tomlfile import parse_toml


def read(text):
    return behaviour_of(parse_toml(text, "d.toml"))


_LISTED = {}


def cubes_of(cover):
    """The cubes as plain numbers, listed once for each cover."""
    known, cubes = _LISTED.get(id(cover), (None, None))
    if known is not cover:
        if len(_LISTED) > 100:
            _LISTED.clear()
        cubes = [(c.ones, c.zeros, c.outputs) for c in cover]
        _LISTED[id(cover)] = cover, cubes
    return cubes


def held(cover, point, output):
    """Whether a cube of an output holds a point."""
    return any(
        outputs >> output & 1 and not ones & ~point and not zeros & point
        for ones, zeros, outputs in cubes_of(cover)
    )


def value(behaviour, point, output):
    """1, 0 or x; a contradiction is an error."""
    on = held(behaviour.function.on, point, output)
    off = held(behaviour.function.off, point, output)
    assert not (on and off)
    return 1 if on else 0 if off else "x"


def points(behaviour):
    """Every input combination: as bit mask, and as numbers of the declared signals.

    Bits of a partial bus that do not reach the device read 0.
    """
    names = behaviour.input_names
    for bits in itertools.product((0, 1), repeat=len(names)):
        signals = {}
        for name, bit in zip(names, bits, strict=True):
            base, _, index = name.partition("[")
            shift = int(index[:-1]) if index else 0
            signals[base] = signals.get(base, 0) | bit << shift
        yield sum(bit << i for i, bit in enumerate(bits)), signals


def values(behaviour, *outputs):
    """(signals, values of the named outputs) at every input combination."""
    positions = [behaviour.output_names.index(name) for name in outputs]
    for point, signals in points(behaviour):
        found = tuple(value(behaviour, point, position) for position in positions)
        yield signals, found


def check(behaviour, expected):
    """Compare each output with a function of the signals' numbers, at every combination."""
    assert set(expected) == set(behaviour.output_names)
    for position, name in enumerate(behaviour.output_names):
        for point, signals in points(behaviour):
            wanted = expected[name](**signals)
            assert value(behaviour, point, position) == wanted, (name, signals)


def check_sources(behaviour):
    """Sources are disjoint for each output, and together exactly what is open."""
    for position in range(len(behaviour.outputs)):
        for point, _ in points(behaviour):
            reasons = [s.reason for s in behaviour.dont_cares if held(s.cubes, point, position)]
            free = value(behaviour, point, position) == "x"
            assert len(reasons) == int(free), (position, point, reasons)


def driving(behaviour, point, output):
    """1, 0 or x: whether an output drives its pin; a contradiction is an error."""
    enable = behaviour.outputs[output].enable
    if enable is None:
        return 1
    on, off = held(enable.on, point, 0), held(enable.off, point, 0)
    assert not (on and off)
    return 1 if on else 0 if off else "x"


def inner_value(behaviour, point, name):
    """1, 0 or x of an inner signal; a contradiction is an error."""
    position = [inner.name for inner in behaviour.inner].index(name)
    on = held(behaviour.inner_function.on, point, position)
    off = held(behaviour.inner_function.off, point, position)
    assert not (on and off)
    return 1 if on else 0 if off else "x"


def reasons(behaviour, point, output):
    """Why an output is free."""
    return [s.reason for s in behaviour.dont_cares if held(s.cubes, point, output)]
