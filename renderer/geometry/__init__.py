"""Meshes from files, built-in shapes, what can be measured on both, and the camera: a shot's values to frozen arrays.

`mesh_files` reads, `shapes` builds, `inspection` and `gaps` measure, `camera` projects. Nothing here repairs a mesh in
silence: what is wrong is measured and told, and a mesh that cannot be rendered is an `InputError`.
"""
