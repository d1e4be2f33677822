"""The state codes for which a machine needs the fewest product terms.

Machines of few states are settled by exhaustion: of all codes that are alike one is looked at, and
turned down as soon as a lower bound shows that it needs no fewer terms than the best so far. For
larger ones the codes are sought by descent over single moves and exchanges from several beginnings,
one of them from face constraints (`pla.logic.faces`), each step judged by a guess of the terms; the
best few are then minimized. Counting is always among them.
"""

from __future__ import annotations

import random
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Literal

from pla.logic.code_space import Assignment, Codes, Space, sorted_bits
from pla.logic.effort import Effort
from pla.logic.faces import codes_by_faces, faces_of
from pla.logic.limited import Need, alone, fewest_terms, guessed_terms
from pla.logic.machine import counting, encoded, fewest_bits
from pla.logic.phases import Polarity

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.logic.machine import Machine

__all__ = ["MAX_EXHAUSTED", "MAX_EXHAUSTED_STATES", "CodeSearch", "code_effort", "search"]

MAX_EXHAUSTED_STATES = 5
MAX_EXHAUSTED = 1_500
"""Codes that are not alike, up to which all are looked at."""

MAX_KICKS = 8
_KICK = 3  # moves that lead away from where a descent ended
_SETTLED = 6  # of the best guesses so many are minimized
_GUESSING = 0.7  # share of the effort that descents may use up
_COUNTING = 0.2  # share of the effort for the minimum with counting
_ONE = 0.05  # share of the effort for any other minimum
_SEED = 20
_ENOUGH_WORK = 120_000.0


@dataclass(frozen=True, slots=True)
class CodeSearch:
    """The best codes found and what is known about them.

    Attributes:
        codes: For each state its code; bit ``i`` is state bit ``i``.
        bits: Their length.
        terms: Product terms that the machine needs with them: shared ones, or the sum over all
            gates, as asked. More than the minimum only if `settled` is false.
        lower_bound: No codes of the lengths that were asked for need fewer.
        proven_by: ``certificate`` where bounds checked in exact arithmetic speak for every code,
            ``solver`` where some rest on floating point, ``None`` where codes were not looked at or
            a bound falls short.
        settled: Whether `terms` is the proven minimum for these codes.
        counting: Terms with the codes 0, 1, 2 … (complemented in the bits that the start state
            needs otherwise).
        tried: Different codes that were guessed at or minimized.
        minimized: Those of them that were minimized, or shown to need no fewer terms.
        method: How the codes were sought.
        exhausted: Whether the effort ran out; then more of it may find better codes.
        clock: Whether the clock cut in, so that the answer may not repeat.
    """

    codes: Codes
    bits: int
    terms: int
    lower_bound: int
    proven_by: Literal["certificate", "solver"] | None
    settled: bool
    counting: int
    tried: int
    minimized: int
    method: Literal["exhaustion", "local search"]
    exhausted: bool
    clock: bool

    @property
    def proven(self) -> bool:
        return self.proven_by is not None

    @property
    def texts(self) -> tuple[str, ...]:
        """For each state its code as ``0`` and ``1``, highest bit first."""
        return tuple(f"{code:0{self.bits}b}" for code in self.codes)


def code_effort() -> Effort:
    """The effort of a search where nothing else is asked for."""
    return Effort(work=_ENOUGH_WORK, reserve=0.0)


def search(
    machine: Machine,
    *,
    state_polarity: Polarity | None = None,
    output_polarities: Sequence[Polarity] | None = None,
    start_code: int | None = None,
    extra_bits: int = 0,
    shared: bool = True,
    effort: Effort | None = None,
) -> CodeSearch:
    """Find codes with the fewest product terms, next states and outputs together.

    Args:
        machine: The symbolic table; its next states go to D registers.
        state_polarity: What the sums of the state bits may be; by default either. Where it is
            either, the start state may have any code at the same price.
        output_polarities: What the sums of the outputs may be; by default either.
        start_code: The code of the start state, where the power-up of the registers asks for one;
            by default any, and 0 where that costs nothing.
        extra_bits: How many bits more than necessary may be used; taken only where they save terms.
        shared: Whether all sums share the terms; else each has its own gate and the terms of all
            gates are added.
        effort: The budget; by default enough for machines of 16 states.

    Raises:
        ValueError: If the start code has too many bits, or the machine has too many inputs, outputs
            or states for one function.
    """
    bits = fewest_bits(machine.n_states)
    if start_code is not None and not 0 <= start_code < 1 << bits:
        raise ValueError(f"the start code must have at most {bits} bits")
    budget = effort or code_effort()
    spaces = [
        Space(
            machine.n_states,
            bits + more,
            machine.start,
            start_code,
            state_polarity or Polarity(),
            tuple(output_polarities or [Polarity()] * machine.n_outputs),
        )
        for more in range(extra_bits + 1)
    ]
    hunts: list[_Hunt] = []
    whole = True
    for space in spaces:
        part = _part(budget, 1 / (len(spaces) - len(hunts)))
        given = part.work
        hunt = _Hunt(machine, space, shared, part)
        hunt.limit = min((h.limit for h in hunts), default=hunt.limit)
        if not hunts:
            hunt.settle(space.admitted(counting(machine)), _COUNTING)
        few = _all_can_be_looked_at(space)
        hunt.descend(0 if few else MAX_KICKS)
        whole = few and hunt.exhaust() and whole
        hunts.append(hunt)
        _charge(budget, part, given)
    best = min(hunts, key=lambda h: (h.limit, h.space.bits))
    counted = next(iter(hunts[0].needs.values()))
    return _outcome(machine, best, hunts, counted, whole=whole)


def _outcome(
    machine: Machine, best: _Hunt, hunts: Sequence[_Hunt], counted: Need, *, whole: bool
) -> CodeSearch:
    terms, codes = best.needs[best.winner].terms, best.winner
    if best.space.mirrored:
        codes = best.space.moved(codes, best.space.start_code or 0)
    exact = trusted = min(terms, _fewest_for_any_codes(machine))
    if whole:
        every = [need for hunt in hunts for need in hunt.needs.values()]
        exact, trusted = (
            min(terms, *bounds) for bounds in ([n.exact for n in every], [n.trusted for n in every])
        )
    proven = terms == trusted
    return CodeSearch(
        codes,
        best.space.bits,
        terms,
        trusted,
        ("certificate" if terms == exact else "solver") if proven else None,
        best.needs[best.winner].trusted == terms,
        counted.terms,
        sum(len(hunt.seen) for hunt in hunts),
        sum(len(hunt.needs) for hunt in hunts),
        "exhaustion" if whole else "local search",
        not proven and any(hunt.exhausted for hunt in hunts),
        any(hunt.effort.clock for hunt in hunts),
    )


def _all_can_be_looked_at(space: Space) -> bool:
    return space.n_states <= MAX_EXHAUSTED_STATES and space.size() <= MAX_EXHAUSTED


def _fewest_for_any_codes(machine: Machine) -> int:
    """Different next states need different sets of active terms."""
    return (len({t.then for t in machine.transitions}) - 1).bit_length()


def _part(of: Effort, share: float) -> Effort:
    return Effort(max(1.0, of.work * share), of.nodes, of.seconds_left, reserve=0.0)


def _charge(effort: Effort, part: Effort, given: float) -> None:
    effort.work -= given - part.work
    effort.clock = effort.clock or part.clock


class _Hunt:
    """What has been tried of the codes of one length.

    Attributes:
        limit: Terms of the best codes so far, of whatever length.
        needs: For each code that was minimized what is known of its terms; by representative.
        seen: Representatives of all codes that were looked at.
        winner: The best of `needs`.
        exhausted: Whether something was left out for want of effort.
    """

    def __init__(self, machine: Machine, space: Space, shared: bool, effort: Effort) -> None:
        self.machine = machine
        self.space = space
        self.effort = effort
        self.limit: int = 1 << 60
        self.needs: dict[Codes, Need] = {}
        self.seen: set[Codes] = set()
        self.winner: Codes = ()
        self.exhausted = False
        self._shared = shared
        self._given = effort.work
        self._guessing = effort
        self._guesses: dict[Assignment, tuple[int, int]] = {}
        self._guessed: dict[Codes, tuple[int, int]] = {}

    def settle(self, codes: Codes, share: float = _ONE) -> Need:
        """Minimize with these codes, or show that they need no fewer terms than the best so far."""
        codes = self.space.representative(codes)
        if codes in self.needs:
            return self.needs[codes]
        self.seen.add(codes)
        function = encoded(self.machine, codes, self.space.bits)
        part = _part(self.effort, min(1.0, share * self._given / max(1.0, self.effort.work)))
        given = part.work
        polarities = self.space.polarities
        if self._shared:
            need = fewest_terms(function, polarities, self.limit if self.needs else None, part)
        else:
            need = Need(0, 0, 0)
            for gate, polarity in zip(alone(function), polarities, strict=True):
                need += fewest_terms(gate, [polarity], None, part)
        _charge(self.effort, part, given)
        self.exhausted = self.exhausted or part.exhausted
        # A guess is a cover, too, and may be the better one where the effort was not enough.
        guessed, _ = self._guessed.get(codes, (need.terms, 0))
        need = replace(need, terms=min(need.terms, guessed))
        self.needs[codes] = need
        if need.terms < self.limit:
            self.limit, self.winner = need.terms, codes
        return need

    def descend(self, kicks: int) -> None:
        """Descents from several beginnings and from near the best end; then minimize.

        Args:
            kicks: How often to begin anew a few random moves off the best end so far.
        """
        self._guessing = _part(self.effort, _GUESSING)
        given = self._guessing.work
        complemented = tuple(not p.true for p in self.space.output_polarities)
        begun = dict.fromkeys(Assignment(codes, complemented) for codes in self._beginnings())
        ends = [self._descent(at) for at in sorted(begun, key=self._guess)]
        best = min(ends, key=self._guess)
        chance = random.Random(_SEED)  # noqa: S311 - the same moves at every run
        for _ in range(kicks):
            if self._guessing.exhausted:
                break
            end = self._descent(self._kicked(best, chance))
            if self._guess(end) < self._guess(best):
                best = end
        self.exhausted = self.exhausted or self._guessing.exhausted
        _charge(self.effort, self._guessing, given)
        ranked = sorted(self._guessed, key=lambda codes: self._guessed[codes])
        for codes in ranked[:_SETTLED]:
            self.settle(codes)

    def exhaust(self) -> bool:
        """Look at all codes; whether the effort was enough for that."""
        for codes in self.space.representatives():
            if self.effort.exhausted:
                self.exhausted = True
                return False
            self.settle(codes)
        return True

    def _beginnings(self) -> Iterator[Codes]:
        """Counting, Gray code in order of the states, and codes that meet face constraints."""
        counted = self.space.admitted(counting(self.machine))
        yield counted
        yield self.space.admitted(tuple(code ^ code >> 1 for code in counting(self.machine)))
        faces = faces_of(self.machine, self._guessing)
        yield codes_by_faces(self.space, faces, counted)

    def _guess(self, at: Assignment) -> tuple[int, int]:
        """(terms, literals) by guess; the order of bits does not matter."""
        key = at._replace(codes=sorted_bits(at.codes, self.space.bits))
        if key not in self._guesses:
            alike = self.space.representative(at.codes)
            self.seen.add(alike)
            function = encoded(self.machine, key.codes, self.space.bits)
            state = (not self.space.state_polarity.true,) * self.space.bits
            complemented = state + at.complemented
            if self._shared:
                self._guesses[key] = guessed_terms(function, complemented, self._guessing)
            else:
                parts = [
                    guessed_terms(part, [c], self._guessing)
                    for part, c in zip(alone(function), complemented, strict=True)
                ]
                self._guesses[key] = (sum(t for t, _ in parts), sum(k for _, k in parts))
            guess = self._guesses[key]
            self._guessed[alike] = min(guess, self._guessed.get(alike, guess))
        return self._guesses[key]

    def _descent(self, at: Assignment) -> Assignment:
        """Take every neighbour that is better, until none is."""
        passed = 0
        while True:
            neighbours = list(self.space.neighbours(at))
            # Go on where the last step was taken, so that no state is favoured.
            turn = passed % max(1, len(neighbours))
            for tried in neighbours[turn:] + neighbours[:turn]:
                if self._guessing.exhausted:
                    return at
                passed += 1
                if self._guess(tried) < self._guess(at):
                    at = tried
                    break
            else:
                return at

    def _kicked(self, at: Assignment, chance: random.Random) -> Assignment:
        for _ in range(_KICK):
            at = chance.choice(list(self.space.neighbours(at)))
        return at
