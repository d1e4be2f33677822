"""Designs on devices: polarity by cell, places, shortages, what would hold a design."""

from dataclasses import replace
from itertools import product

import pytest
from mixed_device import MIXED

from pla.behaviour.reader import read_behaviour
from pla.device.catalogue import catalogue, find_device
from pla.errors import InputError
from pla.fitting.fit import fit
from pla.fitting.holders import holders
from pla.fitting.places import places_elsewhere
from pla.fitting.prices import alone_counts, counts_without, safety_prices
from pla.fuses.link import link
from pla.fuses.proof import prove
from pla.logic.minimize import minimize
from pla.logic.phases import Polarity

# x: 4 terms true, 1 complemented. y: 1 true, 3 complemented. z: 2 true, 2 complemented.
WISHES = {
    "x": "a + b + c + d",
    "y": "a b c",
    "z": "a b + c d",
}


@pytest.fixture
def mixed(tmp_path):
    path = tmp_path / "mixed.toml"
    path.write_text(MIXED, encoding="utf-8")
    return find_device(str(path))


def design(tmp_path, outputs, logic, extra="", inputs="a = 1\nb = 1\nc = 1\nd = 1"):
    lines = [f'name = "d"\n[inputs]\n{inputs}\n[outputs]']
    lines += [f"{name} = {how}" for name, how in outputs.items()]
    lines += ["[logic]", *(f'{name} = "{text}"' for name, text in logic.items()), extra]
    path = tmp_path / "d.toml"
    path.write_text("\n".join(lines) + "\n", encoding="utf-8")
    return read_behaviour(str(path))


@pytest.mark.parametrize("levels", list(product(("high", "low"), repeat=3)), ids="-".join)
def test_cells_that_differ_tie_polarities(tmp_path, mixed, levels):
    """Held against minimizing for every way to put outputs on cells."""
    outputs = {n: f'{{ active = "{level}" }}' for n, level in zip(WISHES, levels, strict=True)}
    behaviour = design(tmp_path, outputs, WISHES)
    inverted = {8: (False,), 9: (True,), 10: (False, True)}
    best = min(
        minimize(
            behaviour.function,
            [
                Polarity(low == flip == False or low == flip, low != flip)  # noqa: E712
                for low, flip in zip((lv == "low" for lv in levels), flips, strict=True)
            ],
        ).count
        for pins in ((8, 9, 10), (8, 10, 9), (9, 8, 10), (9, 10, 8), (10, 8, 9), (10, 9, 8))
        for flips in product(*(inverted[pin] for pin in pins))
    )
    found = fit(behaviour, mixed)
    assert found.fits
    assert found.minimum.count == best
    assert found.minimum.proven
    assert sorted(o.pin for o in found.plan.outputs) == [8, 9, 10]
    assert prove(found.plan, link(found.plan)).equal


def test_a_place_fixes_the_polarity(tmp_path, mixed):
    behaviour = design(tmp_path, {"x": 1}, {"x": "a + b + c + d"})
    assert fit(behaviour, mixed).minimum.count == 1  # the cell that inverts
    placed = design(
        tmp_path, {"x": 1}, {"x": "a + b + c + d"}, "[place.mixed-6x10x3]\nx = 8\nc = 7\n"
    )
    found = fit(placed, mixed)
    assert found.minimum.count == 4
    assert found.plan.pins == {"a": 1, "b": 2, "c": 7, "d": 3, "x": 8}


def test_polarity_true_is_a_wish_that_cells_may_refuse(tmp_path, mixed):
    one = design(tmp_path, {"x": 1}, {"x": "a + b + c + d"})
    assert fit(one, mixed, "true").minimum.count == 4
    three = design(tmp_path, dict.fromkeys(WISHES, 1), WISHES)
    found = fit(three, mixed, "true")
    assert not found.fits
    assert found.minimum is None
    assert found.reasons == (
        "x, y and z have only pin 8 and pin 10 to be on with --polarity true: 3 signals, 2 places",
    )


@pytest.mark.parametrize(
    ("places", "column", "message"),
    [
        ("x = 99", 1, "x is an output, but there is no pin 99; the highest is 11 on mixed-6x10x3"),
        ("x = 5", 1, "x is an output, but pin 5 is ground on mixed-6x10x3"),
        ("x = 11", 1, "x is an output, but pin 11 is the supply on mixed-6x10x3"),
        ("x = 1", 1, "x is an output, but pin 1 is an input on mixed-6x10x3"),
        ("a = 8", 1, "a is an input, but pin 8 is an output on mixed-6x10x3"),
    ],
)
def test_places_that_cannot_be(tmp_path, mixed, places, column, message):
    behaviour = design(tmp_path, {"x": 1}, {"x": "a b"}, f"[place.mixed-6x10x3]\n{places}\n")
    with pytest.raises(InputError) as caught:
        fit(behaviour, mixed)
    (found,) = caught.value.diagnostics
    assert found.message == message
    assert (found.location.line, found.location.column) == (12, column)


def test_places_for_another_device_are_not_dropped_in_silence(tmp_path, mixed):
    behaviour = design(tmp_path, {"x": 1}, {"x": "a b"}, "[place.mixed-6x10x4]\nx = 8\n")
    (warning,) = places_elsewhere(behaviour, mixed)
    assert warning.severity == "warning"
    assert warning.message == (
        "no pins are decided for mixed-6x10x3; the design decides them for mixed-6x10x4"
    )
    assert warning.location.line == 12
    assert places_elsewhere(design(tmp_path, {"x": 1}, {"x": "a"}), mixed) == ()


def test_inputs_without_a_term_give_way(tmp_path, mixed):
    """Eight inputs on six pins: those that no term needs go without, in order."""
    inputs = "\n".join(f"{name} = 1" for name in "abcdefgh")
    behaviour = design(tmp_path, {"x": 1}, {"x": "c d + h"}, inputs=inputs)
    found = fit(behaviour, mixed)
    assert found.fits
    assert (found.inputs.used, found.inputs.available) == (3, 6)
    pins = {p.name: p.pin for p in found.plan.inputs}
    assert [pins[n] for n in "cdh"] == [1, 2, 3]
    assert [pins[n] for n in "abefg"] == [4, 6, 7, None, None]


def test_shortages_are_counted(tmp_path, mixed):
    inputs = "\n".join(f"{name} = 1" for name in "abcdefgh")
    names = [f"o{i}" for i in range(4)]
    behaviour = design(
        tmp_path, dict.fromkeys(names, 1), dict.fromkeys(names, "a b c d e f g h"), inputs=inputs
    )
    found = fit(behaviour, mixed)
    assert not found.fits
    assert found.reasons == (
        "8 inputs are needed, the device has 6 input pins: 2 too many",
        "4 outputs are needed, the device has 3 output cells: 1 too many",
    )


def test_parity_does_not_fit_and_says_by_how_much(tmp_path, mixed):
    inputs = "\n".join(f"{name} = 1" for name in "abcde")
    behaviour = design(tmp_path, {"p": 1}, {"p": "a ⊕ b ⊕ c ⊕ d ⊕ e"}, inputs=inputs)
    found = fit(behaviour, mixed)
    assert found.reasons == ("the smallest set has 16 product terms, the device 10: 6 too many",)
    others = [find_device(name) for name in catalogue()]
    held = [f.device.name for f in holders(found, others, "free")]
    assert held == [
        d.name for d in others if max(len(d.shared_rows), *(c.capacity for c in d.cells)) >= 16
    ]
    assert "varied-11x5" in held


def test_prices(tmp_path):
    behaviour = design(
        tmp_path,
        {"x": "{ impossible = 0 }", "y": 1},
        {"x": "a b + c d", "y": "a b"},
        '[never]\nwhen = ["a b\'", "c d\'"]\n',
    )
    true = [Polarity(complement=False)] * 2
    # x must be 0 where a b' or c d' is: a b c' + a b d + a' c d; y may use the first two.
    assert [c.terms for c in alone_counts(behaviour.function, true)] == [3, 1]
    assert minimize(behaviour.function, true).count == 3
    assert [c.terms for c in counts_without(behaviour.function, true)] == [1, 3]
    # Freed, x may be a + c, and y may be a.
    (price,) = safety_prices(behaviour, true, minimize(behaviour.function, true))
    assert (price.output, price.demanded, price.freed.terms) == (0, 0, 2)


@pytest.mark.parametrize(
    ("width", "proven", "computed"),
    [
        pytest.param(17, False, False, id="wide and not proven"),
        pytest.param(17, True, True, id="wide"),
        pytest.param(16, False, True, id="not proven"),
    ],
)
def test_price_of_a_wide_design_is_not_guessed(tmp_path, width, proven, computed):
    names = [f"s{k}" for k in range(width)]
    text = (
        'name = "Wide"\n[inputs]\n'
        + "".join(f"{name} = 1\n" for name in names)
        + '[outputs]\nf = { impossible = 0 }\n[never]\nwhen = ["s0 s1"]\n'
        + f'[logic]\nf = "{" ".join(names[1:])}"\n'
    )
    path = tmp_path / "wide.toml"
    path.write_text(text)
    behaviour = read_behaviour(str(path))
    true = [Polarity(complement=False)]
    minimum = minimize(behaviour.function, true)
    if not proven:
        minimum = replace(minimum, proven_by=None)
    (price,) = safety_prices(behaviour, true, minimum)
    assert (price.freed is not None) == computed
