"""From finished rounds to the picture: layers, metadata, preview."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy.typing as npt

from renderer.frames.engine import Engine, all_guides
from renderer.frames.identity import Identity
from renderer.frames.names import picture_path, preview_path
from renderer.frames.options import RenderOptions
from renderer.frames.resuming import versions_text
from renderer.frames.round_ranges import text
from renderer.frames.work import Work
from renderer.pictures.developing import Development, developed, development_of
from renderer.pictures.errors_of_mean import frame_error, standard_error
from renderer.pictures.exr_writing import SPECTRAL, camera_header, colour_header, facts_header, write_exr
from renderer.pictures.layers import (
    GUIDES,
    Accumulated,
    Channels,
    colour_channels,
    count_channels,
    error_channels,
    guide_channels,
    kind_channels,
    spectral_channels,
)
from renderer.shot.model import FrameShot

LEFT_OUT = "light of the sun and of small lights through smooth interfaces onto rough surfaces, paths counted:"
MOST_NAMES_CHARACTERS = 200_000  # of the list of objects in the metadata


@dataclass(frozen=True)
class Finish:
    """What a picture is finished with beside its sums. `stopped_by`: rounds, standard error or time."""

    engine: Engine
    scene: Any
    identities: tuple[Identity, ...]
    stopped_by: str
    options: RenderOptions


def write_picture(out: Path, shot: FrameShot, work: Work, finish: Finish) -> tuple[Path, Path]:
    """Write the picture, then its preview; gives both paths. Raises `InputError` where they cannot be written.

    The same rounds give the same bytes: nothing of the machine, the time or the way here is in the file.
    """
    done = work.accumulated()
    how = development_of(shot.camera, shot.fps, shot.output_space, done.luminance())
    path, preview = picture_path(out, shot), preview_path(out, shot)
    guides = all_guides(finish.engine, finish.scene, done.sums.size[0])
    channels = all_channels(done, how, shot, guides, finish)
    header = {
        **camera_header(shot.camera, shot.fps),
        **colour_header(how),
        **facts_header(picture_facts(shot, work, finish, done)),
        **layer_meanings(channels),
        **(SPECTRAL if shot.settings.wavelengths_nm else {}),
    }
    write_exr(path, channels, header)
    if finish.options.preview:
        from renderer.pictures.preview_png import write_preview

        rgb = developed(done.mean(done.sums.xyz), how)
        write_preview(preview, rgb, how.space, shot.camera.pixel_aspect)
    return path, preview


def all_channels(
    done: Accumulated,
    how: Development,
    shot: FrameShot,
    guides: Mapping[str, npt.NDArray[Any]],
    finish: Finish,
) -> Channels:
    """Every layer of the picture."""
    half = finish.options.half
    return {
        **colour_channels(done, how, half),
        **error_channels(done, how),
        **kind_channels(done, how, finish.engine.kinds, half),
        **guide_channels(guides),
        **count_channels(done),
        **spectral_channels(done, shot.settings.wavelengths_nm),
    }


def frame_error_of(done: Accumulated) -> float | None:
    """The frame's relative standard error; None with one replicate alone."""
    error = standard_error(done.sums.replicate_y, done.rounds_by_replicate)
    return None if error is None else frame_error(error * done.quantum, done.luminance())


def picture_facts(shot: FrameShot, work: Work, finish: Finish, done: Accumulated) -> dict[str, str | int | float]:
    """What lets any frame be made again, and what is not in it."""
    first = finish.identities[0]
    error = frame_error_of(done)
    facts: dict[str, str | int | float] = {
        "title": shot.title,
        "shot": shot.source.name,
        "variant": shot.variant,
        "frame": shot.frame,
        "fingerprint": first.fingerprint,
        "seed": first.seed,
        "version": dict(first.versions)["antisolar"],
        "versions": " | ".join(versions_text(identity) for identity in finish.identities),
        "cpuLevel": " | ".join(identity.cpu_level for identity in finish.identities),
        "rounds": done.n_rounds,
        "roundNumbers": text(work.rounds),
        "stoppedBy": finish.stopped_by,
        "standardError": "of 8 replicates, Student's t, 68.27 %" if error is not None else "none: one replicate alone",
        "colourType": "half" if finish.options.half else "float",
        "quantum": done.quantum.hex(),
        "leftOut": f"{LEFT_OUT} {work.tally.get('left_out', 0)}",
        "capped": work.tally.get("capped", 0),
        "capShare": cap_share(work),
        "saturated": work.tally.get("saturated", 0),
        "setOverflow": work.tally.get("set_overflow", 0),
        "unmatched": work.tally.get("unmatched", 0),
        "objects": _names(finish.scene.object_names),
        "materials": _names(finish.scene.material_names),
        "notes": " ".join(finish.scene.notes)[:MOST_NAMES_CHARACTERS],
    }
    return facts if error is None else {**facts, "frameError": error}


def cap_share(work: Work) -> float:
    """Power of camera paths that was lost where they were cut off, as a share of all paths' at the camera. [1]"""
    samples = work.tally.get("samples", 0)
    return work.tally.get("cap_lost", 0) / 2.0**32 / samples if samples else 0.0


def layer_meanings(channels: Channels) -> dict[str, str]:
    """An attribute for each layer of guides that says what its numbers are."""
    return {f"antisolar/layer/{name}": meaning for name, (names, _, meaning) in GUIDES.items() if names[0] in channels}


def _names(names: Sequence[str]) -> str:
    """Names by their number in the id layers, as `1 tank, 2 sill`."""
    return ", ".join(f"{number} {name}" for number, name in enumerate(names, start=1))[:MOST_NAMES_CHARACTERS]
