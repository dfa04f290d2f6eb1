"""Pure physics, numbers and arrays in and out: refraction, materials, wet surfaces, sun, sky and the geometry of bows.

Kernels sit in files that end in ``_kernels``; the file of the same name without that ending is the Python door.
"""
