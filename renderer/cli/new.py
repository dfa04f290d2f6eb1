"""antisolar new: a commented starter shot."""

from __future__ import annotations

import json
import re
from pathlib import Path

import click

from renderer.base.errors import Fault, InputError
from renderer.cli.talk import say

ENDING = ".shot.toml"


@click.command("new")
@click.argument("name", required=False)
@click.option("--overwrite", is_flag=True, help="Replace a file of that name.")
@click.option("--schema", is_flag=True, help="Print the JSON Schema of shot files, for an editor, and write nothing.")
def new(name: str | None, overwrite: bool, schema: bool) -> None:
    """Write NAME.shot.toml, a commented starter shot that renders as it stands.

    NAME may have a folder before it. With --schema, print the JSON Schema that lets an editor complete and check shots.
    """
    if schema:
        from renderer.shot import json_schema

        click.echo(json.dumps(json_schema(), indent=1))
        return
    path = _path(name)
    if path.exists() and not overwrite:
        raise InputError(Fault("a file of that name is there already", str(path), "a new name, or --overwrite"))
    from renderer.shot import starter_text

    path.parent.mkdir(parents=True, exist_ok=True)
    path.write_text(starter_text(path.name.removesuffix(ENDING)), encoding="utf-8")
    click.echo(path)
    say(f"next: antisolar render {path}")


def _path(name: str | None) -> Path:
    """The file to write for a name, with or without the ending."""
    if not name:
        raise InputError(Fault("a name for the shot is missing", "antisolar new", "as in: antisolar new terrace"))
    path = Path(name if name.endswith(ENDING) else name + ENDING)
    if not re.fullmatch(r"[\w][\w .+-]*", path.name.removesuffix(ENDING)):
        raise InputError(
            Fault(f'"{path.name}" is no name for a file', "antisolar new", "letters, digits, spaces, - + . and _")
        )
    return path
