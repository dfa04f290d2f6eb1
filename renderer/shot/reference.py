"""The reference page of the shot file, made from its schema: every key with meaning, unit, range, default, example."""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path
from typing import Any

from pydantic.fields import FieldInfo
from pydantic_core import PydanticUndefined

from renderer.shot.schema.leaves import Choice, Leaf
from renderer.shot.schema.numbers import NumberLeaf
from renderer.shot.schema.shot_file import ShotFile
from renderer.shot.schema.spectra import Pairs
from renderer.shot.schema.table import Table, leaf_of
from renderer.shot.schema.tree import kind_of
from renderer.shot.schema.whole_numbers import Whole, Wholes

FILE = Path(__file__).with_name("REFERENCE.md")

HEAD = """\
# The shot file

A shot file, `NAME.shot.toml`, is written in [TOML](https://toml.io/en/v1.0.0), version 1.0. This page is made from the
same schema that checks it, and so is [the JSON Schema](shot.schema.json) that an editor can complete keys from.

- **Units.** Each key has one unit. Lengths are in the unit of `[units] length`; a glTF file is in metres, as its
  standard has it.
- **Axes.** Up and north are those of `[units]`; azimuth runs clockwise from north, seen from above. The camera looks
  along its own -z with +y up. Rotations are degrees about x, then y, then z; matrices are row by row.
- **Keyed values.** Where a key says *keyed*, its value may be a table by frame: `elevation = { 1001 = 12.0, 1048 =
  14.5 }`. Between two keys it goes in a straight line, or with `ease = true` among the keys along 3t^2 - 2t^3,
  starting and stopping softly; before the first and after the last it holds. Angles do not wrap: from 350 to 10 goes
  back through 180. A keyed matrix turns along the shortest arc. Camera and transforms move while the shutter is open;
  everything else is taken at the frame.
- **Paths** are relative to the shot file, with forward slashes. They may not lead out of its folder, or out of the
  folders given by `--root`, not even through a symbolic link. A run of `#` is the frame number, padded with zeros to
  as many digits.
- **Overrides**, in `[variants.NAME]` and by `--override key=value`, name a key by its dotted path. A list of tables
  is entered by name, `objects.tank.material` (in quotes where it needs them, `objects."my tank".material`), or by
  number from 0, `objects[0].material`; a list of numbers by number, `camera.position[1]`. A value is written as in
  TOML; a plain word needs no quotes on the command line. A key that excludes another takes its place:
  `objects.tank.shape` drops its `mesh`. Overrides of the command line are laid over those of the variant, and all are
  checked like the file itself; so is every variant, whichever is asked for.
- **Errors.** An unknown key, a number out of range, a name that is not there: each is an error with its line, and all
  of a file are told at once. `nan` and `inf` are no values.
- **What makes a picture another picture.** The fingerprint of a frame covers every value here that changes pixels, and
  the content of every file. It does not cover titles, names, the checks, the bows, the number of rounds and the seed
  (which every portion of the work states for itself), or where a file lies and what it is called.
- **Not supported yet:** `droplets`, `volumes`, `beams`, `wedge`, `sun.location`, `picture` of a bow to check,
  `scattering` of a material.
"""


def reference_page() -> str:
    """The page, as Markdown."""
    parts = [HEAD]
    for title, table in sections():
        parts.append(_section(title, table))
    return "\n".join(parts)


def sections() -> Iterator[tuple[str, type[Table]]]:
    """Every table of the schema with the title of its section, each once, in the order of a shot file."""
    seen: set[type[Table]] = set()

    def below(title: str, table: type[Table], path: str) -> Iterator[tuple[str, type[Table]]]:
        if table in seen:
            return
        seen.add(table)
        yield title, table
        for name, info in table.keys().items():
            inner, many = kind_of(info.annotation)
            if inner is not None:
                here = f"{path}.{name}" if path else name
                yield from below(_title(here, many, path == ""), inner, here + (".NAME" if many == "dict" else ""))

    yield from below("At the top", ShotFile, "")


def _title(path: str, many: str, top: bool) -> str:
    if many == "dict":
        return f"`[{path}.NAME]`"
    if many == "list" and top:
        return f"`[[{path}]]`"
    return f"`[{path}]`" if top else f"`{path}`" + (", each" if many == "list" else "")


def _section(title: str, table: type[Table]) -> str:
    """One table: what it is, its rules, and a row a key."""
    lines = [f"## {title}", "", " ".join((table.__doc__ or "").split()), ""]
    for rule in table.ONE_OF:
        need = "Exactly one of" if rule.needed else "At most one of"
        lines += [f"{need} {rule.text('and')}.", ""]
    lines += ["| key | what it means | unit | values | default | example |", "|---|---|---|---|---|---|"]
    lines += [_row(name, info) for name, info in table.keys().items()]
    return "\n".join([*lines, ""])


def _row(name: str, info: FieldInfo) -> str:
    leaf = leaf_of(info)
    extra = info.json_schema_extra if isinstance(info.json_schema_extra, dict) else {}
    cells = (
        f"`{name}`",
        info.description or "",
        leaf.unit if leaf else "",
        _values(leaf, info),
        _default(info, str(extra.get("x-default", ""))),
        f"`{extra['x-example']}`",
    )
    return "| " + " | ".join(cell.replace("|", "\\|") for cell in cells) + " |"


def _values(leaf: Leaf | None, info: FieldInfo) -> str:
    """What may be written, without the unit, which has a column of its own."""
    if leaf is None:
        _, many = kind_of(info.annotation)
        return {"list": "a list of tables", "dict": "tables by name"}.get(many, "a table")
    if isinstance(leaf, Choice):
        return leaf.expects()
    text = leaf.expects()
    if isinstance(leaf, NumberLeaf | Whole | Wholes) and leaf.unit and not isinstance(leaf, Pairs):
        text = text.replace(f", in {leaf.unit}", "")
    return text + (", *keyed*" if leaf.keyed else "")


def _default(info: FieldInfo, stated: str) -> str:
    if stated:
        return stated
    if info.default is PydanticUndefined:
        return "must be given"
    return _toml(info.default)


def _toml(value: Any) -> str:
    """A default as TOML would write it."""
    if value is None:
        return "none"
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, str):
        return f'"{value}"' if value else "none"
    if isinstance(value, int | float):
        return f"{value:g}" if isinstance(value, float) else str(value)
    if isinstance(value, tuple):
        return "[" + ", ".join(_toml(entry) for entry in value) + "]" if len(value) != 1 else _toml(value[0])
    if isinstance(value, Table):
        return _table(value)
    return "none" if not value else str(value)


def _table(value: Table) -> str:
    """A default table: what was stated of it, else the defaults of its keys."""
    rows = [f"{name} = {_toml(entry)}" for name, entry in value if name in value.model_fields_set]
    return f"{{ {', '.join(rows)} }}" if rows else "as below"


def main() -> None:
    """Write the shipped page afresh."""
    FILE.write_text(reference_page(), encoding="utf-8")


if __name__ == "__main__":
    main()
