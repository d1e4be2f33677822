"""The simulation of fuses against one that looks at a single point at a time."""

import random

import numpy as np
import pytest
from point_by_point import Point, Wiring
from small_array import small_array

from pla.device.model import Line
from pla.fuses.evaluate import Outside
from pla.fuses.fusemap import FuseMap
from pla.fuses.recover import recover
from pla.fuses.simulate import Signal, all_combinations, simulate

INPUTS = (1, 2, 3, 4, 5)
RULES = ("none", "holds", "yields", "free")


@pytest.fixture(scope="module")
def device(tmp_path_factory):
    return small_array(tmp_path_factory.mktemp("array"))


def random_fuses(device, rng):
    """Sparse rows, so that not everything is 0; any configuration, also of no mode."""
    states = [rng.randrange(2) for _ in range(device.fuses)]
    for row in range(device.terms):
        for fuse in device.and_array.fuses_of(row):
            states[fuse] = int(rng.random() < 0.85)
        if rng.random() < 0.1:
            for fuse in device.and_array.fuses_of(row):
                states[fuse] = 0
    for row in range(len(device.or_array.terms)):
        for fuse in device.or_array.fuses_of(row):
            states[fuse] = rng.randrange(2)
    for fuse in device.drop.fuses:
        states[fuse] = int(rng.random() < 0.9)
    return FuseMap(bytes(states))


def value_at(signal, point):
    byte, bit = divmod(point, 8)
    high, low = int(signal.high[byte]) >> bit & 1, int(signal.low[byte]) >> bit & 1
    assert not (high and low)
    return 1 if high else 0 if low else None


def compare(device, fuses, drivers):
    """Everything at every point; `drivers` has (pin, rule) for each bit of the point."""
    count = len(drivers)
    outside = {
        pin: Outside(Signal.of(all_combinations(count, bit)), rule)
        for bit, (pin, rule) in enumerate(drivers)
        if rule != "none"
    }
    made = simulate(recover(device, fuses), outside, max(1, 1 << count >> 3))
    values = {None: 0, 0: 0, 1: 0}
    wiring = Wiring(device, fuses.states)
    for at in range(1 << count):
        levels = {
            pin: (at >> bit & 1, rule) for bit, (pin, rule) in enumerate(drivers) if rule != "none"
        }
        naive = Point(wiring, levels)
        for cell in device.cells:
            found = [value_at(made.sums[cell.key], at)]
            wanted = [naive.sums[cell.key]]
            if cell.pin is not None:
                found += [value_at(x[cell.pin], at) for x in (made.shown, made.driven, made.levels)]
                wanted += [naive.shown(cell), naive.driven(cell), naive.levels[cell.pin]]
            assert found == wanted, (cell.key, at)
            for value in wanted:
                values[value] += 1
    return values


@pytest.mark.parametrize("seed", range(60))
def test_random_fuses_are_simulated_as_point_by_point(device, seed):
    rng = random.Random(seed)
    fuses = random_fuses(device, rng)
    drivers = [(pin, rng.choice(["none", *["holds"] * 9])) for pin in INPUTS]
    drivers += [(pin, rng.choice(RULES)) for pin in rng.sample([7, 8, 9, 10], 2)]
    values = compare(device, fuses, drivers)
    assert values[0]
    assert values[1]


@pytest.mark.slow
@pytest.mark.parametrize("seed", range(60, 1000))
def test_more_random_fuses(device, seed):
    test_random_fuses_are_simulated_as_point_by_point(device, seed)


def programmed(device, rows, sums=(), cells=""):
    """A fuse map: columns of each row in words, OR links, and the links of cells 7, 8, 9, 10.

    Rows not named are dead, all drop links keep their row.
    """
    states = {fuse: 0 for row in range(device.terms) for fuse in device.and_array.fuses_of(row)}
    names = ["." if c is None else str(c) for c in device.and_array.columns]
    for row, columns in rows.items():
        for index, fuse in enumerate(device.and_array.fuses_of(row)):
            states[fuse] = int(names[index] not in columns.split())
    for row, key in sums:
        at = device.or_array.terms.index(row)
        states[device.or_array.fuse(at, device.or_array.sums.index(key))] = 0
    states |= dict(zip(range(236, 241), map(int, cells), strict=True))
    states[241] = 0
    return FuseMap.filled(device.fuses, 1).changed(states)


def at_points(device, fuses, count=1, outside=None):
    """Simulated with pin 1 running through both levels, or pins 1, 2, … through all."""
    drivers = {
        pin: Outside(Signal.of(all_combinations(count, pin - 1))) for pin in range(1, count + 1)
    }
    return simulate(recover(device, fuses), drivers | (outside or {}), max(1, 1 << count >> 3))


def values(signal, count=1):
    return "".join(
        {None: "?"}.get(v, str(v)) for v in (value_at(signal, p) for p in range(2**count))
    )


@pytest.mark.parametrize(
    ("cells", "levels"),
    [
        # Row 1 of pin 7 is 1 while pin 1 is; row 0 (the enable, where it is one) always 1.
        pytest.param("10000", "01", id="sum"),
        pytest.param("11000", "10", id="complement"),
        pytest.param("00000", "00", id="row-0-is-a-term"),
        pytest.param("01000", "??", id="no-mode"),
    ],
)
def test_modes_of_a_cell(device, cells, levels):
    fuses = programmed(device, {0: "", 1: "1"}, cells=cells)
    assert values(at_points(device, fuses).levels[7]) == levels


@pytest.mark.parametrize(
    ("cells", "carried"),
    [
        pytest.param("10000", Line("pin", 7), id="pin"),
        pytest.param("11000", Line("sum", 7, True), id="complement-of-sum"),
        pytest.param("00000", Line("sum", 7), id="sum"),
        pytest.param("01000", None, id="no-mode"),
    ],
)
def test_what_a_feedback_column_carries(device, cells, carried):
    row = recover(device, programmed(device, {7: "7"}, cells=cells)).rows[7]
    assert row.lines == (() if carried is None else (carried,))
    assert row.floating == (carried is None)


def test_columns_that_a_mode_lends_to_another_pin(device):
    wiring = ({7: "8", 8: "8'"}, [(7, 11), (8, 10)])
    own = recover(device, programmed(device, *wiring, cells="00000"))
    assert [own.rows[row].lines for row in (7, 8)] == [
        (Line("pin", 8),),
        (Line("pin", 8, True),),
    ]
    lent = recover(device, programmed(device, *wiring, cells="00100"))
    assert lent.rows[7].lines == (Line("pin", 4, True),)
    assert (lent.rows[8].lines, lent.rows[8].floating) == ((), True)


def test_a_column_with_no_line_does_nothing(device):
    made = recover(device, programmed(device, {7: ". 1"}, cells="00000"))
    assert (made.rows[7].lines, made.rows[7].floating) == ((Line("pin", 1),), False)


def test_two_names_of_one_cell(device):
    # `9` is the level at the pin, `io` the sum or its complement by mode.
    for cells, complement in (("00010", False), ("00000", True)):
        row = recover(device, programmed(device, {7: "9 io"}, cells=cells)).rows[7]
        assert row.lines == (Line("sum", 9, complement), Line("pin", 9))


def test_a_buried_sum_and_its_complement_line(device):
    # b1 = pin 1; pin 11 = b1'.
    fuses = programmed(device, {7: "1", 8: "b1'"}, [(7, "b1"), (8, 11)], cells="00000")
    made = at_points(device, fuses)
    assert values(made.sums["b1"]) == "01"
    assert values(made.levels[11]) == "10"
    assert made.rings == ()


@pytest.mark.parametrize(
    ("wire", "driven", "level"),
    [
        pytest.param("1", "01", "?0", id="while-pin-1-is-high"),
        pytest.param("1'", "10", "0?", id="while-pin-1-is-low"),
        pytest.param("", "11", "00", id="no-line-always"),
        pytest.param("1 1'", "00", "??", id="dead-never"),
        pytest.param("3", "??", "??", id="unknown"),
    ],
)
def test_enable_rows(device, wire, driven, level):
    made = at_points(device, programmed(device, {3: wire}, cells="00000"))
    assert values(made.driven[8]) == driven
    assert values(made.levels[8]) == level


def test_an_enable_pin_that_is_active_low(device):
    fuses = programmed(device, {7: ""}, [(7, 10)], cells="00000")
    made = at_points(device, fuses, outside={5: Outside(Signal.of(all_combinations(1, 0)))})
    assert values(made.driven[10]) == "10"
    assert values(made.levels[10]) == "1?"


@pytest.mark.parametrize(
    ("rule", "level", "other"),
    [
        # Pin 8 shows 1 and is driven while pin 1 is high; from outside it is driven with pin 2.
        pytest.param("holds", "0?1?", "0?1?", id="contention"),
        pytest.param("yields", "0111", "0111", id="lets-go"),
        pytest.param("free", "0011", "0011", id="free"),
    ],
)
def test_a_pin_driven_from_both_sides(device, rule, level, other):
    fuses = programmed(device, {3: "1", 4: "", 7: "8"}, [(7, 11)], cells="00000")
    given = {8: Outside(Signal.of(all_combinations(2, 1)), rule)}
    made = at_points(device, fuses, 2, given)
    assert values(made.driven[8], 2) == "0101"
    assert values(made.levels[8], 2) == level
    assert values(made.levels[11], 2) == other


def test_unknown_stops_at_a_known_value(device):
    # Pin 3 has no level: 1 + 3 is known where pin 1 is high, 1 3 where it is low.
    fuses = programmed(device, {7: "1", 8: "3", 9: "1 3"}, [(7, 11), (8, 11), (9, 10)], "00000")
    made = at_points(device, fuses)
    assert values(made.levels[11]) == "?1"
    assert values(made.sums[10]) == "0?"


def test_a_dropped_row_is_0(device):
    fuses = programmed(device, {7: "", 1: "", 0: ""}, [(7, 11)], cells="10000")
    assert values(at_points(device, fuses).levels[11]) == "11"
    dropped = fuses.changed({225 + 7: 0, 225 + 0: 0})
    made = at_points(device, dropped)
    assert values(made.levels[11]) == "00"
    assert values(made.driven[7]) == "00"
    assert recover(device, dropped).rows[7].dead


def test_a_ring_is_found_and_left_unknown(device):
    # b1 = 1 b1' + io', io = b1'.
    fuses = programmed(
        device, {7: "1 b1'", 8: "io'", 9: "b1'"}, [(7, "b1"), (8, "b1"), (9, 9)], "00010"
    )
    made = at_points(device, fuses)
    assert [set(ring) for ring in made.rings] == [{Line("sum", "b1"), Line("sum", 9)}]
    assert values(made.sums["b1"]) == "??"


def test_a_cell_that_feeds_itself(device):
    fuses = programmed(device, {7: "b1'"}, [(7, "b1")], cells="00000")
    made = at_points(device, fuses)
    assert made.rings == ((Line("sum", "b1"),),)
    assert values(made.sums["b1"]) == "??"


def test_a_ring_through_a_dead_row_is_none(device):
    fuses = programmed(device, {7: "b1' 1 1'"}, [(7, "b1")], cells="00000")
    made = at_points(device, fuses)
    assert made.rings == ()
    assert values(made.sums["b1"]) == "00"


def test_two_pins_that_pass_a_level_on_in_turns_settle(device):
    # Pin 7 = pin 8 while pin 1 is high, pin 8 = pin 7 while it is low: a ring never closed.
    fuses = programmed(device, {0: "1", 1: "8", 3: "1'", 4: "7"}, cells="10000")
    outside = {
        7: Outside(Signal.of(all_combinations(3, 1)), "yields"),
        8: Outside(Signal.of(all_combinations(3, 2)), "yields"),
    }
    drivers = {1: Outside(Signal.of(all_combinations(3, 0)))} | outside
    made = simulate(recover(device, fuses), drivers, 1)
    assert len(made.rings) == 1
    # Pin 1 is the lowest bit of the point, what drives pins 7 and 8 the next ones.
    assert values(made.levels[7], 3) == values(made.levels[8], 3) == "00100111"


def test_signals_are_packed_alike():
    assert np.array_equal(all_combinations(4, 3), np.array([0, 255], dtype=np.uint8))
    assert all_combinations(1, 0).tolist() == [0b10101010]


def test_another_device_wide_mode_is_told(device):
    fuses = programmed(device, {}, cells="00000")
    assert recover(device, fuses).other_mode == ()
    assert recover(device, fuses.changed({241: 1})).other_mode == ((241, 0),)


def test_another_size_is_refused(device):
    with pytest.raises(ValueError, match="261 fuses for a device with 260"):
        recover(device, FuseMap.filled(261, 0))
