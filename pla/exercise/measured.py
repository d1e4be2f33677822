"""The sheet on which readings are noted, and what they tell."""

from __future__ import annotations

import csv
import io
import re
import zlib
from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.behaviour.sources import read_csv
from pla.errors import Diagnostics
from pla.exercise.readings import differences, readings
from pla.exercise.slips import slips
from pla.textfile import read_text
from pla.wording import listed, spans

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.behaviour.sources import CsvRows
    from pla.exercise.program import Exercised

__all__ = ["Findings", "Sheet", "find_slips", "read_sheet", "write_sheet"]

_SIGNS = {"": "?", "H": "H", "1": "H", "L": "L", "0": "L", "Z": "Z", "-": "?"}
_KEYS = ("device", "fuses", "part", "step")
_NEAREST = 5


@dataclass(frozen=True, slots=True)
class Sheet:
    """A filled-in sheet.

    Attributes:
        source: The file.
        part: Which part of the exercise it is for, from 1.
        device: Name of the device that it was made for.
        fuses: What `fuses_word` says of the fuses of the part.
        rows: For each step, in order of the steps, the cells by the name of their column.
        places: For each step the line of the file, from 0, behind the headings.
    """

    source: CsvRows
    part: int
    device: str
    fuses: str
    rows: tuple[dict[str, str], ...]
    places: tuple[int, ...]


@dataclass(frozen=True, slots=True)
class Findings:
    """What readings tell.

    Attributes:
        count: How many readings there are where something is expected.
        differing: Steps, from 0, and pins at which they are not as expected.
        measured: For each pin one sign a step, ``?`` where nothing was measured.
        explaining: Slips that foretell every reading as it was measured.
        perhaps: Slips that contradict none, with how many readings they cannot foretell.
        nearest: If there are neither, those that leave the fewest unexplained, with how many they
            leave; only such as explain more than no slip at all.
    """

    count: int
    differing: tuple[tuple[int, int], ...]
    measured: dict[int, str]
    explaining: tuple[str, ...]
    perhaps: tuple[tuple[str, int], ...]
    nearest: tuple[tuple[str, int], ...]


def fuses_word(exercised: Exercised) -> str:
    """What tells the fuses of a part from others: their JESD3 checksum and a CRC-32.

    The checksum alone is the same when columns eight apart are exchanged. The words before the
    numbers keep a spreadsheet from reading a number such as 12E4 its own way.
    """
    fuses = exercised.part.fuses
    return f"sum {fuses.checksum:04X} crc {zlib.crc32(fuses.states):08X}"


def write_sheet(exercised: Exercised, number: int) -> str:
    """CSV with a line for each step: what to set, what to expect, and room for what is measured."""
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\r\n")
    writer.writerow([*_KEYS, *_asked(exercised), *_noted(exercised)])
    part = (exercised.part.device.name, fuses_word(exercised), number)
    for k in range(len(exercised.part.steps)):
        asked = _asked(exercised, k).values()
        writer.writerow([*part, k + 1, *asked, *([""] * len(exercised.expected))])
    return out.getvalue()


def _asked(exercised: Exercised, step: int = 0) -> dict[str, str]:
    """Columns that are filled in when the sheet is made."""
    levels = exercised.part.steps[step].levels
    pins = sorted({pin for own in exercised.part.steps for pin in own.levels})
    found = {f"set {pin}": str(int(levels[pin])) if pin in levels else "" for pin in pins}
    return found | {f"expected {pin}": own[step] for pin, own in exercised.expected.items()}


def _noted(exercised: Exercised) -> list[str]:
    return [f"measured {pin}" for pin in exercised.expected]


def read_sheet(path: str) -> Sheet:
    """A sheet as it was filled in.

    Raises:
        InputError: If it is no such sheet; every error in one go.
    """
    problems = Diagnostics()
    source = read_csv(read_text(path))
    names = [name.lower() for name in source.header[0]]
    for missing in [name for name in _KEYS if name not in names]:
        hint = "fill in the CSV file that `device exercise` wrote, and keep its headings"
        message = f"no column {missing!r} in the first line"
        problems.error("SHEET-COLUMN", message, source.at(-1, 0), hint)
    problems.stop_on_error()
    rows = []
    for k, (cells,) in enumerate(source.rows):
        if len(cells) > len(names):
            message = f"{len(cells)} cells, and {len(names)} headings"
            problems.error("SHEET-WIDTH", message, source.at(k, len(names)))
        row = dict.fromkeys(names, "") | dict(zip(names, cells, strict=False))
        _check_row(row, k, problems, source)
        rows.append(row)
    said = {name: sorted({row[name] for row in rows}) for name in _KEYS[:3]}
    wanted = ("one name of a device", "the fuses of one part", "one number of a part")
    for name, what in zip(said, wanted, strict=True):
        shape = r"[1-9][0-9]{0,2}" if name == "part" else r".+"
        if len(said[name]) != 1 or not re.fullmatch(shape, said[name][0]):
            own = listed(list(map(repr, said[name])), 3) or "nothing"
            message = f"the column {name!r} says {own}, expected {what}, the same on every line"
            problems.error("SHEET-PART", message, source.at(-1, names.index(name)))
    places = _order(rows, problems, source)
    problems.stop_on_error()
    return Sheet(
        source,
        int(said["part"][0]),
        said["device"][0],
        said["fuses"][0],
        tuple(rows[place] for place in places),
        places,
    )


def _order(
    rows: Sequence[dict[str, str]], problems: Diagnostics, source: CsvRows
) -> tuple[int, ...]:
    """The line of each step, whatever the order that a spreadsheet sorted them into."""
    found: dict[int, int] = {}
    hint = "keep every line; leave `measured` empty where you did not measure"
    for place, row in enumerate(rows):
        step = row["step"]
        fits = re.fullmatch(r"[1-9][0-9]{0,5}", step)
        if not fits or int(step) in found:
            wanted = "another, since it stands on an earlier line" if fits else "a number from 1"
            message = f"step {step!r}, expected {wanted}"
            at = source.at(place, list(row).index("step"))
            problems.error("SHEET-STEP", message, at, hint)
            return ()
        found[int(step)] = place
    missing = sorted(set(range(1, max(found, default=0))) - set(found))
    if missing:
        message = f"no line for step {spans(missing, 3)}"
        problems.error("SHEET-STEP", message, source.at(-1, 0), hint)
    return tuple(found[step] for step in sorted(found))


def _check_row(row: dict[str, str], k: int, problems: Diagnostics, source: CsvRows) -> None:
    for place, (name, cell) in enumerate(row.items()):
        if name.startswith("measured") and cell.upper() not in _SIGNS:
            message = f"{cell!r} in the column {name!r}, expected H, L, Z or nothing"
            hint = "1 and 0 will do for H and L; leave what you cannot tell empty"
            problems.error("SHEET-SIGN", message, source.at(k, place), hint)


def find_slips(sheet: Sheet, exercised: Exercised) -> Findings:
    """Hold a sheet against the part that it is for.

    Raises:
        InputError: If the sheet belongs to another part, description or version of the program.
    """
    _check_belongs(sheet, exercised)
    measured = {
        pin: "".join(_SIGNS[row[f"measured {pin}"].upper()] for row in sheet.rows)
        for pin in exercised.expected
    }
    differing = tuple(differences(exercised.expected, measured))
    count = sum(
        one in "HLZ" and other in "HLZ"
        for pin, own in exercised.expected.items()
        for one, other in zip(own, measured[pin], strict=True)
    )
    left: dict[str, tuple[int, int]] = {}
    if differing:
        part = exercised.part
        for slip in slips(part.device):
            own = readings(slip.device, part)
            unknown = _unknown(exercised.expected, own, measured)
            left[slip.what] = len(differences(own, measured)), unknown
    explaining = tuple(what for what, rest in left.items() if rest == (0, 0))
    perhaps = tuple((what, open_) for what, (rest, open_) in left.items() if open_ and not rest)
    ranked = sorted((sum(rest), place, what) for place, (what, rest) in enumerate(left.items()))
    nearest = tuple((what, rest) for rest, _, what in ranked[:_NEAREST] if rest < len(differing))
    if explaining or perhaps:
        nearest = ()
    perhaps = tuple(sorted(perhaps, key=lambda own: own[1]))
    return Findings(count, differing, measured, explaining, perhaps, nearest)


def _unknown(expected: dict[int, str], own: dict[int, str], measured: dict[int, str]) -> int:
    """Readings that were compared and of which a slip says nothing definite."""
    return sum(
        one in "HLZ" and other in "HLZ" and sign not in "HLZ"
        for pin in expected
        for one, other, sign in zip(expected[pin], measured[pin], own.get(pin, ""), strict=True)
    )


def _check_belongs(sheet: Sheet, exercised: Exercised) -> None:
    problems = Diagnostics()
    hint = (
        "judge the sheet with the device file from which the part was made, and the program of "
        "that time; or make the exercise anew and program another part"
    )
    name = exercised.part.device.name
    if sheet.fuses != fuses_word(exercised):
        message = (
            f"the readings were made at a part for {sheet.device} with other fuses ({sheet.fuses}) "
            f"than the device file of {name} makes ({fuses_word(exercised)}): with another device "
            "file, or this one was changed since"
        )
        at = sheet.source.at(0, list(sheet.rows[0]).index("fuses"))
        problems.error("SHEET-OTHER", message, at, hint)
        problems.stop_on_error()
    steps = exercised.part.steps
    first = sheet.rows[0] if sheet.rows else {}
    missing = [name for name in (*_asked(exercised), *_noted(exercised)) if name not in first]
    at = sheet.source.at(-1, 0)
    if len(sheet.rows) != len(steps):
        message = f"{len(sheet.rows)} steps, and the exercise has {len(steps)}"
        problems.error("SHEET-OTHER", message, at, hint)
    elif missing:
        message = f"no column {listed([repr(name) for name in missing], 3)}"
        problems.error("SHEET-OTHER", message, at, hint)
    else:
        for k, row in enumerate(sheet.rows):
            wrong = [name for name, cell in _asked(exercised, k).items() if row[name] != cell]
            if wrong:
                name, own = wrong[0], _asked(exercised, k)[wrong[0]]
                message = (
                    f"step {k + 1} has {row[name]!r} in the column {name!r}, and the exercise of "
                    f"{exercised.part.device.name} has {own!r}"
                )
                place = sheet.source.at(sheet.places[k], list(row).index(name))
                problems.error("SHEET-OTHER", message, place, hint)
                break
    problems.stop_on_error()
