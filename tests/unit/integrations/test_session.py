"""A session in process: rounds add up, stop where they are asked to, and are those of the command line."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from renderer.frames.engine import Engine
from renderer.integrations.session import Session
from renderer.shot import load_shot

SHOT = """\
format = 1
[frames]
range = "7"
[camera]
position = [0.0, 1.0, 4.0]
target = [0.0, 0.5, 0.0]
pixels = [16, 8]
sensor = [32.0, 16.0]
focal_length = 28.0
exposure = { stops = 0.0 }
white_balance = 6504
[sky]
kind = "uniform"
[render]
space = "rec709"
"""


@dataclass(frozen=True)
class Counts:
    """What rendering some rows counts."""

    non_finite: int = 0
    left_out: int = 0


@dataclass(frozen=True)
class Scene:
    """A scene without light."""

    notes: tuple[str, ...] = ("a note",)
    reference_radiance: float = 100.0


class Plain:
    """An engine whose round r gives each pixel a grey of 1 + r, so that means are known."""

    def __init__(self) -> None:
        self.calls: list[tuple[int, int]] = []
        self.seeds: set[int] = set()
        self.during: Any = lambda: None

    def rows(self, scene: Scene, number: int, seed: int, start: int, stop: int, sums: Any, quantum: float) -> Counts:
        self.calls.append((number, start))
        self.seeds.add(seed)
        value = np.array([0.9505, 1.0, 1.089]) * (1.0 + number)
        sums.xyz[start:stop] += np.rint(value / quantum).astype(np.int64)
        sums.replicate_y[number & 7, start:stop] += np.int64(round((1.0 + number) / quantum))
        self.during()
        return Counts()

    def engine(self) -> Engine:
        return Engine(("all",), lambda shot: Scene(), self.rows, lambda *given: {}, lambda threads: 1, lambda: True)


@pytest.fixture
def shot_path(tmp_path: Path) -> Path:
    path = tmp_path / "plain.shot.toml"
    path.write_text(SHOT, encoding="utf-8")
    return path


def session_of(path: Path, plain: Plain, **more: Any) -> Session:
    shot = load_shot(path)
    return Session(shot.at(7), engine=plain.engine(), **more)


def test_the_picture_is_the_mean_of_the_rounds(shot_path: Path) -> None:
    session = session_of(shot_path, Plain())
    assert (session.rounds, session.picture().shape, session.picture().max()) == (0, (8, 16, 3), 0.0)
    assert session.refine(3)
    assert session.rounds == 3
    assert session.luminance() == pytest.approx(np.full((8, 16), 2.0))  # of 1, 2 and 3
    picture = session.picture()
    assert np.ptp(picture) < 0.01 * picture.mean()  # D65 is white under a balance of 6504 K
    session.refine()
    assert session.picture() == pytest.approx(picture * 2.5 / 2.0)


def test_the_standard_error_waits_for_two_replicates(shot_path: Path) -> None:
    session = session_of(shot_path, Plain())
    assert session.luminance_error() is None
    session.refine()
    assert session.luminance_error() is None
    session.refine(7)
    assert (session.luminance_error() > 0.0).all()


def test_cancel_drops_the_round_in_hand_and_keeps_the_others(shot_path: Path) -> None:
    plain = Plain()
    session = session_of(shot_path, plain)
    session.refine(2)
    plain.during = session.cancel
    assert session.refine(5) is False
    kept = session.rounds
    assert kept in (2, 3)  # a band of rows, or a whole round, was in hand
    plain.during = lambda: None
    assert session.refine()
    assert session.rounds == kept + 1
    assert session.luminance()[0, 0] == pytest.approx(np.mean([1.0 + r for r in range(kept + 1)]))


def test_the_seed_is_the_command_lines(shot_path: Path) -> None:
    from renderer.frames.identity import frame_seed

    plain = Plain()
    session_of(shot_path, plain, seed=5).refine()
    assert plain.seeds == {frame_seed(5, 7)}


def test_notes_of_the_scene_are_passed_on(shot_path: Path) -> None:
    assert session_of(shot_path, Plain()).notes == ("a note",)
