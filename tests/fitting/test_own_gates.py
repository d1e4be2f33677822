"""Outputs matched to cells that have terms of their own, or a part in a shared OR array.

What is expected comes from trying every way to put outputs on cells, with sums counted by an
exhaustive search that shares nothing with the program.
"""

import random
from dataclasses import replace
from functools import cache
from itertools import combinations, permutations, product

import pytest
from logic.making import random_table
from oracles.cover_search import fewest_connections, fewest_terms
from oracles.functions import Table, minterms
from small_devices import Gate, design, design_text, device, device_text, proven

from pla.device.catalogue import find_device
from pla.fitting.fit import fit
from pla.fitting.minima import Minima


def part_of(table, outputs, complemented):
    part = Table(table.inputs, *(tuple(s[j] for j in outputs) for s in (table.on, table.off)))
    return part.in_polarity(complemented)


@cache
def terms_of(table, outputs, complemented):
    """Terms of these outputs together on a shared array, in these polarities."""
    return fewest_terms(part_of(table, outputs, complemented))


@cache
def links_of(table, output, complemented):
    """Literals and OR links of the cheapest smallest sum of one output."""
    part = part_of(table, (output,), (complemented,))
    return fewest_connections(part, fewest_terms(part))


def every_way(table, low, gates, shared=0, places=None, reserve=0):
    """(terms, pins) of every way to put the outputs on the cells that holds them."""
    first = table.inputs + 1
    for chosen in permutations(range(len(gates)), table.outputs):
        pins = tuple(first + k for k in chosen)
        if any(pins[int(name[1:])] != pin for name, pin in (places or {}).items()):
            continue
        for inverted in product(*(gates[k].inversions for k in chosen)):
            # The pin of an active-low output shows the complement of the asserted function.
            complemented = tuple(i != is_low for i, is_low in zip(inverted, low, strict=True))
            joint = tuple(j for j, k in enumerate(chosen) if gates[k].terms is None)
            count = terms_of(table, joint, tuple(complemented[j] for j in joint)) if joint else 0
            if count > shared:
                continue
            own = [
                (terms_of(table, (j,), (complemented[j],)), gates[k].terms - reserve)
                for j, k in enumerate(chosen)
                if j not in joint
            ]
            if all(used <= has for used, has in own):
                yield count + sum(used for used, _ in own), pins


def sums_at(table, low, gates, pins, reserve):
    """(terms, connections) of every choice of polarities with the outputs on these own cells."""
    held = [gates[pin - table.inputs - 1] for pin in pins]
    for inverted in product(*(gate.inversions for gate in held)):
        sums = [(j, i != is_low) for j, (i, is_low) in enumerate(zip(inverted, low, strict=True))]
        terms = [terms_of(table, (j,), (c,)) for j, c in sums]
        if all(n <= gate.terms - reserve for n, gate in zip(terms, held, strict=True)):
            yield sum(terms), sum(links_of(table, j, c) for j, c in sums)


def checked(found, ways):
    """Whether it fits; it has to where there is any way, and as cheaply as can be."""
    best = min(ways, default=None)
    assert found.fits == (best is not None), found.reasons
    if best is None:
        assert found.reasons
        return False
    assert found.minimum.proven
    assert found.minimum.count == best[0]
    assert proven(found.plan)
    return True


def test_the_trap_of_sharing_where_it_is_worthless(tmp_path):
    """F = Σm(0,1,3,5), G = Σm(1,3,5,6,7): alone 3 and 2 terms; the joint minimum of 4 leaves G
    with 3 (recomputed by an exhaustive search).
    """
    table = minterms(3, [0, 1, 3, 5], [1, 3, 5, 6, 7])
    assert [terms_of(table, (j,), (False,)) for j in (0, 1)] == [3, 2]
    assert terms_of(table, (0, 1), (False, False)) == 4
    behaviour = design(tmp_path, design_text(table))
    own = [Gate(2, "sum"), Gate(3, "sum")]
    found = fit(behaviour, device(tmp_path, device_text(3, own)))
    assert found.fits
    assert found.plan.pins["y0"] == 5  # the cell with three terms
    assert found.plan.pins["y1"] == 4
    assert (found.minimum.count, found.minimum.lower_bound) == (5, 5)
    assert proven(found.plan)
    shared = [Gate(None, "sum"), Gate(None, "sum")]
    assert fit(behaviour, device(tmp_path, device_text(3, shared, 4))).minimum.count == 4
    tight = fit(behaviour, device(tmp_path, device_text(3, [Gate(2, "sum"), Gate(2, "sum")])))
    assert tight.reasons == (
        "y0 needs 3 product terms, and the largest cell it could have holds 2: 1 too many",
    )
    assert tight.lacking == 1


def random_gates(rng, outputs, most, *, shared=0.0):
    shapes = ["sum", "sum'", "either", "either"]
    return [
        Gate(None if rng.random() < shared else rng.randint(1, most), rng.choice(shapes))
        for _ in range(outputs + rng.choice([0, 0, 1, 2]))
    ]


@pytest.mark.parametrize(
    ("seed", "cases"),
    [pytest.param(1, 80, id="some"), pytest.param(300, 300, id="many", marks=pytest.mark.slow)],
)
def test_outputs_matched_to_cells_against_brute_force(tmp_path, seed, cases):
    rng = random.Random(seed)
    fitted = 0
    for _ in range(cases):
        inputs, outputs = rng.choice([(2, 3), (3, 2), (3, 3), (3, 4), (4, 2)])
        table = random_table(rng, inputs, outputs, dont_care=rng.choice([0, 0.2, 0.4]))
        low = [rng.random() < 0.4 for _ in range(outputs)]
        gates = random_gates(rng, outputs, 4 if inputs < 4 else 6)
        pins = [inputs + 1 + k for k in range(len(gates))]
        named = rng.sample(range(outputs), rng.choice([0, 0, 0, 1, min(2, outputs)]))
        places = dict(zip((f"y{j}" for j in named), rng.sample(pins, len(named)), strict=True))
        reserve = rng.choice([0, 0, 0, 1])
        behaviour = design(tmp_path, design_text(table, low, places))
        found = fit(behaviour, device(tmp_path, device_text(inputs, gates)), reserve=reserve)
        ways = list(every_way(table, low, gates, places=places, reserve=reserve))
        if checked(found, ways):
            fitted += 1
            # Of equally many terms the fewest connections, and of these the lowest pins, in order
            # of the outputs.
            ranked = [
                (terms, links, pins)
                for pins in {pins for terms, pins in ways if terms == found.minimum.count}
                for terms, links in sums_at(table, low, gates, pins, reserve)
            ]
            assert tuple(found.plan.pins[f"y{j}"] for j in range(outputs)) == min(ranked)[2]
            for output in found.plan.outputs:
                cell = gates[output.pin - inputs - 1]
                own = sum(bool(c.outputs >> output.index & 1) for c in found.minimum.cover)
                assert own <= cell.terms - reserve
    assert 0.3 * cases < fitted < 0.95 * cases


def test_own_and_shared_gates_against_brute_force_over_all_partitions(tmp_path):
    rng = random.Random(27)
    fitted = mixed = 0
    for _ in range(60):
        inputs, outputs = rng.choice([(3, 2), (3, 3), (3, 3), (4, 2)])
        table = random_table(rng, inputs, outputs, dont_care=rng.choice([0, 0.3]))
        low = [rng.random() < 0.4 for _ in range(outputs)]
        gates = random_gates(rng, outputs, 4, shared=0.5)
        shared = rng.randint(1, 6) if any(gate.terms is None for gate in gates) else 0
        behaviour = design(tmp_path, design_text(table, low))
        found = fit(behaviour, device(tmp_path, device_text(inputs, gates, shared)))
        if checked(found, every_way(table, low, gates, shared)):
            fitted += 1
            kinds = {gates[output.pin - inputs - 1].terms is None for output in found.plan.outputs}
            mixed += len(kinds) == 2
    assert 15 < fitted < 55
    assert mixed > 5


@pytest.mark.parametrize("inputs", [3, 4, 5])
def test_sums_are_the_smallest_in_either_polarity(tmp_path, inputs):
    rng = random.Random(inputs)
    for _ in range({3: 20, 4: 12, 5: 6}[inputs]):
        table = random_table(rng, inputs, 2, dont_care=rng.choice([0, 0.2, 0.5]))
        behaviour = design(tmp_path, design_text(table))
        minima = Minima()
        netlist = minima.netlist(behaviour)
        for output, complemented in product((0, 1), (False, True)):
            found = minima.alone(netlist, output, complemented)
            assert found.proven
            expected = terms_of(table, (output,), (complemented,))
            assert found.count == found.lower_bound == expected
            assert found.complemented[output] == complemented
            assert {cube.outputs for cube in found.cover} <= {1 << output}
        # Each in the polarity that its pin offers, and the sum over the outputs as the count.
        gates = [Gate(16, "sum"), Gate(16, "sum'")]
        fitted = fit(behaviour, device(tmp_path, device_text(inputs, gates)))
        checked(fitted, every_way(table, [False, False], gates))
        assert fitted.minimum.lower_bound == fitted.minimum.count


def fewest_released(table, low, gates, shared, places):
    """The smallest sets of places without which there is a way; ``None`` if there never is."""
    for size in range(len(places) + 1):
        found = [
            set(chosen)
            for chosen in combinations(places, size)
            if any(
                True
                for _ in every_way(
                    table,
                    low,
                    gates,
                    shared,
                    {name: pin for name, pin in places.items() if name not in chosen},
                )
            )
        ]
        if found:
            return found
    return None


@pytest.mark.parametrize("sharing", [pytest.param(0.0, id="own"), pytest.param(0.6, id="mixed")])
def test_fewest_places_to_release_against_brute_force(tmp_path, sharing):
    rng = random.Random(100)
    refused = never = 0
    for _ in range(60):
        inputs, outputs = rng.choice([(3, 2), (3, 3), (3, 3)])
        table = random_table(rng, inputs, outputs)
        low = [rng.random() < 0.3 for _ in range(outputs)]
        gates = [*random_gates(rng, outputs, 3, shared=sharing), Gate(4)]
        shared = rng.randint(2, 5) if any(gate.terms is None for gate in gates) else 0
        pins = [inputs + 1 + k for k in range(len(gates))]
        named = rng.sample(range(outputs), rng.randint(1, outputs))
        places = dict(zip((f"y{j}" for j in named), rng.sample(pins, len(named)), strict=True))
        behaviour = design(tmp_path, design_text(table, low, places))
        found = fit(behaviour, device(tmp_path, device_text(inputs, gates, shared)))
        smallest = fewest_released(table, low, gates, shared, places)
        released = {place.signal for place in found.released}
        if smallest is None:
            never += 1
            assert not found.fits
            assert released == set()
        elif smallest == [set()]:
            assert found.fits
        else:
            refused += 1
            assert not found.fits
            assert released == smallest[0]  # of equal numbers the first in the file
    assert refused > 5
    assert never


def test_several_places_that_have_to_be_released(tmp_path):
    """y0 and y1 take two terms each; the two cells of two terms are pins 5 and 6."""
    table = minterms(2, [1, 2], [0, 3], [1])
    gates = device(tmp_path, device_text(2, [Gate(1), Gate(1), Gate(2), Gate(2)]))
    places = {"y2": 5, "y1": 4, "y0": 3}
    found = fit(design(tmp_path, design_text(table, places=places)), gates)
    assert not found.fits
    assert [place.signal for place in found.released] == ["y2", "y1", "y0"]
    found = fit(design(tmp_path, design_text(table, places={"y1": 4, "y0": 3})), gates)
    assert [place.signal for place in found.released] == ["y1", "y0"]
    found = fit(design(tmp_path, design_text(table, places={"y2": 5, "y0": 6})), gates)
    assert [place.signal for place in found.released] == ["y2"]


def test_signals_that_have_too_few_cells_between_them_are_named(tmp_path):
    """Three sums of two terms, and two cells that hold as many: P. Hall's condition."""
    table = minterms(2, [1, 2], [0, 3], [1, 2], [1])
    gates = [Gate(2), Gate(1), Gate(2), Gate(1)]
    found = fit(design(tmp_path, design_text(table)), device(tmp_path, device_text(2, gates)))
    assert not found.fits
    assert found.reasons == (
        "y0, y1 and y2 have only pin 3 and pin 5 to be on: 3 signals, 2 places",
    )
    assert found.lacking == 1  # on the best cells, one of them finds one term of the two
    placed = design_text(minterms(2, [1], [2]), places={"y0": 3})
    found = fit(design(tmp_path, placed), device(tmp_path, device_text(2, [Gate(2)] * 2)))
    assert found.plan.pins == {"x0": 1, "x1": 2, "y0": 3, "y1": 4}


def test_reserve_is_kept_in_every_gate(tmp_path):
    table = minterms(2, [1, 2], [1])
    gates = [Gate(3), Gate(2)]
    behaviour, small = design(tmp_path, design_text(table)), device(tmp_path, device_text(2, gates))
    found = fit(behaviour, small, reserve=1)
    assert found.fits
    assert found.plan.pins["y0"] == 3
    assert proven(found.plan)
    refused = fit(behaviour, small, reserve=2)
    (reason,) = refused.reasons
    assert reason == (
        "y0 needs 2 product terms or 2 product terms as the complement, and the largest cell it "
        "could have holds 3, 2 of them to be kept spare: 1 too many"
    )


def with_enables(rng, table):
    """Products that enable some outputs, and the table with what is not seen left open."""
    enables, on, off = {}, list(table.on), list(table.off)
    for j in range(table.outputs):
        if rng.random() < 0.5:
            chosen = rng.sample(range(table.inputs), rng.choice([1, 1, 2]))
            literals = [(i, rng.random() < 0.5) for i in chosen]
            enables[j] = " ".join(f"x{i}" + "'" * (not one) for i, one in literals)
            seen = sum(
                1 << p
                for p in range(1 << table.inputs)
                if all((p >> i & 1 == 1) == one for i, one in literals)
            )
            on[j], off[j] = on[j] & seen, off[j] & seen
    return enables, Table(table.inputs, tuple(on), tuple(off))


def test_enable_rows_and_cells_as_inputs_against_brute_force(tmp_path):
    """Every input is needed: it has a pin of its own, or that of a cell whose enable row is 0 and
    whose level runs back.
    """
    rng = random.Random(12)
    fitted = lent = 0
    for _ in range(80):
        inputs, outputs = rng.choice([(3, 2), (3, 3), (4, 2)])
        table = random_table(rng, inputs, outputs, dont_care=0)
        enables, seen = with_enables(rng, table)
        if len(needed_inputs(seen, enables)) < inputs:
            continue
        low = [rng.random() < 0.4 for _ in range(outputs)]
        gates = [
            replace(gate, feedback="pin" if rng.random() < 0.6 else None, enable=rng.random() < 0.7)
            for gate in [*random_gates(rng, outputs, 4), Gate(2)]
        ]
        pins = inputs - rng.choice([0, 1, 1, 2])
        behaviour = design(tmp_path, design_text(table, low, enables=enables))
        found = fit(behaviour, device(tmp_path, device_text(pins, gates)))
        ways = []
        for terms, at in every_way(seen, low, gates):
            used = [pin - inputs - 1 for pin in at]
            lendable = [k for k, g in enumerate(gates) if k not in used and g.feedback and g.enable]
            if all(gates[used[j]].enable for j in enables) and inputs <= pins + len(lendable):
                ways.append((terms, at))
        if checked(found, ways):
            fitted += 1
            lent += bool(found.plan.input_cells)
    assert 10 < fitted < 55
    assert lent > 5


def needed_inputs(table, enables):
    """Inputs in an enable, and those on which what is seen depends whatever is done."""
    found = {int(word[1]) for text in enables.values() for word in text.split()}
    for on, off in zip(table.on, table.off, strict=True):
        for i in range(table.inputs):
            for p in range(1 << table.inputs):
                other = p ^ 1 << i
                if on >> p & 1 and off >> other & 1:
                    found.add(i)
    return found


def test_the_device_of_the_catalogue_with_both_kinds(tmp_path):
    """joint-10x27x6: two cells of 5 terms, four that share 15. Parity of 4 takes 8 terms in either
    polarity (any textbook), so it has to share; what is left over goes where it takes least.
    """
    parity = [p for p in range(16) if p.bit_count() % 2]
    table = minterms(4, parity, [3, 7, 11, 15], [0, 1, 2, 3, 7], [5, 10])
    found = fit(design(tmp_path, design_text(table)), find_device("joint-10x27x6"))
    gates = [Gate(5), Gate(5), *[Gate(None)] * 4]
    checked(found, every_way(table, [False] * 4, gates, 15))
    assert found.plan.pins["y0"] in range(14, 18)


def test_the_same_plan_twice(tmp_path):
    rng = random.Random(5)
    table = random_table(rng, 3, 3)
    gates = [Gate(4), Gate(None), Gate(None), Gate(4)]
    text, made = design_text(table), device_text(3, gates, 5)
    plans = [fit(design(tmp_path, text), device(tmp_path, made)).plan for _ in range(2)]
    assert plans[0].pins == plans[1].pins
    assert plans[0].rows == plans[1].rows
    assert plans[0].modes == plans[1].modes
    assert list(plans[0].minimum.cover) == list(plans[1].minimum.cover)
