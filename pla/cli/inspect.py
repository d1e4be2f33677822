"""``fuseplan inspect``: hold a fuse file against the standard."""

from __future__ import annotations

import click

from pla.cli.options import json_option
from pla.cli.output import emit_json, emit_text, show_diagnostics

__all__ = ["command"]

_NO = 1


@click.command("inspect")
@click.argument("file", metavar="FILE.jed")
@click.option(
    "--device",
    metavar="NAME-OR-FILE",
    help="Say whether QF, QP and the fuses that select a device-wide mode are those of this "
    "device; if not, exit code 1. Shows the text in its signature fuses.",
)
@click.option(
    "--strict",
    is_flag=True,
    help="Exit code 1 if there is any departure from the standard. Without it departures are "
    "shown but do not fail.",
)
@json_option
def command(file: str, device: str | None, strict: bool, as_json: bool) -> int:
    """Hold a fuse file against the standard JESD3.

    Shows what the file says, both sums as given and as computed, every departure from the standard
    with its byte and field, and which devices of the catalogue have as many fuses and pins and are
    in the device-wide mode that the fuses select. FILE may be - for standard input.

    A file that cannot be relied on is refused with exit code 2: a wrong fuse checksum, fuses the
    device does not have, a damaged list. What it claims to be is shown all the same.

    \b
      fuseplan inspect out/dryer.jed
      fuseplan inspect --strict --device my-array.toml out/dryer.jed
      fuseplan inspect --json - < old.jed
    """
    from pla.device.catalogue import catalogue, find_device
    from pla.files import read_bytes
    from pla.fuses.jesd3 import FuseFile, FuseFileError, RefusedFile, departures, read_fuse_file
    from pla.fuses.jesd3_model import MAX_BYTES
    from pla.fuses.sizes import match_catalogue, match_size

    wanted = find_device(device) if device is not None else None
    data = read_bytes(file, MAX_BYTES)
    read: FuseFile | RefusedFile
    try:
        read = read_fuse_file(data, "standard input" if file == "-" else file)
    except FuseFileError as problem:
        read = problem.refused
    found = departures(read)
    devices = match_catalogue(read, map(find_device, catalogue()))
    match = match_size(read, wanted) if wanted is not None else None
    if wanted is not None:
        show_diagnostics(wanted.warnings)
    if as_json:
        from pla.report.inspect_json import inspection

        emit_json(inspection(read, found, devices, match))
    else:
        from pla.report.inspect_text import inspection_text

        emit_text(inspection_text(read, found, devices, match))
    if isinstance(read, RefusedFile):
        wrong = sorted((*read.errors, *found), key=lambda d: d.offset)
        show_diagnostics(wrong)
        return FuseFileError.exit_code
    differs = match is not None and match.matches is False
    return _NO if differs or (strict and found) else 0
