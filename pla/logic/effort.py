"""How much work an answer may cost.

Work is counted, not timed, so that the same input gives the same answer on every machine; the clock
is only a safety net, and whoever was stopped by it says so.
"""

from __future__ import annotations

import time
from dataclasses import dataclass, field

__all__ = ["Effort"]


@dataclass(slots=True)
class Effort:
    """A budget that is used up along the way.

    Attributes:
        work: Simplex iterations, each weighed by the rows and columns it touches, in thousands.
        nodes: Branching nodes of one integer program of a thousand rows and columns.
        seconds: The safety net.
        clock: Whether the safety net cut in: the answer may then not repeat.
        reserve: Share of the work that is kept back for the first complete answer; used once.
    """

    work: float = 1_600_000.0
    nodes: int = 1_500
    seconds: float = 600.0
    clock: bool = False
    reserve: float = 0.5
    _started: float = field(default_factory=time.monotonic)

    def __post_init__(self) -> None:
        self.reserve *= self.work
        self.work -= self.reserve

    def renew(self) -> bool:
        """Turn to the reserve; whether there was any."""
        had = self.reserve > 0 and not self.clock
        self.work, self.reserve = self.work + self.reserve, 0.0
        return had

    def spend(self, iterations: int, size: int, *, clock: bool = False) -> None:
        self.work -= (iterations + 1) * size / 1000
        self.clock = self.clock or clock

    def nodes_for(self, size: int) -> int:
        """Branching nodes for a program of this many rows and columns."""
        return max(20, self.nodes * 1000 // max(1000, size))

    @property
    def seconds_left(self) -> float:
        return max(1.0, self.seconds - (time.monotonic() - self._started))

    @property
    def exhausted(self) -> bool:
        if time.monotonic() - self._started > self.seconds:
            self.clock = True
        return self.clock or self.work <= 0
