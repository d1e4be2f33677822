"""Passes and delays by way of bidirectional pins, which a fed-back signal has too."""

from fractions import Fraction

from small_devices import design, proven

from pla.device.catalogue import find_device
from pla.fitting.delays import LongestWays
from pla.fitting.fit import fit

# varied-11x5: tpd 20, tfb 15, ten 20 ns.
CHAIN = """
name = "Chain"
{more}
[inputs]
s = 1
e = 1
f = 1
[outputs]
a = {{ enable = "e", reads = "ra" }}
b = {{ enable = "{second}", reads = "rb" }}
c = 1
[logic]
b = "s"
a = "rb s"
c = "ra rb s"
"""


def fitted(folder, more="", second="f"):
    return fit(design(folder, CHAIN.format(more=more, second=second)), find_device("varied-11x5"))


def test_a_level_read_at_a_driven_pin_comes_a_pass_later(tmp_path):
    """b from s, a from b's pin, c from a's pin: three passes, each out to a pin and in again."""
    found = fitted(tmp_path)
    assert found.fits
    assert proven(found.plan)
    assert found.plan.passes == (2, 1, 3)
    assert LongestWays(found.plan).worst == (40, 20, 60)


def test_outputs_that_never_drive_at_once_do_not_wait_for_each_other(tmp_path):
    found = fitted(tmp_path, second="e'")
    assert found.plan.passes == (1, 1, 2)
    assert LongestWays(found.plan).worst == (20, 20, 40)


def test_a_way_by_pins_counts_against_max_delay(tmp_path):
    assert fitted(tmp_path, "max_delay = 60").fits
    late = fitted(tmp_path, "max_delay = 59.5")
    assert late.reasons == ("c may take 60 ns, and 59.5 ns are allowed",)


def test_an_enable_that_reads_a_pin_waits_for_it(tmp_path):
    found = fitted(tmp_path, second="e s")
    ways = LongestWays(found.plan)
    assert ways.switched(1, Fraction(20)) == 20
    waits = fit(
        design(
            tmp_path,
            CHAIN.format(more="", second="f").replace("c = 1", 'c = { enable = "rb" }'),
        ),
        find_device("varied-11x5"),
    )
    assert LongestWays(waits.plan).switched(2, Fraction(20)) == 40


def test_a_device_without_figures_leaves_max_delay_unchecked_and_says_so(tmp_path):
    found = fit(
        design(tmp_path, 'name = "t"\nmax_delay = 5\n[inputs]\na = 1\n[outputs]\nf = 1\n'
               '[logic]\nf = "a"\n'),
        find_device("shared-8x16x4"),
    )  # fmt: skip
    assert found.fits
    assert [warning.code for warning in found.warnings] == ["DELAY-UNKNOWN"]
