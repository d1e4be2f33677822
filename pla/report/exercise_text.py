"""What `device exercise` says, as text and as a document."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from pla.report.text import filled

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.exercise.measured import Findings
    from pla.exercise.program import Exercise, Exercised

__all__ = [
    "counted",
    "exercise_document",
    "exercise_text",
    "findings_document",
    "findings_text",
    "kinds_tried",
]

_MOST = 12


def exercise_text(found: Exercise, paths: Sequence[str]) -> str:
    """Files written, and how many slips show."""
    lines = [
        (
            f"{found.device.name}: {found.told} of {counted(found.tried, 'slip')} tried in its "
            f"device file {_show(found.told)} at {_parts(len(found.parts))}"
        ),
        filled(kinds_tried(found)),
    ]
    for number, own in enumerate(found.parts, 1):
        known = sum(sign in "HLZ" for row in own.expected.values() for sign in row)
        lines.append(
            f"part {number}: {counted(len(own.part.steps), 'step')}, {counted(known, 'reading')}, "
            f"{counted(len(own.shown), 'slip')} {_show(len(own.shown))}"
        )
    if found.parts[-1].open:
        count = len(found.parts[-1].open)
        does = "does" if count == 1 else "do"
        lines.append(f"{counted(count, 'slip')} {does} not show; the report lists what stays open")
    return "\n".join([*lines, "", *paths])


def kinds_tried(found: Exercise) -> str:
    """Which kinds of slips were tried, and that others were not."""
    return f"Kinds of slips tried, and no others: {'; '.join(found.kinds)}."


def counted(count: int, what: str) -> str:
    """A number of things."""
    return f"{count} {what}{'' if count == 1 else 's'}"


def _show(count: int) -> str:
    return "shows" if count == 1 else "show"


def _parts(count: int) -> str:
    return "one part" if count == 1 else f"{count} parts"


def exercise_document(found: Exercise, paths: Sequence[str]) -> dict[str, Any]:
    """The same for programs."""
    return {
        "device": found.device.name,
        "slips": {"tried": found.tried, "shown": found.told, "kinds": list(found.kinds)},
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
            f"All {counted(found.count, 'reading')} of part {part} are as expected: none of the "
            f"{counted(len(exercised.shown), 'slip')} that it shows is in the device file of "
            f"{name}."
            if found.count == _all(exercised)
            else f"All {found.count} readings that are filled in are as expected; "
            f"{_all(exercised) - found.count} are missing, and the slips that show there only are "
            "not excluded."
        )
    count = len(found.differing)
    differ = "differs" if count == 1 else "differ"
    lines = [f"{count} of {counted(found.count, 'reading')} of part {part} {differ}:"]
    for step, pin in sorted(found.differing)[:_MOST]:
        expected, measured = exercised.expected[pin][step], found.measured[pin][step]
        lines.append(f"  step {step + 1}, pin {pin}: expected {expected}, measured {measured}")
    if len(found.differing) > _MOST:
        lines.append(f"  and {len(found.differing) - _MOST} more")
    if count == 1:
        lines += ["", "A single odd reading: measure it again first, and look at the contact."]
    if found.explaining:
        lines += ["", f"Explained in full by any one of these in the device file of {name}:"]
        lines += [f"  {what}" for what in found.explaining]
    if found.perhaps:
        lines += ["", "These could explain it, with readings that cannot be foretold:"]
        lines += [f"  {open_:4} {what}" for what, open_ in found.perhaps]
    if found.explaining or found.perhaps:
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
        "perhaps_explained_by": [
            {"slip": what, "not_foretold": open_} for what, open_ in found.perhaps
        ],
        "nearest": [{"slip": what, "unexplained": rest} for what, rest in found.nearest],
    }
