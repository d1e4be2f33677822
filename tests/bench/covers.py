"""Counts, bounds, proofs and times of known functions, beside pyeda's heuristic in the same run.

Run from the top of the project. Never part of the tests: the counts are (tests/logic), the times
depend on the machine. ``--slow`` adds functions whose free polarity takes longer.
"""

from __future__ import annotations

import argparse
import sys
import time
from pathlib import Path

from tabulate import tabulate

sys.path[:0] = [str(Path(__file__).parents[1]), str(Path(__file__).parents[1] / "logic")]

from making import function_of
from oracles import functions
from oracles.second_opinion import heuristic_covers

from pla.logic.minimize import minimize
from pla.logic.phases import Polarity

FUNCTIONS = {
    "rd53": functions.count_of_ones(5),
    "rd73": functions.count_of_ones(7),
    "rd84": functions.count_of_ones(8),
    "adr4": functions.adder(4),
    "mlp4": functions.multiplier(4),
    "sqr6": functions.square(6),
    "9sym": functions.symmetric(9, range(3, 7)),
    "life": functions.life(),
    "segments": functions.seven_segments(),
    "gray8": functions.gray(8),
    "parity8": functions.parity(8),
}
SLOW = {"mlp4"}


def measured(function, polarity, outputs):
    begun = time.perf_counter()
    found = minimize(function, [polarity] * outputs)
    seconds = time.perf_counter() - begun
    proof = found.proven_by or f"bound {found.lower_bound}"
    return [found.primes, found.count, proof, found.cover.links, f"{seconds:.2f}"]


def main() -> None:
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--slow", action="store_true")
    slow = parser.parse_args().slow
    peers = heuristic_covers(list(FUNCTIONS.values()))
    rows = []
    for (name, table), peer in zip(FUNCTIONS.items(), peers, strict=True):
        function = function_of(table)
        true = measured(function, Polarity(complement=False), table.outputs)
        skipped = ["", "", "skipped", "", ""]
        free = skipped
        if slow or name not in SLOW:
            free = measured(function, Polarity(), table.outputs)
        shape = f"{table.inputs} x {table.outputs}"
        rows.append([name, shape, *true, "" if peer is None else len(peer), *free])
    part = ["primes", "terms", "proven by", "links", "s"]
    print(tabulate(rows, ["function", "shape", *part, "pyeda", *(f"free {p}" for p in part)]))


if __name__ == "__main__":
    main()
