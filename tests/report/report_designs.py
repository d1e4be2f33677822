"""Random designs for the reports, each with what it leaves open, worked out point by point.

Bit ``i`` of a point is input ``i``. Nothing here uses the program's cube algebra.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from hypothesis import strategies as st

from pla.behaviour.reader import read_behaviour
from pla.logic.minimize import minimize

if TYPE_CHECKING:
    from pathlib import Path

    from pla.behaviour.model import Behaviour
    from pla.logic.cubes import Cover, Cube
    from pla.logic.minimize import Minimum


@dataclass
class Design:
    """The text of a design file, and what it says.

    `values[j][p]` is "0", "1" or the reason why output j is open at point p; `never[p]` tells
    whether p is impossible; `driven[j][p]` whether output j drives its pin.
    """

    text: str
    values: list[list[str]]
    never: list[bool]
    driven: list[list[bool]]

    def read(self, folder: Path) -> tuple[Behaviour, Minimum]:
        path = folder / "random.toml"
        path.write_text(self.text)
        behaviour = read_behaviour(str(path))
        return behaviour, minimize(behaviour.function)


SIGNALS = [("code", 2), ("hatch", 1), ("jam", 1)]  # the bus in front, high bit first
OUTPUTS = ["fan", "horn", "lamp"]


@st.composite
def designs(draw: st.DrawFn, *, enables: bool = False) -> Design:
    signals = SIGNALS[: draw(st.integers(1, 3))]
    bits = [(name, k) for name, size in signals for k in reversed(range(size))]
    points = range(1 << len(bits))
    never = [draw(st.integers(0, 3)) == 0 for _ in points]
    if all(never):
        never[0] = False
    lines = ['name = "Random"', "[inputs]"]
    for name, size in signals:
        level = draw(st.sampled_from(["high", "low"]))
        lines.append(f'{name} = {{ bits = {size}, active = "{level}" }}')
    lines.append("[outputs]")
    values, tables, driven = [], [], []
    for output in OUTPUTS[: draw(st.integers(1, 3))]:
        impossible = draw(st.sampled_from([None, None, 0, 1]))
        enable = draw(st.sampled_from([None, *_ENABLES])) if enables else None
        keys = [] if impossible is None else [f"impossible = {impossible}"]
        keys += [] if enable is None else [f'enable = "{enable}"']
        lines.append(f"{output} = {{ {', '.join(keys)} }}")
        drives = [enable is None or _ENABLES[enable](p) for p in points]
        driven.append(drives)
        others = draw(st.sampled_from("01x"))
        listed = {p: draw(st.sampled_from("01x")) for p in points if draw(st.booleans())}
        rows = [f"{_cells(p, signals)} | {value}" for p, value in listed.items()]
        head = " | ".join(name for name, _ in signals)
        table = "\n".join([f"{head} | {output}", *rows, f"others | {others}"])
        tables.append(f'[[cases]]\nrows = """\n{table}\n"""')
        own = []
        for p in points:
            said = listed.get(p, "others" if others == "x" else others)
            if never[p]:
                said = "never" if impossible is None or not drives[p] else str(impossible)
            elif not drives[p]:
                said = "disabled"
            own.append(said)
        values.append(own)
    if any(never):
        when = [f'"{_product(p, bits)}"' for p in points if never[p]]
        lines += ["[never]", f"when = [{', '.join(when)}]"]
    return Design("\n".join([*lines, *tables]) + "\n", values, never, driven)


# Expressions over the bus, whose high bit is bit 0 of a point.
_ENABLES = {
    "code[1]": lambda p: bool(p & 1),
    "code != 0": lambda p: p & 3 != 0,
    "code[0]'": lambda p: not p & 2,
}


def _cells(point: int, signals: list[tuple[str, int]]) -> str:
    cells, at = [], 0
    for _, size in signals:
        digits = "".join(str(point >> (at + k) & 1) for k in range(size))
        cells.append(f"0b{digits}" if size > 1 else digits)
        at += size
    return " | ".join(cells)


def _product(point: int, bits: list[tuple[str, int]]) -> str:
    sizes = dict(SIGNALS)
    return " ".join(
        f"{name}[{k}]{'' if point >> i & 1 else chr(39)}"
        if sizes[name] > 1
        else f"{name}{'' if point >> i & 1 else chr(39)}"
        for i, (name, k) in enumerate(bits)
    )


def holds(cube: Cube, point: int) -> bool:
    """Whether a point is in a cube, by looking at every literal."""
    return all(
        not (cube.ones >> i & 1 and not point >> i & 1)
        and not (cube.zeros >> i & 1 and point >> i & 1)
        for i in range(64)
    )


def asserted(cover: Cover, complemented: tuple[bool, ...], output: int, point: int) -> int:
    """What an output is at a point, term by term."""
    fed = any(cube.outputs >> output & 1 and holds(cube, point) for cube in cover)
    return int(fed != complemented[output])
