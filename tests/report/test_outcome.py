"""Fed-back signals followed to the inputs, against evaluating term by term at every point."""

from __future__ import annotations

import tempfile
from pathlib import Path
from types import SimpleNamespace

from hypothesis import given, settings
from hypothesis import strategies as st
from report_designs import designs, holds

from pla.logic.cubes import Cover, Cube
from pla.report.audit import at_impossible, audit, open_together
from pla.report.audit_tables import enable_table, summary_table
from pla.report.outcome import Outcome, outcomes_of_minimum, outcomes_of_plan

INPUTS = 3


@st.composite
def plans(draw):
    """Three sums, of which the later ones may use the earlier, and enables on some of them.

    Input 3 is fed back from cell "a", input 4 from cell "b", whose sum may use input 3.
    """

    def cubes(size, most):
        text = st.text("01--", min_size=size, max_size=size)
        return [
            Cube.parse(t.ljust(5, "-")) for t in draw(st.lists(text, min_size=0, max_size=most))
        ]

    sums = [cubes(5, 3), cubes(3, 3), cubes(4, 3)]  # the output, then "a" and "b"
    complemented = [draw(st.booleans()) for _ in sums]
    enable = draw(st.none() | st.text("01--", min_size=5, max_size=5).map(Cube.parse))
    cover = Cover.of(5, [Cube(c.ones, c.zeros, 1 << j) for j, own in enumerate(sums) for c in own])
    placed = [
        SimpleNamespace(
            index=j,
            complemented=complemented[j],
            enable=None if j or enable is None else SimpleNamespace(cube=enable),
            cell=SimpleNamespace(key=key),
        )
        for j, key in enumerate((7, "a", "b"))
    ]
    inputs = [SimpleNamespace(index=i, fed_by=None) for i in range(INPUTS)]
    inputs += [SimpleNamespace(index=3, fed_by="a"), SimpleNamespace(index=4, fed_by="b")]
    design = SimpleNamespace(inputs=inputs[:INPUTS], outputs=[None])
    return SimpleNamespace(
        design=design, inputs=inputs, outputs=placed, minimum=SimpleNamespace(cover=cover)
    ), (sums, complemented, enable)


def summed(cubes, point):
    return any(holds(cube, point) for cube in cubes)


@settings(max_examples=150, deadline=None)
@given(plans())
def test_outcomes_are_what_the_terms_give(made):
    plan, (sums, complemented, enable) = made
    (outcome,) = outcomes_of_plan(plan)
    for p in range(1 << INPUTS):
        a = summed(sums[1], p) != complemented[1]
        b = summed(sums[2], p | a << 3) != complemented[2]
        full = p | a << 3 | b << 4
        assert summed(outcome.sum, p) == summed(sums[0], full)
        assert outcome.complemented == complemented[0]
        if enable is None:
            assert outcome.drives is None
        else:
            assert summed(outcome.drives, p) == holds(enable, full)


@settings(max_examples=60, deadline=None)
@given(designs(enables=True))
def test_high_impedance_is_told_from_values(design):
    """Every combination that is open but not disabled once, with Z exactly where it is disabled."""
    with tempfile.TemporaryDirectory() as folder:
        behaviour, minimum = design.read(Path(folder))
    outcomes = [
        Outcome(o.sum, o.complemented, output.enable.on if output.enable else None)
        for o, output in zip(outcomes_of_minimum(minimum), behaviour.outputs, strict=True)
    ]
    found = audit(behaviour, outcomes)
    assert {s.reason for s in found} <= {"never", "others", "x"}
    for j, outcome in enumerate(outcomes):
        for p in range(len(design.never)):
            driven = design.driven[j][p]
            value = summed(outcome.sum, p) != outcome.complemented if driven else None
            entries = [(s.reason, s.value) for s in found if s.output == j and summed(s.cubes, p)]
            said = design.values[j][p]
            assert entries == ([(said, value)] if said not in ("0", "1", "disabled") else [])
    switched = at_impossible(behaviour, outcomes)
    for j, output in enumerate(behaviour.outputs):
        for p, impossible in enumerate(design.never):
            entries = [s.drives for s in switched if s.output == j and summed(s.cubes, p)]
            expected = [design.driven[j][p]] if impossible and output.enable else []
            assert entries == expected
    together = open_together(behaviour, outcomes)
    for entry in together or ():
        for p in range(len(design.never)):
            if holds(entry.cube, p):
                for j, value in enumerate(entry.values):
                    assert (value is None) == (not design.driven[j][p])
    table = summary_table(behaviour, found, ())
    for row in table.rows:
        own = design.values[behaviour.output_names.index(row[0])]
        numbers = [int(cell) for cell in row[2:]]
        assert numbers[0] == sum(numbers[1:])
        if row[1] == "impossible":
            assert numbers[0] == own.count("never")
    enables = [output for output in behaviour.outputs if output.enable]
    told = [r for r in table.remarks if "while disabled" in r]
    assert len(told) == len({output.enable.text for output in enables})
    assert (enable_table(behaviour, switched) is not None) == bool(enables)
