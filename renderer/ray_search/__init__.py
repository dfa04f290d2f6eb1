"""Search trees over triangles and spheres: building them, the closest hit, any hit, and which objects hold a point.

Everything is float64 and conservative: a ray that meets a closed mesh is never lost between two of its triangles.
"""
