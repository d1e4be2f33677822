"""Random device files of each structural class of small combinational arrays.

Only files are made here, with no account of what their fuses do: for that there is an oracle, which
reads the files on a road of its own.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from itertools import product
from typing import TYPE_CHECKING

from fuse_layout import Need, lay_out

if TYPE_CHECKING:
    import random
    from collections.abc import Callable
    from pathlib import Path

CLASSES = {
    "fixed": "own OR gates, active-low outputs, enable rows, feedback from some pins",
    "modes": "device-wide modes, drop links, a signature",
    "cells": "6 to 16 terms a cell, polarity, feedback and use of a row by mode",
    "buried": "shared OR gates, buried cells, a complement line, enable rows",
    "enable-pin": "cells that a pin enables",
    "columns": "columns that differ by mode",
    "mixed": "own and shared OR gates",
}


@dataclass
class ClassDevice:
    """Device files by name; `main` is the one to plan for."""

    name: str
    main: str
    files: dict[str, str]

    def write(self, folder: Path) -> Path:
        for name, text in self.files.items():
            path = folder / name
            path.parent.mkdir(parents=True, exist_ok=True)
            path.write_text(text, encoding="utf-8")
        return folder / self.main


def random_class_device(rng: random.Random, which: str) -> ClassDevice:
    """A valid random device of one of `CLASSES`."""
    return _MAKERS[which](rng)


@dataclass
class _Cell:
    pin: int | None = None
    name: str | None = None
    keys: dict = field(default_factory=dict)
    rows: list[int] = field(default_factory=list)

    @property
    def source(self):
        return self.pin if self.name is None else self.name

    @property
    def key(self):
        return self.name if self.pin is None else self.pin


@dataclass
class _Kind:
    bits: list[str]
    modes: list[dict]
    cells: list[_Cell]
    keys: dict = field(default_factory=dict)


@dataclass
class _Draft:
    """A device as it grows: first pins, then columns, then cells with rows, then fuses.

    `sums` holds the columns of the OR array: a cell, or a cell and one of its two gates. `register`
    is what the device says of all registers, `controls` whether rows reset or preset, and
    `other_pins` holds pins without lines that are no cell's.
    """

    rng: random.Random
    free: list[int]
    inputs: list[int]
    columns: list[str] = field(default_factory=list)
    rows: int = 0
    kinds: list[_Kind] = field(default_factory=list)
    sums: list[_Cell | tuple[_Cell, str]] = field(default_factory=list)
    shared: list[int] = field(default_factory=list)
    drop_all: bool = False
    mode_fuses: int = 0
    signature: int = 0
    register: dict | None = None
    controls: bool = False
    other_pins: list[int] = field(default_factory=list)

    def own_columns(self, cell):
        return [word for word in self.columns if word.removesuffix("'") == str(cell.source)]


def _draft(rng, inputs, others):
    """Pins: `inputs` of them with lines, `others` for cells and enables, some idle."""
    pins = inputs + others + 2 + rng.choice([0, 0, 1, 3])
    order = rng.sample(range(1, pins + 1), pins)
    return _Draft(rng, order[inputs:], sorted(order[:inputs]))


def _lines(rng, sources, singles=()):
    """Columns in some order: both lines of each of `sources`, those of `singles` as they are."""
    groups = [[f"{source}", f"{source}'"] for source in sources]
    if rng.random() < 0.3:
        for group in groups:
            group.reverse()
    groups += [[word] for word in singles]
    if rng.random() < 0.6:
        rng.shuffle(groups)
    words = [word for group in groups for word in group]
    if rng.random() < 0.3:
        rng.shuffle(words)
    for _ in range(rng.choice([0, 0, 0, 1, 3])):
        words.insert(rng.randint(0, len(words)), ".")
    return words


def _hand_out_rows(draft, cells, counts, shared=0):
    """Rows of each cell, mostly together, and the rows of the OR array."""
    rng = draft.rng
    draft.rows = sum(counts) + shared
    rows = list(range(draft.rows))
    if rng.random() < 0.15:
        rng.shuffle(rows)
    groups = [*zip(cells, counts, strict=True), (None, shared)]
    rng.shuffle(groups)
    for cell, count in groups:
        taken, rows = sorted(rows[:count]), rows[count:]
        if cell is None:
            draft.shared = taken
        else:
            cell.rows = taken


def _own_rows(draft, cell, *, enable):
    """Of the rows of a cell, one for its enable and the others for its terms, said at the cell."""
    rows = list(cell.rows)
    if enable:
        cell.keys["enable"] = rows.pop(draft.rng.choice([0, 0, 0, -1, len(rows) // 2]))
    if rows:
        cell.keys["terms"] = _ranges(draft.rng, rows)
    if draft.rng.random() < 0.2:
        cell.keys["rows"] = _ranges(draft.rng, cell.rows)


def _sense(rng, *shows):
    """Polarity links: bits, and (setting, what the pin shows) for each."""
    if len(shows) == 1:
        return rng.choice([([], [("", shows[0])]), (["fixed"], [(rng.choice("01"), shows[0])])])
    first = rng.choice("01")
    return ["polarity"], [(first, shows[0]), ("10"[int(first)], shows[1])]


def _any_sense(rng):
    return _sense(rng, *rng.choice([("sum", "sum'"), ("sum", "sum'"), ("sum",), ("sum'",)]))


# --- the classes ---


def _fixed(rng):
    outputs = rng.randint(2, 5)
    draft = _draft(rng, rng.randint(4, 8), outputs)
    cells = [_Cell(draft.free.pop()) for _ in range(outputs)]
    fed = rng.sample(cells, rng.randint(1, outputs - 1))
    draft.columns = _lines(rng, [*draft.inputs, *(cell.pin for cell in fed)])
    enables = [rng.random() < 0.7 for _ in cells]
    _hand_out_rows(draft, cells, [rng.randint(3, 7) + on for on in enables])
    for cell, on in zip(cells, enables, strict=True):
        _own_rows(draft, cell, enable=on)
    mode = {"set": "", "pin": "sum'", "feedback": "pin"}
    if rng.random() < 0.5:
        draft.kinds = [_Kind([], [mode], cells)]
    else:
        plain = [cell for cell in cells if cell not in fed]
        draft.kinds = [_Kind([], [mode], fed), _Kind([], [{"set": "", "pin": "sum'"}], plain)]
    return _alone(draft, "random-fixed")


def _modes(rng):
    """A family: each file says the modes of the cells anew."""
    outputs = rng.randint(2, 4)
    draft = _draft(rng, rng.randint(4, 7), outputs)
    cells = [_Cell(draft.free.pop()) for _ in range(outputs)]
    draft.columns = _lines(rng, [*draft.inputs, *(cell.pin for cell in cells)])
    count = rng.randint(5, 8)
    _hand_out_rows(draft, cells, [count] * outputs)
    for cell in cells:
        cell.keys["rows"] = _ranges(rng, cell.rows)
    bits, senses = _any_sense(rng)
    whole, rest = f"0..{count - 1}", f"1..{count - 1}"
    oe = {"pin": rng.choice(draft.inputs), "active": rng.choice(["low", "high"])}
    plans = [
        {"terms": whole, "enable": "always", "feedback": rng.choice(["none", "sum", "pin"])},
        {"terms": rest, "enable": 0, "feedback": "pin"},
        {"terms": whole, "enable": oe, "feedback": rng.choice(["sum'", "pin"])},
    ]
    # The file that the others extend has no enable rows, unless all have.
    first = rng.choice([0, 2])
    order = [first, *rng.sample([i for i in range(3) if i != first], rng.randint(1, 2))]
    variants = [
        [{"set": s, "pin": shows, **plans[index]} for s, shows in senses] for index in order
    ]
    draft.kinds = [_Kind(bits, variants[0], cells)]
    draft.drop_all = True
    draft.signature = 8 * rng.randint(1, 5)
    draft.mode_fuses = rng.choice([1, 2]) if len(order) == 2 else 2
    return _family(draft, variants)


def _cells(rng):
    outputs = rng.randint(2, 4)
    draft = _draft(rng, rng.randint(4, 8), outputs)
    cells = [_Cell(draft.free.pop()) for _ in range(outputs)]
    named = rng.random() < 0.3
    for index, cell in enumerate(cells):
        cell.name = f"b{index}" if named else None
    pins = [cell.pin for cell in cells if named and rng.random() < 0.4]
    draft.columns = _lines(rng, [*draft.inputs, *(cell.source for cell in cells), *pins])
    sizes = [rng.choice([6, 7, 8, 8, 10, 12, 14, 16]) for _ in cells]
    _hand_out_rows(draft, cells, [size + 1 for size in sizes])
    feeds = rng.sample(["pin", "sum", "sum'", "none"], 2)
    bits, flips = ["polarity", "feedback", "row"], [rng.randint(0, 1) for _ in range(3)]
    off = rng.random() < 0.3
    for size in sorted(set(sizes)):
        modes = []
        for states in product((0, 1), repeat=3):
            polarity, feedback, row = (s ^ f for s, f in zip(states, flips, strict=True))
            mode = {"set": "".join(map(str, states)), "pin": ["sum", "sum'"][polarity]}
            mode["feedback"] = feeds[feedback]
            if row:
                mode |= {"terms": f"0..{size}", "enable": "always"}
            else:
                mode |= {"terms": f"1..{size}", "enable": 0}
            if off and states == (1, 1, 1):
                mode |= {"pin": "none", "feedback": "pin"}
            if states != (0, 1, 1) or rng.random() < 0.5:
                modes.append(mode)
        mine = [cell for cell, its in zip(cells, sizes, strict=True) if its == size]
        for cell in mine:
            cell.keys["rows"] = _ranges(rng, cell.rows)
        draft.kinds.append(_Kind(bits, modes, mine))
    return _alone(draft, "random-cells")


def _buried(rng):
    outputs = rng.randint(2, 4)
    draft = _draft(rng, rng.randint(4, 8), outputs)
    cells = [_Cell(draft.free.pop()) for _ in range(outputs)]
    fed = rng.sample(cells, rng.randint(0, outputs))
    for index, cell in enumerate(fed):
        cell.name = f"o{index}" if rng.random() < 0.3 else None
    buried = [_Cell(name=name) for name in rng.sample(["b1", "b2", "k"], rng.randint(1, 2))]
    complement = _Cell(name="c")
    draft.columns = _lines(rng, [*draft.inputs, *(c.source for c in (*fed, *buried))], ["c'"])
    enables = [rng.random() < 0.7 for _ in cells]
    _hand_out_rows(draft, cells, [int(on) for on in enables], shared=rng.randint(10, 24))
    for cell, on in zip(cells, enables, strict=True):
        if on:
            _own_rows(draft, cell, enable=True)
    bits, senses = _any_sense(rng)
    for group in (fed, [cell for cell in cells if cell not in fed]):
        feedback = {"feedback": rng.choice(["pin", "pin", "sum", "sum'"])} if group is fed else {}
        modes = [{"set": s, "pin": shows, **feedback} for s, shows in senses]
        draft.kinds += [_Kind(bits, modes, group)] * bool(group)
    draft.kinds.append(_Kind([], [{"set": "", "feedback": "sum"}], [complement]))
    if rng.random() < 0.4:
        modes = [{"set": "0", "feedback": "sum'"}, {"set": "1", "feedback": "sum"}]
        draft.kinds.append(_Kind(["sense"], modes, buried))
    else:
        draft.kinds[-1].cells += buried
    draft.sums = rng.sample([*cells, *buried, complement], outputs + len(buried) + 1)
    return _alone(draft, "random-buried")


def _enable_pin(rng):
    outputs = rng.randint(2, 5)
    draft = _draft(rng, rng.randint(4, 8), outputs + 1)
    cells = [_Cell(draft.free.pop()) for _ in range(outputs)]
    enabling = draft.free.pop()
    if rng.random() < 0.5:
        draft.inputs.append(enabling)
    fed = rng.sample(cells, rng.randint(1, outputs)) if rng.random() < 0.7 else []
    draft.columns = _lines(rng, [*draft.inputs, *(cell.pin for cell in fed)])
    if rng.random() < 0.5:
        _hand_out_rows(draft, cells, [0] * outputs, shared=rng.randint(8, 20))
        draft.sums = rng.sample(cells, outputs)
    else:
        _hand_out_rows(draft, cells, [rng.randint(3, 8) for _ in cells])
        for cell in cells:
            _own_rows(draft, cell, enable=False)
    enable = {"pin": enabling, "active": rng.choice(["low", "high"])}
    if enable["active"] == "high" and rng.random() < 0.5:
        del enable["active"]
    by_pin = rng.sample(cells, rng.randint(1, outputs))
    bits, senses = _any_sense(rng)
    for group in ([c for c in cells if c in by_pin], [c for c in cells if c not in by_pin]):
        feedback = {"feedback": rng.choice(["pin", "pin", "sum", "sum'"])}
        modes = [{"set": s, "pin": p, **(feedback if fed else {})} for s, p in senses]
        if not set(map(id, group)) & set(map(id, fed)):
            modes = [{"set": s, "pin": p} for s, p in senses]
        kind = _Kind(bits, modes, group)
        if group and group[0] in by_pin:
            if rng.random() < 0.5:
                kind.keys["enable"] = enable
            else:
                for cell in group:
                    cell.keys["enable"] = enable
        draft.kinds += [kind] * bool(group)
    return _alone(draft, "random-enable-pin")


def _columns(rng):
    """Each cell's columns carry its own pin, a pin that has no other line, or nothing."""
    outputs = rng.randint(2, 4)
    extra = rng.randint(1, min(2, outputs))
    draft = _draft(rng, rng.randint(4, 7), outputs + extra)
    cells = [_Cell(draft.free.pop()) for _ in range(outputs)]
    far = [draft.free.pop() for _ in range(extra)]
    draft.columns = _lines(rng, [*draft.inputs, *(cell.pin for cell in cells)])
    enables = [rng.random() < 0.4 for _ in cells]
    _hand_out_rows(draft, cells, [rng.randint(3, 8) + on for on in enables])
    for index, (cell, on) in enumerate(zip(cells, enables, strict=True)):
        _own_rows(draft, cell, enable=on)
        bits, senses = _any_sense(rng)
        pins = [cell.pin, far[index] if index < extra else None]
        flip, turned = rng.randint(0, 1), rng.random() < 0.2
        modes = []
        for state in (0, 1):
            pin = pins[state ^ flip]
            words = [
                "." if pin is None else f"{pin}" + "'" * (word.endswith("'") ^ turned)
                for word in draft.own_columns(cell)
            ]
            carried = {"columns": " ".join(words)}
            if pin == cell.pin and not turned and rng.random() < 0.4:
                carried = {"feedback": "pin"}
            modes += [{"set": f"{state}{s}", "pin": shows, **carried} for s, shows in senses]
        draft.kinds.append(_Kind(["line", *bits], modes, [cell]))
    return _alone(draft, "random-columns")


def _mixed(rng):
    outputs = rng.randint(2, 5)
    draft = _draft(rng, rng.randint(4, 8), outputs)
    cells = [_Cell(draft.free.pop()) for _ in range(outputs)]
    sharing = rng.sample(cells, rng.randint(1, outputs - 1))
    fed = rng.sample(cells, rng.randint(1, outputs))
    draft.columns = _lines(rng, [*draft.inputs, *(cell.pin for cell in fed)])
    enables = [rng.random() < 0.4 for _ in cells]
    counts = [
        on + (0 if cell in sharing else rng.randint(3, 8))
        for cell, on in zip(cells, enables, strict=True)
    ]
    _hand_out_rows(draft, cells, counts, shared=rng.randint(6, 14))
    for cell, on in zip(cells, enables, strict=True):
        if cell.rows:
            _own_rows(draft, cell, enable=on)
    feedback = {"feedback": rng.choice(["pin", "pin", "sum", "sum'"])} if fed else {}
    bits, senses = _any_sense(rng)
    draft.kinds = [_Kind(bits, [{"set": s, "pin": p, **feedback} for s, p in senses], cells)]
    draft.sums = rng.sample(sharing, len(sharing))
    return _alone(draft, "random-mixed")


_MAKERS: dict[str, Callable] = {
    "fixed": _fixed,
    "modes": _modes,
    "cells": _cells,
    "buried": _buried,
    "enable-pin": _enable_pin,
    "columns": _columns,
    "mixed": _mixed,
}


# --- from draft to file ---


def _alone(draft, name):
    return ClassDevice(name, f"{name}.toml", {f"{name}.toml": _text(draft, name, None)})


def _family(draft, variants):
    rng = draft.rng
    width = draft.mode_fuses
    settings = rng.sample([f"{n:0{width}b}" for n in range(1 << width)], len(variants))
    folder = rng.choice(["", "", "parts/"])
    names = [f"random-family-{'abc'[i]}" for i in range(len(variants))]
    files = {f"{folder}{names[0]}.toml": _text(draft, names[0], settings[0])}
    fuses = _fuses_of(files[f"{folder}{names[0]}.toml"])
    for name, setting, modes in zip(names[1:], settings[1:], variants[1:], strict=True):
        lines = [f'name = "{name}"', f'extends = "{folder}{names[0]}.toml"', "", "[set]"]
        lines += [f"{fuse} = {state}" for fuse, state in zip(fuses, setting, strict=True)]
        # Enable rows make this key necessary, and the extended file has none.
        if any(isinstance(mode["enable"], int) for mode in modes):
            lines += ["", "[links]", f'unused_enable = "{rng.choice(["blank", "off", "on"])}"']
        lines += ["", "[kind.k0]", f"modes = {_toml(modes)}"]
        files[f"{name}.toml"] = "\n".join(lines) + "\n"
    index = rng.randrange(len(variants))
    return ClassDevice(names[index], f"{folder if index == 0 else ''}{names[index]}.toml", files)


def _fuses_of(text):
    section = text[text.index("[set]") :].split("\n\n")[0].splitlines()[1:]
    return [int(line.split(" = ")[0]) for line in section]


def _text(draft, name, setting):
    rng = draft.rng
    links = {id(cell): len(kind.bits) for kind in draft.kinds for cell in kind.cells if kind.bits}
    every = list(range(draft.rows))
    drops = every if draft.drop_all else []
    if not drops and rng.random() < 0.15:
        drops = rng.choice([every, sorted(rng.sample(every, rng.randint(1, len(every))))])
    need = Need(
        columns=len(draft.columns),
        rows=draft.rows,
        sums=len(draft.sums),
        or_rows=draft.shared if draft.sums else [],
        links=links,
        drops=drops,
        mode_fuses=draft.mode_fuses,
        signature=draft.signature,
    )
    made = lay_out(rng, need)
    ground, power, *idle = draft.free
    out = [
        f'name = "{name}"',
        f'technology = "{rng.choice(["one-time", "erasable"])}"',
        f"pins = {len(draft.free) + len(draft.inputs) + _pins_in_use(draft)}",
        f"fuses = {made.fuses}",
        f"ground = {rng.choice([ground, [ground]])}",
        f"power = {power}",
    ]
    if idle:
        out.append(f"unconnected = {sorted(idle)}")
    if made.spare:
        spare = _ranges(rng, made.spare)
        out.append(f"spare = {_toml(spare if isinstance(spare, list) else [spare])}")
    if draft.mode_fuses:
        out += ["", "[set]"]
        out += [f"{f} = {s}" for f, s in zip(made.mode_fuses, setting, strict=True)]
    out += ["", *_links_section(rng, draft, drops)]
    out += ["", "[and]", f'columns = "{" ".join(draft.columns)}"', f"terms = {draft.rows}"]
    out += made.and_lines
    if draft.sums:
        out += ["", "[or]"]
        words = [_sum_word(rng, entry) for entry in draft.sums]
        out.append(f'columns = "{" ".join(words)}"')
        if rng.random() < 0.3:
            out.append(f"terms = {_toml(_ranges(rng, draft.shared))}")
        out += made.or_lines
    if drops:
        out += ["", "[drop]", f"dropped = {rng.randint(0, 1)}"]
        if drops != every or rng.random() < 0.3:
            out.append(f"terms = {_toml(_ranges(rng, drops))}")
        out += made.drop_lines
    if draft.register:
        out += ["", "[register]"]
        out += [f"{key} = {_toml(value)}" for key, value in draft.register.items()]
    for index, kind in enumerate(draft.kinds):
        out += ["", *_kind_section(rng, f"k{index}", kind, made.links)]
    if draft.signature:
        order = rng.choice(["most significant bit first", "least significant bit first"])
        out += ["", "[signature]", f"first_fuse = {made.signature}", f"bits = {draft.signature}"]
        out += [f'order = "{order}"', *rng.choice([[], ["ones = 0"], ["ones = 1"]])]
    if rng.random() < 0.3:
        out += ["", "[timing]", f"tpd = {rng.choice([10, 15, 12.5])}"]
        out += [line for line in ("tfb = 8", "ten = 15", "tdis = 9") if rng.random() < 0.5]
        if draft.register is not None:
            clocked = ("tco = 12", "tsu = 10.5", "th = 0", "fmax = 40", "trst = 20")
            out += [line for line in clocked if rng.random() < 0.7]
    return "\n".join(out) + "\n"


def _sum_word(rng, entry):
    cell, *gate = entry if isinstance(entry, tuple) else (entry,)
    return ".".join([str(rng.choice([cell.key, cell.source])), *gate])


def _pins_in_use(draft):
    """Pins beside the declared inputs and those that are still free."""
    cells = {cell.pin for kind in draft.kinds for cell in kind.cells if cell.pin is not None}
    others = set(draft.other_pins)
    for kind in draft.kinds:
        for table in (kind.keys, *kind.modes, *(cell.keys for cell in kind.cells)):
            if isinstance(table.get("enable"), dict):
                others.add(table["enable"]["pin"])
            for word in table.get("columns", "").split():
                others |= {int(word.removesuffix("'"))} if word != "." else set()
    return len((cells | others) - set(draft.inputs))


def _links_section(rng, draft, drops):
    blank, connected = rng.randint(0, 1), rng.randint(0, 1)
    shared = [entry[0] if isinstance(entry, tuple) else entry for entry in draft.sums]
    own = any(cell.rows for kind in draft.kinds for cell in kind.cells if cell not in shared)
    ways = ["dead"]
    # A blank row must be 0 where nothing keeps it from a sum.
    if blank == connected or not own:
        ways.append("blank")
    if len(drops) == draft.rows:
        ways += ["drop", "drop"]
    out = ["[links]", f"blank = {blank}", f"connected = {connected}"]
    out.append(f'unused_term = "{rng.choice(ways)}"')
    tables = [
        table
        for kind in draft.kinds
        for table in (*kind.modes, *(cell.keys for cell in kind.cells))
    ]
    if any(isinstance(table.get("enable"), int) for table in tables):
        out.append(f'unused_enable = "{rng.choice(["blank", "off", "on"])}"')
    if draft.controls:
        # A blank row that resets must be 0.
        ways = ["off", "blank"] if blank == connected else ["off"]
        out.append(f'unused_control = "{rng.choice(ways)}"')
    return out


def _kind_section(rng, name, kind, links):
    out = [f"[kind.{name}]", f"bits = {_toml(kind.bits)}"]
    out += [f"{key} = {_toml(value)}" for key, value in kind.keys.items()]
    if kind.bits and rng.random() < 0.3:
        out.append(f'unused = "{rng.choice(kind.modes)["set"]}"')
    out += ["modes = [", *(f"  {_toml(mode)}," for mode in kind.modes), "]", "cells = ["]
    for cell in kind.cells:
        table = {"pin": cell.pin} if cell.pin is not None else {}
        if cell.name is not None:
            table["name"] = cell.name
        table["links"] = links.get(id(cell), [])
        out.append(f"  {_toml(table | cell.keys)},")
    return [*out, "]"]


def _ranges(rng, numbers):
    """Ascending numbers as the file may say them: a list of numbers and ranges, or one range."""
    runs = []
    for number in numbers:
        if runs and runs[-1][1] == number - 1:
            runs[-1][1] = number
        else:
            runs.append([number, number])
    texts = [f"{a}..{b}" if a != b else rng.choice([a, f"{a}..{a}", str(a)]) for a, b in runs]
    if len(runs) == 1 and ".." in str(texts[0]) and rng.random() < 0.7:
        return texts[0]
    return texts


def _toml(value):
    if isinstance(value, dict):
        return "{ " + ", ".join(f"{key} = {_toml(item)}" for key, item in value.items()) + " }"
    if isinstance(value, list):
        return "[" + ", ".join(map(_toml, value)) + "]"
    return f'"{value}"' if isinstance(value, str) else str(value)
