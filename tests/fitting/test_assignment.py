"""The cheapest assignment held against trying every one."""

import random
from itertools import permutations

from pla.fitting.assignment import cheapest_assignment


def every_assignment(costs, partners):
    for chosen in permutations(partners, len(costs)):
        if all(p in wishes for p, wishes in zip(chosen, costs, strict=True)):
            yield sum(wishes[p] for p, wishes in zip(chosen, costs, strict=True))


def test_cheapest_assignment_against_brute_force():
    rng = random.Random(7)
    without = 0
    for _ in range(300):
        partners = [f"p{k}" for k in range(rng.randint(1, 6))]
        scale = rng.choice([3, 10, 10**30])
        costs = [
            {p: rng.randint(0, scale) for p in partners if rng.random() < 0.7}
            for _ in range(rng.randint(0, 5))
        ]
        cheapest = min(every_assignment(costs, partners), default=None)
        found = cheapest_assignment(costs)
        if cheapest is None:
            without += 1
            assert found is None
            continue
        assert found is not None
        assert len(set(found)) == len(costs)
        assert sum(wishes[p] for p, wishes in zip(found, costs, strict=True)) == cheapest
    assert 20 < without < 200
