"""What was asked and how good the answer is, in sentences."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.report.notation import listed, plural
from pla.report.text import one_line

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.behaviour.model import Behaviour
    from pla.fuses.proof import Proof
    from pla.logic.minimize import Minimum

__all__ = ["count_sentences", "design_sentences", "proof_sentence", "title"]


def title(behaviour: Behaviour) -> str:
    """Name and revision."""
    revision = f", revision {one_line(behaviour.revision)}" if behaviour.revision else ""
    return one_line(behaviour.name) + revision


def count_sentences(minimum: Minimum) -> Iterator[str]:
    """Number of terms, lower bound, and by what the two are known to meet."""
    count, bound = plural(minimum.count, "product term"), minimum.lower_bound
    if minimum.proven:
        yield (
            f"{count}, and proven to be the fewest: the lower bound is {bound}, no smaller set of "
            "shared terms will do in any of the polarities that are allowed."
        )
    else:
        gap = minimum.count - bound
        yield (
            f"{count}, NOT proven to be the fewest: the lower bound is {bound}, which leaves a gap "
            f"of {gap}. A smaller set was neither found nor ruled out."
        )
    if minimum.proven_by == "certificate":
        yield "The bound was checked in exact arithmetic (proven by certificate)."
    elif minimum.proven_by == "solver":
        yield "The bound rests on the solver's floating-point arithmetic (proven by solver)."
    if minimum.clock:
        yield "The search was cut short by the clock: another run may give another answer."


def design_sentences(behaviour: Behaviour, minimum: Minimum) -> Iterator[str]:
    """Connections, and the polarity of each output."""
    yield _connections(minimum)
    yield _polarity(behaviour.output_names, minimum.complemented)


def _connections(minimum: Minimum) -> str:
    cover = minimum.cover
    first = (
        f"{plural(cover.links, 'connection')}: {plural(cover.literals, 'literal')} and "
        f"{plural(cover.links - cover.literals, 'OR link')}"
    )
    terms = plural(minimum.count, "term")
    if minimum.connections is None:
        return f"{first}; whether {terms} can do with fewer is not known."
    where = " in these polarities" if minimum.connections == "these polarities" else ""
    return f"{first}; by the solver's word no set of {terms}{where} has fewer."


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


def proof_sentence(proof: Proof) -> str:
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
    return (
        f"The fuse file was read back from its own bytes, and {how}: it is {verdict} the design "
        "wherever the design demands 0 or 1."
    )
