"""A fuse file that has been proven before anyone sees it."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

from pla import __version__
from pla.errors import Diagnostic, InternalError
from pla.fuses.jesd3 import read_fuse_file, write_fuse_file
from pla.fuses.link import link
from pla.fuses.proof import prove

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.behaviour.model import Behaviour
    from pla.fitting.model import Plan
    from pla.fuses.fusemap import FuseMap
    from pla.fuses.proof import Proof

__all__ = ["ProvenFile", "fuse_file", "fuse_file_name"]


@dataclass(frozen=True, slots=True)
class ProvenFile:
    """The bytes of a fuse file, what a reader makes of them, and the proof of that."""

    data: bytes
    fuses: FuseMap
    proof: Proof


def fuse_file(plan: Plan, name: str) -> ProvenFile:
    """Write the fuse file of a plan, read its bytes back, and prove what was read.

    Args:
        plan: What is to be programmed.
        name: Name of the file, for messages.

    Raises:
        InternalError: If the bytes do not read back as written, or the array that they describe is
            not what the design asks for. Nothing has been written to the disk then.
    """
    device, behaviour = plan.device, plan.behaviour
    fuses = link(plan)
    title = behaviour.name + (f", revision {behaviour.revision}" if behaviour.revision else "")
    data = write_fuse_file(title, list(_notes(plan)), device.pins, fuses, list(device.blocks()))
    back = read_fuse_file(data, name)
    if back.fuses != fuses:
        raise InternalError(
            [Diagnostic("READ-BACK", "the fuse file does not read back as written")]
        )
    proof = prove(plan, back.fuses)
    if proof.counterexample is not None:
        message = f"the fuse file is not equal to the design: {proof.counterexample.text}"
        raise InternalError([Diagnostic("NOT-EQUAL", message)])
    return ProvenFile(data, back.fuses, proof)


def fuse_file_name(behaviour: Behaviour) -> str:
    """The design file's stem with the usual ending; ``design.jed`` for standard input."""
    stem = "design" if behaviour.file == "-" else Path(behaviour.file).stem
    return f"{stem}.jed"


def _notes(plan: Plan) -> Iterator[str]:
    behaviour = plan.behaviour
    yield f"fuseplan {__version__}"
    yield f"device {plan.device.name}"
    yield f"design {behaviour.name}"
    if behaviour.revision:
        yield f"revision {behaviour.revision}"
    pins = [
        (signal.pin, kind, signal.name, signal.active_low)
        for kind, signals in (("input", plan.inputs), ("output", plan.outputs))
        for signal in signals
        if signal.pin is not None
    ]
    for pin, kind, name, active_low in sorted(pins):
        yield f"pin {pin} {kind} {name}{', active low' if active_low else ''}"
