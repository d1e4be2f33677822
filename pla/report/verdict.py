"""How good a cover is and how that is known, in sentences."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.report.notation import listed, plural

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.fuses.proof import Proof
    from pla.logic.minimize import Minimum

__all__ = ["connections_sentence", "count_sentences", "polarity_sentence", "proof_sentence"]


def count_sentences(minimum: Minimum) -> list[str]:
    """Number of terms, lower bound, and by what the two are known to meet."""
    count = plural(minimum.count, "product term")
    if minimum.proven:
        said = [
            f"{count}. Lower bound {minimum.lower_bound}: proven, no smaller set of shared terms "
            "does the job in the polarities that are allowed."
        ]
        if minimum.proven_by == "certificate":
            said.append("The bound was checked in exact arithmetic (certificate).")
        else:
            said.append(
                "The bound rests on the floating-point arithmetic of the integer-programming "
                "solver (solver)."
            )
    else:
        gap = minimum.count - minimum.lower_bound
        said = [
            f"{count}. Lower bound {minimum.lower_bound}: not proven smallest, the gap is {gap}. "
            f"Sets of {minimum.lower_bound} to {minimum.count - 1} terms were neither found nor "
            "ruled out."
        ]
    if minimum.clock:
        said.append(
            "The time limit cut the search short, so that another run may give another result."
        )
    return said


def connections_sentence(minimum: Minimum) -> str:
    """Literals and OR links, and whether fewer are possible with as many terms."""
    cover = minimum.cover
    ors = cover.links - cover.literals
    first = (
        f"{plural(cover.links, 'connection')}: {plural(cover.literals, 'literal')} and "
        f"{plural(ors, 'OR link')}"
    )
    if minimum.connections == "all polarities":
        return f"{first}; no set of so many terms has fewer, by the solver's word."
    if minimum.connections == "these polarities":
        return (
            f"{first}; no set of so many terms in these polarities has fewer, by the solver's word."
        )
    return f"{first}; whether so many terms can do with fewer is not known."


def polarity_sentence(names: Sequence[str], complemented: Sequence[bool]) -> str:
    """Which sums are complements."""
    inverted = [name for name, c in zip(names, complemented, strict=True) if c]
    if not inverted:
        return "Every sum is the asserted function itself (T)."
    if len(inverted) == len(names):
        return "Every sum is the complement of the asserted function (C)."
    which = listed(inverted)
    are = "is the complement" if len(inverted) == 1 else "are complements"
    sums = "The sum of" if len(inverted) == 1 else "The sums of"
    return f"{sums} {which} {are} of the asserted function (C), all others are the function (T)."


def proof_sentence(proof: Proof) -> str:
    """How the fuse file was compared with the design."""
    if proof.method == "simulation":
        how = (
            f"the array it describes was simulated from pin to pin for all {proof.cases} input "
            "combinations"
        )
    else:
        how = f"the terms it describes were compared with the design as cubes, {proof.cases} in all"
    verdict = "equal to" if proof.equal else "NOT equal to"
    return (
        f"The fuse file was read back from its own bytes, and {how}: {verdict} the design wherever "
        "the design says 0 or 1."
    )
