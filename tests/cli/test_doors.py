"""The command line as a whole: help, names that are nearly right, exit codes, and how little it imports."""

from __future__ import annotations

import json
import re
import subprocess
import sys
from pathlib import Path

import pytest
from command_line import ROOT, antisolar, write_shot

from renderer.cli.commands import COMMANDS

HEAVY = ("numba", "numpy", "trimesh", "pydantic", "PIL", "OpenEXR", "fileseq", "jinja2", "imageio", "tree_sitter")


def test_help_lists_every_command_with_its_line() -> None:
    run = antisolar("--help")
    assert run.returncode == 0
    for name, entry in COMMANDS.items():
        assert re.search(rf"^  {name}\s+{re.escape(entry.help)}$", run.stdout, re.MULTILINE)


@pytest.mark.parametrize("name", list(COMMANDS))
def test_every_command_has_help_for_itself_and_each_option(name: str) -> None:
    run = antisolar(name, "--help")
    assert run.returncode == 0
    assert run.stdout.startswith(f"Usage: antisolar {name}")
    options = re.findall(r"^  (-.*)$", run.stdout, re.MULTILINE)
    assert options
    following = run.stdout.split("Options:")[1]
    assert len(re.findall(r"^  -\S.*?(?:  +\S|\n {20,}\S)", following, re.MULTILINE)) == len(options)


@pytest.mark.parametrize("name", ["", *COMMANDS])
def test_help_imports_nothing_heavy(name: str) -> None:
    """Start-up time is spent on imports: --help of the whole and of each command must answer at once."""
    arguments = [name, "--help"] if name else ["--help"]
    code = (
        "import sys\nfrom renderer.cli.running import run\n"
        f"code = run({arguments!r})\n"
        f"print([name for name in {HEAVY!r} if name in sys.modules], code, file=sys.stderr)"
    )
    run = subprocess.run([sys.executable, "-c", code], cwd=ROOT, capture_output=True, text=True, check=True)
    assert run.stderr.strip() == "[] 0"


def test_the_version_is_that_of_the_package() -> None:
    from renderer import __version__

    assert antisolar("--version").stdout == f"antisolar {__version__}\n"


@pytest.mark.parametrize(
    ("arguments", "said"),
    [
        (["chek"], ['error: no command named "chek"', "  where:    antisolar", "  nearest:  check"]),
        (["check", "--frmes", "1"], ['error: no option named "--frmes"', "  nearest:  --frames"]),
        (["check"], ["error: SHOT is missing", "  where:    antisolar check"]),
        (["materials", "wattr"], ["  where:    antisolar materials wattr", "  nearest:  water"]),
        (["check", "no.shot.toml"], ["error: there is no such shot file", "  where:    no.shot.toml"]),
        (["new"], ["error: a name for the shot is missing"]),
        (["new", "a/../.."], ['error: ".. .shot.toml" is no name for a file'.replace(".. .", "...")]),
        (["check", "x.toml", "--fail-on", "never"], ["  where:    antisolar check"]),
    ],
)  # fmt: skip
def test_bad_input_is_said_in_four_parts_and_exits_2(arguments: list[str], said: list[str], tmp_path: Path) -> None:
    run = antisolar(*arguments, folder=tmp_path)
    lines = run.stderr.splitlines()
    assert run.returncode == 2
    assert run.stdout == ""
    assert "Traceback" not in run.stderr
    assert lines[0].startswith("error: ")
    for line in said:
        assert line in lines


def test_our_own_fault_exits_70_with_a_traceback(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    from renderer import shot
    from renderer.cli.running import run

    def broken(*given: object, **more: object) -> object:
        raise ZeroDivisionError("a fault of ours")

    monkeypatch.setattr(shot, "load_shot", broken)
    assert run(["check", "any.shot.toml"]) == 70
    said = capsys.readouterr().err
    assert "ZeroDivisionError: a fault of ours" in said
    assert "not in your input" in said


def test_a_reader_that_leaves_early_is_no_fault(tmp_path: Path) -> None:
    shot = write_shot(tmp_path)
    line = f'"{sys.executable}" -m renderer check "{shot}" --quiet --json - | true'
    run = subprocess.run(line, shell=True, cwd=ROOT, capture_output=True, text=True, check=False)
    assert "Traceback" not in run.stderr
    assert "Exception" not in run.stderr


def test_new_writes_a_shot_that_checks_and_does_not_overwrite(tmp_path: Path) -> None:
    first = antisolar("new", "terrace", folder=tmp_path)
    assert (first.returncode, first.stdout) == (0, "terrace.shot.toml\n")
    assert antisolar("check", "terrace.shot.toml", folder=tmp_path).returncode == 0
    again = antisolar("new", "terrace", folder=tmp_path)
    assert again.returncode == 2
    assert "--overwrite" in again.stderr
    assert antisolar("new", "terrace", "--overwrite", folder=tmp_path).returncode == 0


def test_the_schema_for_editors_is_printed_whole(tmp_path: Path) -> None:
    run = antisolar("new", "--schema", folder=tmp_path)
    schema = json.loads(run.stdout)
    assert {"camera", "sun", "objects", "bows_to_check"} <= set(schema["properties"])
    assert list(tmp_path.iterdir()) == []


def test_the_rules_can_be_listed_for_sign_offs() -> None:
    from renderer.checks.registry import TABLE

    lines = antisolar("check", "--rules").stdout.splitlines()
    assert [line.split()[0] for line in lines][: len(TABLE)] == [rule.name for rule in TABLE]


def test_materials_lists_shows_and_draws(tmp_path: Path) -> None:
    listed = antisolar("materials", "--json", "-")
    names = [row["name"] for row in json.loads(listed.stdout)["materials"]]
    assert {"water", "ice", "fused silica", "diamond"} <= set(names)
    text = antisolar("materials").stdout
    for name in names:
        assert f"\n{name} " in text
    shown = antisolar("materials", "water", "--chart", tmp_path / "water.svg")
    assert "IAPWS" in shown.stdout
    assert (tmp_path / "water.svg").read_text(encoding="utf-8").startswith("<svg")
    cold = json.loads(antisolar("materials", "water", "--temperature", "0", "--json", "-").stdout)
    assert cold["nd"] > json.loads(antisolar("materials", "water", "--json", "-").stdout)["nd"]
