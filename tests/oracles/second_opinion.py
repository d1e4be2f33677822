"""Covers by pyeda's heuristic minimizer, in a child process because faults there end the process.

As a script: reads lines of JSON (inputs, [[literal codes], [output codes]] …) from standard input
and answers each with a line of JSON. Nothing here imports the program.
"""

from __future__ import annotations

import json
import subprocess
import sys
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Sequence

    from oracles.functions import Table

SECONDS = 120


def heuristic_covers(tables: Sequence[Table]) -> list[list[tuple[int, int, int]] | None]:
    """For each table terms as (inputs at 1, inputs at 0, outputs); None where the child gave up."""
    answers: list[list[tuple[int, int, int]] | None] = []
    while len(answers) < len(tables):
        questions = "".join(json.dumps(_question(t)) + "\n" for t in tables[len(answers) :])
        child = subprocess.run(
            [sys.executable, __file__],
            input=questions,
            capture_output=True,
            text=True,
            timeout=SECONDS,
            check=False,
        )
        answers += [_terms(json.loads(line)) for line in child.stdout.splitlines()]
        if child.returncode:
            answers.append(None)
    return answers


def _question(table: Table):
    rows = []
    for p in range(1 << table.inputs):
        outputs = [
            1 if on >> p & 1 else 0 if off >> p & 1 else 2
            for on, off in zip(table.on, table.off, strict=True)
        ]
        if any(outputs):
            rows.append([[1 + (p >> i & 1) for i in range(table.inputs)], outputs])
    return [table.inputs, table.outputs, rows]


def _terms(cover) -> list[tuple[int, int, int]]:
    return [
        (
            sum(1 << i for i, code in enumerate(literals) if code == 2),
            sum(1 << i for i, code in enumerate(literals) if code == 1),
            sum(1 << j for j, code in enumerate(outputs) if code == 1),
        )
        for literals, outputs in cover
    ]


def _answer_all() -> None:
    from pyeda.boolalg import espresso
    from pyeda.boolalg.minimization import CONFIG

    for line in sys.stdin:
        inputs, outputs, rows = json.loads(line)
        espresso.set_config(**CONFIG)
        cover = sorted((tuple(literals), tuple(fed)) for literals, fed in rows)
        kind = espresso.FTYPE | espresso.DTYPE
        found = espresso.espresso(inputs, outputs, cover, kind) if cover else []
        print(json.dumps(sorted(found)), flush=True)


if __name__ == "__main__":
    _answer_all()
