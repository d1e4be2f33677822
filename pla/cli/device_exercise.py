"""``fuseplan device exercise``: a part that tells whether its description is right."""

from __future__ import annotations

from pathlib import PurePath
from typing import TYPE_CHECKING

import click

from pla.cli.options import json_option
from pla.cli.output import emit_json, emit_text, show_diagnostics

if TYPE_CHECKING:
    from pla.exercise.program import Exercise, Exercised

__all__ = ["command"]


class _Parts(click.ParamType[int]):
    """A number of parts; ``all``, which is 0, are as many as tell something new."""

    name = "number"

    def convert(
        self, value: str | int, param: click.Parameter | None, ctx: click.Context | None
    ) -> int:
        text = str(value).strip().lower()
        if text == "all":
            return 0
        if not (text.isascii() and text.isdecimal() and 0 < int(text) < 1000):
            self.fail(f"{value!r} is no number of parts, expected 1 to 999, or all", param, ctx)
        return int(text)


@click.command("exercise")
@click.argument("device", metavar="NAME-OR-FILE")
@click.option("-o", "--output", "folder", metavar="FOLDER", help="Where all files go.")
@click.option(
    "--parts",
    type=_Parts(),
    default="1",
    show_default=True,
    metavar="N|all",
    help="How many parts may be spent; all: as many as tell something new.",
)
@click.option(
    "--no-vectors", is_flag=True, help="No test vectors in the fuse files; some programmers refuse."
)
@click.option(
    "--readings",
    metavar="FILE.csv",
    help="Write nothing, but say what a filled-in sheet tells of the device file.",
)
@click.option("--force", is_flag=True, help="Write into FOLDER though it exists.")
@json_option
def command(
    device: str,
    folder: str | None,
    parts: int,
    no_vectors: bool,
    readings: str | None,
    force: bool,
    as_json: bool,
) -> int:
    """Make a part whose pins tell whether its device file is right.

    The fuse file is for one part that can be spared. Beside it stand a table of levels to set and
    to measure, and which slips in the device file would show where: columns or cells exchanged, a
    sense inverted, a row shifted. So a wrong description is caught before real parts are burnt.

    With --readings, the sheet NAME-exercise-1.csv with measured levels filled in (H, L, Z) is held
    against the device file from which the part was made, not a corrected one: exit code 1 if a
    reading differs, with the slips that explain it.

    \b
      fuseplan device exercise my-array.toml -o scrap/
      fuseplan device exercise my-array.toml -o scrap/ --parts all
      fuseplan device exercise my-array.toml --readings scrap/my-array-exercise-1.csv
    """
    if (folder is None) == (readings is None):
        message = "give either -o FOLDER or --readings FILE.csv"
        raise click.UsageError(message)
    if readings is not None:
        return _judge(device, readings, as_json=as_json)
    return _make(device, str(folder), parts, with_vectors=not no_vectors, force=force, js=as_json)


def _make(
    device: str, folder: str, parts: int, *, with_vectors: bool, force: bool, js: bool
) -> int:
    from pla.device.catalogue import find_device
    from pla.exercise.program import exercise
    from pla.files import refuse_existing, write_folder
    from pla.report.exercise_text import exercise_document, exercise_text

    refuse_existing(folder, force=force)
    array = find_device(device)
    show_diagnostics(array.warnings)
    made = exercise(array, parts or None)
    stem = PurePath(device).stem if device.lower().endswith(".toml") else array.name
    files: dict[str, bytes] = {}
    for number, own in enumerate(made.parts, 1):
        files |= _files(own, number, made, stem, with_vectors=with_vectors)
    last = next(reversed([name for name in files if name.endswith(".jed")]))
    paths = write_folder(folder, files, last=last, force=force)
    if js:
        emit_json(exercise_document(made, paths))
    else:
        emit_text(exercise_text(made, paths))
    return 0


def _files(
    own: Exercised, number: int, made: Exercise, stem: str, *, with_vectors: bool
) -> dict[str, bytes]:
    from pla.exercise.design import exercise_design
    from pla.exercise.fuse_file import exercise_file
    from pla.exercise.measured import write_sheet
    from pla.report.exercise import exercise_markdown

    name = f"{stem}-exercise-{number}"
    jed = f"{name}.jed"
    found = {
        f"{name}.csv": write_sheet(own, number).encode(),
        jed: exercise_file(own, number, jed, with_vectors=with_vectors),
    }
    design = exercise_design(own, number)
    if design is not None:
        found[f"{name}.toml"] = design.encode()
    report = exercise_markdown(own, number, made, sorted(found), has_design=design is not None)
    return {f"{name}.md": report.encode(), **found}


def _judge(device: str, readings: str, *, as_json: bool) -> int:
    from pla.device.catalogue import find_device
    from pla.errors import Diagnostic, InputError, Location
    from pla.exercise.measured import find_slips, read_sheet
    from pla.exercise.program import exercise
    from pla.report.exercise_text import findings_document, findings_text

    array = find_device(device)
    show_diagnostics(array.warnings)
    sheet = read_sheet(readings)
    made = exercise(array, sheet.part)
    if len(made.parts) < sheet.part:
        message = (
            f"the readings are of part {sheet.part}, and the exercise of {array.name} has "
            f"{len(made.parts)}"
        )
        hint = "judge the sheet with the device file from which the part was made"
        raise InputError([Diagnostic("SHEET-OTHER", message, Location(readings), hint)])
    own = made.parts[sheet.part - 1]
    found = find_slips(sheet, own)
    if not found.count:
        hint = "fill in the columns that begin with 'measured': H, L or Z"
        empty = Diagnostic("SHEET-EMPTY", "no reading is filled in", Location(readings), hint)
        raise InputError([empty])
    if as_json:
        emit_json(findings_document(found, own, sheet.part))
    else:
        emit_text(findings_text(found, own, sheet.part))
    return 1 if found.differing else 0
