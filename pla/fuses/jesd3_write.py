"""Writing a fuse file so that no programmer has anything to choke on.

The strictest common reading of JEDEC JESD3-C (earlier JEDEC Standard No. 3-A): CR LF, lines of 80
characters at most, value fields first, one ``L`` field a block with zero-padded addresses, capital
hexadecimal digits, printable ASCII, both sums computed. Nothing follows the transmission sum.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.fuses.jesd3_fields import transmission_sum
from pla.fuses.jesd3_model import MAX_FUSES
from pla.fuses.jesd3_text import plain_lines

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.device.model import Block
    from pla.fuses.fusemap import FuseMap

__all__ = ["PLAIN_CONDITIONS", "write_fuse_file"]

PLAIN_CONDITIONS = "01CDFHKLNUXZ"
"""Test conditions that need no consent of the device: no super voltages, no preload."""

_LINE = 80
# Lists that do not fit on one line go on in lines of a round number of states.
_LIST_LINE = 64


def write_fuse_file(
    design: str,
    notes: Sequence[str],
    pins: int,
    fuses: FuseMap,
    blocks: Sequence[Block],
    vectors: Sequence[str] = (),
    *,
    security: bool = False,
) -> bytes:
    """The bytes of a fuse file.

    Args:
        design: Design specification; brought into printable ASCII.
        notes: One ``N`` field each; likewise.
        pins: QP, the positions of a vector.
        fuses: State of every fuse.
        blocks: What stands together in one ``L`` field. Fuses in no block are left to the
            default, ``F0``.
        vectors: Test conditions, one character for each of `pins`; numbered from 1 as they come.
        security: Whether the security fuse shall be programmed (``G1``). The part can then no
            longer be read back.

    Raises:
        ValueError: If the parts contradict each other: a block past the last fuse, two blocks with
            a fuse in common, an open fuse in no block, a vector of another length or with a
            condition outside `PLAIN_CONDITIONS`.
    """
    if not 1 <= len(fuses) <= MAX_FUSES:
        raise ValueError(f"{len(fuses)} fuses; 1 to {MAX_FUSES} can be written")
    if pins < 1:
        raise ValueError(f"{pins} pins")
    _check_blocks(fuses, blocks)
    _check_vectors(vectors, pins)
    lines = [*_text("\x02", design), *(line for note in notes for line in _text("N ", note))]
    lines += [f"QP{pins}*", f"QF{len(fuses)}*"]
    if vectors:
        lines.append(f"QV{len(vectors)}*")
    lines += [f"G{int(security)}*", "F0*"]
    if vectors:
        lines.append("X0*")
    width = len(str(len(fuses) - 1))
    for block in blocks:
        lines += _list(f"L{block.first:0{width}d}", fuses.text(block.first, block.size))
    lines.append(f"C{fuses.checksum:04X}*")
    width = max(4, len(str(len(vectors))))
    for number, vector in enumerate(vectors, 1):
        lines += _list(f"V{number:0{width}d}", vector)
    body = "".join(f"{line}\r\n" for line in lines).encode("ascii") + b"\x03"
    return body + b"%04X" % transmission_sum(body)


def _text(begin: str, text: str) -> Iterator[str]:
    """A field of free text; further lines are indented, so that none looks like a field."""
    room = _LINE - len("*") - max(len(begin), 2)
    first, *rest = plain_lines(text, room) or [""]
    lines = [begin + first, *("  " + line for line in rest)]
    lines[-1] = lines[-1].rstrip(" ") + "*"
    yield from lines


def _list(begin: str, text: str) -> Iterator[str]:
    if len(begin) + len(text) + 2 <= _LINE:
        yield f"{begin} {text}*"
        return
    yield begin
    parts = [text[i : i + _LIST_LINE] for i in range(0, len(text), _LIST_LINE)]
    parts[-1] += "*"
    yield from parts


def _check_blocks(fuses: FuseMap, blocks: Sequence[Block]) -> None:
    listed = bytearray(len(fuses))
    for block in blocks:
        end = block.first + block.size
        if block.size < 1 or not 0 <= block.first < end <= len(fuses):
            raise ValueError(
                f"block {block.what!r} of {block.size} fuses from {block.first}, of {len(fuses)}"
            )
        if 1 in listed[block.first : end]:
            raise ValueError(f"block {block.what!r} from {block.first} overlaps another block")
        listed[block.first : end] = b"\1" * block.size
    stray = next((f for f, at in enumerate(listed) if not at and fuses[f]), None)
    if stray is not None:
        raise ValueError(f"fuse {stray} is open and stands in no block")


def _check_vectors(vectors: Sequence[str], pins: int) -> None:
    for number, vector in enumerate(vectors, 1):
        if len(vector) != pins:
            raise ValueError(f"vector {number} has {len(vector)} test conditions for {pins} pins")
        wrong = vector.strip(PLAIN_CONDITIONS)
        if wrong:
            raise ValueError(f"vector {number} has the test condition {wrong[0]!r}")
