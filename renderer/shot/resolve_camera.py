"""The camera at a frame."""

from __future__ import annotations

from renderer.shot.keyed import values_at
from renderer.shot.model import Axes, Camera, Vector
from renderer.shot.moment import Moment, stack
from renderer.shot.schema import camera as schema
from renderer.shot.schema.flaws import Flaw
from renderer.shot.transforms import IDENTITY, Matrix, combine, cross, dot, joined, matrix_at, rotation, unit

LEVEL = 1e-12  # squared sine under which a line of sight counts as straight up or down


def resolve_camera(moment: Moment, axes: Axes) -> Camera:
    """The camera at a frame; what is wrong is noted in the moment."""
    keys = moment.shot.camera
    focal, base = _lens_and_base(moment)
    matrices = [_matrix(moment, axes, base, time) for time in moment.times]
    exposure = keys.exposure
    sensor = (keys.sensor[0], keys.sensor[1] if len(keys.sensor) == 2 else keys.fitting_height())
    return Camera(
        matrices=stack(matrices),
        focal_length_mm=focal,
        sensor_mm=sensor,
        pixels=(keys.pixels[0], keys.pixels[1]),
        pixel_aspect=keys.pixel_aspect,
        window=window(keys),
        distortion=_distortion(moment),
        f_number=moment.number(keys.f_number),
        focus_distance_m=_focus(moment, matrices),
        shutter_deg=moment.number(keys.shutter),
        polariser_deg=moment.maybe(keys.polariser),
        exposure_stops=moment.maybe(exposure.stops),
        iso=moment.maybe(exposure.iso),
        exposure_auto=exposure.auto is not None,
        white_balance_k=moment.number(keys.white_balance),
    )


def window(keys: schema.Camera) -> tuple[int, int, int, int]:
    """What of the full frame is rendered: first column, first row, columns, rows."""
    columns, rows = keys.pixels
    if keys.crop is not None:
        return keys.crop[0], keys.crop[1], keys.crop[2], keys.crop[3]
    left, top, right, bottom = keys.overscan or (0, 0, 0, 0)
    return -left, -top, columns + left + right, rows + top + bottom


def _lens_and_base(moment: Moment) -> tuple[float, Matrix]:
    """Focal length [mm], and the matrix of an imported camera."""
    keys = moment.shot.camera
    stated = moment.maybe(keys.focal_length)
    if keys.import_ is None:
        return stated or 1.0, IDENTITY
    from renderer.shot.camera_import import read_camera, split_node

    name, node = split_node(keys.import_)
    path = moment.path(name, ("camera", "import"))
    if moment.flaws and moment.flaws[-1].at == ("camera", "import"):
        return stated or 1.0, IDENTITY
    found = read_camera(path, node)
    if isinstance(found, Flaw):
        moment.flaws.append(Flaw(("camera", "import"), found.what, found.expected, found.nearest))
        return stated or 1.0, IDENTITY
    return stated or found.focal_length_mm(keys.fitting_height()), found.matrix


def _matrix(moment: Moment, axes: Axes, base: Matrix, time: float) -> Matrix:
    """Camera to world at a time of the shutter."""
    keys = moment.shot.camera
    if keys.position is not None and keys.target is not None:
        placed = _looking(moment, axes, time)
    elif keys.matrix is not None:
        placed = without_scale(matrix_at(keys.matrix, time, moment.metres))
    else:
        placed = base
    roll = values_at(keys.roll, time)[0] if not isinstance(keys.roll, float) else keys.roll
    if roll == 0.0:
        return placed
    return combine(placed, joined(rotation((0.0, 0.0, -roll)), (0.0, 0.0, 0.0)))


def _looking(moment: Moment, axes: Axes, time: float) -> Matrix:
    """From a position towards a target, up as far up as it goes; north is up where it looks straight up or down."""
    keys = moment.shot.camera
    assert keys.position is not None
    assert keys.target is not None
    eye = tuple(value * moment.metres for value in values_at(keys.position, time))
    target = tuple(value * moment.metres for value in values_at(keys.target, time))
    away = tuple(a - b for a, b in zip(eye, target, strict=True))
    if not any(away):
        if not any(flaw.at == ("camera", "target") for flaw in moment.flaws):
            what = f"`camera.target` is where the camera stands in frame {moment.frame}"
            moment.flaws.append(Flaw(("camera", "target"), what, "a target away from `position`"))
        return IDENTITY
    back = unit(away)
    side = cross(axes.up, back)
    if dot(side, side) < LEVEL:
        upward = dot(axes.up, back)  # looking down: north is the top of the picture; looking up: south
        north = axes.north if upward > 0.0 else _opposite(axes.north)
        side = cross(north, back)
    right = unit(side)
    over = cross(back, right)
    return joined((right[0], over[0], back[0], right[1], over[1], back[1], right[2], over[2], back[2]), eye)


def _opposite(v: Vector) -> Vector:
    return -v[0], -v[1], -v[2]


def without_scale(m: Matrix) -> Matrix:
    """The same place and turn, with axes of length 1, square to each other to the last bit."""
    back = unit((m[2], m[6], m[10]))
    right = unit(cross(unit((m[1], m[5], m[9])), back))
    over = cross(back, right)
    return joined(
        (right[0], over[0], back[0], right[1], over[1], back[1], right[2], over[2], back[2]), (m[3], m[7], m[11])
    )


def _distortion(moment: Moment) -> tuple[float, float, float, float, float]:
    lens = moment.shot.camera.distortion
    k1, k2, k3, p1, p2 = (moment.number(value) for value in (lens.k1, lens.k2, lens.k3, lens.p1, lens.p2))
    return k1, k2, k3, p1, p2


def _focus(moment: Moment, matrices: list[Matrix]) -> float:
    """Distance in focus [m]: as stated, else to the target, else a metre, which a pinhole does not mind."""
    keys = moment.shot.camera
    if keys.focus_distance is not None:
        return moment.length(keys.focus_distance)
    if keys.position is None or keys.target is None:
        return 1.0
    pairs = zip(moment.values(keys.position), moment.values(keys.target), strict=True)
    square = sum((a - b) ** 2 for a, b in pairs)
    return float(square**0.5) * moment.metres or 1.0
