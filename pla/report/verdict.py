"""What was asked and how good the answer is, in sentences."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.report.notation import plural
from pla.report.text import one_line
from pla.wording import listed

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.behaviour.model import Behaviour
    from pla.device.model import Device
    from pla.fuses.proof import Proof
    from pla.logic.minimize import Minimum

__all__ = [
    "connections",
    "count_sentences",
    "design_sentences",
    "proof_sentence",
    "sentence",
    "signature_of",
    "title",
]


def title(behaviour: Behaviour) -> str:
    """Name and revision."""
    revision = f", revision {one_line(behaviour.revision)}" if behaviour.revision else ""
    return one_line(behaviour.name) + revision


def sentence(reason: str, behaviour: Behaviour) -> str:
    """A reason with a capital, unless it begins with the name of a signal, and a full stop."""
    first = reason.partition(" ")[0].rstrip(",")
    signals = (*behaviour.input_names, *behaviour.output_names, *(i.name for i in behaviour.inner))
    return f"{reason if first in signals else reason[:1].upper() + reason[1:]}."


def signature_of(behaviour: Behaviour, device: Device) -> str | None:
    """The text that the part carries; ``None`` if there is none, or no fuses for it."""
    return None if device.signature is None else behaviour.signature


def count_sentences(
    minimum: Minimum, own: Sequence[bool] = (), fed: Sequence[str] = ()
) -> Iterator[str]:
    """Number of terms, lower bound, and by what the two are known to meet.

    Args:
        minimum: The terms.
        own: For each output whether its OR gate has terms of its own; by default none has.
        fed: Names of the signals that are fed back through the array.
    """
    count, bound = plural(minimum.count, "product term"), minimum.lower_bound
    count = f"With {listed(fed)} fed back: {count}" if fed else count
    alone, shared = any(own), not all(own) or not own
    if minimum.proven:
        smaller = (
            "no smaller set of shared terms will do in any of the polarities that are allowed"
            if not alone
            else "no smaller set of terms will do in any of the polarities that are allowed"
            if shared
            else "no smaller sums will do in any polarities that the cells can give together"
        )
        yield f"{count}, and proven to be the fewest: the lower bound is {bound}, {smaller}."
    else:
        gap = minimum.count - bound
        smaller = "A smaller set was" if shared else "Smaller sums were"
        yield (
            f"{count}, NOT proven to be the fewest: the lower bound is {bound}, which leaves a gap "
            f"of {gap}. {smaller} neither found nor ruled out."
        )
    if alone:
        yield (
            "Terms are counted sum by sum, since "
            + ("some sums have" if shared else "each sum has")
            + " an OR gate with terms of its own."
        )
    if fed:
        yield "No other choice of signals to feed back that was tried fits with fewer terms."
    if minimum.proven_by == "certificate":
        yield "The bound was checked in exact arithmetic (proven by certificate)."
    elif minimum.proven_by == "solver":
        yield "The bound rests on the solver's floating-point arithmetic (proven by solver)."
    if minimum.clock:
        yield "The search was cut short by the clock: another run may give another answer."


def design_sentences(
    behaviour: Behaviour, minimum: Minimum, own: Sequence[bool] = ()
) -> Iterator[str]:
    """Connections, and the polarity of each output.

    Args:
        behaviour: Whose terms they are.
        minimum: The terms.
        own: For each output whether its OR gate has terms of its own; by default none has.
    """
    yield _connections(minimum, own)
    yield _polarity(behaviour.output_names, minimum.complemented)


def _connections(minimum: Minimum, own: Sequence[bool]) -> str:
    terms = plural(minimum.count, "term")
    first = connections(minimum, own)
    if minimum.connections is None:
        return f"{first}; whether {terms} can do with fewer is not known."
    where = " in these polarities" if minimum.connections == "these polarities" else ""
    return f"{first}; by the solver's word no set of {terms}{where} has fewer."


def connections(minimum: Minimum, own: Sequence[bool] = ()) -> str:
    """How many links join lines to terms, and terms to sums where these are links."""
    cover = minimum.cover
    literals = plural(cover.literals, "literal")
    shared = [j for j in range(len(minimum.complemented)) if not (own and own[j])]
    links = sum(len(cover.of_output(j)) for j in shared)
    if own and not shared:
        return f"{plural(cover.literals, 'connection')}: {literals}"
    return (
        f"{plural(cover.literals + links, 'connection')}: {literals} and {plural(links, 'OR link')}"
    )


def _polarity(names: Sequence[str], complemented: Sequence[bool]) -> str:
    parts = {
        value: [name for name, c in zip(names, complemented, strict=True) if c == value]
        for value in (False, True)
    }
    if not parts[True]:
        return "Every sum is the asserted function itself (T)."
    if not parts[False]:
        return "Every sum is the complement of the asserted function (C)."
    return (
        f"Sums that are the asserted function (T): {listed(parts[False])}; "
        f"its complement (C): {listed(parts[True])}."
    )


def proof_sentence(proof: Proof, design: Behaviour) -> str:
    """How the fuse file was compared with the design."""
    if proof.method == "simulation":
        how = (
            "the array that it describes was simulated from pin to pin for "
            f"{'all ' if proof.cases > 1 else ''}{plural(proof.cases, 'input combination')}"
        )
    else:
        how = (
            "the terms that it describes were compared with the design as cubes, "
            f"{plural(proof.cases, 'cube')} in all"
        )
    verdict = "equal to" if proof.equal else "NOT equal to"
    switched = any(output.enable for output in design.outputs)
    drives = ", and drives each pin exactly when it should" if switched and proof.equal else ""
    return (
        f"The fuse file was read back from its own bytes, and {how}: it is {verdict} the design "
        f"wherever the design demands 0 or 1{drives}."
    )
