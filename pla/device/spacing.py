"""Slips in the spacing of rows, recognised by the pattern that they leave among the fuses.

One wrong digit in ``term_step`` or one forgotten column gives dozens of fuses two uses or none.
Told one by one they hide the slip, and lead to declaring a real link spare.
"""

from __future__ import annotations

from dataclasses import replace
from itertools import chain, count
from typing import TYPE_CHECKING, TypeAlias, TypeVar, cast

from pla.device.model import Column
from pla.device.words import named, said_in, spans, spare_list

if TYPE_CHECKING:
    from collections.abc import Collection, Iterator, Sequence

    from pla.device.arrays import ReadAndArray, ReadOrArray
    from pla.device.consistency import FuseClaim
    from pla.device.model import AndArray, OrArray

    _Read: TypeAlias = ReadAndArray | ReadOrArray
    _Reads: TypeAlias = tuple[_Read, ...]
    _Array: TypeAlias = AndArray | OrArray

__all__ = ["report_extra_columns", "report_missing_columns", "report_wrong_steps"]

_A = TypeVar("_A", "AndArray", "OrArray")
_SHOWN = 4


def report_wrong_steps(
    fuses: int, and_array: ReadAndArray, or_array: ReadOrArray | None, claims: Sequence[FuseClaim]
) -> bool:
    """Report a ``term_step`` that makes rows run into each other or past the last fuse.

    Where another step would give each fuse exactly one use, it is named; where a row does not fit
    into its own step, the smallest step that it needs. `claims` are those of the arrays and of
    everything else.

    Returns:
        Whether something was reported. What else clashes is then a consequence.
    """
    clash = _clash(fuses, claims)
    if clash is None:
        return False
    reads: _Reads = (and_array,) if or_array is None else (and_array, or_array)
    return _report_mendable(fuses, reads, claims, clash) or _report_too_small(reads)


def report_extra_columns(
    fuses: int, and_array: ReadAndArray, or_array: ReadOrArray | None, claims: Sequence[FuseClaim]
) -> bool:
    """Report columns of an array without which each fuse would have exactly one use.

    `claims` are those of the arrays and of everything else.

    Returns:
        Whether something was reported. What else clashes is then a consequence.
    """
    excess = sum(len(claim.fuses) for claim in claims) - fuses
    reads: _Reads = (and_array,) if or_array is None else (and_array, or_array)
    for read, group in zip(reads, ("AND", "OR"), strict=False):
        # In a single row nothing tells a column too many from another slip.
        extra, rest = divmod(excess, len(read.array.rows))
        if rest or len(read.array.rows) < 2 or not 0 < extra <= min(_SHOWN, _width(read.array) - 1):
            continue
        kept = (c.fuses[: -extra if c.group == group else None] for c in claims)
        if not _each_once(fuses, chain.from_iterable(kept)):
            continue
        read.section.error(
            "COLUMNS-EXTRA",
            f"{_width(read.array)} columns of {read.section.title} are {extra} too many: "
            f"{_clash(fuses, claims)}; with {_width(read.array) - extra} each of the {fuses} fuses "
            "has one use",
            read.section.at("columns"),
            f"perhaps {'a column' if extra == 1 else f'{extra} columns'} too many: compare them "
            "with the logic diagram",
        )
        return True
    return False


def report_missing_columns(
    fuses: int, and_array: ReadAndArray, or_array: ReadOrArray | None, claims: Sequence[FuseClaim]
) -> set[int]:
    """Report fuses without a use that stand behind the columns of an array in each of its rows.

    Nothing is said where fuses are used twice as well: then numbers are wrong, not too few.

    Returns:
        The fuses without a use that the report explains.
    """
    if _clash(fuses, claims) is not None:
        return set()
    idle = set(range(fuses)).difference(chain.from_iterable(claim.fuses for claim in claims))
    explained: set[int] = set()
    declared = any(claim.group.startswith("spare ") for claim in claims)
    alternate = or_array is not None and _alternate(and_array.array, or_array.array)
    pairs: list[tuple[_Read, _Read | None]] = [(and_array, or_array)]
    if or_array is not None:
        pairs.append((or_array, and_array))
    for read, other in pairs:
        behind = _behind(read.array, idle - explained)
        if not behind:
            continue
        explained |= behind
        number, title = _width(read.array), read.section.title
        columns = f"{number} column{'s' if number > 1 else ''} of {title}"
        verb = "does" if number == 1 else "do"
        if alternate and other is not None:
            columns += f" and {_width(other.array)} of {other.section.title}"
            verb = "do"
        step = _step(read)
        what = f"term_step = {step}" if step is not None and _in_rows(read.array) else "the array"
        each = len(behind) // len(read.array.rows)
        read.section.error(
            "FUSE-GAP",
            f"{columns} {verb} not fill {what}: behind the columns of {title} "
            f"{each} fuse{'s' if each > 1 else ''} of each row ha{'ve' if each > 1 else 's'} "
            f"no use: {spans(sorted(behind))}",
            read.section.at("columns"),
            _missing(read, and_array) + _as_spare(read, behind, also=declared),
        )
    return explained


def _missing(read: _Read, and_array: ReadAndArray) -> str:
    single = [line for _, line in and_array.single_lines()] if read is and_array else []
    if not single:
        return "perhaps a column is missing"
    pins = [
        f"{named(line.source)} has a {'complement' if line.complement else 'true'} line, but no "
        f"{Column(line.source, not line.complement)}"
        for line in single[:_SHOWN]
    ]
    return f"perhaps a column is missing: {', '.join(pins)}{', …' if len(single) > _SHOWN else ''}"


def _as_spare(read: _Read, fuses: Collection[int], *, also: bool) -> str:
    """What to do if they are spare; `also` if the file has such fuses already."""
    them = spare_list(fuses, most=2)
    return (
        "; only if the data sheet says that these fuses do nothing: "
        f"{f'add {them[1:-1]} to spare' if also else f'spare = {them}'}"
        f"{said_in(read.section.file)}"
    )


def _behind(array: _Array, idle: set[int]) -> set[int]:
    """Idle fuses that would be further columns, as many as are idle in every row."""
    found: set[int] = set()
    if len(array.rows) < 2:
        return found
    for column in count(_width(array)):
        fuses = {row + column * array.column_step for row in array.rows}
        if not fuses <= idle - found:
            break
        found |= fuses
    # Behind an array that runs column by column any idle region looks like further columns.
    return found if _in_rows(array) or found == idle else set()


def _report_mendable(
    fuses: int,
    reads: _Reads,
    claims: Sequence[FuseClaim],
    clash: str,
) -> bool:
    if sum(len(claim.fuses) for claim in claims) != fuses:
        return False
    elsewhere = [c.fuses for c in claims if c.group not in {"AND", "OR"}]
    for wrong, step in _mends(reads):
        lines, sums = _arrays(reads)
        lines = _with_step(lines, step) if reads[0] in wrong else lines
        if sums is not None and reads[-1] in wrong:
            sums = _with_step(sums, step)
        both = chain(_links(lines), () if sums is None else _links(sums))
        if not _each_once(fuses, chain(both, *elsewhere)):
            continue
        first, *others = wrong
        also = "".join(f" and of {o.section.title}{_line(o)}" for o in others)
        first.section.error(
            "TERM-STEP",
            f"term_step = {_step(first)} of {first.section.title}{also} does not fit: {clash}; "
            f"with {step} each of the {fuses} fuses has one use",
            first.section.at("term_step"),
            _needs(first, lines, sums),
        )
        return True
    return False


def _arrays(reads: _Reads) -> tuple[AndArray, OrArray | None]:
    """The AND array, and the OR array if there is one."""
    lines, *sums = (read.array for read in reads)
    return cast("AndArray", lines), cast("OrArray", sums[0]) if sums else None


def _report_too_small(reads: _Reads) -> bool:
    """Steps that cannot be right, whatever the rest of the file says."""
    lines, sums = _arrays(reads)
    steps = [_step(read) for read in reads]
    # Listed rows may go anywhere.
    alternate = None not in steps and sums is not None and _adjoin(lines, sums)
    reported = False
    for read, step in zip(reads, steps, strict=True):
        least = _width(lines) + _width(sums) if alternate and sums else _width(read.array)
        if step is None or not _along_rows(read.array) or abs(step) >= least:
            continue
        reported = True
        read.section.error(
            "TERM-STEP",
            f"term_step = {step} of {read.section.title} is smaller than a row, so that rows "
            f"overlap; expected at least {least if step > 0 else -least}",
            read.section.at("term_step"),
            _needs(read, lines, sums),
        )
    if not reported and alternate and steps[0] != steps[1]:
        reported = True
        reads[-1].section.error(
            "TERM-STEP",
            f"term_step is {steps[1]} in [or] and {steps[0]} in [and]{_line(reads[0])}, but the "
            "rows of both alternate, so that they run into each other",
            reads[-1].section.at("term_step"),
            "rows that alternate have one and the same step",
        )
    return reported


def _mends(reads: _Reads) -> Iterator[tuple[list[_Read], int]]:
    """Steps worth a try: as wide as the rows, as in the other array, or off by one."""
    both = sum(_width(read.array) for read in reads)
    steps = [_step(read) for read in reads]
    for read, step, other in zip(reads, steps, reversed(steps), strict=True):
        if step is not None:
            sign = 1 if step > 0 else -1
            near = [step - 1, step + 1, sign * _width(read.array), sign * both, other or step]
            yield from (([read], s) for s in dict.fromkeys(near) if s not in {0, step})
    if len(steps) == 2 and steps[0] is not None and steps[0] == steps[1]:
        sign = 1 if steps[0] > 0 else -1
        near = [steps[0] - 1, steps[0] + 1, sign * both]
        yield from ((list(reads), s) for s in dict.fromkeys(near) if s not in {0, steps[0]})


def _clash(fuses: int, claims: Sequence[FuseClaim]) -> str | None:
    """The first fuse in order of the claims that is used twice or does not exist, in words."""
    first: dict[int, tuple[FuseClaim, int]] = {}
    for claim in claims:
        for index, fuse in enumerate(claim.fuses):
            if not 0 <= fuse < fuses:
                return f"fuse {fuse}, {claim.words(index)}, does not exist"
            one, at = first.setdefault(fuse, (claim, index))
            if one is not claim or at != index:
                return f"fuse {fuse} would be both {one.words(at)} and {claim.words(index)}"
    return None


def _needs(read: _Read, lines: AndArray, sums: OrArray | None) -> str | None:
    if not _along_rows(read.array):
        return None
    if sums is not None and _adjoin(lines, sums):
        return (
            f"a row has {_width(lines)} AND links and {_width(sums)} OR links, so the step is at "
            f"least {_width(lines) + _width(sums)} in both arrays"
        )
    width = _width(read.array)
    return f"a row of {read.section.title} has {width} links, so its step is at least {width}"


def _each_once(fuses: int, used: Iterator[int]) -> bool:
    seen = bytearray(fuses)
    for fuse in used:
        if not 0 <= fuse < fuses or seen[fuse]:
            return False
        seen[fuse] = 1
    return 0 not in seen


def _links(array: _Array) -> Iterator[int]:
    return chain.from_iterable(array.fuses_of(term) for term in range(len(array.rows)))


def _with_step(array: _A, step: int) -> _A:
    first = array.rows[0]
    return replace(array, rows=tuple(range(first, first + len(array.rows) * step, step)))


def _step(read: _Read) -> int | None:
    """Its ``term_step``; ``None`` where the rows are listed or there is only one."""
    rows = read.array.rows
    return rows[1] - rows[0] if "term_step" in read.section and len(rows) > 1 else None


def _width(array: _Array) -> int:
    return len(array.fuses_of(0))


def _along_rows(array: _Array) -> bool:
    return abs(array.column_step) == 1 or _width(array) == 1


def _in_rows(array: _Array) -> bool:
    """Whether the links of a row stand together, with the rows one behind the other."""
    return len(array.rows) > 1 and _along_rows(array) and abs(array.rows[1] - array.rows[0]) > 1


def _adjoin(lines: AndArray, sums: OrArray) -> bool:
    """Whether rows of both must alternate: the first ones adjoin and the next go the same way.

    Looked at are the rows of the AND array that the OR array has.
    """
    rows = [lines.rows[term] for term in sums.terms if term < len(lines.rows)]
    if len(rows) < 2 or not (_along_rows(lines) and _along_rows(sums)):
        return False
    if (rows[1] > rows[0]) != (sums.rows[1] > sums.rows[0]):
        return False
    low, high = sorted((lines.fuses_of(sums.terms[0]), sums.fuses_of(0)), key=min)
    return max(low) + 1 == min(high)


def _alternate(lines: AndArray, sums: OrArray) -> bool:
    """Whether rows of both alternate, where no fuse has two uses: each stands before the next."""
    apart = abs(sums.rows[0] - lines.rows[sums.terms[0]])
    return all(_in_rows(a) and apart < abs(a.rows[1] - a.rows[0]) for a in (lines, sums))


def _line(read: _Read) -> str:
    return f" (line {read.section.at('term_step').line} of the file)"
