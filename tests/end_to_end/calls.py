"""Calling the command as a user or another program does."""

import json
import os
import random
import subprocess
import sys
from pathlib import Path

from pla.cli.main import run

GOLDEN = Path(__file__).parent / "golden"
CISTERN = str(GOLDEN / "cistern.toml")
SAW_BENCH = str(GOLDEN / "saw_bench.toml")


def call(capsys, *arguments):
    """Exit code, standard output, standard error."""
    code = run([str(a) for a in arguments])
    shown = capsys.readouterr()
    return code, shown.out, shown.err


def call_json(capsys, *arguments):
    """Exit code and the one document that is all of standard output."""
    code, out, _ = call(capsys, *arguments, "--json")
    return code, document(out)


def document(out):
    """The document of a text, with the order of all its keys checked."""

    def ordered(pairs):
        keys = [key for key, _ in pairs]
        # A line of pins or signals is as much an object as the document itself.
        assert keys == sorted(keys)
        assert len(keys) == len(set(keys))
        return dict(pairs)

    found = json.loads(out, object_pairs_hook=ordered)
    assert found["schema_version"] == 1
    return found


def process(arguments, folder, seed="0"):
    """A process of its own, started in `folder`; strings hash as `seed` has it."""
    return subprocess.Popen(
        [sys.executable, "-m", "pla", *map(str, arguments)],
        cwd=folder,
        env=os.environ | {"PYTHONHASHSEED": seed},
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
    )


def contents(folder):
    return {path.name: path.read_bytes() for path in sorted(Path(folder).iterdir())}


def hard_design(path, width, outputs):
    """A design of random functions, whose minimum takes some work to prove."""
    rng = random.Random(3)
    lines = ["[inputs]", f"b = {width}", "[outputs]"]
    lines += [f"f{j} = 1" for j in range(outputs)]
    for j in range(outputs):
        on = [n for n in range(1 << width) if rng.random() < 0.5]
        lines += [f"[minterms.f{j}]", 'of = "b"', f"on = {on}", "others = 0"]
    path.write_text("\n".join(lines) + "\n", encoding="utf-8")
    return path


def is_text_list(value):
    return isinstance(value, list) and all(isinstance(item, str) for item in value)
