"""What a rule says: one finding, and the fix that would make it right."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from typing import TypeAlias

IMPOSSIBLE = "impossible"  # light cannot do this
IMPLAUSIBLE = "implausible"  # it could, in circumstances that the shot does not show
ADVICE = "advice"  # worth knowing; never fails a check by itself

SEVERITIES = (ADVICE, IMPLAUSIBLE, IMPOSSIBLE)  # from the mildest up

Value: TypeAlias = "float | int | str | bool | tuple[Value, ...] | Mapping[str, Value] | None"


@dataclass(frozen=True)
class Fix:
    """The change that would make a finding right: one sentence, and the same as values by the shot file's dotted keys.

    `values` holds keys of the shot file where it can ("sun.azimuth": 25.0), so that each works after --override, and
    plain names for what no key holds ("centre_pixel"). `instead` is another way to the same end, where there is one.
    """

    text: str
    values: Mapping[str, Value] = field(default_factory=dict)
    instead: Mapping[str, Value] = field(default_factory=dict)


@dataclass(frozen=True)
class Finding:
    """One thing that a rule found.

    `subject` is the bow, object or material it is about, empty for the shot. `expected` is one value or a range
    (low, high) whose open end is None. `excess` says how far beyond the limit it is, on a scale of the rule's own: of
    several frames with one finding, the frame with the largest is the one that is shown, as `worst_frame`, which is
    None where all are alike. `frames` and `worst_frame` are filled in by the run.
    """

    rule: str
    title: str
    severity: str
    subject: str
    measured: float | str | None
    expected: float | str | tuple[float | None, float | None] | None
    unit: str
    why: str
    source: str
    fix: Fix | None = None
    excess: float = 0.0
    frames: tuple[int, ...] = ()
    worst_frame: int | None = None
    signed_off: str | None = None

    @property
    def flagged(self) -> bool:
        """Whether it still stands: not signed off."""
        return self.signed_off is None


def at_least(severity: str, line: str) -> bool:
    """Whether `severity` is `line` or worse."""
    return SEVERITIES.index(severity) >= SEVERITIES.index(line)


def fails(findings: Iterable[Finding], line: str = IMPLAUSIBLE) -> bool:
    """Whether any finding that is not signed off is as bad as `line`, or worse."""
    return any(finding.flagged and at_least(finding.severity, line) for finding in findings)
