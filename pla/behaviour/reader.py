"""Reading a design file: from TOML and CSV to a checked `Behaviour`."""

from __future__ import annotations

from pathlib import PurePath
from types import MappingProxyType
from typing import TYPE_CHECKING

from pla.behaviour.assemble import assemble
from pla.behaviour.bidirectional import report_holding
from pla.behaviour.bits import inner_bits, input_bits, output_bits
from pla.behaviour.cases import read_cases
from pla.behaviour.clocking import read_clocking, read_registers
from pla.behaviour.conditions import read_logic, read_never
from pla.behaviour.declare import read_delay, read_signals
from pla.behaviour.description import Claims, Description, Solver
from pla.behaviour.enables import read_enables, solve_enables
from pla.behaviour.idle import warn_of_idle_inner, warn_of_idle_inputs
from pla.behaviour.minterms import read_minterms
from pla.behaviour.model import Behaviour
from pla.behaviour.naming import named_by
from pla.behaviour.places import read_places
from pla.behaviour.rings import report_rings
from pla.errors import Diagnostics, by_place
from pla.tomlfile import Section, TomlFile, read_toml

if TYPE_CHECKING:
    from pla.behaviour.clocking import RegisterText
    from pla.behaviour.model import Enabling, Registering, StateTable
    from pla.behaviour.overlaps import AddressMap
    from pla.behaviour.signals import Signals

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
    "state_table",
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
    meant = top.unknown_keys(_KEYS)
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
    claims.incomplete = _misses_descriptions(top)
    maps: list[AddressMap] = []
    machines: list[StateTable] = []
    descriptions = _read_descriptions(top, signals, claims, maps, machines)
    enables = read_enables(top, signals)
    clocked = read_registers(top, signals)
    states = _read_state_clocks(signals)
    places = read_places(top.section("place"), signals)
    _report_undescribed(signals, claims, diagnostics)
    enablings: dict[str, Enabling] = {}
    registers: dict[str, Registering] = {}
    whole = None
    if never is not None and "never" not in meant and not signals.too_many:
        solver = Solver(_supported(descriptions, signals), never, signals, diagnostics)
        solved = solver.run()
        enablings = solve_enables(enables, never, solver, signals, diagnostics)
        if clocked or states:
            from pla.behaviour.registers import (  # noqa: PLC0415 - few designs need it
                solve_registers,
                warn_of_races,
                with_start_codes,
            )

            at_start = with_start_codes(states, machines)
            registers = solve_registers(clocked, at_start, never, solver, signals, diagnostics)
            warn_of_races(registers, signals, diagnostics)
        whole = assemble(solved, enablings, never, signals)
        known = report_holding(whole.outputs, enablings, signals, claims, diagnostics)
        report_rings(whole.outputs, enablings, never, signals, claims, known, diagnostics)
        if maps:
            from pla.behaviour.overlaps import warn_of_contention  # noqa: PLC0415 - likewise

            warn_of_contention(maps, never, signals, diagnostics)
    diagnostics.stop_on_error()
    if never is None or whole is None:  # pragma: no cover - there was an error
        raise AssertionError
    warn_of_idle_inputs(whole, enablings, registers, signals, diagnostics)
    needs = [(d.outputs, tuple(d.needs)) for d in descriptions]
    switch_needs = [(tuple(e.signal.positions), tuple(e.condition.needs())) for e in enables]
    switch_needs += [
        (tuple(register.signal.positions), tuple(control.condition.needs()))
        for register in (*clocked, *states)
        for control in register.controls
    ]
    warn_of_idle_inner([*needs, *switch_needs], whole, enablings, registers, signals, diagnostics)
    return Behaviour(
        name=name,
        revision=revision,
        file=file.file,
        inputs=input_bits(signals),
        outputs=output_bits(signals, claims, enablings, registers),
        function=whole.outputs,
        never=never,
        dont_cares=whole.dont_cares,
        places=MappingProxyType(places),
        warnings=tuple(sorted(diagnostics.warnings, key=by_place)),
        inner=inner_bits(signals, claims, registers),
        inner_function=whole.inner,
        named=MappingProxyType(named_by(needs, switch_needs, signals)),
        signature=signature,
        signature_at=None if signature is None else top.at("signature"),
        max_delay=max_delay,
        machines=tuple(machines),
    )


def _misses_descriptions(top: Section) -> bool:
    """Whether a section that may describe outputs cannot be told, which has its own error."""
    unknown = any(isinstance(v, dict | list) for k, v in top.data.items() if k not in _KEYS)
    tables = [top.data.get(key, {}) for key in ("minterms", "logic")]
    lists = [top.data.get(key, []) for key in ("cases", "address_map", "state_table")]
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
    top: Section,
    signals: Signals,
    claims: Claims,
    maps: list[AddressMap],
    machines: list[StateTable],
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
    if signals.machines:
        from pla.behaviour.state_table import read_state_table  # noqa: PLC0415 - likewise

        found += [read_state_table(head, signals, claims, machines) for head in signals.machines]
    return [description for description in found if description is not None]


def _read_state_clocks(signals: Signals) -> list[RegisterText]:
    """How the states of state tables are clocked; what they start with their codes will tell."""
    found = []
    for head in signals.machines:
        signal = signals.by_name[head.name] if head.whole else None
        found.append(read_clocking(head.section, signal, signals, None, ("reset",)))
    return [register for register in found if register is not None]


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
