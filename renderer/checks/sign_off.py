"""Sign-offs: recorded acceptances of findings, and what to say of those that have run out or met nothing."""

from __future__ import annotations

import datetime
import fnmatch
from collections.abc import Iterable, Sequence
from dataclasses import replace

from renderer.checks.findings import ADVICE, Finding, Fix
from renderer.shot.frame_range import parse_frames
from renderer.shot.model import SignOff

WHY_EXPIRED = "A sign-off holds until its date; after it the finding counts again."
WHY_UNUSED = "A sign-off that accepts nothing hides a finding that comes back, or names the wrong rule."


class SignOffs:
    """The sign-offs of one shot on one day. `accept` marks findings and remembers which sign-offs were of use."""

    def __init__(self, sign_offs: Sequence[SignOff], today: datetime.date) -> None:
        self.sign_offs = tuple(sign_offs)
        self.today = today
        self.frames = [frozenset(parse_frames(item.frames)) if item.frames else None for item in self.sign_offs]
        self.used = [False] * len(self.sign_offs)

    def accept(self, frame: int, finding: Finding) -> Finding:
        """`finding` of `frame`, marked as signed off where a sign-off in force covers it."""
        for index, item in enumerate(self.sign_offs):
            if self._covers(index, frame, finding):
                self.used[index] = True
                if not self.expired(item):
                    return replace(finding, signed_off=_reason(item))
        return finding

    def _covers(self, index: int, frame: int, finding: Finding) -> bool:
        item, frames = self.sign_offs[index], self.frames[index]
        return (
            fnmatch.fnmatchcase(finding.rule, item.rule)
            and (item.bow is None or item.bow == finding.subject)
            and (frames is None or frame in frames)
        )

    def expired(self, item: SignOff) -> bool:
        """Whether the last day of `item` is over."""
        return item.until is not None and datetime.date.fromisoformat(item.until) < self.today

    def remarks(self, checked: Iterable[int]) -> list[Finding]:
        """Advice about sign-offs that have run out, or that accepted nothing in the frames that were checked."""
        frames_checked = set(checked)
        found: list[Finding] = []
        for index, item in enumerate(self.sign_offs):
            frames = self.frames[index]
            if self.expired(item):
                found.append(_expired(item))
            elif not self.used[index] and (frames is None or frames & frames_checked):
                found.append(_unused(item))
        return found


def _reason(item: SignOff) -> str:
    return item.why + (f" (until {item.until})" if item.until else "")


def _expired(item: SignOff) -> Finding:
    return Finding(
        rule="sign-off.expired",
        title="Sign-off has run out",
        severity=ADVICE,
        subject=item.bow or item.rule,
        measured=item.until,
        expected="a date that is still to come, or none",
        unit="",
        why=WHY_EXPIRED,
        source="common practice, no source",
        fix=Fix(f"Ask again whether {item.rule} is meant, then move `until` on or delete the sign-off."),
    )


def _unused(item: SignOff) -> Finding:
    return Finding(
        rule="sign-off.unused",
        title="Sign-off accepts nothing",
        severity=ADVICE,
        subject=item.bow or item.rule,
        measured=f"0 findings of {item.rule}",
        expected="1 or more",
        unit="",
        why=WHY_UNUSED,
        source="common practice, no source",
        fix=Fix(f"Delete the sign-off of {item.rule}, or correct its rule, bow or frames."),
    )
