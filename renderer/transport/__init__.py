"""Kernels that follow light from the camera through a scene. Knows arrays; knows no files, no shots and no pictures."""
