"""The check report that lies beside rendered pictures."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from renderer.shot.model import FrameShot


def write_check_report(shots: Sequence[FrameShot], out: Path, preview: Path | None) -> tuple[Path, str]:
    """Write OUT/SHOT.VARIANT.check.html with the first frame's picture; gives its path and the check in one line."""
    from renderer.checks.findings import IMPLAUSIBLE
    from renderer.checks.run import check_shot
    from renderer.frames.names import shot_name
    from renderer.reports.check_data import check_data
    from renderer.reports.html import check_html, write_html
    from renderer.reports.plates import overlay_plate, picture_plate
    from renderer.reports.wording import verdict

    first = shots[0]
    data = check_data(check_shot(shots), first.fail_on or IMPLAUSIBLE)
    plates = [] if preview is None or not preview.exists() else [picture_plate(preview, first.frame)]
    path = out / f"{shot_name(first.source, first.variant)}.check.html"
    write_html(check_html(data, [*plates, overlay_plate(first)]), path)
    return path, verdict(data)
