"""How a single row of the AND array is filled, used or not."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Container, Iterator

    from pla.device.model import Device

__all__ = ["dead_row", "live_row", "unused_enable_row", "unused_row"]


def live_row(device: Device, row: int, wanted: Container[int]) -> Iterator[tuple[int, int]]:
    """A row that is the AND of these columns (of none: 1), and that its drop link keeps."""
    connected = device.links.connected
    for column, fuse in enumerate(device.and_array.fuses_of(row)):
        # The links of a column with no line do nothing and stay blank.
        if device.and_array.columns[column] is not None:
            yield fuse, connected if column in wanted else 1 - connected
    yield from _kept(device, row)


def dead_row(device: Device, row: int) -> Iterator[tuple[int, int]]:
    """A row that is always 0, in the way in which the device makes its unused rows so.

    A row of a one-time part that is so when blank stays blank.
    """
    if device.technology == "one-time" and _dead_if_blank(device, row):
        return
    drops = device.links.unused_term == "drop" or not device.paired_sources
    if drops and _drop_link(device, row) is not None:
        yield from _dropped(device, row)
    else:
        yield from _all_lines(device, row)


def unused_enable_row(device: Device, row: int) -> Iterator[tuple[int, int]]:
    """The enable row of a cell that no output uses."""
    wanted = device.links.unused_enable
    if wanted == "on":
        yield from live_row(device, row, ())
    elif wanted == "off":
        yield from dead_row(device, row)


def unused_row(device: Device, row: int, *, summed: bool) -> Iterator[tuple[int, int]]:
    """A row that holds no term and no enable.

    Rows of a one-time part that add nothing to a sum in use stay blank whatever the device file
    says, so that they can still be programmed.

    Args:
        device: The device.
        row: The row.
        summed: It is joined for good to the OR gate of a sum in use, and so must be 0.
    """
    wanted = device.links.unused_term
    dead_if_blank = _dead_if_blank(device, row)
    if device.technology == "one-time" and (dead_if_blank or not _adds(device, row, summed)):
        return
    if wanted == "blank" and (dead_if_blank or not summed):
        return
    yield from dead_row(device, row)


def _adds(device: Device, row: int, summed: bool) -> bool:
    """Whether a blank row that is 1 is 1 in a sum."""
    return summed or (device.links.blank_connected and row in device.shared_rows)


def _dead_if_blank(device: Device, row: int) -> bool:
    drop = device.drop
    if drop is not None and drop.dropped == device.links.blank and row in drop.terms:
        return True
    return device.links.blank_connected and bool(device.paired_sources)


def _all_lines(device: Device, row: int) -> Iterator[tuple[int, int]]:
    for column, fuse in enumerate(device.and_array.fuses_of(row)):
        if device.and_array.columns[column] is not None:
            yield fuse, device.links.connected
    yield from _kept(device, row)


def _drop_link(device: Device, row: int) -> int | None:
    return None if device.drop is None else device.drop.fuse(row)


def _kept(device: Device, row: int) -> Iterator[tuple[int, int]]:
    fuse = _drop_link(device, row)
    if fuse is not None and device.drop is not None:
        yield fuse, 1 - device.drop.dropped


def _dropped(device: Device, row: int) -> Iterator[tuple[int, int]]:
    fuse = _drop_link(device, row)
    if fuse is not None and device.drop is not None:
        yield fuse, device.drop.dropped
