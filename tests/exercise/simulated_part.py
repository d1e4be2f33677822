"""A part with an exercise's fuses in it, measured step by step; what it really is a file says.

The device file and the links are read by the oracle, which shares no code with the program. Beside
it stands only this: sums and pins that name each other in a ring settle as far as they can.
"""

from oracles.device_description import Description
from oracles.pin_simulation import Logic, _Run, configured

from oracles.device_description import Line  # isort: skip

UNKNOWN = Logic(0, 0)


class _Settling(_Run):
    """Everything is unknown to begin with, and is worked out anew until nothing changes."""

    def all(self):
        device = self.array.device
        lines = [Line("sum", key) for key in device.cells]
        lines += [Line("pin", pin) for pin in sorted({*self.cell_of_pin, *self.drivers})]
        while True:
            before = dict(self.known)
            for line in lines:
                self.rows.clear()
                self.known[line] = self.sum(line.of) if line.kind == "sum" else self.read(line.of)
            if self.known == before:
                return self.levels

    def value(self, line):
        found = self.known.get(Line(line.kind, line.of), UNKNOWN)
        return found.inverse if line.complement else found


def measured(device: Description, states: list[int], steps: list[dict[int, bool]]):
    """For the pin of each cell one sign a step: ``H L Z``, ``?`` undefined, ``-`` set from outside.

    Args:
        device: What the part really is.
        states: Its links.
        steps: At each step the level of each pin that is set.
    """
    drivers = {}
    for pin in sorted({pin for step in steps for pin in step}):
        driven = sum(1 << k for k, step in enumerate(steps) if pin in step)
        drivers[pin] = (driven, sum(1 << k for k, step in enumerate(steps) if step.get(pin)))
    levels = _Settling(configured(device, states), drivers, (1 << len(steps)) - 1).all()
    signs = {"1": "H", "0": "L", "Z": "Z", "?": "?"}
    return {
        cell.pin: "".join(
            "-" if cell.pin in step else signs[levels[cell.pin].at(k)]
            for k, step in enumerate(steps)
        )
        for cell in device.cells.values()
        if cell.pin is not None
    }


def surely_differ(expected, found):
    """Steps and pins at which a person with a meter sees something else than expected."""
    return [
        (step, pin)
        for pin in sorted(expected)
        for step, pair in enumerate(zip(expected[pin], found.get(pin, ""), strict=False))
        if set(pair) <= set("HLZ") and pair[0] != pair[1]
    ]
