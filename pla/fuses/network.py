"""Which sums and pins of an array depend on which, and the rings among them."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.device.model import Line

if TYPE_CHECKING:
    from collections.abc import Container, Iterable, Iterator, Mapping

    from pla.fuses.recover import Realised, Row, Sum

__all__ = ["Needs", "in_order", "is_ring", "needs_of", "reached"]

Needs = dict[Line, tuple[Line, ...]]
"""For every sum and every pin of a cell, the others that it is made from; none complemented."""


def needs_of(realised: Realised, free: Container[int] = ()) -> Needs:
    """What each sum and each cell's pin is made from.

    Rows that are dead make nothing depend on anything, and so do enables that are off for good.

    Args:
        realised: The array.
        free: Pins whose level comes from outside alone.
    """
    needs: Needs = {}
    for sum_ in realised.sums:
        cell = sum_.cell
        rows = [realised.rows[number] for number in sum_.rows or ()]
        needs[Line("sum", cell.key)] = _inside(realised, rows)
        if cell.pin is not None:
            level = () if cell.pin in free else _needs_of_pin(realised, sum_)
            needs[Line("pin", cell.pin)] = level
    return needs


def _needs_of_pin(realised: Realised, sum_: Sum) -> tuple[Line, ...]:
    mode = sum_.mode
    if mode is None or mode.pin == "none":
        return ()
    of = (Line("sum", sum_.cell.key),)
    if mode.enable.row is None:
        return of
    row = realised.rows[mode.enable.row]
    return () if row.dead else tuple(dict.fromkeys((*of, *_inside(realised, [row]))))


def _inside(realised: Realised, rows: Iterable[Row]) -> tuple[Line, ...]:
    """Sums and cell pins among the lines of rows that are not dead."""
    pins = realised.device.cell_of_pin
    return tuple(
        dict.fromkeys(
            Line(line.kind, line.of)
            for row in rows
            if not row.dead
            for line in row.lines
            if line.kind == "sum" or line.of in pins
        )
    )


def in_order(needs: Mapping[Line, tuple[Line, ...]]) -> Iterator[tuple[Line, ...]]:
    """Groups of which each needs only itself and groups before it; a ring is one group.

    The strongly connected components of R. E. Tarjan, "Depth-first search and linear graph
    algorithms", SIAM Journal on Computing 1(2), 1972, with a stack of its own.
    """
    number: dict[Line, int] = {}
    lowest: dict[Line, int] = {}
    open_: list[Line] = []
    closed: set[Line] = set()
    for start in needs:
        if start in number:
            continue
        path = [(start, iter(needs[start]))]
        number[start] = lowest[start] = len(number)
        open_.append(start)
        while path:
            node, rest = path[-1]
            following = next(rest, None)
            if following is None:
                path.pop()
                if path:
                    before = path[-1][0]
                    lowest[before] = min(lowest[before], lowest[node])
                if lowest[node] == number[node]:
                    at = open_.index(node)
                    group = tuple(open_[at:])
                    del open_[at:]
                    closed.update(group)
                    yield group
            elif following not in number:
                number[following] = lowest[following] = len(number)
                open_.append(following)
                path.append((following, iter(needs[following])))
            elif following not in closed:
                lowest[node] = min(lowest[node], number[following])


def is_ring(group: tuple[Line, ...], needs: Mapping[Line, tuple[Line, ...]]) -> bool:
    """Whether what the group is made from includes itself."""
    return len(group) > 1 or group[0] in needs[group[0]]


def reached(needs: Mapping[Line, tuple[Line, ...]], start: Line) -> tuple[Line, ...]:
    """The sum or pin itself and all that it is made from, nearest first."""
    found = {start: None}
    queue = [start]
    for node in queue:
        for following in needs[node]:
            if following not in found:
                found[following] = None
                queue.append(following)
    return tuple(found)
