"""The wavelengths of a path: a hero and three rotations.

A. Wilkie et al., "Hero Wavelength Spectral Sampling", Computer Graphics Forum 33(4), 2014. Each round has eight hero
sets, 32 wavelengths stratified over the range and over rounds; a pixel draws set and hero by its own sample point.
"""

from __future__ import annotations

from renderer.base.constants import LUMINOUS_EFFICACY, WAVELENGTH_LOW_NM
from renderer.base.jit import kernel
from renderer.transport.layout import LANE_BIN, LANE_BIN_WEIGHT, LANE_LINE, LANE_NM, LANE_X


@kernel
def table_at(table, row, wavelength_nm):
    """Entry of a (n, 401) table of spectra, linear between its nanometres."""
    x = wavelength_nm - WAVELENGTH_LOW_NM
    i = min(max(int(x), 0), 399)
    f = x - i
    return table[row, i] * (1.0 - f) + table[row, i + 1] * f


@kernel
def spectrum_at(table, wavelength_nm):
    """Entry of a (401,) spectrum, linear between its nanometres."""
    x = wavelength_nm - WAVELENGTH_LOW_NM
    i = min(max(int(x), 0), 399)
    f = x - i
    return table[i] * (1.0 - f) + table[i + 1] * f


@kernel
def segment_of(u_low, u):
    """The segment that holds u, by bisection."""
    low, high = 0, u_low.shape[0] - 1
    while high - low > 1:
        middle = (low + high) >> 1
        if u_low[middle] <= u:
            low = middle
        else:
            high = middle
    return low


@kernel
def draw_lanes(spectrum, u_pixel, u_round, lanes):
    """Fill `lanes`: the hero in row 0 and its rotations after it.

    `u_pixel` picks one of 8 sets and one of its 4 wavelengths as hero; `u_round` moves all 32 within their strata.
    """
    choice = min(int(u_pixel * 32.0), 31)
    start = (float(choice & 7) + u_round) / 32.0 + 0.25 * float(choice >> 3)
    for lane in range(4):
        u = start + 0.25 * lane
        if u >= 1.0:
            u -= 1.0
        k = segment_of(spectrum.u_low, u)
        width = spectrum.u_low[k + 1] - spectrum.u_low[k]
        f = (u - spectrum.u_low[k]) / width
        nm = spectrum.low_nm[k] + f * (spectrum.high_nm[k] - spectrum.low_nm[k])
        nm = min(max(nm, 380.0), 780.0)
        lanes[lane, LANE_NM] = nm
        weight = spectrum.weight[k]
        for c in range(3):
            lanes[lane, LANE_X + c] = LUMINOUS_EFFICACY * weight * table_column(spectrum.observer, c, nm)
        lanes[lane, LANE_LINE] = spectrum.line[k]
        lanes[lane, LANE_BIN] = spectrum.bin_of[k]
        lanes[lane, LANE_BIN_WEIGHT] = 1.0 / width


@kernel
def table_column(table, column, wavelength_nm):
    """Entry of a (401, n) table, linear between its nanometres."""
    x = wavelength_nm - WAVELENGTH_LOW_NM
    i = min(max(int(x), 0), 399)
    f = x - i
    return table[i, column] * (1.0 - f) + table[i + 1, column] * f
