"""README.md and DEVELOPERS.md say what is true: commands, options, links, shots and rooms are those of the project."""

from __future__ import annotations

import re
import shlex
from pathlib import Path

import click
import pytest

ROOT = Path(__file__).resolve().parents[2]
PAGES = ("README.md", "DEVELOPERS.md")
COMMANDS_FROM = "<!-- commands: generated from the command line; tests/docs compares them -->\n"
COMMANDS_TO = "<!-- end of commands -->"


def page(name: str) -> str:
    """The text of a page."""
    return (ROOT / name).read_text(encoding="utf-8")


def anchor(heading: str) -> str:
    """The anchor that a heading gets on the usual hosts: lower case, spaces to hyphens, punctuation away."""
    return re.sub(r"[^\w\- ]", "", heading.lower()).replace(" ", "-")


def table_rows(text: str) -> list[list[str]]:
    """The cells of each row of the tables in a text, without heads' rules."""
    rows = [line.strip().strip("|").split("|") for line in text.splitlines() if line.startswith("|")]
    return [[cell.strip() for cell in row] for row in rows if not set("".join(row)) <= set("- ")]


def test_readme_opens_with_the_job_and_then_the_two_commands() -> None:
    """A title, one paragraph, one block with exactly the two commands."""
    title, job, commands = page("README.md").split("\n\n")[:3]
    assert title == "# antisolar"
    assert job.startswith("antisolar ")
    assert commands == "```\nsh tools/demo\nsh tools/test\n```"


@pytest.mark.parametrize("name", PAGES)
def test_links_lead_somewhere(name: str) -> None:
    """Files exist, and anchors are headings of their page."""
    for target in re.findall(r"\]\(([^)\s]+)\)", page(name)):
        path, _, fragment = target.partition("#")
        place = ROOT / path if path else ROOT / name
        assert place.exists(), target
        if fragment:
            headings = re.findall(r"^#+ (.+)$", place.read_text(encoding="utf-8"), re.MULTILINE)
            assert fragment in [anchor(heading) for heading in headings], target


@pytest.mark.parametrize("name", PAGES)
def test_files_that_are_named_exist(name: str) -> None:
    """What stands in backticks as a path of the project is there."""
    for path in re.findall(r"`((?:renderer|tools|tests|scenes|\.ci)/[\w./-]*)`", page(name)):
        assert (ROOT / path).exists(), path


def test_the_table_of_commands_is_the_command_lines_own() -> None:
    """Name and one-line help of every command, in order, and no command that does not exist."""
    from renderer.cli.commands import COMMANDS

    listed = page("README.md").split(COMMANDS_FROM)[1].split(COMMANDS_TO)[0]
    assert table_rows(listed)[1:] == [[f"`{name}`", entry.help] for name, entry in COMMANDS.items()]


def command_lines() -> list[str]:
    """Every line in a block of the README that starts with the command."""
    blocks = re.findall(r"^```\n(.*?)^```", page("README.md"), re.MULTILINE | re.DOTALL)
    return [line for block in blocks for line in block.splitlines() if line.startswith("antisolar ")]


def test_every_command_line_in_the_readme_would_be_accepted() -> None:
    """Each is parsed by the command itself: name, arguments and options."""
    from renderer.cli.commands import antisolar

    lines = command_lines()
    assert len(lines) >= 6
    for line in lines:
        words = shlex.split(re.split(r" {3,}", line)[0])[1:]
        if words == ["--version"]:
            continue
        command = antisolar.get_command(click.Context(antisolar), words[0])
        assert command is not None, line
        arguments = [str(ROOT / "README.md") if word.endswith(".shot.toml") else word for word in words[1:]]
        command.make_context(words[0], arguments, resilient_parsing=False)


def test_the_finding_in_the_readme_is_what_the_check_says(capsys: pytest.CaptureFixture[str]) -> None:
    """The example, line by line, as the command prints it."""
    from renderer.cli.running import run

    (example,) = re.findall(r"^```\n(\[impossible\].*?)^```", page("README.md"), re.MULTILINE | re.DOTALL)
    assert run(["check", str(ROOT / "scenes/bow_beside_sun/bow_beside_sun.shot.toml")]) == 1
    assert example in capsys.readouterr().out


def test_the_table_of_shots_has_every_shot() -> None:
    """One row a folder of scenes/, linked to its file."""
    table = page("README.md").split("## The shipped shots")[1].split("\n## ")[0]
    linked = re.findall(r"\]\((scenes/[^)]+)\)", table)
    there = sorted(path.relative_to(ROOT).as_posix() for path in ROOT.glob("scenes/*/*.shot.toml"))
    assert sorted(linked) == there
    assert len(there) >= 7


def test_the_map_has_every_room_and_no_other() -> None:
    """The house's folders are those of the map."""
    mapped = page("DEVELOPERS.md").split("## The map of the house")[1].split("\n## ")[0]
    rooms = {path.name for path in (ROOT / "renderer").iterdir() if (path / "__init__.py").is_file()}
    named = set(re.findall(r"`renderer/(\w+)`", " ".join(row[0] for row in table_rows(mapped))))
    assert rooms <= named
    assert all((ROOT / "renderer" / room).is_dir() for room in named)


def test_words_are_explained_once() -> None:
    """The glossary has no word twice, and none without its meaning."""
    words = page("DEVELOPERS.md").split("## Words")[1].split("\n## ")[0]
    rows = [row for row in table_rows(words) if row[0] != "word"]
    assert len(rows) >= 25
    assert len({row[0] for row in rows}) == len(rows)
    assert all(len(row) == 2 and len(row[1]) > 10 for row in rows)


def test_decisions_are_dated_and_whole() -> None:
    """Each says what was rejected and what would change it."""
    decisions = page("DEVELOPERS.md").split("## Decisions")[1].split("\n## ")[0]
    entries = [" ".join(part.split()) for part in decisions.split("\n\n") if part.startswith("**")]
    assert len(entries) >= 8
    for entry in entries:
        assert re.match(r"\*\*\d{4}-\d{2}-\d{2}\. ", entry), entry
        assert "Rejected: " in entry, entry
        assert "Would change it: " in entry, entry


AMERICAN = re.compile(
    r"\b(colors?|colored|centers?|centered|meters?|polarizers?|polarized|behaviors?|gray|catalog|neighbors?|modeling)\b"
)
MACHINES = re.compile(r"/(?:root|home|Users|tmp|work)/|[A-Z]:\\\\")


def texts() -> list[Path]:
    """Pages, shots and tools: what a person reads."""
    found = [ROOT / name for name in PAGES]
    found += sorted(ROOT.glob("scenes/*/*.toml")) + sorted(ROOT.glob("tools/**/*.py"))
    return [*found, ROOT / "tools/demo", ROOT / "tools/test", ROOT / "tools/environment.sh", ROOT / ".ci/run"]


@pytest.mark.parametrize("path", texts(), ids=lambda path: path.name)
def test_spelling_is_british_and_no_machine_is_named(path: Path) -> None:
    """Prose of the project; a path of someone's machine helps nobody."""
    text = path.read_text(encoding="utf-8")
    assert AMERICAN.findall(text) == []
    assert MACHINES.findall(text) == []
