"""A device in words and tables."""

from __future__ import annotations

import textwrap
from typing import TYPE_CHECKING

from tabulate import tabulate

from pla.report.device_draw import draw
from pla.report.device_outputs import on_outputs, term_table
from pla.report.device_tables import buried_table, fuse_table, pin_table
from pla.report.device_words import on_extras, on_links, on_mode, on_rows, on_timing
from pla.report.layout import drawn
from pla.report.table import Table

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

    from pla.device.model import Device

__all__ = ["catalogue_table", "draw", "explain", "fuse_table", "pin_table"]

WIDTH = 100


def explain(device: Device) -> str:
    """What the device is and does, for someone about to trust a file about it with a part."""
    own = len(device.term_rows) > len(device.shared_rows) or any(
        cell.enable_rows for cell in device.cells
    )
    parts = [
        _title(device),
        _section("Device-wide mode", on_mode(device)),
        _section("Links", on_links(device)),
        _section("Rows", on_rows(device)),
        _section("Outputs", on_outputs(device)),
        _tabled("Terms", term_table(device) if own else [], ["cell", "mode", "terms", "driven"]),
        _tabled("Pins", pin_table(device), ["pin", "role", "in the arrays"]),
        _tabled("Cells without a pin", buried_table(device), ["cell", "in the arrays"]),
        _tabled("Fuses", fuse_table(device), ["fuses", "number", "what"]),
        _section("Signature", on_extras(device)),
        _section("Timing", on_timing(device)),
    ]
    return "\n\n".join(filter(None, parts)) + "\n"


def _title(device: Device) -> str:
    head = f"{device.name}: {device.summary}" if device.summary else device.name
    kind = "programmed once" if device.technology == "one-time" else "erasable"
    family = f", family {device.family}" if device.family != device.name else ""
    return (
        f"{head}\n{kind}, {device.pins} pins, {device.fuses} fuses (0..{device.fuses - 1}){family}"
    )


def _section(title: str, sentences: Iterable[str]) -> str:
    wrapped = [
        textwrap.fill(s, WIDTH, initial_indent="  ", subsequent_indent=_hanging(s))
        for s in sentences
    ]
    return "\n".join([title, *wrapped]) if wrapped else ""


def _hanging(sentence: str) -> str:
    return " " * (4 + len(sentence) - len(sentence.lstrip()))


def _tabled(title: str, rows: Sequence[Sequence[str]], head: Sequence[str]) -> str:
    if not rows:
        return ""
    room = WIDTH - 2 - sum(2 + max(map(len, column)) for column in zip(head, *rows, strict=True))
    room += max(len(row[-1]) for row in (head, *rows))
    shown = [(*row[:-1], textwrap.fill(row[-1], max(room, 30))) for row in rows]
    table = tabulate(shown, head, tablefmt="plain", disable_numparse=True, colalign=("right",))
    return f"{title}\n" + textwrap.indent(str(table), "  ")


def catalogue_table(devices: Sequence[Device]) -> str:
    """A row for each device: the figures by which it is chosen."""
    rows = [
        (
            d.name,
            str(len(d.input_pins)),
            str(len(d.term_rows)),
            str(len(d.output_pins)),
            str(d.pins),
            str(d.fuses),
            d.technology,
            _summary(d),
        )
        for d in devices
    ]
    head = ("name", "inputs", "terms", "outputs", "pins", "fuses", "technology", "summary")
    return drawn(Table("", head, tuple(rows), aligned="lrrrrrll", wrapped=(7,)))


def _summary(device: Device) -> str:
    """The summary, with the family where it is not the device itself."""
    if device.family == device.name:
        return device.summary
    return "; ".join(filter(None, [device.summary, f"a mode or variant of {device.family}"]))
