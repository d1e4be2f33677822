"""``fuseplan terms``: minimize without a device."""

from __future__ import annotations

from typing import Any, cast

import click

from pla.cli.options import json_option, polarity_option, proof_option
from pla.cli.output import emit_json, emit_text, show_diagnostics

__all__ = ["command"]


@click.command("terms")
@click.argument("design", metavar="DESIGN")
@polarity_option
@proof_option
@json_option
def command(design: str, polarity: str, require_proof: bool, as_json: bool) -> int:
    """Find the smallest set of shared product terms of DESIGN, with proof; no device.

    \b
      fuseplan terms design.toml
      fuseplan terms design.toml --polarity true --json
    """
    from pla.behaviour.next_values import with_next_values
    from pla.behaviour.reader import read_behaviour
    from pla.fitting.polarity import wished_polarities
    from pla.logic.minimize import minimize
    from pla.report.clocked_json import clocked_document
    from pla.report.clocked_terms import control_sums, controls_document
    from pla.report.enable_sums import enable_sums, enables_document

    behaviour = with_next_values(read_behaviour(design))
    show_diagnostics(behaviour.warnings)
    polarities = wished_polarities(behaviour, cast("Any", polarity))
    minimum = minimize(behaviour.function, polarities)
    enables, controls = enable_sums(behaviour), control_sums(behaviour)
    if as_json:
        from pla.report.cover_json import cover_document

        emit_json(
            cover_document(behaviour, minimum)
            | enables_document(behaviour, enables)
            | clocked_document(behaviour)
            | controls_document(behaviour, controls)
        )
    else:
        from pla.report.terms_text import terms_text

        emit_text(terms_text(behaviour, minimum, polarities, enables, controls))
    return 1 if require_proof and not minimum.proven else 0
