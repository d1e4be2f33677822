"""What a device file says beside its arrays and cells: drop links, mode, signature, timing."""

from __future__ import annotations

import re
from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING, Literal, cast

from pla.device.consistency import FuseClaim
from pla.device.limits import TIMING_LATER, known_keys
from pla.device.model import Drop, Signature, Timing
from pla.device.words import read_row_numbers, read_step

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.errors import Location
    from pla.tomlfile import Section

__all__ = [
    "ReadDrop",
    "ReadModeFuses",
    "ReadSignature",
    "read_drop",
    "read_mode_fuses",
    "read_signature",
    "read_timing",
]

_TIMES = ("tpd", "tfb", "ten", "tdis")
_LONGEST = 10**9  # ns: a second
_ORDERS = ("most significant bit first", "least significant bit first")


@dataclass(frozen=True, slots=True)
class ReadDrop:
    """The drop links with the places that say what they are."""

    drop: Drop
    section: Section

    def claims(self) -> Iterator[FuseClaim]:
        yield FuseClaim(
            self.drop.fuses,
            "drop",
            lambda index: f"the link that drops row {self.drop.terms[index]}",
            lambda: self.section.at("fuses" if "fuses" in self.section else "first_fuse"),
        )


@dataclass(frozen=True, slots=True)
class ReadModeFuses:
    """The fuses that select the device-wide mode."""

    fuses: tuple[tuple[int, Literal[0, 1]], ...]
    section: Section | None

    def claims(self) -> Iterator[FuseClaim]:
        for fuse, _ in self.fuses:
            yield FuseClaim(
                (fuse,),
                f"set {fuse}",
                lambda _: "a mode fuse",
                lambda fuse=fuse: self._at(fuse),  # type: ignore[misc]
            )

    def _at(self, fuse: int) -> Location:
        assert self.section is not None  # noqa: S101 - there is a fuse, so there is a section
        return self.section.key_at(str(fuse))


@dataclass(frozen=True, slots=True)
class ReadSignature:
    """The signature with the place that says where it is."""

    signature: Signature
    section: Section

    def claims(self) -> Iterator[FuseClaim]:
        yield FuseClaim(
            self.signature.fuses,
            "signature",
            lambda index: f"bit {index} of the signature",
            lambda: self.section.at("first_fuse"),
        )


def read_drop(top: Section, count: int | None, at_count: Location | None) -> ReadDrop | None:
    """The drop links; ``None`` if there are none or something is wrong with them."""
    section = top.section("drop") if "drop" in top else None
    if section is None:
        return None
    known_keys(section, ["dropped", "first_fuse", "term_step", "fuses", "terms"], {})
    dropped = section.choice("dropped", (0, 1), required=True)
    terms = None if count is None else tuple(range(count))
    if "terms" in section:
        terms = read_row_numbers(section, "terms", count, at_count)
    fuses = _drop_fuses(section, None if terms is None else len(terms))
    if dropped is None or terms is None or fuses is None:
        return None
    return ReadDrop(Drop(terms, fuses, cast("Literal[0, 1]", dropped)), section)


def _drop_fuses(section: Section, count: int | None) -> tuple[int, ...] | None:
    if "fuses" in section:
        fuses = section.integers("fuses", low=0)
        for key in ("first_fuse", "term_step"):
            if key in section:
                message = f"[drop] has 'fuses' and {key!r}; expected either 'fuses' or 'first_fuse'"
                section.error("ROWS-TWICE", message, section.key_at(key))
                return None
        if fuses is None or count is None:
            return None
        if len(fuses) != count:
            section.error(
                "ROWS-COUNT",
                f"'fuses' of [drop] lists {len(fuses)} for {count} row{'s' if count > 1 else ''}",
                section.at("fuses"),
                'terms = "a..b" says which rows have such a link',
            )
            return None
        return tuple(fuses)
    first = section.integer("first_fuse", low=0, required=True)
    step = read_step(section, "term_step", default=1)
    if first is None or step is None or count is None:
        return None
    return tuple(range(first, first + count * step, step))


def read_mode_fuses(top: Section) -> ReadModeFuses | None:
    """The fuses of [set]; ``None`` if something in it is wrong."""
    if "set" not in top:
        return ReadModeFuses((), None)
    section = top.section("set")
    if section is None:
        return None
    found: list[tuple[int, Literal[0, 1]]] = []
    good = True
    for key in section:
        if not re.fullmatch(r"0|[1-9][0-9]{0,8}", key):
            good = False
            section.error(
                "SET-FUSE",
                f"key {key!r} in [set] is no fuse, expected the number of one",
                section.key_at(key),
                "write one fuse a line, as in 2048 = 0",
            )
            continue
        state = section.choice(key, (0, 1))
        if state is None:
            good = False
        else:
            found.append((int(key), cast("Literal[0, 1]", state)))
    return ReadModeFuses(tuple(sorted(found)), section) if good else None


def read_signature(top: Section) -> ReadSignature | None:
    """The signature; ``None`` if there is none or something is wrong with it."""
    section = top.section("signature") if "signature" in top else None
    if section is None:
        return None
    section.unknown_keys(("first_fuse", "bits", "order", "ones"))
    first = section.integer("first_fuse", low=0, required=True)
    bits = section.integer("bits", low=8, high=65_536, required=True)
    order = section.choice("order", _ORDERS, required=True)
    ones = section.choice("ones", (0, 1), default=1)
    if bits is not None and bits % 8:
        section.error(
            "SIGNATURE-BITS",
            f"'bits' of [signature] is {bits}, expected a multiple of 8: a character has 8 bits",
            section.at("bits"),
        )
        return None
    if first is None or bits is None or order is None:
        return None
    return ReadSignature(
        Signature(
            first,
            bits,
            cast("Literal['most significant bit first', 'least significant bit first']", order),
            cast("Literal[0, 1]", ones),
        ),
        section,
    )


def read_timing(top: Section) -> Timing:
    """The delays; what is wrong with them is reported."""
    section = top.section("timing") if "timing" in top else None
    if section is None:
        return Timing()
    known_keys(section, _TIMES, TIMING_LATER)
    return Timing(*(_time(section, key) for key in _TIMES))


def _time(section: Section, key: str) -> Fraction | None:
    value = section.raw(key)
    if value is None:
        return None
    number = isinstance(value, int | float) and not isinstance(value, bool)
    if not number or not 0 < value <= _LONGEST:
        section.wrong(f"a time in ns, a number above 0 and up to {_LONGEST}", key)
        return None
    return Fraction(str(value))
