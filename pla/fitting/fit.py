"""Laying a design onto a device: polarities, terms, pins."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from pla.errors import Diagnostic, InternalError
from pla.fitting.matching import first_matching
from pla.fitting.model import Fit, PlacedInput, PlacedOutput, Plan, Usage
from pla.fitting.places import settled_places
from pla.fitting.polarity import allowed_polarities, mode_for, tied_polarities, ties_of
from pla.logic.minimize import minimize

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping, Sequence

    from pla.behaviour.model import Behaviour
    from pla.device.model import Cell, Device
    from pla.fitting.model import KnownMinima, PolarityWish
    from pla.fitting.polarity import Ties
    from pla.logic.effort import Effort
    from pla.logic.minimize import Minimum
    from pla.logic.phases import Polarity
    from pla.logic.relaxation import Decisions
    from pla.logic.search import Feasible

__all__ = ["fit"]


def fit(
    behaviour: Behaviour,
    device: Device,
    wish: PolarityWish = "free",
    effort: Effort | None = None,
    known: KnownMinima | None = None,
) -> Fit:
    """Find the smallest cover that the device can hold and put everything in its place.

    Args:
        behaviour: What is wanted; its ``[place]`` for this device is kept.
        device: A shared OR array.
        wish: Polarities that the user allows.
        effort: The budget for minimizing.
        known: Minima of this behaviour, to be used again and added to.

    Returns:
        The plan, or every reason why there is none.

    Raises:
        InputError: If a place names a pin that cannot carry its signal.
    """
    places = settled_places(behaviour, device)
    placed = {places[o.name] for o in behaviour.outputs if o.name in places}
    free_cells = [cell for cell in device.cells if cell.pin not in placed]
    cells = [
        [device.cell_of_pin[places[o.name]]] if o.name in places else free_cells
        for o in behaviour.outputs
    ]
    outputs = Usage(len(behaviour.outputs), len(device.output_pins))
    allowed = allowed_polarities(
        behaviour.outputs, cells if not outputs.over else [device.cells] * len(cells), wish
    )
    barred = [o.name for o, p in zip(behaviour.outputs, allowed, strict=True) if p is None]
    feasible = None if outputs.over else tied_polarities(device, behaviour.outputs, cells)
    reasons = _barred(barred, wish)
    if not reasons and feasible is not None and not _holds(feasible, allowed):
        reasons.append("the cells cannot give all outputs a polarity that they may have together")
    if reasons:
        reasons += _too_many_outputs(outputs)
        needed = Usage(0, device.terms)
        pins = Usage(len(behaviour.inputs), len(device.input_pins))
        nothing = tuple(allowed)
        return Fit(behaviour, device, nothing, None, None, tuple(reasons), needed, pins, outputs)
    polarities = [p for p in allowed if p is not None]
    ties = ties_of(device, cells) if feasible else None
    within = _within(feasible, polarities)
    minima = {} if known is None else known
    minimum = _known(minima, tuple(polarities), ties, within)
    if minimum is None:
        minimum = minimize(behaviour.function, polarities, feasible=within, effort=effort)
        minima[tuple(polarities), ties] = minimum
    return _place(behaviour, device, polarities, minimum, places, cells, outputs)


def _known(
    minima: KnownMinima,
    polarities: tuple[Polarity, ...],
    ties: Ties | None,
    within: Feasible | None,
) -> Minimum | None:
    """The minimum of a device that ties polarities alike, or of one that does not tie them at all.

    The latter serves where its polarities happen to be ones that may be had together.
    """
    untied = minima.get((polarities, None))
    if untied is not None and (within is None or within(untied.complemented)):
        return untied
    return minima.get((polarities, ties))


def _barred(names: Sequence[str], wish: PolarityWish) -> list[str]:
    if not names:
        return []
    which = f"output{'s' if len(names) > 1 else ''} {', '.join(names)}"
    if wish == "true":
        reason = (
            f"{which} can only be realised by a complemented sum, which --polarity true rules out"
        )
        return [reason]
    return [f"no cell can show {which} with the active level that the design asks for"]


def _holds(feasible: Feasible, allowed: Sequence[Polarity | None]) -> bool:
    return feasible(_only(p for p in allowed if p is not None))


def _only(polarities: Iterable[Polarity]) -> Decisions:
    """Polarities as far as they are decided by there being only one."""
    return tuple(None if p.true and p.complement else p.complement for p in polarities)


def _within(feasible: Feasible | None, polarities: Sequence[Polarity]) -> Feasible | None:
    """The device's ties together with the polarities that are allowed at all."""
    if feasible is None:
        return None
    only = _only(polarities)

    def both(decisions: Decisions, /) -> bool:
        merged = tuple(o if d is None else d for d, o in zip(decisions, only, strict=True))
        return feasible(merged)

    return both


def _place(
    behaviour: Behaviour,
    device: Device,
    polarities: Sequence[Polarity],
    minimum: Minimum,
    places: Mapping[str, int],
    cells: Sequence[Sequence[Cell]],
    outputs: Usage,
) -> Fit:
    terms = Usage(minimum.count, device.terms)
    lines = _lines_needed(behaviour, minimum)
    needed = [i for i, signal in enumerate(behaviour.inputs) if lines[i] or signal.name in places]
    inputs = Usage(len(needed), len(device.input_pins))
    reasons = _shortages(minimum, terms, inputs, outputs)
    input_pins: dict[int, int] = {}
    output_pins: list[int] | None = None
    if not inputs.over:
        placed = _place_inputs(behaviour, device, lines, needed, places)
        if placed is None:
            reasons.append("the input pins lack a true or complement line that the terms need")
        else:
            input_pins = placed
    if not outputs.over:
        output_pins = first_matching(
            [
                [c.pin for c in own if mode_for(c, o.active_low, complemented)]
                for o, own, complemented in zip(
                    behaviour.outputs, cells, minimum.complemented, strict=True
                )
            ]
        )
        if output_pins is None:  # pragma: no cover - `feasible` rules it out
            reasons.append("the cells cannot give all outputs their polarity")
    plan = None
    if not reasons and output_pins is not None:
        plan = _plan(behaviour, device, minimum, lines, input_pins, output_pins)
    allowed = tuple(polarities)
    return Fit(behaviour, device, allowed, minimum, plan, tuple(reasons), terms, inputs, outputs)


def _shortages(minimum: Minimum, terms: Usage, inputs: Usage, outputs: Usage) -> list[str]:
    reasons = []
    if terms.over:
        if minimum.proven:
            claim = "the smallest set has"
        elif minimum.lower_bound > terms.available:
            claim = f"every set has at least {minimum.lower_bound}, the best found has"
        else:
            claim = f"the best set found (at least {minimum.lower_bound} are needed) has"
        reasons.append(
            f"{claim} {terms.used} product terms, the device {terms.available}: "
            f"{terms.over} too many"
        )
    if inputs.over:
        reasons.append(
            f"{inputs.used} inputs are needed, the device has {inputs.available} input pins: "
            f"{inputs.over} too many"
        )
    return reasons + _too_many_outputs(outputs)


def _too_many_outputs(outputs: Usage) -> list[str]:
    if not outputs.over:
        return []
    reason = (
        f"{outputs.used} outputs are needed, the device has {outputs.available} output cells: "
        f"{outputs.over} too many"
    )
    return [reason]


def _lines_needed(behaviour: Behaviour, minimum: Minimum) -> list[frozenset[bool]]:
    """For each input the lines that terms connect: ``True`` is the complement of the pin."""
    ones = int(np.bitwise_or.reduce(minimum.cover.ones, initial=np.uint64(0)))
    zeros = int(np.bitwise_or.reduce(minimum.cover.zeros, initial=np.uint64(0)))
    return [
        frozenset(
            signal.active_low != complement
            for complement, literals in ((False, ones), (True, zeros))
            if literals >> i & 1
        )
        for i, signal in enumerate(behaviour.inputs)
    ]


def _place_inputs(
    behaviour: Behaviour,
    device: Device,
    lines: Sequence[frozenset[bool]],
    needed: Sequence[int],
    places: Mapping[str, int],
) -> dict[int, int] | None:
    """Pin of each input: the lowest free one in order of declaration; unneeded inputs last."""

    def choices(i: int) -> list[int]:
        name = behaviour.inputs[i].name
        pins = [places[name]] if name in places else free
        return [p for p in pins if all((p, line) in device.column_of for line in lines[i])]

    taken = {places[s.name] for s in behaviour.inputs if s.name in places}
    free = [pin for pin in device.input_pins if pin not in taken]
    everyone = list(range(len(behaviour.inputs)))
    matched = first_matching([choices(i) for i in everyone])
    if matched is not None:
        return dict(zip(everyone, matched, strict=True))
    matched = first_matching([choices(i) for i in needed])
    if matched is None:
        return None
    pins = dict(zip(needed, matched, strict=True))
    # The rest needs no line, so any pin will do.
    rest = [i for i in everyone if i not in pins]
    left = [pin for pin in free if pin not in pins.values()]
    return pins | dict(zip(rest, left, strict=False))


def _plan(
    behaviour: Behaviour,
    device: Device,
    minimum: Minimum,
    lines: Sequence[frozenset[bool]],
    input_pins: Mapping[int, int],
    output_pins: Sequence[int],
) -> Plan:
    outputs = []
    for j, (output, pin) in enumerate(zip(behaviour.outputs, output_pins, strict=True)):
        complemented = minimum.complemented[j]
        mode = mode_for(device.cell_of_pin[pin], output.active_low, complemented)
        if mode is None:  # pragma: no cover - the pin was matched for its mode
            raise InternalError([Diagnostic("FIT", f"pin {pin} has no mode for {output.name}")])
        outputs.append(PlacedOutput(j, output.name, pin, output.active_low, complemented, mode))
    inputs = tuple(
        PlacedInput(i, s.name, input_pins.get(i), s.active_low, bool(lines[i]))
        for i, s in enumerate(behaviour.inputs)
    )
    return Plan(behaviour, device, minimum, inputs, tuple(outputs), tuple(range(minimum.count)))
