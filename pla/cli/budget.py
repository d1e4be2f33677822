"""``fuseplan budget``: every device against a design."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, cast

import click

from pla.cli.options import json_option, polarity_option
from pla.cli.output import emit_json, emit_text, show_diagnostics

if TYPE_CHECKING:
    from pla.device.model import Device
    from pla.errors import Diagnostic

__all__ = ["command"]


@click.command("budget")
@click.argument("design", metavar="DESIGN")
@click.option(
    "--devices", "folder", metavar="FOLDER", help="The device files in this folder besides."
)
@click.option(
    "--reserve",
    type=click.IntRange(min=0),
    default=0,
    show_default=True,
    metavar="N",
    help="Product terms that must stay spare: of a shared OR array in all, of OR gates with terms "
    "of their own in each. A device with fewer to spare does not count as holding the design.",
)
@polarity_option
@json_option
def command(design: str, folder: str | None, reserve: int, polarity: str, as_json: bool) -> int:
    """Hold DESIGN against every device of the catalogue, best first.

    Devices that hold the design come first: fewest pins, then fewest fuses, then by name. Then
    those that do not, by how many product terms (the reserve included), input pins and output
    cells are missing together, of equals the smallest; last those that leave an output no polarity,
    so that the number of product terms is not known. Modes and variants of one part stand together,
    the best of them first. Exit code 1 if no device holds the design.

    \b
      fuseplan budget design.toml
      fuseplan budget design.toml --devices my-arrays/ --reserve 4
    """
    from pla.behaviour.reader import read_behaviour
    from pla.device.catalogue import catalogue, find_device
    from pla.fitting.budgets import budgets
    from pla.fitting.places import places_nowhere

    behaviour = read_behaviour(design)
    shipped = [find_device(name) for name in catalogue()]
    own, left_out = _own(folder, shipped)
    devices = [*shipped, *own]
    doubts = [warning for device in devices for warning in device.warnings]
    nowhere = places_nowhere(behaviour, devices)
    warnings = (*behaviour.warnings, *left_out, *doubts, *nowhere)
    show_diagnostics(warnings)
    wish = cast("Any", polarity)
    found = budgets(behaviour, devices, wish, reserve)
    if as_json:
        from pla.report.budget_json import budgets_document

        shown = budgets_document(behaviour, found, wish, reserve, catalogue(), left_out, warnings)
        emit_json(shown)
    else:
        from pla.report.budget_text import budgets_text

        emit_text(budgets_text(behaviour, found, reserve, catalogue()))
    return 0 if any(budget.fits for budget in found) else 1


def _own(
    folder: str | None, shipped: list[Device]
) -> tuple[tuple[Device, ...], tuple[Diagnostic, ...]]:
    if folder is None:
        return (), ()
    from pla.device.folder import devices_in

    return devices_in(folder, shipped)
