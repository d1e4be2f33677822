"""A counterexample for each way in which fuses can fail a design, in words, on both roads."""

import pytest
from hand_plans import design, plan
from small_array import small_array
from test_simulate import programmed

from pla.fuses import proof
from pla.fuses.proof import prove


@pytest.fixture(scope="module")
def device(tmp_path_factory):
    return small_array(tmp_path_factory.mktemp("array"))


@pytest.fixture(params=["simulation", "cubes"])
def proven(request, monkeypatch):
    """Proves by one road, and gives the counterexample."""
    if request.param == "cubes":
        monkeypatch.setattr(proof, "MAX_DENSE_INPUTS", -1)

    def run(laid_out, fuses):
        made = prove(laid_out, fuses)
        assert made.method == request.param
        assert made.equal == (made.counterexample is None)
        return made.counterexample

    return run


AB = [("a", False, None), ("b", False, None)]
PINS = {"a": 1, "b": 2}


def both_inputs(device, output, pin, **more):
    """A design of one output over a (pin 1, bit 0 of a point) and b (pin 2, bit 1)."""
    wanted = design(AB, [("fan", False, *output)])
    return plan(device, wanted, PINS | {"fan": pin}, **more)


# fan = a b
AND = ([3], [0, 1, 2], None, None)


def test_equal(device, proven):
    fuses = programmed(device, {7: "1 2"}, [(7, 11)], cells="00000")
    assert proven(both_inputs(device, AND, 11), fuses) is None


def test_a_wrong_value(device, proven):
    fuses = programmed(device, {7: "1"}, [(7, 11)], cells="00000")
    found = proven(both_inputs(device, AND, 11), fuses)
    assert (found.fault, found.output, found.point, found.expected) == ("value", "fan", 1, 0)
    assert found.text == "fan is 1 where panel says 0, at a=1 b=0"


def test_freedom_is_no_fault(device, proven):
    fuses = programmed(device, {7: "1"}, [(7, 11)], cells="00000")
    assert proven(both_inputs(device, ([3], [0, 2], None, None), 11), fuses) is None


# fan = a, driven while b
SWITCHED = ([3], [2], ({2, 3}, {0, 1}), None)


@pytest.mark.parametrize(
    ("enable", "text", "point"),
    [
        pytest.param("2", None, None, id="right"),
        pytest.param(
            "1 2",
            "fan does not drive pin 8 where panel says that it does, at a=0 b=1",
            2,
            id="too-seldom",
        ),
        pytest.param(
            "", "fan drives pin 8 where panel says that it does not, at a=0 b=0", 0, id="always"
        ),
        pytest.param(
            "3",
            "fan may or may not drive, by a level that is no input of the design, pin 8 where "
            "panel says that it does, at a=0 b=1",
            2,
            id="unknown",
        ),
    ],
)
def test_enables(device, proven, enable, text, point):
    fuses = programmed(device, {3: enable, 4: "1"}, cells="00000")
    found = proven(both_inputs(device, SWITCHED, 8), fuses)
    if text is None:
        assert found is None
    else:
        assert (found.fault, found.text, found.point) == ("drive", text, point)


def test_an_output_without_an_enable_must_always_drive(device, proven):
    fuses = programmed(device, {3: "2", 4: "1 2"}, cells="00000")
    found = proven(both_inputs(device, AND, 8), fuses)
    assert found.text.startswith("fan does not drive pin 8 where panel says that it does, at a=0")


@pytest.mark.parametrize("enable", ["2", "1' 2", "1 2"])
def test_what_an_enable_leaves_open_is_no_fault(device, proven, enable):
    # fan = a, driven while b and a are equal; of the rest nothing is said.
    wanted = ([3], [0], ({3}, {0}), None)
    fuses = programmed(device, {3: enable, 4: "1"}, cells="00000")
    found = proven(both_inputs(device, wanted, 8), fuses)
    assert (found is None) == (enable != "1' 2")


@pytest.mark.parametrize(("tied", "driven"), [(0, True), (1, False)], ids=["low", "high"])
def test_a_tied_enable_pin(device, proven, tied, driven):
    # The enable pin 5 is active low.
    fuses = programmed(device, {7: "1 2"}, [(7, 10)], cells="00000")
    found = proven(both_inputs(device, AND, 10, tied=((5, tied),)), fuses)
    assert (found is None) == driven
    if not driven:
        assert "does not drive pin 10" in found.text


def test_an_enable_pin_without_a_level(device, proven):
    fuses = programmed(device, {7: "1 2"}, [(7, 10)], cells="00000")
    found = proven(both_inputs(device, AND, 10), fuses)
    assert found.fault == "drive"
    assert "may or may not drive" in found.text


@pytest.mark.parametrize(
    ("rows", "sums", "cells", "pin", "text"),
    [
        pytest.param(
            {7: "1 2 3"},
            [(7, 11)],
            "00000",
            11,
            "pin 11 (fan) depends on pin 3, which carries no input of the design, at a=1 b=1",
            id="no-input",
        ),
        pytest.param(
            {0: "", 1: "1 2"},
            [],
            "01000",
            7,
            "pin 7 (fan) is undefined: the links of its cell are 01, which is no mode, at a=1 b=1",
            id="no-mode",
        ),
        pytest.param(
            {6: "", 7: "1 2"},
            [(7, 9)],
            "00000",
            9,
            "pin 9 (fan) shows nothing in the mode that its cell is set to, at a=1 b=1",
            id="shows-nothing",
        ),
        pytest.param(
            {7: "1 2 b1'", 8: "b1'"},
            [(7, 11), (8, "b1")],
            "00000",
            11,
            "pin 11 (fan) depends on a ring that feeds itself: cell b1, at a=1 b=1",
            id="ring",
        ),
        pytest.param(
            {7: "1 2 b1'", 8: "io", 9: "b1'"},
            [(7, 11), (8, "b1"), (9, 9)],
            "00000",
            11,
            "pin 11 (fan) depends on a ring that feeds itself: cell b1 and the cell on pin 9, "
            "at a=1 b=1",
            id="ring-of-two",
        ),
        pytest.param(
            {7: "1 2 8'"},
            [(7, 11)],
            "00100",
            11,
            "pin 11 (fan) depends on row 7, joined to a column that carries nothing, at a=1 b=1",
            id="nothing-on-the-column",
        ),
        pytest.param(
            {3: "1 1'", 7: "1 2 8"},
            [(7, 11)],
            "00000",
            11,
            "pin 11 (fan) depends on the level at pin 8 while the part does not drive it, "
            "at a=1 b=1",
            id="floating-pin",
        ),
        pytest.param(
            {7: "1 2 7"},
            [(7, 11)],
            "01000",
            11,
            "pin 11 (fan) depends on row 7, joined to a column that carries nothing, at a=1 b=1",
            id="feedback-of-no-mode",
        ),
    ],
)
def test_undefined(device, proven, rows, sums, cells, pin, text):
    found = proven(both_inputs(device, AND, pin), programmed(device, rows, sums, cells))
    assert (found.fault, found.point, found.text) == ("undefined", None, text)


def test_a_pin_that_serves_as_an_input_is_driven(device, proven):
    wanted = design([*AB, ("c", False, None)], [("fan", False, [7], [0, 1], None, None)])
    laid_out = plan(device, wanted, PINS | {"c": 8, "fan": 11})
    off = programmed(device, {3: "2 2'", 7: "1 2 8"}, [(7, 11)], cells="00000")
    assert proven(laid_out, off) is None
    on = programmed(device, {3: "2", 7: "1 2 8"}, [(7, 11)], cells="00000")
    found = proven(laid_out, on)
    assert (found.fault, found.output) == ("contention", "c")
    assert found.text.startswith("the part drives pin 8, which c drives from outside, at a=0 b=1")


def passing(device, up_while, down_while, **pins):
    """Two bidirectional pins: up = down_in and down = up_in, each while it drives.

    Points are a, b, up_in, down_in from the lowest bit; what drives is told by a and b alone.
    """
    inputs = [*AB, ("up_in", False, "up"), ("down_in", False, "down")]
    outputs = []
    for name, drives, value in (("up", up_while, 8), ("down", down_while, 4)):
        own = {p for p in range(16) if p & 3 in drives}
        on, off = ([p for p in own if bool(p & value) == want] for want in (True, False))
        outputs.append((name, False, on, off, (own, set(range(16)) - own), f"{name}_in"))
    pins = {"up_in": 7, "down_in": 8} | pins
    return plan(device, design(inputs, outputs), PINS | {"up": 7, "down": 8} | pins)


def test_outputs_that_hold_each_other(device, proven):
    # up drives while a, down while b: with both, each reads what the other shows.
    fuses = programmed(device, {0: "1", 1: "8", 3: "2", 4: "7"}, cells="10000")
    found = proven(passing(device, {1, 3}, {2, 3}), fuses)
    assert (found.fault, found.output, found.point & 3) == ("held", "up", 3)
    assert found.text.startswith(
        "up depends on itself by way of the cells on pins 7 and 8, which drive each other "
        "at the same time, at a=1 b=1"
    )


def test_enables_that_hang_on_each_other(device, proven):
    # Both show 1; up drives while down is 1, down while up is 0: with both low outside neither
    # level can last.
    points = set(range(16))
    up, down = ({p for p in points if bool(p & bit) == level} for bit, level in ((8, 1), (4, 0)))
    inputs = [*AB, ("up_in", False, "up"), ("down_in", False, "down")]
    wanted = design(
        inputs,
        [
            ("up", False, sorted(up), [], (up, points - up), "up_in"),
            ("down", False, sorted(down), [], (down, points - down), "down_in"),
        ],
    )
    pins = PINS | {"up": 7, "up_in": 7, "down": 8, "down_in": 8}
    fuses = programmed(device, {0: "8", 1: "", 3: "7'", 4: ""}, cells="10000")
    found = proven(plan(device, wanted, pins), fuses)
    assert (found.fault, found.point & 12) == ("held", 0)
    assert "by way of the cells on pins 7 and 8" in found.text


def test_outputs_that_take_turns_do_not(device, proven):
    fuses = programmed(device, {0: "1 2'", 1: "8", 3: "2 1'", 4: "7"}, cells="10000")
    assert proven(passing(device, {1}, {2}), fuses) is None


def test_an_input_must_be_on_the_pin_that_it_reads(device, proven):
    fuses = programmed(device, {0: "1", 1: "8", 3: "2", 4: "7"}, cells="10000")
    found = proven(passing(device, {1, 3}, {2, 3}, up_in=4), fuses)
    assert (found.fault, found.output) == ("reads", "up_in")
    assert found.text == "up_in reads pin 4, but up, whose pin it is to read, is on pin 7"


def test_another_device_wide_mode(device, proven):
    fuses = programmed(device, {7: "1 2"}, [(7, 11)], cells="00000").changed({241: 1})
    found = proven(both_inputs(device, AND, 11), fuses)
    assert (found.fault, found.output) == ("mode", "")
    assert found.text == (
        "fuse 241 is 1, which selects another device-wide mode than everything-5x11x6; its own "
        "needs 0"
    )
