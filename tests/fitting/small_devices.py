"""Small devices and designs as files, made from a few numbers."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.behaviour.reader import read_behaviour
from pla.device.reader import read_device
from pla.fuses.link import link
from pla.fuses.proof import prove

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence
    from pathlib import Path

    from oracles.functions import Table

NAME = "small"


@dataclass(frozen=True)
class Gate:
    """A cell with a pin.

    Attributes:
        terms: Of its own OR gate; ``None`` for a column of the shared OR array.
        shows: What its pin shows: ``sum``, ``sum'`` or ``either``, by a link.
        feedback: What its columns carry; ``None`` if it has none.
        enable: Whether it has an enable row.
    """

    terms: int | None
    shows: str = "either"
    feedback: str | None = None
    enable: bool = False

    @property
    def inversions(self) -> tuple[bool, ...]:
        """Whether the pin can show the complement of the sum: what it may be."""
        return {"sum": (False,), "sum'": (True,), "either": (False, True)}[self.shows]


def device_text(inputs: int, gates: Sequence[Gate], shared: int = 0, more: str = "") -> str:
    """A device file: pins 1 to `inputs`, then one for each gate, then ground and supply."""
    pins = [inputs + 1 + k for k in range(len(gates))]
    fed = [pin for pin, gate in zip(pins, gates, strict=True) if gate.feedback is not None]
    columns = [word for source in [*range(1, inputs + 1), *fed] for word in (source, f"{source}'")]
    row, kinds = 0, []
    own = sum(gate.enable + (gate.terms or 0) for gate in gates)
    rows, sums = own + shared, [p for p, g in zip(pins, gates, strict=True) if g.terms is None]
    fuse = rows * len(columns) + shared * len(sums)
    for pin, gate in zip(pins, gates, strict=True):
        keys = [f"pin = {pin}"]
        if gate.enable:
            keys.append(f"enable = {row}")
            row += 1
        if gate.terms is not None:
            keys.append(f'terms = "{row}..{row + gate.terms - 1}"')
            row += gate.terms
        either = gate.shows == "either"
        keys.append(f"links = [{fuse}]" if either else "links = []")
        feedback = "" if gate.feedback is None else f', feedback = "{gate.feedback}"'
        senses = [("0", "sum"), ("1", "sum'")] if either else [("", gate.shows)]
        modes = [f'{{ set = "{s}", pin = "{p}"{feedback} }}' for s, p in senses]
        kinds += [
            f"[kind.k{pin}]",
            'bits = ["polarity"]' if either else "bits = []",
            f"modes = [{', '.join(modes)}]",
            f"cells = [{{ {', '.join(keys)} }}]",
        ]
        fuse += either
    lines = [
        f'name = "{NAME}"',
        'summary = "a small array"',
        'technology = "one-time"',
        f"pins = {inputs + len(gates) + 2}",
        f"fuses = {fuse}",
        f"ground = {inputs + len(gates) + 1}",
        f"power = {inputs + len(gates) + 2}",
        "[links]",
        "blank = 0",
        "connected = 0",
        'unused_term = "blank"',
        *['unused_enable = "blank"'] * any(gate.enable for gate in gates),
        "[and]",
        f'columns = "{" ".join(map(str, columns))}"',
        f"terms = {rows}",
        "first_fuse = 0",
        f"term_step = {len(columns)}",
    ]
    if sums:
        first = rows * len(columns)
        lines += ["[or]", f'columns = "{" ".join(map(str, sums))}"', f"first_fuse = {first}"]
        lines += [f"term_step = {len(sums)}"]
    return "\n".join([*lines, *kinds, more, ""])


def device(folder: Path, text: str):
    path = folder / "device.toml"
    path.write_text(text, encoding="utf-8")
    return read_device(str(path))


def design_text(
    table: Table,
    low: Sequence[bool] = (),
    places: Mapping[str, int] | None = None,
    enables: Mapping[int, str] | None = None,
) -> str:
    """Inputs ``x0``, ``x1``, … and outputs ``y0``, ``y1``, … with this truth table."""
    low = low or [False] * table.outputs
    names = [f"x{i}" for i in range(table.inputs)]
    lines = ['name = "Table"', "[inputs]", *(f"{name} = 1" for name in names), "[outputs]"]
    for j, is_low in enumerate(low):
        keys = ['active = "low"'] * is_low
        if j in (enables or {}):
            keys.append(f'enable = "{enables[j]}"')
        lines.append(f"y{j} = {{ {', '.join(keys)} }}" if keys else f"y{j} = 1")
    for j, (on, off) in enumerate(zip(table.on, table.off, strict=True)):
        of = ", ".join(f'"{name}"' for name in reversed(names))
        lines += [f"[minterms.y{j}]", f"of = [{of}]", f"on = {_points(table, on)}"]
        lines += [f"off = {_points(table, off)}", 'others = "x"']
    if places:
        lines += [f"[place.{NAME}]", *(f"{name} = {pin}" for name, pin in places.items())]
    return "\n".join([*lines, ""])


def design(folder: Path, text: str):
    path = folder / "design.toml"
    path.write_text(text, encoding="utf-8")
    return read_behaviour(str(path))


def proven(plan) -> bool:
    """Whether the fuses of a plan do what the design asks for."""
    return prove(plan, link(plan)).equal


def _points(table, points):
    return [p for p in range(1 << table.inputs) if points >> p & 1]
