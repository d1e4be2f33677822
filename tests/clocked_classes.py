"""Random device files of each structural class of small arrays with registers.

As in `device_classes` only files are made here, with no account of what their fuses do.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from device_classes import (
    ClassDevice,
    _alone,
    _any_sense,
    _Cell,
    _Draft,
    _draft,
    _hand_out_rows,
    _Kind,
    _lines,
    _own_rows,
    _ranges,
    _sense,
)

if TYPE_CHECKING:
    import random
    from collections.abc import Callable

CLOCKED_CLASSES = {
    "fixed-d": "D registers with OR gates of their own and an enable pin",
    "bypass": "register or bypass and polarity after the register by mode, reset and preset rows",
    "before": "polarity before the register",
    "toggle": "T or J-K registers",
    "sequencer": "shared OR gates, buried S-R registers, a complement line",
    "t-or-d": "T or D by mode",
}


def random_clocked_device(rng: random.Random, which: str) -> ClassDevice:
    """A valid random device of one of `CLOCKED_CLASSES`."""
    return _MAKERS[which](rng)


# --- clocks, resets, presets ---


def _clock_pin(draft: _Draft) -> int:
    """An input that has lines, or a pin that is nothing else."""
    if draft.rng.random() < 0.4:
        return draft.rng.choice(draft.inputs)
    draft.other_pins.append(draft.free.pop())
    return draft.other_pins[-1]


def _clock(draft: _Draft, pin: int | None = None) -> dict:
    clock = {"pin": _clock_pin(draft) if pin is None else pin}
    if draft.rng.random() < 0.6:
        clock["edge"] = draft.rng.choice(["rising", "falling"])
    return clock


def _control_pin(draft: _Draft) -> int:
    if draft.rng.random() < 0.4:
        clocks = [draft.register["clock"]["pin"]] if draft.register else []
        return draft.rng.choice([pin for pin in draft.inputs if pin not in clocks])
    draft.other_pins.append(draft.free.pop())
    return draft.other_pins[-1]


def _controls(draft: _Draft, names: tuple[str, ...]) -> list[tuple[str, _Cell | None]]:
    """What resets and presets: of each name the holder of its row; ``None`` for a pin."""
    held = [(name, _Cell(name=name) if draft.rng.random() < 0.75 else None) for name in names]
    draft.controls = any(holder is not None for _, holder in held)
    return held


def _holders(controls):
    return [holder for _, holder in controls if holder is not None]


def _register(draft: _Draft, kinds: list[_Kind], controls, *, spread: bool = True) -> None:
    """What the device, its clocked kinds and their cells say of their registers.

    The rows must have been handed out.
    """
    rng = draft.rng
    said = {"clock": _clock(draft), "power_up": rng.choice([0, 0, 0, 1, 1])}
    draft.register = said
    for name, holder in controls:
        when = rng.choice(["asynchronous", "asynchronous", "clock"])
        if holder is None:
            control = {"pin": _control_pin(draft)}
            if rng.random() < 0.7:
                control["active"] = rng.choice(["low", "low", "high"])
        else:
            control = {"term": holder.rows[0]}
        said[name] = control | {"when": when}
    if controls and rng.random() < 0.25:
        said["power_up"] = "unknown"
    for key in list(said) if spread and rng.random() < 0.4 else []:
        # A key of the device, or of every kind, or of every cell.
        where = rng.choice(["device", "kind", "cell"])
        if where == "kind" or (where == "cell" and key == "power_up"):
            for kind in kinds:
                kind.keys.setdefault("register", {})[key] = said[key]
            del said[key]
        elif where == "cell":
            for kind in kinds:
                for cell in kind.cells:
                    cell.keys[key] = said[key]
            del said[key]


def _other_power_up(draft: _Draft, kind: _Kind) -> None:
    """Laid over what the device says."""
    if draft.rng.random() < 0.3:
        kind.keys.setdefault("register", {})["power_up"] = draft.rng.choice([0, 1])


def _two_gates(draft: _Draft, cell: _Cell, gates: str) -> None:
    """Of the rows of a cell some for the first gate, the others for the second."""
    rng = draft.rng
    cut = rng.randint(len(cell.rows) // 3, len(cell.rows) - len(cell.rows) // 3)
    for gate, rows in zip(gates, (cell.rows[:cut], cell.rows[cut:]), strict=True):
        cell.keys[gate] = _ranges(rng, rows)
    if rng.random() < 0.2:
        cell.keys["rows"] = _ranges(rng, cell.rows)


def _fed(rng, *forms):
    return {"feedback": rng.choice(forms)}


# --- the classes ---


def _fixed_d(rng):
    registered, plain = rng.randint(2, 4), rng.randint(1, 3)
    draft = _draft(rng, rng.randint(3, 6), registered + plain + 3)
    cells = [_Cell(draft.free.pop()) for _ in range(registered)]
    others = [_Cell(draft.free.pop()) for _ in range(plain)]
    enabling = draft.free.pop()
    draft.other_pins.append(enabling)
    fed = rng.sample(others, rng.randint(0, plain))
    draft.columns = _lines(rng, [*draft.inputs, *(cell.pin for cell in (*cells, *fed))])
    controls = _controls(draft, ("reset",)) if rng.random() < 0.4 else []
    _hand_out_rows(
        draft,
        [*cells, *others, *_holders(controls)],
        [rng.randint(4, 8) for _ in cells]
        + [rng.randint(4, 8) for _ in others]
        + [1 for _ in _holders(controls)],
    )
    for cell in cells:
        _own_rows(draft, cell, enable=False)
    for cell in others:
        _own_rows(draft, cell, enable=True)
    enable = {"pin": enabling, "active": rng.choice(["low", "low", "high"])}
    mode = {"set": "", "d": "sum", "pin": rng.choice(["q'", "q'", "q"])}
    draft.kinds = [_Kind([], [mode | _fed(rng, "q", "q'")], cells, {"enable": enable})]
    for group in (fed, [cell for cell in others if cell not in fed]):
        back = {"feedback": "pin"} if group is fed else {}
        draft.kinds += [_Kind([], [{"set": "", "pin": "sum'"} | back], group)] * bool(group)
    _register(draft, draft.kinds[:1], controls)
    return _alone(draft, "random-fixed-d")


def _bypass(rng):
    count = rng.randint(3, 5)
    draft = _draft(rng, rng.randint(3, 6), count + 3)
    cells = [_Cell(draft.free.pop()) for _ in range(count)]
    draft.columns = _lines(rng, [*draft.inputs, *(cell.pin for cell in cells)])
    controls = _controls(draft, ("reset", "preset"))
    enables = [rng.random() < 0.7 for _ in cells]
    counts = [rng.choice([4, 6, 7, 8, 8, 10]) + on for on in enables]
    holders = _holders(controls)
    _hand_out_rows(draft, [*cells, *holders], [*counts, *(1 for _ in holders)])
    for cell, on in zip(cells, enables, strict=True):
        _own_rows(draft, cell, enable=on)
    first, second = rng.randint(0, 1), rng.randint(0, 1)
    back = _fed(rng, "q", "q", "q'", "pin")
    spared = {"reset": "none"} if rng.random() < 0.2 else {}
    modes = []
    for clocked in (0, 1):
        for sense in (0, 1):
            prime = "'" * sense
            mode = {"set": f"{clocked ^ first}{sense ^ second}"}
            if clocked:
                mode |= {"d": "sum", "pin": f"q{prime}", **back, **(spared if sense else {})}
            else:
                mode |= {"pin": f"sum{prime}", "feedback": "pin"}
            modes.append(mode)
    kinds = [_Kind(["register", "sense"], modes, cells)]
    if rng.random() < 0.3 and count > 3:
        kinds.append(_Kind(["register", "sense"], modes, [cells.pop()]))
    draft.kinds = kinds
    _register(draft, draft.kinds, controls)
    return _alone(draft, "random-bypass")


def _before(rng):
    registered, plain = rng.randint(2, 4), rng.randint(1, 2)
    draft = _draft(rng, rng.randint(3, 6), registered + plain + 3)
    cells = [_Cell(draft.free.pop()) for _ in range(registered)]
    others = [_Cell(draft.free.pop()) for _ in range(plain)]
    draft.columns = _lines(rng, [*draft.inputs, *(cell.pin for cell in cells)])
    controls = _controls(draft, rng.choice([("reset",), ("reset",), ("preset",)]))
    holders = _holders(controls)
    sharing = rng.random() < 0.5
    sizes = [0 if sharing else rng.randint(4, 8) for _ in (*cells, *others)]
    _hand_out_rows(
        draft,
        [*cells, *others, *holders],
        [*sizes, *(1 for _ in holders)],
        shared=rng.randint(12, 24) if sharing else 0,
    )
    if sharing:
        draft.sums = rng.sample([*cells, *others], registered + plain)
    else:
        for cell in (*cells, *others):
            _own_rows(draft, cell, enable=False)
    bits, senses = _sense(rng, "sum", "sum'")
    shown, back = rng.choice(["q", "q", "q'"]), _fed(rng, "q", "q", "q'", "pin")
    modes = [{"set": s, "d": sense, "pin": shown} | back for s, sense in senses]
    draft.kinds = [_Kind(bits, modes, cells)]
    bits, senses = _any_sense(rng)
    draft.kinds.append(_Kind(bits, [{"set": s, "pin": shows} for s, shows in senses], others))
    _register(draft, draft.kinds[:1], controls)
    return _alone(draft, "random-before")


def _toggle(rng):
    registered, plain = rng.randint(2, 4), rng.randint(1, 2)
    draft = _draft(rng, rng.randint(3, 6), registered + plain + 3)
    cells = [_Cell(draft.free.pop()) for _ in range(registered)]
    others = [_Cell(draft.free.pop()) for _ in range(plain)]
    draft.columns = _lines(rng, [*draft.inputs, *(cell.pin for cell in cells)])
    ways = rng.choice([["t"], ["jk"], ["t", "jk"]])
    kind_of = {id(cell): rng.choice(ways) for cell in cells}
    controls = _controls(draft, rng.choice([(), ("reset",), ("reset", "preset")]))
    holders = _holders(controls)
    sharing = rng.random() < 0.4
    sizes = [0 if sharing else rng.randint(6, 10) for _ in (*cells, *others)]
    _hand_out_rows(
        draft,
        [*cells, *others, *holders],
        [*sizes, *(1 for _ in holders)],
        shared=rng.randint(14, 26) if sharing else 0,
    )
    for way in ways:
        group = [cell for cell in cells if kind_of[id(cell)] == way]
        for cell in group:
            if sharing:
                draft.sums += [cell] if way == "t" else [(cell, "j"), (cell, "k")]
            elif way == "t":
                _own_rows(draft, cell, enable=False)
            else:
                _two_gates(draft, cell, "jk")
        bits, senses = _any_sense(rng)
        back = _fed(rng, "q", "q", "q'", "pin")
        inputs = {name: rng.choice(["sum", "sum", "sum", "sum'"]) for name in way}
        modes = [
            {"set": s, **inputs, "pin": shows.replace("sum", "q"), **back} for s, shows in senses
        ]
        draft.kinds += [_Kind(bits, modes, group)] * bool(group)
    clocked = list(draft.kinds)
    for cell in others:
        if sharing:
            draft.sums.append(cell)
        else:
            _own_rows(draft, cell, enable=False)
    bits, senses = _any_sense(rng)
    draft.kinds.append(_Kind(bits, [{"set": s, "pin": shows} for s, shows in senses], others))
    rng.shuffle(draft.sums)
    _register(draft, clocked, controls)
    return _alone(draft, "random-toggle")


def _sequencer(rng):
    outputs, buried = rng.randint(2, 4), rng.randint(2, 3)
    draft = _draft(rng, rng.randint(3, 6), outputs + 3)
    cells = [_Cell(draft.free.pop()) for _ in range(outputs)]
    hidden = [_Cell(name=f"{'pq'[i % 2]}{i}") for i in range(buried)]
    complement = _Cell(name="c")
    registered = rng.sample(cells, rng.randint(0, outputs - 1))
    plain = [cell for cell in cells if cell not in registered]
    draft.columns = _lines(rng, [*draft.inputs, *(cell.name for cell in hidden)], ["c'"])
    controls = _controls(draft, rng.choice([("reset",), ("preset",), ("reset", "preset")]))
    holders = _holders(controls)
    enables = [rng.random() < 0.3 for _ in cells]
    _hand_out_rows(
        draft,
        [*cells, *holders],
        [*(int(on) for on in enables), *(1 for _ in holders)],
        shared=rng.randint(16, 30),
    )
    for cell, on in zip(cells, enables, strict=True):
        if on:
            _own_rows(draft, cell, enable=True)
    mode = {"set": "", "s": "sum", "r": "sum"}
    draft.kinds = [_Kind([], [mode | _fed(rng, "q", "q", "q'")], hidden)]
    if registered:
        bits, senses = _any_sense(rng)
        modes = [mode | {"set": s, "pin": shows.replace("sum", "q")} for s, shows in senses]
        draft.kinds.append(_Kind(bits, modes, registered))
    clocked = list(draft.kinds)
    bits, senses = _any_sense(rng)
    draft.kinds.append(_Kind(bits, [{"set": s, "pin": shows} for s, shows in senses], plain))
    draft.kinds.append(_Kind([], [{"set": "", "feedback": "sum"}], [complement]))
    gates = [(cell, gate) for cell in (*hidden, *registered) for gate in "sr"]
    draft.sums = [*gates, *plain, complement]
    if rng.random() < 0.5:
        rng.shuffle(draft.sums)
    _register(draft, clocked, controls)
    if registered:
        _other_power_up(draft, clocked[1])
    return _alone(draft, "random-sequencer")


def _t_or_d(rng):
    count = rng.randint(3, 5)
    draft = _draft(rng, rng.randint(3, 6), count + 3)
    cells = [_Cell(draft.free.pop()) for _ in range(count)]
    draft.columns = _lines(rng, [*draft.inputs, *(cell.pin for cell in cells)])
    controls = _controls(draft, rng.choice([(), ("reset",), ("reset", "preset")]))
    holders = _holders(controls)
    enables = [rng.random() < 0.4 for _ in cells]
    counts = [rng.choice([4, 5, 6, 8]) + on for on in enables]
    _hand_out_rows(draft, [*cells, *holders], [*counts, *(1 for _ in holders)])
    for cell, on in zip(cells, enables, strict=True):
        _own_rows(draft, cell, enable=on)
    bypass = rng.random() < 0.7
    bits, senses = _any_sense(rng)
    back = _fed(rng, "q", "q", "q'", "pin")
    settings = rng.sample(["00", "01", "10", "11"], 3) if bypass else ["0", "1"]
    modes = []
    for setting, way in zip(settings, ["d", "t", None], strict=False):
        for s, shows in senses:
            mode = {"set": setting + s}
            if way is None:
                mode |= {"pin": shows, "feedback": "pin"}
            else:
                mode |= {way: "sum", "pin": shows.replace("sum", "q"), **back}
            modes.append(mode)
    rng.shuffle(modes)
    names = ["toggle", "bypass"][: len(settings[0])]
    draft.kinds = [_Kind([*names, *bits], modes, cells)]
    _register(draft, draft.kinds, controls)
    return _alone(draft, "random-t-or-d")


_MAKERS: dict[str, Callable] = {
    "fixed-d": _fixed_d,
    "bypass": _bypass,
    "before": _before,
    "toggle": _toggle,
    "sequencer": _sequencer,
    "t-or-d": _t_or_d,
}
