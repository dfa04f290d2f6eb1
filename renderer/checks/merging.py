"""One finding for a stretch of frames: what is the same in consecutive frames is said once."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from renderer.checks.findings import SEVERITIES, Finding


def merge_frames(by_frame: Sequence[tuple[int, Sequence[Finding]]]) -> list[Finding]:
    """Findings of single frames, in order, as findings of stretches of frames.

    Two findings are the same when rule, subject, title and sign-off agree and their frames follow each other in the
    list that was checked. The worst frame's severity, measurement and fix are kept.
    """
    runs: list[list[Finding]] = []
    running: dict[tuple[object, ...], list[Finding]] = {}
    for frame, findings in by_frame:
        still: dict[tuple[object, ...], list[Finding]] = {}
        for finding in findings:
            key = _key(finding, still)
            run = running.get(key)
            if run is None:
                run = []
                runs.append(run)
            run.append(replace(finding, frames=(frame,)))
            still[key] = run
        running = still
    return [_join(run) for run in runs]


def by_weight(finding: Finding) -> tuple[bool, int, int, str, str]:
    """What puts findings in order: those that still stand first, the gravest of them first, then by frame and name."""
    first = finding.frames[0] if finding.frames else 0
    return not finding.flagged, -SEVERITIES.index(finding.severity), first, finding.rule, finding.subject


def _key(finding: Finding, taken: dict[tuple[object, ...], list[Finding]]) -> tuple[object, ...]:
    """What makes findings of two frames the same; a counter keeps apart two such findings of one frame."""
    base = (finding.rule, finding.subject, finding.title, finding.signed_off)
    count = 0
    while (*base, count) in taken:
        count += 1
    return (*base, count)


def _join(run: Sequence[Finding]) -> Finding:
    """The findings of a stretch as one: the worst, named as such unless it is the same in every frame."""
    worst = max(run, key=lambda finding: (SEVERITIES.index(finding.severity), finding.excess))  # the first of equals
    alike = all(finding.excess == worst.excess for finding in run)
    frame = worst.worst_frame if worst.worst_frame is not None or alike else worst.frames[0]
    return replace(worst, frames=tuple(finding.frames[0] for finding in run), worst_frame=frame)


def frame_range(frames: Sequence[int]) -> str:
    """Rising frame numbers in the trade's syntax: ``1001-1048``, ``1001-1099x2``, ``1001,1005``."""
    parts: list[str] = []
    start = 0
    while start < len(frames):
        end = start
        step = frames[start + 1] - frames[start] if start + 1 < len(frames) else 1
        while end + 1 < len(frames) and frames[end + 1] - frames[end] == step:
            end += 1
        if end == start + 1 and step != 1:  # two odd frames are two frames, not a range with a step
            end = start
        span = f"{frames[start]}-{frames[end]}" + ("" if step == 1 else f"x{step}")
        parts.append(span if end > start else str(frames[start]))
        start = end + 1
    return ",".join(parts)
