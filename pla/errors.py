"""What goes wrong, where, what was expected, and how to mend it.

Every error that a user can cause is a `FuseplanError`. It carries one `Diagnostic` for each thing
that is wrong, so that all errors of a file are shown in one go.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Literal

if TYPE_CHECKING:
    from collections.abc import Iterable

__all__ = [
    "Diagnostic",
    "Diagnostics",
    "FuseplanError",
    "InputError",
    "InternalError",
    "Location",
    "RefusalError",
    "by_place",
]

Severity = Literal["error", "warning"]


@dataclass(frozen=True, slots=True)
class Location:
    """A place in a file: 1-based line and column, with the line's text for the caret display."""

    file: str
    line: int | None = None
    column: int | None = None
    source: str | None = None

    def __str__(self) -> str:
        parts = [self.file]
        if self.line is not None:
            parts.append(str(self.line))
            if self.column is not None:
                parts.append(str(self.column))
        return ":".join(parts)


@dataclass(frozen=True, slots=True)
class Diagnostic:
    """One thing that is wrong or doubtful.

    Attributes:
        code: Short stable identifier in capitals, such as ``TABLE-OVERLAP``.
        message: What was found and what was expected, in one sentence.
        location: Where; ``None`` when no file is concerned.
        hint: How to mend it.
        severity: An error stops the work, a warning does not.
    """

    code: str
    message: str
    location: Location | None = None
    hint: str | None = None
    severity: Severity = "error"

    def lines(self) -> list[str]:
        """The display on a terminal: message, source line, caret, hint."""
        where = f"{self.location}: " if self.location else ""
        shown = [f"{where}{self.severity}: {self.message} [{self.code}]"]
        at = self.location
        if at is not None and at.source is not None and at.source.strip():
            text = at.source.expandtabs(1)
            shown.append(f"  | {text}")
            if at.column is not None:
                shown.append("  | " + " " * (at.column - 1) + "^")
        if self.hint:
            shown.append(f"  hint: {self.hint}")
        return shown

    def as_json(self) -> dict[str, str | int | None]:
        at = self.location
        return {
            "file": at.file if at else None,
            "line": at.line if at else None,
            "column": at.column if at else None,
            "code": self.code,
            "message": self.message,
            "hint": self.hint,
        }


class FuseplanError(Exception):
    """Root of all errors that a user can cause.

    Attributes:
        diagnostics: At least one.
        exit_code: What the process returns: 1 a clear no, 2 bad input, 3 an internal fault.
    """

    exit_code = 2

    def __init__(self, diagnostics: Iterable[Diagnostic]) -> None:
        self.diagnostics = tuple(diagnostics)
        super().__init__("\n".join("\n".join(d.lines()) for d in self.diagnostics))


class InputError(FuseplanError):
    """The input or the call is wrong."""

    exit_code = 2


class RefusalError(FuseplanError):
    """The answer is a clear no: it does not fit, it is not equal, it is not proven."""

    exit_code = 1


class InternalError(FuseplanError):
    """The program contradicts itself. Nothing was written."""

    exit_code = 3


@dataclass(slots=True)
class Diagnostics:
    """Collects what is wrong with a file, so that everything is said in one go."""

    found: list[Diagnostic] = field(default_factory=list)

    def error(
        self, code: str, message: str, location: Location | None = None, hint: str | None = None
    ) -> None:
        self.found.append(Diagnostic(code, message, location, hint))

    def warning(
        self, code: str, message: str, location: Location | None = None, hint: str | None = None
    ) -> None:
        self.found.append(Diagnostic(code, message, location, hint, "warning"))

    @property
    def errors(self) -> tuple[Diagnostic, ...]:
        return tuple(d for d in self.found if d.severity == "error")

    @property
    def warnings(self) -> tuple[Diagnostic, ...]:
        return tuple(d for d in self.found if d.severity == "warning")

    def stop_on_error(self) -> None:
        """Raise `InputError` with every error so far, in order of place.

        Raises:
            InputError: If at least one error was collected.
        """
        if self.errors:
            raise InputError(sorted(self.errors, key=by_place))


def by_place(diagnostic: Diagnostic) -> tuple[str, int, int]:
    """Sorts diagnostics by file, line and column."""
    at = diagnostic.location
    if at is None:
        return ("", 0, 0)
    return (at.file, at.line or 0, at.column or 0)
