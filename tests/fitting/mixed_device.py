"""A device whose cells differ, so that outputs bear on each other's polarity."""

# Six pins for inputs, three cells: one shows its sum, one its complement, one either.
MIXED = """
name = "mixed-6x10x3"
summary = "cells of three kinds"
technology = "one-time"
pins = 11
fuses = 151
ground = 5
power = 11

[links]
blank = 0
connected = 0
unused_term = "blank"

[and]
columns = "1 1' 2 2' 3 3' 4 4' 6 6' 7 7'"
terms = 10
first_fuse = 0
term_step = 15
column_step = 1

[or]
columns = "8 9 10"
first_fuse = 12
term_step = 15
column_step = 1

[kind.high]
bits = []
modes = [ { set = "", pin = "sum" } ]
cells = [ { pin = 8, links = [] } ]

[kind.low]
bits = []
modes = [ { set = "", pin = "sum'" } ]
cells = [ { pin = 9, links = [] } ]

[kind.either]
bits = ["polarity"]
modes = [ { set = "0", pin = "sum" }, { set = "1", pin = "sum'" } ]
cells = [ { pin = 10, links = [150] } ]
"""
