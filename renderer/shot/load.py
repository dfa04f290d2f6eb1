"""Reading a shot: the file, one variant and the overrides of the command line, to a `Shot` that knows its frames."""

from __future__ import annotations

import os
from collections.abc import Sequence
from pathlib import Path
from typing import Any

from pydantic import ValidationError

from renderer.base.errors import Fault, InputError
from renderer.shot.faults import faults_of
from renderer.shot.files import Files
from renderer.shot.moment import Moment
from renderer.shot.overrides import Override, apply, parse_overrides, variant_overrides
from renderer.shot.reader import read_tables
from renderer.shot.resolve_looks import material_flaws
from renderer.shot.schema.flaws import Flaw, clean, nearest
from renderer.shot.schema.flaws import Path as KeyPath
from renderer.shot.schema.leaves import FileName
from renderer.shot.schema.shot_file import ShotFile
from renderer.shot.schema.table import find, remembering
from renderer.shot.shot import Shot
from renderer.shot.walk import changes_by_frame, leaves

__all__ = ["Shot", "load_shot"]


def load_shot(
    path: str | os.PathLike[str],
    variant: str | None = None,
    overrides: Sequence[str] = (),
    roots: Sequence[str | os.PathLike[str]] = (),
) -> Shot:
    """The shot in a file.

    Parameters
    ----------
    path : path of NAME.shot.toml.
    variant : one of the file's variants, laid over it; None for the file as it stands.
    overrides : ``key=value`` each, laid over the variant.
    roots : folders, beside the file's own, that its paths may lead into.

    Raises
    ------
    InputError
        With everything that is wrong with the file, its variants and the overrides, each with its line.
    """
    file = Path(path)
    with remembering():
        return _load(file, variant, overrides, [Path(root) for root in roots])


def _load(file: Path, variant: str | None, overrides: Sequence[str], roots: Sequence[Path]) -> Shot:
    text, tables = read_tables(file)
    source = _Source(file, text, tables, Files(file.parent, roots))
    chosen = source.check_variants(variant)
    given = parse_overrides(overrides)
    shot, flaws, landed = source.read([*chosen, *given])
    source.refuse(flaws, landed)
    assert shot is not None
    return Shot(file, variant or "", shot, source.files, lambda found: source.faults(found, landed))


class _Source:
    """A file that has been parsed, and what is needed to say where its flaws stand."""

    def __init__(self, file: Path, text: str, tables: dict[str, Any], files: Files) -> None:
        self.file = file
        self.text = text
        self.tables = tables
        self.files = files

    def read(self, overrides: Sequence[Override]) -> tuple[ShotFile | None, list[Flaw], list[tuple[KeyPath, Override]]]:
        """The shot under some overrides, or its flaws; and where the overrides landed."""
        tables, landed, flaws = apply(self.tables, overrides) if overrides else (self.tables, [], [])
        try:
            shot = ShotFile.model_validate(tables)
        except ValidationError as error:
            return None, flaws + find(error), landed
        flaws += self.lost_files(shot)
        moment = Moment(0, (0.0,), shot, self.files)
        for name, material in shot.materials.items():
            flaws += [] if changes_by_frame(material) else material_flaws(moment, name)
        return shot, flaws, landed

    def lost_files(self, shot: ShotFile) -> list[Flaw]:
        """Paths that lead where they may not; whether the files exist is asked frame by frame."""
        from renderer.shot.camera_import import split_node

        found = []
        for at, value in leaves(shot):
            if isinstance(value, FileName):
                flaw = self.files.outside(split_node(value)[0])
                found += [Flaw(at, flaw.what, flaw.expected)] if flaw is not None else []
        return found

    def check_variants(self, chosen: str | None) -> list[Override]:
        """Check the file and every variant of it, whichever is asked for; the overrides of the chosen one."""
        _, flaws, _ = self.read([])
        variants = self.tables.get("variants", {})
        variants = variants if isinstance(variants, dict) else {}
        found: list[Override] = []
        known = set(flaws)
        faults = list(self.faults(flaws, []))
        for name, changes in variants.items():
            if not isinstance(changes, dict):
                continue
            items = list(variant_overrides(name, changes))
            wrong = [item for item in items if isinstance(item, Flaw)]
            right = [item for item in items if isinstance(item, Override)]
            _, more, landed = self.read(right)
            faults += self.faults([*wrong, *(flaw for flaw in more if flaw not in known)], landed)
            found = right if name == chosen else found
        if faults:
            raise InputError(*dict.fromkeys(faults))
        if chosen is not None and chosen not in variants:
            what = f'the shot has no variant named "{clean(chosen)}"'
            expected = f"one of {', '.join(clean(name) for name in [*variants][:8])}" if variants else "no --variant"
            raise InputError(Fault(what, str(self.file), expected, nearest(chosen, variants)))
        return found

    def refuse(self, flaws: list[Flaw], landed: list[tuple[KeyPath, Override]]) -> None:
        """Raise `InputError` where there are flaws."""
        if flaws:
            raise InputError(*self.faults(flaws, landed))

    def faults(self, flaws: Sequence[Flaw], landed: list[tuple[KeyPath, Override]]) -> tuple[Fault, ...]:
        """Flaws with the places that they stand on."""
        if not flaws:
            return ()

        def origin(at: KeyPath) -> tuple[str, KeyPath] | None:
            for path, override in reversed(landed):
                if at[: len(path)] == path or (at and path[: len(at)] == at):
                    return override.source, override.at
            return None

        tables = apply(self.tables, [override for _, override in landed])[0] if landed else self.tables
        return faults_of(flaws, self.text, str(self.file), tables, origin)
