"""Spectra and what the eye and the screen make of them: observer, illuminants, RGB spaces, RGB to spectrum, exposure.

Spectra are tables of 401 entries, 380 to 780 nm, one a nanometre, linear between; every integral here is that of the
linear pieces, so that it equals what kernels estimate. Whatever enters a picture is made of additions,
multiplications, divisions and square roots in a fixed order, which every processor rounds alike.
"""
