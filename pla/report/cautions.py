"""What has to be said beside every plan, and what goes on the part's label."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.report.layout import broken
from pla.report.text import one_line

if TYPE_CHECKING:
    from pla.fitting.model import Plan
    from pla.fuses.fusemap import FuseMap

__all__ = ["CAUTIONS", "LABEL_WIDTH", "label"]

LABEL_WIDTH = 24
"""Characters in a line of a label for a small part."""

# Common practice, no source.
CAUTIONS = (
    (
        "A programmable array is no safety device. Where a fault can hurt someone (interlocks, "
        "heaters, anything that moves) there must be a hard-wired cut-out that does not depend on "
        "the array and brings the work to rest by itself."
    ),
    (
        "Local codes, and the practice of those licensed or qualified for the work, take "
        "precedence over anything said here."
    ),
    (
        "Test a programmed part with the load disconnected: every output in both states, and the "
        "inputs that should never occur as well. Broken wires and worn switches make the "
        "impossible happen; the don't-care audit says what the outputs do then."
    ),
    (
        "The proof compares the fuses with the design by way of the device file. It cannot know "
        "whether that file describes the part in your hand, or whether the design is what you "
        "meant."
    ),
)


def label(plan: Plan, fuses: FuseMap) -> tuple[str, ...]:
    """Short lines for the part: design, revision, device, fuse checksum, room for the date."""
    design = plan.design
    revision = (f"rev {one_line(design.revision)}",) if design.revision else ()
    said = (
        one_line(design.name),
        *revision,
        one_line(plan.device.name),
        f"fuse checksum {fuses.checksum:04X}",
        "date ".ljust(LABEL_WIDTH, "_"),
    )
    return tuple(line for text in said for line in broken(text, LABEL_WIDTH))
