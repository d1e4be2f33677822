"""Reading equations from TOML strings: ``[logic]``, ``[never]``, ``when`` and ``enable``."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.behaviour.description import Claims, Description
from pla.behaviour.equations import (
    Sets,
    check_tree,
    evaluate,
    granule_points,
    named_bits,
)
from pla.behaviour.listing import Solved
from pla.behaviour.minterms import one_output
from pla.behaviour.problem import Problem
from pla.behaviour.syntax import Node, parse_equation
from pla.logic import algebra
from pla.logic.cubes import Cover

if TYPE_CHECKING:
    from collections.abc import Callable

    from pla.behaviour.signals import Signals, Wanted
    from pla.errors import Diagnostics, Location
    from pla.tomlfile import Path, Section

__all__ = ["Condition", "read_condition", "read_logic", "read_never"]


@dataclass(frozen=True, slots=True)
class Condition:
    """A checked equation and its place.

    Attributes:
        tree: What it says.
        place: The place of a character of it.
        signals: What it speaks of.
        diagnostics: Takes what is wrong with its value.
    """

    tree: Node
    place: Callable[[int], Location]
    signals: Signals
    diagnostics: Diagnostics

    def needs(self) -> dict[int, Location]:
        """Described bits named, and where first."""
        named = named_bits(self.tree, self.signals)
        return {output: self.place(offset) for output, offset in named.items()}

    def value(self, output_sets: Callable[[int], Sets]) -> Sets | None:
        """Where it is 1 and where it is 0; ``None`` if that was reported as too large."""
        try:
            return evaluate(self.tree, self.signals, output_sets)
        except Problem as problem:
            self.diagnostics.error(problem.code, problem.message, self.place(0), problem.hint)
            return None


def read_condition(
    section: Section, path: Path, text: str, signals: Signals, wanted: Wanted | None = None
) -> Condition | None:
    """The equation in a string value, reporting everything that is wrong with it.

    Args:
        section: For file and diagnostics.
        path: The value, from the top of the document.
        text: The value.
        signals: What is declared.
        wanted: ``outside`` if only inputs from outside may be named.
    """

    def place(offset: int) -> Location:
        return section.file.inside(path, offset)

    tree = None
    try:
        tree = parse_equation(text)
        problems = check_tree(tree, signals, wanted)
    except Problem as fault:
        problems = [fault]
    for problem in problems:
        if not problem.known:
            section.diagnostics.error(
                problem.code, problem.message, place(problem.offset), problem.hint
            )
    if problems or tree is None:
        return None
    for offset, span in granule_points(tree, signals):
        section.diagnostics.warning(
            "GRANULE-POINT",
            f"this number stands for {span}, because its lowest bits do not reach the device",
            place(offset),
            f"write in {span} to say so",
        )
    return Condition(tree, place, signals, section.diagnostics)


def read_never(section: Section | None, signals: Signals) -> Cover | None:
    """The impossible inputs; ``None`` if that cannot be told because of errors."""
    nothing = Cover.of(signals.n_inputs)
    if section is None:
        return nothing
    section.unknown_keys(("when",))
    value = section.raw("when", required=True)
    if value is None:
        return None
    key = (*section.path, "when")
    if isinstance(value, str):
        entries = [(key, value)]
    elif isinstance(value, list):
        texts = section.texts("when")
        if texts is None:
            return None
        entries = [((*key, index), text) for index, text in enumerate(texts)]
    else:
        section.wrong("an equation in quotes, or a list of such", "when")
        return None
    conditions = [read_condition(section, path, text, signals, "outside") for path, text in entries]
    found = nothing
    for condition in conditions:
        sets = None if condition is None or signals.too_many else condition.value(_no_outputs)
        if sets is None:
            return None
        found = algebra.union(signals.n_inputs, found, sets[0])
    if algebra.is_tautology(found):
        section.error(
            "NEVER-ALWAYS",
            "[never] makes every input combination impossible",
            section.at("when"),
            "list only what cannot occur",
        )
        return None
    return found


def _no_outputs(output: int) -> Sets:  # pragma: no cover - refused when the tree was checked
    raise LookupError(output)


def read_logic(section: Section, name: str, signals: Signals, claims: Claims) -> Description | None:
    """One equation. What is wrong goes to the diagnostics; then there is no result."""
    output = one_output(section, name, signals, claims, "logic")
    text = section.raw(name)
    if not isinstance(text, str):
        section.wrong("an equation in quotes", name)
        return None
    condition = read_condition(section, (*section.path, name), text, signals)
    if condition is None or output is None:
        return None

    def solve(never: Cover, output_sets: Callable[[int], Sets]) -> Solved | None:
        sets = condition.value(output_sets)
        if sets is None:
            return None
        on, off = (algebra.difference(cover, never).feeding(output.mask) for cover in sets)
        return Solved(on, off)

    outputs = tuple(bit for bit in output.bits if bit is not None)
    return Description(outputs, condition.needs(), solve, condition.value)
