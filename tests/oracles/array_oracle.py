"""Plain shared-OR arrays, whose pins are inputs or outputs and whose outputs always drive.

A short way to the oracle for these: levels in, levels out. What it says of such an array is what
`oracles.pin_simulation` says.
"""

from dataclasses import dataclass

from oracles.device_description import Description, read_device
from oracles.fuse_file import Transmission, UnreadableError, read_transmission
from oracles.pin_simulation import every_case, simulate

__all__ = [
    "Array",
    "Transmission",
    "UnreadableError",
    "every_case",
    "output_levels",
    "read_array",
    "read_transmission",
]


@dataclass(frozen=True)
class Array:
    """Where the links of a device are and what they do.

    `lines` holds for each row the (fuse, pin, complement) of every link to a line, `sums` for
    each output pin the fuse of every row's link to its sum, `cells` for each output pin its
    configuration links and what the pin shows in each setting.
    """

    name: str
    pins: int
    fuses: int
    connected: int
    lines: list[list[tuple[int, int, bool]]]
    sums: dict[int, list[int]]
    cells: dict[int, tuple[list[int], dict[str, str]]]
    whole: Description

    @property
    def inputs(self) -> list[int]:
        return self.whole.input_pins


def read_array(text: str) -> Array:
    """A device file of a shared OR array whose pins are inputs or outputs, never both."""
    device = read_device(text)
    everything = list(range(len(device.links)))
    modes = [mode for cell in device.cells.values() for mode in cell.modes.values()]
    if (
        list(device.sums) != [k for k in device.sums if isinstance(k, int)]
        or any(list(by_row) != everything for by_row in device.sums.values())
        or set(device.cells) != set(device.sums)
        or any(m.enable != ("always",) or m.columns or m.shows == "none" for m in modes)
        or device.drop
        or device.mode_fuses
        or device.signature
        or device.registers
    ):
        raise UnreadableError("not a plain shared OR array")
    return Array(
        name=device.name,
        pins=device.pins,
        fuses=device.fuses,
        connected=device.connected,
        lines=[
            [
                (fuse, line.of, line.complement)
                for fuse, line in zip(row, device.columns, strict=True)
                if line is not None
            ]
            for row in device.links
        ],
        sums={pin: list(by_row.values()) for pin, by_row in device.sums.items()},
        cells={
            pin: (cell.links, {setting: mode.shows for setting, mode in cell.modes.items()})
            for pin, cell in device.cells.items()
        },
        whole=device,
    )


def output_levels(
    array: Array, states: list[int], levels: dict[int, int], cases: int
) -> dict[int, int]:
    """The level of every output pin in each of `cases` cases, from the level of every input pin.

    A row is the AND of its connected lines (of none: 1), a sum the OR of its connected rows (of
    none: 0).
    """
    everywhere = (1 << cases) - 1
    drivers = {pin: (everywhere, level) for pin, level in levels.items()}
    found = simulate(array.whole, states, drivers, cases).pins
    for pin in array.cells:
        if found[pin].high | found[pin].low != everywhere:
            raise UnreadableError(f"pin {pin} depends on an input that nobody drives")
    return {pin: found[pin].high for pin in array.cells}
