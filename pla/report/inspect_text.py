"""What a fuse file says, for people."""

from __future__ import annotations

from collections import Counter
from typing import TYPE_CHECKING

from pla.fuses.jesd3_model import IDENTIFIERS, RefusedFile

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.device.model import Device
    from pla.fuses.jesd3 import FuseDiagnostic, FuseFile
    from pla.fuses.signature import SignatureText
    from pla.fuses.sizes import CatalogueMatch, SizeMatch

__all__ = ["inspection_text"]

_VECTORS_SHOWN = 20
_STATE = {0: "closed", 1: "open"}
_SHOWN_ELSEWHERE = frozenset({"", "N", "QF", "QP", "QV", "F", "C", "G", "X", "V", "P"})


def inspection_text(
    file: FuseFile | RefusedFile,
    departures: Sequence[FuseDiagnostic],
    devices: CatalogueMatch | None,
    match: SizeMatch | None = None,
) -> str:
    """Contents, sums, devices of that size, and every departure from the standard.

    Of a refused file, what it claims to be; what is wrong with it is left to the diagnostics.
    """
    rows = [(label, text) for label, text in _rows(file, devices, match) if text]
    width = max(len(label) for label, _ in rows)
    lines = [f"{_safe(file.name)}: {_verdict(file, departures)}", ""]
    for label, text in rows:
        for number, line in enumerate(_safe(text).split("\n")):
            lines.append(f"  {'' if number else label:<{width}}  {line}".rstrip())
    if file.vectors:
        lines += ["", "Test vectors"]
        lines += [f"  {v.number:>5}  {v.conditions}" for v in file.vectors[:_VECTORS_SHOWN]]
        left_out = len(file.vectors) - _VECTORS_SHOWN
        if left_out > 0:
            lines.append(f"  and {left_out} more")
    if departures and not isinstance(file, RefusedFile):
        lines += ["", "Departures from the standard"]
        for d in departures:
            at = d.location
            place = f"{at.line}:{at.column}: " if at is not None and at.line else ""
            lines.append(f"  {place}{d.message} [{d.code}]")
            if d.hint:
                lines.append(f"    hint: {d.hint}")
    return "\n".join(lines)


def _verdict(file: FuseFile | RefusedFile, departures: Sequence[FuseDiagnostic]) -> str:
    if isinstance(file, RefusedFile):
        number = len(file.errors)
        errors = f"{number} error{'s' if number > 1 else ''}"
        return f"REFUSED, with {errors}; not to be relied on, and this is only what it claims"
    if not departures:
        return "keeps to the standard in every point"
    number = len(departures)
    return f"readable, with {number} departure{'s' if number > 1 else ''} from the standard"


def _rows(
    file: FuseFile | RefusedFile, devices: CatalogueMatch | None, match: SizeMatch | None
) -> Iterator[tuple[str, str]]:
    yield "design", file.design
    for note in file.notes:
        yield "note", note
    yield "fuses", _fuses(file)
    if file.default is not None:
        yield "default", f"{file.default} ({_STATE[file.default]}) for fuses in no list"
    yield "pins", "not given" if file.pins is None else str(file.pins)
    yield "vectors", _vectors(file)
    yield "fuse checksum", _checksum(file)
    yield "transmission sum", _sum(file)
    if file.security is not None:
        meaning = "is programmed; the part cannot be read back" if file.security else "stays blank"
        yield "security fuse", f"{file.security}: {meaning}"
    if file.pin_order is not None:
        yield "pin sequence", " ".join(map(str, file.pin_order))
    counts = Counter(field.identifier for field in file.fields[1:])
    for identifier, number in counts.items():
        if identifier not in _SHOWN_ELSEWHERE:
            what = IDENTIFIERS.get(identifier, "unknown")
            yield f"{identifier} fields", f"{number} ({what})"
    if match is not None:
        yield "device", _match(match)
        if match.signature is not None:
            yield "signature", _signature(match.signature)
    yield "devices", _devices(file, devices)


def _fuses(file: FuseFile | RefusedFile) -> str:
    if file.fuses is not None:
        return f"{file.size}: {file.fuses.closed} closed, {file.fuses.opened} open"
    if file.size is not None:
        return f"{file.size} by QF; their states are not known"
    return "not known"


def _match(match: SizeMatch) -> str:
    name = match.device.name
    if match.matches:
        modes = " and its mode fuses" if match.device.mode_fuses else ""
        return f"{name}: QF and QP{modes} are those of the device"
    if match.differences:
        return f"{name}: NOT THE SAME SIZE: {'; '.join((*match.differences, *match.untold))}"
    if match.other_mode:
        return f"{name}: NOT IN THIS DEVICE-WIDE MODE: {'; '.join(match.other_mode)}"
    return f"{name}: nothing differs, but {'; '.join(match.untold)}"


def _signature(signature: SignatureText) -> str:
    if signature.text is None:
        return f"no text; its bytes are {signature.data.hex(' ').upper()}"
    return f'"{signature.text}"' if signature.text else "blank"


def _devices(file: FuseFile | RefusedFile, devices: CatalogueMatch | None) -> str:
    if devices is None:
        return "not known, as the number of fuses is not"
    size = f"{file.size} fuses" + ("" if file.pins is None else f" and {file.pins} pins")
    named = ", ".join(map(_family_name, devices.devices))
    if not named and devices.other_modes:
        named = "none in the catalogue is in the device-wide mode that the fuses select"
    lines = [named] if named else []
    lines += [
        f"not {_family_name(m.device)}: {'; '.join(m.other_mode)}" for m in devices.other_modes
    ]
    return "\n".join(lines) or f"none in the catalogue has {size}"


def _family_name(device: Device) -> str:
    """The name, with its family where that has other members."""
    alone = device.family in {"", device.name} and not device.mode_fuses
    return device.name if alone else f"{device.name} (family {device.family})"


def _vectors(file: FuseFile | RefusedFile) -> str:
    limit = "" if file.vector_limit is None else f", at most {file.vector_limit} by QV"
    level = "" if file.default_condition is None else f"; X is {file.default_condition}"
    return f"{len(file.vectors) or 'none'}{limit}{level}"


def _checksum(file: FuseFile | RefusedFile) -> str:
    given = "not given" if file.given_checksum is None else f"{file.given_checksum:04X} given"
    if file.fuses is None:
        return f"{given}; not computable"
    computed = file.fuses.checksum
    if file.given_checksum is None:
        return f"{given}; computed {computed:04X}"
    verdict = "equal" if file.given_checksum == computed else "NOT EQUAL"
    return f"{given}, {computed:04X} computed: {verdict}"


def _sum(file: FuseFile | RefusedFile) -> str:
    given, computed = file.given_sum, file.computed_sum
    if given is None:
        return f"not given; computed {computed:04X}"
    if given == computed:
        return f"{given:04X} given, {computed:04X} computed: equal"
    if given == 0:
        return f"0000 given, which means not computed; computed {computed:04X}"
    return f"{given:04X} given, {computed:04X} computed: NOT EQUAL"


def _safe(text: str) -> str:
    """Foreign text for a terminal: nothing in it may move the cursor or hide what follows."""
    return "".join(c if c.isprintable() or c == "\n" else f"<{ord(c):02X}>" for c in text)
