"""antisolar materials: the library of clear materials, or one of them with its source."""

from __future__ import annotations

import json
from dataclasses import replace
from pathlib import Path

import click

from renderer.base.errors import InputError
from renderer.cli.options import FILE
from renderer.cli.talk import say


@click.command("materials")
@click.argument("name", required=False)
@click.option("--temperature", metavar="C", type=float, default=20.0, show_default=True, help="Of water, in degrees C.")
@click.option("--salinity", metavar="PERMILLE", type=float, help="Of water, in parts per thousand; the library's own.")
@click.option("--chart", metavar="FILE", type=FILE, help="Write the chart of NAME as SVG.")
@click.option("--json", "json_file", metavar="FILE|-", help="Write the same as JSON; - for standard output.")
def materials(
    name: str | None, temperature: float, salinity: float | None, chart: Path | None, json_file: str | None
) -> None:
    """List the clear materials that shots may name, or show NAME with its index, absorption and source.

    Indices are relative to air; the d line is 587.56 nm; absorption is per metre, base e.
    """
    from renderer.reports.material_data import list_data, material_data
    from renderer.reports.material_text import list_text, material_text

    if chart is not None and name is None:
        raise click.UsageError("--chart needs the NAME of a material", click.get_current_context())
    try:
        data = list_data() if name is None else material_data(name, temperature, salinity)
    except InputError as error:
        where = f"antisolar materials {name}"
        raise InputError(*(replace(fault, where=fault.where or where) for fault in error.faults)) from None
    text = list_text if name is None else material_text
    written = json.dumps(data, indent=1)
    click.echo(written if json_file == "-" else text(data))
    if json_file not in (None, "-"):
        Path(str(json_file)).write_text(written + "\n", encoding="utf-8")
    if chart is not None and name is not None:
        _write_chart(name, chart)


def _write_chart(name: str, chart: Path) -> None:
    from renderer.optics.materials_chart import materials_chart

    chart.parent.mkdir(parents=True, exist_ok=True)
    chart.write_text(materials_chart(name), encoding="utf-8")
    say(f"chart: {chart}")
