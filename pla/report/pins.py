"""What every pin carries, and what to do with those that carry nothing."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.report.cells import cell_name, holder_of
from pla.report.notation import product
from pla.report.table import Table
from pla.report.text import kept_together
from pla.wording import listed

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.device.model import Cell
    from pla.fitting.model import PlacedInput, PlacedOutput, Plan
    from pla.report.rows import ProgrammedRows

__all__ = ["inner_table", "pin_list", "pin_summary"]

_LEVELS = ("low", "high")


def pin_list(programmed: ProgrammedRows) -> Table:
    """Every pin of the device in order."""
    plan = programmed.plan
    inputs = {placed.pin: placed for placed in plan.inputs if placed.pin is not None}
    outputs = {placed.pin: placed for placed in plan.outputs if placed.pin is not None}
    return Table(
        "Pin list",
        ("pin", "signal", "direction", "active", "remark"),
        tuple(
            (
                str(pin),
                *(
                    _output(plan, outputs[pin], inputs.get(pin))
                    if pin in outputs
                    else _input(plan, inputs[pin])
                    if pin in inputs
                    else _unused(programmed, pin)
                ),
            )
            for pin in range(1, plan.device.pins + 1)
        ),
        aligned="rllll",
        wrapped=(1, 4),
        remarks=tuple(_remarks(programmed)),
    )


def inner_table(plan: Plan) -> Table | None:
    """Inner and fed-back signals and their cells; ``None`` if there are none."""
    placed = {output.name: output for output in plan.outputs}
    fed = {signal.fed_by for signal in plan.inputs if signal.fed_by is not None}
    inner = [signal.name for signal in plan.design.inner]
    others = [o.name for o in plan.outputs if o.cell.key in fed and o.name not in inner]
    if not inner and not others:
        return None
    rows = [
        (
            name,
            "inner" if name in inner else "output",
            cell_name(placed[name].cell) if name in placed else "none: folded in",
            "yes" if name in placed and placed[name].cell.key in fed else "no",
        )
        for name in (*inner, *others)
    ]
    remark = (
        "Folded in: wherever the signal is named its logic stands instead of it, which takes no "
        "cell and no further pass through the array."
    )
    return Table(
        "Inner and fed-back signals",
        ("signal", "kind", "cell", "fed back"),
        tuple(rows),
        aligned="llll",
        wrapped=(0,),
        remarks=(remark,) if any(name not in placed for name in inner) else (),
    )


def pin_summary(plan: Plan) -> list[str]:
    """The pins that carry signals, inputs and outputs on a line each, then what has none."""
    sides = (
        ("Inputs", [placed for placed in plan.inputs if placed.fed_by is None]),
        ("Outputs", [placed for placed in plan.outputs if placed.pin is not None]),
    )
    lines = [
        f"{side}: "
        + ", ".join(
            kept_together(
                f"{'no pin' if placed.pin is None else placed.pin} {placed.name}"
                f"{' (active low)' if placed.active_low else ''}"
            )
            for placed in signals
        )
        + "."
        for side, signals in sides
    ]
    inner = {output.name: output for output in plan.outputs if output.pin is None}
    if plan.design.inner:
        told = (
            kept_together(f"{cell_name(inner[s.name].cell) if s.name in inner else 'folded in'}")
            + kept_together(f" {s.name}")
            for s in plan.design.inner
        )
        lines.append(f"Inner signals: {', '.join(told)}.")
    if plan.tied:
        held = (kept_together(f"{pin} {_LEVELS[level]}") for pin, level in plan.tied)
        lines.append(f"Tie enable pins: {', '.join(held)}.")
    return lines


def _matters(plan: Plan, placed: PlacedInput) -> bool:
    """Whether any term or enable depends on a signal."""
    enables = (output.enable.cube for output in plan.outputs if output.enable is not None)
    return placed.used or any((c.ones | c.zeros) >> placed.index & 1 for c in enables)


def _active(low: bool) -> str:
    return _LEVELS[not low]


def _input(plan: Plan, placed: PlacedInput) -> tuple[str, str, str, str]:
    said = [] if _matters(plan, placed) else ["no term needs it"]
    cell = plan.device.cell_of_pin.get(placed.pin or 0)
    if cell is not None:
        said.append("a cell whose pin serves as an input")
    switched = _switched_by(plan, placed.pin)
    if switched:
        low = switched[0].mode.enable.active_low
        said.append(f"enables {listed([o.name for o in switched])} while {_LEVELS[not low]}")
    return placed.name, "input", _active(placed.active_low), "; ".join(said)


def _output(
    plan: Plan, placed: PlacedOutput, read: PlacedInput | None
) -> tuple[str, str, str, str]:
    direction = "output" if read is None else "both ways"
    names = placed.name if read is None else f"{placed.name} {read.name}"
    said = [] if read is None else [f"{read.name} is the level at this pin"]
    if placed.enable is not None:
        said.append(f"driven while {product(placed.enable.cube, plan.behaviour.input_names)}")
    return names, direction, _active(placed.active_low), "; ".join(said)


def _switched_by(plan: Plan, pin: int | None) -> list[PlacedOutput]:
    """The outputs that an enable pin switches."""
    return [
        placed
        for placed in plan.outputs
        if placed.pin is not None
        and placed.mode.enable.kind == "pin"
        and placed.mode.enable.pin == pin
    ]


def _unused(programmed: ProgrammedRows, pin: int) -> tuple[str, str, str, str]:
    """Signal, direction, active level and remark of a pin that carries no signal."""
    device = programmed.plan.device
    if pin in device.ground:
        return "", "ground", "", ""
    if pin in device.power:
        return "", "power", "", ""
    if pin in device.unconnected:
        return "", "none", "", "no connection"
    tied = dict(programmed.plan.tied)
    if pin in tied:
        return "", "enable", "", _tie(programmed.plan, pin, tied[pin])
    cell = device.cell_of_pin.get(pin)
    if cell is None:
        kind = "input" if pin in device.input_pins else "enable"
        return "", kind, "", "unused: tie to ground or power"
    direction = "none" if programmed.drive_of(cell) == "never" else "output"
    return "", direction, "", _idle(programmed, cell)


def _tie(plan: Plan, pin: int, level: int) -> str:
    switched = _switched_by(plan, pin)
    remark = f"tie to {'power' if level else 'ground'}"
    if not switched:
        return remark
    drives = level != switched[0].mode.enable.active_low
    names = listed([placed.name for placed in switched])
    return f"{remark}, so that {names} {'are' if len(switched) > 1 else 'is'} " + (
        "driven" if drives else "not driven"
    )


def _idle(programmed: ProgrammedRows, cell: Cell) -> str:
    """What to do with the pin of a cell that carries no signal of the design."""
    placed = holder_of(programmed.plan, cell)
    what = "unused"
    if placed is not None:
        verb = "is in its cell" if placed.shown is None else "shows here"
        what = f"inner signal {placed.name} {verb}"
    drive = programmed.drive_of(cell)
    if drive == "never":
        if _floats(programmed, cell):
            # Common practice, no source.
            return (
                f"{what}, not driven by the programmed part: tie it through a resistor, since a "
                "blank part may drive it"
            )
        return f"{what}, leave open: the part does not drive it"
    level = programmed.level_of(cell)
    shown = "" if level is None else f" {_LEVELS[level]}"
    return f"{what}, leave open: the part drives it{shown}{' at times' * (drive == 'at times')}"


def _idle_cells(plan: Plan) -> list[Cell]:
    """Cells whose pins carry no signal."""
    carrying = set(plan.pins.values())
    return [cell for cell in plan.device.cells if cell.pin and cell.pin not in carrying]


def _floats(programmed: ProgrammedRows, cell: Cell) -> bool:
    """Whether a line of the array carries the level at a pin that the part does not drive."""
    lines = programmed.plan.lines
    return programmed.drive_of(cell) == "never" and any(
        line is not None and line.kind == "pin" and line.of == cell.pin for line in lines
    )


def _remarks(programmed: ProgrammedRows) -> Iterator[str]:
    plan = programmed.plan
    taken = {placed.pin for placed in plan.inputs} | {pin for pin, _ in plan.tied}
    free = [p for p in (*plan.device.input_pins, *plan.device.enable_pins) if p not in taken]
    if free or any(_floats(programmed, cell) for cell in _idle_cells(plan)):
        # Common practice, no source.
        yield (
            "No input may float: an open input picks up noise, and many parts draw more current "
            "then. Give every unused input a defined level, ground or power, in the way that the "
            "data sheet of the part allows."
        )
    yield from _driving_idly(programmed)
    needless = [p.name for p in plan.inputs if p.pin is not None and not _matters(plan, p)]
    if needless:
        yield (
            f"No output depends on {listed(needless)}: no term has a literal of "
            f"{'it, but its pin' if len(needless) == 1 else 'them, but each pin'} still needs a "
            "defined level."
        )
    absent = [p.name for p in plan.inputs if p.pin is None and p.fed_by is None]
    if absent:
        yield (
            f"No pin was left for {listed(absent)}. No output depends on "
            f"{'it' if len(absent) == 1 else 'them'}, so nothing needs to be connected."
        )


def _driving_idly(programmed: ProgrammedRows) -> Iterator[str]:
    """Pins that carry no signal and are driven all the same."""
    plan = programmed.plan
    driving = [str(c.pin) for c in _idle_cells(plan) if programmed.drive_of(c) != "never"]
    if driving:
        # Common practice, no source.
        yield (
            f"The part drives {'pin' if len(driving) == 1 else 'pins'} {listed(driving)} though no "
            "signal is there: connect nothing that drives, and neither ground nor power."
        )
