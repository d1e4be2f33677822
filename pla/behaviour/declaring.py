"""What all declarations have in common: good names, each given once, and their tables."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING, Literal

from pla.behaviour.signals import RESERVED

if TYPE_CHECKING:
    from pla.behaviour.signals import Role, Signal
    from pla.errors import Location
    from pla.tomlfile import Section

__all__ = ["check_name", "report_twice", "table_of"]

_NAME = re.compile(r"[A-Za-z_][A-Za-z0-9_]*")


def check_name(section: Section, name: str, role: Role | Literal["state"], at: Location) -> bool:
    """Whether a name is made well and free to be given; report it if not."""
    if not _NAME.fullmatch(name):
        section.error(
            "NAME-SYNTAX",
            f"{name!r} is not a name: names are made of the letters A to Z and a to z, digits and "
            "underscores, and do not start with a digit",
            at,
        )
        return False
    if name in RESERVED:
        called = {"inner": "an inner signal", "state": "a state"}.get(role, f"an {role}")
        section.error(
            "NAME-RESERVED",
            f"{name!r} is a reserved word and cannot name {called}",
            at,
            f"reserved are: {', '.join(RESERVED)}",
        )
        return False
    return True


def report_twice(section: Section, signal: Signal, earlier: Signal, at: Location) -> None:
    """Report a name that is declared a second time."""
    first, second = (
        f"what the output {s.read_from} reads" if s.read_from else s.called
        for s in (earlier, signal)
    )
    section.error(
        "NAME-TWICE",
        f"{signal.name!r} is declared as {first} and as {second}",
        at,
        f"the {earlier.called.partition(' ')[2]} is declared at {earlier.location}",
    )


def table_of(top: Section, output: Signal) -> Section | None:
    """The table of an output, if it is declared by one."""
    section = top.section("outputs")
    if section is None or not isinstance(section.raw(output.name), dict):
        return None
    return section.section(output.name)
