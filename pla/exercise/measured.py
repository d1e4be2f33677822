"""The sheet on which readings are noted, and what they tell."""

from __future__ import annotations

import csv
import io
import re
from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.behaviour.sources import read_csv
from pla.errors import Diagnostics
from pla.exercise.readings import differences, readings
from pla.exercise.slips import slips
from pla.textfile import read_text
from pla.wording import listed

if TYPE_CHECKING:
    from pla.behaviour.sources import CsvRows
    from pla.exercise.program import Exercised

__all__ = ["Findings", "Sheet", "find_slips", "read_sheet", "write_sheet"]

_SIGNS = {"": "?", "H": "H", "1": "H", "L": "L", "0": "L", "Z": "Z", "?": "?", "-": "?"}
_NEAREST = 5


@dataclass(frozen=True, slots=True)
class Sheet:
    """A filled-in sheet.

    Attributes:
        source: The file.
        part: Which part of the exercise it is for, from 1.
        rows: For each step the cells by the name of their column.
    """

    source: CsvRows
    part: int
    rows: tuple[dict[str, str], ...]


@dataclass(frozen=True, slots=True)
class Findings:
    """What readings tell.

    Attributes:
        count: How many readings there are where something is expected.
        differing: Steps, from 0, and pins at which they are not as expected.
        measured: For each pin one sign a step, ``?`` where nothing was measured.
        explaining: Slips that explain every reading.
        nearest: If none does, those that leave the fewest unexplained, with how many they leave;
            only such as explain more than no slip at all.
    """

    count: int
    differing: tuple[tuple[int, int], ...]
    measured: dict[int, str]
    explaining: tuple[str, ...]
    nearest: tuple[tuple[str, int], ...]


def write_sheet(exercised: Exercised, number: int) -> str:
    """CSV with a line for each step: what to set, what to expect, and room for what is measured."""
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\r\n")
    writer.writerow(["part", "step", *_asked(exercised), *_noted(exercised)])
    for k in range(len(exercised.part.steps)):
        asked = _asked(exercised, k).values()
        writer.writerow([number, k + 1, *asked, *([""] * len(exercised.expected))])
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
    for missing in [name for name in ("part", "step") if name not in names]:
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
    parts = sorted({row["part"] for row in rows})
    if len(parts) != 1 or not re.fullmatch(r"[1-9][0-9]{0,2}", parts[0]):
        said = listed(list(map(repr, parts)), 3) or "nothing"
        message = f"the column 'part' says {said}, expected one number of a part on every line"
        problems.error("SHEET-PART", message, source.at(-1, names.index("part")))
    problems.stop_on_error()
    return Sheet(source, int(parts[0]), tuple(rows))


def _check_row(row: dict[str, str], k: int, problems: Diagnostics, source: CsvRows) -> None:
    if row["step"] != str(k + 1):
        message = f"step {row['step']!r}, expected {k + 1}"
        hint = "keep every line, in order; leave `measured` empty where you did not measure"
        problems.error("SHEET-STEP", message, source.at(k, 0), hint)
    for place, (name, cell) in enumerate(row.items()):
        if name.startswith("measured") and cell.upper() not in _SIGNS:
            message = f"{cell!r} in the column {name!r}, expected H, L, Z or nothing"
            hint = "1 and 0 will do for H and L"
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
    left: dict[str, int] = {}
    if differing:
        part = exercised.part
        for slip in slips(part.device):
            left[slip.what] = len(differences(readings(slip.device, part), measured))
    explaining = tuple(what for what, rest in left.items() if rest == 0)
    ranked = sorted((rest, place, what) for place, (what, rest) in enumerate(left.items()))
    nearest = tuple((what, rest) for rest, _, what in ranked[:_NEAREST] if rest < len(differing))
    return Findings(count, differing, measured, explaining, () if explaining else nearest)


def _check_belongs(sheet: Sheet, exercised: Exercised) -> None:
    problems = Diagnostics()
    hint = (
        "hold the sheet against the device file from which it was made, with the program of that "
        "time; or make the exercise anew"
    )
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
                place = sheet.source.at(k, list(row).index(name))
                problems.error("SHEET-OTHER", message, place, hint)
                break
    problems.stop_on_error()
