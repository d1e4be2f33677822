"""``fuseplan inspect``: hold a fuse file against the standard."""

from __future__ import annotations

from typing import TYPE_CHECKING

import click

from pla.cli.output import emit_json, emit_text, show_diagnostics

if TYPE_CHECKING:
    from pla.fuses.jesd3 import FuseFile

__all__ = ["command"]


@click.command("inspect")
@click.argument("file", metavar="FILE.jed")
@click.option("--json", "as_json", is_flag=True, help="One JSON document on standard output.")
def command(file: str, as_json: bool) -> int:
    """Hold a fuse file against the standard JESD3.

    Shows what the file says, both sums as given and as computed, every departure from the standard
    with its byte and field, and which devices of the catalogue have as many fuses and pins. FILE
    may be - for standard input. Exit code 2 if the file cannot be relied on: a wrong fuse
    checksum, fuses the device does not have, a damaged list.

    \b
      fuseplan inspect out/dryer.jed
      fuseplan inspect --json - < old.jed
    """
    from pla.files import read_bytes
    from pla.fuses.jesd3 import FuseFileError, departures, read_fuse_file
    from pla.fuses.jesd3_model import MAX_BYTES

    data = read_bytes(file, MAX_BYTES)
    try:
        read = read_fuse_file(data, "standard input" if file == "-" else file)
    except FuseFileError as refused:
        show_diagnostics(refused.warnings)
        raise
    found = departures(read)
    devices = _same_size(read)
    if as_json:
        from pla.report.inspect_json import inspection

        emit_json(inspection(read, found, devices))
    else:
        from pla.report.inspect_text import inspection_text

        emit_text(inspection_text(read, found, devices))
    return 0


def _same_size(file: FuseFile) -> list[str]:
    """Devices of the catalogue with as many fuses, and as many pins where the file says so."""
    from pla.device.catalogue import catalogue, find_device

    return [
        device.name
        for device in map(find_device, catalogue())
        if device.fuses == len(file.fuses) and file.pins in {None, device.pins}
    ]
