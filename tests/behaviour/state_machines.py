"""State tables made at random, written out, and what they mean by definition.

Nothing here looks at covers or at the program's way of encoding: a machine is a dictionary from
(state, number on the inputs) to (next state, output values).
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import product

from hypothesis import strategies as st

STYLES = ("free", "counting", "gray", "one-hot", "table")


@dataclass(frozen=True)
class Machine:
    """A machine of `n_states` states, `n_inputs` single inputs a, b, … and outputs y0, y1, …"""

    n_states: int
    n_inputs: int
    n_outputs: int
    start: int
    moves: dict
    style: str
    given: tuple
    unused: str

    @property
    def states(self):
        return [f"s{k}" for k in range(self.n_states)]

    @property
    def inputs(self):
        return "abcd"[: self.n_inputs]

    @property
    def codes(self):
        """For each state its code as text, by the books."""
        if self.style == "table":
            return list(self.given)
        if self.style == "one-hot":
            return ["0" * (self.n_states - 1 - k) + "1" + "0" * k for k in range(self.n_states)]
        width = 1
        while 2**width < self.n_states:
            width += 1
        if self.style == "gray":
            # Reflect and prefix: the construction of the patent, not the formula with a shift.
            listed = ["0", "1"]
            while len(listed[0]) < width:
                listed = ["0" + c for c in listed] + ["1" + c for c in reversed(listed)]
            return listed[: self.n_states]
        return ["".join(bits) for bits in product("01", repeat=width)][: self.n_states]

    def at(self, code, number):
        """Next code and outputs; ``x`` for what is free."""
        codes = self.codes
        if code in codes:
            state = codes.index(code)
        elif self.unused == "start":
            state = self.start
        else:
            return "x" * len(code), "x" * self.n_outputs
        then, outputs = self.moves[state, number]
        return codes[then], outputs

    def bits(self, number):
        """The values of the inputs, the first most significant."""
        return format(number, f"0{self.n_inputs}b") if self.n_inputs else ""


@st.composite
def machines(draw, styles=STYLES, most_states=5, most_inputs=2):
    n_states = draw(st.integers(2, most_states))
    n_inputs = draw(st.integers(0, most_inputs))
    n_outputs = draw(st.integers(0, 2))
    moves = {
        (state, number): (
            draw(st.integers(0, n_states - 1)),
            "".join(draw(st.sampled_from("01x")) for _ in range(n_outputs)),
        )
        for state in range(n_states)
        for number in range(2**n_inputs)
    }
    style = draw(st.sampled_from(styles))
    given = ()
    if style == "table":
        width = max(1, (n_states - 1).bit_length()) + draw(st.integers(0, 1))
        every = ["".join(bits) for bits in product("01", repeat=width)]
        given = tuple(draw(st.permutations(every))[:n_states])
    start = draw(st.integers(0, n_states - 1))
    unused = draw(st.sampled_from(["start", "x"]))
    return Machine(n_states, n_inputs, n_outputs, start, moves, style, given, unused)


def rows_of(machine, layout):
    """The rows of the table: every one, or one for the commonest move of each state by others.

    Args:
        machine: What to write.
        layout: 0 writes every row; 1 puts the commonest move into ``others`` of the state; 2
            writes every row and an ``others`` of all states that never applies.
    """
    lines = []
    for state, name in enumerate(machine.states):
        moves = [(machine.bits(n), *machine.moves[state, n]) for n in range(2**machine.n_inputs)]
        common = None
        if layout == 1 and machine.n_inputs:
            kinds = [move[1:] for move in moves]
            common = max(kinds, key=kinds.count)
        for bits, then, outputs in moves:
            if (then, outputs) != common:
                lines.append((name, " ".join(bits), f"s{then}", " ".join(outputs)))
        if common is not None:
            lines.append((name, "others", f"s{common[0]}", " ".join(common[1])))
    if layout == 2 and machine.n_inputs:
        lines.append(("-", "others", "s0", " ".join("0" * machine.n_outputs)))
    return "\n".join(" | ".join(line) for line in lines)


def design_of(machine, layout=0, *, as_output=False, more=""):
    """A design file with nothing but the machine, and an output of its own."""
    outputs = [f"y{k}" for k in range(machine.n_outputs)]
    width = len(machine.codes[0])
    codes = f'"{machine.style}"'
    if machine.style == "table":
        pairs = zip(machine.states, machine.codes, strict=True)
        codes = "{ " + ", ".join(f'{name} = "{code}"' for name, code in pairs) + " }"
    listed = ", ".join(f'"{name}"' for name in machine.states)
    head = " | ".join(["state", " ".join(machine.inputs), "then", " ".join(outputs)])
    lines = [
        "[inputs]",
        "clk = 1",
        *(f"{name} = 1" for name in machine.inputs),
        "[outputs]",
        "z = 1",
        *(f"{name} = 1" for name in outputs),
        *([f"m = {width}"] if as_output else []),
        "[logic]",
        'z = "clk"',
        "[[state_table]]",
        'of = "m"',
        'clock = "clk"',
        f"states = [{listed}]",
        f'start = "s{machine.start}"',
        f"codes = {codes}",
        f'unused = "{machine.unused}"',
        more,
        'rows = """',
        head,
        rows_of(machine, layout),
        '"""',
    ]
    return "\n".join(lines)
