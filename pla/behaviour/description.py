"""Descriptions of outputs and inner signals, and the order in which they are worked out."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Literal

from pla.logic import algebra

if TYPE_CHECKING:
    from collections.abc import Callable, Iterable, Sequence

    from pla.behaviour.equations import Sets
    from pla.behaviour.listing import Solved
    from pla.behaviour.signals import Field, Signals
    from pla.errors import Diagnostics, Location
    from pla.logic.cubes import Cover

__all__ = ["Claims", "Description", "Form", "Solver"]

Form = Literal["cases", "minterms", "logic", "address_map", "state_table"]

_LATCH_HINT = (
    'a clocked signal may name its present value: declare it with register = "D" and clock = "…"; '
    "latches without a clock are not supported yet"
)


@dataclass(slots=True)
class Claims:
    """Which output or inner signal is described where: each only once.

    Attributes:
        signals: What is declared.
        diagnostics: Takes what is described twice.
        places: For each described bit, where its description stands, and the kind of section.
        incomplete: Some section does not tell what it describes, which has its own error.
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
                what = "signal" if self.signals.inner else "output"
                self.diagnostics.error(
                    "DESCRIBED-TWICE",
                    f"{self.signals.described_names[bit]!r} is described twice: here and at "
                    f"{self.places[bit][0]}",
                    at,
                    f"each {what} is described once, over all sections",
                )
            self.places.setdefault(bit, (at, form))


@dataclass(frozen=True, slots=True)
class Description:
    """What some outputs or inner signals do, once those that it names are known.

    Attributes:
        outputs: Positions of the bits described.
        needs: Described bits named in it, and where.
        solve: Gives the values from [never] and the values of named bits; ``None`` if something is
            wrong, which it has reported.
        whole: Gives the value of the one bit for impossible inputs too, from such values of the
            named bits; ``None`` where the description says nothing about impossible inputs.
    """

    outputs: tuple[int, ...]
    needs: dict[int, Location]
    solve: Callable[[Cover, Callable[[int], Sets]], Solved | None]
    whole: Callable[[Callable[[int], Sets]], Sets | None] | None = None


class Solver:
    """Works out descriptions, each behind those that it names.

    What is wrong goes to `diagnostics`; descriptions that depend on it are left out.
    """

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
        self.whole: dict[int, Sets] = {}

    def run(self) -> list[Solved]:
        """Everything that can be worked out, in order of the descriptions."""
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
        """Work out a bit that is named at a place, and check that it may be named."""
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
        """The value of a bit that is `ready`, outside of impossible inputs."""
        solved = self.solved[self.of_output[output]]
        if solved is None:  # pragma: no cover - `visit` does not ask for it then
            raise LookupError(output)
        return solved.on.of_output(output), solved.off.of_output(output)

    def whole_sets(self, output: int) -> Sets:
        """The same for all inputs, as far as its description or `impossible` say."""
        if output not in self.whole:
            self.whole[output] = self._whole_sets(output)
        return self.whole[output]

    def silent(self, outputs: Iterable[int]) -> list[int]:
        """Which of these bits, or of those that they name, say nothing about impossible inputs."""
        waiting, seen, found = list(outputs), set[int](), list[int]()
        while waiting:
            output = waiting.pop()
            if output in seen or self._impossible(output) is not None:
                continue
            seen.add(output)
            description = self.descriptions[self.of_output[output]]
            if description.whole:
                waiting += description.needs
            else:
                found.append(output)
        return sorted(found)

    def _whole_sets(self, output: int) -> Sets:
        on, off = self.sets(output)
        impossible = self._impossible(output)
        if impossible is not None:
            return (on + self.never, off) if impossible else (on, off + self.never)
        whole = self.descriptions[self.of_output[output]].whole
        return (whole(self.whole_sets) if whole else None) or (on, off)

    def _impossible(self, output: int) -> int | None:
        signals = self.signals.outputs
        return next((s.impossible for s in signals if output in s.positions), None)

    def report_cycle(self, index: int, needed: int, at: Location) -> None:
        start = next(k for k, (i, _) in enumerate(self.path) if i == index)
        ring = self.path[start:]
        bits = (needed, *(o for _, o in ring[1:]), needed)
        names = [self.signals.described_names[o] for o in bits]
        what = "outputs" if max(bits) < self.signals.n_outputs else "signals"
        self.diagnostics.error(
            "CYCLE",
            f"{what} depend on themselves without a register: {' -> '.join(names)}",
            at,
            _LATCH_HINT
            if len(ring) == 1
            else "an arrow points to what is named in an equation; break the ring at one of them",
        )
        for i, _ in ring:
            self.solved[i] = None

    def report_free(self, output: int, reason: str, free: Cover, at: Location) -> None:
        cube = next(iter(free))
        mask = cube.ones | cube.zeros
        example = self.signals.show_point(cube.ones, mask)
        count = algebra.size(free)
        name = self.signals.described_names[output]
        self.diagnostics.error(
            "FREE-OUTPUT-NAMED",
            f"{name!r} may not be named here: it has don't cares outside [never] ({reason}), for "
            f"example {example}; what it will be there is decided only by the minimizer",
            at,
            f"give {name} values for all {count} of these input combinations, or describe this "
            "output from inputs alone",
        )
