"""A small stack of whole numbers on the machine's own stack: a search must not allocate."""

# ruff: noqa: I001
from __future__ import annotations

from typing import Any

from renderer.base.jit import kernel  # noqa: F401  (settles cache folder and processor level before numba is imported)
from llvmlite import ir
from numba import types
from numba.core import cgutils
from numba.extending import intrinsic

SIZE = 128
SLOTS = types.CPointer(types.int64)


@intrinsic
def new_stack(typing_context: Any) -> Any:
    """Room for SIZE whole numbers, as long as the calling kernel runs."""

    def generate(context: Any, builder: Any, signature: Any, arguments: Any) -> Any:
        room = cgutils.alloca_once(builder, ir.ArrayType(ir.IntType(64), SIZE))
        return builder.bitcast(room, ir.IntType(64).as_pointer())

    return SLOTS(), generate


@intrinsic
def put(typing_context: Any, stack: Any, at: Any, value: Any) -> Any:
    """Store an int64 in slot `at`."""

    def generate(context: Any, builder: Any, signature: Any, arguments: Any) -> Any:
        builder.store(arguments[2], builder.gep(arguments[0], [arguments[1]]))
        return context.get_dummy_value()

    return types.void(SLOTS, types.int64, types.int64), generate


@intrinsic
def get(typing_context: Any, stack: Any, at: Any) -> Any:
    """The int64 in slot `at`."""

    def generate(context: Any, builder: Any, signature: Any, arguments: Any) -> Any:
        return builder.load(builder.gep(arguments[0], [arguments[1]]))

    return types.int64(SLOTS, types.int64), generate
