"""Reads a device file: a device as a person writes it down from a logic diagram."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING, Literal, cast

from pla.device.arrays import MAX_TERMS, read_and_array, read_or_array
from pla.device.cells import read_kinds
from pla.device.consistency import (
    FuseClaim,
    PinClaim,
    check_fuses,
    check_pins,
    check_rows,
    check_sums,
)
from pla.device.limits import DROP, FEEDBACK, LATER, OWN_TERMS, TOP_LATER, known_keys, not_yet
from pla.device.model import Device, Links
from pla.device.spacing import report_missing_columns, report_wrong_steps
from pla.errors import Diagnostic, Diagnostics, InternalError
from pla.tomlfile import Section, read_toml

if TYPE_CHECKING:
    from pla.device.arrays import ReadAndArray, ReadOrArray
    from pla.device.cells import ReadCell
    from pla.errors import Location
    from pla.tomlfile import TomlFile

__all__ = ["device_from", "read_device"]

MAX_FUSES = 1_000_000
MAX_PINS = 1_000
_KEYS = (
    "name",
    "summary",
    "technology",
    "pins",
    "fuses",
    "ground",
    "power",
    "unconnected",
    "spare",
    "links",
    "and",
    "or",
    "kind",
)
_NAME = re.compile(r"[A-Za-z0-9](?:[A-Za-z0-9._-]*[A-Za-z0-9])?")


def read_device(path: str) -> Device:
    """The device that a file describes, checked as a whole.

    Raises:
        InputError: If the file cannot be read or is wrong, with every error in one go.
    """
    return device_from(read_toml(path))


def device_from(file: TomlFile) -> Device:
    """The device that a parsed file describes, checked as a whole.

    Raises:
        InputError: If it is wrong, with every error in one go.
    """
    diagnostics = Diagnostics()
    top = Section.top(file, diagnostics)
    _refuse_design(top)
    known_keys(top, _KEYS, TOP_LATER)
    name = _read_name(top)
    summary = top.text("summary", default="")
    technology = top.choice("technology", ("one-time", "erasable"), required=True)
    pins = top.integer("pins", low=1, high=MAX_PINS, required=True)
    fuses = top.integer("fuses", low=1, high=MAX_FUSES, required=True)
    ground = top.integer("ground", low=1, required=True)
    power = top.integer("power", low=1, required=True)
    unconnected = top.integers("unconnected", low=1) if "unconnected" in top else []
    spare = _read_spare(top, fuses)
    links = _read_links(top)
    and_array = _read_and(top)
    or_array = _read_or(top)
    cells = read_kinds(top)

    if any(d.code == LATER for d in diagnostics.found):
        # What is left out would show up as gaps and idle pins, which would only mislead.
        diagnostics.stop_on_error()
    if pins and ground and power and unconnected is not None and and_array and cells:
        supplies = {"ground": ground, "power": power}
        _check_pins(top, pins, supplies, unconnected, and_array, cells)
    if or_array and cells:
        check_sums(or_array.pin_claims(), [_cell_claim(c) for c in cells], diagnostics)
    if fuses and and_array and or_array and cells and spare is not None:
        _check_fuses(top, fuses, and_array, or_array, cells, spare)
    if and_array:
        _warn_of_single_lines(and_array, diagnostics)
    if not (name and technology and pins and fuses and ground and power) or not (
        unconnected is not None and spare is not None and links and and_array and or_array and cells
    ):
        diagnostics.stop_on_error()
        fault = "a part of the device file is missing, and no error says so"
        raise InternalError([Diagnostic("INTERNAL", fault, top.where)])
    device = Device(
        name=name,
        summary=summary,
        technology=cast("Literal['one-time', 'erasable']", technology),
        pins=pins,
        fuses=fuses,
        ground=(ground,),
        power=(power,),
        unconnected=tuple(unconnected),
        links=links,
        and_array=and_array.array,
        or_array=or_array.array,
        cells=tuple(c.cell for c in cells),
        spare=tuple(r for r, _ in spare),
        location=top.where,
        warnings=tuple(sorted(diagnostics.warnings, key=_place)),
    )
    check_rows(device, top.file.at(("links", "unused_term")), diagnostics)
    diagnostics.stop_on_error()
    return device


def _refuse_design(top: Section) -> None:
    """Stop at a design file: each of its tables would be an error of its own."""
    signals = [key for key in ("inputs", "outputs") if key in top]
    if signals and not any(key in top for key in ("fuses", "links", "and", "or", "kind")):
        top.error(
            "DESIGN-FILE",
            f"this is a design file, with [{signals[0]}]; a device file was expected",
            top.key_at(signals[0]),
            "a device is a name that 'fuseplan device list' shows, or a file with [links], [and], "
            "[or] and [kind.NAME]; a design is checked with 'fuseplan check'",
        )
        top.diagnostics.stop_on_error()


def _place(diagnostic: Diagnostic) -> tuple[int, int]:
    at = diagnostic.location
    return (at.line or 0, at.column or 0) if at else (0, 0)


def _read_name(top: Section) -> str | None:
    name = top.text("name", required=True)
    if name is not None and not _NAME.fullmatch(name):
        top.error(
            "DEVICE-NAME",
            f"the name {name!r} is not usable, expected letters, digits, and . _ - between them",
            top.at("name"),
        )
        return None
    return name


def _read_spare(top: Section, fuses: int | None) -> list[tuple[range, Location]] | None:
    """The spare fuses, without those that the device does not have; these are reported."""
    if "spare" not in top:
        return []
    ranges = top.ranges("spare", low=0)
    if ranges is None or fuses is None:
        return None
    for numbers, at in ranges:
        if numbers[-1] >= fuses:
            shown = f"{numbers[0]}..{numbers[-1]}" if len(numbers) > 1 else str(numbers[0])
            top.error(
                "FUSE-RANGE",
                f"spare {shown} does not exist as a whole: fuses go from 0 to {fuses - 1}, "
                f"as 'fuses' says (line {top.at('fuses').line} of the file)",
                at,
            )
    return [(range(r.start, min(r.stop, fuses)), at) for r, at in ranges if r.start < fuses]


def _table(top: Section, key: str, holds: str) -> Section | None:
    if key not in top:
        top.error("KEY-MISSING", f"the file has no [{key}]", None, f"add [{key}]: {holds}")
        return None
    return top.section(key)


def _declared_terms(top: Section) -> int | None:
    """The number of terms, even where the AND array is wrong in another way."""
    section = top.data.get("and")
    terms = section.get("terms") if isinstance(section, dict) else None
    return terms if isinstance(terms, int) and 1 <= terms <= MAX_TERMS else None


def _read_links(top: Section) -> Links | None:
    section = _table(top, "links", "blank, connected, unused_term")
    if section is None:
        return None
    known_keys(section, ["blank", "connected", "unused_term"], {})
    blank = section.choice("blank", (0, 1), required=True)
    connected = section.choice("connected", (0, 1), required=True)
    unused: str | None
    if section.data.get("unused_term") == "drop":
        not_yet(
            section,
            DROP,
            section.at("unused_term"),
            'unused_term = "drop"',
        )
        return None
    unused = section.choice("unused_term", ("blank", "dead"), required=True)
    if blank is None or connected is None or unused is None:
        return None
    return Links(
        cast("Literal[0, 1]", blank),
        cast("Literal[0, 1]", connected),
        cast("Literal['blank', 'dead']", unused),
    )


def _read_and(top: Section) -> ReadAndArray | None:
    section = _table(top, "and", "the columns, number and fuses of the product terms")
    return None if section is None else read_and_array(section)


def _read_or(top: Section) -> ReadOrArray | None:
    if "or" not in top:
        found = "the file has no [or]"
        hint = "if the device has a shared OR array, add [or] with its columns and rows"
        not_yet(top, OWN_TERMS, top.where, found, hint)
        return None
    section = top.section("or")
    return None if section is None else read_or_array(section, _declared_terms(top))


def _check_pins(
    top: Section,
    pins: int,
    supplies: dict[str, int],
    unconnected: list[int],
    and_array: ReadAndArray,
    cells: list[ReadCell],
) -> None:
    claims = [
        *(PinClaim(pin, key, lambda key=key: top.at(key)) for key, pin in supplies.items()),  # type: ignore[misc]
        *_unconnected_claims(top, unconnected),
        *_input_claims(and_array, cells),
        *(cell.pin_claim() for cell in cells),
    ]
    _report_feedback(and_array, cells)
    check_pins(pins, claims, top.at("pins"), top.diagnostics)


def _unconnected_claims(top: Section, pins: list[int]) -> list[PinClaim]:
    return [
        PinClaim(pin, "unconnected", lambda index=index: top.at("unconnected", index))  # type: ignore[misc]
        for index, pin in enumerate(pins)
    ]


def _input_claims(and_array: ReadAndArray, cells: list[ReadCell]) -> list[PinClaim]:
    """Pins with a line; the lines of an output's pin are feedback and no role of their own."""
    outputs = {cell.cell.pin for cell in cells}
    return [claim for claim in and_array.pin_claims() if claim.pin not in outputs]


def _cell_claim(cell: ReadCell) -> PinClaim:
    return PinClaim(cast("int", cell.cell.pin), f"the cell on pin {cell.cell.pin}", cell.at_pin)


def _report_feedback(and_array: ReadAndArray, cells: list[ReadCell]) -> None:
    outputs = {cell.cell.pin for cell in cells}
    for index, line in enumerate(and_array.array.columns):
        if line is not None and line.source in outputs:
            not_yet(
                and_array.section,
                FEEDBACK,
                and_array.at_column(index),
                f"column {index} of [and] is line {line}, and pin {line.source} has an output cell",
            )


def _check_fuses(
    top: Section,
    fuses: int,
    and_array: ReadAndArray,
    or_array: ReadOrArray,
    cells: list[ReadCell],
    spare: list[tuple[range, Location]],
) -> None:
    links = len(and_array.array.rows) * (len(and_array.array.columns) + len(or_array.array.sums))
    if links > fuses:
        top.error(
            "FUSE-COUNT",
            f"{len(and_array.array.rows)} terms with {len(and_array.array.columns)} AND links and "
            f"{len(or_array.array.sums)} OR links each are {links} fuses, but the device has "
            f"{fuses}",
            top.at("fuses"),
        )
        return
    claims = [
        *and_array.claims(),
        *or_array.claims(),
        *(claim for cell in cells for claim in cell.claims()),
        *(
            FuseClaim(r, f"spare {i}", lambda _: "spare", lambda at=at: at)  # type: ignore[misc]
            for i, (r, at) in enumerate(spare)
        ),
    ]
    if report_wrong_steps(fuses, and_array, or_array, claims):
        return
    explained = report_missing_columns(fuses, and_array, or_array, claims)
    check_fuses(fuses, claims, top.at("fuses"), top.diagnostics, explained)


def _warn_of_single_lines(and_array: ReadAndArray, diagnostics: Diagnostics) -> None:
    for index, line in and_array.single_lines():
        has, lacks, level = (
            ("complement", "true", "low") if line.complement else ("true", "complement", "high")
        )
        diagnostics.warning(
            "LINE-SINGLE",
            f"pin {line.source} has a {has} line but no {lacks} line: "
            f"a term can ask only for the pin {level}",
            and_array.at_column(index),
        )
