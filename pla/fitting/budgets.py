"""A design on many devices: what it takes of each, and which is the smallest that holds it."""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from types import MappingProxyType
from typing import TYPE_CHECKING, Literal

from pla.fitting.fit import fit
from pla.fitting.minima import Minima
from pla.fitting.model import Usage
from pla.fitting.places import wrong_places
from pla.logic.effort import Effort

if TYPE_CHECKING:
    from collections.abc import Callable, Iterable

    from pla.behaviour.model import Behaviour
    from pla.device.model import Device
    from pla.fitting.model import Fit, PolarityWish

__all__ = ["DeviceBudget", "Resource", "budgets", "fits_on"]

Resource = Literal["terms", "inputs", "outputs"]


@dataclass(frozen=True, slots=True)
class DeviceBudget:
    """What a design takes of one device.

    Attributes:
        fit: The design on the device.
        reserve: Product terms that have to stay spare: of a shared OR array in all, where OR gates
            have terms of their own in that of every output.
    """

    fit: Fit
    reserve: int = 0

    @property
    def device(self) -> Device:
        return self.fit.device

    @property
    def fits(self) -> bool:
        """Whether the device holds the design with the reserve left over."""
        return not self.reasons

    @property
    def reasons(self) -> tuple[str, ...]:
        """Why it does not, one sentence each; empty if it does."""
        short = self._short_of_reserve()
        return (*self.fit.reasons, short) if short else self.fit.reasons

    @property
    def usages(self) -> dict[Resource, Usage]:
        """Every resource of which it is known how much the design takes."""
        known: dict[Resource, Usage] = {"terms": self.fit.terms} if self.fit.minimum else {}
        return known | {"inputs": self.fit.inputs, "outputs": self.fit.outputs}

    @property
    def missing(self) -> int | None:
        """Product terms (the reserve included), input pins and output cells that are lacking.

        ``None`` if the number of product terms is not known.
        """
        if self.fit.minimum is None:
            return None
        terms = self.fit.lacking
        if self._shared is not None:
            terms = max(terms, self._shared.used + self.reserve - self._shared.available)
        return terms + self.fit.inputs.over + self.fit.outputs.over

    @property
    def _shared(self) -> Usage | None:
        """Rows of the shared OR array, where it is known how many are taken."""
        rows = self.device.shared_rows
        if not rows or self.fit.minimum is None:
            return None
        plan = self.fit.plan
        if plan is not None:
            return Usage(sum(row in rows for row in plan.rows), len(rows))
        return Usage(self.fit.terms.used, len(rows)) if len(rows) == self.device.terms else None

    @property
    def tightest(self) -> Resource:
        """The resource of which the largest share is taken, the reserve of terms included.

        Of equal shares the first of terms, inputs, outputs.
        """
        usages = self.usages
        return max(usages, key=lambda r: _share(self._wanted(r), usages[r].available))

    def _wanted(self, resource: Resource) -> int:
        return self.usages[resource].used + (self.reserve if resource == "terms" else 0)

    def _short_of_reserve(self) -> str | None:
        """With OR gates of their own the fit itself keeps the reserve."""
        minimum, terms = self.fit.minimum, self._shared
        if minimum is None or terms is None or terms.over:
            return None
        spare = terms.available - terms.used
        if spare >= self.reserve:
            return None
        found = "the smallest set"
        if not minimum.proven:
            found = f"the best set found (at least {minimum.lower_bound} are needed)"
        return (
            f"{found} leaves {spare} of {terms.available} product terms spare, "
            f"{self.reserve} are to be kept: {self.reserve - spare} too few"
        )


def budgets(
    behaviour: Behaviour,
    devices: Iterable[Device],
    wish: PolarityWish = "free",
    reserve: int = 0,
    effort: Callable[[], Effort] = Effort,
) -> tuple[DeviceBudget, ...]:
    """What a design takes of every device, best first.

    First the devices that hold it, the smallest before the larger: fewest pins, then fewest
    fuses, then by name. Then those that do not: where least is missing, counted in product terms,
    input pins and output cells together; of equals again the smallest. Last those for which no
    polarity is left to some output, so that the number of product terms is not known.

    Args:
        behaviour: What is wanted.
        devices: What to try.
        wish: Polarities that the user allows.
        reserve: Product terms that have to stay spare.
        effort: Makes the budget of each minimization.
    """
    found = fits_on(behaviour, devices, wish, Minima(effort), reserve)
    return tuple(sorted((DeviceBudget(f, reserve) for f in found), key=_rank))


def fits_on(
    behaviour: Behaviour,
    devices: Iterable[Device],
    wish: PolarityWish,
    minima: Minima | None = None,
    reserve: int = 0,
) -> tuple[Fit, ...]:
    """The fits of all devices in the order given; devices that allow the same share a minimum.

    A place on a device that cannot carry its signal is a reason of that device, and everything
    else is found as if the place were not there.

    Args:
        behaviour: What is wanted.
        devices: What to try.
        wish: Polarities that the user allows.
        minima: Minima of this behaviour, to be used again and added to.
        reserve: Terms that have to stay spare in every OR gate that has terms of its own.
    """
    known = minima or Minima()
    return tuple(_fit_on(behaviour, device, wish, known, reserve) for device in devices)


def _fit_on(
    behaviour: Behaviour, device: Device, wish: PolarityWish, minima: Minima, reserve: int
) -> Fit:
    wrong = wrong_places(behaviour, device)
    if not wrong:
        return fit(behaviour, device, wish, minima, reserve=reserve)
    kept = tuple(place for place in behaviour.places[device.name] if place not in wrong)
    places = MappingProxyType({**behaviour.places, device.name: kept})
    tried = fit(replace(behaviour, places=places), device, wish, minima, reserve=reserve)
    reasons = tuple(f"{d.message} ({d.location})" for d in wrong.values())
    return replace(tried, behaviour=behaviour, plan=None, reasons=(*reasons, *tried.reasons))


def _share(wanted: int, available: int) -> Fraction:
    """How much of what there is; of nothing, any demand is more than every share of something."""
    return Fraction(wanted, available) if available else Fraction(wanted * 1_000_000)


def _rank(budget: DeviceBudget) -> tuple[bool, bool, int, int, int, str]:
    device, missing = budget.device, budget.missing
    lacking = 0 if budget.fits or missing is None else missing
    return (
        not budget.fits,
        missing is None,
        lacking,
        device.pins,
        device.fuses,
        device.name,
    )
