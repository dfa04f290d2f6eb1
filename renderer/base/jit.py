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

    Only parallel kernels may make arrays. The others count no references to those they are given: for a named tuple of
    many arrays that cost several times what the work itself did, in locked instructions that threads also wait for.
    """

    def compile_later(target: Callable[..., Any]) -> Any:
        return once_a_type(numba.njit(target, **{**OPTIONS, "parallel": parallel, "_nrt": parallel}))

    return compile_later if function is None else compile_later(function)


def once_a_type(compiled: Any) -> Any:
    """Keep a kernel from being compiled again for every constant that a caller passes.

    Numba types a constant (a whole number or a truth value) as a type of its own, and compiles a callee anew for each.
    """
    choose = compiled.get_call_template
    plain: Any = numba.types.unliteral

    def choose_plainly(args: Any, kws: Any) -> Any:
        return choose(tuple(plain(kind) for kind in args), {name: plain(kind) for name, kind in dict(kws).items()})

    compiled.get_call_template = choose_plainly
    return compiled
