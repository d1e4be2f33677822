"""``fuseplan check``: read and check a design."""

from __future__ import annotations

import click

from pla.cli.options import json_option
from pla.cli.output import emit_json, emit_text, show_diagnostics

__all__ = ["command"]


@click.command("check")
@click.argument("design", metavar="DESIGN")
@json_option
def command(design: str, as_json: bool) -> int:
    """Read and check a design.

    Shows its inputs and outputs, and for each output how many input combinations ask for 1, for 0
    and for nothing, and why: impossible inputs, others, x. All errors of a design are shown in one
    go, each with its place and how to mend it. DESIGN is a TOML file.

    \b
      fuseplan check dryer.toml
      fuseplan check dryer.toml --json
    """
    from pla.behaviour.reader import read_behaviour

    behaviour = read_behaviour(design)
    show_diagnostics(behaviour.warnings)
    if as_json:
        from pla.report.behaviour_json import behaviour_json

        emit_json(behaviour_json(behaviour))
    else:
        from pla.report.behaviour_text import behaviour_text

        emit_text(behaviour_text(behaviour))
    return 0
