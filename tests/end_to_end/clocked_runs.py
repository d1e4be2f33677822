"""What a part does against what a clocked design asks, clock by clock from power-up on.

The levels at the pins come from the oracle, the wanted ones from the design's own account.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from clocked_follower import Follower, Z
from oracles.clocked_simulation import run

if TYPE_CHECKING:
    import random
    from collections.abc import Mapping

    from clocked_follower import ClockedDesign
    from oracles.device_description import Description


@dataclass
class ClockedRun:
    """Many independent sequences of possible inputs.

    In each clock period the inputs change while the clock is at rest, and then comes the edge; the
    pins are looked at after both.

    Attributes:
        design: What is asked.
        pins: Pin of every input, of the clock and of every output.
        falling: The part's registers take at the edge to a low clock pin.
        sequences: How many.
        clocks: How many periods each.
        starts: Power-up is what the design asks for; otherwise what the registers come up with is
            left open, as it is in a part that does not say.
        tied: Levels of pins that carry no signal.
    """

    design: ClockedDesign
    pins: Mapping[str, int]
    falling: bool = False
    sequences: int = 10
    clocks: int = 30
    starts: bool = True
    tied: Mapping[int, int] = field(default_factory=dict)

    def differences(self, device: Description, states: list[int], rng: random.Random) -> list[str]:
        """What some pin shows and should not, in words."""
        points = self.points(rng)
        power_up = {key: rng.getrandbits(self.sequences) for key in device.cells}
        found = run(device, states, self.steps(points), self.sequences, power_up)
        return [
            text
            for case in range(self.sequences)
            for text in self.one([row[case] for row in points], found, case)
        ]

    def points(self, rng: random.Random) -> list[list[int]]:
        """Inputs of each period, in each sequence."""
        rows = [[self.design.random_inputs(rng) for _ in range(self.sequences)]]
        while len(rows) < self.clocks:
            rows.append([self.design.random_inputs(rng, before) for before in rows[-1]])
        return rows

    def steps(self, points: list[list[int]]) -> list[dict[int, tuple[int, int]]]:
        everywhere, low = (1 << self.sequences) - 1, self.design.active_low
        clock, rest = self.pins["clk"], int(self.falling)
        steps = []
        for row in points:
            levels = {pin: everywhere * level for pin, level in self.tied.items()}
            for bit, name in enumerate(self.design.input_names):
                if name in self.pins:
                    levels[self.pins[name]] = sum(
                        1 << case for case, point in enumerate(row) if point >> bit & 1 != low[name]
                    )
            levels[clock] = everywhere * rest
            steps.append({pin: (everywhere, level) for pin, level in levels.items()})
            steps.append({clock: (everywhere, everywhere * (1 - rest))})
        return steps

    def one(self, points, found, case):
        """The differences of one sequence, up to the first step that has any."""
        follower = Follower(self.design, points[0], starts=self.starts)
        for clock, point in enumerate(points):
            follower.apply(point)
            for edge in (False, True):
                if edge:
                    follower.clock()
                snapshot = found[2 * clock + edge]
                wrong = [
                    f"sequence {case}, clock {clock}{' edge' * edge}: {text}"
                    for text in self.compare(follower, snapshot.pins, case)
                ]
                if wrong:
                    return wrong
        return []

    def compare(self, follower, levels, case):
        wrong, low = [], self.design.active_low
        for name, value in follower.wanted().items():
            level = levels[self.pins[name]].at(case)
            wanted = value if value in {None, Z} else str(value ^ low[name])
            if wanted is None and level in "01":
                follower.observe(name, int(level) ^ low[name])
            elif wanted is None or level != wanted:
                wrong.append(f"{name} on pin {self.pins[name]} is {level}, not {wanted}")
        return wrong
