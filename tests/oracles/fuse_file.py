"""A JESD3 fuse file read without the program that it checks."""

import re
from dataclasses import dataclass, field


class UnreadableError(Exception):
    """A device or fuse file that the oracle does not vouch for."""


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
