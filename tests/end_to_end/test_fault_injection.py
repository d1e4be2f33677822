"""A fuse flipped in a written file: the oracle sees it wherever the link matters.

This tests the oracle as much as the files. What a flipped link does is predicted on a road of its
own: from the printed terms, the truth about the random array, and one point at a time.
"""

import random
import re
import tomllib

import pytest
from oracles.array_oracle import UnreadableError, read_transmission
from random_designs import FREE
from test_random_plans import checksum, plan, random_case, simulated


def flipped(data, fuse):
    """The file with one state turned and both sums mended."""
    body = bytearray(data[:-4])
    found = 0
    for match in re.finditer(rb"\nL(\d+)[ \r\n]+([01\r\n]+)\*", data):
        places = [at for at in range(*match.span(2)) if data[at : at + 1] in b"01"]
        if int(match[1]) <= fuse < int(match[1]) + len(places):
            body[places[fuse - int(match[1])]] ^= 1
            found += 1
    assert found == 1
    states = list(read_transmission(data).states)
    states[fuse] ^= 1
    mended = re.sub(rb"\nC[0-9A-F]{4}\*", b"\nC%04X*" % checksum(states), bytes(body))
    return mended + b"%04X" % (sum(mended) % 65536)


class Predicted:
    """The array as the printed terms and the device file's own words have it."""

    def __init__(self, case, document, states):
        self.case, self.pins, self.states = case, document["pins"], states
        design, made = case.design, case.made
        device = tomllib.loads(made.text)
        links = device["links"]
        all_lines = {(role[2], role[3]) for role in made.roles.values() if role[0] == "and"}
        all_lines.discard((None, False))
        blank_joins = links["blank"] == links["connected"]
        # Spare rows of a one-time part that are joined to no sum stay blank.
        filled = links["unused_term"] == "dead" and device["technology"] == "erasable"
        lines = all_lines if blank_joins or filled else set()
        sums = set(made.outputs) if blank_joins else set()
        self.rows = [(set(lines), set(sums)) for _ in range(made.terms)]
        for row, term in enumerate(document["terms"]):
            joined = {
                (self.pins[name], (sign == "0") != design.active_low[name])
                for name, sign in zip(design.input_names, term["inputs"], strict=True)
                if sign != "-"
            }
            self.rows[row] = (joined, {self.pins[name] for name in term["outputs"]})
        self.inverts = {
            self.pins[name]: design.active_low[name] != (name in document["complemented"])
            for name in design.output_names
        }

    def flip(self, fuse):
        """Turn one link; a link back by turning it again."""
        kind, *role = self.case.made.roles[fuse]
        if kind == "and" and role[1] is not None:
            self.rows[role[0]][0].symmetric_difference_update({(role[1], role[2])})
        if kind == "or":
            self.rows[role[0]][1].symmetric_difference_update({role[1]})
        if kind == "cell" and role[0] in self.inverts:
            links, shows = self.case.array.cells[role[0]]
            setting = "".join(str(self.states[f] ^ (f == fuse)) for f in links)
            self.inverts[role[0]] = {"sum": False, "sum'": True}.get(shows.get(setting))

    def values(self):
        """Asserted value of each output at each point; ``None`` for a cell in no mode."""
        design = self.case.design
        found = {name: [] for name in design.output_names}
        for point in range(design.points):
            levels = dict.fromkeys(self.case.made.inputs, 0)
            for index, name in enumerate(design.input_names):
                if name in self.pins:
                    levels[self.pins[name]] = (point >> index & 1) ^ design.active_low[name]
            active = [
                sums
                for lines, sums in self.rows
                if all(levels[pin] ^ complement for pin, complement in lines)
            ]
            for name in design.output_names:
                pin = self.pins[name]
                invert = self.inverts[pin]
                value = any(pin in sums for sums in active)
                found[name].append(
                    None if invert is None else value ^ invert ^ design.active_low[name]
                )
        return found


def chosen_fuses(case, rng):
    """All configuration links, a spare fuse, and some links of the arrays."""
    of = {}
    for fuse, role in sorted(case.made.roles.items()):
        of.setdefault(role[0], []).append(fuse)
    picked = [*of.get("cell", []), *of.get("spare", [])[:1]]
    for kind in ("and", "or"):
        picked += rng.sample(of[kind], min(25, len(of[kind])))
    return picked


def asserted_levels(case, document, states):
    try:
        _, actual = simulated(case, document["pins"], states)
    except UnreadableError as refused:
        assert "which is no mode" in str(refused)  # noqa: PT017 - one of two regular outcomes
        return None
    return {
        name: [bool(value >> point & 1) for point in range(case.design.points)]
        for name, value in actual.items()
    }


@pytest.mark.parametrize("seed", range(20))
def test_flipped_links(seed, tmp_path, capsys):
    case = random_case(seed, tmp_path)
    code, document = plan(case, tmp_path / "out", capsys)
    if code == 1:
        assert document["fits"] is False
        return
    data = (tmp_path / "out" / "design.jed").read_bytes()
    states = read_transmission(data).states
    predicted = Predicted(case, document, states)
    before = predicted.values()
    assert asserted_levels(case, document, states) == before
    wrong = {"and": 0, "or": 0, "cell": 0, "spare": 0}
    for fuse in chosen_fuses(case, random.Random(seed)):
        turned = read_transmission(flipped(data, fuse)).states
        assert [f for f, state in enumerate(turned) if state != states[f]] == [fuse]
        predicted.flip(fuse)
        expected = predicted.values()
        found = asserted_levels(case, document, turned)
        if found is None:
            assert case.made.roles[fuse][0] == "cell"
        else:
            assert found == expected
        if found is None or breaks(case.design, found):
            wrong[case.made.roles[fuse][0]] += 1
        predicted.flip(fuse)
        predicted.inverts = dict(Predicted(case, document, states).inverts)
    assert predicted.values() == before
    assert wrong["spare"] == 0
    assert sum(wrong.values()) > 0


def breaks(design, found):
    """Whether an output differs from the truth table where it is not free."""
    return any(
        value is not FREE and value != got
        for name, wanted in zip(design.output_names, design.table, strict=True)
        for value, got in zip(wanted, found[name], strict=True)
    )
