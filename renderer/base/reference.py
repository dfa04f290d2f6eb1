"""A named tuple of arrays passed by its address.

A frame has some sixty arrays. Passed by value, each call carries hundreds of numbers, and the compiler spends most of
its time on them; by address, a call carries one, and `frame.objects.kind` reads the same. References live inside
kernels only: `refer` puts the tuple on the caller's stack, and whoever called the kernel keeps its arrays alive.
"""

from __future__ import annotations

from typing import Any

from llvmlite import ir

from renderer.base.jit import kernel  # noqa: F401 - prepares Numba before it is imported here

from numba import types  # isort: skip
from numba.core import cgutils  # isort: skip
from numba.core.typing.templates import AttributeTemplate  # isort: skip
from numba.extending import (  # isort: skip
    infer_getattr,
    intrinsic,
    lower_getattr_generic,
    models,
    register_model,
)
from numba.np.arrayobj import make_array  # isort: skip

BYTE_POINTER = ir.IntType(8).as_pointer()
ZERO = ir.Constant(ir.IntType(32), 0)


class Reference(types.Type):
    """Numba's type of a reference to a tuple of type `target`."""

    def __init__(self, target: Any) -> None:
        self.target = target
        super().__init__(name=f"Reference({target})")


register_model(Reference)(models.OpaqueModel)


@infer_getattr
class ReferenceAttribute(AttributeTemplate):
    """The type of a field: a reference where the field is itself a named tuple."""

    key = Reference

    def generic_resolve(self, reference: Any, name: str) -> Any:  # type: ignore[override]
        """Type of the field `name`, None where there is none."""
        if name not in reference.target.fields:
            return None
        return field_type(reference.target.types[reference.target.fields.index(name)])


def field_type(kind: Any) -> Any:
    """What reading a field gives."""
    return Reference(kind) if isinstance(kind, types.BaseNamedTuple) else kind


@lower_getattr_generic(Reference)
def read_field(context: Any, builder: Any, reference: Any, value: Any, name: str) -> Any:
    """The address of a nested tuple, or the value of an array or number."""
    index = reference.target.fields.index(name)
    whole = builder.bitcast(value, context.get_value_type(reference.target).as_pointer())
    place = builder.gep(whole, [ZERO, ir.Constant(ir.IntType(32), index)], inbounds=True)
    if isinstance(reference.target.types[index], types.BaseNamedTuple):
        return builder.bitcast(place, BYTE_POINTER)
    return builder.load(place)


def unowned(context: Any, builder: Any, kind: Any, value: Any) -> Any:
    """The value with every array's owner forgotten, so that no reader counts references (which threads would share)."""
    if isinstance(kind, types.Array):
        array = make_array(kind)(context, builder, value=value)
        array.meminfo = cgutils.get_null_value(array.meminfo.type)
        return array._getvalue()
    if hasattr(kind, "fields"):
        for i, part in enumerate(kind.types):
            own = builder.extract_value(value, i)
            value = builder.insert_value(value, unowned(context, builder, part, own), i)
    return value


@intrinsic
def refer(typing_context: Any, value: Any) -> Any:
    """A reference to a named tuple (of arrays, numbers and such tuples), valid until the calling kernel returns.

    A reference is passed on as it is.
    """
    if isinstance(value, Reference):
        return value(value), lambda context, builder, signature, arguments: arguments[0]

    def build(context: Any, builder: Any, signature: Any, arguments: Any) -> Any:
        slot = cgutils.alloca_once_value(builder, unowned(context, builder, value, arguments[0]))
        return builder.bitcast(slot, BYTE_POINTER)

    return Reference(value)(value), build
