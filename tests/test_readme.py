"""What the README shows is what the program reads and says.

Marks in the README, invisible when it is rendered, say what the next block is: a device file, a
design with the device to plan it for, what a command prints, or slips with what they lead to.
"""

import csv
import re
from pathlib import Path

import pytest

from pla.cli.main import run

ROOT = Path(__file__).parents[1]
README = (ROOT / "README.md").read_text(encoding="utf-8")
SKIPPED = "…"


def marked(kind):
    """What stands in each mark of a kind, and the text of the block behind it."""
    pattern = rf"<!-- {kind}: (.*?) -->\n```(?:toml)?\n(.*?)^```$"
    return [(m[1], m[2]) for m in re.finditer(pattern, README, re.DOTALL | re.MULTILINE)]


DEVICES = dict(marked("device"))
DESIGNS = {
    said.split(" for ")[0]: (said.split(" for ")[1], text) for said, text in marked("design")
}
RUNS = marked("run")


def slips():
    """File, right text, wrong text and message of each row of a table of slips."""
    for m in re.finditer(r"<!-- slips: (\S+) -->\n.*\n.*\n((?:\|.*\n)+)", README):
        for row in m[2].splitlines():
            right, wrong, message = (cell.strip() for cell in row.strip("|").split(" | "))
            yield m[1], right.strip("`"), wrong.strip("`"), message


@pytest.fixture
def shelf(tmp_path, monkeypatch):
    """A folder in which the files of the README lie beside the examples, and nothing else."""
    for name, text in DEVICES.items():
        (tmp_path / name).write_text(text, encoding="utf-8")
    for name, (_, text) in DESIGNS.items():
        (tmp_path / name).write_text(text, encoding="utf-8")
    (tmp_path / "examples").symlink_to(ROOT / "examples")
    monkeypatch.chdir(tmp_path)
    return tmp_path


def says(printed, shown):
    """Whether what is shown is what was printed, but for the lines that are skipped."""
    parts = [re.escape(part) for part in re.split(rf"^{SKIPPED}\n", shown, flags=re.MULTILINE)]
    return re.fullmatch("(?:.*\n)*".join(parts), printed) is not None


def test_the_marks_are_found():
    assert len(DEVICES) == README.count("<!-- device:") == 1
    assert len(DESIGNS) == README.count("<!-- design:") == 3
    assert len(RUNS) == README.count("<!-- run:") == 3
    assert len(list(slips())) == 9


def test_what_is_skipped_is_all_that_may_differ():
    assert says("a\nb\nc\nd\n", "a\n…\nd\n")
    assert says("a\nd\n", "a\n…\nd\n")
    assert not says("a\nb\nc\nd\n", "a\nd\n")
    assert not says("a\nb\n", "a\n…\nd\n")


@pytest.mark.usefixtures("shelf")
@pytest.mark.parametrize("name", DEVICES)
def test_devices_are_consistent(name, capsys):
    assert run(["device", "check", name]) == 0
    out, err = capsys.readouterr()
    assert err == ""
    assert "consistent" in out


@pytest.mark.parametrize("name", DESIGNS)
def test_designs_are_planned(name, shelf, capsys):
    device, _ = DESIGNS[name]
    assert run(["plan", name, "--device", device, "-o", "out", "--require-proof"]) == 0
    assert capsys.readouterr().err == ""
    assert (shelf / "out" / name.replace(".toml", ".jed")).exists()


@pytest.mark.usefixtures("shelf")
@pytest.mark.parametrize(("command", "shown"), RUNS, ids=[command for command, _ in RUNS])
def test_commands_print_what_is_shown(command, shown, capsys):
    program, *arguments = command.split()
    assert program == "fuseplan"
    assert run(arguments) == 0
    assert says(capsys.readouterr().out, shown)


@pytest.mark.usefixtures("shelf")
@pytest.mark.parametrize(
    ("name", "right", "wrong", "message"), list(slips()), ids=[row[2] for row in slips()]
)
def test_slips_are_told(name, right, wrong, message, capsys):
    text = DEVICES[name]
    assert text.count(right) == 1
    Path("slip.toml").write_text(text.replace(right, wrong), encoding="utf-8")
    assert run(["device", "check", "slip.toml"]) == 2
    assert message in capsys.readouterr().err


def test_the_scrap_part_is_made_and_judged_as_told(shelf, capsys):
    make, judge = re.findall(
        r"^fuseplan (device exercise sheet-7x3\.toml .*)$", README, re.MULTILINE
    )
    assert run(make.split()) == 0
    files = re.findall(r"^\| `(sheet-7x3-exercise-[^`]+)`", README, re.MULTILINE)
    assert sorted(files) == sorted(path.name for path in (shelf / "out" / "scrap").iterdir())
    sheet = shelf / judge.split()[-1]
    with sheet.open(newline="", encoding="utf-8") as stream:
        table = csv.DictReader(stream)
        names, rows = table.fieldnames or [], list(table)
    pins = [name.removeprefix("expected ") for name in names if name.startswith("expected ")]
    filled = {(k, pin): rows[k][f"expected {pin}"] for k in range(len(rows)) for pin in pins}
    first = next(place for place, level in filled.items() if level in "HL")
    other = {**filled, first: "H" if filled[first] == "L" else "L"}
    for readings, code in ((filled, 0), (other, 1)):
        for (k, pin), level in readings.items():
            rows[k][f"measured {pin}"] = level.strip("?")
        with sheet.open("w", newline="", encoding="utf-8") as stream:
            table = csv.DictWriter(stream, names)
            table.writeheader()
            table.writerows(rows)
        capsys.readouterr()
        assert run(judge.split()) == code


def test_an_inner_signal_saves_the_terms_that_are_named(shelf, capsys):
    """Four inputs under an exclusive-or take 2^3 products (textbook fact, easily counted)."""
    assert run(["terms", "odd-holes.toml"]) == 0
    assert "8 product terms" in capsys.readouterr().out
    assert (
        run(["plan", "odd-holes.toml", "--device", "sheet-7x3.toml", "-o", str(shelf / "o")]) == 0
    )
    assert "6 product terms" in capsys.readouterr().out


def test_every_example_has_its_row():
    rows = re.findall(r"^\| `([a-z-]+)\.toml` \|", README, re.MULTILINE)
    assert sorted(rows[: rows.index("weigher-port") + 1]) == sorted(
        path.stem for path in (ROOT / "examples").glob("*.toml")
    )


def test_every_structural_class_names_a_file_of_the_catalogue():
    named = set(
        re.findall(
            r"`((?:shared|own|modal|varied|gate|swap|joint)-[0-9x]+(?:-[a-z]+)?)\.toml`", README
        )
    )
    assert named
    assert named <= {path.stem for path in (ROOT / "devices").glob("*.toml")}


def test_headings_that_are_linked_exist():
    headings = re.findall(r"^#+ (.+)$", README, re.MULTILINE)
    anchors = {re.sub(r"[^\w -]", "", heading).lower().replace(" ", "-") for heading in headings}
    assert set(re.findall(r"\]\(#([\w-]+)\)", README)) <= anchors
