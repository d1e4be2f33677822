"""``fuseplan plan``: from a design to a folder with a proven fuse file."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, cast

import click

from pla.cli.options import json_option, polarity_option, proof_option
from pla.cli.output import emit_json, emit_text, note, show_diagnostics

if TYPE_CHECKING:
    from pla.behaviour.model import Behaviour
    from pla.fitting.minima import Minima
    from pla.fitting.model import Fit

__all__ = ["command"]


@click.command("plan")
@click.argument("design", metavar="DESIGN")
@click.option(
    "--device",
    required=True,
    metavar="NAME-OR-FILE",
    help="A device of the catalogue, or a device file.",
)
@click.option(
    "-o", "--output", "folder", required=True, metavar="FOLDER", help="Where all files go."
)
@polarity_option
@proof_option
@click.option(
    "--signature",
    metavar="TEXT",
    help="Text for the signature fuses instead of the design's; an empty one leaves them blank.",
)
@click.option("--force", is_flag=True, help="Write into FOLDER though it exists.")
@json_option
def command(
    design: str,
    device: str,
    folder: str,
    polarity: str,
    require_proof: bool,
    signature: str | None,
    force: bool,
    as_json: bool,
) -> int:
    """Minimize DESIGN, fit it on a device, prove it, and write fuse file, tables and report.

    The fuse file is FOLDER/<design>.jed. It is written only after it has been read back from its
    own bytes and proven equal to the design. If the design does not fit, nothing is written.

    \b
      fuseplan plan design.toml --device shared-12x32x6 -o out/
    """
    from dataclasses import replace

    from pla.behaviour.reader import read_behaviour
    from pla.device.catalogue import find_device
    from pla.files import refuse_existing
    from pla.fitting.fit import fit
    from pla.fitting.minima import Minima
    from pla.fitting.places import places_elsewhere

    refuse_existing(folder, force=force)
    behaviour = read_behaviour(design)
    if signature is not None:
        behaviour = replace(behaviour, signature=_checked(signature) or None, signature_at=None)
    array = find_device(device)
    elsewhere = places_elsewhere(behaviour, array)
    show_diagnostics((*behaviour.warnings, *array.warnings, *elsewhere))
    known = Minima()
    outcome = fit(behaviour, array, cast("Any", polarity), known)
    show_diagnostics(outcome.warnings)
    if not outcome.fits:
        return _refuse(outcome, polarity, known, as_json=as_json)
    minimum = outcome.minimum
    if require_proof and minimum is not None and not minimum.proven:
        return _unproven(outcome, as_json=as_json)
    return _write(behaviour, outcome, folder, force=force, as_json=as_json)


def _checked(signature: str) -> str:
    """A text that signature fuses can hold, if they are enough.

    Raises:
        BadParameter: If it is not printable ASCII on one line.
    """
    if not (signature.isascii() and signature.isprintable()):
        wrong = next(c for c in signature if not (c.isascii() and c.isprintable()))
        raise click.BadParameter(
            f"{wrong!r} cannot stand in a device, expected one line of printable ASCII characters",
            param_hint="--signature",
        )
    return signature


def _write(behaviour: Behaviour, outcome: Fit, folder: str, *, force: bool, as_json: bool) -> int:
    from pla.files import write_folder
    from pla.fuses.program import fuse_file, fuse_file_name
    from pla.report.cover_json import fit_document
    from pla.report.folder import plan_files
    from pla.report.plan_text import plan_text

    plan = outcome.plan
    if plan is None:
        raise ValueError("a design that does not fit has no files")
    name = fuse_file_name(behaviour)
    proven = fuse_file(plan, name)
    files = {**plan_files(outcome, proven), name: proven.data}
    paths = write_folder(folder, files, last=name, force=force)
    if as_json:
        emit_json(fit_document(outcome, proven, paths))
    else:
        emit_text(plan_text(outcome, proven, paths))
    return 0


def _refuse(outcome: Fit, polarity: str, known: Minima, *, as_json: bool) -> int:
    from pla.device.catalogue import catalogue, find_device
    from pla.fitting.holders import holders
    from pla.report.cover_json import fit_document
    from pla.report.refusal_text import refusal_text

    others = [find_device(name) for name in catalogue() if name != outcome.device.name]
    found = holders(outcome, others, cast("Any", polarity), known)
    if as_json:
        emit_json(fit_document(outcome, None, (), [f.device.name for f in found]))
    else:
        emit_text(refusal_text(outcome, found))
    return 1


def _unproven(outcome: Fit, *, as_json: bool) -> int:
    from pla.report.cover_json import fit_document
    from pla.report.notation import plural

    minimum = outcome.minimum
    if as_json:
        emit_json(fit_document(outcome, None, ()))
    if minimum is not None:
        note(
            f"not proven: the best set found has {plural(minimum.count, 'product term')}, at least "
            f"{minimum.lower_bound} are needed; nothing was written"
        )
    return 1
