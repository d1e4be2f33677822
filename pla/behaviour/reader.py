"""Reading a design file: from TOML and CSV to a checked `Behaviour`."""

from __future__ import annotations

from itertools import repeat
from pathlib import PurePath
from types import MappingProxyType
from typing import TYPE_CHECKING

from pla.behaviour.assemble import assemble
from pla.behaviour.bidirectional import report_holding
from pla.behaviour.cases import read_cases
from pla.behaviour.conditions import read_logic, read_never
from pla.behaviour.declare import read_delay, read_signals
from pla.behaviour.description import Claims, Description, Solver
from pla.behaviour.enables import read_enables, solve_enables
from pla.behaviour.minterms import read_minterms
from pla.behaviour.model import Behaviour, Inner, Input, Output
from pla.behaviour.naming import named_by
from pla.behaviour.places import read_places
from pla.behaviour.rings import report_rings
from pla.behaviour.unsupported import refuse_unsupported
from pla.errors import Diagnostics, by_place
from pla.logic import algebra
from pla.tomlfile import Section, TomlFile, read_toml

if TYPE_CHECKING:
    from collections.abc import Mapping

    from pla.behaviour.model import Enabling
    from pla.behaviour.overlaps import AddressMap
    from pla.behaviour.signals import Signals
    from pla.logic.function import Function

__all__ = ["behaviour_of", "read_behaviour"]

_KEYS = (
    "name",
    "revision",
    "signature",
    "max_delay",
    "inputs",
    "outputs",
    "inner",
    "never",
    "cases",
    "minterms",
    "logic",
    "address_map",
    "place",
)


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
    signature = _signature(top)
    max_delay = read_delay(top, "max_delay")
    signals = read_signals(top, meant)
    sections = [file.data.get("inputs"), file.data.get("outputs"), file.data.get("inner", {})]
    if "inner" in meant or not all(isinstance(section, dict) for section in sections):
        # Every name would be unknown: it is enough to say why.
        diagnostics.stop_on_error()
    claims = Claims(signals, diagnostics)
    never = read_never(top.section("never"), signals)
    claims.incomplete = bool(refused) or _misses_descriptions(top)
    maps: list[AddressMap] = []
    descriptions = _read_descriptions(top, signals, claims, maps)
    enables = read_enables(top, signals)
    places = read_places(top.section("place"), signals)
    _report_undescribed(signals, claims, diagnostics)
    enablings: dict[str, Enabling] = {}
    whole = None
    if never is not None and "never" not in meant and not signals.too_many:
        solver = Solver(_supported(descriptions, signals), never, signals, diagnostics)
        solved = solver.run()
        enablings = solve_enables(enables, never, solver, signals, diagnostics)
        whole = assemble(solved, enablings, never, signals)
        known = report_holding(whole.outputs, enablings, signals, claims, diagnostics)
        report_rings(whole.outputs, enablings, never, signals, claims, known, diagnostics)
        if maps:
            from pla.behaviour.overlaps import warn_of_contention  # noqa: PLC0415 - likewise

            warn_of_contention(maps, never, signals, diagnostics)
    diagnostics.stop_on_error()
    if never is None or whole is None:  # pragma: no cover - there was an error
        raise AssertionError
    _warn_of_idle_inputs(whole.outputs, enablings, signals, diagnostics)
    needs = [(d.outputs, tuple(d.needs)) for d in descriptions]
    enable_needs = [(tuple(e.signal.positions), tuple(e.condition.needs())) for e in enables]
    _warn_of_idle_inner([*needs, *enable_needs], signals, diagnostics)
    return Behaviour(
        name=name,
        revision=revision,
        file=file.file,
        inputs=_inputs(signals),
        outputs=_outputs(signals, claims, enablings),
        function=whole.outputs,
        never=never,
        dont_cares=whole.dont_cares,
        places=MappingProxyType(places),
        warnings=tuple(sorted(diagnostics.warnings, key=by_place)),
        inner=_inner(signals, claims),
        inner_function=whole.inner,
        named=MappingProxyType(named_by(needs, enable_needs, signals)),
        signature=signature,
        signature_at=None if signature is None else top.at("signature"),
        max_delay=max_delay,
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


def _signature(top: Section) -> str | None:
    text = top.text("signature")
    if text is None:
        return None
    for offset, sign in enumerate(text):
        if not (sign.isascii() and sign.isprintable()):
            top.error(
                "SIGNATURE",
                f"{sign!r} in 'signature' cannot stand in a device, expected one line of "
                "printable ASCII characters",
                top.inside("signature", offset),
            )
            return None
    if not text.strip():
        top.error("SIGNATURE", "'signature' is empty, expected text", top.at("signature"))
        return None
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
    for signal in signals.described:
        missing = [bit for bit in signal.positions if bit not in claims.places]
        if not missing:
            continue
        named = ", ".join(signals.described_names[bit] for bit in missing)
        name = signal.name if len(missing) == signal.size else named
        diagnostics.error(
            "NOT-DESCRIBED",
            f"nothing says what the {signal.called.partition(' ')[2]} {name} does",
            signal.location,
            "describe it in [[cases]], [minterms], [logic] or [[address_map]]",
        )


def _warn_of_idle_inputs(
    function: Function,
    enables: Mapping[str, Enabling],
    signals: Signals,
    diagnostics: Diagnostics,
) -> None:
    covers = [cover for enable in enables.values() for cover in (enable.on, enable.off)]
    used = algebra.support(function.on, function.off, *covers)
    for signal in signals.inputs:
        bits = signal.positions
        idle = [bit for bit in bits if not used >> bit & 1]
        if not idle:
            continue
        names = ", ".join(signals.input_names[bit] for bit in idle)
        diagnostics.warning(
            "INPUT-UNUSED",
            f"no output depends on {signal.name if len(idle) == len(bits) else names}",
            signal.location,
        )


def _warn_of_idle_inner(
    needs: list[tuple[tuple[int, ...], tuple[int, ...]]], signals: Signals, diagnostics: Diagnostics
) -> None:
    named = {bit for _, bits in needs for bit in bits}
    for signal in signals.inner:
        idle = [bit for bit in signal.positions if bit not in named]
        if not idle:
            continue
        names = ", ".join(signals.described_names[bit] for bit in idle)
        diagnostics.warning(
            "INNER-UNUSED",
            f"nothing names the inner signal {signal.name if len(idle) == signal.size else names}",
            signal.location,
        )


def _inputs(signals: Signals) -> tuple[Input, ...]:
    found = []
    for signal in signals.inputs:
        output = signals.by_name[signal.read_from] if signal.read_from else None
        pins = output.bit_names() if output else repeat(None)
        for name, pin in zip(signal.bit_names(), pins, strict=False):
            found.append(Input(name, signal.active_low, signal.location, pin))
    return tuple(found)


def _outputs(
    signals: Signals, claims: Claims, enables: Mapping[str, Enabling]
) -> tuple[Output, ...]:
    found = []
    for signal in signals.outputs:
        read = signals.by_name[signal.reads].bit_names() if signal.reads else repeat(None)
        bits = zip(signal.positions, signal.bit_names(), read, strict=False)
        for bit, name, reads in bits:
            described, form = claims.places[bit]
            found.append(
                Output(
                    name=name,
                    active_low=signal.active_low,
                    impossible=signal.impossible,
                    location=signal.location,
                    described=described,
                    form=form,
                    enable=enables.get(signal.name),
                    reads=reads,
                    max_delay=signal.max_delay,
                )
            )
    return tuple(found)


def _inner(signals: Signals, claims: Claims) -> tuple[Inner, ...]:
    return tuple(
        Inner(name, signal.location, *claims.places[bit])
        for signal in signals.inner
        for bit, name in zip(signal.positions, signal.bit_names(), strict=True)
    )
