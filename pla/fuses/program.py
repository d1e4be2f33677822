"""A fuse file that has been proven before anyone sees it."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

from pla import __version__
from pla.errors import Diagnostic, InputError, InternalError
from pla.fuses.jesd3 import read_fuse_file, write_fuse_file
from pla.fuses.link import link
from pla.fuses.proof import prove

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.behaviour.model import Behaviour
    from pla.fitting.model import Plan
    from pla.fuses.fusemap import FuseMap
    from pla.fuses.proof import Counterexample, Proof

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
        InputError: If the design's bidirectional outputs drive each other in a ring, so that
            they would hold whatever value they have.
        InternalError: If the bytes do not read back as written, or the array that they describe is
            not what the design asks for. Nothing has been written to the disk then.
    """
    device, design = plan.device, plan.design
    fuses = link(plan)
    title = design.name + (f", revision {design.revision}" if design.revision else "")
    data = write_fuse_file(title, list(_notes(plan)), device.pins, fuses, list(device.blocks()))
    back = read_fuse_file(data, name)
    if back.fuses != fuses:
        raise InternalError(
            [Diagnostic("READ-BACK", "the fuse file does not read back as written")]
        )
    proof = prove(plan, back.fuses)
    found = proof.counterexample
    if found is not None and found.fault == "held":
        raise InputError([_held(plan, found)])
    if found is not None:
        message = f"the fuse file is not equal to the design: {found.text}"
        raise InternalError([Diagnostic("NOT-EQUAL", message)])
    return ProvenFile(data, back.fuses, proof)


def _held(plan: Plan, found: Counterexample) -> Diagnostic:
    places = {output.name: output.location for output in plan.design.outputs}
    hint = "outputs that read each other need enables of which never more than one is 1"
    return Diagnostic("HOLDS-ITSELF", found.text, places.get(found.output), hint)


def fuse_file_name(behaviour: Behaviour) -> str:
    """The design file's stem with the usual ending; ``design.jed`` for standard input."""
    stem = "design" if behaviour.file == "-" else Path(behaviour.file).stem
    return f"{stem}.jed"


def _notes(plan: Plan) -> Iterator[str]:
    """Version, device, design, what is on each pin, what is inside, and pins to be tied."""
    design = plan.design
    yield f"fuseplan {__version__}"
    yield f"device {plan.device.name}"
    yield f"design {design.name}"
    if design.revision:
        yield f"revision {design.revision}"
    enables = {o.name: o.enable.text for o in design.outputs if o.enable is not None}
    pins = [
        (signal.pin, kind, signal.name, signal.active_low)
        for kind, signals in (("input", plan.inputs), ("output", plan.outputs))
        for signal in signals
        if signal.pin is not None
    ]
    for pin, kind, name, active_low in sorted(pins):
        enable = f", driven while {enables[name]}" if name in enables and kind == "output" else ""
        yield f"pin {pin} {kind} {name}{', active low' if active_low else ''}{enable}"
    for pin, level in sorted(plan.tied):
        yield f"pin {pin} enables outputs, tie {'high' if level else 'low'}"
    for output in plan.outputs:
        if output.pin is None:
            shown = f", shows at pin {output.shown}" if output.shown is not None else ""
            yield f"cell {output.cell.key} inner {output.name}{shown}"
