"""A check as text for a terminal."""

from __future__ import annotations

import textwrap
from collections.abc import Callable
from typing import Any

from renderer.reports import wording

WIDTH = 100
MOST_STRETCHES = 4  # of frames whose bows are listed; the rest are in the JSON

Paint = Callable[[str, str], str]  # (text, severity or "quiet" or "title") -> text, coloured or not


def plain(text: str, kind: str) -> str:
    """No colour."""
    return text


def check_text(data: dict[str, Any], paint: Paint = plain) -> str:
    """The report of `check_data` as lines of text, ending in the verdict."""
    variant = f", variant {data['variant']}" if data["variant"] else ""
    lines = [paint(f"{data['title'] or data['shot']}{variant}, {wording.frames(data['frames'])}", "title"), ""]
    for finding in data["findings"]:
        lines += [*_finding_lines(finding, paint), ""]
    lines += [*_bow_lines(data), ""]
    lines.append(paint(wording.verdict(data), "impossible" if data["flagged"] else "quiet"))
    return "\n".join(lines) + "\n"


def _finding_lines(finding: dict[str, Any], paint: Paint) -> list[str]:
    mark = "signed off" if finding["signed_off"] is not None else finding["severity"]
    kind = "quiet" if finding["signed_off"] is not None else finding["severity"]
    subject = f": {finding['subject']}" if finding["subject"] else ""
    frames = wording.frames_words(finding)
    head = f"{paint(f'[{mark}]', kind)} {finding['title']}{subject}  {paint(finding['rule'], 'quiet')}"
    rows = [("", f"{frames + ': ' if frames else ''}{wording.measure(finding)}"), ("why", finding["why"])]
    if finding["fix"]:
        rows.append(("fix", finding["fix"]["text"]))
    if finding["signed_off"] is not None:
        rows.append(("signed off", finding["signed_off"]))
    rows.append(("source", finding["source"]))
    return [head, *(line for label, text in rows for line in _row(label, text))]


def _row(label: str, text: str) -> list[str]:
    """A labelled paragraph, wrapped under itself."""
    first = f"  {label + ':':<12}" if label else "  "
    return textwrap.wrap(text, WIDTH, initial_indent=first, subsequent_indent=" " * len(first)) or [first.rstrip()]


def _bow_lines(data: dict[str, Any]) -> list[str]:
    """Where the bows of the sun stand, by stretches of frames."""
    columns, rows = data["pixels"]
    lines = [f"Where the bows of this sun stand, in pixels of {columns} x {rows} from the top left:"]
    shown, n_more = wording.few(wording.stretches(data["expected_bows"]), MOST_STRETCHES)
    for frame, last in shown:
        span = f"frame {frame['frame']}" if last == frame["frame"] else f"frames {frame['frame']}-{last}"
        if frame["why_not"]:
            lines.append(f"  {span}: none. {frame['why_not']}")
            continue
        lines += [f"  {span}", f"    antisolar point  {wording.antisolar_words(frame)}"]
        for bow in frame["bows"]:
            first = f"    {bow['name']:<17}"
            lines += textwrap.wrap(wording.bow_words(bow), WIDTH, initial_indent=first, subsequent_indent=" " * 21)
    if n_more:
        lines.append(f"  ({n_more} more in between; --json has them all)")
    return lines
