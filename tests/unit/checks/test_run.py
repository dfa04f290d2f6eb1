"""The run: merging over frames, sign-offs, the exit line, and a studio's rules that may fail."""

from __future__ import annotations

import datetime
from dataclasses import replace

import frame_builder as build
import pytest

from renderer.checks import registry, sphere
from renderer.checks.findings import ADVICE, IMPLAUSIBLE, IMPOSSIBLE, Finding
from renderer.checks.merging import frame_range, merge_frames
from renderer.checks.registry import TABLE, Rule, function_of
from renderer.checks.run import check_shot
from renderer.shot.model import SignOff

TODAY = datetime.date(2026, 12, 1)
SUN = build.sun(20.0, 180.0)
GOOD = build.opposite_of(SUN)


def finding(severity: str = IMPOSSIBLE, subject: str = "bow", excess: float = 1.0) -> Finding:
    return Finding(
        "bow.centre", "Bow centre", severity, subject, excess, 0.0, "degrees", "why", "source", excess=excess
    )


def off_centre(frames: range, sign_offs: tuple[SignOff, ...] = ()) -> list:
    centre = sphere.on_circle(GOOD, 5.0, 0.0, build.AXES)
    return [build.frame(k, sun=SUN, bows=(build.bow(centre),), sign_offs=sign_offs) for k in frames]


def test_every_rule_of_the_table_exists_and_has_words() -> None:
    assert len({rule.name for rule in TABLE}) == len(TABLE)
    for rule in TABLE:
        assert callable(function_of(rule.place))
        assert (function_of(rule.place).__doc__ or "").startswith("Findings for ")


@pytest.mark.parametrize(
    ("frames", "text"),
    [
        ((1001,), "1001"),
        ((1001, 1002, 1003), "1001-1003"),
        ((1001, 1003, 1005), "1001-1005x2"),
        ((1001, 1005), "1001,1005"),
        ((1, 2, 3, 7), "1-3,7"),
        ((1, 2), "1-2"),
    ],
)
def test_frames_read_in_the_syntax_of_the_trade(frames: tuple[int, ...], text: str) -> None:
    from renderer.shot.frame_range import parse_frames

    assert frame_range(frames) == text
    assert parse_frames(text) == frames


def test_neighbouring_frames_merge_and_keep_the_worst() -> None:
    rows = [(1001, [finding(excess=1.0)]), (1002, [finding(excess=3.0)]), (1003, []), (1004, [finding(excess=2.0)])]
    first, second = merge_frames(rows)
    assert (first.frames, first.worst_frame, first.measured) == ((1001, 1002), 1002, 3.0)
    assert (second.frames, second.worst_frame) == ((1004,), None)


def test_different_bows_do_not_merge_and_the_gravest_severity_is_kept() -> None:
    rows = [(1, [finding(subject="a"), finding(subject="b")]), (2, [finding(IMPLAUSIBLE, "a"), finding(subject="b")])]
    assert [(found.subject, found.severity) for found in merge_frames(rows)] == [("a", IMPOSSIBLE), ("b", IMPOSSIBLE)]


def test_the_gravest_come_first_and_what_is_signed_off_last() -> None:
    centre = sphere.on_circle(GOOD, 5.0, 0.0, build.AXES)
    bows = (build.bow(centre, 40.3), build.bow(GOOD, outer="violet", name="other"))
    signed = SignOff("bow.colour-order", "meant", None, None, None)
    report = check_shot([build.frame(sun=SUN, bows=bows, sign_offs=(signed,))], TODAY)
    assert [found.rule for found in report.findings] == ["bow.centre", "bow.radius", "bow.colour-order"]


def test_a_wrong_bow_is_one_finding_over_its_frames() -> None:
    report = check_shot(off_centre(range(1001, 1011)), TODAY)
    (found,) = [item for item in report.findings if item.rule == "bow.centre"]
    assert frame_range(found.frames) == "1001-1010"
    assert report.fails(IMPOSSIBLE)


def test_fail_on_moves_the_line() -> None:
    shots = [build.frame(sun=SUN, bows=(build.bow(GOOD, radius=40.3),))]
    report = check_shot(shots, TODAY)
    assert [found.severity for found in report.findings] == [IMPLAUSIBLE]
    assert (report.fails(ADVICE), report.fails(IMPLAUSIBLE), report.fails(IMPOSSIBLE)) == (True, True, False)


def test_a_sign_off_accepts_and_the_check_passes() -> None:
    report = check_shot(off_centre(range(1, 4), (SignOff("bow.centre", "as drawn", "2026-12-01", None, None),)), TODAY)
    (found,) = report.findings
    assert found.signed_off == "as drawn (until 2026-12-01)"
    assert not report.fails(ADVICE)


@pytest.mark.parametrize(
    ("sign_off", "remark"),
    [
        (SignOff("bow.centre", "as drawn", "2026-11-30", None, None), "sign-off.expired"),
        (SignOff("bow.radius", "as drawn", None, None, None), "sign-off.unused"),
        (SignOff("bow.centre", "as drawn", None, "another bow", None), "sign-off.unused"),
    ],
)
def test_a_sign_off_that_ran_out_or_meets_nothing_is_advice(sign_off: SignOff, remark: str) -> None:
    report = check_shot(off_centre(range(1, 4), (sign_off,)), TODAY)
    rules = {found.rule: found for found in report.findings}
    assert set(rules) == {"bow.centre", remark}
    assert rules["bow.centre"].flagged
    assert rules[remark].severity == ADVICE


def test_a_sign_off_of_some_frames_leaves_the_others() -> None:
    report = check_shot(off_centre(range(1, 7), (SignOff("bow.*", "meant", None, "comp bow", "1-3"),)), TODAY)
    by_state = {found.flagged: frame_range(found.frames) for found in report.findings}
    assert by_state == {False: "1-3", True: "4-6"}


def test_a_sign_off_of_frames_that_were_not_checked_is_not_called_unused() -> None:
    elsewhere = SignOff("bow.centre", "meant", None, None, "900-901")
    shots = [replace(shot, sign_offs=(elsewhere,)) for shot in off_centre(range(1, 3))]
    assert [found.rule for found in check_shot(shots, TODAY).findings] == ["bow.centre"]


def studio_rule(view: object, facts: object) -> list[Finding]:
    return [finding(ADVICE, "studio")]


def broken_rule(view: object, facts: object) -> list[Finding]:
    raise KeyError("not here")


def rude_rule(view: object, facts: object) -> list[str]:
    return ["a sentence"]


@pytest.mark.parametrize(
    ("name", "title", "measured"),
    [
        ("studio_rule", "Bow centre", 1.0),
        ("broken_rule", "Studio rule failed", "KeyError: 'not here'"),
        ("rude_rule", "Studio rule failed", "TypeError: rule house.rule gave a str where a Finding is due"),
        ("no_such_rule", "Studio rule failed", f"AttributeError: module '{__name__}' has no attribute 'no_such_rule'"),
    ],
)
def test_a_studio_rule_answers_or_fails_alone(name: str, title: str, measured: object) -> None:
    chosen = [*TABLE, Rule("house.rule", "House", f"{__name__}:{name}", own=False)]
    report = check_shot(off_centre(range(1, 3)), TODAY, chosen)
    ours = [found for found in report.findings if found.rule == "bow.centre" and found.subject == "comp bow"]
    theirs = [found for found in report.findings if found not in ours]
    assert len(ours) == 1
    assert [(found.title, found.measured) for found in theirs] == [(title, measured)]
    assert theirs[0].frames == (1, 2)


def test_studio_rules_are_found_by_entry_point(monkeypatch: pytest.MonkeyPatch) -> None:
    from importlib import metadata

    entry = metadata.EntryPoint("house.rule", f"{__name__}:studio_rule", registry.ENTRY_POINTS)
    monkeypatch.setattr(metadata, "entry_points", lambda group: [entry] if group == registry.ENTRY_POINTS else [])
    report = check_shot(off_centre(range(1, 2)), TODAY)
    assert "studio" in {found.subject for found in report.findings}


def test_one_of_our_own_rules_that_fails_ends_the_run() -> None:
    with pytest.raises(KeyError):
        check_shot(off_centre(range(1, 2)), TODAY, [Rule("bow.own", "Own", f"{__name__}:broken_rule")])


def test_a_thousand_frames_of_bows_are_checked_at_once() -> None:
    shots = [
        build.frame(
            k,
            sun=build.sun(20.0 + 0.01 * k, 180.0 + 0.02 * k),
            bows=(build.bow(GOOD, 42.0, name="one"), build.bow(GOOD, 51.5, 2, name="two")),
            camera=build.camera(azimuth=0.01 * k),
        )
        for k in range(1000)
    ]
    report = check_shot(shots, TODAY)
    assert len(report.bows) == 1000
    assert {found.rule for found in report.findings} >= {"bow.centre", "bow.follows-camera"}
