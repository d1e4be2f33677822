"""Devices against a design: ranking, reserve, places, and one minimization for devices alike."""

from dataclasses import replace
from itertools import permutations

import pytest
from mixed_device import MIXED

from pla.behaviour.reader import read_behaviour
from pla.device.catalogue import find_device
from pla.fitting import minima
from pla.fitting.budgets import DeviceBudget, budgets, fits_on
from pla.fitting.fit import fit
from pla.fitting.holders import holders
from pla.fitting.places import places_nowhere

# A full adder: 7 shared terms with both outputs true (any textbook), 5 in free polarity
# (recomputed by an exhaustive search).
SHARED = (
    "shared-8x16x4",
    "shared-10x24x6",
    "shared-12x32x6",
    "shared-14x40x8",
    "shared-16x48x8",
    "shared-20x96x12",
)
"""Devices on which every output has a shared OR gate and always drives, the smallest first."""

ADDER = """
name = "Full adder"
[inputs]
a = 1
b = 1
c = 1
[outputs]
sum = 1
carry = 1
[logic]
sum = "a ⊕ b ⊕ c"
carry = "a b + a c + b c"
"""


@pytest.fixture
def mixed(tmp_path):
    path = tmp_path / "mixed.toml"
    path.write_text(MIXED, encoding="utf-8")
    return find_device(str(path))


@pytest.fixture
def devices():
    return [find_device(name) for name in SHARED]


def design(folder, text):
    path = folder / "design.toml"
    path.write_text(text, encoding="utf-8")
    return read_behaviour(str(path))


@pytest.fixture
def adder(tmp_path):
    return design(tmp_path, ADDER)


@pytest.fixture
def counted(monkeypatch):
    """How often something is minimized."""
    calls = []
    original = minima.minimize

    def counting(function, polarities, **keywords):
        calls.append(tuple(polarities))
        return original(function, polarities, **keywords)

    monkeypatch.setattr(minima, "minimize", counting)
    return calls


def outcome(found):
    """All of a fit that can be compared."""
    minimum, plan = found.minimum, found.plan
    return (
        found.device.name,
        found.reasons,
        (found.terms, found.inputs, found.outputs),
        minimum and ([c.text(minimum.cover.n_inputs) for c in minimum.cover], minimum.complemented),
        minimum and (minimum.lower_bound, minimum.proven_by, minimum.connections),
        plan and plan.pins,
    )


def test_the_smallest_that_holds_it_comes_first(adder, devices):
    for order in (devices, devices[::-1], devices[3:] + devices[:3]):
        found = budgets(adder, order)
        assert [b.device.name for b in found] == list(SHARED)
        assert all(b.fits and not b.reasons for b in found)
    used = {b.device.name: b.fit.terms.used for b in found}
    assert used.pop("shared-8x16x4") == 7  # every pin shows the sum itself
    # Every pin shows the complement of its sum; the full adder is its own dual.
    assert used.pop("shared-10x24x6") == 7
    assert set(used.values()) == {5}


def test_of_equal_pins_fewest_fuses_then_the_name(adder, devices):
    base = devices[2]
    alike = [
        replace(base, name="b"),
        replace(base, name="a"),
        replace(base, name="z", fuses=base.fuses - 1),
        replace(base, name="y", pins=base.pins - 1, fuses=base.fuses + 9),
    ]
    for order in permutations(alike):
        assert [b.device.name for b in budgets(adder, order)] == ["y", "z", "a", "b"]


def test_those_that_lack_least_come_before_the_others(tmp_path, devices, mixed):
    names = [f"i{k}" for k in range(6)]
    text = "\n".join(
        [
            'name = "Parity and more"',
            "[inputs]",
            *(f"{n} = 1" for n in names),
            "[outputs]",
            *(f"o{k} = 1" for k in range(5)),
            "[logic]",
            f'o0 = "{" ⊕ ".join(names)}"',
            *(f'o{k} = "{names[k]}"' for k in range(1, 5)),
        ]
    )
    found = budgets(design(tmp_path, text), [mixed, *devices])
    assert [(b.device.name, b.fits, b.missing) for b in found] == [
        # Parity of 6 takes 32 terms in either polarity (any textbook); single literals take one
        # each, and none of them is a term of the parity.
        ("shared-14x40x8", True, 0),
        ("shared-16x48x8", True, 0),
        ("shared-20x96x12", True, 0),
        ("shared-12x32x6", False, 4),
        ("shared-10x24x6", False, 12),
        ("shared-8x16x4", False, 20 + 1),
        ("mixed-6x10x3", False, 26 + 2),
    ]
    assert [b.tightest for b in found[-4:]] == ["terms", "terms", "terms", "terms"]


def test_unknown_counts_come_last(tmp_path, devices):
    behaviour = design(tmp_path, ADDER.replace("sum = 1\n", 'sum = { active = "low" }\n', 1))
    found = budgets(behaviour, devices, "true")
    assert [b.device.name for b in found if b.fits] == list(SHARED)[2:]
    low = found[-2:]
    assert [b.device.name for b in low] == ["shared-8x16x4", "shared-10x24x6"]
    for budget, output in zip(low, ("sum", "carry"), strict=True):
        assert budget.missing is None
        assert "terms" not in budget.usages
        (reason,) = budget.reasons
        assert reason.startswith(f"output {output} can only be realised by a complemented sum")


@pytest.mark.parametrize(
    ("reserve", "fits", "missing", "tightest"),
    [
        pytest.param(0, True, 0, "outputs", id="none"),  # 7/16 terms, 3/8 inputs, 2/4 outputs
        pytest.param(1, True, 0, "terms", id="equal shares: terms first"),
        pytest.param(9, True, 0, "terms", id="all that is spare"),
        pytest.param(10, False, 1, "terms", id="one too many"),
        pytest.param(1000, False, 991, "terms", id="more than there are"),
    ],
)
def test_reserve(adder, reserve, fits, missing, tightest):
    (found,) = budgets(adder, [find_device("shared-8x16x4")], reserve=reserve)
    assert (found.fits, found.missing, found.tightest) == (fits, missing, tightest)
    assert found.fit.fits
    if not fits:
        (reason,) = found.reasons
        assert reason == (
            f"the smallest set leaves 9 of 16 product terms spare, {reserve} are to be kept: "
            f"{missing} too few"
        )


def test_reserve_of_an_unproven_set_says_so(adder, devices):
    tried = fit(adder, devices[0])
    unproven = replace(tried.minimum, lower_bound=6, proven_by=None)
    found = DeviceBudget(replace(tried, minimum=unproven), 10)
    (reason,) = found.reasons
    assert reason == (
        "the best set found (at least 6 are needed) leaves 9 of 16 product terms spare, "
        "10 are to be kept: 1 too few"
    )


def test_a_dozen_devices_cost_a_minimization_for_each_set_of_polarities(adder, devices, counted):
    many = [replace(d, name=f"{d.name}-{k}") for k in range(2) for d in devices]
    assert len(budgets(adder, many)) == 12
    assert len(counted) == len(set(counted)) == 3  # true sums only, complements only, either


def test_devices_that_tie_polarities_alike_share_too(tmp_path, mixed, devices, counted):
    logic = {"x": "a + b + c", "y": "a' + b'", "z": "a b + b' c"}
    text = "\n".join(
        ['name = "Tied"', "[inputs]", "a = 1\nb = 1\nc = 1", "[outputs]"]
        + [f"{name} = 1" for name in logic]
        + ["[logic]", *(f'{name} = "{how}"' for name, how in logic.items())]
        + ["[place.placed]", "z = 8"]
    )
    behaviour = design(tmp_path, text)
    tied = [
        mixed,
        replace(mixed, name="again"),
        replace(mixed, name="reversed", cells=mixed.cells[::-1]),
        replace(mixed, name="placed"),  # z on the cell that shows its sum
    ]
    for order in ([*tied, *devices], [*devices, *tied], [*devices[::-1], *tied[::-1]]):
        counted.clear()
        shared = fits_on(behaviour, order, "free")
        assert len(counted) <= 5  # either, true, complements; tied without places and with one
        assert [outcome(f) for f in shared] == [outcome(fit(behaviour, d)) for d in order]


@pytest.mark.parametrize("wish", ["free", "true"])
def test_shared_minima_change_nothing(adder, devices, wish):
    shared = fits_on(adder, devices, wish)
    assert [outcome(f) for f in shared] == [outcome(fit(adder, d, wish)) for d in devices]


PLACES = """
[place.shared-8x16x4]
a = 7
b = 2
sum = 13
[place.shared-10x24x6]
a = 2
"""


def test_a_place_that_cannot_be_is_a_reason_of_that_device(tmp_path, devices):
    behaviour = design(tmp_path, ADDER + PLACES)
    found = {b.device.name: b for b in budgets(behaviour, devices)}
    wrong = found["shared-8x16x4"]
    assert not wrong.fits
    assert wrong.reasons == (
        f"a is an input, but pin 7 is ground on shared-8x16x4 ({behaviour.file}:15:1)",
    )
    assert (wrong.missing, wrong.fit.terms.used) == (0, 7)
    assert wrong.fit.plan is None
    others = [b for name, b in found.items() if name != "shared-8x16x4"]
    assert all(b.fits for b in others)
    assert found["shared-10x24x6"].fit.plan.pins["a"] == 2


def test_a_wrong_place_alone_comes_before_what_lacks_something(tmp_path, devices):
    behaviour = design(tmp_path, f"{ADDER}[place.shared-20x96x12]\na = 20\n")
    found = budgets(behaviour, devices, reserve=30)
    assert [(b.device.name, b.fits, b.missing) for b in found] == [
        ("shared-14x40x8", True, 0),
        ("shared-16x48x8", True, 0),
        ("shared-20x96x12", False, 0),
        ("shared-12x32x6", False, 3),
        ("shared-10x24x6", False, 13),
        ("shared-8x16x4", False, 21),
    ]


def test_a_wrong_place_elsewhere_does_not_hide_what_would_hold_a_design(tmp_path, devices, mixed):
    names = [f"i{k}" for k in range(5)]
    text = "\n".join(
        [
            'name = "Parity"',
            "[inputs]",
            *(f"{n} = 1" for n in names),
            "[outputs]\np = 1",
            f'[logic]\np = "{" ⊕ ".join(names)}"',
            "[place.shared-10x24x6]\np = 1",
        ]
    )
    refused = fit(design(tmp_path, text), mixed)
    assert not refused.fits
    held = [f.device.name for f in holders(refused, devices, "free")]
    assert held == [name for name in SHARED if name != "shared-10x24x6"]


def test_places_on_a_device_that_is_not_compared(tmp_path, devices):
    behaviour = design(tmp_path, ADDER + PLACES.replace("10x24x6", "10x24x5"))
    (warning,) = places_nowhere(behaviour, devices)
    assert warning.message == (
        "pins are decided for shared-10x24x5, which is none of the devices compared"
    )
    assert warning.hint == "did you mean 'shared-10x24x6'?"
    assert warning.location.line == 19
    assert warning.severity == "warning"
