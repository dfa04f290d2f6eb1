"""The one decorator for compiled functions. Nothing else in the project calls Numba's own."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from renderer.base import cache

cache.prepare()  # names the cache folder and the processor level, and so must come before numba is imported

import numba  # noqa: E402

prange = numba.prange
# The wrapper for callers in C, which nothing uses, costs a fifth of all compiling.
OPTIONS: dict[str, Any] = {"cache": True, "nogil": True, "error_model": "numpy", "no_cfunc_wrapper": True}


def kernel(function: Callable[..., Any] | None = None, *, parallel: bool = False) -> Any:
    """Compile `function` with the options that every kernel shares.

    Cached on disk; releases the interpreter lock; a division by zero gives an infinity instead of an exception that
    would lose a whole tile; arithmetic is exact IEEE (no reordering, no fusing), because ray search needs shared
    edges to give exact negations. Use ``parallel=True`` only on thin outer loops.
    """

    def compile_later(target: Callable[..., Any]) -> Any:
        return numba.njit(target, parallel=parallel, **OPTIONS)

    return compile_later if function is None else compile_later(function)
