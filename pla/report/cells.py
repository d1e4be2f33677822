"""How every cell of a plan is set, and what became of its rows."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.report.table import Table
from pla.wording import spans

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.device.model import Cell, Line, Mode
    from pla.fitting.model import PlacedOutput, Plan
    from pla.report.rows import ProgrammedRows

__all__ = ["cell_name", "cell_table", "holder_of", "link_states", "row_table"]


def cell_name(cell: Cell) -> str:
    """``pin 14``, ``b1``, or both where a cell has both."""
    pin = f"pin {cell.pin}" if cell.pin is not None else ""
    return ", ".join(part for part in (pin, cell.name) if part)


def holder_of(plan: Plan, cell: Cell) -> PlacedOutput | None:
    """The output or inner signal in a cell."""
    return next((placed for placed in plan.outputs if placed.cell.key == cell.key), None)


def link_states(cell: Cell, mode: Mode) -> list[tuple[str, int, str]]:
    """Name, fuse and state of every configuration link of a cell."""
    return list(zip(cell.bits, cell.links, mode.set, strict=True))


def cell_table(programmed: ProgrammedRows) -> Table | None:
    """Mode, feedback, enable and configuration links of every cell.

    ``None`` where no cell has anything to set: no links, no feedback, no enable.
    """
    plan = programmed.plan
    cells = plan.device.cells
    modes = [plan.modes[cell.key] for cell in cells]
    if not any(cell.links for cell in cells) and not any(
        mode.lines or mode.enable.kind != "always" for mode in modes
    ):
        return None
    found = [
        (
            cell_name(cell),
            _holds(plan, cell),
            "–" if cell.pin is None else mode.pin,
            _feedback(mode),
            _driven(programmed, cell, mode),
            ", ".join(f"{bit} {fuse}={state}" for bit, fuse, state in link_states(cell, mode))
            or "none",
        )
        for cell, mode in zip(cells, modes, strict=True)
    ]
    kept = [0, 1, 2, 3, 4, 5]
    if not any(mode.lines for mode in modes):
        kept.remove(3)
    if all(mode.enable.kind == "always" for mode in modes):
        kept.remove(4)
    headings = ("cell", "holds", "pin shows", "feeds back", "driven", "its links")
    return Table(
        "Cells",
        tuple(headings[k] for k in kept),
        tuple(tuple(row[k] for k in kept) for row in found),
        aligned="l" * len(kept),
        remarks=(
            (
                "Pin shows: the level of the pin while it is driven, sum or its complement sum'. "
                "Its links: name and number of each configuration fuse, and its state, 0 closed "
                "or 1 open."
            ),
            *_mode_fuses(plan),
        ),
        wrapped=tuple(place for place, k in enumerate(kept) if k in {1, 3, 5}),
    )


def row_table(programmed: ProgrammedRows) -> Table | None:
    """Rows of every OR gate that has terms of its own; ``None`` if there is none."""
    plan = programmed.plan
    cells = [cell for cell in plan.device.cells if cell.key not in plan.device.or_column]
    if not cells:
        return None
    used = set(plan.rows)
    found = []
    for cell in cells:
        mode = plan.modes[cell.key]
        own = [row for row in mode.terms if row in used]
        found.append(
            (
                cell_name(cell),
                _holds(plan, cell),
                f"{len(own)} of {len(mode.terms)}",
                str(len(mode.terms) - len(own)),
                spans(own) or "none",
                "; ".join(_others(programmed, cell, mode, used)) or "none",
            )
        )
    return Table(
        "Rows of each cell",
        ("cell", "holds", "terms", "spare", "rows in the sum", "its other rows"),
        tuple(found),
        aligned="llrrll",
        remarks=(
            (
                "Spare: terms that the cell's OR gate has left. A row that is dead has a line and "
                "its complement connected, one that is dropped is cut off by its drop link; both "
                "are 0."
            ),
        ),
        wrapped=(1, 5),
    )


def _holds(plan: Plan, cell: Cell) -> str:
    placed = holder_of(plan, cell)
    if placed is not None:
        return placed.name if placed.pin is not None else f"{placed.name} (inner)"
    if cell.key in plan.input_cells:
        names = [signal.name for signal in plan.inputs if signal.pin == cell.pin]
        return f"{' '.join(names)} (input)"
    return "nothing"


def _feedback(mode: Mode) -> str:
    """What the lines of a cell carry: as the device file has it, or line by line."""
    if mode.feedback is not None:
        return mode.feedback
    return ", ".join(_line(line) for _, line in mode.lines) or "–"


def _line(line: Line | None) -> str:
    if line is None:
        return "nothing"
    what = f"pin {line.of}" if line.kind == "pin" else f"sum of {line.of}"
    return f"{what}'" if line.complement else what


def _driven(rows: ProgrammedRows, cell: Cell, mode: Mode) -> str:
    drive = rows.drive_of(cell)
    if cell.pin is None:
        return "–"
    if mode.pin == "none" or drive == "never":
        return "never"
    if mode.enable.kind == "row":
        return "always" if drive == "always" else f"while row {mode.enable.row} is 1"
    if mode.enable.kind == "pin":
        level = "low" if mode.enable.active_low else "high"
        held = ", as it is tied" if drive == "always" else ""
        return f"while pin {mode.enable.pin} is {level}{held}"
    return "always"


def _others(rows: ProgrammedRows, cell: Cell, mode: Mode, used: set[int]) -> Iterator[str]:
    """What became of the rows of a cell that hold no term."""
    enable = mode.enable.row
    if enable is not None:
        worth = {"dead": "off", "true": "always on", "live": "enable"}[rows.worth(enable)]
        yield f"{enable} {worth if worth == 'enable' else f'enable, {worth}'}"
    alike: dict[str, list[int]] = {}
    for row in mode.terms:
        if row not in used:
            alike.setdefault(rows.left(row), []).append(row)
    for how, numbers in alike.items():
        yield f"{spans(numbers)} {how}"
    idle = [row for row in cell.rows if row not in mode.terms and row != enable]
    if idle:
        yield f"{spans(idle)} without effect in this mode"


def _mode_fuses(plan: Plan) -> Iterator[str]:
    if plan.device.mode_fuses:
        fuses = ", ".join(f"{fuse}={state}" for fuse, state in plan.device.mode_fuses)
        yield f"Mode fuses, which set the whole device to {plan.device.name}: {fuses}."
