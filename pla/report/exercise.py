"""What to do with an exercised part, and what it tells."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.report.exercise_text import counted, kinds_tried
from pla.report.markdown import bullets, escaped, table_markdown
from pla.report.table import Table
from pla.wording import listed, spans

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.device.model import Cell, Mode
    from pla.exercise.program import Exercise, Exercised, Telling

__all__ = ["exercise_markdown"]

_PLACES = 3


def exercise_markdown(
    exercised: Exercised, number: int, made: Exercise, files: Sequence[str], *, has_design: bool
) -> str:
    """The instructions for one part.

    Args:
        exercised: The part.
        number: Which part of the exercise it is, from 1.
        made: The exercise that it belongs to.
        files: Names of the files of this part.
        has_design: Whether there is a design file among them.
    """
    device = exercised.part.device
    parts = [
        f"# Exercise of {escaped(device.name)}, part {number}",
        escaped(
            "This part does nothing useful. It is made so that its pins tell whether the device "
            f"file of {device.name} describes it. Program the fuse file into one part that you can "
            "spare, take the steps below, and compare. If every reading is as expected, none of "
            f"the {counted(len(exercised.shown), 'slip')} that this part shows is in the device "
            "file."
        ),
    ]
    if device.technology == "one-time":
        parts.append("The links of this part are programmed once: it cannot be used afterwards.")
    parts += ["## Files", bullets(_on_files(files, has_design=has_design))]
    parts += ["## Setting up", bullets(_setting_up(exercised))]
    tables = (
        _step_table(exercised),
        _telling_table(exercised, number, made),
        _cell_table(exercised),
        _row_table(exercised),
    )
    parts += map(table_markdown, tables)
    return "\n\n".join(parts) + "\n"


def _on_files(files: Sequence[str], *, has_design: bool) -> Iterator[str]:
    what = {
        ".jed": "the fuse file",
        ".csv": "the steps as a sheet to fill in; device exercise --readings tells what it means",
        ".toml": "the same behaviour as a design file, one signal for each pin",
    }
    for name in files:
        ending = name[name.rindex(".") :]
        if ending in what:
            yield f"{name}: {what[ending]}"
    if not has_design:
        yield ("There is no design file: no pin is ever driven, or it would be too large.")


def _setting_up(exercised: Exercised) -> Iterator[str]:
    part = exercised.part
    device = part.device
    set_pins = {pin for step in part.steps for pin in step.levels}
    both = sorted(set_pins & set(device.cell_of_pin))
    yield (
        f"Supply: {_pins(device.ground)} to ground, {_pins(device.power)} to the supply that the "
        "data sheet names. Limit its current: a wrong description may make the part drive against "
        "you."
    )
    if both:
        yield (
            f"Set {_pins(both)} through a resistor of some kΩ each: the part drives "
            f"{'it' if len(both) == 1 else 'them'} at other steps, or would if the description "
            "were wrong. (Common practice, no source.) A programmer that runs the test vectors of "
            "the fuse file drives these pins hard, with no such resistor: if in doubt, have the "
            "fuse file made with --no-vectors and set the pins yourself."
        )
    others = sorted(set_pins.difference(both))
    if others:
        yield f"Set {_pins(others)} to ground for 0 and to the supply for 1."
    yield (
        "Z is high impedance: a resistor of some kΩ to the supply pulls the pin high, and the same "
        "resistor to ground pulls it low. H and L stay as they are whichever way the resistor goes."
    )
    if device.unconnected:
        yield f"Leave {_pins(device.unconnected)} open."
    yield "Where nothing is set at a pin of a cell, nothing but the meter is connected to it."


def _pins(pins: Sequence[int]) -> str:
    return f"pin{'' if len(pins) == 1 else 's'} {listed(list(map(str, pins)))}"


def _step_table(exercised: Exercised) -> Table:
    steps = exercised.part.steps
    pins = sorted({pin for step in steps for pin in step.levels})
    rows = [
        (
            str(k + 1),
            *("" if pin not in step.levels else str(int(step.levels[pin])) for pin in pins),
            *(own[k] for own in exercised.expected.values()),
        )
        for k, step in enumerate(steps)
    ]
    signs = (
        "H high, L low, Z high impedance; - the pin is set from outside at this step; ? the level "
        "is not known, do not compare it."
    )
    remarks = [signs]
    neighbours = [k + 1 for k, step in enumerate(steps) if step.neighbour is not None]
    if neighbours:
        remarks.append(
            f"Steps {spans(neighbours)} differ from an earlier one at one input only, so that each "
            "input is seen to count."
        )
    return Table(
        "Steps",
        ("step", *(f"set {pin}" for pin in pins), *(f"read {pin}" for pin in exercised.expected)),
        tuple(rows),
        "r" + "l" * (len(pins) + len(exercised.expected)),
        remarks=tuple(remarks),
    )


def _telling_table(exercised: Exercised, number: int, made: Exercise) -> Table:
    count = len(exercised.shown)
    before = "" if number == 1 else " and at none before it"
    lead = (
        f"{counted(made.tried, 'slip')} in the device file {'was' if made.tried == 1 else 'were'} "
        f"tried, one at a time: {count} {'shows' if count == 1 else 'show'} at this part{before}. "
        "If a single reading is odd, measure it again first. The table says where slips show: look "
        "up the places at which your readings differ, and suspect those slips first. Where "
        "several are in the file at once, readings differ in more places."
    )
    remarks = []
    if exercised.open:
        left = (
            f"These do not show at this part{'' if number == 1 else ' or one before it'}; "
            "either the part would behave the same, or another part is needed (--parts all):"
        )
        remarks = [left, *(f"- {what}" for what in exercised.open)]
    return Table(
        "If a reading differs",
        ("what may be wrong in the device file", "readings that differ", "where"),
        tuple(
            (telling.what, str(len(telling.where)), _where(telling)) for telling in exercised.shown
        ),
        "lrl",
        lead=(lead, kinds_tried(made)),
        remarks=tuple(remarks),
    )


def _where(telling: Telling) -> str:
    places = [f"step {step + 1} pin {pin}" for step, pin in sorted(telling.where)]
    more = len(places) - _PLACES
    return ", ".join(places[:_PLACES]) + (f" and {more} more" if more > 0 else "")


def _cell_table(exercised: Exercised) -> Table:
    part = exercised.part
    rows = [
        (str(cell), part.modes[cell.key].set or "fixed", _does(cell, part.modes[cell.key]))
        for cell in part.device.cells
    ]
    lead = "How each cell is set, and what the device file says of that."
    return Table("Cells", ("cell", "setting", "what it does"), tuple(rows), "lll", lead=(lead,))


def _does(cell: Cell, mode: Mode) -> str:
    words = []
    if cell.pin is not None:
        shows = {
            "sum": "the pin shows the sum",
            "sum'": "the pin shows the complement of the sum",
            "none": "the pin is not driven",
        }
        words.append(shows[mode.pin])
        enable = mode.enable
        if mode.pin != "none" and enable.row is not None:
            words.append(f"while row {enable.row} is 1")
        elif mode.pin != "none" and enable.pin is not None:
            words.append(f"while pin {enable.pin} is {'low' if enable.active_low else 'high'}")
    words += [f"column {c} carries {'nothing' if n is None else n}" for c, n in mode.lines]
    if mode.terms:
        words.append(f"its terms are rows {spans(mode.terms)}")
    return "; ".join(words) or "a buried sum"


def _row_table(exercised: Exercised) -> Table:
    part = exercised.part
    rows = [
        (str(number), str(part.device.and_array.rows[number]), what)
        for number, what in enumerate(part.contents)
    ]
    lead = (
        "A term is the product of all lines that are 1 at its step. One that is blocked has one "
        "line more that is 0 then, and one that is cut off has its drop link programmed: neither "
        "may show."
    )
    return Table("Rows", ("row", "first fuse", "what it holds"), tuple(rows), "rrl", lead=(lead,))
