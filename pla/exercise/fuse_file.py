"""The fuse file of an exercised part, with its steps as test vectors."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla import __version__
from pla.errors import Diagnostic, InternalError
from pla.fuses.jesd3 import read_fuse_file, write_fuse_file

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.exercise.program import Exercised

__all__ = ["exercise_file", "vectors"]


def exercise_file(exercised: Exercised, number: int, name: str, *, with_vectors: bool) -> bytes:
    """The bytes of a fuse file, read back before they are handed out.

    Args:
        exercised: The part.
        number: Which part of the exercise it is, from 1.
        name: Name of the file, for messages.
        with_vectors: Whether the steps go in, so that a programmer can take them itself.

    Raises:
        InternalError: If the bytes do not read back as written.
    """
    part = exercised.part
    device = part.device
    tested = vectors(exercised) if with_vectors else ()
    title = f"Exercise of {device.name}, part {number}, for one scrap part"
    notes = list(_notes(exercised, number))
    blocks = list(device.blocks())
    data = write_fuse_file(title, notes, device.pins, part.fuses, blocks, tested)
    back = read_fuse_file(data, name)
    if back.fuses != part.fuses or tuple(v.conditions for v in back.vectors) != tested:
        message = f"the fuse file {name} does not read back as written"
        raise InternalError([Diagnostic("READ-BACK", message)])
    return data


def vectors(exercised: Exercised) -> tuple[str, ...]:
    """One test vector a step: what is driven, what is expected, what is not known or not tested."""
    device = exercised.part.device
    idle = {*device.ground, *device.power, *device.unconnected}
    found = []
    for k, step in enumerate(exercised.part.steps):
        conditions = []
        for pin in range(1, device.pins + 1):
            if pin in step.levels:
                conditions.append("1" if step.levels[pin] else "0")
            else:
                reading = exercised.expected.get(pin, "")[k : k + 1]
                known = reading in {"H", "L", "Z"}
                conditions.append(reading if known else "N" if pin in idle else "X")
        found.append("".join(conditions))
    return tuple(found)


def _notes(exercised: Exercised, number: int) -> Iterator[str]:
    part = exercised.part
    yield f"fuseplan {__version__}"
    yield f"device {part.device.name}"
    yield f"exercise, part {number}: for one scrap part, tells a wrong device file"
    for cell in part.device.cells:
        states = part.modes[cell.key].set
        if states:
            yield f"{cell} set to {states}"
