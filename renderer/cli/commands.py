"""The commands by name, with their one-line help: enough for --help without importing any of them."""

from __future__ import annotations

import importlib
from dataclasses import dataclass

import click

from renderer import __version__
from renderer.base.errors import Fault, InputError, nearest_name


@dataclass(frozen=True)
class Entry:
    """Where a command is, as ``module:function``, and what it does in one line."""

    place: str
    help: str


COMMANDS = {
    "new": Entry("renderer.cli.new:new", "Write a commented starter shot that renders as it stands."),
    "render": Entry("renderer.cli.render:render", "Render the frames of a shot to pictures."),
    "check": Entry("renderer.cli.check:check", "Say what in a shot cannot be, and how to mend it."),
    "merge": Entry("renderer.cli.merge:merge", "Merge portions from a farm to finished pictures."),
    "materials": Entry("renderer.cli.materials:materials", "List clear materials, or show one with its source."),
    "warm-up": Entry("renderer.cli.warm_up:warm_up", "Do the first-run set-up ahead of time."),
}


class Commands(click.Group):
    """A group that imports a command only when it is run."""

    def list_commands(self, context: click.Context) -> list[str]:
        """Every command, in the order of the work."""
        return list(COMMANDS)

    def get_command(self, context: click.Context, name: str) -> click.Command | None:
        """The command of that name, imported now."""
        entry = COMMANDS.get(name)
        if entry is None:
            return None
        module, function = entry.place.split(":")
        command = getattr(importlib.import_module(module), function)
        assert isinstance(command, click.Command)
        return command

    def resolve_command(
        self, context: click.Context, args: list[str]
    ) -> tuple[str | None, click.Command | None, list[str]]:
        """The command that the first argument names; an unknown one is a fault with the nearest known."""
        name = args[0]
        if name not in COMMANDS and not name.startswith("-"):
            raise InputError(
                Fault(
                    f'no command named "{name}"',
                    "antisolar",
                    ", ".join(COMMANDS),
                    nearest_name(name, COMMANDS),
                )
            )
        return super().resolve_command(context, args)

    def format_commands(self, context: click.Context, formatter: click.HelpFormatter) -> None:
        """The list of commands in --help, from the table alone."""
        with formatter.section("Commands"):
            formatter.write_dl([(name, entry.help) for name, entry in COMMANDS.items()])


@click.group(cls=Commands, context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100})
@click.version_option(__version__, prog_name="antisolar", message="%(prog)s %(version)s")
def antisolar() -> None:
    """Spectral reference pictures of water, glass and rainbows, and checks of what light cannot do.

    Exit codes: 0 done, 1 flagged by a check, 2 bad input, 3 interrupted or incomplete, 70 our own fault.
    """
