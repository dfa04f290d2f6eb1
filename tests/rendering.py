"""Small pictures rendered for a test, with their sums, standard errors and counts."""

from __future__ import annotations

import tempfile
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, fields
from pathlib import Path

import numpy as np

from renderer.base.constants import N_REPLICATES
from renderer.frames.assemble import assemble
from renderer.frames.scene import Scene
from renderer.pictures.errors_of_mean import standard_error
from renderer.pictures.sums import Sums, empty_sums, quantum_of
from renderer.shot import load_shot
from renderer.shot.model import FrameShot
from renderer.transport.guides import guide_rows
from renderer.transport.layout import KINDS
from renderer.transport.render import Tally, render_rows


@dataclass(frozen=True)
class Rendered:
    """What some rounds of a scene add up to. Every mean is over rounds, in cd/m2 unless it says otherwise."""

    scene: Scene
    sums: Sums
    quantum: float
    rounds_by_replicate: np.ndarray
    tally: Tally

    @property
    def rounds(self) -> int:
        """How many rounds were rendered."""
        return int(self.rounds_by_replicate.sum())

    @property
    def xyz(self) -> np.ndarray:
        """(rows, columns, 3)."""
        return self.sums.xyz * (self.quantum / self.rounds)

    @property
    def luminance(self) -> np.ndarray:
        """(rows, columns)."""
        return self.xyz[..., 1]

    @property
    def bins(self) -> np.ndarray:
        """(n_bins, rows, columns) spectral radiance at the shot's wavelengths. [W m^-2 sr^-1 nm^-1]"""
        return self.sums.bins * (self.quantum / self.rounds)

    @property
    def replicates(self) -> np.ndarray:
        """(8, rows, columns) mean luminance in each replicate; nan where it has no round."""
        with np.errstate(invalid="ignore"):
            return self.sums.replicate_y * self.quantum / self.rounds_by_replicate[:, None, None]

    @property
    def error(self) -> np.ndarray:
        """(rows, columns) standard error of the luminance, as the picture's layer states it."""
        found = standard_error(self.sums.replicate_y, self.rounds_by_replicate)
        assert found is not None, "one replicate has no error"
        return found * self.quantum

    @property
    def mean(self) -> float:
        """Mean luminance of the picture."""
        return float(self.luminance.mean())

    @property
    def mean_error(self) -> float:
        """Standard error of `mean`, from the eight replicates' own means, widened as the layer's is."""
        sizes = np.rint(self.sums.replicate_y.mean(axis=(1, 2), keepdims=True)).astype(np.int64)  # a sum would not fit
        found = standard_error(sizes, self.rounds_by_replicate)
        assert found is not None, "one replicate has no error"
        return float(found[0, 0]) * self.quantum

    def kind(self, name: str) -> np.ndarray:
        """(rows, columns, 3) XYZ of one kind of light: sky, direct, reflected or transmitted."""
        return self.sums.kinds[:, :, KINDS.index(name)] * (self.quantum / self.rounds)


def scene_of(
    shot: str | Path | FrameShot | Scene,
    overrides: Sequence[str] = (),
    frame: int = 1001,
    folder: Path | None = None,
) -> Scene:
    """The scene of a shot: a file, a text of one (`format = 1` is added; its files lie in `folder`), or a value."""
    if isinstance(shot, Scene):
        return shot
    if isinstance(shot, FrameShot):
        return assemble(shot)
    if isinstance(shot, Path):
        return assemble(load_shot(shot, overrides=overrides).at(frame))
    with tempfile.TemporaryDirectory(dir=folder) as made:
        path = Path(made) / "test.shot.toml"
        path.write_text("format = 1\n" + shot, encoding="utf-8")
        roots = () if folder is None else (folder,)
        return assemble(load_shot(path, overrides=overrides, roots=roots).at(frame))


def rendered(
    shot: str | Path | FrameShot | Scene,
    rounds: int | Iterable[int],
    seed: int = 0,
    overrides: Sequence[str] = (),
    frame: int = 1001,
    finite: bool = True,
) -> Rendered:
    """Render so many rounds from the first, or the rounds of these numbers, one after the other.

    Asserts that every sample was finite and that nothing was cut or lost in sets, unless `finite` is False.
    """
    scene = scene_of(shot, overrides, frame)
    rows, columns = int(scene.camera.window[3]), int(scene.camera.window[2])
    wanted = (int(b) for b in np.asarray(scene.spectrum.bin_of))
    sums = empty_sums(rows, columns, len(KINDS), max(wanted) + 1)
    quantum = quantum_of(scene.reference_radiance)
    by_replicate = np.zeros(N_REPLICATES, dtype=np.int64)
    counts = np.zeros(len(fields(Tally)), dtype=np.int64)
    for number in range(rounds) if isinstance(rounds, int) else rounds:
        tally = render_rows(scene, number, seed, 0, rows, sums, quantum)
        counts += [getattr(tally, field.name) for field in fields(Tally)]
        by_replicate[number % N_REPLICATES] += 1
    found = Rendered(scene, sums, quantum, by_replicate, Tally(*(int(count) for count in counts)))
    if finite:
        assert (found.tally.non_finite, found.tally.saturated, found.tally.set_overflow) == (0, 0, 0)
        assert found.tally.samples == rows * columns * found.rounds
    return found


def guides_of(shot: str | Path | FrameShot | Scene) -> dict[str, np.ndarray]:
    """What lies under each pixel's centre; see renderer/transport/guides.py."""
    scene = scene_of(shot)
    return guide_rows(scene, 0, int(scene.camera.window[3]))
