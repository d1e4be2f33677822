"""What `device exercise` says, as text and as a document."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from pla.report.text import filled

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.exercise.measured import Findings
    from pla.exercise.program import Exercise, Exercised

__all__ = ["exercise_document", "exercise_text", "findings_document", "findings_text"]

_MOST = 12


def exercise_text(found: Exercise, paths: Sequence[str]) -> str:
    """Files written, and how many slips show."""
    lines = [
        (
            f"{found.device.name}: {found.told} of {found.tried} slips in its device file show at "
            f"{_parts(len(found.parts))}"
        )
    ]
    for number, own in enumerate(found.parts, 1):
        known = sum(sign in "HLZ" for row in own.expected.values() for sign in row)
        lines.append(
            f"part {number}: {len(own.part.steps)} steps, {known} readings, "
            f"{len(own.shown)} slips show"
        )
    if found.parts[-1].open:
        lines.append(f"{len(found.parts[-1].open)} slips do not show; the report lists them")
    return "\n".join([*lines, "", *paths])


def _parts(count: int) -> str:
    return "one part" if count == 1 else f"{count} parts"


def exercise_document(found: Exercise, paths: Sequence[str]) -> dict[str, Any]:
    """The same for programs."""
    return {
        "device": found.device.name,
        "slips": {"tried": found.tried, "shown": found.told},
        "parts": [
            {
                "number": number,
                "settings": {
                    str(cell.key): own.part.modes[cell.key].set for cell in found.device.cells
                },
                "fuse_checksum": f"{own.part.fuses.checksum:04X}",
                "steps": [
                    {
                        "set": {str(pin): int(level) for pin, level in step.levels.items()},
                        "expected": {str(pin): row[k] for pin, row in own.expected.items()},
                    }
                    for k, step in enumerate(own.part.steps)
                ],
                "shown": [
                    {
                        "slip": telling.what,
                        "readings": [{"step": k + 1, "pin": pin} for k, pin in telling.where],
                    }
                    for telling in own.shown
                ],
                "open": list(own.open),
            }
            for number, own in enumerate(found.parts, 1)
        ],
        "files": list(paths),
    }


def findings_text(found: Findings, exercised: Exercised, part: int) -> str:
    """What readings tell, in words."""
    name = exercised.part.device.name
    if not found.differing:
        return filled(
            f"All {found.count} readings of part {part} are as expected: none of the "
            f"{len(exercised.shown)} slips that it shows is in the device file of {name}."
            if found.count == _all(exercised)
            else f"All {found.count} readings that are filled in are as expected; "
            f"{_all(exercised) - found.count} are missing, and the slips that show there only are "
            "not excluded."
        )
    lines = [f"{len(found.differing)} of {found.count} readings of part {part} differ:"]
    for step, pin in sorted(found.differing)[:_MOST]:
        expected, measured = exercised.expected[pin][step], found.measured[pin][step]
        lines.append(f"  step {step + 1}, pin {pin}: expected {expected}, measured {measured}")
    if len(found.differing) > _MOST:
        lines.append(f"  and {len(found.differing) - _MOST} more")
    if found.explaining:
        lines += ["", f"Explained in full by any one of these in the device file of {name}:"]
        lines += [f"  {what}" for what in found.explaining]
        return "\n".join(lines)
    lines += ["", filled("No single slip explains all of them: there may be several at once.")]
    if found.nearest:
        lines.append("Nearest, with the readings that they leave unexplained:")
        lines += [f"  {rest:4} {what}" for what, rest in found.nearest]
    return "\n".join(lines)


def _all(exercised: Exercised) -> int:
    return sum(sign in "HLZ" for row in exercised.expected.values() for sign in row)


def findings_document(found: Findings, exercised: Exercised, part: int) -> dict[str, Any]:
    """The same for programs."""
    return {
        "device": exercised.part.device.name,
        "part": part,
        "readings": found.count,
        "expected_readings": _all(exercised),
        "differing": [
            {
                "step": step + 1,
                "pin": pin,
                "expected": exercised.expected[pin][step],
                "measured": found.measured[pin][step],
            }
            for step, pin in sorted(found.differing)
        ],
        "explained_by": list(found.explaining),
        "nearest": [{"slip": what, "unexplained": rest} for what, rest in found.nearest],
    }
