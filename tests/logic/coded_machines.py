"""State tables as machines of the program, and as truth tables that the program has no part in."""

from __future__ import annotations

from itertools import permutations

from oracles import cover_search
from oracles.functions import Table, tabulate

from pla.logic.cubes import Cover, Cube
from pla.logic.machine import Machine, Transition


def machine_of(table) -> Machine:
    number = {name: k for k, name in enumerate(table.states)}

    def outputs(state, value) -> Cover:
        rows = [(Cube.parse(row[1]), row[3]) for row in table.rows if row[0] == state]
        masks = [sum(1 << j for j, c in enumerate(shown) if c == value) for _, shown in rows]
        cubes = [cube._replace(outputs=m) for (cube, _), m in zip(rows, masks, strict=True) if m]
        return Cover.of(table.inputs, cubes)

    return Machine(
        table.inputs,
        len(table.states),
        0,
        tuple(Transition(number[s], Cube.parse(when), number[t]) for s, when, t, _ in table.rows),
        table.outputs,
        tuple(outputs(name, "1") for name in table.states),
        tuple(outputs(name, "0") for name in table.states),
        table.unused,
    )


def truth_table(table, codes, bits) -> Table:
    """The encoded machine combination by combination, from the rows themselves.

    The don't cares of outputs are put in afterwards, since a rule gives all outputs or none.
    """
    holder = {code: name for name, code in zip(table.states, codes, strict=True)}
    code_of = dict(zip(table.states, codes, strict=True))

    def cells(point) -> str | None:
        name = holder.get(point >> table.inputs)
        if name is None:
            if table.unused == "x":
                return None
            then, shown = table.states[0], table.at(table.states[0], point % (1 << table.inputs))[1]
        else:
            then, shown = table.at(name, point % (1 << table.inputs))
        return f"{code_of[then]:0{bits}b}"[::-1] + shown

    n = table.inputs + bits
    shown = [cells(p) for p in range(1 << n)]
    ones, zeros = (
        tabulate(
            n,
            bits + table.outputs,
            lambda p: sum(1 << j for j, c in enumerate(shown[p] or "") if c == value),  # noqa: B023
        ).on
        for value in "10"
    )
    return Table(n, ones, zeros)


def different_codes(states, bits, start_code=None):
    """All codes, one for each order of the bits unless a start code is given."""
    for codes in permutations(range(1 << bits), states):
        if start_code is not None:
            if codes[0] == start_code:
                yield codes
            continue
        columns = [[code >> bit & 1 for code in codes] for bit in range(bits)]
        if columns == sorted(columns):
            yield codes


def fewest_terms(table, bits, *, free, start_code=None, shared=True) -> int:
    """Terms of the best codes by trying them all, in all polarities if those are free."""
    return min(
        (_shared if shared else _alone)(truth_table(table, codes, bits), free)
        for codes in different_codes(len(table.states), bits, start_code)
    )


def _shared(truth, free) -> int:
    return cover_search.fewest_terms_free(truth) if free else cover_search.fewest_terms(truth)


def _alone(truth, free) -> int:
    pairs = zip(truth.on, truth.off, strict=True)
    return sum(_shared(Table(truth.inputs, (on,), (off,)), free) for on, off in pairs)
