"""Descriptions of outputs, from whatever section, and the order in which they are worked out."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Literal

from pla.logic import algebra

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from pla.behaviour.equations import Sets
    from pla.behaviour.listing import Solved
    from pla.behaviour.signals import Field, Signals
    from pla.errors import Diagnostics, Location
    from pla.logic.cubes import Cover

__all__ = ["Claims", "Description", "Form", "solve_all"]

Form = Literal["cases", "minterms", "logic", "address_map"]


@dataclass(slots=True)
class Claims:
    """Which output is described where: each only once.

    Attributes:
        signals: What is declared.
        diagnostics: Takes what is described twice.
        places: For each output position, where its description stands, and the kind of section.
        incomplete: Some section does not tell which outputs it describes, which has its own error.
    """

    signals: Signals
    diagnostics: Diagnostics
    places: dict[int, tuple[Location, Form]] = field(default_factory=dict)
    incomplete: bool = False

    def claim(self, described: Field, at: Location, form: Form) -> None:
        """Note where an output is described; report it if that is the second time."""
        reported = False
        for bit in described.bits:
            if bit is None:  # pragma: no cover - outputs reach the device
                continue
            if bit in self.places and not reported:
                reported = True
                self.diagnostics.error(
                    "DESCRIBED-TWICE",
                    f"{self.signals.output_names[bit]!r} is described twice: here and at "
                    f"{self.places[bit][0]}",
                    at,
                    "each output is described once, over all sections",
                )
            self.places.setdefault(bit, (at, form))


@dataclass(frozen=True, slots=True)
class Description:
    """What some outputs do, once the outputs that it names are known.

    Attributes:
        outputs: Positions of the outputs described.
        needs: Outputs named in it, and where.
        solve: Gives the values from [never] and the values of named outputs; ``None`` if something
            is wrong, which it has reported.
    """

    outputs: tuple[int, ...]
    needs: dict[int, Location]
    solve: Callable[[Cover, Callable[[int], Sets]], Solved | None]


def solve_all(
    descriptions: Sequence[Description],
    never: Cover,
    signals: Signals,
    diagnostics: Diagnostics,
) -> list[Solved]:
    """Work out all descriptions, each behind those that it names.

    What is wrong goes to `diagnostics`; descriptions that depend on it are left out.
    """
    return _Solver(descriptions, never, signals, diagnostics).run()


class _Solver:
    def __init__(
        self,
        descriptions: Sequence[Description],
        never: Cover,
        signals: Signals,
        diagnostics: Diagnostics,
    ) -> None:
        self.descriptions = descriptions
        self.never = never
        self.signals = signals
        self.diagnostics = diagnostics
        self.of_output = {o: i for i, d in enumerate(descriptions) for o in d.outputs}
        self.solved: dict[int, Solved | None] = {}
        self.path: list[tuple[int, int]] = []

    def run(self) -> list[Solved]:
        for index, description in enumerate(self.descriptions):
            self.visit(index, description.outputs[0])
        found = (self.solved[index] for index in range(len(self.descriptions)))
        return [solved for solved in found if solved is not None]

    def visit(self, index: int, output: int) -> None:
        if index in self.solved:
            return
        self.path.append((index, output))
        description = self.descriptions[index]
        good = True
        for needed, at in description.needs.items():
            good &= self.ready(needed, at)
        self.path.pop()
        if index not in self.solved:
            self.solved[index] = description.solve(self.never, self.sets) if good else None

    def ready(self, needed: int, at: Location) -> bool:
        """Work out an output that is named at a place, and check that it may be named."""
        index = self.of_output.get(needed)
        if index is None:
            return False  # it is not described, which is an error of its own
        if index not in self.solved and index in [i for i, _ in self.path]:
            self.report_cycle(index, needed, at)
            return False
        self.visit(index, needed)
        solved = self.solved[index]
        if solved is None:
            return False
        for reason, cover in solved.open:
            free = cover.of_output(needed)
            if len(free):
                self.report_free(needed, reason, free, at)
                return False
        return True

    def sets(self, output: int) -> Sets:
        solved = self.solved[self.of_output[output]]
        if solved is None:  # pragma: no cover - `visit` does not ask for it then
            raise LookupError(output)
        return solved.on.of_output(output), solved.off.of_output(output)

    def report_cycle(self, index: int, needed: int, at: Location) -> None:
        start = next(k for k, (i, _) in enumerate(self.path) if i == index)
        ring = self.path[start:]
        names = [self.signals.output_names[o] for o in (needed, *(o for _, o in ring[1:]), needed)]
        self.diagnostics.error(
            "CYCLE",
            f"outputs depend on themselves without a register: {' -> '.join(names)}",
            at,
            "an arrow points to what is named in an equation; break the ring at one of them",
        )
        for i, _ in ring:
            self.solved[i] = None

    def report_free(self, output: int, reason: str, free: Cover, at: Location) -> None:
        cube = next(iter(free))
        mask = cube.ones | cube.zeros
        example = self.signals.show_point(cube.ones, mask)
        count = algebra.size(free)
        name = self.signals.output_names[output]
        self.diagnostics.error(
            "FREE-OUTPUT-NAMED",
            f"{name!r} may not be named here: it has don't cares outside [never] ({reason}), for "
            f"example {example}; what it will be there is decided only by the minimizer",
            at,
            f"give {name} values for all {count} of these input combinations, or describe this "
            "output from inputs alone",
        )
