"""Frames keep what is done, go on from it, and give the same bytes however the rounds were cut up."""

from __future__ import annotations

import json
import random
from dataclasses import replace
from pathlib import Path

import numpy as np
import plain_engine as plain
import pytest

from renderer.base.errors import InputError, Interrupted
from renderer.frames import events
from renderer.frames.identity import frame_seed
from renderer.frames.merging import merge_frame
from renderer.frames.options import RenderOptions
from renderer.frames.portion_files import read_portion
from renderer.frames.render import render_frame
from renderer.frames.work import FrameFailed
from renderer.pictures.exr_reading import read_exr
from renderer.pictures.exr_writing import facts_of

QUANTUM = 2.0 ** (9 - 46)  # 1000 cd/m2 lies in [2^9, 2^10)


def whole_picture(out: Path, **options: object) -> bytes:
    """The bytes of a frame rendered in one go."""
    return render_frame(plain.shot(), out, RenderOptions(**options), engine=plain.plain_engine()).path.read_bytes()


def portions_of(out: Path) -> list[Path]:
    """Every portion below a folder."""
    return sorted(out.glob("portions/*/*.portion"))


def test_sums_are_those_foretold(tmp_path: Path) -> None:
    result = render_frame(plain.shot(), tmp_path, engine=plain.plain_engine())
    portion = read_portion(portions_of(tmp_path)[0])
    assert portion.facts.quantum == QUANTUM
    assert portion.facts.rounds == ((0, 16),)
    expected = plain.foretold(frame_seed(0, 1001), range(16), QUANTUM)
    np.testing.assert_array_equal(portion.sums.xyz, expected)
    np.testing.assert_array_equal(portion.sums.replicate_y.sum(axis=0), expected[..., 1])
    assert result.tally["samples"] == 16 * plain.ROWS * plain.COLUMNS
    assert (result.rounds, result.rendered_rounds, result.stopped_by) == (16, 16, "rounds")


@pytest.mark.parametrize("n", [2, 3, 5, 16])
def test_portions_in_any_order_merge_to_the_same_bytes(tmp_path: Path, n: int) -> None:
    expected = whole_picture(tmp_path / "whole")
    order = list(range(1, n + 1))
    random.Random(n).shuffle(order)
    for k in order:
        render_frame(plain.shot(), tmp_path, RenderOptions(portion=(k, n)), engine=plain.plain_engine())
    assert len(portions_of(tmp_path)) == n
    merged = merge_frame(plain.shot(), tmp_path, engine=plain.plain_engine())
    assert merged.path.read_bytes() == expected
    assert merged.preview is not None
    assert merged.preview.read_bytes() == (tmp_path / "whole" / merged.preview.name).read_bytes()


def test_a_run_takes_up_portions_and_renders_the_rest(tmp_path: Path) -> None:
    expected = whole_picture(tmp_path / "whole")
    render_frame(plain.shot(), tmp_path, RenderOptions(portion=(2, 4)), engine=plain.plain_engine())
    calls: list[tuple[int, int]] = []
    result = render_frame(plain.shot(), tmp_path, engine=plain.plain_engine(calls=calls))
    assert {number for number, _ in calls} == {0, 1, 2, 3, *range(8, 16)}
    assert result.path.read_bytes() == expected
    assert [path.name.split(".")[0] for path in portions_of(tmp_path)] == ["000000-000015"]


@pytest.mark.parametrize("calls_before_stop", [0, 1, 2, 5, 9, 12])
def test_a_stopped_run_keeps_whole_rounds_and_goes_on(tmp_path: Path, calls_before_stop: int) -> None:
    """Stopped in the middle of a round: the round is dropped, those before are on disk, and the end is the same."""
    expected = whole_picture(tmp_path / "whole")
    calls: list[tuple[int, int]] = []
    with pytest.raises(Interrupted, match="rounds are done and kept"):
        render_frame(
            plain.shot(),
            tmp_path,
            should_stop=lambda: len(calls) >= calls_before_stop,
            engine=plain.plain_engine(calls=calls),
        )
    done = len([1 for number, row in calls if row == 0]) - 1  # the last round was begun, not ended, or not begun
    kept = portions_of(tmp_path)
    rounds = read_portion(kept[0]).facts.rounds[0][1] if kept else 0
    assert done <= rounds <= done + 1
    assert not (tmp_path / "lock.1001.exr").exists()
    again: list[tuple[int, int]] = []
    result = render_frame(plain.shot(), tmp_path, engine=plain.plain_engine(calls=again))
    assert min(number for number, _ in again) == rounds
    assert result.path.read_bytes() == expected


def test_a_run_killed_without_warning_goes_on_from_its_last_save(tmp_path: Path) -> None:
    expected = whole_picture(tmp_path / "whole")
    options = RenderOptions(save_every_s=1e-9)

    class Killed(BaseException):
        """No handler of ours knows it, as none hears a kill -9."""

    def die_in_round_six(event: events.Event) -> None:
        if isinstance(event, events.RowsDone) and event.round_number == 6:
            raise Killed

    with pytest.raises(Killed):
        render_frame(plain.shot(), tmp_path, options, progress=die_in_round_six, engine=plain.plain_engine())
    assert [path.name.split(".")[0] for path in portions_of(tmp_path)] == ["000000-000005"]
    calls: list[tuple[int, int]] = []
    result = render_frame(plain.shot(), tmp_path, engine=plain.plain_engine(calls=calls))
    assert min(number for number, _ in calls) == 6
    assert result.path.read_bytes() == expected


def test_keyboard_interrupt_keeps_finished_rounds(tmp_path: Path) -> None:
    def press(event: events.Event) -> None:
        if isinstance(event, events.RowsDone) and event.round_number == 3:
            raise KeyboardInterrupt

    with pytest.raises(Interrupted, match="3 of 16 rounds"):
        render_frame(plain.shot(), tmp_path, progress=press, engine=plain.plain_engine())
    assert read_portion(portions_of(tmp_path)[0]).facts.rounds == ((0, 3),)


def test_rounds_are_added_to_a_finished_frame(tmp_path: Path) -> None:
    expected = whole_picture(tmp_path / "whole", rounds=128)
    render_frame(plain.shot(), tmp_path, RenderOptions(rounds=64), engine=plain.plain_engine())
    calls: list[tuple[int, int]] = []
    result = render_frame(plain.shot(), tmp_path, RenderOptions(rounds=128), engine=plain.plain_engine(calls=calls))
    assert min(number for number, _ in calls) == 64
    assert result.rendered_rounds == 64
    assert result.path.read_bytes() == expected


def test_what_is_there_is_skipped_unless_overwritten(tmp_path: Path) -> None:
    first = render_frame(plain.shot(), tmp_path, engine=plain.plain_engine())
    told: list[events.Event] = []
    calls: list[tuple[int, int]] = []
    engine = plain.plain_engine(calls=calls)
    again = render_frame(plain.shot(), tmp_path, progress=told.append, engine=engine)
    assert (again.stopped_by, again.rounds, calls) == ("there already", 16, [])
    assert told == [events.FrameSkipped(1001, first.path, 16)]
    fewer = render_frame(plain.shot(), tmp_path, RenderOptions(rounds=8), engine=engine)
    assert (fewer.stopped_by, fewer.rounds) == ("there already", 16)
    render_frame(plain.shot(), tmp_path, RenderOptions(overwrite=True, rounds=8), engine=engine)
    assert {number for number, _ in calls} == set(range(8))
    assert facts_of(read_exr(first.path).header)["rounds"] == 8


def test_a_changed_shot_is_rendered_anew_and_its_old_portions_go(tmp_path: Path) -> None:
    render_frame(plain.shot(), tmp_path, engine=plain.plain_engine())
    changed = plain.shot(fingerprint="cd" * 32)
    result = render_frame(changed, tmp_path, engine=plain.plain_engine())
    assert result.rendered_rounds == 16
    assert len(portions_of(tmp_path)) == 1
    assert read_portion(portions_of(tmp_path)[0]).facts.identity.fingerprint == "cd" * 32


def test_another_seed_and_another_frame_have_other_noise(tmp_path: Path) -> None:
    engine = plain.plain_engine()
    a = read_exr(render_frame(plain.shot(), tmp_path / "a", engine=engine).path)
    b = read_exr(render_frame(plain.shot(), tmp_path / "b", RenderOptions(seed=1), engine=engine).path)
    c = read_exr(render_frame(plain.shot(1002), tmp_path / "c", engine=engine).path)
    assert not np.array_equal(a.channels["G"], b.channels["G"])
    assert not np.array_equal(a.channels["G"], c.channels["G"])


@pytest.mark.parametrize("damage", ["cut", "flipped", "emptied", "text"])
def test_a_torn_portion_is_told_of_and_rendered_again(tmp_path: Path, damage: str) -> None:
    expected = whole_picture(tmp_path / "whole")
    for k in (1, 2):
        render_frame(plain.shot(), tmp_path, RenderOptions(portion=(k, 2)), engine=plain.plain_engine())
    torn = portions_of(tmp_path)[1]
    raw = bytearray(torn.read_bytes())
    if damage == "cut":
        raw = raw[:-100]
    elif damage == "flipped":
        raw[len(raw) // 2] ^= 1
    else:
        raw = bytearray(b"" if damage == "emptied" else b"these are not the rounds you look for\n")
    torn.write_bytes(raw)
    told: list[events.Event] = []
    calls: list[tuple[int, int]] = []
    result = render_frame(plain.shot(), tmp_path, progress=told.append, engine=plain.plain_engine(calls=calls))
    warnings = [event.text for event in told if isinstance(event, events.Warned)]
    assert len(warnings) == 1
    assert torn.name in warnings[0]
    assert "rendered again" in warnings[0]
    assert {number for number, _ in calls} == set(range(8, 16))
    assert result.path.read_bytes() == expected
    assert portions_of(tmp_path) == [torn.with_name(torn.name.replace("000008-", "000000-"))]


def test_a_portion_that_is_there_is_not_rendered_again(tmp_path: Path) -> None:
    render_frame(plain.shot(), tmp_path, engine=plain.plain_engine())
    calls: list[tuple[int, int]] = []
    result = render_frame(plain.shot(), tmp_path, RenderOptions(portion=(2, 4)), engine=plain.plain_engine(calls=calls))
    assert (result.stopped_by, calls) == ("there already", [])


def test_a_stopped_portion_goes_on_too(tmp_path: Path) -> None:
    calls: list[tuple[int, int]] = []
    options = RenderOptions(portion=(2, 2))
    engine = plain.plain_engine(calls=calls)
    with pytest.raises(Interrupted):
        render_frame(plain.shot(), tmp_path, options, should_stop=lambda: len(calls) >= 7, engine=engine)
    assert len(portions_of(tmp_path)) == 1
    result = render_frame(plain.shot(), tmp_path, options, engine=engine)
    assert read_portion(result.path).facts.rounds == ((8, 16),)
    assert portions_of(tmp_path) == [result.path]


def test_merging_says_what_is_missing(tmp_path: Path) -> None:
    for k in (1, 3):
        render_frame(plain.shot(), tmp_path, RenderOptions(portion=(k, 4)), engine=plain.plain_engine())
    with pytest.raises(Interrupted, match=r"no portion has rounds 4-7, 12-15 of 16"):
        merge_frame(plain.shot(), tmp_path, engine=plain.plain_engine())
    with pytest.raises(InputError, match="has no portion"):
        merge_frame(plain.shot(1002), tmp_path, engine=plain.plain_engine())
    with pytest.raises(InputError, match="another state of the shot"):
        merge_frame(plain.shot(fingerprint="0" * 64), tmp_path, engine=plain.plain_engine())


def test_merging_refuses_to_mix_processors_unless_told(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    expected = read_exr(render_frame(plain.shot(), tmp_path / "whole", engine=plain.plain_engine()).path)
    render_frame(plain.shot(), tmp_path, RenderOptions(portion=(1, 2)), engine=plain.plain_engine())
    monkeypatch.setenv("ANTISOLAR_CPU_LEVEL", "x86-64-v2")
    render_frame(plain.shot(), tmp_path, RenderOptions(portion=(2, 2)), engine=plain.plain_engine())
    with pytest.raises(InputError, match="do not go together") as caught:
        merge_frame(plain.shot(), tmp_path, engine=plain.plain_engine())
    assert "--mix" in caught.value.faults[0].expected
    mixed = read_exr(merge_frame(plain.shot(), tmp_path, mix=True, engine=plain.plain_engine()).path)
    np.testing.assert_array_equal(mixed.channels["G"], expected.channels["G"])
    assert "x86-64-v2" in facts_of(mixed.header)["cpuLevel"]
    assert "|" in facts_of(mixed.header)["cpuLevel"]


def test_a_target_stops_after_a_multiple_of_eight_rounds_and_resumes_to_the_same(tmp_path: Path) -> None:
    target = RenderOptions(standard_error=0.02, rounds=400)
    told: list[events.Event] = []
    first = render_frame(plain.shot(), tmp_path / "a", target, progress=told.append, engine=plain.plain_engine())
    assert first.stopped_by == "standard error"
    assert first.rounds % 8 == 0
    assert first.standard_error is not None
    assert first.standard_error <= 0.02
    looks = [event for event in told if isinstance(event, events.RoundDone) and event.standard_error is not None]
    assert [event.done_rounds for event in looks] == list(range(8, first.rounds + 1, 8))
    assert all(event.standard_error > 0.02 for event in looks[:-1])  # type: ignore[operator]
    calls: list[tuple[int, int]] = []
    engine = plain.plain_engine(calls=calls)
    with pytest.raises(Interrupted):
        render_frame(plain.shot(), tmp_path / "b", target, should_stop=lambda: len(calls) > 25, engine=engine)
    second = render_frame(plain.shot(), tmp_path / "b", target, engine=engine)
    assert second.path.read_bytes() == first.path.read_bytes()
    there = render_frame(plain.shot(), tmp_path / "b", target, engine=engine)
    assert there.stopped_by == "there already"


def test_the_clock_stops_between_rounds_and_equals_so_many_rounds(tmp_path: Path) -> None:
    timed = render_frame(plain.shot(), tmp_path / "a", RenderOptions(stop_after_s=1e-9), engine=plain.plain_engine())
    assert (timed.stopped_by, timed.rounds) == ("time", 1)
    plainly = render_frame(plain.shot(), tmp_path / "b", RenderOptions(rounds=1), engine=plain.plain_engine())
    a, b = read_exr(timed.path), read_exr(plainly.path)
    assert a.channels.keys() == b.channels.keys()
    for name in a.channels:
        np.testing.assert_array_equal(a.channels[name], b.channels[name])


def test_samples_that_are_not_finite_fail_the_frame_and_keep_the_rounds_before(tmp_path: Path) -> None:
    with pytest.raises(FrameFailed, match="1 sample of round 5 is not a finite number"):
        render_frame(plain.shot(), tmp_path, engine=plain.plain_engine(bad_round=5))
    assert read_portion(portions_of(tmp_path)[0]).facts.rounds == ((0, 5),)


def test_a_picture_of_something_else_is_not_replaced_unasked(tmp_path: Path) -> None:
    from renderer.pictures.exr_writing import write_exr

    path = tmp_path / "lock.1001.exr"
    write_exr(path, {"Y": np.zeros((2, 2), dtype=np.float32)}, {})
    with pytest.raises(InputError, match="in the way"):
        render_frame(plain.shot(), tmp_path, engine=plain.plain_engine())
    render_frame(plain.shot(), tmp_path, RenderOptions(overwrite=True), engine=plain.plain_engine())
    assert facts_of(read_exr(path).header)["rounds"] == 16


def test_a_broken_picture_in_its_place_is_made_again(tmp_path: Path) -> None:
    first = render_frame(plain.shot(), tmp_path, engine=plain.plain_engine())
    whole = first.path.read_bytes()
    first.path.write_bytes(whole[: len(whole) - 50])
    told: list[events.Event] = []
    calls: list[tuple[int, int]] = []
    engine = plain.plain_engine(calls=calls)
    again = render_frame(plain.shot(), tmp_path, progress=told.append, engine=engine)
    assert again.path.read_bytes() == whole
    assert calls == []
    assert any(isinstance(event, events.Warned) and "made again" in event.text for event in told)


def test_variants_and_numbers_name_the_files(tmp_path: Path) -> None:
    night = replace(plain.shot(-7), variant="night", source=Path("somewhere/lock.shot.toml"))
    result = render_frame(night, tmp_path, RenderOptions(rounds=1), engine=plain.plain_engine())
    assert result.path == tmp_path / "lock.night.-0007.exr"
    assert result.preview == tmp_path / "lock.night.-0007.png"
    assert result.preview.is_file()


def test_portions_may_be_thrown_away(tmp_path: Path) -> None:
    render_frame(plain.shot(), tmp_path, RenderOptions(keep_portions=False), engine=plain.plain_engine())
    assert portions_of(tmp_path) == []


def test_the_log_has_a_line_a_step_that_machines_read(tmp_path: Path) -> None:
    render_frame(plain.shot(), tmp_path, RenderOptions(threads=2), engine=plain.plain_engine(("a note",)))
    lines = [json.loads(line) for line in (tmp_path / "lock.log").read_text(encoding="utf-8").splitlines()]
    assert [line["event"] for line in lines if line["event"] != "RoundDone"] == [
        "FrameStarted",
        "SceneReady",
        "PortionSaved",
        "PictureSaved",
    ]
    assert all(line["threads"] == 2 and line["frame"] == 1001 for line in lines)
    assert lines[1]["notes"] == ["a note"]


def test_full_sums_are_an_error_that_names_the_round(tmp_path: Path) -> None:
    engine = plain.plain_engine()

    def overflow(scene: object, number: int, seed: int, first: int, last: int, sums: object, quantum: float) -> object:
        sums.xyz[first:last] = 2**62  # type: ignore[attr-defined]
        return plain.Counts(0, 0, 0, 0, 0, 0, 0)

    with pytest.raises(InputError, match="full before round 1"):
        render_frame(plain.shot(), tmp_path, engine=replace(engine, render_rows=overflow))


@pytest.mark.parametrize(
    ("options", "where"),
    [
        ({"rounds": 0}, "--rounds"),
        ({"rounds": 10**9}, "--rounds"),
        ({"standard_error": 0.0}, "--standard-error"),
        ({"standard_error": float("nan")}, "--standard-error"),
        ({"stop_after_s": -1.0}, "--stop-after"),
        ({"portion": (0, 4)}, "--portion"),
        ({"portion": (5, 4)}, "--portion"),
        ({"portion": (1, 4), "standard_error": 0.1}, "--portion"),
    ],
)
def test_options_that_cannot_be(options: dict[str, object], where: str) -> None:
    with pytest.raises(InputError) as caught:
        RenderOptions(**options)  # type: ignore[arg-type]
    assert caught.value.faults[0].where == where


def test_more_portions_than_rounds_have_some_without_any(tmp_path: Path) -> None:
    with pytest.raises(InputError, match="has no round"):
        render_frame(plain.shot(), tmp_path, RenderOptions(rounds=2, portion=(1, 4)), engine=plain.plain_engine())
