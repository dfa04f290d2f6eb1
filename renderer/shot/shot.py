"""A shot that has been read and checked: its frames, and any of them resolved to plain values."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from renderer.base.errors import Fault, InputError
from renderer.shot.files import Files
from renderer.shot.fingerprint import PARTS, digest, part_text
from renderer.shot.frame_range import LARGEST_FRAME, frames_of
from renderer.shot.model import FrameShot, Object, Settings, SignOff
from renderer.shot.moment import Moment, axes_of, shutter_times
from renderer.shot.resolve_bows import resolve_bow
from renderer.shot.resolve_camera import resolve_camera
from renderer.shot.resolve_light import resolve_sky, resolve_sun
from renderer.shot.resolve_looks import material_flaws
from renderer.shot.resolve_objects import resolve_light, resolve_object
from renderer.shot.schema.flaws import Flaw
from renderer.shot.schema.shot_file import ShotFile
from renderer.shot.walk import changes_by_frame


@dataclass(frozen=True)
class Part:
    """One part of the shot for the fingerprint and the cache: an entry of a list, or a whole table."""

    kind: str
    index: int
    keys: Any
    moves: bool


class Shot:
    """A shot. `frames` rise; `variants` are the names in the file; `fail_on` is None where the shot does not say."""

    def __init__(
        self,
        path: Path,
        variant: str,
        keys: ShotFile,
        files: Files,
        faults: Callable[[Sequence[Flaw]], tuple[Fault, ...]],
    ) -> None:
        self.path = path
        self.variant = variant
        self.title = keys.title or path.name.removesuffix(".toml").removesuffix(".shot")
        self.frames = frames_of(keys.frames.range)
        self.fps = keys.frames.fps
        self.variants = tuple(keys.variants)
        self.fail_on = keys.checks.fail_on
        self._keys = keys
        self._files = files
        self._faults = faults
        self._axes = axes_of(keys)
        self._parts = _parts(keys)
        self._moving_materials = [name for name, item in keys.materials.items() if changes_by_frame(item)]
        self._texts: dict[tuple[str, int], str] = {}
        self._objects: dict[tuple[str, int], tuple[Object, ...]] = {}
        self._sign_offs = tuple(
            SignOff(item.rule, item.why, item.until, item.bow, item.frames) for item in keys.checks.sign_off
        )
        self._settings = Settings(
            splits=keys.render.splits,
            max_interfaces=keys.render.max_interfaces,
            rounds=keys.render.rounds,
            seed=keys.render.seed,
            wavelengths_nm=keys.render.wavelengths,
        )

    def at(self, frame: int) -> FrameShot:
        """The shot at a frame, whether or not it is one of `frames`.

        Raises `InputError` where a file of that frame is missing, or values meet that cannot: a camera on its target.
        """
        if abs(frame) > LARGEST_FRAME:
            raise InputError(
                Fault(f"there is no frame {frame}", str(self.path), f"frame numbers up to {LARGEST_FRAME:,}")
            )
        moment = Moment(frame, shutter_times(self._keys, frame), self._keys, self._files)
        camera = resolve_camera(moment, self._axes)
        resolved = FrameShot(
            title=self.title,
            source=self.path,
            variant=self.variant,
            frame=frame,
            fps=self.fps,
            axes=self._axes,
            camera=camera,
            sun=resolve_sun(moment, self._axes),
            sky=resolve_sky(moment),
            objects=self._resolve_objects(moment),
            bows=tuple(
                resolve_bow(moment, bow, index, camera, self._axes)
                for index, bow in enumerate(self._keys.bows_to_check)
            ),
            sign_offs=self._sign_offs,
            settings=self._settings,
            output_space=self._keys.render.space,
            fingerprint="" if moment.flaws else self._fingerprint(moment),
            fail_on=self.fail_on,
        )
        for name in self._moving_materials:
            moment.flaws += material_flaws(moment, name)
        if moment.flaws:
            raise InputError(*self._faults(moment.flaws))
        return resolved

    def _resolve_objects(self, moment: Moment) -> tuple[Object, ...]:
        """Every object; what stands still is resolved once and kept."""
        found: list[Object] = []
        for part in self._parts:
            if part.kind not in ("objects", "lights"):
                continue
            key = (part.kind, part.index)
            if key in self._objects:
                found += self._objects[key]
                continue
            before = len(moment.flaws)
            resolve = resolve_object if part.kind == "objects" else resolve_light
            objects = resolve(moment, part.keys, key)
            if not part.moves and len(moment.flaws) == before:
                self._objects[key] = objects
            found += objects
        return tuple(found)

    def _fingerprint(self, moment: Moment) -> str:
        texts = [str(self._keys.frames.fps)]
        for part in self._parts:
            key = (part.kind, part.index)
            text = self._texts.get(key)
            if text is None:
                text = digest(part_text(part.keys, moment))
                if not part.moves:
                    self._texts[key] = text
            texts.append(f"{part.kind} {text}")
        return digest(*texts)


def _parts(keys: ShotFile) -> tuple[Part, ...]:
    """The parts of a shot that change pixels, and whether each changes from frame to frame."""
    found: list[Part] = []
    moving = {name for name, material in keys.materials.items() if changes_by_frame(material)}
    for kind in PARTS:
        value = getattr(keys, kind)
        for index, entry in enumerate(value if isinstance(value, list) else [value]):
            names = _substances(entry) if kind == "objects" else ()
            moves = changes_by_frame(entry) or any(name in moving for name in names)
            found.append(Part(kind, index, entry, moves))
    return tuple(found)


def _substances(item: Any) -> tuple[str, ...]:
    vessel = item.shape.vessel if item.shape is not None else None
    return tuple(str(name) for name in (item.material, item.below, vessel.filling if vessel else None) if name)
