"""Asking every rule about a shot: from frames to findings, merged over frames and set against the sign-offs."""

from __future__ import annotations

import datetime
import traceback
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace

from renderer.checks.expected import FrameBows, bows_of_frame
from renderer.checks.facts import Facts
from renderer.checks.findings import ADVICE, Finding, Fix, fails
from renderer.checks.merging import by_weight, merge_frames
from renderer.checks.registry import FRAME, FRAMES, Rule, RuleFunction, function_of, rules
from renderer.checks.sign_off import SignOffs
from renderer.checks.view import FrameView
from renderer.shot.model import FrameShot


@dataclass(frozen=True)
class CheckReport:
    """What a check found: `findings` merged over `frames`; `bows`, where the bows of the sun stand in each frame."""

    title: str
    source: str
    variant: str
    frames: tuple[int, ...]
    pixels: tuple[int, int]
    findings: tuple[Finding, ...]
    bows: tuple[FrameBows, ...]

    def fails(self, line: str) -> bool:
        """Whether a finding that is not signed off is as bad as `line`, or worse."""
        return fails(self.findings, line)


def check_shot(
    frames: Iterable[FrameShot], today: datetime.date | None = None, chosen: Sequence[Rule] | None = None
) -> CheckReport:
    """Every rule asked about every frame of a shot.

    Parameters
    ----------
    frames : iterable of FrameShot
        In rising order, at least one; what `renderer.shot.Shot.at` gives.
    today : date, optional
        The day that sign-offs are held against.
    chosen : sequence of Rule, optional
        Ask these instead of all of `registry.rules()`.
    """
    views = [FrameView(shot) for shot in frames]
    first = views[0].shot
    sign_offs = SignOffs(first.sign_offs, today or datetime.date.today())
    by_frame = collect(views, rules() if chosen is None else chosen, Facts())
    accepted = [(frame, [sign_offs.accept(frame, finding) for finding in found]) for frame, found in by_frame]
    findings = merge_frames(accepted)
    checked = tuple(view.frame for view in views)
    findings += [replace(remark, frames=checked) for remark in sign_offs.remarks(checked)]
    return CheckReport(
        title=first.title,
        source=str(first.source),
        variant=first.variant,
        frames=checked,
        pixels=first.camera.pixels,
        findings=tuple(sorted(findings, key=by_weight)),
        bows=tuple(bows_of_frame(view) for view in views),
    )


def collect(views: Sequence[FrameView], chosen: Sequence[Rule], facts: Facts) -> list[tuple[int, list[Finding]]]:
    """The findings of each frame, in order of frames, not yet merged."""
    found: dict[int, list[Finding]] = {view.frame: [] for view in views}
    for rule in chosen:
        for finding in _ask(rule, views, facts):
            for frame in finding.frames:
                if frame in found:
                    found[frame].append(finding)
    return list(found.items())


def _ask(rule: Rule, views: Sequence[FrameView], facts: Facts) -> list[Finding]:
    """The findings of one rule. A studio's rule that fails becomes a finding of its own; one of ours ends the run."""
    if rule.own:
        return _answers(rule, function_of(rule.place), rule.over, views, facts)
    try:
        function = function_of(rule.place)
        return _answers(rule, function, _over(function), views, facts)
    except Exception as error:  # a studio's code may fail in any way, and must not take our findings with it
        return [_crashed(rule, error, views)]


def _over(function: RuleFunction) -> str:
    return str(getattr(function, "over", FRAME))


def _answers(rule: Rule, function: RuleFunction, over: str, views: Sequence[FrameView], facts: Facts) -> list[Finding]:
    """What a rule says, each finding with its frames."""
    every = tuple(view.frame for view in views)
    if over == FRAMES:
        said = [_checked(rule, answer) for answer in function(views, facts)]
        return [finding if finding.frames else replace(finding, frames=every) for finding in said]
    return [replace(_checked(rule, said), frames=(view.frame,)) for view in views for said in function(view, facts)]


def _checked(rule: Rule, answer: object) -> Finding:
    if not isinstance(answer, Finding):
        raise TypeError(f"rule {rule.name} gave a {type(answer).__name__} where a Finding is due")
    return answer


def _crashed(rule: Rule, error: Exception, views: Sequence[FrameView]) -> Finding:
    last = traceback.extract_tb(error.__traceback__)[-1]
    return Finding(
        rule=rule.name,
        title="Studio rule failed",
        severity=ADVICE,
        subject=rule.place,
        measured=f"{type(error).__name__}: {error}",
        expected="findings",
        unit="",
        why=f"The rule stopped at {last.filename}:{last.lineno}, so nothing is known of what it looks for.",
        source="common practice, no source",
        fix=Fix("Ask whoever keeps this rule to mend it."),
        frames=tuple(view.frame for view in views),
    )
