"""Reads a device file: a device as a person writes it down from a logic diagram."""

from __future__ import annotations

from typing import TYPE_CHECKING, cast

from pla.device.arrays import read_and_array, read_or_array
from pla.device.cells import read_kinds
from pla.device.consistency import check_fuses, each_once
from pla.device.extras import read_drop, read_mode_fuses, read_signature, read_timing
from pla.device.header import (
    read_header,
    read_links,
    read_spare,
    refuse_design,
    spare_claims,
    table,
)
from pla.device.layers import layered
from pla.device.limits import LATER, TOP_LATER, known_keys
from pla.device.model import Device
from pla.device.pins import check_names, check_roles, keys_of, warn_of_single_lines
from pla.device.resolve import resolve
from pla.device.rows import check_columns, check_owners, check_unused, free_rows
from pla.device.words import MAX_TERMS, beside, said_in
from pla.errors import Diagnostic, Diagnostics, InternalError, by_place
from pla.tomlfile import Section, read_toml

if TYPE_CHECKING:
    from pla.device.arrays import ReadAndArray, ReadOrArray
    from pla.device.cells import RawCell, ReadKind
    from pla.device.consistency import FuseClaim
    from pla.device.header import Header, Technology
    from pla.device.layers import LayeredFile
    from pla.device.model import Links
    from pla.device.resolve import ReadCell
    from pla.errors import Location
    from pla.tomlfile import TomlFile

__all__ = ["device_from", "read_device"]

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
    "extends",
    "family",
    "set",
    "links",
    "and",
    "or",
    "drop",
    "kind",
    "signature",
    "timing",
)


def read_device(path: str) -> Device:
    """The device that a file describes, checked as a whole.

    Raises:
        InputError: If the file or one that it extends cannot be read or is wrong, with every
            error in one go.
    """
    return device_from(read_toml(path))


def device_from(file: TomlFile) -> Device:
    """The device that a parsed file describes, checked as a whole.

    Raises:
        InputError: If it is wrong, with every error in one go.
    """
    return _Reader(layered(file)).device()


class _Reader:
    """Reads each part of a file, then holds the parts against each other."""

    def __init__(self, file: LayeredFile) -> None:
        self.file = file
        self.diagnostics = Diagnostics()
        self.top = Section.top(file, self.diagnostics)

    def device(self) -> Device:
        top, diagnostics = self.top, self.diagnostics
        refuse_design(top)
        known_keys(top, _KEYS, TOP_LATER)
        header = read_header(top, self.file)
        spare = read_spare(top, header.fuses)
        links = read_links(top)
        section = table(top, "and", "the columns, number and fuses of the product terms")
        and_array = None if section is None else read_and_array(section)
        kinds, all_kinds = read_kinds(top, self.count, self.at_count) or ([], False)
        cells = [cell for kind in kinds for cell in kind.cells]
        or_array = self._or_array(cells, all_kinds)
        drop = read_drop(top, self.count, self.at_count)
        mode_fuses = read_mode_fuses(top)
        if self.file.repeats_set:
            base = self.file.layers[1].file
            diagnostics.warning(
                "SET-SAME",
                f"[set] says what {base} says: a fuse file cannot tell the two modes apart",
                top.at("set"),
                "a fuse that selects the mode differs; a variant in the same mode needs no [set]",
            )
        signature = read_signature(top)
        timing = read_timing(top)
        if any(d.code == LATER for d in diagnostics.found):
            # What is left out would show up as gaps and idle pins, which would only mislead.
            diagnostics.stop_on_error()

        resolved: list[ReadCell] | None = None
        if all_kinds:
            self._check_pins(header, and_array, kinds)
            if or_array:
                check_columns(or_array, keys_of(cells), diagnostics)
        arrays = and_array is not None and ("or" not in top or or_array is not None)
        if all_kinds and and_array and arrays and self._sums_known(kinds, or_array):
            resolved = self._resolve(kinds, and_array, or_array)
            told = self._all_told(spare, mode_fuses, drop, signature)
            if header.fuses and told and self._rows_certain(kinds, resolved):
                claims = [
                    *(claim for kind in kinds for claim in kind.claims()),
                    *(drop.claims() if drop else ()),
                    *(mode_fuses.claims() if mode_fuses else ()),
                    *(signature.claims() if signature else ()),
                    *spare_claims(spare or []),
                ]
                self._check_fuses(header.fuses, and_array, or_array, claims)
        if and_array:
            warn_of_single_lines(and_array, cells, diagnostics)
        self._check_enable_filling(links, resolved or [])
        if (
            not header.complete
            or spare is None
            or links is None
            or and_array is None
            or resolved is None
            or mode_fuses is None
        ):
            diagnostics.stop_on_error()
            fault = "a part of the device file is missing, and no error says so"
            raise InternalError([Diagnostic("INTERNAL", fault, top.where)])
        supplies = cast("dict[str, tuple[int, ...]]", header.supplies)
        device = Device(
            name=cast("str", header.name),
            summary=header.summary,
            technology=cast("Technology", header.technology),
            pins=cast("int", header.pins),
            fuses=cast("int", header.fuses),
            ground=supplies["ground"],
            power=supplies["power"],
            unconnected=supplies["unconnected"],
            links=links,
            and_array=and_array.array,
            or_array=None if or_array is None else or_array.array,
            cells=tuple(c.cell for c in resolved),
            spare=tuple(r for r, _ in spare),
            location=top.where,
            warnings=tuple(sorted(diagnostics.warnings, key=by_place)),
            drop=None if drop is None else drop.drop,
            mode_fuses=mode_fuses.fuses,
            family=cast("str", header.family),
            signature=None if signature is None else signature.signature,
            timing=timing,
        )
        if not diagnostics.errors:
            check_unused(device, lambda key: self.file.at(("links", key)), diagnostics)
        diagnostics.stop_on_error()
        return device

    @property
    def count(self) -> int | None:
        """The number of rows, even where the AND array is wrong in another way."""
        section = self.top.data.get("and")
        terms = section.get("terms") if isinstance(section, dict) else None
        if not isinstance(terms, int) or isinstance(terms, bool):
            return None
        return terms if 1 <= terms <= MAX_TERMS else None

    @property
    def at_count(self) -> Location | None:
        return self.file.at(("and", "terms")) if self.count is not None else None

    def _or_array(self, cells: list[RawCell], all_kinds: bool) -> ReadOrArray | None:
        section = self.top.section("or") if "or" in self.top else None
        if section is None:
            return None
        count = self.count
        free = free_rows(count, cells) if count is not None and all_kinds else None
        return read_or_array(section, count, free, keys_of(cells), self.at_count)

    def _check_pins(
        self, header: Header, and_array: ReadAndArray | None, kinds: list[ReadKind]
    ) -> None:
        cells = [cell for kind in kinds for cell in kind.cells]
        check_names(and_array, cells, self.diagnostics)
        supplies = {key: pins for key, pins in header.supplies.items() if pins is not None}
        if header.pins and and_array and len(supplies) == len(header.supplies):
            check_roles(self.top, header.pins, supplies, and_array, kinds)

    def _sums_known(self, kinds: list[ReadKind], or_array: ReadOrArray | None) -> bool:
        """Report a file in which nothing at all says which rows a sum has."""
        cells = [cell for kind in kinds for cell in kind.cells]
        given = [cell.terms for cell in cells] + [m.terms for kind in kinds for m in kind.modes]
        if or_array or any(terms is not None for terms in given):
            return True
        more = f"; likewise {len(cells) - 1} more cell{'s' if len(cells) > 2 else ''}"
        self.top.error(
            "KEY-MISSING",
            f"the file has no [or], and {cells[0]}{beside(cells[0].where, self.top.where)} has "
            f"no terms of its own{more if len(cells) > 1 else ''}",
            None,
            "add [or] with its columns and rows if the OR gates are shared, or "
            'terms = "a..b" to each cell',
        )
        return False

    def _resolve(
        self, kinds: list[ReadKind], and_array: ReadAndArray, or_array: ReadOrArray | None
    ) -> list[ReadCell] | None:
        summed = () if or_array is None else or_array.array.sums
        found = [resolve(kind, and_array, summed) for kind in kinds]
        cells = [cell for kind in kinds for cell in kind.cells]
        if self.count is not None and self.at_count is not None:
            check_owners(self.count, self.at_count, cells, or_array, self.diagnostics)
        return [cell for kind in found for cell in kind or ()] if all(found) else None

    def _all_told(
        self,
        spare: object,
        mode_fuses: object,
        drop: object,
        signature: object,
    ) -> bool:
        """Whether all fuses outside the arrays are known, so that a gap is a gap."""
        sound = spare is not None and mode_fuses is not None
        return sound and all(
            part is not None or key not in self.top
            for key, part in (("drop", drop), ("signature", signature))
        )

    def _rows_certain(self, kinds: list[ReadKind], resolved: list[ReadCell] | None) -> bool:
        """Whether the OR array has its right rows: a cell at fault may leave it too many."""
        left_over = "or" in self.top and "terms" not in (self.top.data["or"])
        owned = any(cell.rows for kind in kinds for cell in kind.cells)
        return resolved is not None or not (left_over and owned)

    def _check_fuses(
        self,
        fuses: int,
        and_array: ReadAndArray,
        or_array: ReadOrArray | None,
        others: list[FuseClaim],
    ) -> None:
        claims = [*and_array.claims(), *(or_array.claims() if or_array else ()), *others]
        if sum(len(claim.fuses) for claim in claims) == fuses and each_once(fuses, claims):
            return
        from pla.device.spacing import (  # noqa: PLC0415 - rarely needed
            report_extra_columns,
            report_missing_columns,
            report_wrong_steps,
        )

        if report_extra_columns(fuses, and_array, or_array, claims):
            return
        if self._too_many(fuses, and_array, or_array):
            return
        if report_wrong_steps(fuses, and_array, or_array, claims):
            return
        explained = report_missing_columns(fuses, and_array, or_array, claims)
        check_fuses(
            fuses,
            claims,
            self.top.at("fuses"),
            self.diagnostics,
            explained,
            said_in(self.file),
        )

    def _too_many(self, fuses: int, and_array: ReadAndArray, or_array: ReadOrArray | None) -> bool:
        """Report arrays that alone have more links than the device has fuses."""
        terms, columns = len(and_array.array.rows), len(and_array.array.columns)
        links = terms * columns
        each = f"{terms} terms with {columns} AND links each are {links} fuses"
        if or_array is not None:
            rows, sums = len(or_array.array.rows), len(or_array.array.sums)
            links += rows * sums
            each = f"{terms} terms with {columns} AND links and {sums} OR links each are {links}"
            if rows != terms:
                each = (
                    f"{terms} rows with {columns} AND links each and {rows} with {sums} OR links "
                    f"are {links}"
                )
            each += " fuses"
        if links > fuses:
            message = f"{each}, but the device has {fuses}"
            self.top.error("FUSE-COUNT", message, self.top.at("fuses"))
        return links > fuses

    def _check_enable_filling(self, links: Links | None, cells: list[ReadCell]) -> None:
        """Report a missing ``unused_enable``, and doubt one where no cell has an enable row."""
        if links is None or not cells:
            return
        first = next((c for c in cells if c.cell.enable_rows), None)
        if first is not None and links.unused_enable is None:
            self.top.error(
                "KEY-MISSING",
                "[links] has no 'unused_enable', but "
                f"{first.cell}{beside(first.raw.where, self.file.at(('links',)))} has an enable "
                f"row, {first.cell.enable_rows[0]}",
                self.file.at(("links",)),
                "say how the enable row of a cell that no output uses is left: unused_enable = "
                '"blank", "off" or "on"',
            )
        path = ("links", "unused_enable")
        if first is None and links.unused_enable is not None and self.file.given_here(path):
            self.diagnostics.warning(
                "ENABLE-NONE",
                "'unused_enable' says how an enable row is left, but no cell has one",
                self.file.key_at(path),
            )
