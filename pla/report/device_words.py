"""What a device does, in sentences: its links, its rows, and what is beside its arrays."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.device.consistency import spans

if TYPE_CHECKING:
    from collections.abc import Iterator
    from fractions import Fraction

    from pla.device.model import Device

__all__ = ["on_extras", "on_links", "on_mode", "on_rows", "on_timing", "rows_text"]

_STATE = {0: "closed", 1: "open"}


def on_links(device: Device) -> Iterator[str]:
    """What the states of a link mean."""
    links = device.links
    blank, other = _STATE[links.blank], _STATE[1 - links.blank]
    joined, apart = _STATE[links.connected], _STATE[1 - links.connected]
    undone = (
        "What is programmed cannot be undone."
        if device.technology == "one-time"
        else f"Erasing makes every link {blank} again."
    )
    joins = f"{_a(joined)} link ({links.connected}) joins a line to a term"
    if device.or_array is not None:
        joins += ", and a term to a sum"
    yield f"Blank: every link is {blank} ({links.blank})."
    yield f"{joins}. {_a(apart)} link ({1 - links.connected}) keeps them apart."
    yield f"Programming makes a link {other} ({1 - links.blank}). {undone}"


def _a(state: str) -> str:
    return f"An {state}" if state == "open" else f"A {state}"


def rows_text(rows: tuple[int, ...] | list[int]) -> str:
    return f"row{'' if len(rows) == 1 else 's'} {spans(rows)}"


def on_rows(device: Device) -> Iterator[str]:
    """What rows there are, what a blank one is worth, and how one without a term is left."""
    enables = _enable_rows(device)
    if len(device.term_rows) > len(device.shared_rows) or enables:
        yield from _on_owners(device, enables)
    drop = device.drop
    if drop is not None:
        which = rows_text(drop.terms)
        has = f"{which[:1].upper()}{which[1:]} {'has' if len(drop.terms) == 1 else 'have each'}"
        if len(drop.terms) == device.terms:
            has = "Each row has"
        yield (
            f"{has} a link that drops it: {_STATE[drop.dropped]} ({drop.dropped}) cuts the row "
            "off, so that it counts as 0."
        )
    yield from _on_blank_rows(device, enables)
    yield _on_unused_row(device)
    if enables:
        yield _on_unused_enable(device, enables)


def _enable_rows(device: Device) -> list[int]:
    return sorted({row for cell in device.cells for row in cell.enable_rows})


def _on_owners(device: Device, enables: list[int]) -> Iterator[str]:
    own = sorted(set(device.term_rows).difference(device.shared_rows))
    parts = []
    if device.shared_rows:
        parts.append(f"{len(device.shared_rows)} are product terms that all sums share")
    if own:
        parts.append(f"{len(own)} are terms of the OR gates of single cells")
    if enables:
        both = set(enables) & set(own)
        also = ""
        if both:
            some = "all" if len(both) == len(enables) else f"{len(both)}"
            also = f", {some} of them {'a term' if some == '1' else 'terms'} in another mode"
        parts.append(f"{len(enables)} are output enables{also}")
    yield f"{device.terms} rows: {'; '.join(parts)}."


def _on_blank_rows(device: Device, enables: list[int]) -> Iterator[str]:
    worth = {row: device.blank_row_at(row) for row in range(device.terms)}
    own = set(device.term_rows).difference(device.shared_rows)
    dropped = [
        row
        for row in (device.drop.terms if device.drop else ())
        if device.drop is not None and device.drop.dropped == device.links.blank
    ]
    if dropped:
        if len(dropped) == device.terms:
            yield "A blank row is cut off by its drop link, and counts as 0."
        else:
            rest = "is cut off by its drop link, and counts as 0."
            if len(dropped) > 1:
                rest = "are cut off by their drop links, and count as 0."
            yield f"Blank {rows_text(dropped)} {rest}"
    bare = [row for row in worth if row not in dropped]
    if not bare:
        return
    which = "A blank row" if not dropped else "Any other blank row"
    if worth[bare[0]] == "true":
        yield f"{which} is always 1: no line is joined to it, and a product of nothing is 1."
        if any(row in device.shared_rows for row in bare):
            yield "It does no harm: its OR links are apart too, so it reaches no sum."
        if own.intersection(bare):
            yield "In the OR gate of a cell it makes the sum 1."
        if set(enables).intersection(bare):
            yield "As an output enable it keeps the pin driven."
    elif worth[bare[0]] == "dead":
        yield f"{which} is dead, always 0: {_paired(device)} joined to it."
        if any(row in device.shared_rows for row in bare):
            yield "Its OR links are joined too; a row that is 0 adds nothing to a sum."
        if own.intersection(bare):
            yield "In the OR gate of a cell it adds nothing to the sum."
        if set(enables).intersection(bare):
            yield "As an output enable it turns the pin off."
    else:
        yield f"{which} follows its lines: each is joined to it, none with its complement."


def _paired(device: Device) -> str:
    sources = {c.source for c in device.and_array.columns if c is not None}
    if len(device.paired_sources) == len(sources):
        return "every line and its complement are"
    pins = sorted(s for s in device.paired_sources if isinstance(s, int))
    names = [s for s in device.paired_sources if isinstance(s, str)]
    parts = []
    if pins:
        parts.append(f"pin{'' if len(pins) == 1 else 's'} {spans(pins)}")
    if names:
        parts.append(f"cell{'' if len(names) == 1 else 's'} {', '.join(names)}")
    return f"line and complement of {' and '.join(parts)} are"


def _on_unused_row(device: Device) -> str:
    once = device.technology == "one-time"
    later = " It can take a term later." if once else ""
    own = set(device.term_rows).difference(device.shared_rows)
    spare = ""
    if once and own and device.blank_row != "dead":
        spare = " The rows of a sum that nothing uses stay blank, and can take terms later."
    unused = device.links.unused_term
    if unused == "blank":
        return f"A row without a term is left blank.{later}"
    if unused == "drop":
        drop = device.drop
        state = drop.dropped if drop is not None else 0
        again = ""
        if once and state == device.links.blank:
            again = later
        elif once:
            again = " It can take no term later: what is programmed stays so."
        return f"A row without a term is cut off by its drop link ({state}).{again}{spare}"
    filled = "A row without a term is made dead: every line and its complement are joined to it."
    if device.links.blank_connected:
        return f"{filled} It is so when blank.{later}"
    lost = " It can take no term later: what is joined stays so." if once else ""
    return f"{filled}{lost}{spare}"


def _on_unused_enable(device: Device, enables: list[int]) -> str:
    head = "The enable row of a cell that no output uses is"
    how = device.links.unused_enable
    if how == "off":
        return f"{head} made 0: its pin is not driven (high impedance)."
    if how == "on":
        return f"{head} joined to no line, always 1: its pin is driven."
    then = {
        "true": "always 1, so its pin is driven",
        "dead": "always 0, so its pin is not driven (high impedance)",
        "live": "its pin is driven while all lines are 1",
    }
    alike: dict[str, list[int]] = {}
    for row in enables:
        alike.setdefault(then[device.blank_row_at(row)], []).append(row)
    if len(alike) == 1:
        return f"{head} left blank: {next(iter(alike))}."
    said = "; ".join(f"{rows_text(rows)} {what}" for what, rows in alike.items())
    return f"{head} left blank: {said}."


def on_mode(device: Device) -> Iterator[str]:
    """The fuses that select the device-wide mode."""
    if device.mode_fuses:
        states = ", ".join(f"fuse {fuse} is {state}" for fuse, state in device.mode_fuses)
        selects = "This fuse selects" if len(device.mode_fuses) == 1 else "These fuses select"
        yield f"{states[:1].upper()}{states[1:]}. {selects} the mode of the whole device."
        yield (
            "A fuse file in which one is different is for another mode of the family "
            f"{device.family}."
        )


def on_extras(device: Device) -> Iterator[str]:
    """The signature."""
    if device.signature is not None:
        known = device.signature
        number = "1 character" if known.length == 1 else f"{known.length} characters"
        yield (
            f"{number} of text in fuses {spans(known.fuses)}; in each the {known.order}; "
            f"{known.ones} stands for a bit that is 1."
        )
        yield f"A design without a signature leaves them blank ({device.links.blank})."


def on_timing(device: Device) -> Iterator[str]:
    """The delays that the data sheet gives."""
    times = device.timing
    if times.tpd is not None:
        yield f"From an input to an output: {_in_ns(times.tpd)}, in one pass through the array."
        further = times.tfb if times.tfb is not None else times.tpd
        if any(line for cell in device.cells for mode in cell.modes for _, line in mode.lines):
            yield f"Each further pass through a feedback line adds {_in_ns(further)}."
    if times.ten is not None:
        yield f"From an input to an output that is enabled: {_in_ns(times.ten)}."
    if times.tdis is not None:
        yield f"From an input to an output that is disabled: {_in_ns(times.tdis)}."


def _in_ns(time: Fraction) -> str:
    """A time as the data sheet writes it."""
    return f"{float(time):g} ns"
