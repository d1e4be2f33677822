"""Options that several commands have, so that they mean and say the same everywhere."""

from __future__ import annotations

import click

__all__ = ["json_option", "polarity_option", "proof_option"]

json_option = click.option(
    "--json", "as_json", is_flag=True, help="One JSON document on standard output."
)
polarity_option = click.option(
    "--polarity",
    type=click.Choice(["true", "free"]),
    default="free",
    show_default=True,
    help="Sums of the asserted functions only, or of their complements where that saves terms.",
)
proof_option = click.option(
    "--require-proof", is_flag=True, help="An unproven minimum is a no (exit code 1)."
)
