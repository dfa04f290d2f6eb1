"""Scattering by a sphere as a full series: coefficients, and sums over many spheres, angles and cross-sections.

G. Mie, Ann. Phys. 330, 377 (1908), in the form and with the names of C. F. Bohren and D. R. Huffman, *Absorption and
Scattering of Light by Small Particles*, 1983, ch. 4; recurrences after W. J. Wiscombe, Appl. Opt. 19, 1505 (1980). Time
goes as exp(-i w t): an index of positive imaginary part absorbs.
"""

from __future__ import annotations

import math

import numpy as np

from renderer.base.jit import kernel, prange

SHIFT = 6
BLOCK = (
    1 << SHIFT
)  # angles that are summed together: enough for the processor's lanes, few enough for its registers' memory


@kernel
def n_terms(x):
    """How many terms a sphere needs: more than Wiscombe's rule has it, for straight back the last ones count."""
    return np.int64(x + 4.8 * math.pow(x, 1.0 / 3.0) + 8.0)


@kernel
def first_order(x, size):
    """From which order the logarithmic derivative is followed down; `size` is |m| x."""
    top = max(np.float64(n_terms(x)), size)
    return np.int64(top + 16.0 + 8.0 * math.pow(top, 1.0 / 3.0))


@kernel
def coefficients(x, m, d, a, b):
    """Write a_n and b_n of a sphere, n from 1, to a[0], b[0] and on; gives how many. `d` is room."""
    n_last = n_terms(x)
    z = m * x
    order = first_order(x, abs(z))
    down = complex(0.0, 0.0)
    for n in range(order, 0, -1):
        # D of n - 1 from D of n
        r = n / z
        down = r - 1.0 / (down + r)
        if n - 1 <= n_last:
            d[n - 1] = down
    psi_before, psi = math.cos(x), math.sin(x)
    chi_before, chi = -math.sin(x), math.cos(x)
    for n in range(1, n_last + 1):
        factor = (2.0 * n - 1.0) / x
        psi_before, psi = psi, factor * psi - psi_before
        chi_before, chi = chi, factor * chi - chi_before
        xi_before, xi = complex(psi_before, -chi_before), complex(psi, -chi)
        r = n / x
        of_a, of_b = d[n] / m + r, d[n] * m + r
        a[n - 1] = (of_a * psi - psi_before) / (of_a * xi - xi_before)
        b[n - 1] = (of_b * psi - psi_before) / (of_b * xi - xi_before)
    return n_last


@kernel
def sum_block(a, b, n_last, cosines, room):
    """Sums over the orders for a block of angles into rows 2 to 5 of the room: real and imaginary S1 + S2, S1 - S2.

    Rows 0 and 1 hold pi_(n-1) and pi_n.
    """
    for j in range(cosines.shape[0]):
        room[0, j], room[1, j] = 0.0, 1.0
        room[2, j] = room[3, j] = room[4, j] = room[5, j] = 0.0
    for n in range(1, n_last + 1):
        order = np.float64(n)
        weight = (2.0 * order + 1.0) / (order * (order + 1.0))
        plus, minus = weight * (a[n - 1] + b[n - 1]), weight * (a[n - 1] - b[n - 1])
        plus_re, plus_im, minus_re, minus_im = plus.real, plus.imag, minus.real, minus.imag
        up = (order + 1.0) / order
        for j in range(cosines.shape[0]):
            before, now = room[0, j], room[1, j]
            s = cosines[j] * now
            t = s - before
            tau = order * t - before
            room[0, j], room[1, j] = now, s + up * t
            room[2, j] += plus_re * (now + tau)
            room[3, j] += plus_im * (now + tau)
            room[4, j] += minus_re * (now - tau)
            room[5, j] += minus_im * (now - tau)


@kernel
def add_block(room, weight, sums):
    """Add a block's S11, S12, S33, S34, times a weight, to sums (4, angles)."""
    for j in range(sums.shape[1]):
        re1, im1 = 0.5 * (room[2, j] + room[4, j]), 0.5 * (room[3, j] + room[5, j])
        re2, im2 = 0.5 * (room[2, j] - room[4, j]), 0.5 * (room[3, j] - room[5, j])
        one, two = re1 * re1 + im1 * im1, re2 * re2 + im2 * im2
        sums[0, j] += weight * 0.5 * (two + one)
        sums[1, j] += weight * 0.5 * (two - one)
        sums[2, j] += weight * (re2 * re1 + im2 * im1)
        sums[3, j] += weight * (im2 * re1 - re2 * im1)


@kernel(parallel=True)
def add_intensities(size_parameters, weights, index, cosines, sums):
    """Add S11, S12, S33 and S34 of spheres (k,), each times its weight, at cosines (n,) to sums (4, n).

    S11 = (|S1|^2 + |S2|^2) / 2, S12 = (|S2|^2 - |S1|^2) / 2, S33 + i S34 = S2 S1*.
    """
    most = 0
    for k in range(size_parameters.shape[0]):
        most = max(most, n_terms(size_parameters[k]))
    a = np.empty(most + 1, dtype=np.complex128)
    b = np.empty(most + 1, dtype=np.complex128)
    d = np.empty(most + 1, dtype=np.complex128)
    n_blocks = (cosines.shape[0] + BLOCK - 1) >> SHIFT
    room = np.empty((n_blocks, 6, BLOCK))
    for k in range(size_parameters.shape[0]):
        n_last = coefficients(size_parameters[k], index, d, a, b)
        weight = weights[k]
        for block in prange(n_blocks):
            i, j = block * BLOCK, min(block * BLOCK + BLOCK, cosines.shape[0])
            sum_block(a, b, n_last, cosines[i:j], room[block])
            add_block(room[block], weight, sums[:, i:j])


@kernel(parallel=True)
def amplitude_blocks(x, index, cosines, s1, s2):
    """Write the amplitudes S1 and S2 (n,) of one sphere."""
    most = n_terms(x) + 1
    a, b, d = (
        np.empty(most, dtype=np.complex128),
        np.empty(most, dtype=np.complex128),
        np.empty(most, dtype=np.complex128),
    )
    n_last = coefficients(x, index, d, a, b)
    n_blocks = (cosines.shape[0] + BLOCK - 1) >> SHIFT
    room = np.empty((n_blocks, 6, BLOCK))
    for block in prange(n_blocks):
        i, j = block * BLOCK, min(block * BLOCK + BLOCK, cosines.shape[0])
        sum_block(a, b, n_last, cosines[i:j], room[block])
        for k in range(j - i):
            one = complex(room[block, 2, k] + room[block, 4, k], room[block, 3, k] + room[block, 5, k])
            two = complex(room[block, 2, k] - room[block, 4, k], room[block, 3, k] - room[block, 5, k])
            s1[i + k], s2[i + k] = 0.5 * one, 0.5 * two


@kernel
def efficiency_sums(x, a, b, n_last):
    """Efficiencies of extinction, scattering, asymmetry times scattering, and backscatter."""
    extinction, scattering, forward = 0.0, 0.0, 0.0
    back, sign = complex(0.0, 0.0), -1.0
    for k in range(n_last):
        n = k + 1.0
        extinction += (2.0 * n + 1.0) * (a[k].real + b[k].real)
        scattering += (2.0 * n + 1.0) * (abs(a[k]) ** 2 + abs(b[k]) ** 2)
        forward += (2.0 * n + 1.0) / (n * (n + 1.0)) * (a[k] * b[k].conjugate()).real
        if k + 1 < n_last:
            next_to = a[k] * a[k + 1].conjugate() + b[k] * b[k + 1].conjugate()
            forward += n * (n + 2.0) / (n + 1.0) * next_to.real
        back += sign * (2.0 * n + 1.0) * (a[k] - b[k])
        sign = -sign
    two = 2.0 / (x * x)
    return two * extinction, two * scattering, 2.0 * two * forward, abs(back) ** 2 / (x * x)


@kernel(parallel=True)
def all_efficiencies(size_parameters, index, found):
    """Write extinction, scattering, asymmetry times scattering, and backscatter of spheres (k,) to found (k, 4)."""
    for k in prange(size_parameters.shape[0]):
        x = size_parameters[k]
        n = n_terms(x) + 1
        a, b, d = (
            np.empty(n, dtype=np.complex128),
            np.empty(n, dtype=np.complex128),
            np.empty(n, dtype=np.complex128),
        )
        found[k, 0], found[k, 1], found[k, 2], found[k, 3] = efficiency_sums(x, a, b, coefficients(x, index, d, a, b))


def add_cross_sections(size_parameters, weights, index, sums):
    """Add extinction, scattering and asymmetry times scattering, each times x^2 and weight, of spheres to sums (3,)."""
    found = np.empty((len(size_parameters), 4))
    all_efficiencies(size_parameters, index, found)
    for c in range(3):
        sums[c] += float((weights * size_parameters**2 * found[:, c]).sum())
