"""Numbers that nature, or a standard, has fixed. Each has its source beside it."""

from __future__ import annotations

PI = 3.141592653589793

WAVELENGTH_LOW_NM = 380.0  # the range that this project renders, inside CIE 018:2019's 360-830 nm
WAVELENGTH_HIGH_NM = 780.0
N_WAVELENGTHS = 401  # tables of spectra: one entry a nanometre, 380 to 780 nm, both ends in

LUMINOUS_EFFICACY = 683.002  # lm/W, K_m for photopic vision, CIE 018:2019 (683 lm/W at 540 THz, times V there)

FRAUNHOFER_F_NM = 486.1327  # hydrogen F; ISO 7944:1998 lists the d, e, F, C, F', C' reference lines
FRAUNHOFER_D_NM = 587.5618  # helium d, ISO 7944:1998
FRAUNHOFER_C_NM = 656.2725  # hydrogen C, ISO 7944:1998
SODIUM_D_NM = 589.3  # mean of the sodium doublet, common practice

N_HERO_SETS = 8  # hero sets a round; each has four wavelengths
N_LANES = 4  # wavelengths that a path carries
N_REPLICATES = 8  # independent scrambles; the standard error is that of their means
