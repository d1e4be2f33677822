"""What a device file says of registers: kinds, clocks, resets, presets, power-up.

Written from the description of the file format alone, as `device_description`.
"""

from dataclasses import dataclass

from oracles.fuse_file import UnreadableError


@dataclass(frozen=True)
class Control:
    """What resets or presets a register: ("row", row) or ("pin", pin, level that acts).

    `asynchronous`: at once, else at the clock edge.
    """

    by: tuple
    asynchronous: bool


@dataclass(frozen=True)
class Register:
    """The register of a cell in one mode.

    `kind` is ``d``, ``t``, ``jk`` or ``sr``; `inverted` says for each of its inputs, first j before
    k and s before r, whether it takes the complement of its sum. `power_up` is 0, 1 or ``None``.
    """

    kind: str
    inverted: tuple[bool, ...]
    clock: int
    falling: bool
    power_up: int | None
    reset: Control | None
    preset: Control | None


def only(table, allowed, what):
    strange = set(table) - set(allowed.split())
    if strange:
        raise UnreadableError(f"{what}: {sorted(strange)} is not understood")


INPUTS = {"d": ("d",), "t": ("t",), "jk": ("j", "k"), "sr": ("s", "r")}


def gates_of(kind):
    """Names of the OR gates of a cell that has two."""
    pairs = {kind_of(mode) for mode in kind["modes"]}
    if not pairs & {"jk", "sr"}:
        return ()
    if len(pairs - {None}) > 1 or None in pairs:
        raise UnreadableError("a kind of cells with two OR gates in one mode and one in another")
    return INPUTS[pairs.pop()]


def kind_of(mode):
    named = {name for names in INPUTS.values() for name in names} & set(mode)
    for kind, names in INPUTS.items():
        if named == set(names):
            return kind
    if named:
        raise UnreadableError(f"a register with the inputs {sorted(named)}")
    return None


def registering(data, kind, cell):
    """Clock, power-up, reset and preset of a cell: device-wide, of its kind, its own."""
    over = {key: cell[key] for key in ("clock", "reset", "preset") if key in cell}
    said = {**data.get("register", {}), **kind.get("register", {}), **over}
    only(said, "clock power_up reset preset", "register")
    return said


def register_of(mode, said, what):
    kind = kind_of(mode)
    if kind is None:
        only(mode, "set pin feedback columns terms enable", what)
        return None
    inverted = []
    for name in INPUTS[kind]:
        if mode[name] not in {"sum", "sum'"}:
            raise UnreadableError(f"{what}: {name} = {mode[name]!r}")
        inverted.append(mode[name] == "sum'")
    clock, power_up = said["clock"], said["power_up"]
    only(clock, "pin edge", f"clock of {what}")
    if power_up not in (0, 1, "unknown"):
        raise UnreadableError(f"{what}: power_up = {power_up!r}")
    falling = {"rising": False, "falling": True}[clock.get("edge", "rising")]
    controls = []
    for name in ("reset", "preset"):
        control = said.get(name)
        if name in mode:
            if mode[name] != "none":
                raise UnreadableError(f"{what}: {name} = {mode[name]!r}")
            control = None
        acts = control is not None and control != "none"
        controls.append(control_of(control, what) if acts else None)
    power_up = None if power_up == "unknown" else power_up
    return Register(kind, tuple(inverted), clock["pin"], falling, power_up, *controls)


def control_of(said, what):
    only(said, "term pin active when", f"reset or preset of {what}")
    asynchronous = {"asynchronous": True, "clock": False}[said["when"]]
    if ("term" in said) == ("pin" in said) or ("active" in said and "pin" not in said):
        raise UnreadableError(f"{what}: reset or preset by {sorted(said)}")
    if "term" in said:
        return Control(("row", said["term"]), asynchronous)
    level = {"high": 1, "low": 0}[said.get("active", "high")]
    return Control(("pin", said["pin"], level), asynchronous)
