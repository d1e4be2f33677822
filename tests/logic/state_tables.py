"""State tables for the search of codes: five of ordinary trade shape, five by a seeded generator.

Nothing here imports the program. A row is (state, inputs, next state, outputs), inputs and outputs
as text in order: ``1 0 -`` and ``1 0 x``. The first state is the start. Every table is complete.
"""

from __future__ import annotations

import random
from dataclasses import dataclass


@dataclass(frozen=True)
class StateTable:
    name: str
    states: tuple[str, ...]
    rows: tuple[tuple[str, str, str, str], ...]
    unused: str

    @property
    def inputs(self) -> int:
        return len(self.rows[0][1])

    @property
    def outputs(self) -> int:
        return len(self.rows[0][3])

    def at(self, state: str, point: int) -> tuple[str, str]:
        """Next state and outputs at an input combination (bit i: input i)."""
        found = {
            row[2:]
            for row in self.rows
            if row[0] == state
            and all(c == "-" or int(c) == point >> i & 1 for i, c in enumerate(row[1]))
        }
        (only,) = found
        return only


def _table(name: str, unused: str, text: str) -> StateTable:
    rows = tuple(tuple(line.split()) for line in text.strip().splitlines())
    return StateTable(name, tuple(dict.fromkeys(row[0] for row in rows)), rows, unused)


# request, ready, slow area | strobe, acknowledge, hold
WAIT_STATES = _table(
    "wait states",
    "x",
    """
    idle  0-- idle  000
    idle  1-- first 000
    first --0 last  101
    first --1 hold  101
    hold  -0- hold  101
    hold  -1- last  101
    last  0-- idle  110
    last  1-- turn  110
    turn  0-- idle  001
    turn  1-- turn  001
    """,
)

# button, upper limit, lower limit, light beam broken | motor up, motor down, lamp
DOOR = _table(
    "door",
    "start",
    """
    shut     0--- shut     000
    shut     1--- opening  000
    opening  -1-- open     101
    opening  00-- opening  101
    opening  10-- halted   101
    open     0--- open     00x
    open     1--0 closing  00x
    open     1--1 open     00x
    closing  ---1 reopen   011
    closing  --10 shut     011
    closing  0-00 closing  011
    closing  1-00 halted   011
    halted   0--- halted   000
    halted   1--- opening  000
    reopen   -1-- open     101
    reopen   -0-- reopen   101
    """,
)

# key | clean level, edge pulse
DEBOUNCE = _table(
    "debounce",
    "x",
    """
    off   0 off   00
    off   1 up1   00
    up1   0 off   00
    up1   1 up2   00
    up2   0 off   00
    up2   1 up3   00
    up3   - on    01
    on    1 on    10
    on    0 down1 10
    down1 1 on    10
    down1 0 down2 10
    down2 1 on    10
    down2 0 off   11
    """,
)

# run, backwards | the four coils, half steps
_COILS = ("1000", "1100", "0100", "0110", "0010", "0011", "0001", "1001")
STEPPER = StateTable(
    "stepper",
    tuple(f"at{k}" for k in range(8)),
    tuple(
        row
        for k, coils in enumerate(_COILS)
        for row in (
            (f"at{k}", "0-", f"at{k}", coils),
            (f"at{k}", "10", f"at{(k + 1) % 8}", coils),
            (f"at{k}", "11", f"at{(k - 1) % 8}", coils),
        )
    ),
    "x",
)

# requests of three masters, in order of rank | their grants
ARBITER = _table(
    "bus arbiter",
    "start",
    """
    idle   000 idle   000
    idle   1-- first  000
    idle   01- second 000
    idle   001 third  000
    first  1-- first  100
    first  0-- gap1   100
    second -1- second 010
    second -0- gap2   010
    third  --1 third  001
    third  --0 gap3   001
    gap1   -1- second 000
    gap1   -01 third  000
    gap1   100 first  000
    gap1   000 idle   000
    gap2   --1 third  000
    gap2   1-0 first  000
    gap2   010 second 000
    gap2   000 idle   000
    gap3   1-- first  000
    gap3   01- second 000
    gap3   001 third  000
    gap3   000 idle   000
    """,
)


def generated(seed: int, states: int, inputs: int, outputs: int, unused: str) -> StateTable:
    """Each state looks at one or two inputs and goes to states mostly near its own."""
    rng = random.Random(seed)
    names = tuple(f"s{k}" for k in range(states))
    rows = []
    for k, name in enumerate(names):
        looked_at = rng.sample(range(inputs), rng.randint(1, min(2, inputs)))
        shown = "".join(rng.choice("0011x") for _ in range(outputs))
        for values in range(1 << len(looked_at)):
            cube = ["-"] * inputs
            for place, i in enumerate(looked_at):
                cube[i] = str(values >> place & 1)
            near = (k + rng.choice((0, 1, 1, 2))) % states
            then = names[near if rng.random() < 0.7 else rng.randrange(states)]
            rows.append((name, "".join(cube), then, shown))
    return StateTable(f"generated {seed}", names, tuple(rows), unused)


TRADE = (WAIT_STATES, DOOR, DEBOUNCE, STEPPER, ARBITER)
GENERATED = (
    generated(1, 5, 2, 2, "x"),
    generated(2, 6, 2, 2, "start"),
    generated(3, 9, 2, 2, "x"),
    generated(4, 12, 3, 2, "start"),
    generated(5, 16, 2, 3, "x"),
)


def unstructured(seed: int, states: int, inputs: int, outputs: int) -> StateTable:
    """A small table without structure: every combination goes anywhere."""
    rng = random.Random(seed)
    names = tuple(f"s{k}" for k in range(states))
    rows = tuple(
        (
            name,
            "".join(str(p >> i & 1) for i in range(inputs)),
            rng.choice(names),
            "".join(rng.choice("01") for _ in range(outputs)),
        )
        for name in names
        for p in range(1 << inputs)
    )
    return StateTable(f"unstructured {seed}", names, rows, rng.choice(("x", "start")))
