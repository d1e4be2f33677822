"""Designs and plans made by hand, so that fuses can be tested without a fitter."""

from pla.behaviour.model import Behaviour, Enabling, Input, Output
from pla.errors import Location
from pla.fitting.model import PlacedInput, PlacedOutput, Plan
from pla.logic.cubes import Cover, Cube
from pla.logic.function import Function
from pla.logic.minimize import Minimum

HERE = Location("panel.toml", 1, 1)


def points_cover(count, points):
    """Single combinations; bit ``i`` of a point is input ``i``."""
    full = (1 << count) - 1
    return Cover.of(count, [Cube(point, full & ~point) for point in points])


def design(inputs, outputs, **more):
    """A design over few inputs.

    `inputs` are (name, active_low, output that it reads or None); `outputs` are (name, active_low,
    points that are 1, points that are 0, enable or None, input at its pin or None), where an enable
    is (points at which it drives, points at which it does not).
    """
    n = len(inputs)
    made = []
    for name, active_low, _, _, enable, reads in outputs:
        enabling = None
        if enable is not None:
            on, off = (points_cover(n, points) for points in enable)
            enabling = Enabling(on, off, "rd", HERE)
        made.append(Output(name, active_low, None, HERE, HERE, "logic", enabling, reads))
    function = Function.of_outputs(
        n, [(points_cover(n, on), points_cover(n, off)) for _, _, on, off, _, _ in outputs]
    )
    return Behaviour(
        name="panel",
        revision="",
        file="panel.toml",
        inputs=tuple(Input(name, low, HERE, read) for name, low, read in inputs),
        outputs=tuple(made),
        function=function,
        never=Cover.of(n),
        dont_cares=(),
        **more,
    )


def columns_for(device, modes, kind, key, *, active_low=False):
    """(column that is 1 while the signal is asserted, column that is 1 while it is not)."""
    lines = device.lines(modes)
    found = {}
    for index, line in enumerate(lines):
        if line is not None and (line.kind, line.of) == (kind, key):
            found.setdefault(line.complement != active_low, index)
    return (found.get(False), found.get(True))


def plan(device, wanted, pins, modes=None, **more):
    """A plan as far as a proof looks at it; `pins` are those of the signals by name."""
    modes = {cell.key: (modes or {}).get(cell.key, device.idle_mode(cell)) for cell in device.cells}
    inputs = tuple(
        PlacedInput(
            i,
            signal.name,
            pins.get(signal.name),
            signal.active_low,
            True,
            columns_for(device, modes, "pin", pins.get(signal.name), active_low=signal.active_low),
        )
        for i, signal in enumerate(wanted.inputs)
    )
    outputs = tuple(
        PlacedOutput(
            j,
            signal.name,
            pins[signal.name],
            signal.active_low,
            False,
            modes[device.cell_of_pin[pins[signal.name]].key],
            device.cell_of_pin[pins[signal.name]],
        )
        for j, signal in enumerate(wanted.outputs)
    )
    given = {
        "minimum": minimum(Cover.of(len(wanted.inputs))),
        "inputs": inputs,
        "outputs": outputs,
        "rows": (),
        "modes": modes,
    }
    return Plan(wanted, more.pop("behaviour", wanted), device, **(given | more))


def minimum(cover):
    return Minimum(cover, (), len(cover), "solver", None, None, False)
