"""The commented shot that `antisolar new` writes: shapes only, so that it renders as it stands."""

from __future__ import annotations

import json
from pathlib import Path

from renderer.shot.schema.flaws import clean

FILE = Path(__file__).with_name("starter.shot.toml")
LONGEST_TEXT = 200
TITLE = '"Lock Nine, sill"'


def starter_text(name: str) -> str:
    """The starter shot, titled `name`; its comments speak of the file NAME.shot.toml."""
    stem = clean(Path(name).name.removesuffix(".toml").removesuffix(".shot"), LONGEST_TEXT)
    title = json.dumps(stem, ensure_ascii=False)  # a JSON string is a TOML string
    text = FILE.read_text(encoding="utf-8").replace(TITLE, title)
    return text.replace("NAME.shot.toml", f"{stem}.shot.toml")
