"""Laying a design onto a device: the plan, or everything that stands in the way."""

from __future__ import annotations

from dataclasses import replace
from itertools import combinations, islice
from typing import TYPE_CHECKING

from pla.errors import Diagnostic
from pla.fitting.clocked import refuse_registers
from pla.fitting.crowding import listed
from pla.fitting.delays import late_outputs
from pla.fitting.minima import Minima
from pla.fitting.model import Fit, Usage
from pla.fitting.netlist import choices
from pla.fitting.places import settled_places
from pla.fitting.placing import plan_of
from pla.fitting.problem import Problem
from pla.fitting.search import best_layout, ways
from pla.fitting.shortage import Shortage

if TYPE_CHECKING:
    from pla.behaviour.model import Behaviour, Place
    from pla.device.model import Device
    from pla.fitting.model import PolarityWish
    from pla.fitting.search import Found

__all__ = ["fit"]

_MOST_RELEASES = 2_000


def fit(
    behaviour: Behaviour,
    device: Device,
    wish: PolarityWish = "free",
    minima: Minima | None = None,
    *,
    reserve: int = 0,
) -> Fit:
    """Find the smallest cover that the device can hold and put everything in its place.

    On a shared OR array the terms of all outputs together are minimized; where OR gates have terms
    of their own, each sum alone, and outputs are matched with cells. Inner signals and outputs that
    others name are folded in or fed back, whichever takes fewer terms; of equal numbers the way
    with fewer passes through the array, then with fewer signals fed back.

    Args:
        behaviour: What is wanted; its ``[place]`` for this device is kept.
        device: Where it goes.
        wish: Polarities that the user allows.
        minima: Minima of this behaviour, to be used again and added to.
        reserve: Terms that have to stay spare in every OR gate that has terms of its own.

    Returns:
        The plan, or every reason why there is none.

    Raises:
        InputError: If a place names a pin that cannot carry its signal.
        RefusalError: If the design has registers.
    """
    refuse_registers(behaviour)
    places = settled_places(behaviour, device)
    known = minima or Minima()
    folded = known.netlist(behaviour)
    if folded is None:  # pragma: no cover - nothing is fed back
        raise AssertionError
    problem = Problem(folded, device, wish, places, known, reserve)
    shortage = Shortage(problem, list(ways(problem)))
    reasons = list(_too_long(behaviour, device))
    found = best_layout(problem)
    if found is None:
        reasons = [*shortage.reasons, *_fed_back(problem, shortage), *reasons]
    elif found.rank[0]:
        fed = found.layout.problem.netlist.fed
        # What is late with signals fed back does not fit with none of them.
        folded_in = [f"with nothing fed back, {r}" for r in shortage.reasons] if fed else []
        reasons = [*_late(found), *folded_in, *reasons]
    if found is None or reasons:
        released = _released(problem, behaviour.places.get(device.name, ())) if places else ()
        return _fit(shortage, None, tuple(reasons), released)
    return _fit(shortage, found, (), ())


def _fit(
    shortage: Shortage, found: Found | None, reasons: tuple[str, ...], released: tuple[Place, ...]
) -> Fit:
    problem = shortage.problem
    behaviour, device = problem.netlist.design, problem.device
    plan = None if found is None else plan_of(found.layout)
    minimum = shortage.minimum if plan is None else plan.minimum
    count = 0 if minimum is None else minimum.count
    inputs = len(shortage.needed_inputs)
    if plan is not None:
        own = [
            p
            for p in plan.inputs
            if p.fed_by is None and plan.behaviour.inputs[p.index].read_from is None
        ]
        inputs = sum(p.used or p.name in problem.places for p in own)
    capacity = sum(cell.capacity for cell in device.cells)
    return Fit(
        behaviour,
        device,
        shortage.polarities,
        minimum,
        plan,
        reasons,
        Usage(count, len(device.shared_rows) + capacity),
        Usage(inputs, len(device.readable_pins)),
        Usage(len(behaviour.outputs), len(device.output_pins)),
        0 if plan is not None else shortage.lacking,
        released,
        tuple(_doubts(behaviour, device)),
    )


def _released(problem: Problem, places: tuple[Place, ...]) -> tuple[Place, ...]:
    """The fewest places without which the design fits; empty if it never does.

    Of equal numbers those that stand first in the file.
    """
    if not _fits_with(problem, ()):
        return ()
    sets = (chosen for size in range(1, len(places) + 1) for chosen in combinations(places, size))
    for chosen in islice(sets, _MOST_RELEASES):
        if _fits_with(problem, tuple(p for p in places if p not in chosen)):
            return chosen
    return places


def _fits_with(problem: Problem, places: tuple[Place, ...]) -> bool:
    found = best_layout(replace(problem, places={p.signal: p.pin for p in places}))
    return found is not None and found.rank[0] == 0


def _late(found: Found) -> list[str]:
    fed = found.layout.problem.netlist.fed
    how = f"with {listed(fed)} fed back, " if fed else ""
    return [
        f"{how}{name} may take {float(worst):g} ns, and {float(allowed):g} ns are allowed"
        for name, worst, allowed in late_outputs(plan_of(found.layout))
    ]


def _fed_back(problem: Problem, shortage: Shortage) -> list[str]:
    """What stands in the way of the most promising choice of signals to feed back."""
    design = problem.netlist.design
    if len(design.outputs) > len(problem.device.output_pins):
        return []
    tried: list[tuple[int, int, list[str]]] = []
    for chosen in choices(design):
        nets = problem.minima.netlist(design, chosen) if chosen else None
        if nets is None:
            continue
        own = replace(problem, netlist=nets)
        other = Shortage(own, list(ways(own)))
        if other.minimum is not None or shortage.minimum is None:
            reasons = [f"with {listed(chosen)} fed back, {reason}" for reason in other.reasons]
            tried.append((other.minimum is None, other.lacking, reasons))
    return min(tried, key=lambda t: t[:2])[2] if tried else []


def _too_long(behaviour: Behaviour, device: Device) -> list[str]:
    text, region = behaviour.signature, device.signature
    if text is None or region is None or len(text) <= region.length:
        return []
    return [f"the signature {text!r} has {len(text)} characters, the device holds {region.length}"]


def _doubts(behaviour: Behaviour, device: Device) -> list[Diagnostic]:
    found = []
    if behaviour.signature is not None and device.signature is None:
        message = f"{device.name} has no signature fuses: the signature is left out"
        found.append(Diagnostic("SIGNATURE-NONE", message, behaviour.signature_at, None, "warning"))
    asked = [o for o in behaviour.outputs if o.max_delay or behaviour.max_delay]
    if asked and device.timing.tpd is None:
        message = (
            f"{device.name} gives no delays, so that the max_delay of "
            f"{listed([output.name for output in asked])} is not checked"
        )
        hint = "add [timing] with tpd from the data sheet to the device file"
        found.append(Diagnostic("DELAY-UNKNOWN", message, asked[0].location, hint, "warning"))
    return found
