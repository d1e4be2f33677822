"""Encoded machines do what their symbolic tables say, at every code and input combination."""

from __future__ import annotations

import random
from dataclasses import replace

import pytest
from coded_machines import machine_of, truth_table
from making import values_of
from state_tables import GENERATED, TRADE, unstructured

from pla.logic.cubes import Cover, Cube
from pla.logic.machine import Machine, Transition, counting, encoded, fewest_bits

TABLES = [pytest.param(t, id=t.name) for t in (*TRADE, *GENERATED, unstructured(3, 5, 1, 2))]


@pytest.mark.parametrize("unused", ["x", "start"])
@pytest.mark.parametrize("table", TABLES)
def test_encoded_is_the_table_at_every_point(table, unused):
    table = replace(table, unused=unused)
    machine = machine_of(table)
    rng = random.Random(len(table.rows))
    least = fewest_bits(machine.n_states)
    for bits in (least, least + 1):
        chosen = rng.sample(range(1 << bits), machine.n_states)
        for codes in (counting(machine), tuple(chosen)):
            function = encoded(machine, codes, bits)
            assert function.conflict() is None
            truth = truth_table(table, codes, bits)
            for cover, sets in ((function.on, truth.on), (function.off, truth.off)):
                values = values_of(cover, truth.inputs)
                for j, points in enumerate(sets):
                    held = sum(1 << p for p, value in enumerate(values) if value >> j & 1)
                    assert held == points, (codes, j)


def test_unused_codes_lead_to_the_start_state_whichever_it_is():
    stay = Cover.universe(1)
    none = Cover.of(1)
    # Three states in a ring; the third is the start and the only one with its output at 1.
    moves = tuple(Transition(k, Cube(0, 0), (k + 1) % 3) for k in range(3))
    machine = Machine(1, 3, 2, moves, 1, (none, none, stay), (stay, stay, none), "start")
    function = encoded(machine, (3, 1, 2), 2)
    # Inputs: the machine's own, then the state; outputs: the next state, then the machine's own.
    following = {3: 0b001, 1: 0b010, 2: 0b111, 0: 0b110}
    on, off = values_of(function.on, 3), values_of(function.off, 3)
    for point in range(8):
        assert on[point] == following[point >> 1]
        assert off[point] == 0b111 & ~following[point >> 1]


def test_codes_that_cannot_be_are_refused():
    machine = machine_of(TRADE[0])
    for codes, bits in (((0, 1, 2, 3), 3), ((0, 1, 2, 3, 3), 3), ((0, 1, 2, 3, 8), 3)):
        with pytest.raises(ValueError, match="code"):
            encoded(machine, codes, bits)
    with pytest.raises(ValueError, match="at most 64"):
        encoded(machine, (0, 1, 2, 3, 4), 62)
    with pytest.raises(ValueError, match="among 0 to 4"):
        replace(machine, start=5)
    with pytest.raises(ValueError, match="every state"):
        replace(machine, on=machine.on[1:])


@pytest.mark.parametrize(("states", "bits"), [(1, 1), (2, 1), (3, 2), (4, 2), (5, 3), (16, 4)])
def test_fewest_bits(states, bits):
    assert fewest_bits(states) == bits
