"""A small device file with everything that a combinational array can have, for tests.

Rows 0..3 belong to the cell on pin 7, whose first row is its enable or one more term; rows 4..6 to
the cell on pin 8, which pin 4 enables while it is low; row 7 is the enable of the cell on pin 9,
which shares rows 8..11 with the buried cell b. 12 rows of 12 AND links are fuses 0..143, 4 rows of
2 OR links 144..151, drop links of the shared rows 152..155, configuration 156..158.
"""

from __future__ import annotations

from pla.device.reader import device_from
from pla.tomlfile import parse_toml

FULL = """\
name = "full"
technology = "erasable"
pins = 12
fuses = 178
ground = [5, 6]
power = 12
unconnected = [10, 11]
spare = ["176..177"]
family = "fuller"

[set]
159 = 1

[links]
blank = 1
connected = 0
unused_term = "dead"
unused_enable = "off"

[and]
columns = "1 1' 2 2' 3 3' 7 7' 9 s s' b'"
terms = 12
first_fuse = 0
term_step = 12

[or]
columns = "s b"
first_fuse = 144
term_step = 2

[drop]
dropped = 0
first_fuse = 152
terms = "8..11"

[kind.own]
bits = ["use", "polarity"]
unused = "00"
modes = [
  { set = "00", pin = "sum",  feedback = "pin",  terms = "1..3", enable = 0 },
  { set = "01", pin = "sum'", feedback = "sum'", terms = "1..3", enable = 0 },
  { set = "11", pin = "sum",  columns = "3' .",  terms = "0..3", enable = "always" },
]
cells = [ { pin = 7, rows = "0..3", links = [156, 157] } ]

[kind.gated]
enable = { pin = 4, active = "low" }
modes = [ { pin = "sum'" } ]
cells = [ { pin = 8, terms = "4..6" } ]

[kind.shared]
bits = ["sense"]
modes = [
  { set = "0", pin = "sum'", feedback = "sum" },
  { set = "1", pin = "none", feedback = "pin" },
]
cells = [ { pin = 9, name = "s", enable = 7, links = [158] } ]

[kind.buried]
modes = [ { feedback = "sum" } ]
cells = [ { name = "b" } ]

[signature]
first_fuse = 160
bits = 16
order = "least significant bit first"
ones = 0

[timing]
tpd = 12.5
tfb = 10
ten = 15
tdis = 15
"""


def edited(*edits, text=FULL):
    for old, new in edits:
        assert old in text, old
        text = text.replace(old, new, 1)
    return text


def device(*edits, text=FULL):
    return device_from(parse_toml(edited(*edits, text=text), "full.toml"))
