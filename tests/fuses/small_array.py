"""An array that has a bit of everything: own and shared OR gates, enables, feedback, modes."""

from pla.device.reader import read_device

SMALL = """
name = "everything-5x11x6"
summary = "for tests: five inputs, eleven rows, six cells of five kinds"
technology = "erasable"
family = "everything"
pins = 12
fuses = 260
ground = 6
power = 12
spare = ["258..259"]

[links]
blank = 1
connected = 0
unused_term = "dead"
unused_enable = "off"

[and]
columns = "1 1' 2 2' 3 3' 4 4' 5 5' 7 7' 8 8' . b1' io io' 9"
terms = 11
first_fuse = 0
term_step = 19
column_step = 1

[or]
columns = "b1 9 10 11"
terms = "7..10"
first_fuse = 209
term_step = 4
column_step = 1

[drop]
dropped = 0
first_fuse = 225
term_step = 1

[set]
241 = 0

[signature]
first_fuse = 242
bits = 16
order = "most significant bit first"

# Its first row is an enable or a third term.
[kind.own]
bits = ["role", "sense"]
modes = [
  { set = "10", pin = "sum", feedback = "pin", terms = "1..2", enable = 0 },
  { set = "11", pin = "sum'", feedback = "sum'", terms = "1..2", enable = 0 },
  { set = "00", pin = "sum'", feedback = "sum", terms = "0..2", enable = "always" },
]
cells = [ { pin = 7, rows = ["0..2"], links = [236, 237] } ]

# Its columns carry its own pin, or stand in for those of pin 4.
[kind.borrowing]
bits = ["columns"]
modes = [
  { set = "0", pin = "sum", columns = "8 8'" },
  { set = "1", pin = "sum", columns = "4' ." },
]
cells = [ { pin = 8, enable = 3, terms = "4..5", links = [238] } ]

[kind.buried]
bits = []
modes = [ { set = "", feedback = "sum" } ]
cells = [ { name = "b1", links = [] } ]

[kind.named]
bits = ["driver"]
modes = [
  { set = "0", pin = "none", feedback = "sum'" },
  { set = "1", pin = "sum", feedback = "sum" },
]
cells = [ { pin = 9, name = "io", enable = 6, links = [239] } ]

[kind.switched]
bits = ["polarity"]
enable = { pin = 5, active = "low" }
modes = [ { set = "0", pin = "sum" }, { set = "1", pin = "sum'" } ]
cells = [ { pin = 10, links = [240] } ]

[kind.plain]
bits = []
modes = [ { set = "", pin = "sum" } ]
cells = [ { pin = 11, links = [] } ]
"""


def small_array(folder, *changes):
    """The array, with pieces of its text replaced: (old, new) each."""
    text = SMALL
    for old, new in changes:
        assert text.count(old) == 1
        text = text.replace(old, new)
    path = folder / "everything-5x11x6.toml"
    path.write_text(text, encoding="utf-8")
    return read_device(str(path))
