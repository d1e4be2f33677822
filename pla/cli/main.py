"""The ``fuseplan`` command: finds the subcommand, and turns every failure into words.

Subcommands live in modules of their own and are imported only when called, so that ``--help`` is
quick. This module must import nothing heavier than click.
"""

from __future__ import annotations

import contextlib
import gc
import importlib
import os
import sys
from typing import Any, cast

import click

from pla.cli.output import choose_colour, emit_json, show_diagnostics

__all__ = ["cli", "main"]

ALLOCATIONS_BETWEEN_COLLECTIONS = 200_000
BAD_INPUT = 2
INTERNAL_FAULT = 3
INTERRUPTED = 130

# name: (module, one line for the list of commands)
COMMANDS = {
    "check": ("pla.cli.check", "Read and check a design."),
    "terms": ("pla.cli.terms", "Find the smallest set of shared product terms; no device."),
    "plan": ("pla.cli.plan", "Minimize, fit, prove, write fuse file, tables and report."),
    "budget": ("pla.cli.budget", "Hold a design against every device, best first."),
    "device": ("pla.cli.device", "List, show, check and exercise device files."),
    "inspect": ("pla.cli.inspect", "Hold a fuse file against the standard."),
}


class _LazyGroup(click.Group):
    """A group that knows its commands by name and imports one only to run it."""

    def list_commands(self, ctx: click.Context) -> list[str]:  # noqa: ARG002
        return list(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:  # noqa: ARG002
        if cmd_name not in COMMANDS:
            return None
        module = importlib.import_module(COMMANDS[cmd_name][0])
        return cast("click.Command", module.command)

    def format_commands(self, ctx: click.Context, formatter: click.HelpFormatter) -> None:  # noqa: ARG002
        with formatter.section("Commands"):
            formatter.write_dl([(name, text) for name, (_, text) in COMMANDS.items()])

    def resolve_command(
        self, ctx: click.Context, args: list[str]
    ) -> tuple[str | None, click.Command | None, list[str]]:
        if args and not args[0].startswith("-") and args[0] not in COMMANDS:
            import difflib

            near = difflib.get_close_matches(args[0], COMMANDS, n=1)
            hint = f" Did you mean {near[0]!r}?" if near else f" There are: {', '.join(COMMANDS)}."
            ctx.fail(f"No such command {args[0]!r}.{hint}")
        return super().resolve_command(ctx, args)


def _show_version(ctx: click.Context, _param: click.Parameter, value: bool) -> None:
    if not value or ctx.resilient_parsing:
        return
    from pla import __version__

    click.echo(f"fuseplan {__version__}")
    ctx.exit()


@click.command(
    cls=_LazyGroup,
    context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100},
    epilog=(
        "Exit codes: 0 yes or done; 1 a clear no; 2 the input or the call is wrong; "
        "3 an internal fault; 130 interrupted."
    ),
)
@click.option(
    "--color",
    type=click.Choice(["auto", "always", "never"]),
    default="auto",
    help="Colour of diagnostics; NO_COLOR and FORCE_COLOR are honoured.",
)
@click.option("-q", "--quiet", is_flag=True, help="No warnings, no notes.")
@click.option(
    "--version",
    is_flag=True,
    is_eager=True,
    expose_value=False,
    callback=_show_version,
    help="Show the version and stop.",
)
def cli(color: str, quiet: bool) -> None:
    """Plan glue logic into a small programmable AND/OR array.

    From a design file full of don't cares to a proven fuse file:

    \b
      fuseplan check  design.toml
      fuseplan terms  design.toml
      fuseplan plan   design.toml --device shared-12x32x6 -o out/
    """
    choose_colour(cast("Any", color), quiet=quiet)


def main(args: list[str] | None = None) -> None:
    """Run the command and leave the process with the exit code of the contract.

    A run is short and allocates little that lives: the collector would mostly walk through the
    modules being imported, and taking the process down in good order would take longer than many a
    run. Every file is closed when `run` returns, so only the output has to be flushed.
    """
    gc.set_threshold(ALLOCATIONS_BETWEEN_COLLECTIONS)
    exit_code = run(sys.argv[1:] if args is None else args)
    for stream in (sys.stdout, sys.stderr):
        # A reader that has gone away is no error, see `run`.
        with contextlib.suppress(OSError, ValueError):
            stream.flush()
    os._exit(exit_code)


def run(args: list[str]) -> int:
    """Run the command and return its exit code; no exception leaves here."""
    as_json = "--json" in args
    try:
        result = cli.main(args=_hoisted(args), prog_name="fuseplan", standalone_mode=False)
    except (click.Abort, KeyboardInterrupt):
        return _interrupted(as_json=as_json)
    except BrokenPipeError:
        # The reader of our output has gone (``| head``): not an error of ours.
        sys.stderr.close()
        return 0
    except Exception as problem:  # noqa: BLE001 - no traceback may reach a user
        if _was_interrupted(problem):
            click.echo(err=True)  # off the line on which the terminal shows ^C
            return _interrupted(as_json=as_json)
        return _explain(problem, as_json=as_json)
    return result if isinstance(result, int) else 0


def _hoisted(args: list[str]) -> list[str]:
    """The options that concern every command, wherever they stand, before the command."""
    end = args.index("--") if "--" in args else len(args)
    first: list[str] = []
    rest: list[str] = []
    waiting = iter(args[:end])
    for word in waiting:
        if word in {"-q", "--quiet"} or word.startswith("--color="):
            first.append(word)
        elif word == "--color":
            first.append(f"--color={next(waiting, '')}")
        else:
            rest.append(word)
    return [*first, *rest, *args[end:]]


def _was_interrupted(problem: BaseException) -> bool:
    """Whether Ctrl-C is behind it: compiled libraries turn it into an error of their import."""
    cause = problem.__cause__
    while cause is not None and not isinstance(cause, KeyboardInterrupt):
        cause = cause.__cause__
    return cause is not None


def _interrupted(*, as_json: bool) -> int:
    from pla.errors import Diagnostic

    if as_json:
        emit_json({"errors": [Diagnostic("INTERRUPTED", "interrupted").as_json()]})
    click.echo("interrupted", err=True)
    return INTERRUPTED


def _explain(problem: Exception, *, as_json: bool) -> int:
    """Show what went wrong and return the exit code that it stands for."""
    from pla.errors import Diagnostic, FuseplanError

    diagnostics: tuple[Diagnostic, ...]
    if isinstance(problem, FuseplanError):
        diagnostics, exit_code = problem.diagnostics, problem.exit_code
    elif isinstance(problem, click.exceptions.NoArgsIsHelpError):
        click.echo(problem.format_message(), err=True)
        return BAD_INPUT
    elif isinstance(problem, OSError) and problem.filename is None:
        # Reading and writing files has words of its own; what is left is standard output.
        text = f"the output cannot be written: {(problem.strerror or str(problem)).lower()}"
        diagnostics, exit_code = (Diagnostic("OUTPUT", text),), BAD_INPUT
        as_json = False
    elif isinstance(problem, click.ClickException):
        if isinstance(problem, click.UsageError) and problem.ctx is not None and not as_json:
            click.echo(problem.ctx.get_usage(), err=True)
        diagnostics, exit_code = (Diagnostic("USAGE", problem.format_message()),), BAD_INPUT
    else:
        text = f"internal fault: {type(problem).__name__}: {problem}"
        hint = "please report this with the input that caused it; nothing was written"
        diagnostics, exit_code = (Diagnostic("INTERNAL", text, hint=hint),), INTERNAL_FAULT
    if as_json:
        emit_json({"errors": [d.as_json() for d in diagnostics]})
    show_diagnostics(diagnostics)
    return exit_code
