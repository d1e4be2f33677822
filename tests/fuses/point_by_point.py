"""An array evaluated at one combination of levels, by going round until nothing changes.

It reads fuses and the device's numbers on its own: nothing of `pla.fuses` is used. A level is 0, 1,
or `None` for unknown.
"""


class Wiring:
    """What is joined to what. A line is (kind, key, complement), or `None` for nothing."""

    def __init__(self, device, states):
        self.device, self.states = device, states
        self.modes = {}
        for cell in device.cells:
            setting = "".join(str(states[fuse]) for fuse in cell.links)
            self.modes[cell.key] = next((m for m in cell.modes if m.set == setting), None)
        columns = [self.column(index) for index in range(len(device.and_array.columns))]
        self.rows = [self.row(number, columns) for number in range(len(device.and_array.rows))]
        self.summed = {cell.key: self.rows_of(cell) for cell in device.cells}

    def column(self, index):
        named = self.device.and_array.columns[index]
        for cell in self.device.cells:
            if index in dict(cell.modes[0].lines):
                mode = self.modes[cell.key]
                line = None if mode is None else dict(mode.lines)[index]
                return None if line is None else (line.kind, line.of, line.complement)
        return None if named is None else ("pin", named.source, named.complement)

    def row(self, number, columns):
        """The lines of a row; `False` for one that is 0."""
        array, device = self.device.and_array, self.device
        if device.drop is not None and number in device.drop.terms:
            fuse = device.drop.fuses[device.drop.terms.index(number)]
            if self.states[fuse] == device.drop.dropped:
                return False
        joined = [
            columns[index]
            for index, named in enumerate(array.columns)
            if named is not None
            and self.states[array.rows[number] + index * array.column_step]
            == device.links.connected
        ]
        present = {line for line in joined if line is not None}
        dead = any((kind, key, not complement) in present for kind, key, complement in present)
        return False if dead else joined

    def rows_of(self, cell):
        array = self.device.or_array
        if array is None or cell.key not in array.sums:
            mode = self.modes[cell.key]
            return None if mode is None else list(mode.terms)
        index = array.sums.index(cell.key)
        return [
            term
            for term, first in zip(array.terms, array.rows, strict=True)
            if self.states[first + index * array.column_step] == self.device.links.connected
        ]


class Point:
    """The array at one point, with everything unknown at first.

    `outside` gives for a pin (level, rule): "holds" drives all the time, "yields" only while the
    part does not, and with "free" lines carry that level whatever the part does.
    """

    def __init__(self, wiring, outside):
        self.wiring, self.outside = wiring, outside
        cells = wiring.device.cells
        self.sums = {cell.key: None for cell in cells}
        self.levels = {cell.pin: None for cell in cells if cell.pin is not None}
        before = None
        while before != (self.sums, self.levels):
            before = (dict(self.sums), dict(self.levels))
            self.sums = {cell.key: self.sum_of(cell) for cell in cells}
            for cell in cells:
                if cell.pin is not None:
                    self.levels[cell.pin] = self.level(cell)

    def line(self, line):
        if line is None:
            return None
        kind, key, complement = line
        if kind == "sum":
            value = self.sums[key]
        elif key in self.levels:
            value = self.levels[key]
        else:
            value = self.outside.get(key, (None, ""))[0]
        return value if value is None else value ^ complement

    def row(self, number):
        lines = self.wiring.rows[number]
        return 0 if lines is False else both([self.line(line) for line in lines])

    def sum_of(self, cell):
        rows = self.wiring.summed[cell.key]
        return None if rows is None else inverse(both([inverse(self.row(row)) for row in rows]))

    def driven(self, cell):
        mode = self.wiring.modes[cell.key]
        if mode is None:
            return None
        if mode.pin == "none":
            return 0
        if mode.enable.kind == "row":
            return self.row(mode.enable.row)
        if mode.enable.kind == "pin":
            return self.line(("pin", mode.enable.pin, mode.enable.active_low))
        return 1

    def shown(self, cell):
        mode = self.wiring.modes[cell.key]
        if mode is None or mode.pin == "none":
            return None
        value = self.sums[cell.key]
        return inverse(value) if mode.pin == "sum'" else value

    def level(self, cell):
        level, rule = self.outside.get(cell.pin, (None, "none"))
        driven = self.driven(cell)
        if rule == "free" or (rule in {"holds", "yields"} and driven == 0):
            return level
        shown = self.shown(cell)
        if rule == "holds" or driven == 0:
            return None
        if driven == 1:
            return shown
        return shown if rule == "yields" and shown == level else None


def inverse(value):
    return None if value is None else 1 - value


def both(values):
    """The AND of 0, 1 and unknown."""
    if 0 in values:
        return 0
    return None if None in values else 1
