"""What has to be said beside every plan, and what goes on the part's label."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.report.table import one_line

if TYPE_CHECKING:
    from pla.fitting.model import Plan
    from pla.fuses.fusemap import FuseMap

__all__ = ["CAUTIONS", "label"]

CAUTIONS = (
    "A programmable array is no safety device. Where a fault can hurt someone (interlocks, "
    "heaters, anything that moves) the cut-out must be independent of it, hard-wired, and bring "
    "the work to rest by itself.",
    "Local codes and the judgement of someone qualified for the work take precedence over "
    "anything in this report.",
    "The proof compares fuses with the design by way of the device file. It cannot know whether "
    "the device file describes the part in your hand, nor whether the design is what you meant.",
    "Test a programmed part with the load disconnected, every output in both states, and the "
    "inputs that should never occur as well: read the don't-care audit first.",
)


def label(plan: Plan, fuses: FuseMap) -> str:
    """One line for the part: design, revision, device, fuse checksum."""
    behaviour = plan.behaviour
    revision = f" rev {one_line(behaviour.revision)}" if behaviour.revision else ""
    return f"{one_line(behaviour.name)}{revision} | {plan.device.name} | {fuses.checksum:04X}"
