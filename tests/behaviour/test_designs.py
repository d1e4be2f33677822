# ruff: noqa: E501 - equations stand on one line
"""Every way to describe an output, against plain functions over all input combinations."""

from __future__ import annotations

import pytest
from point_values import check, check_sources, points, read, value

DRYER = """\
name = "Grain dryer panel"
revision = "A"

[inputs]
step = 4
hatch = { active = "low" }
start = 1
jam = 1

[outputs]
segment = 3
burner = { active = "low", impossible = 0 }
vent = { impossible = 1 }
fan = 1
armed = 1
spark = 1

[never]
when = ["step > 9", "jam hatch"]

[[cases]]
rows = '''
step   | segment
0      | 0b110
1      | 3
2..3   | 0b1x0
0x4    | x
others | x
'''

[minterms.fan]
of = "step"
on = [1, 4, "6..8"]
dont_care = [0]
others = 0

[logic]
burner = "armed hatch' + step == 7"
vent = "burner' ⊕ step[0]"
armed = "start jam'"
spark = "step[0] ⊕ step[3]"

[place.some-device]
burner = 14
"step[0]" = 2
"""


def never(step, hatch, start, jam):  # noqa: ARG001
    return step > 9 or (jam and hatch)


def in_dryer(function, impossible="x"):
    def expected(step, hatch, start, jam):
        if never(step, hatch, start, jam):
            return impossible
        return function(step=step, hatch=hatch, start=start, jam=jam)

    return expected


def segment(bit):
    patterns = {0: "110", 1: "011", 2: "1x0", 3: "1x0"}

    def at(step, **_):
        sign = patterns.get(step, "xxx")[2 - bit]
        return sign if sign == "x" else int(sign)

    return at


def burner(step, hatch, start, jam):
    return int((start and not jam and not hatch) or step == 7)


def test_dryer_everywhere():
    behaviour = read(DRYER)
    check(
        behaviour,
        {
            "segment[2]": in_dryer(segment(2)),
            "segment[1]": in_dryer(segment(1)),
            "segment[0]": in_dryer(segment(0)),
            "burner": in_dryer(burner, 0),
            "vent": in_dryer(lambda **s: (1 - burner(**s)) ^ (s["step"] & 1), 1),
            "fan": in_dryer(lambda step, **_: "x" if step == 0 else int(step in (1, 4, 6, 7, 8))),
            "armed": in_dryer(lambda start, jam, **_: int(start and not jam)),
            "spark": in_dryer(lambda step, **_: (step & 1) ^ (step >> 3)),
        },
    )
    check_sources(behaviour)
    for point, signals in points(behaviour):
        impossible = any(not c.ones & ~point and not c.zeros & point for c in behaviour.never)
        assert impossible == bool(never(**signals))


def test_dryer_model():
    behaviour = read(DRYER)
    assert (behaviour.name, behaviour.revision, behaviour.file) == (
        "Grain dryer panel",
        "A",
        "d.toml",
    )
    assert behaviour.input_names == (
        *("step[3]", "step[2]", "step[1]", "step[0]"),
        *("hatch", "start", "jam"),
    )
    assert behaviour.output_names[:4] == ("segment[2]", "segment[1]", "segment[0]", "burner")
    assert [i.active_low for i in behaviour.inputs] == [False] * 4 + [True, False, False]
    by_name = {o.name: o for o in behaviour.outputs}
    assert by_name["burner"].active_low
    assert [by_name[n].impossible for n in ("burner", "vent", "fan")] == [0, 1, None]
    assert {n: by_name[n].form for n in ("segment[0]", "fan", "armed")} == {
        "segment[0]": "cases",
        "fan": "minterms",
        "armed": "logic",
    }
    assert by_name["segment[1]"].described.line == 23
    assert by_name["burner"].described.line == 38
    assert by_name["burner"].location.line == 12
    places = behaviour.places["some-device"]
    assert [(p.signal, p.pin, p.location.line) for p in places] == [
        ("burner", 14, 44),
        ("step[0]", 2, 45),
    ]
    assert behaviour.warnings == ()
    assert behaviour.function.conflict() is None


def test_sources_in_order():
    sources = {s.reason: s.cubes for s in read(DRYER).dont_cares}
    assert list(sources) == ["never", "others", "x", "dont_care"]
    # `burner` and `vent` take the freedom of [never] away.
    assert int(sources["never"].outputs.min()) == 0b11100111
    assert set(sources["dont_care"].outputs.tolist()) == {0b100000}


DECODER = """\
[inputs]
addr = "7:3"
go = 1
[outputs]
rom = { active = "low" }
ram = 1
port = 1
[[address_map]]
bus = "addr"
when = "go"
select = { rom = "0x00..0x3F", ram = ["0x40..0x7F", "0xC0..0xFF"], port = "128..135" }
elsewhere = """


@pytest.mark.parametrize("elsewhere", [0, 1, "x"])
def test_address_map(elsewhere):
    text = f'"{elsewhere}"' if elsewhere == "x" else str(elsewhere)
    behaviour = read(DECODER + text + "\n")

    def selected(*spans):
        def expected(addr, go):
            if not go:
                return 0
            if 0x88 <= addr < 0xC0:
                return elsewhere
            return int(any(low <= addr <= high for low, high in spans))

        return expected

    check(
        behaviour,
        {
            "rom": selected((0, 0x3F)),
            "ram": selected((0x40, 0x7F), (0xC0, 0xFF)),
            "port": selected((0x80, 0x87)),
        },
    )
    check_sources(behaviour)
    if elsewhere == "x":
        assert [s.reason for s in behaviour.dont_cares] == ["elsewhere"]


def test_address_map_that_overlaps_by_permission():
    behaviour = read(
        "[inputs]\na = 4\nen = 1\n[outputs]\nf = 1\ng = 1\nh = 1\n[never]\nwhen = 'a == 15'\n"
        "[[address_map]]\nbus = 'a'\nwhen = 'en + h'\noverlap = 'allow'\nelsewhere = 'x'\n"
        "select = { f = '0..7', g = ['4..9', '6..12'] }\n[logic]\nh = 'a[3:1] != 5'\n"
    )

    def expected(low, high):
        def at(a, en):
            if a == 15:
                return "x"
            if not en and a >> 1 == 5:
                return 0
            return "x" if a > 12 else int(low <= a <= high)

        return at

    check(
        behaviour,
        {
            "f": expected(0, 7),
            "g": expected(4, 12),
            "h": lambda a, en: "x" if a == 15 else int(a >> 1 != 5),  # noqa: ARG005
        },
    )
    check_sources(behaviour)


def test_address_map_of_a_part():
    behaviour = read(
        "[inputs]\naddr = '15:10'\n[outputs]\nf = 1\n[[address_map]]\nbus = 'addr[15:12]'\n"
        "select = { f = ['0x3', '8..9'] }\nelsewhere = 0\n"
    )
    check(behaviour, {"f": lambda addr: int(addr >> 12 in (3, 8, 9))})


COMPARISONS = [
    *(
        (f"step {op} {n}", op, n, None)
        for op in ("==", "!=", "<", "<=", ">", ">=")
        for n in (0, 6, 15)
    ),
    ("step in 3..12", "in", 3, 12),
    ("step in 0..15", "in", 0, 15),
    ("step in 0x7..0b0111", "in", 7, 7),
]
MEANING = {
    "==": lambda v, a, _: v == a,
    "!=": lambda v, a, _: v != a,
    "<": lambda v, a, _: v < a,
    "<=": lambda v, a, _: v <= a,
    ">": lambda v, a, _: v > a,
    ">=": lambda v, a, _: v >= a,
    "in": lambda v, a, b: a <= v <= b,
}


@pytest.mark.parametrize(("text", "op", "first", "last"), COMPARISONS)
def test_comparison(text, op, first, last):
    behaviour = read(
        f"[inputs]\na = 1\nstep = 4\n[outputs]\nf = 1\ng = 1\nh = 1\n[logic]\n"
        f'f = "{text}"\ng = "not {text} a"\nh = "{text.replace("step", "step[3:0]")} + a"\n'
    )
    meaning = MEANING[op]
    check(
        behaviour,
        {
            "f": lambda a, step: int(meaning(step, first, last)),  # noqa: ARG005
            "g": lambda a, step: int(not meaning(step, first, last) and a),
            "h": lambda a, step: int(meaning(step, first, last) or a),
        },
    )


def test_comparison_of_an_output_bus():
    behaviour = read(
        "[inputs]\na = 3\n[outputs]\ng = 3\nf = 1\n[logic]\n'g[2]' = 'a[2]'\n"
        "'g[1]' = 'a[2] ⊕ a[1]'\n'g[0]' = 'a[1] ⊕ a[0]'\nf = 'g in 2..6'\n"
    )
    for point, signals in points(behaviour):
        gray = signals["a"] ^ signals["a"] >> 1
        assert value(behaviour, point, 3) == int(2 <= gray <= 6)


@pytest.mark.parametrize(
    ("equation", "low"),
    [
        ("addr >= 0xC0", 0xC0),
        ("addr > 0xBF", 0xC0),
        ("not addr < 0x08", 0x08),
        ("not addr <= 0x07", 0x08),
        ("addr in 0x28..0xFF", 0x28),
        ("addr[7:6] == 3", 0xC0),
        ("addr[7:2] >= 0b100100", 0x90),
    ],
)
def test_partial_bus(equation, low):
    behaviour = read(f'[inputs]\naddr = "7:3"\n[outputs]\nf = 1\n[logic]\nf = "{equation}"\n')
    check(behaviour, {"f": lambda addr: int(addr >= low)})


def test_a_single_number_of_a_partial_bus_is_its_granule_with_a_warning():
    head = '[inputs]\naddr = "7:3"\n[outputs]\nf = 1\n'
    forms = [
        ('[logic]\nf = "addr == 0x18"\n', (6, 14)),
        ("[minterms.f]\nof = 'addr'\non = [0x18]\nothers = 0\n", (7, 7)),
        ("[[address_map]]\nbus = 'addr'\nselect = { f = 0x18 }\nelsewhere = 0\n", (7, 16)),
        ("[[cases]]\nrows = '''\naddr | f\n0x18 | 1\nothers | 0'''\n", (8, 1)),
    ]
    for form, place in forms:
        behaviour = read(head + form)
        check(behaviour, {"f": lambda addr: int(addr == 0x18)})
        (warning,) = behaviour.warnings
        assert warning.code == "GRANULE-POINT"
        assert (warning.location.line, warning.location.column) == place


SAME_FUNCTION = {
    "equation": "[logic]\nf = 'step in 3..6 + step == 9 + step == 10'\n",
    "equation of bits": """
[logic]
f = "step[3]' (step[2] (step[1] step[0])' + step[1:0] == 3 step[2]') + step[3] step[2]' (step[1] ⊕ step[0])"
""",
    "minterms": "[minterms.f]\nof = 'step'\non = ['3..6', 9, 10]\nothers = 0\n",
    "minterms of named inputs": """
[minterms.f]
of = ['step[3:2]', 'step[1]', 'step[0]']
off = ['0..2', 7, 8]
on = ['0x3..0x6', '0b1001', 10]
others = 0
""",
    "table": """
[[cases]]
rows = '''
step | f
3..6 | 1
9 | 1
0b1010 | 1
14..15 | x
others | 0'''
""",
    "table of parts without others": """
[[cases]]
rows = '''
step[3] step[2:0] | f
0       3..6      | 1
1       1..2      | 1
0       0..2      | 0
-       7         | 0
1       0b000     | 0
1       0b-11     | 0
1       4..5      | 0
1       2         | 1'''
""",
    "address map": """
[[address_map]]
bus = 'step'
select = { f = ['3..6', '0x9..0xA'] }
elsewhere = 0
""",
}


@pytest.mark.parametrize("form", SAME_FUNCTION.values(), ids=SAME_FUNCTION)
def test_equal_behaviour_from_every_form(form):
    head = "[inputs]\nstep = 4\n[outputs]\nf = 1\n[never]\nwhen = 'step > 13'\n"
    behaviour = read(head + form)
    check(behaviour, {"f": lambda step: "x" if step > 13 else int(step in (3, 4, 5, 6, 9, 10))})
    assert [s.reason for s in behaviour.dont_cares] == ["never"]


def test_rows_inside_never_give_way_with_a_warning():
    behaviour = read(
        "[inputs]\na = 1\nb = 1\n[outputs]\nf = 1\n[never]\nwhen = 'a b'\n"
        "[[cases]]\nrows = '''\na b | f\n1 1 | 1\n0 0 | 0\n1 - | 0\n0 1 | 1'''\n"
    )
    check(behaviour, {"f": lambda a, b: "x" if a and b else b})
    (warning,) = behaviour.warnings
    assert (warning.code, warning.location.line) == ("ROW-IMPOSSIBLE", 11)


def test_rows_that_differ_only_on_impossible_inputs_do_not_contradict_each_other():
    behaviour = read(
        "[inputs]\na = 1\nb = 1\n[outputs]\nf = 1\n[never]\nwhen = 'a b'\n"
        "[[cases]]\nrows = '''\na b | f\n1 - | 1\n- 1 | 0\n0 0 | x'''\n"
    )
    check(behaviour, {"f": lambda a, b: "x" if a == b else a})
    assert behaviour.warnings == ()


def test_a_row_of_dont_cares_inside_never_is_fine():
    behaviour = read(
        "[inputs]\na = 1\nb = 1\n[outputs]\nf = 1\n[never]\nwhen = 'a b'\n"
        "[[cases]]\nrows = '''\na b | f\n1 1 | x\n0 0 | 0\n1 0 | 0\n0 1 | 1'''\n"
    )
    assert behaviour.warnings == ()


def test_equal_values_may_overlap():
    behaviour = read(
        "[inputs]\na = 3\n[outputs]\nf = 1\ng = 1\n[[cases]]\nrows = '''\n"
        "a | f g\n0..4 | 1 x\n2..5 | 1 x\nothers | 0 1'''\n"
    )
    check(behaviour, {"f": lambda a: int(a < 6), "g": lambda a: "x" if a < 6 else 1})
    check_sources(behaviour)


def test_tables_over_some_inputs_and_outputs():
    behaviour = read(
        "[inputs]\na = 2\nb = 1\nc = 1\n[outputs]\nf = 2\ng = 1\n"
        "[[cases]]\nrows = '''\na | f[1] g\n\n  0b-1 | 1   0\n0b-0| 0 1\n'''\n"
        "[[cases]]\nrows = '''\nc | b | f[0]\n1 | - | 1\n0|0|0\nothers | x\n'''\n"
    )
    check(
        behaviour,
        {
            "f[1]": lambda a, **_: a & 1,
            "f[0]": lambda b, c, **_: 1 if c else "x" if b else 0,
            "g": lambda a, **_: 1 - (a & 1),
        },
    )
    (warning,) = behaviour.warnings
    assert warning.message == "no output depends on a[1]"


def test_inputs_that_nothing_depends_on():
    behaviour = read("[inputs]\na = 2\nb = 1\nc = 1\n[outputs]\nf = 1\n[logic]\nf = 'a[0] c'\n")
    assert [(w.code, w.location.line, w.message) for w in behaviour.warnings] == [
        ("INPUT-UNUSED", 2, "no output depends on a[1]"),
        ("INPUT-UNUSED", 3, "no output depends on b"),
    ]


def test_bits_and_active_level_in_one_declaration():
    behaviour = read(
        "[inputs]\na = { bits = 2, active = 'low' }\nb = { bits = '3:2' }\n"
        "[outputs]\nf = { bits = 2, active = 'low' }\n[logic]\n"
        "'f[1]' = 'a == 2'\n'f[0]' = 'b >= 8'\n"
    )
    assert behaviour.input_names == ("a[1]", "a[0]", "b[3]", "b[2]")
    assert [i.active_low for i in behaviour.inputs] == [True, True, False, False]
    check(behaviour, {"f[1]": lambda a, b: int(a == 2), "f[0]": lambda a, b: int(b >= 8)})  # noqa: ARG005


def test_name_defaults_to_the_stem_of_the_file():
    assert read("[inputs]\na = 1\n[outputs]\nf = 1\n[logic]\nf = 'a'").name == "d"


def test_sixty_four_inputs():
    behaviour = read("[inputs]\na = 64\n[outputs]\nf = 1\n[logic]\nf = 'a >= 0x8000000000000001'\n")
    on, off = behaviour.function.on, behaviour.function.off
    assert sum(2 ** (64 - cube.literals) for cube in on) == 2**63 - 1
    assert sum(2 ** (64 - cube.literals) for cube in off) == 2**63 + 1
