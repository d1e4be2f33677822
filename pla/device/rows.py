"""Rows: each has its owner, each sum its rows, and an unused row stays out of the sums."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.device.words import beside, mend_pin, named, order, rows_in_words, spans

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping, Sequence

    from pla.device.arrays import ReadOrArray
    from pla.device.cells import RawCell
    from pla.device.model import Device, Source
    from pla.errors import Diagnostics, Location

__all__ = ["check_columns", "check_owners", "check_unused", "free_rows"]


def free_rows(count: int, cells: Sequence[RawCell]) -> tuple[int, ...]:
    """The rows that no cell owns, ascending."""
    owned = {row for cell in cells for row in cell.rows}
    return tuple(row for row in range(count) if row not in owned)


def check_owners(
    count: int,
    at_count: Location,
    cells: Sequence[RawCell],
    or_array: ReadOrArray | None,
    diagnostics: Diagnostics,
) -> None:
    """Report rows with two owners and rows with none."""
    claims: list[tuple[Sequence[int], str, Callable[[], Location]]] = [
        (cell.rows, str(cell), lambda cell=cell: cell.at_rows)  # type: ignore[misc]
        for cell in cells
    ]
    if or_array is not None:
        claims.append((or_array.array.terms, "[or]", or_array.at_rows))
    owner: dict[int, int] = {}
    clashes: dict[tuple[int, int], list[int]] = {}
    for index, (rows, _, _) in enumerate(claims):
        for row in rows:
            known = owner.setdefault(row, index)
            if known != index:
                clashes.setdefault((known, index), []).append(row)
    for pair, rows in clashes.items():
        (_, one, at_one), (_, other, at_other) = sorted(
            (claims[index] for index in pair), key=lambda claim: order(claim[2]())
        )
        diagnostics.error(
            "ROW-TWICE",
            f"{rows_in_words(rows)} belong{'s' if len(rows) == 1 else ''} to {one}"
            f"{beside(at_one(), at_other())} and to {other}",
            at_other(),
            "a row of the AND array has one owner",
        )
    idle = [row for row in range(count) if row not in owner]
    if idle:
        number = f"{len(idle)} of {count} rows ha{'s' if len(idle) == 1 else 've'}"
        lacks = "no cell owns it and" if len(idle) == 1 else "no cell owns them and"
        diagnostics.error(
            "ROW-IDLE",
            f"{number} no use: {spans(idle)}; {lacks} "
            + ("[or] does not list " if or_array is not None else "there is no [or] with ")
            + ("it" if len(idle) == 1 else "them"),
            at_count,
            'say whose they are: terms = "a..b", enable = … or rows = "a..b" of a cell',
        )


def check_columns(
    or_array: ReadOrArray, keys: Mapping[Source, Source], diagnostics: Diagnostics
) -> None:
    """Report OR columns without a cell, and columns given twice."""
    first: dict[Source, int] = {}
    known = dict.fromkeys(keys.values())
    for column, key in enumerate(or_array.array.sums):
        at = or_array.at_column(column)
        earlier = first.setdefault(key, column)
        if earlier != column:
            diagnostics.error(
                "COLUMN-TWICE",
                f"OR column {column} is for {named(key)}, and so is OR column {earlier}"
                f"{beside(or_array.at_column(earlier), at)}",
                at,
                "a sum has one column",
            )
        elif key not in known:
            has = "which has no cell" if isinstance(key, int) else "which does not exist"
            pins = spans(sorted(k for k in known if isinstance(k, int)))
            names = [k for k in known if isinstance(k, str)]
            there = ", ".join(filter(None, [pins, *names])) or "none"
            add = f"pin = {key}" if isinstance(key, int) else f'name = "{key}"'
            as_pin = None if isinstance(key, int) else mend_pin(key)
            diagnostics.error(
                "SUM-NO-CELL",
                f"OR column {column} is for {named(key)}, {has}; cells are on: {there}",
                at,
                f"add {{ {add}, … }} to the cells of a [kind.NAME]"
                f"{f'; {as_pin}' if as_pin else ''}",
            )


def check_unused(device: Device, at: Callable[[str], Location], diagnostics: Diagnostics) -> None:
    """Report unused rows that would not stay out of the sums, and enables that cannot be off.

    A row with a line and its complement connected is always 0, one with no line connected always
    1 (the empty product). Where rows reach sums through links, AND and OR links share their
    senses: a blank row that is always 1 has no connected OR link and reaches no sum; one that is
    always 0 may reach every sum. A row of a cell's own OR gate reaches its sum whatever its links
    are, so that there a blank row must be 0.

    Args:
        device: The device.
        at: The place of a key of [links].
        diagnostics: What is wrong goes here.
    """
    own = sorted({row for cell in device.cells for mode in cell.modes for row in mode.terms})
    enables = sorted({row for cell in device.cells for row in cell.enable_rows})
    shared = list(device.shared_rows)
    links = device.links
    _check_filling(device, own, shared, at("unused_term"), diagnostics)
    if links.unused_enable == "off" and not device.paired_sources:
        lack = [row for row in enables if device.drop is None or device.drop.fuse(row) is None]
        if lack:
            diagnostics.error(
                "ROW-NOT-DEAD",
                f"unused_enable is 'off', but enable {rows_in_words(lack)} cannot be made 0: "
                "no source has both a true and a complement line",
                at("unused_enable"),
                "a dead row has a line and its complement connected",
            )


def _check_filling(
    device: Device, own: list[int], shared: list[int], at: Location, diagnostics: Diagnostics
) -> None:
    unused = device.links.unused_term
    if unused == "drop":
        drops = () if device.drop is None else device.drop.terms
        lack = sorted(set(own + shared).difference(drops))
        if device.drop is None:
            diagnostics.error(
                "DROP-MISSING",
                "unused_term is 'drop', but the file has no [drop]",
                at,
                "add [drop]: dropped, and the fuses of the links that drop a row",
            )
        elif lack:
            diagnostics.error(
                "DROP-MISSING",
                f"unused_term is 'drop', but {rows_in_words(lack)} "
                f"{'has' if len(lack) == 1 else 'have'} no link in [drop]",
                at,
                "a row without such a link is made 'dead', or left 'blank' if it is 0 then",
            )
        return
    if unused == "dead":
        if not device.paired_sources:
            diagnostics.error(
                "ROW-NOT-DEAD",
                "unused_term is 'dead', but no pin has both a true and a complement line, "
                "so no row can be made dead",
                at,
                "a dead row has a line and its complement connected",
            )
        return
    live = [row for row in shared if device.blank_row_at(row) == "live"]
    if live:
        diagnostics.error(
            "ROW-LIVE",
            "unused_term is 'blank', but a blank row is not dead: all its lines are connected, no "
            "pin has both a true and a complement line, and its OR links are connected; every "
            "unused row would add the AND of all lines to every sum",
            at,
            "look again at the columns of [and], and at blank and connected",
        )
    _check_own_blank(device, own, at, diagnostics)


def _check_own_blank(
    device: Device, own: list[int], at: Location, diagnostics: Diagnostics
) -> None:
    worth = {row: device.blank_row_at(row) for row in own}
    true = [row for row in own if worth[row] == "true"]
    live = [row for row in own if worth[row] == "live"]
    if true:
        diagnostics.error(
            "ROW-TRUE",
            f"unused_term is 'blank', but a blank row is always 1: no line is connected to it; "
            f"{_straight(true)}, whose sum would be 1",
            at,
            'say unused_term = "dead", or look again at blank and connected',
        )
    if live:
        diagnostics.error(
            "ROW-LIVE",
            "unused_term is 'blank', but a blank row is not dead: all its lines are connected, and "
            "no pin has both a true and a complement line; "
            f"{_straight(live)}",
            at,
            "look again at the columns of [and], and at blank and connected",
        )


def _straight(rows: list[int]) -> str:
    verb = "goes" if len(rows) == 1 else "go"
    return f"{rows_in_words(rows)} {verb} straight to the OR gate of a cell"
