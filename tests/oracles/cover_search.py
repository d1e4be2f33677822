"""The smallest covers of tiny functions by exhaustive search in plain Python integers.

Nothing here imports the program or a solver. Not even primes are used: every cube that touches no
OFF-set of some output is a candidate.
"""

from __future__ import annotations

from functools import cache
from itertools import product
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from oracles.functions import Table


@cache
def cubes(inputs: int) -> tuple[tuple[int, int], ...]:
    """(set of input combinations as a bit mask, number of literals) of all 3^n cubes."""
    found = []
    for digits in product((0, 1, 2), repeat=inputs):
        points = sum(
            1 << p
            for p in range(1 << inputs)
            if all(d == 2 or p >> i & 1 == d for i, d in enumerate(digits))
        )
        found.append((points, sum(d != 2 for d in digits)))
    return tuple(found)


@cache
def raised(inputs: int) -> tuple[tuple[int, ...], ...]:
    """For each cube of `cubes` those with one literal less, by index."""
    listed = list(product((0, 1, 2), repeat=inputs))
    place = {digits: k for k, digits in enumerate(listed)}
    return tuple(
        tuple(place[(*d[:i], 2, *d[i + 1 :])] for i in range(inputs) if d[i] != 2) for d in listed
    )


def count_primes(inputs: int, function: int) -> int:
    """Primes of a completely specified function, given as the bit mask of its ON-set."""
    implicant = [points & ~function == 0 for points, _ in cubes(inputs)]
    return sum(
        held and not any(implicant[k] for k in above)
        for held, above in zip(implicant, raised(inputs), strict=True)
    )


def count_multiple_output_primes(table: Table) -> int:
    """Cubes that lose an output of which they are an implicant when any literal is raised."""
    fed = [
        sum(1 << j for j, off in enumerate(table.off) if not points & off)
        for points, _ in cubes(table.inputs)
    ]
    return sum(
        bool(mask) and all(fed[k] != mask for k in above)
        for mask, above in zip(fed, raised(table.inputs), strict=True)
    )


def polarities(outputs: int):
    return product((False, True), repeat=outputs)


def fewest_terms(table: Table) -> int:
    """Terms of a smallest cover, all outputs as they are."""
    rows, useful = _candidates(table)
    # A cube that covers no more than another is never needed.
    useful = sorted(set(useful), key=lambda m: (-m.bit_count(), m))
    kept: list[int] = []
    for mask in useful:
        if not any(mask & ~k == 0 for k in kept):
            kept.append(mask)
    by_row = {}
    for bit in _bits(rows):
        by_row[bit] = [m for m in kept if m & bit]
    bound = 0
    while not _coverable(rows, bound, by_row, {}):
        bound += 1
    return bound


def fewest_terms_free(table: Table) -> int:
    return min(fewest_terms(table.in_polarity(c)) for c in polarities(table.outputs))


def fewest_connections(table: Table, terms: int) -> int | None:
    """Literals and OR links of the cheapest cover of at most so many terms; None: no such cover.

    A term may feed any set of the outputs that it touches no OFF-set of.
    """
    n = 1 << table.inputs
    rows = sum(on << (j * n) for j, on in enumerate(table.on))
    choices: dict[int, int] = {}
    for points, literals in cubes(table.inputs):
        allowed = [j for j, off in enumerate(table.off) if not points & off]
        for chosen in product((False, True), repeat=len(allowed)):
            outputs = [j for j, c in zip(allowed, chosen, strict=True) if c]
            mask = sum((points & table.on[j]) << (j * n) for j in outputs)
            if mask:
                cost = literals + len(outputs)
                choices[mask] = min(cost, choices.get(mask, cost))
    by_row = {
        bit: sorted((cost, mask) for mask, cost in choices.items() if mask & bit)
        for bit in _bits(rows)
    }
    best: int | None = None

    def search(open_rows: int, left: int, spent: int) -> None:
        nonlocal best
        if not open_rows:
            if best is None or spent < best:
                best = spent
            return
        if not left:
            return
        bit = min(_bits(open_rows), key=lambda b: len(by_row[b]))
        for cost, mask in by_row[bit]:
            if best is not None and spent + cost >= best:
                break
            search(open_rows & ~mask, left - 1, spent + cost)

    search(rows, terms, 0)
    return best


def fewest_connections_free(table: Table, terms: int) -> int:
    """The same over all polarities of the outputs."""
    found = [fewest_connections(table.in_polarity(c), terms) for c in polarities(table.outputs)]
    return min(f for f in found if f is not None)


def _candidates(table: Table) -> tuple[int, list[int]]:
    n = 1 << table.inputs
    rows = sum(on << (j * n) for j, on in enumerate(table.on))
    useful = []
    for points, _ in cubes(table.inputs):
        mask = sum(
            (points & on) << (j * n)
            for j, (on, off) in enumerate(zip(table.on, table.off, strict=True))
            if not points & off
        )
        if mask:
            useful.append(mask)
    return rows, useful


def _coverable(open_rows: int, terms: int, by_row, failed) -> bool:
    """Whether so many candidates cover the rows; `failed` remembers what could not be done."""
    if not open_rows:
        return True
    if not terms or failed.get(open_rows, -1) >= terms:
        return False
    # Rows that share no candidate need one each.
    apart, reach = 0, 0
    for bit in _bits(open_rows):
        if not bit & reach:
            apart += 1
            for mask in by_row[bit]:
                reach |= mask
    if apart > terms:
        return False
    bit = min(_bits(open_rows), key=lambda b: len(by_row[b]))
    for mask in by_row[bit]:
        if _coverable(open_rows & ~mask, terms - 1, by_row, failed):
            return True
    failed[open_rows] = terms
    return False


def _bits(mask: int):
    while mask:
        bit = mask & -mask
        yield bit
        mask ^= bit
