"""Prime implicants of all functions of a few variables at once; no import of the program."""

from __future__ import annotations

import numpy as np
from oracles.cover_search import cubes, raised


def prime_counts_of_all_functions(inputs: int) -> np.ndarray:
    """``int[2^(2^n)]``: how many primes the function with each bit mask as ON-set has (n <= 4)."""
    functions = np.arange(1 << (1 << inputs), dtype=np.uint32)
    implicant = [functions & np.uint32(m) == m for m, _ in cubes(inputs)]
    counts = np.zeros(len(functions), dtype=np.int64)
    for held, above in zip(implicant, raised(inputs), strict=True):
        prime = held.copy()
        for k in above:
            prime &= ~implicant[k]
        counts += prime
    return counts
