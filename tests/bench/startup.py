"""Whole-process times in one run: the command beside what it cannot avoid importing.

Run from the top of the project; prints medians and ratios. Never part of the tests, since times
depend on what else the machine does.
"""

from __future__ import annotations

import argparse
import shutil
import statistics
import subprocess
import sys
import tempfile
import time
from pathlib import Path

TOP = Path(__file__).resolve().parents[2]
PYTHON = sys.executable
FUSEPLAN = str(Path(PYTHON).with_name("fuseplan"))


def seconds(command: list[str]) -> float:
    begun = time.perf_counter()
    subprocess.run(command, check=True, capture_output=True)
    return time.perf_counter() - begun


def main() -> None:
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--rounds", type=int, default=15)
    rounds = parser.parse_args().rounds
    folder = Path(tempfile.mkdtemp())
    panel = str(TOP / "examples/dryer-panel.toml")
    plan = [
        FUSEPLAN,
        "plan",
        panel,
        "--device",
        "shared-14x40x8",
        "-o",
        str(folder / "out"),
        "--force",
    ]
    pairs = [
        ("plan (decimal panel)", plan, [PYTHON, "-c", "import numpy"], 4.0),
        ("--help", [FUSEPLAN, "--help"], [PYTHON, "-c", "import click"], 1.5),
        *(
            (
                f"terms {file.stem}",
                [FUSEPLAN, "terms", str(file)],
                [PYTHON, "-c", "import numpy"],
                None,
            )
            for file in sorted((TOP / "examples").glob("*.toml"))
        ),
    ]
    print(f"{'command':28} {'median':>9} {'beside':>9} {'ratio':>6}  wanted")
    for name, command, reference, wanted in pairs:
        seconds(command), seconds(reference)
        measured = [(seconds(reference), seconds(command)) for _ in range(rounds)]
        beside = statistics.median(r for r, _ in measured)
        own = statistics.median(c for _, c in measured)
        limit = f"<= {wanted}" if wanted else ""
        print(f"{name:28} {own:8.3f}s {beside:8.3f}s {own / beside:6.2f}  {limit}")
    shutil.rmtree(folder)


if __name__ == "__main__":
    main()
