"""``fuseplan device``: list, show, check and exercise device files."""

from __future__ import annotations

import click

from pla.cli.device_exercise import command as exercise
from pla.cli.options import json_option
from pla.cli.output import emit_json, emit_text, show_diagnostics

__all__ = ["command"]


@click.group("device")
def command() -> None:
    """List, show, check and exercise device files.

    A device file says where the fuses of a programmable array are and what they do. Write one
    from the logic diagram in the data sheet, and let it be checked before it costs a part.

    \b
      fuseplan device list
      fuseplan device show shared-12x32x6
      fuseplan device check my-array.toml
      fuseplan device exercise my-array.toml -o scrap/
    """


command.add_command(exercise)


@command.command("list")
@json_option
def list_devices(as_json: bool) -> None:
    """List the devices of the catalogue, smallest first."""
    from pla.device.catalogue import catalogue, find_device

    devices = [find_device(name) for name in catalogue()]
    if as_json:
        from pla.report.device_json import summarize

        emit_json({"devices": [summarize(device) for device in devices]})
        return
    from pla.report.device_text import catalogue_table

    emit_text(catalogue_table(devices))


@command.command("show")
@click.argument("device", metavar="NAME-OR-FILE")
@json_option
def show(device: str, as_json: bool) -> None:
    """Explain a device in words, with its pins and fuses, and draw its array.

    \b
      fuseplan device show shared-12x32x6
    """
    from pla.device.catalogue import find_device

    found = find_device(device)
    show_diagnostics(found.warnings)
    if as_json:
        from pla.report.device_json import describe

        emit_json(describe(found))
        return
    from pla.report.device_text import draw, explain

    emit_text(f"{explain(found)}\n{draw(found).rstrip()}")


@command.command("check")
@click.argument("file", metavar="FILE")
@json_option
def check(file: str, as_json: bool) -> None:
    """Check a device file as a whole, and explain what it says.

    Every fuse must have one use and every pin one role. That the fuse numbers are those of the
    real part no program can know: read the explanation against the data sheet.

    \b
      fuseplan device check my-array.toml
    """
    from pla.device.catalogue import find_device

    found = find_device(file)
    show_diagnostics(found.warnings)
    if as_json:
        from pla.report.device_json import describe

        emit_json({"consistent": True, **describe(found)})
        return
    from pla.report.device_text import explain

    emit_text(
        f"{file}: consistent: each of {found.fuses} fuses has one use, "
        f"each of {found.pins} pins one role\n\n{explain(found).rstrip()}"
    )
