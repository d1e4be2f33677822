"""What goes to standard output, what to standard error, and in which colours."""

from __future__ import annotations

import os
import sys
from typing import TYPE_CHECKING, Any, Literal

import click

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

    from pla.errors import Diagnostic

__all__ = ["SCHEMA_VERSION", "choose_colour", "emit_json", "emit_text", "note", "show_diagnostics"]

SCHEMA_VERSION = 1
ColourChoice = Literal["auto", "always", "never"]

_choice: ColourChoice = "auto"
_quiet = False


def choose_colour(choice: ColourChoice, *, quiet: bool = False) -> None:
    """Settle for this process when to colour and whether to leave out notes and warnings."""
    global _choice, _quiet
    _choice, _quiet = choice, quiet


def _coloured(stream: Any) -> bool:
    if _choice != "auto":
        return _choice == "always"
    if os.environ.get("NO_COLOR"):
        return False
    if os.environ.get("FORCE_COLOR"):
        return True
    return bool(stream.isatty())


def emit_text(text: str) -> None:
    """The result of a command, for people."""
    click.echo(text, color=_coloured(sys.stdout))


def emit_json(document: Mapping[str, Any]) -> None:
    """The result of a command, for programs: one document with sorted keys, nothing else."""
    import json

    full = {"schema_version": SCHEMA_VERSION, **document}
    click.echo(json.dumps(full, sort_keys=True, indent=2, ensure_ascii=False))


def note(text: str) -> None:
    """Something beside the result, on standard error."""
    if not _quiet:
        click.echo(text, err=True, color=_coloured(sys.stderr))


def show_diagnostics(diagnostics: Iterable[Diagnostic]) -> None:
    """Errors and warnings on standard error, each with its source line and caret."""
    for diagnostic in diagnostics:
        if _quiet and diagnostic.severity == "warning":
            continue
        first, *rest = diagnostic.lines()
        colour = "red" if diagnostic.severity == "error" else "yellow"
        marked = first.replace(
            f"{diagnostic.severity}: ",
            click.style(f"{diagnostic.severity}: ", fg=colour, bold=True),
            1,
        )
        for line in (marked, *rest):
            click.echo(line, err=True, color=_coloured(sys.stderr))
