"""A shared-OR array simulated pin by pin, from the links of a fuse file alone.

Written from the description of the two file formats and nothing else: it shares no code with the
program that it checks. A level of a pin is a whole number whose bit ``k`` is the level in case
``k``, so that one run answers for many input combinations.
"""

import re
import tomllib
from dataclasses import dataclass, field


class UnreadableError(Exception):
    """A device or fuse file that the oracle does not vouch for."""


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

    @property
    def inputs(self) -> list[int]:
        return sorted({pin for row in self.lines for _, pin, _ in row})


def read_array(text: str) -> Array:
    """A device file of a shared OR array whose pins are inputs or outputs, never both."""
    data = tomllib.loads(text)
    strange = set(data) - {
        *("name", "summary", "technology", "pins", "unconnected", "fuses", "spare"),
        *("ground", "power", "links", "and", "or", "kind"),
    }
    if strange:
        raise UnreadableError(f"not a plain shared OR array: {sorted(strange)}")
    lines = []
    columns = data["and"]["columns"].split()
    for first in _rows(data["and"], data["and"]["terms"]):
        row = []
        for index, column in enumerate(columns):
            if column != ".":
                fuse = first + index * data["and"].get("column_step", 1)
                row.append((fuse, int(column.rstrip("'")), column.endswith("'")))
        lines.append(row)
    sums = {}
    for index, column in enumerate(data["or"]["columns"].split()):
        step = data["or"].get("column_step", 1)
        sums[int(column)] = [first + index * step for first in _rows(data["or"], len(lines))]
    cells = {}
    for kind in data["kind"].values():
        shows = {mode["set"]: mode["pin"] for mode in kind["modes"]}
        if not set(shows.values()) <= {"sum", "sum'"}:
            raise UnreadableError(f"a pin that shows {sorted(shows.values())}")
        for cell in kind["cells"]:
            cells[cell["pin"]] = (cell["links"], shows)
    if set(cells) != set(sums) or set(cells) & {pin for row in lines for _, pin, _ in row}:
        raise UnreadableError("cells, sums and lines are not those of a plain shared OR array")
    return Array(
        data["name"], data["pins"], data["fuses"], data["links"]["connected"], lines, sums, cells
    )


def _rows(section: dict, terms: int) -> list[int]:
    if "rows" in section:
        return section["rows"]
    return [section["first_fuse"] + term * section["term_step"] for term in range(terms)]


@dataclass(frozen=True)
class Transmission:
    """What a fuse file says: every fuse's state, and the texts of its other fields."""

    states: list[int]
    title: str
    notes: list[str] = field(default_factory=list)
    pins: int | None = None
    lists: list[tuple[int, int]] = field(default_factory=list)


def read_transmission(data: bytes) -> Transmission:
    """A fuse file; both sums must be there and be right."""
    framed = re.fullmatch(rb"\x02([^\x02\x03]*)\x03([0-9A-F]{4})", data)
    if framed is None:
        raise UnreadableError("not framed by STX, ETX and four digits")
    if sum(data[:-4]) % 65536 != int(framed[2], 16):
        raise UnreadableError(f"transmission sum {framed[2]!r} is wrong")
    fields = framed[1].decode("ascii").split("*")
    if fields.pop().strip():
        raise UnreadableError("text after the last *")
    title, *rest = fields
    rest = [text.strip("\r\n ") for text in rest]
    fuses, default = _number(rest, "QF"), _number(rest, "F")
    if fuses is None:
        raise UnreadableError("no QF")
    states = [default] * fuses
    lists = []
    for text in rest:
        if text.startswith("L"):
            address, *states_text = text[1:].split()
            listed = [int(state) for state in "".join(states_text)]
            start = int(address)
            if not listed or start + len(listed) > fuses or set(listed) - {0, 1}:
                raise UnreadableError(f"fuse list {text!r}")
            states[start : start + len(listed)] = listed
            lists.append((start, len(listed)))
    if None in states:
        raise UnreadableError(f"fuse {states.index(None)} in no list, and no default")
    total = sum(state << fuse % 8 for fuse, state in enumerate(states)) % 65536
    given = [text[1:] for text in rest if text.startswith("C")]
    if given != [f"{total:04X}"]:
        raise UnreadableError(f"fuse checksum {given}, computed {total:04X}")
    notes = [text[1:].strip() for text in rest if text.startswith("N")]
    return Transmission(states, title.strip(), notes, _number(rest, "QP"), lists)


def _number(fields: list[str], identifier: str) -> int | None:
    values = [int(f[len(identifier) :]) for f in fields if re.fullmatch(identifier + r"\d+", f)]
    if len(values) > 1:
        raise UnreadableError(f"{identifier} given {len(values)} times")
    return values[0] if values else None


def output_levels(
    array: Array, states: list[int], levels: dict[int, int], cases: int
) -> dict[int, int]:
    """The level of every output pin in each of `cases` cases, from the level of every input pin.

    A row is the AND of its connected lines (of none: 1), a sum the OR of its connected rows (of
    none: 0).
    """
    if len(states) != array.fuses:
        raise UnreadableError(f"{len(states)} fuses for a device of {array.fuses}")
    everywhere = (1 << cases) - 1
    rows = []
    for row in array.lines:
        value = everywhere
        for fuse, pin, complement in row:
            if states[fuse] == array.connected:
                value &= levels[pin] ^ everywhere if complement else levels[pin]
        rows.append(value)
    found = {}
    for pin, fuses in array.sums.items():
        total = 0
        for fuse, value in zip(fuses, rows, strict=True):
            if states[fuse] == array.connected:
                total |= value
        links, shows = array.cells[pin]
        setting = "".join(str(states[fuse]) for fuse in links)
        if setting not in shows:
            raise UnreadableError(f"the cell of pin {pin} is set to {setting!r}, which is no mode")
        found[pin] = total if shows[setting] == "sum" else total ^ everywhere
    return found


def every_case(pins: list[int]) -> dict[int, int]:
    """Levels of all combinations: in case ``k`` the first pin carries bit 0 of ``k``, and so on."""
    cases = 1 << len(pins)
    return {
        pin: sum(1 << case for case in range(cases) if case >> index & 1)
        for index, pin in enumerate(pins)
    }
