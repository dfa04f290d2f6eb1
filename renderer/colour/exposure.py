"""How bright a picture is made: by stops, by a camera's settings (ISO 12232), or by itself.

An exposure is one factor from luminance [cd/m2] to linear picture values, where 0.18 is mid grey and 1 is white.

ISO 12232 rates a camera by its standard output sensitivity, S = 10 / H, where H [lx s] is the exposure of the sensor
that comes out as 461 thousandths of full scale in sRGB, which is a linear value of 0.18. A lens gives its sensor
H = q L t / N^2, with q = 0.65, from luminance L, time t and f-number N. So

    value = 0.18 H S / 10 = 0.0117 L t S / N^2.

Sources: ISO 12232:2006, sections 6.2 and 7 (q = pi/4 times 0.9 of lens transmittance, 0.98 without vignetting and
cos^4 of 10 degrees = 0.65), from memory.
"""

from __future__ import annotations

import math

import numpy as np

from renderer.base.errors import Fault, InputError
from renderer.base.exact_functions import LN2, exponential, logarithm
from renderer.colour.tables import Floats

MID_GREY = 0.18
LENS_FACTOR = 0.65  # q of ISO 12232
SENSITIVITY_EXPOSURE_LX_S = 10.0  # H S of a standard output sensitivity

# 0 stops is a sunny day: exposure value 15 at ISO 100 (f/16 at 1/128 s), the common "sunny 16" rule. Full sun on a
# white wall, 32,000 cd/m2, comes out as 1.14.
ZERO_STOPS_F_NUMBER = 16.0
ZERO_STOPS_TIME_S = 1.0 / 128.0
ZERO_STOPS_ISO = 100.0

DARKEST_COUNTED = 1e-6  # of the brightest: what is darker does not sway the automatic exposure


def exposure_by_iso(iso: float, shutter_s: float, f_number: float) -> float:
    """Factor from cd/m2 to picture values of a camera at an ISO speed, exposure time [s] and f-number.

    InputError for a pinhole (f-number 0) or a time or speed that is not above 0.
    """
    if not f_number > 0.0:
        raise InputError(
            Fault("exposure by ISO needs a lens", expected="camera.f_number above 0, or exposure = { stops = 0.0 }")
        )
    if not (iso > 0.0 and shutter_s > 0.0):
        raise InputError(Fault("exposure by ISO needs light", expected="an ISO speed and a shutter above 0"))
    return MID_GREY * LENS_FACTOR * shutter_s * iso / (SENSITIVITY_EXPOSURE_LX_S * f_number**2)


def exposure_by_stops(stops: float) -> float:
    """Factor from cd/m2 to picture values, so many stops brighter than a sunny day's exposure."""
    return exposure_by_iso(ZERO_STOPS_ISO, ZERO_STOPS_TIME_S, ZERO_STOPS_F_NUMBER) * doublings(stops)


def doublings(stops: float) -> float:
    """2^stops, the same on every machine, and exact for whole stops."""
    whole = math.floor(stops)
    return math.ldexp(float(exponential((stops - whole) * LN2)), whole)


def exposure_auto(luminance: Floats) -> float:
    """Factor that brings a picture's geometric mean luminance to mid grey, in steps of a hundredth of a stop.

    E. Reinhard, M. Stark, P. Shirley, J. Ferwerda, "Photographic Tone Reproduction for Digital Images", Proc. SIGGRAPH
    2002, equations 1 and 2 with a key of 0.18, over what is brighter than a millionth of the brightest.
    A black picture gets the exposure of 0 stops.
    """
    values = np.asarray(luminance, dtype=np.float64).ravel()
    values = values[np.isfinite(values)]
    counted = values[values > DARKEST_COUNTED * values.max(initial=0.0)]
    if counted.size == 0:
        return exposure_by_stops(0.0)
    wanted = float(logarithm(MID_GREY / exposure_by_stops(0.0)) - logarithm(counted).mean()) / LN2
    return exposure_by_stops(round(wanted * 100.0) / 100.0)


def exposure_factor(
    *, stops: float | None = None, iso: float | None = None, shutter_s: float = 0.0, f_number: float = 0.0
) -> float:
    """The factor of a shot that states stops or an ISO speed; an automatic one needs the picture: `exposure_auto`."""
    if iso is not None:
        return exposure_by_iso(iso, shutter_s, f_number)
    return exposure_by_stops(0.0 if stops is None else stops)
