"""Reading ``reads``: the levels at the pins of three-state outputs as inputs."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from pla.behaviour.declaring import check_name, report_twice, table_of
from pla.logic.cubes import MAX_INPUTS

if TYPE_CHECKING:
    from pla.behaviour.signals import Signal
    from pla.tomlfile import Section

__all__ = ["read_back"]


def read_back(
    top: Section,
    inputs: list[Signal],
    outputs: list[Signal],
    broken: set[str],
    taken: dict[str, Signal],
) -> tuple[list[Signal], list[Signal]]:
    """The outputs with what their pins are read as, and these inputs."""
    first = sum(s.size for s in inputs)
    few = first <= MAX_INPUTS
    done: list[Signal] = []
    read: list[Signal] = []
    for output in outputs:
        table = table_of(top, output)
        signal = None if table is None else _read_input(table, output, first)
        if table is None or signal is None:
            done.append(output)
            continue
        if signal.name in taken:
            report_twice(table, signal, taken[signal.name], signal.location)
            done.append(output)
            continue
        taken[signal.name] = signal
        done.append(replace(output, reads=signal.name))
        read.append(signal)
        first += signal.size
        if few and first > MAX_INPUTS:
            few = False
            table.error(
                "TOO-MANY-INPUTS",
                f"with what {output.name} reads there are {first} input bits, at most "
                f"{MAX_INPUTS} are possible",
                signal.location,
            )
    broken.update(_named_to_read(top) - {s.name for s in read})
    return done, read


def _named_to_read(top: Section) -> set[str]:
    """Whatever names are given for the levels at pins, so that none is unknown where it is used."""
    outputs = top.data.get("outputs")
    tables = outputs.values() if isinstance(outputs, dict) else ()
    names = (table.get("reads") for table in tables if isinstance(table, dict))
    return {name for name in names if isinstance(name, str)}


def _read_input(table: Section, output: Signal, first: int) -> Signal | None:
    """The input that an output's table names as the level at its pin."""
    name = table.text("reads")
    if name is None:
        return None
    at = table.at("reads")
    if not check_name(table, name, "input", at) or "enable" not in table:
        return None
    return replace(
        output,
        name=name,
        role="input",
        first=first,
        impossible=None,
        location=at,
        deferred=False,
        read_from=output.name,
        max_delay=None,
        registered=False,
    )
