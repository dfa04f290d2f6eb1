"""A check as one self-contained HTML page: nothing is fetched, pictures are inside."""

from __future__ import annotations

import base64
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from typing import TYPE_CHECKING, Any

from renderer.reports import wording

if TYPE_CHECKING:
    from jinja2 import Environment

HERE = Path(__file__).resolve().parent


@dataclass(frozen=True)
class Plate:
    """A picture in a report: the bytes of a PNG, and the sentence under it."""

    png: bytes
    caption: str

    @property
    def uri(self) -> str:
        """The picture as a data URI."""
        return "data:image/png;base64," + base64.b64encode(self.png).decode("ascii")


@cache
def _environment() -> Environment:
    from jinja2 import Environment, FileSystemLoader, StrictUndefined

    environment = Environment(
        loader=FileSystemLoader(HERE), autoescape=True, undefined=StrictUndefined, trim_blocks=True, lstrip_blocks=True
    )
    environment.globals["wording"] = wording
    return environment


def check_html(data: dict[str, Any], plates: Sequence[Plate] = ()) -> str:
    """The page for the report of `check_data`, with pictures above the findings."""
    shown, n_more = wording.few(wording.stretches(data["expected_bows"]), MOST_STRETCHES)
    page: str = (
        _environment()
        .get_template("check_page.html.j2")
        .render(data=data, plates=plates, stretches=shown, n_more=n_more)
    )
    return page


MOST_STRETCHES = 12  # rows of the table of bows; a page for people, where JSON has every frame


def write_html(page: str, path: Path) -> None:
    """Write a page under a temporary name, then put it in place."""
    path.parent.mkdir(parents=True, exist_ok=True)
    temporary = path.with_name(f".{path.name}.writing")
    temporary.write_text(page, encoding="utf-8")
    temporary.replace(path)
