"""Each pin has one role: supply, input, enable, or that of its cell."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.device.consistency import PinClaim, check_pins
from pla.device.words import beside, mend_pin, said_in
from pla.wording import did_you_mean

if TYPE_CHECKING:
    from collections.abc import Collection, Iterator, Mapping, Sequence

    from pla.device.arrays import ReadAndArray
    from pla.device.cells import RawCell, ReadKind
    from pla.device.model import Source
    from pla.errors import Diagnostics
    from pla.tomlfile import Section

__all__ = ["check_names", "check_roles", "keys_of", "warn_of_single_lines"]


def keys_of(cells: Sequence[RawCell]) -> dict[Source, Source]:
    """The key of each cell by every word that names it."""
    keys: dict[Source, Source] = {}
    for cell in cells:
        for word in (cell.pin, cell.name):
            if word is not None:
                keys.setdefault(word, cell.key)
    return keys


def check_names(
    and_array: ReadAndArray | None, cells: Sequence[RawCell], diagnostics: Diagnostics
) -> None:
    """Report names that two cells have, and columns named after no cell."""
    first: dict[str, RawCell] = {}
    for cell in cells:
        if cell.name is None:
            continue
        known = first.setdefault(cell.name, cell)
        if known is not cell:
            here = cell.section.at("name")
            diagnostics.error(
                "CELL-NAME",
                f"two cells are named {cell.name!r}: this one and another one"
                f"{beside(known.section.at('name'), here)}",
                here,
            )
    if and_array is None:
        return
    for source, index in and_array.first_columns().items():
        if isinstance(source, str) and source not in first:
            diagnostics.error(
                "COLUMN-UNKNOWN",
                f"column {index} of [and] is {and_array.array.columns[index]}, but no cell is "
                f"named {source!r}",
                and_array.at_column(index),
                _mend_name(source, first),
            )


def _mend_name(name: str, cells: Collection[str]) -> str:
    """A hint for a column that is named after no cell."""
    known, as_pin = did_you_mean(name, cells), mend_pin(name)
    if as_pin is None or known.startswith("did you mean"):
        return known
    return f"{known}; {as_pin}" if cells else as_pin


def check_roles(
    top: Section,
    pins: int,
    supplies: Mapping[str, tuple[int, ...]],
    and_array: ReadAndArray,
    kinds: Sequence[ReadKind],
) -> None:
    """Report pins with two roles or none, and pins that the device does not have."""
    cells = [cell for kind in kinds for cell in kind.cells]
    outputs = {cell.pin for cell in cells}
    inputs = [claim for claim in and_array.pin_claims() if claim.pin not in outputs]
    by_mode = list(_mode_claims(kinds, outputs | {claim.pin for claim in inputs}))
    lines = {claim.pin for claim in (*inputs, *by_mode)}
    claims = [
        *_supply_claims(top, supplies),
        *inputs,
        *by_mode,
        *(
            PinClaim(cell.pin, "an output", lambda cell=cell: cell.where)  # type: ignore[misc]
            for cell in cells
            if cell.pin is not None
        ),
        *(claim for claim in _enable_claims(kinds) if claim.pin not in lines),
    ]
    check_pins(pins, claims, top.at("pins"), top.diagnostics, said_in(top.file))


def _supply_claims(top: Section, supplies: Mapping[str, tuple[int, ...]]) -> Iterator[PinClaim]:
    for key, pins in supplies.items():
        listed = isinstance(top.data.get(key), list)
        for index, pin in enumerate(pins):
            yield PinClaim(
                pin,
                key,
                lambda key=key, more=(index,) if listed else (): top.at(key, *more),  # type: ignore[misc]
            )


def _mode_claims(kinds: Sequence[ReadKind], known: set[int | None]) -> Iterator[PinClaim]:
    """Input pins that only the modes of some cell name."""
    seen = set(known)
    for mode in (mode for kind in kinds for mode in kind.modes):
        for line in mode.columns or ():
            if line is not None and isinstance(line.source, int) and line.source not in seen:
                seen.add(line.source)
                yield PinClaim(
                    line.source,
                    f'an input in mode "{mode.set}"',
                    lambda mode=mode: mode.section.at("columns"),  # type: ignore[misc]
                )


def _enable_claims(kinds: Sequence[ReadKind]) -> Iterator[PinClaim]:
    """Enable pins, each at the first place that names it."""
    seen: set[int] = set()
    for kind in kinds:
        said = [
            (mode.enable, mode.section) if mode.enable else (cell.enable, cell.enable_section)
            for cell in kind.cells
            for mode in kind.modes
            if cell.pin is not None
        ]
        for enable, section in said:
            if enable is not None and enable.pin is not None and enable.pin not in seen:
                seen.add(enable.pin)
                yield PinClaim(
                    enable.pin,
                    "an enable pin",
                    lambda section=section: section.at("enable", "pin"),  # type: ignore[misc]
                )


def warn_of_single_lines(
    and_array: ReadAndArray, cells: Sequence[RawCell], diagnostics: Diagnostics
) -> None:
    """Warn of input pins with a line in one sense only.

    A cell may well feed back one sense only; a pin that is an input rarely has but one.
    """
    known = keys_of(cells)
    for index, line in and_array.single_lines():
        if line.source in known or isinstance(line.source, str):
            continue
        has, lacks, level = (
            ("complement", "true", "low") if line.complement else ("true", "complement", "high")
        )
        diagnostics.warning(
            "LINE-SINGLE",
            f"pin {line.source} has a {has} line but no {lacks} line: "
            f"a term can ask only for the pin {level}",
            and_array.at_column(index),
        )
