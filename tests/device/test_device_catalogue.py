"""The arrays that ship with the program: fuse numbers worked out by hand from their layouts."""

from __future__ import annotations

import shutil
from pathlib import Path

import pytest

from pla.device import catalogue as module
from pla.device.blocks import role_of
from pla.device.catalogue import catalogue, find_device
from pla.errors import InputError

NAMES = (
    "modal-8x4-gated",
    "modal-8x4-plain",
    "modal-8x4-split",
    "swap-8x4",
    "shared-8x16x4",
    "own-9x5",
    "gate-9x6",
    "shared-10x24x6",
    "joint-10x27x6",
    "shared-10x28x4",
    "varied-11x5",
    "varied-11x5-marked",
    "shared-12x32x6",
    "shared-14x40x8",
    "shared-16x48x8",
    "shared-20x96x12",
)


def test_names_stand_from_small_to_large():
    assert catalogue() == NAMES


@pytest.mark.parametrize("name", NAMES)
def test_a_file_is_named_as_its_device(name):
    device = find_device(name)
    assert device.name == name
    assert device.summary
    assert device.warnings == ()


FIGURES = [
    # name, inputs, terms, outputs, pins, fuses, fuse lists
    ("shared-8x16x4", 8, 16, 4, 14, 320, 16),
    ("shared-10x24x6", 10, 24, 6, 18, 624, 24 + 24),
    ("shared-12x32x6", 12, 32, 6, 20, 966, 32 + 1),
    ("shared-14x40x8", 14, 40, 8, 24, 1532, 40 + 1 + 1),
    ("shared-16x48x8", 16, 48, 8, 28, 1928, 48 + 48 + 1),
    ("shared-20x96x12", 20, 96, 12, 40, 5004, 1 + 96),
    ("modal-8x4-gated", 8, 24, 4, 14, 638, 24 + 4),
    ("modal-8x4-plain", 8, 24, 4, 14, 638, 24 + 4),
    ("modal-8x4-split", 8, 24, 4, 14, 638, 24 + 4),
    ("swap-8x4", 8, 24, 4, 14, 488, 24 + 4),
    ("own-9x5", 9, 30, 5, 16, 720, 30),
    ("gate-9x6", 9, 24, 6, 18, 438, 18 + 1),
    ("joint-10x27x6", 10, 27, 6, 18, 776, 15 + 27 + 2),
    ("shared-10x28x4", 10, 32, 4, 16, 1196, 32 + 1),
    ("varied-11x5", 11, 58, 5, 18, 1866, 58 + 1),
    ("varied-11x5-marked", 11, 58, 5, 18, 1906, 58 + 2),
]


@pytest.mark.parametrize(
    ("name", "inputs", "terms", "outputs", "pins", "fuses", "lists"),
    FIGURES,
    ids=[row[0] for row in FIGURES],
)
def test_figures(name, inputs, terms, outputs, pins, fuses, lists):
    device = find_device(name)
    assert len(device.input_pins) == inputs
    assert device.terms == terms
    assert len(device.output_pins) == outputs
    assert device.pins == pins
    assert device.fuses == fuses
    assert len(list(device.blocks())) == lists


@pytest.mark.parametrize("name", NAMES)
def test_every_pin_is_accounted_for(name):
    device = find_device(name)
    roles = [
        *{*device.input_pins, *device.enable_pins},
        *device.output_pins,
        *device.unconnected,
        *device.ground,
        *device.power,
    ]
    assert sorted(roles) == list(range(1, device.pins + 1))


LINKS = {
    # 16 AND links and 4 OR links a row; OR columns from pin 13 down to 10
    "shared-8x16x4": [
        (0, "joins line 1 to term 0"),
        (1, "joins line 1' to term 0"),
        (15, "joins line 9' to term 0"),
        (16, "joins term 0 to the sum of pin 13"),
        (19, "joins term 0 to the sum of pin 10"),
        (20, "joins line 1 to term 1"),
        (72, "joins line 8 to term 3"),  # 3 * 20 + 12
        (315, "joins line 9' to term 15"),
        (319, "joins term 15 to the sum of pin 10"),
    ],
    # 24 rows of 20 AND links, then 24 rows of 6 OR links from 480
    "shared-10x24x6": [
        (0, "joins line 1 to term 0"),
        (19, "joins line 11' to term 0"),
        (97, "joins line 10' to term 4"),  # 4 * 20 + 17
        (479, "joins line 11' to term 23"),
        (480, "joins term 0 to the sum of pin 12"),
        (486, "joins term 1 to the sum of pin 12"),
        (604, "joins term 20 to the sum of pin 16"),  # 480 + 20 * 6 + 4
        (623, "joins term 23 to the sum of pin 17"),
    ],
    # 24 AND links and 6 OR links a row, polarity from 960
    "shared-12x32x6": [
        (0, "joins line 1 to term 0"),
        (19, "joins line 11' to term 0"),
        (23, "joins line 13' to term 0"),
        (24, "joins term 0 to the sum of pin 14"),
        (29, "joins term 0 to the sum of pin 19"),
        (30, "joins line 1 to term 1"),
        (341, "joins line 6' to term 11"),  # 11 * 30 + 11
        (953, "joins line 13' to term 31"),
        (959, "joins term 31 to the sum of pin 19"),
        (960, "is link 'polarity' of the cell on pin 14"),
        (965, "is link 'polarity' of the cell on pin 19"),
    ],
    # 30 AND columns, two of them without a line, and 8 OR links a row; polarity from pin 22 down
    "shared-14x40x8": [
        (13, "joins line 7' to term 0"),
        (14, "crosses term 0 in column 14, which has no line"),
        (15, "crosses term 0 in column 15, which has no line"),
        (16, "joins line 8 to term 0"),
        (30, "joins term 0 to the sum of pin 22"),
        (37, "joins term 0 to the sum of pin 15"),
        (405, "joins line 13' to term 10"),  # 10 * 38 + 25
        (1511, "joins line 23' to term 39"),  # 39 * 38 + 29
        (1520, "is link 'polarity' of the cell on pin 22"),
        (1527, "is link 'polarity' of the cell on pin 15"),
        (1528, "is spare"),
        (1531, "is spare"),
    ],
    # 48 rows of 32 AND links, then 48 rows of 8 OR links from 1536, polarity from 1920
    "shared-16x48x8": [
        (31, "joins line 27' to term 0"),
        (32, "joins line 1 to term 1"),
        (174, "joins line 9 to term 5"),  # 5 * 32 + 14
        (1535, "joins line 27' to term 47"),
        (1536, "joins term 0 to the sum of pin 18"),
        (1540, "joins term 0 to the sum of pin 23"),
        (1700, "joins term 20 to the sum of pin 23"),  # 1536 + 20 * 8 + 4
        (1919, "joins term 47 to the sum of pin 26"),
        (1920, "is link 'polarity' of the cell on pin 18"),
        (1927, "is link 'polarity' of the cell on pin 26"),
    ],
    # 12 polarity links, then 40 AND links and 12 OR links a row
    "shared-20x96x12": [
        (0, "is link 'polarity' of the cell on pin 22"),
        (11, "is link 'polarity' of the cell on pin 33"),
        (12, "joins line 2 to term 0"),
        (51, "joins line 38' to term 0"),
        (52, "joins term 0 to the sum of pin 22"),
        (64, "joins line 2 to term 1"),
        (566, "joins line 36 to term 10"),  # 12 + 10 * 52 + 34
        (4991, "joins line 38' to term 95"),
        (4992, "joins term 95 to the sum of pin 22"),
        (5003, "joins term 95 to the sum of pin 33"),
    ],
}


@pytest.mark.parametrize(
    ("name", "fuse", "does"),
    [pytest.param(n, f, d, id=f"{n}-{f}") for n, links in LINKS.items() for f, d in links],
)
def test_what_single_fuses_do(name, fuse, does):
    assert str(role_of(find_device(name), fuse)) == does


@pytest.mark.parametrize("fuse", [-1, 966])
def test_no_role_for_a_fuse_that_does_not_exist(fuse):
    with pytest.raises(IndexError, match="of 966"):
        role_of(find_device("shared-12x32x6"), fuse)


SENSES = [
    # name, blank row, unused row, mode of a blank cell
    ("shared-8x16x4", "dead", "blank", "sum"),
    ("shared-10x24x6", "true", "blank", "sum'"),
    ("shared-12x32x6", "dead", "blank", "sum"),
    ("shared-14x40x8", "dead", "blank", "sum'"),
    ("shared-16x48x8", "true", "dead", "sum"),
    ("shared-20x96x12", "dead", "blank", "sum"),
    ("modal-8x4-gated", "true", "drop", "sum"),
    ("swap-8x4", "true", "dead", "sum"),
    ("own-9x5", "dead", "blank", "sum'"),
    ("gate-9x6", "true", "dead", "sum"),
    ("varied-11x5", "dead", "blank", "sum"),
]


@pytest.mark.parametrize(
    ("name", "row", "unused", "shows"), SENSES, ids=[sense[0] for sense in SENSES]
)
def test_senses(name, row, unused, shows):
    device = find_device(name)
    assert device.blank_row == row
    assert device.links.unused_term == unused
    assert {device.blank_mode(cell).pin for cell in device.cells} == {shows}


def test_the_arrays_differ_where_it_matters():
    devices = [find_device(name) for name in NAMES]
    assert {d.technology for d in devices} == {"one-time", "erasable"}
    assert {(d.links.blank, d.links.connected) for d in devices} == {
        (0, 0),
        (0, 1),
        (1, 0),
        (1, 1),
    }
    assert {len(cell.links) for d in devices for cell in d.cells} == {0, 1, 2}
    assert {d.links.unused_enable for d in devices} == {None, "blank", "off", "on"}


def test_modes_and_variants_of_one_part_are_a_family():
    families = {}
    for name in NAMES:
        families.setdefault(find_device(name).family, []).append(name)
    assert {family: names for family, names in families.items() if len(names) > 1} == {
        "modal-8x4": ["modal-8x4-gated", "modal-8x4-plain", "modal-8x4-split"],
        "varied-11x5": ["varied-11x5", "varied-11x5-marked"],
    }
    modes = {find_device(name).mode_fuses for name in families["modal-8x4"]}
    assert modes == {((0, 1), (1, 1)), ((0, 0), (1, 1)), ((0, 1), (1, 0))}


def test_a_path_is_read_as_a_file(tmp_path, monkeypatch):
    source = Path(find_device("shared-8x16x4").location.file)
    shutil.copy(source, tmp_path / "mine.toml")
    shutil.copy(source, tmp_path / "plain")
    assert find_device(str(tmp_path / "mine.toml")).fuses == 320
    monkeypatch.chdir(tmp_path)
    assert find_device("mine.toml").name == "shared-8x16x4"
    assert find_device("plain").name == "shared-8x16x4"


def test_a_catalogue_name_wins_over_a_file_beside(tmp_path, monkeypatch):
    (tmp_path / "shared-8x16x4").write_text("not a device")
    monkeypatch.chdir(tmp_path)
    assert find_device("shared-8x16x4").fuses == 320


def test_an_unknown_name_lists_the_names():
    with pytest.raises(InputError) as caught:
        find_device("shared-12x32x5")
    (diagnostic,) = caught.value.diagnostics
    assert diagnostic.code == "DEVICE-UNKNOWN"
    assert diagnostic.hint == "did you mean 'shared-12x32x6'?"
    for name in NAMES:
        assert name in diagnostic.message


def test_a_name_like_none_gets_no_guess():
    with pytest.raises(InputError) as caught:
        find_device("something")
    assert "did you mean" not in caught.value.diagnostics[0].hint


def test_a_path_to_nothing_is_named():
    with pytest.raises(InputError, match=r"nowhere\.toml"):
        find_device("nowhere.toml")


def test_files_inside_an_installed_package_come_first(tmp_path, monkeypatch):
    source = Path(find_device("shared-8x16x4").location.file)
    shutil.copy(source, tmp_path / "shared-8x16x4.toml")
    monkeypatch.setattr(module, "_INSTALLED", tmp_path)
    module._files.cache_clear()
    try:
        assert catalogue() == ("shared-8x16x4",)
        found = find_device("shared-8x16x4")
        assert Path(found.location.file).parent == tmp_path
    finally:
        monkeypatch.undo()
        module._files.cache_clear()
