"""Reading the head of ``[[state_table]]``: names, number and codes of the states."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from pla.behaviour.clocking import REGISTER_KEYS, check_clock
from pla.behaviour.declaring import check_name
from pla.behaviour.encode import codes_of, width_of
from pla.behaviour.signals import Signal
from pla.logic.cubes import MAX_OUTPUTS
from pla.wording import did_you_mean, kind_of, listed

if TYPE_CHECKING:
    from pla.behaviour.model import CodeStyle
    from pla.tomlfile import Section

__all__ = ["MachineHead", "declare_states"]

_KEYS = (
    *("of", "clock", "states", "start", "codes", "unused", "rows"),
    *("register", "reset", "reset_when", "never_too"),
)
_MEANT = {
    "preset": "a state table has a reset only, which leads to the state at power-up",
    "preset_when": "a state table has a reset only, which leads to the state at power-up",
    "file": 'a state table stands in the design file: rows = """…"""',
    "state": "did you mean 'states'?",
}
_STYLES: tuple[CodeStyle, ...] = ("free", "counting", "gray", "one-hot")
_CODES = 'a table of codes, { shut = "00", open = "01" }'
_NO_STATES = ("x", "state", "then")


@dataclass(frozen=True, slots=True)
class MachineHead:
    """A state table without its rows.

    Attributes:
        section: Where it stands.
        name: Of the state as a whole.
        states: Names in order.
        start: Index of the state at power-up.
        style: How the codes are asked for.
        codes: For each state, highest bit first; ``None`` if they are free.
        width: How many bits hold the state.
        unused_start: In codes that no state has, everything is as in the state at power-up.
        whole: Nothing is wrong with it. Otherwise there is only something to check: the states may
            be missing (then there are none), the codes, or what holds the state.
    """

    section: Section
    name: str
    states: tuple[str, ...]
    start: int
    style: CodeStyle
    codes: tuple[str, ...] | None
    width: int
    unused_start: bool
    whole: bool


def declare_states(
    top: Section,
    outputs: list[Signal],
    inner: list[Signal],
    broken: set[str],
    taken: dict[str, Signal],
) -> tuple[list[MachineHead], list[Signal], list[Signal]]:
    """The heads of all state tables, and outputs and inner signals with their states among them.

    A state that is declared as an output becomes registered; any other becomes an inner signal.
    What is wrong goes to the section's diagnostics.
    """
    heads = []
    outputs, inner = list(outputs), list(inner)
    seen: dict[str, Section] = {}
    for section in top.sections("state_table"):
        head = _read_head(section)
        heads.append(replace(head, whole=False))
        name = section.data.get("of")
        if not isinstance(name, str):
            continue
        if name in seen:
            heads[-1] = replace(head, states=(), whole=False)  # the rows are most likely the same
            section.error(
                "NAME-TWICE",
                f"two state tables are of {name!r}",
                section.at("of"),
                f"the other is at {seen[name].where}",
            )
            continue
        seen[name] = section
        earlier = taken.get(name)
        if earlier is not None and earlier.role != "output":
            section.error(
                "NAME-TWICE",
                f"{name!r} is declared as {earlier.called} and by a state table",
                section.at("of"),
                f"the {earlier.called.partition(' ')[2]} is declared at {earlier.location}; a "
                "state table declares its state itself, unless that is an output",
            )
        elif earlier is not None:
            outputs[outputs.index(earlier)] = taken[name] = replace(earlier, registered=True)
            if _fits(head, earlier):
                heads[-1] = head
        elif head.whole:
            heads[-1] = head
            first = sum(s.size for s in (*outputs, *inner))
            taken[name] = signal = _state_of(head, first)
            inner.append(signal)
            if first <= MAX_OUTPUTS < first + signal.size:
                section.error(
                    "TOO-MANY-OUTPUTS",
                    f"with the state {name} there are {first + signal.size} output and inner "
                    f"bits, at most {MAX_OUTPUTS} are possible",
                    section.at("of"),
                )
        else:
            broken.add(name)
    return heads, outputs, inner


def _state_of(head: MachineHead, first: int) -> Signal:
    return Signal(
        name=head.name,
        role="inner",
        first=first,
        high=head.width - 1,
        low=0,
        is_bus=head.width > 1,
        active_low=False,
        impossible=None,
        location=head.section.at("of"),
        registered=True,
    )


def _fits(head: MachineHead, output: Signal) -> bool:
    """Whether an output can hold the state of a head that is whole; report what is against it."""
    section = head.section
    path = ("outputs", output.name)
    table = section.file.data["outputs"][output.name]
    keys = [key for key in REGISTER_KEYS if isinstance(table, dict) and key in table]
    for key in keys:
        section.error(
            "STATE-REGISTER",
            f"{key!r} in [outputs.{output.name}]: a state table says how {output.name} is clocked",
            section.file.key_at((*path, key)),
            f"leave it out here; the state table is at {section.where}",
        )
    if head.whole and output.size != head.width:
        section.error(
            "STATE-WIDTH",
            f"the states of {head.name!r} take {_bits(head.width)} with these codes, but the "
            f"output has {_bits(output.size)}",
            section.at("of"),
            f"declare {head.name} with {_bits(head.width)}; it stands at {output.location}",
        )
    return head.whole and not keys and output.size == head.width


def _read_head(section: Section) -> MachineHead:
    diagnostics = section.diagnostics
    before = len(diagnostics.errors)
    meant = section.unknown_keys(_KEYS, _MEANT)
    name = section.text("of", required="of" not in meant)
    if name is not None:
        check_name(section, name, "inner", section.at("of"))
    section.raw("rows", required="rows" not in meant)
    check_clock(section, meant)
    section.flag("never_too")
    if section.data.get("never_too") is not None and "reset" not in section:
        section.error(
            "CONTROL-MISSING",
            "'never_too' without 'reset': there is no reset that [never] could hold for",
            section.key_at("never_too"),
            "leave it out",
        )
    states = None if "states" in meant and "states" not in section else _read_states(section)
    start = None if "start" in meant and "start" not in section else _read_start(section, states)
    found = _read_codes(section, states)
    unused = section.choice("unused", ("start", "x"))
    if found is not None and states is not None:
        _, codes, width = found
        left = (1 << width) - len(states)
        if left and "unused" not in section and "unused" not in meant:
            many = "1 code" if left == 1 else f"{left} codes"
            belong = "belongs" if left == 1 else "belong"
            section.error(
                "UNUSED-CODES",
                f"{many} of {_bits(width)} {belong} to no state, and nothing says what happens "
                "there",
                section.key_at("codes") if "codes" in section else section.key_at("states"),
                'add unused = "start" (on to the state at power-up) or unused = "x" (whatever '
                "takes fewest terms, a standstill included)",
            )
    style, codes, width = found or ("free", None, 0)
    return MachineHead(
        section=section,
        name=name or "",
        states=states or (),
        start=start or 0,
        style=style,
        codes=codes,
        width=width,
        unused_start=unused == "start",
        whole=len(diagnostics.errors) == before,
    )


def _read_states(section: Section) -> tuple[str, ...] | None:
    names = section.texts("states", required=True)
    if names is None:
        return None
    good = True
    for index, name in enumerate(names):
        at = section.at("states", index)
        if name in _NO_STATES:
            good = False
            section.error(
                "NAME-RESERVED", f"{name!r} has a meaning of its own and cannot name a state", at
            )
        elif not check_name(section, name, "state", at):
            good = False
        elif name in names[:index]:
            good = False
            section.error("NAME-TWICE", f"the state {name!r} stands twice", at)
    if len(names) < 2:
        good = False
        section.error(
            "STATES-FEW",
            f"'states' names {'1 state' if names else 'no state'}, expected at least two",
            section.at("states"),
        )
    return tuple(names) if good else None


def _read_start(section: Section, states: tuple[str, ...] | None) -> int | None:
    if section.raw("start", required=True, hint='add start = "…", the state at power-up') is None:
        return None
    name = section.text("start")
    if name is None or states is None:
        return None
    if name not in states:
        section.error(
            "STATE-UNKNOWN",
            f"there is no state {name!r}",
            section.at("start"),
            did_you_mean(name, states),
        )
        return None
    return states.index(name)


def _read_codes(
    section: Section, states: tuple[str, ...] | None
) -> tuple[CodeStyle, tuple[str, ...] | None, int] | None:
    value = section.raw("codes")
    if isinstance(value, dict):
        codes = _read_table(section, states)
        return None if codes is None else ("table", codes, len(codes[0]))
    style: CodeStyle = "free"
    if value is not None:
        known = [s for s in _STYLES if s == value]
        if not known:
            shown = ", ".join(f'"{s}"' for s in _STYLES)
            section.error(
                "VALUE",
                f"'codes' is {kind_of(value)}, expected {shown} or {_CODES}",
                section.at("codes"),
            )
            return None
        style = known[0]
    if states is None:
        return None
    width = width_of(style, len(states))
    if width > MAX_OUTPUTS:
        section.error(
            "STATES-MANY",
            f"{len(states)} states take {width} bits with these codes, at most {MAX_OUTPUTS} are "
            "possible",
            section.at("states"),
        )
        return None
    return style, None if style == "free" else codes_of(style, len(states)), width


def _read_table(section: Section, states: tuple[str, ...] | None) -> tuple[str, ...] | None:
    """The codes of a table in order of the states."""
    table = section.section("codes")
    if table is None or states is None:
        return None
    good = True
    codes: dict[str, str] = {}
    for name in table:
        if name not in states:
            good = False
            hint = did_you_mean(name, states)
            table.error("STATE-UNKNOWN", f"there is no state {name!r}", table.key_at(name), hint)
            continue
        text = table.raw(name)
        if not isinstance(text, str) or not text or text.strip("01") or len(text) > MAX_OUTPUTS:
            good = False
            table.wrong('a code of 0 and 1 in quotes, such as "01"', name)
            continue
        twin = next((other for other, code in codes.items() if code == text), None)
        first = next(iter(codes.values()), text)
        if twin is not None:
            good = False
            message = f"{name!r} and {twin!r} have the same code {text}"
            table.error("CODE-TWICE", message, table.at(name), "each state has a code of its own")
        elif len(text) != len(first):
            good = False
            message = (
                f"the code {text} has {_bits(len(text))}, but that of {next(iter(codes))} has "
                f"{len(first)}"
            )
            table.error("CODE-WIDTH", message, table.at(name), "all codes have as many bits")
        codes.setdefault(name, text)
    missing = [name for name in states if name not in table]
    if missing:
        good = False
        table.error(
            "CODE-MISSING", f"there is no code for {listed(missing)}", section.at("codes"), _CODES
        )
    return tuple(codes[name] for name in states) if good else None


def _bits(number: int) -> str:
    return "1 bit" if number == 1 else f"{number} bits"
