"""The head of a device file: what it is, its supplies, its spare fuses, the senses of its links."""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal, cast

from pla.device.consistency import FuseClaim
from pla.device.limits import known_keys
from pla.device.model import Links
from pla.device.words import beside

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.device.layers import LayeredFile
    from pla.errors import Location
    from pla.tomlfile import Section

__all__ = [
    "MAX_FUSES",
    "MAX_PINS",
    "Header",
    "read_header",
    "read_links",
    "read_spare",
    "refuse_design",
    "spare_claims",
    "table",
]

MAX_FUSES = 1_000_000
MAX_PINS = 1_000
_NAME = re.compile(r"[A-Za-z0-9](?:[A-Za-z0-9._-]*[A-Za-z0-9])?")

Technology = Literal["one-time", "erasable"]


@dataclass(frozen=True, slots=True)
class Header:
    """What stands above the tables; ``None`` for what is wrong or missing.

    Attributes:
        supplies: For ``ground``, ``power`` and ``unconnected`` their pins.
    """

    name: str | None
    summary: str
    technology: Technology | None
    family: str | None
    pins: int | None
    fuses: int | None
    supplies: dict[str, tuple[int, ...] | None]

    @property
    def complete(self) -> bool:
        parts = (self.name, self.technology, self.family, self.pins, self.fuses)
        return None not in (*parts, *self.supplies.values())


def refuse_design(top: Section) -> None:
    """Stop at a design file: each of its tables would be an error of its own."""
    signals = [key for key in ("inputs", "outputs") if key in top]
    if signals and not any(key in top for key in ("fuses", "links", "and", "or", "kind")):
        top.error(
            "DESIGN-FILE",
            f"this is a design file, with [{signals[0]}]; a device file was expected",
            top.key_at(signals[0]),
            "a device is a name that 'fuseplan device list' shows, or a file with [links], [and] "
            "and [kind.NAME]; a design is checked with 'fuseplan check'",
        )
        top.diagnostics.stop_on_error()


def read_header(top: Section, file: LayeredFile) -> Header:
    """The keys above the tables; what is wrong with them is reported."""
    name = _read_name(top, file)
    summary = top.text("summary", default="")
    technology = top.choice("technology", ("one-time", "erasable"), required=True)
    pins = top.integer("pins", low=1, high=MAX_PINS, required=True)
    fuses = top.integer("fuses", low=1, high=MAX_FUSES, required=True)
    supplies = {key: _read_supply(top, key) for key in ("ground", "power")}
    unconnected = top.integers("unconnected", low=1) if "unconnected" in top else []
    supplies["unconnected"] = None if unconnected is None else tuple(unconnected)
    return Header(
        name,
        summary,
        cast("Technology | None", technology),
        _read_family(top, file, name),
        pins,
        fuses,
        supplies,
    )


def _read_name(top: Section, file: LayeredFile) -> str | None:
    base = file.layers[1].file if len(file.layers) > 1 else None
    if "name" not in top and base is not None:
        top.error(
            "KEY-MISSING",
            f"the file has no 'name'; the one of {base}, which it extends, is not its own",
            None,
            "add name = …",
        )
        return None
    name = top.text("name", required=True)
    if name is not None and not _NAME.fullmatch(name):
        top.error(
            "DEVICE-NAME",
            f"the name {name!r} is not usable, expected letters, digits, and . _ - between them",
            top.at("name"),
        )
        return None
    return name


def _read_family(top: Section, file: LayeredFile, name: str | None) -> str | None:
    if "family" in top:
        family = top.text("family")
        if family == "":
            top.wrong("the name that the modes and variants of one part share", "family")
            return None
        return family
    return file.family if isinstance(file.family, str) else name


def _read_supply(top: Section, key: str) -> tuple[int, ...] | None:
    value = top.raw(key, required=True)
    if isinstance(value, list):
        if not value:
            top.wrong("a pin or a list of pins", key)
            return None
        pins = top.integers(key, low=1)
        return None if pins is None else tuple(pins)
    pin = top.integer(key, low=1)
    return None if pin is None else (pin,)


def read_spare(top: Section, fuses: int | None) -> list[tuple[range, Location]] | None:
    """The spare fuses, without those that the device does not have; these are reported."""
    if "spare" not in top:
        return []
    ranges = top.ranges("spare", low=0)
    if ranges is None or fuses is None:
        return None
    for numbers, at in ranges:
        if numbers[-1] >= fuses:
            shown = f"{numbers[0]}..{numbers[-1]}" if len(numbers) > 1 else str(numbers[0])
            top.error(
                "FUSE-RANGE",
                f"spare {shown} does not exist as a whole: fuses go from 0 to {fuses - 1}, "
                f"as 'fuses' says{beside(top.at('fuses'), at)}",
                at,
            )
    return [(range(r.start, min(r.stop, fuses)), at) for r, at in ranges if r.start < fuses]


def spare_claims(spare: list[tuple[range, Location]]) -> Iterator[FuseClaim]:
    for index, (fuses, at) in enumerate(spare):
        yield FuseClaim(fuses, f"spare {index}", lambda _: "spare", lambda at=at: at)  # type: ignore[misc]


def table(top: Section, key: str, holds: str) -> Section | None:
    """A table that every device file has."""
    if key not in top:
        top.error("KEY-MISSING", f"the file has no [{key}]", None, f"add [{key}]: {holds}")
        return None
    return top.section(key)


def read_links(top: Section) -> Links | None:
    """What the states of a link mean; ``None`` if something is wrong."""
    section = table(top, "links", "blank, connected, unused_term")
    if section is None:
        return None
    known_keys(section, ["blank", "connected", "unused_term", "unused_enable"], {})
    blank = section.choice("blank", (0, 1), required=True)
    connected = section.choice("connected", (0, 1), required=True)
    term = section.choice("unused_term", ("blank", "dead", "drop"), required=True)
    enable = section.choice("unused_enable", ("blank", "off", "on"))
    if blank is None or connected is None or term is None:
        return None
    if "unused_enable" in section and enable is None:
        return None
    return Links(
        cast("Literal[0, 1]", blank),
        cast("Literal[0, 1]", connected),
        cast("Literal['blank', 'dead', 'drop']", term),
        cast("Literal['blank', 'off', 'on'] | None", enable),
    )
