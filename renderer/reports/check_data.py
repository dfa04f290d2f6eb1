"""A check as plain data: the one form that JSON, text and HTML are made from."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from renderer import __version__
from renderer.checks.expected import Crossing, ExpectedBow, FrameBows
from renderer.checks.findings import SEVERITIES, Finding, Fix
from renderer.checks.merging import frame_range
from renderer.checks.run import CheckReport

FORMAT = 1


def check_data(report: CheckReport, fail_on: str) -> dict[str, Any]:
    """The report as dicts, lists, strings and numbers; `fail_on` is the severity that fails the check."""
    return {
        "format": FORMAT,
        "antisolar": __version__,
        "shot": report.source,
        "title": report.title,
        "variant": report.variant or None,
        "frames": frame_range(report.frames),
        "pixels": list(report.pixels),
        "fail_on": fail_on,
        "flagged": report.fails(fail_on),
        "counts": _counts(report.findings),
        "findings": [finding_data(finding) for finding in report.findings],
        "expected_bows": [_frame_data(bows) for bows in report.bows],
    }


def _counts(findings: Sequence[Finding]) -> dict[str, int]:
    counts = dict.fromkeys(reversed(SEVERITIES), 0)
    for finding in findings:
        if finding.flagged:
            counts[finding.severity] += 1
    counts["signed_off"] = sum(not finding.flagged for finding in findings)
    return counts


def finding_data(finding: Finding) -> dict[str, Any]:
    """One finding as plain data."""
    expected: Any = finding.expected
    if isinstance(expected, tuple):
        expected = {"from": expected[0], "to": expected[1]}
    return {
        "rule": finding.rule,
        "title": finding.title,
        "severity": finding.severity,
        "subject": finding.subject,
        "frames": frame_range(finding.frames),
        "worst_frame": finding.worst_frame,
        "measured": finding.measured,
        "expected": expected,
        "unit": finding.unit,
        "why": finding.why,
        "source": finding.source,
        "fix": None if finding.fix is None else fix_data(finding.fix),
        "signed_off": finding.signed_off,
    }


def fix_data(fix: Fix) -> dict[str, Any]:
    """A fix as plain data."""
    return {"text": fix.text, "values": _plain(fix.values), "instead": _plain(fix.instead)}


def _plain(value: Any) -> Any:
    """Tuples as lists, all the way down."""
    if isinstance(value, Mapping):
        return {key: _plain(entry) for key, entry in value.items()}
    return [_plain(entry) for entry in value] if isinstance(value, tuple) else value


def _frame_data(bows: FrameBows) -> dict[str, Any]:
    return {
        "frame": bows.frame,
        "antisolar_point": {
            "pixel": _pixel(bows.antisolar),
            "in_frame": bows.antisolar_in_frame,
            "elevation": _rounded(bows.antisolar_elevation_deg, 3),
            "azimuth": _rounded(bows.antisolar_azimuth_deg, 3),
        },
        "bows": [_bow_data(bow) for bow in bows.bows],
        "why_not": bows.why_not or None,
    }


def _bow_data(bow: ExpectedBow) -> dict[str, Any]:
    return {
        "order": bow.order,
        "name": bow.name,
        "radius": bow.radius_deg,
        "top": _pixel(bow.top),
        "top_in_frame": bow.top_in_frame,
        "left": _crossing_data(bow.left),
        "right": _crossing_data(bow.right),
        "arc": bow.arc_deg,
        "why_not": bow.why_not or None,
    }


def _crossing_data(crossing: Crossing | None) -> dict[str, Any] | None:
    return None if crossing is None else {"pixel": _pixel(crossing.pixel), "ends_at": crossing.ends_at}


def _pixel(pixel: tuple[float, float] | None) -> list[float] | None:
    return None if pixel is None else [round(pixel[0], 1), round(pixel[1], 1)]


def _rounded(value: float | None, digits: int) -> float | None:
    return None if value is None else round(value, digits)
