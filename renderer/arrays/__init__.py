"""The contract between Python and kernels: named tuples of arrays of fixed types, and `pack`, which makes them."""

from renderer.arrays.packing import pack

__all__ = ["pack"]
