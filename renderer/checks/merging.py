"""One finding for a stretch of frames: what is the same in consecutive frames is said once."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from renderer.checks.findings import Finding


def merge_frames(by_frame: Sequence[tuple[int, Sequence[Finding]]]) -> list[Finding]:
    """Findings of single frames, in order, as findings of stretches of frames.

    Two findings are the same when rule, subject, severity, title and sign-off agree and their frames follow each other
    in the list that was checked. The worst frame's measurement and fix are kept.
    """
    done: list[Finding] = []
    running: dict[tuple[object, ...], Finding] = {}
    for frame, findings in by_frame:
        still: dict[tuple[object, ...], Finding] = {}
        for finding in findings:
            key = _key(finding, still)
            before = running.pop(key, None)
            still[key] = _join(before, replace(finding, frames=(frame,), worst_frame=frame))
        done.extend(running.values())
        running = still
    done.extend(running.values())
    return sorted(done, key=lambda finding: (finding.frames[0], finding.rule, finding.subject))


def _key(finding: Finding, taken: dict[tuple[object, ...], Finding]) -> tuple[object, ...]:
    """What makes findings of two frames the same; a counter keeps apart two such findings of one frame."""
    base = (finding.rule, finding.subject, finding.severity, finding.title, finding.signed_off)
    count = 0
    while (*base, count) in taken:
        count += 1
    return (*base, count)


def _join(before: Finding | None, new: Finding) -> Finding:
    """`before` grown by the frames of `new`; the worse of the two is the one shown."""
    if before is None:
        return new
    worse = new if new.excess > before.excess else before
    return replace(worse, frames=before.frames + new.frames)


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
