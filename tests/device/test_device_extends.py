# ruff: noqa: E501, ISC004 - messages stand on one line, as they are shown
"""Device files that extend another: what merges, whose place an error has, what goes wrong."""

from __future__ import annotations

import shutil
from pathlib import Path

import pytest
from full_device import FULL

from pla.cli.main import run
from pla.device import catalogue as catalogue_module
from pla.device.catalogue import catalogue, find_device
from pla.device.folder import devices_in
from pla.device.reader import read_device
from pla.errors import InputError

PLAIN = FULL.replace('family = "fuller"\n', "")


@pytest.fixture
def folder(tmp_path):
    (tmp_path / "full.toml").write_text(PLAIN, encoding="utf-8")
    return tmp_path


def written(folder, text, name="child.toml"):
    path = folder / name
    path.write_text(text, encoding="utf-8")
    return str(path)


CHILD = 'name = "child"\nextends = "full.toml"\n'


def test_tables_merge_and_other_values_replace(folder):
    device = read_device(
        written(
            folder,
            CHILD
            + 'ground = 6\nunconnected = [5, 10, 11]\n[set]\n159 = 0\n[links]\nunused_enable = "on"\n'
            "[timing]\ntpd = 20\n[kind.own]\nmodes = [ "
            '{ set = "10", pin = "sum\'", feedback = "pin", terms = "0..3", enable = "always" } ]\n'
            'unused = "10"\n',
        )
    )
    assert device.name == "child"
    assert device.ground == (6,)
    assert device.mode_fuses == ((159, 0),)
    assert (device.links.unused_term, device.links.unused_enable) == ("dead", "on")
    assert (device.timing.tpd, device.timing.tfb) == (20, 10)
    assert [mode.set for mode in device.cell_of[7].modes] == ["10"]
    assert device.cell_of[7].links == (156, 157)
    assert device.warnings == ()


def test_the_family_is_that_of_the_file_it_extends(folder):
    assert read_device(str(folder / "full.toml")).family == "full"
    child = written(folder, CHILD)
    grandchild = written(folder, 'name = "second"\nextends = "child.toml"\n', "second.toml")
    assert [read_device(path).family for path in (child, grandchild)] == ["full", "full"]
    named = written(folder, CHILD + 'family = "panel"\n', "named.toml")
    below = written(folder, 'name = "below"\nextends = "named.toml"\n', "below.toml")
    assert [read_device(path).family for path in (named, below)] == ["panel", "panel"]


def test_the_other_file_is_found_beside_the_file_not_where_one_works(folder, monkeypatch):
    inside = folder / "modes"
    inside.mkdir()
    path = written(inside, 'name = "child"\nextends = "../full.toml"\n')
    monkeypatch.chdir("/")
    assert read_device(path).fuses == 178


def shown(error, folder):
    return [
        f"{Path(d.location.file).relative_to(folder)}:{d.location.line}:{d.location.column} "
        f"{d.code} {d.message.replace(f'{folder}/', '')}"
        for d in error.diagnostics
    ]


ERRORS = [
    pytest.param(
        'extends = "full.toml"\n',
        [
            "child.toml:1:1 KEY-MISSING the file has no 'name'; the one of full.toml, which it "
            "extends, is not its own"
        ],
        id="no-name",
    ),
    pytest.param(
        'name = "child"\nextends = "half.toml"\n',
        ["child.toml:2:11 NO-SUCH-FILE half.toml: no such file"],
        id="missing",
    ),
    pytest.param(
        'name = "child"\nextends = 3\n',
        [
            "child.toml:2:11 VALUE 'extends' is the number 3, expected the path of a device file in "
            "quotes, relative to this one"
        ],
        id="no-text",
    ),
    pytest.param(
        'name = "child"\nextends = ""\n',
        [
            "child.toml:2:11 VALUE 'extends' is empty, expected the path of a device file in "
            "quotes, relative to this one"
        ],
        id="empty",
    ),
    pytest.param(
        'name = "child"\nextends = "child.toml"\n',
        ["child.toml:2:11 EXTENDS-CIRCLE the file extends itself: child.toml extends child.toml"],
        id="itself",
    ),
    pytest.param(
        CHILD + "[set]\n158 = 1\n",
        [
            # The link stands in the other file, where its own place is.
            "full.toml:56:55 FUSE-OVERLAP fuse 158 is a mode fuse (child.toml:4) and link 'sense' "
            "of the cell on pin 9"
        ],
        id="overlap-across-files",
    ),
    pytest.param(
        CHILD + "pins = 13\n",
        [
            "child.toml:3:8 PIN-IDLE 1 of 13 pins has no role: 13; expected an input column, a cell "
            "or a supply"
        ],
        id="value-of-the-child",
    ),
    pytest.param(
        CHILD + "[and]\nterm_steps = 13\n",
        ["child.toml:4:1 KEY-UNKNOWN unknown key 'term_steps' in [and]"],
        id="key-of-the-child",
    ),
    pytest.param(
        CHILD + "unconnected = [10]\n",
        [
            "full.toml:3:8 PIN-IDLE 1 of 12 pins has no role: 11; expected an input column, a cell "
            "or a supply"
        ],
        id="consequence-in-the-base",
    ),
    pytest.param(
        CHILD + "[and]\ncolumns = \"1 1' 2 2' 3 3' 7 7' 9 s s' c'\"\n",
        [
            "child.toml:4:39 COLUMN-UNKNOWN column 11 of [and] is c', but no cell is named 'c'",
            "full.toml:59:13 FEEDBACK-IDLE kind.buried.modes[0] has 'feedback', but no cell of "
            "[kind.buried] has a column in [and]",
        ],
        id="column-inside-a-text-of-the-child",
    ),
]


@pytest.mark.parametrize(("text", "expected"), ERRORS)
def test_errors_stand_in_the_file_that_gave_the_value(text, expected, folder):
    with pytest.raises(InputError) as caught:
        read_device(written(folder, text))
    assert shown(caught.value, folder) == expected


HINTS = [
    pytest.param(
        CHILD + "pins = 13\n",
        "if nothing is connected there, say unconnected = [10, 11, 13], in child.toml",
        id="unconnected",
    ),
    pytest.param(
        CHILD + "fuses = 180\n",
        'if they do nothing, say so: spare = ["176..179"], in child.toml',
        id="spare",
    ),
    pytest.param(
        CHILD + '[kind.Own]\nunused = "01"\n',
        "did you mean 'own'?",
        id="kind-misspelt",
    ),
    pytest.param(
        CHILD
        + '[kind.more]\nmodes = [ { pin = "sum" } ]\ncells = [ { pin = 8, terms = "4..6" } ]\n',
        "kinds cannot be taken away: where files that extend others need another split, put these "
        "cells into a kind of their own in the extended file",
        id="kind-split",
    ),
    pytest.param(
        CHILD + "[kind.gated]\ncells = []\n",
        "kinds cannot be taken away: put the cells that stay into a kind of their own in full.toml",
        id="kind-emptied",
    ),
    pytest.param(
        'name = "child"\nextends = "fulll.toml"\n',
        "it was looked for in the folder: did you mean 'full.toml'?",
        id="file-misspelt",
    ),
    pytest.param(
        'name = "child"\nextends = "there/full.toml"\n',
        "it was looked for in there, which cannot be read",
        id="folder-misspelt",
    ),
]


@pytest.mark.parametrize(("text", "hint"), HINTS)
def test_errors_say_how_to_mend_them(text, hint, folder):
    with pytest.raises(InputError) as caught:
        read_device(written(folder, text))
    hints = [
        (d.hint or "").replace(f"{folder}/", "").replace(str(folder), "the folder")
        for d in caught.value.diagnostics
    ]
    assert hint in hints


def test_a_folder_without_another_device_file(tmp_path):
    path = written(tmp_path, 'name = "child"\nextends = "full.toml"\n')
    with pytest.raises(InputError) as caught:
        read_device(path)
    (found,) = caught.value.diagnostics
    assert found.hint == f"it was looked for in {tmp_path}, where no other .toml file is"


def test_a_mode_that_is_that_of_the_other_file(folder):
    (warning,) = read_device(written(folder, CHILD + "[set]\n159 = 1\n")).warnings
    assert (warning.code, warning.location.line) == ("SET-SAME", 3)
    assert read_device(written(folder, CHILD + "[set]\n159 = 0\n")).warnings == ()
    assert read_device(written(folder, CHILD + 'summary = "a variant"\n')).warnings == ()


def test_a_circle_of_two_names_both(folder):
    written(folder, 'name = "b"\nextends = "a.toml"\n', "b.toml")
    path = written(folder, 'name = "a"\nextends = "b.toml"\n', "a.toml")
    with pytest.raises(InputError) as caught:
        read_device(path)
    assert shown(caught.value, folder) == [
        "b.toml:2:11 EXTENDS-CIRCLE the file extends itself: a.toml extends b.toml extends a.toml"
    ]


def chain(folder, length):
    before = "full.toml"
    for number in range(1, length + 1):
        name = f"level{number}.toml"
        written(folder, f'name = "level{number}"\nextends = "{before}"\n', name)
        before = name
    return str(folder / before)


def test_eight_levels_are_read_and_nine_refused(folder):
    assert read_device(chain(folder, 8)).name == "level8"
    with pytest.raises(InputError) as caught:
        read_device(chain(folder, 9))
    assert shown(caught.value, folder) == [
        "level1.toml:2:11 EXTENDS-DEPTH more than 8 files extend one another"
    ]


def test_a_syntax_error_of_the_other_file_is_its_own(folder):
    written(folder, "name = \n", "full.toml")
    with pytest.raises(InputError) as caught:
        read_device(written(folder, CHILD))
    assert shown(caught.value, folder)[0].startswith("full.toml:1:8 TOML-SYNTAX")


def test_a_doubt_of_the_other_file_is_told_with_its_place(folder):
    written(folder, PLAIN.replace("2 2'", "2 ."), "full.toml")
    (warning,) = read_device(written(folder, CHILD)).warnings
    assert (Path(warning.location.file).name, warning.code) == ("full.toml", "LINE-SINGLE")


def test_an_enable_filling_that_only_the_other_file_needs_is_no_doubt(folder):
    driven = (
        '[kind.own]\nunused = "11"\nmodes = [ { set = "11", pin = "sum", columns = "3\' .", '
        'terms = "0..3", enable = "always" } ]\n'
        '[kind.shared]\nenable = "always"\ncells = [ { pin = 9, name = "s", links = [158] } ]\n'
        '[or]\nterms = "8..11"\n[and]\nterms = 12\n'
        '[kind.gated]\ncells = [ { pin = 8, terms = "4..7" } ]\n'
    )
    assert read_device(written(folder, CHILD + driven)).warnings == ()
    said = driven + '[links]\nunused_enable = "on"\n'
    (warning,) = read_device(written(folder, CHILD + said)).warnings
    assert warning.code == "ENABLE-NONE"


def test_a_folder_with_files_that_extend_siblings(folder):
    written(folder, CHILD)
    written(folder, 'name = "orphan"\nextends = "gone.toml"\n', "orphan.toml")
    devices, warnings = devices_in(str(folder))
    assert [device.name for device in devices] == ["child", "full"]
    assert [(w.code, Path(w.location.file).name) for w in warnings] == [
        ("NO-SUCH-FILE", "orphan.toml")
    ]


def test_an_installed_catalogue_finds_the_files_that_are_extended(tmp_path, monkeypatch):
    for name in ("modal-8x4-plain", "modal-8x4-gated", "modal-8x4-split"):
        shutil.copy(find_device(name).location.file, tmp_path)
    monkeypatch.setattr(catalogue_module, "_INSTALLED", tmp_path)
    catalogue_module._files.cache_clear()
    try:
        found = [find_device(name) for name in catalogue()]
        assert {device.family for device in found} == {"modal-8x4"}
        assert len({device.mode_fuses for device in found}) == 3
    finally:
        monkeypatch.undo()
        catalogue_module._files.cache_clear()


def test_the_command_reads_a_file_that_extends_one(folder, capsys):
    path = written(folder, CHILD)
    assert run(["device", "check", path]) == 0
    assert "child\nerasable, 12 pins, 178 fuses (0..177), family full" in capsys.readouterr().out
