"""A device file read without the program that it checks: which fuse does what, in every mode.

Written from the description of the file format alone.
"""

import posixpath
import tomllib
from collections import Counter
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

from oracles.fuse_file import UnreadableError
from oracles.register_description import (
    Control,
    Register,
    gates_of,
    only,
    register_of,
    registering,
)

Source = int | str


@dataclass(frozen=True)
class Line:
    """What a column carries: the level at a pin, or the sum of a cell, or the complement.

    `kind` is ``pin``, ``sum``, or ``q`` for the state of the register of a cell.
    """

    kind: str
    of: Source
    complement: bool = False

    @property
    def inverse(self) -> "Line":
        return Line(self.kind, self.of, not self.complement)


@dataclass(frozen=True)
class Mode:
    """One setting of a cell: what its pin shows, when, of which rows, and what its columns carry.

    `enable` is ("always",), ("row", row) or ("pin", pin, level that enables). `terms` is ``None``
    for a sum in the OR array; `second` are the rows of the second OR gate, ``None`` where there is
    none or where it is in the OR array. `columns` holds the columns of the cell that depend on its
    setting.
    """

    shows: str
    terms: tuple[int, ...] | None
    enable: tuple
    columns: dict[int, Line | None]
    register: Register | None = None
    second: tuple[int, ...] | None = None


@dataclass(frozen=True)
class Cell:
    key: Source
    pin: int | None
    name: str | None
    links: list[int]
    modes: dict[str, Mode]
    rows: list[int]
    gates: tuple[str, ...] = ()

    @property
    def entries(self) -> tuple[Source, ...]:
        """What its OR gates are called in the OR array: by its key, or by key and gate."""
        return tuple(f"{self.key}.{gate}" for gate in self.gates) or (self.key,)


@dataclass(frozen=True)
class Signature:
    fuses: range
    first_is_highest: bool
    ones: int


@dataclass(frozen=True)
class Description:
    """Where the links of a device are and what they do.

    `columns` holds for each column the pin's line, ``None`` for one with no line, or the key of
    the cell whose setting decides; `links[row][column]` and `sums[entry][row]` are fuses, where an
    entry is a cell's key, or ``"14.j"`` and the like where a cell has two OR gates.
    """

    name: str
    pins: int
    fuses: int
    blank: int
    connected: int
    columns: list[Line | Source | None]
    links: list[list[int]]
    sums: dict[Source, dict[int, int]]
    cells: dict[Source, Cell]
    drop: dict[int, int]
    dropped: int | None
    mode_fuses: dict[int, int]
    signature: Signature | None
    spare: list[int]
    supplies: list[int]
    unconnected: list[int]

    @property
    def cell_pins(self) -> list[int]:
        return sorted(cell.pin for cell in self.cells.values() if cell.pin is not None)

    @property
    def enable_pins(self) -> list[int]:
        return sorted(
            {
                m.enable[1]
                for c in self.cells.values()
                for m in c.modes.values()
                if len(m.enable) > 2
            }
        )

    @property
    def input_pins(self) -> list[int]:
        """Pins that are no cell's and have a line in some mode."""
        lines = {line for line in self.columns if isinstance(line, Line)}
        for cell in self.cells.values():
            for mode in cell.modes.values():
                lines |= {line for line in mode.columns.values() if line is not None}
        return sorted({x.of for x in lines if x.kind == "pin"} - set(self.cell_pins))

    @property
    def registers(self) -> list[Register]:
        """Those of all cells in all modes."""
        modes = [mode for cell in self.cells.values() for mode in cell.modes.values()]
        return [mode.register for mode in modes if mode.register is not None]

    @property
    def clock_pins(self) -> list[int]:
        return sorted({register.clock for register in self.registers})

    @property
    def controls(self) -> list[Control]:
        found = [c for register in self.registers for c in (register.reset, register.preset)]
        return [control for control in found if control is not None]

    @property
    def control_pins(self) -> list[int]:
        return sorted({c.by[1] for c in self.controls if c.by[0] == "pin"})

    @property
    def control_rows(self) -> list[int]:
        return sorted({c.by[1] for c in self.controls if c.by[0] == "row"})

    def role_counts(self) -> tuple[Counter, Counter]:
        """How many uses every fuse has, and how many roles every pin: in a good file one each."""
        fuses = Counter(self.spare)
        for group in (*self.links, *(by_row.values() for by_row in self.sums.values())):
            fuses.update(group)
        for cell in self.cells.values():
            fuses.update(cell.links)
        fuses.update(self.drop.values())
        fuses.update(list(self.mode_fuses))
        if self.signature is not None:
            fuses.update(self.signature.fuses)
        pins = Counter([*self.supplies, *self.unconnected, *self.cell_pins])
        pins.update({*self.input_pins, *self.enable_pins, *self.clock_pins, *self.control_pins})
        return fuses, pins


def read_device(text: str, load: Callable[[str], str] | None = None) -> Description:
    """A device file; `load` gives the text of a file that it extends, by its relative path."""
    data = _extended(text, load, "", 8)
    try:
        return _description(data)
    except KeyError as missing:
        raise UnreadableError(f"{missing} is missing") from missing


def read_device_file(path: Path) -> Description:
    return read_device(
        path.read_text(encoding="utf-8"),
        lambda other: (path.parent / other).read_text(encoding="utf-8"),
    )


def _extended(text, load, folder, depth):
    data = tomllib.loads(text)
    if "extends" not in data:
        return data
    if load is None or depth == 0 or "name" not in data:
        raise UnreadableError(f"extends {data['extends']!r}: no loader, no name or too deep")
    path = posixpath.normpath(posixpath.join(folder, data.pop("extends")))
    below = _extended(load(path), load, posixpath.dirname(path), depth - 1)
    below.setdefault("family", below["name"])
    return _laid_over(below, data)


def _laid_over(below, above):
    merged = dict(below)
    for key, value in above.items():
        if isinstance(value, dict) and isinstance(below.get(key), dict):
            merged[key] = _laid_over(below[key], value)
        else:
            merged[key] = value
    return merged


def _numbers(value) -> list[int]:
    """Numbers and ranges: ``7``, ``"1..7"`` or a list of such."""
    found = []
    for item in value if isinstance(value, list) else [value]:
        first, dots, last = str(item).partition("..")
        found += range(int(first), int(last if dots else first) + 1)
    return found


def _description(data) -> Description:
    only(
        data,
        "name summary technology pins fuses ground power unconnected spare links and or kind drop "
        "set family signature timing register",
        "device file",
    )
    only(data["links"], "blank connected unused_term unused_enable unused_control", "[links]")
    words = data["and"]["columns"].split()
    cells_data = [(kind, cell) for kind in data["kind"].values() for cell in kind["cells"]]
    key_of = {}
    for _, cell in cells_data:
        key = cell.get("pin", cell.get("name"))
        for source in (cell.get("pin"), cell.get("name")):
            if source is not None:
                if source in key_of:
                    raise UnreadableError(f"two cells are {source}")
                key_of[source] = key
    both_named = {cell["pin"] for _, cell in cells_data if "pin" in cell and "name" in cell}
    columns, own = _columns(words, key_of, both_named)

    rows = data["and"]["terms"]
    starts, step = _starts(data["and"], rows, "[and]")
    links = [[first + i * step for i in range(len(words))] for first in starts]
    for kind in data["kind"].values():
        only(kind, "bits modes cells enable unused register", "kind")
    owned = {_key(cell): _owned(kind, cell) for kind, cell in cells_data}
    said = {_key(cell): registering(data, kind, cell) for kind, cell in cells_data}
    gates = {_key(cell): gates_of(kind) for kind, cell in cells_data}
    controls = {
        control["term"]
        for of_cell in said.values()
        for control in (of_cell.get("reset"), of_cell.get("preset"))
        if isinstance(control, dict) and "term" in control
    }
    sums = _or_array(data, rows, owned, controls, key_of, gates)
    cells = {}
    for kind, cell in cells_data:
        key = _key(cell)
        cells[key] = _cell(kind, cell, owned[key], own.get(key, []), said[key], set(sums))
    _check_controls(cells, controls, sums)

    drop = _drop(data.get("drop"), rows)
    return Description(
        name=data["name"],
        pins=data["pins"],
        fuses=data["fuses"],
        blank=data["links"]["blank"],
        connected=data["links"]["connected"],
        columns=columns,
        links=links,
        sums=sums,
        cells=cells,
        drop=drop,
        dropped=data["drop"]["dropped"] if "drop" in data else None,
        mode_fuses={int(fuse): state for fuse, state in data.get("set", {}).items()},
        signature=_signature(data.get("signature")),
        spare=_numbers(data.get("spare", [])),
        supplies=[*_numbers(data.get("ground", [])), *_numbers(data.get("power", []))],
        unconnected=_numbers(data.get("unconnected", [])),
    )


def _key(cell):
    return cell.get("pin", cell.get("name"))


def _source(word):
    name = word.removesuffix("'")
    return (int(name) if name.isdigit() else name), word.endswith("'")


def _columns(words, key_of, both_named):
    """Each column's line, or the cell that decides it; and the own columns of each cell."""
    columns, own, seen = [], {}, Counter(word for word in words if word != ".")
    for index, word in enumerate(words):
        if word == ".":
            columns.append(None)
            continue
        source, prime = _source(word)
        if isinstance(source, str) and source not in key_of:
            raise UnreadableError(f"column {word} belongs to no cell")
        if seen[word] > 1:
            raise UnreadableError(f"column {word} stands twice")
        if source in key_of and source not in both_named:
            columns.append(key_of[source])
            own.setdefault(key_of[source], []).append((index, prime))
        else:
            columns.append(Line("pin", source, prime))
    return columns, own


def _starts(section, count, what):
    """First fuse of each row, and the step between columns."""
    regular = {"first_fuse", "term_step"} & set(section)
    if ("rows" in section) == bool(regular):
        raise UnreadableError(f"{what}: rows, or first_fuse and term_step")
    if "rows" in section:
        starts = section["rows"]
    else:
        starts = [section["first_fuse"] + r * section["term_step"] for r in range(count)]
    if len(starts) != count:
        raise UnreadableError(f"{what}: {len(starts)} rows for {count} terms")
    return starts, section.get("column_step", 1)


def _owned(kind, cell):
    keys = "pin name links rows terms enable j k s r clock reset preset"
    only(cell, keys, f"cell {_key(cell)}")
    if "rows" in cell:
        return _numbers(cell["rows"])
    enable = cell.get("enable", kind.get("enable"))
    rows = {enable} if isinstance(enable, int) else set()
    for gate in ("terms", "j", "k", "s", "r"):
        rows |= set(_numbers(cell.get(gate, [])))
    return sorted(rows)


def _check_controls(cells, controls, sums):
    """A row that resets or presets belongs to no sum and no enable; a cell is no clock."""
    used = {row for cell in cells.values() for row in cell.rows}
    used |= {row for by_row in sums.values() for row in by_row}
    if used & controls:
        raise UnreadableError(f"rows {sorted(used & controls)} are controls and more")
    pins = {cell.pin for cell in cells.values()}
    for cell in cells.values():
        for mode in cell.modes.values():
            if mode.register is not None and mode.register.clock in pins:
                raise UnreadableError(f"pin {mode.register.clock} is a clock and a cell")


def _or_array(data, rows, owned, controls, key_of, gates):
    if "or" not in data:
        return {}
    section = data["or"]
    only(section, "columns terms first_fuse term_step rows column_step", "[or]")
    taken = controls.union(*owned.values())
    default = [row for row in range(rows) if row not in taken]
    terms = _numbers(section["terms"]) if "terms" in section else default
    starts, step = _starts(section, len(terms), "[or]")
    sums = {}
    for index, word in enumerate(section["columns"].split()):
        name, _, gate = word.partition(".")
        source, prime = _source(name)
        entry = key_of.get(source)
        if gate and entry is not None:
            entry = f"{entry}.{gate}"
        if prime or entry is None or entry in sums or gate not in (gates[key_of[source]] or ("",)):
            raise UnreadableError(f"[or] column {word}")
        first = [start + index * step for start in starts]
        sums[entry] = dict(zip(terms, first, strict=True))
    return sums


def _cell(kind, cell, rows, own, said, shared):
    key, pin = _key(cell), cell.get("pin")
    gates, modes = gates_of(kind), {}
    strange = {"j", "k", "s", "r", *(["terms"] if gates else [])} & set(cell) - set(gates)
    if strange:
        raise UnreadableError(f"cell {key}: rows of {sorted(strange)}")
    for mode in kind["modes"]:
        what = f"mode of cell {key}"
        only(mode, "set pin feedback columns terms enable d t j k s r reset preset", what)
        register = register_of(mode, said, what)
        shows = mode["pin"] if pin is not None else mode.get("pin", "none")
        showable = {"none"} if gates else {"none", "sum", "sum'"}
        showable |= {"q", "q'"} if register is not None else set()
        if shows not in showable or (pin is None and shows != "none"):
            raise UnreadableError(f"cell {key}: a pin that shows {shows!r}")
        if mode.get("feedback", "none") not in {*showable, "pin"}:
            raise UnreadableError(f"cell {key}: {mode['feedback']!r} fed back")
        terms, second = _rows_of_gates(mode, cell, rows, gates, what)
        for entry, own_rows in zip(
            [f"{key}.{gate}" for gate in gates] or [key], (terms, second), strict=False
        ):
            if (own_rows is None) != (entry in shared):
                raise UnreadableError(f"cell {key}: an OR column or terms of its own, not both")
        if "enable" in mode:
            enable = _enable(mode["enable"], rows)
        else:
            enable = _enable(cell.get("enable", kind.get("enable", "always")))
        setting = mode["set"] if kind.get("bits") else mode.get("set", "")
        if setting in modes or len(setting) != len(cell.get("links", [])):
            raise UnreadableError(f"cell {key}: setting {setting!r}")
        carried = _carried(mode, key, pin, own)
        modes[setting] = Mode(shows, terms, enable, carried, register, second)
    return Cell(key, pin, cell.get("name"), cell.get("links", []), modes, rows, gates)


def _rows_of_gates(mode, cell, rows, gates, what):
    """Rows of the first and of the second OR gate; ``None`` where there are none of its own."""
    if gates:
        if "terms" in mode:
            raise UnreadableError(f"{what}: terms of a cell with two OR gates")
        first, second = (tuple(_numbers(cell[g])) if g in cell else None for g in gates)
        return first, second
    if "terms" in mode:
        return tuple(rows[i] for i in _numbers(mode["terms"])), None
    return (tuple(_numbers(cell["terms"])) if "terms" in cell else None), None


def _enable(said, rows=None):
    """Rows count within `rows` if given, else in the whole array."""
    if said == "always":
        return ("always",)
    if isinstance(said, int):
        return ("row", said if rows is None else rows[said])
    only(said, "pin active", "enable")
    return ("pin", said["pin"], {"high": 1, "low": 0}[said.get("active", "high")])


def _carried(mode, key, pin, own):
    """What each of the cell's own columns carries in this mode."""
    if not own:
        return {}
    if "columns" in mode:
        words = mode["columns"].split()
        if "feedback" in mode or len(words) != len(own):
            raise UnreadableError(f"cell {key}: columns {words} for {len(own)} columns")
        carried = {}
        for (index, _), word in zip(own, words, strict=True):
            carried[index] = None if word == "." else Line("pin", *_source(word))
        return carried
    feedback = mode["feedback"]
    if feedback == "none":
        return dict.fromkeys([index for index, _ in own])
    plain = {
        "sum": Line("sum", key),
        "sum'": Line("sum", key, complement=True),
        "q": Line("q", key),
        "q'": Line("q", key, complement=True),
        "pin": Line("pin", pin) if pin is not None else None,
    }[feedback]
    if plain is None:
        raise UnreadableError(f"cell {key} has no pin to feed back")
    return {index: plain.inverse if prime else plain for index, prime in own}


def _drop(section, rows):
    if section is None:
        return {}
    only(section, "dropped first_fuse term_step fuses terms", "[drop]")
    terms = _numbers(section["terms"]) if "terms" in section else list(range(rows))
    fuses = section.get("fuses")
    if fuses is None:
        step = section.get("term_step", 1)
        fuses = [section["first_fuse"] + index * step for index in range(len(terms))]
    return dict(zip(terms, fuses, strict=True))


def _signature(section):
    if section is None:
        return None
    only(section, "first_fuse bits order ones", "[signature]")
    orders = {"most significant bit first": True, "least significant bit first": False}
    first = section["first_fuse"]
    return Signature(
        range(first, first + section["bits"]), orders[section["order"]], section.get("ones", 1)
    )
