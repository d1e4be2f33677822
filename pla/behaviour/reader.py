"""Reading a design file: from TOML and CSV to a checked `Behaviour`."""

from __future__ import annotations

from pathlib import PurePath
from types import MappingProxyType
from typing import TYPE_CHECKING

from pla.behaviour.cases import read_cases
from pla.behaviour.conditions import read_logic, read_never
from pla.behaviour.declare import read_signals
from pla.behaviour.description import Claims, Description, solve_all
from pla.behaviour.minterms import read_minterms
from pla.behaviour.model import Behaviour, DontCareSource, Input, Output
from pla.behaviour.places import read_places
from pla.behaviour.unsupported import refuse_unsupported
from pla.errors import Diagnostics, by_place
from pla.logic import algebra
from pla.logic.cubes import Cover
from pla.logic.function import Function
from pla.tomlfile import Section, TomlFile, read_toml

if TYPE_CHECKING:
    from pla.behaviour.listing import Reason, Solved
    from pla.behaviour.overlaps import AddressMap
    from pla.behaviour.signals import Signals

__all__ = ["behaviour_of", "read_behaviour"]

_KEYS = (
    "name",
    "revision",
    "inputs",
    "outputs",
    "never",
    "cases",
    "minterms",
    "logic",
    "address_map",
    "place",
)
_REASONS: tuple[Reason, ...] = ("never", "others", "x", "dont_care", "elsewhere")


def read_behaviour(path: str) -> Behaviour:
    """Read and check a design file, and the CSV files that it names.

    Args:
        path: The design file; CSV files are looked for beside it.

    Raises:
        InputError: With every error of the file, each at its place. A syntax error of TOML or CSV
            stands alone.
    """
    return behaviour_of(read_toml(path))


def behaviour_of(file: TomlFile) -> Behaviour:
    """The same from a parsed file.

    Raises:
        InputError: With every error, each at its place.
    """
    diagnostics = Diagnostics()
    top = Section.top(file, diagnostics)
    if not file.data:
        top.error(
            "DESIGN-EMPTY",
            "the file declares nothing, expected a design",
            None,
            "begin with a section [inputs] with lines such as: start = 1",
        )
        diagnostics.stop_on_error()
    refused = refuse_unsupported(top, "file")
    meant = top.unknown_keys((*_KEYS, *refused))
    name = _title(top, "name", PurePath(file.file).stem)
    revision = _title(top, "revision", "")
    signals = read_signals(top, meant)
    if not all(isinstance(file.data.get(key), dict) for key in ("inputs", "outputs")):
        # Every name would be unknown: it is enough to say why.
        diagnostics.stop_on_error()
    claims = Claims(signals, diagnostics)
    never = read_never(top.section("never"), signals)
    claims.incomplete = bool(refused) or _misses_descriptions(top)
    maps: list[AddressMap] = []
    descriptions = _read_descriptions(top, signals, claims, maps)
    places = read_places(top.section("place"), signals)
    _report_undescribed(signals, claims, diagnostics)
    solved: list[Solved] = []
    if never is not None and "never" not in meant and not signals.too_many:
        solved = solve_all(_supported(descriptions, signals), never, signals, diagnostics)
        if maps:
            from pla.behaviour.overlaps import warn_of_contention  # noqa: PLC0415 - likewise

            warn_of_contention(maps, never, signals, diagnostics)
    diagnostics.stop_on_error()
    if never is None:  # pragma: no cover - there was an error
        raise AssertionError
    function = _function(solved, never, signals)
    _warn_of_idle_inputs(function, signals, diagnostics)
    return Behaviour(
        name=name,
        revision=revision,
        file=file.file,
        inputs=_inputs(signals),
        outputs=_outputs(signals, claims),
        function=function,
        never=never,
        dont_cares=_sources(solved, never, signals),
        places=MappingProxyType(places),
        warnings=tuple(sorted(diagnostics.warnings, key=by_place)),
    )


def _misses_descriptions(top: Section) -> bool:
    """Whether a section that may describe outputs cannot be told, which has its own error."""
    unknown = any(isinstance(v, dict | list) for k, v in top.data.items() if k not in _KEYS)
    tables = [top.data.get(key, {}) for key in ("minterms", "logic")]
    lists = [top.data.get(key, []) for key in ("cases", "address_map")]
    return (
        unknown
        or not all(isinstance(value, dict) for value in tables)
        or not all(isinstance(value, list) for value in lists)
        or not all(isinstance(element, dict) for value in lists for element in value)
    )


def _supported(descriptions: list[Description], signals: Signals) -> list[Description]:
    """The descriptions of outputs that ask for nothing that is not supported yet."""
    deferred = {
        bit for s in signals.outputs if s.deferred for bit in range(s.first, s.first + s.size)
    }
    return [d for d in descriptions if deferred.isdisjoint(d.outputs)]


def _title(top: Section, key: str, default: str) -> str:
    text = top.text(key, default=default)
    if key in top and (not text.isprintable() or not text.strip()):
        top.error("TITLE", f"{key!r} is {text!r}, expected one line of text", top.at(key))
    return text


def _read_descriptions(
    top: Section, signals: Signals, claims: Claims, maps: list[AddressMap]
) -> list[Description]:
    found = [read_cases(section, signals, claims) for section in top.sections("cases")]
    minterms = top.section("minterms")
    if minterms is not None:
        found += [read_minterms(minterms, name, signals, claims) for name in minterms]
    logic = top.section("logic")
    if logic is not None:
        found += [read_logic(logic, name, signals, claims) for name in logic]
    sections = top.sections("address_map")
    if sections:
        from pla.behaviour.address_map import read_address_map  # noqa: PLC0415 - few designs need it

        found += [read_address_map(s, signals, claims, maps) for s in sections]
    return [description for description in found if description is not None]


def _report_undescribed(signals: Signals, claims: Claims, diagnostics: Diagnostics) -> None:
    if claims.incomplete:
        return  # the errors about that section say enough
    for signal in signals.outputs:
        bits = range(signal.first, signal.first + signal.size)
        missing = [bit for bit in bits if bit not in claims.places]
        if not missing:
            continue
        named = ", ".join(signals.output_names[bit] for bit in missing)
        diagnostics.error(
            "NOT-DESCRIBED",
            f"nothing says what the output {signal.name if len(missing) == len(bits) else named} "
            "does",
            signal.location,
            "describe it in [[cases]], [minterms], [logic] or [[address_map]]",
        )


def _function(solved: list[Solved], never: Cover, signals: Signals) -> Function:
    n = signals.n_inputs
    on = Cover.joined(n, (s.on for s in solved))
    off = Cover.joined(n, (s.off for s in solved))
    on += never.feeding(_impossible(signals, 1)).fed()
    off += never.feeding(_impossible(signals, 0)).fed()
    return Function(n, signals.n_outputs, on.merged(), off.merged())


def _impossible(signals: Signals, value: int | None) -> int:
    """The outputs with this value of `impossible`, as a mask."""
    return sum(((1 << s.size) - 1) << s.first for s in signals.outputs if s.impossible == value)


def _sources(solved: list[Solved], never: Cover, signals: Signals) -> tuple[DontCareSource, ...]:
    free = never.feeding(_impossible(signals, None)).fed()
    parts = [("never", free), *(part for s in solved for part in s.open)]
    sources = []
    for reason in _REASONS:
        cover = Cover.joined(signals.n_inputs, (c for r, c in parts if r == reason)).merged()
        if len(cover):
            sources.append(DontCareSource(reason, cover))
    return tuple(sources)


def _warn_of_idle_inputs(function: Function, signals: Signals, diagnostics: Diagnostics) -> None:
    used = algebra.support(function.on, function.off)
    for signal in signals.inputs:
        bits = range(signal.first, signal.first + signal.size)
        idle = [bit for bit in bits if not used >> bit & 1]
        if not idle:
            continue
        names = ", ".join(signals.input_names[bit] for bit in idle)
        diagnostics.warning(
            "INPUT-UNUSED",
            f"no output depends on {signal.name if len(idle) == len(bits) else names}",
            signal.location,
        )


def _inputs(signals: Signals) -> tuple[Input, ...]:
    return tuple(
        Input(name, s.active_low, s.location) for s in signals.inputs for name in s.bit_names()
    )


def _outputs(signals: Signals, claims: Claims) -> tuple[Output, ...]:
    found = []
    for signal in signals.outputs:
        for bit, name in enumerate(signal.bit_names(), signal.first):
            described, form = claims.places[bit]
            found.append(
                Output(name, signal.active_low, signal.impossible, signal.location, described, form)
            )
    return tuple(found)
