"""Eight numbers at once: the few machine instructions by which a search tests eight boxes or triangles together.

A compiler does not find these in plain loops. They are written for LLVM's vectors, which it lowers for any processor;
arithmetic is exact IEEE, never reordered or fused, so that edges shared by triangles give exact negations.
"""

# ruff: noqa: I001
from __future__ import annotations

from collections.abc import Iterable
from typing import Any

from renderer.base.jit import kernel  # noqa: F401  (settles cache folder and processor level before numba is imported)
from llvmlite import ir
from numba import types
from numba.core import cgutils
from numba.extending import intrinsic

N = 8
I1, I8, I32, I64 = ir.IntType(1), ir.IntType(8), ir.IntType(32), ir.IntType(64)
F32, F64 = ir.FloatType(), ir.DoubleType()
STACK_SIZE = 512
WHOLE = types.CPointer(types.int64)  # a stack
REAL = types.CPointer(types.float64)  # room for results
NODES = types.CPointer(types.float32)
PACKS = types.CPointer(types.float64)
WORDS = types.CPointer(types.int32)
TREES = types.Tuple((NODES, PACKS, PACKS, WORDS, WORDS, PACKS, WORDS, PACKS))
NODE_WIDTH, PACK_WIDTH, BALL_WIDTH = 64, 80, 40  # numbers in a row of World.nodes, packs and balls
THREE_WHOLE = types.UniTuple(types.int64, 3)
THREE_REAL = types.UniTuple(types.float64, 3)
OUTWARD = 2.4e-7  # relative: more than four times what rounding to float32 loses
LATER = 1.0 + 4.0 * 2.0**-23  # more than the roundings to float32 lose on both sides of a box
RAY_D, RAY_O, RAY_INVERSE, RAY_SINGLES = 0, 8, 16, 24  # where in its room a ray's numbers begin


class Lanes:
    """Eight numbers in the making: Python's operators write the instructions."""

    def __init__(self, builder: Any, value: Any) -> None:
        self.builder, self.value = builder, value

    def __add__(self, other: Lanes) -> Lanes:
        return Lanes(self.builder, self.builder.fadd(self.value, other.value))

    def __sub__(self, other: Lanes) -> Lanes:
        return Lanes(self.builder, self.builder.fsub(self.value, other.value))

    def __mul__(self, other: Lanes) -> Lanes:
        return Lanes(self.builder, self.builder.fmul(self.value, other.value))

    def __truediv__(self, other: Lanes) -> Lanes:
        return Lanes(self.builder, self.builder.fdiv(self.value, other.value))

    def __and__(self, other: Lanes) -> Lanes:
        return Lanes(self.builder, self.builder.and_(self.value, other.value))

    def __or__(self, other: Lanes) -> Lanes:
        return Lanes(self.builder, self.builder.or_(self.value, other.value))

    def is_(self, how: str, other: Lanes) -> Lanes:
        """Comparison, false where either is not a number."""
        return Lanes(self.builder, self.builder.fcmp_ordered(how, self.value, other.value))

    def where(self, yes: Lanes, no: Lanes) -> Lanes:
        """`yes` where this comparison holds, else `no`."""
        return Lanes(self.builder, self.builder.select(self.value, yes.value, no.value))

    def least(self, other: Lanes) -> Lanes:
        """The smaller of both."""
        return self.is_("<", other).where(self, other)

    def most(self, other: Lanes) -> Lanes:
        """The larger of both."""
        return self.is_(">", other).where(self, other)

    def times_plus(self, factor: Lanes, summand: Lanes) -> Lanes:
        """This times a factor plus a summand, of float32, fused where the machine can: rounding may differ."""
        kind = ir.FunctionType(self.value.type, [self.value.type] * 3)
        function = cgutils.get_or_insert_function(self.builder.module, kind, "llvm.fmuladd.v8f32")
        return Lanes(self.builder, self.builder.call(function, [self.value, factor.value, summand.value]))

    def root(self) -> Lanes:
        """Square root, of float64."""
        kind = ir.FunctionType(self.value.type, [self.value.type])
        function = cgutils.get_or_insert_function(self.builder.module, kind, "llvm.sqrt.v8f64")
        return Lanes(self.builder, self.builder.call(function, [self.value]))

    def size(self) -> Lanes:
        """Without sign, of four float64."""
        kind = ir.FunctionType(self.value.type, [self.value.type])
        function = cgutils.get_or_insert_function(self.builder.module, kind, "llvm.fabs.v4f64")
        return Lanes(self.builder, self.builder.call(function, [self.value]))

    def bits(self) -> Any:
        """A comparison as a whole number, one bit a lane."""
        return self.builder.zext(self.builder.bitcast(self.value, I8), I64)

    def store(self, pointer: Any, row: int = 0) -> None:
        """Write to memory, `row` eights behind the pointer."""
        self.builder.store(self.value, eight(self.builder, pointer, row * N, self.value.type), align=4)


def splat(builder: Any, value: Any) -> Lanes:
    """One number in all lanes."""
    one = builder.insert_element(ir.Constant(ir.VectorType(value.type, N), ir.Undefined), value, I32(0))
    return Lanes(builder, builder.shuffle_vector(one, one, ir.Constant(ir.VectorType(I32, N), [0] * N)))


def constant(builder: Any, kind: Any, value: float) -> Lanes:
    """One known number in all lanes."""
    return Lanes(builder, ir.Constant(ir.VectorType(kind, N), [value] * N))


def eight(builder: Any, pointer: Any, at: Any, vector: Any) -> Any:
    """Pointer to the vector that begins `at` elements behind a pointer."""
    at = I64(at) if isinstance(at, int) else at
    return builder.bitcast(builder.gep(pointer, [at]), vector.as_pointer())


def loaded(builder: Any, pointer: Any, at: Any, kind: Any) -> Lanes:
    """Eight numbers from memory, `at` elements behind a pointer."""
    vector = ir.VectorType(kind, N)
    return Lanes(builder, builder.load(eight(builder, pointer, at, vector), align=4))


def written(builder: Any, pointer: Any) -> None:
    """Let the compiler believe that anything behind a pointer may have changed, so that it reads it from memory."""
    kind = ir.FunctionType(ir.VoidType(), [pointer.type])
    builder.call(ir.InlineAsm(kind, "", "r,~{memory}", side_effect=True), [pointer])


def ask_for(builder: Any, pointer: Any, lines: Iterable[int]) -> None:
    """Ask for lines of 64 bytes behind a pointer before they are needed."""
    byte = I8.as_pointer()
    kind = ir.FunctionType(ir.VoidType(), [byte, I32, I32, I32])
    function = cgutils.get_or_insert_function(builder.module, kind, "llvm.prefetch.p0")
    place = builder.bitcast(pointer, byte)
    for line in lines:
        builder.call(function, [builder.gep(place, [I64(64 * line)]), I32(0), I32(3), I32(1)])


def row_behind(builder: Any, data: Any, row: Any, width: int) -> Any:
    """Pointer to a row behind a pointer, where rows are `width` long."""
    return builder.gep(data, [builder.mul(row, I64(width))])


def row_pointer(context: Any, builder: Any, array_type: Any, array: Any, row: Any, width: int) -> Any:
    """Pointer to a row of a C-ordered array whose rows are `width` long."""
    return row_behind(builder, context.make_array(array_type)(context, builder, array).data, row, width)


# The stack of a search, and room for what eight tests give.


def alloca(builder: Any, kind: Any, n: int) -> Any:
    """Pointer to n numbers that live as long as the calling kernel runs."""
    with builder.goto_entry_block():  # by hand, for Numba's own helper would fill it with zeros at every call
        room = builder.alloca(ir.ArrayType(kind, n))
        room.align = 64
    return builder.bitcast(room, kind.as_pointer())


@intrinsic
def new_stack(typing_context: Any) -> Any:
    """A stack of STACK_SIZE whole numbers."""
    return WHOLE(), lambda context, builder, signature, args: alloca(builder, I64, STACK_SIZE)


@intrinsic
def new_room(typing_context: Any) -> Any:
    """Room for four eights of float64."""
    return REAL(), lambda context, builder, signature, args: alloca(builder, F64, 4 * N)


@intrinsic
def pointers(
    typing_context: Any,
    nodes: Any,
    packs: Any,
    balls: Any,
    placed: Any,
    instances: Any,
    matrices: Any,
    roots: Any,
    touch_m: Any,
) -> Any:
    """Pointers to arrays of a world: far less to hand from kernel to kernel than the arrays."""

    def generate(context: Any, builder: Any, signature: Any, args: Any) -> Any:
        arrays = zip(signature.args, args, strict=True)
        return context.make_tuple(builder, TREES, [context.make_array(t)(context, builder, a).data for t, a in arrays])

    return TREES(nodes, packs, balls, placed, instances, matrices, roots, touch_m), generate


@intrinsic
def real_at(typing_context: Any, reals: Any, at: Any) -> Any:
    """A float64 `at` elements behind a pointer."""

    def generate(context: Any, builder: Any, signature: Any, args: Any) -> Any:
        return builder.load(builder.gep(args[0], [args[1]]))

    return types.float64(PACKS, types.int64), generate


@intrinsic
def word_at(typing_context: Any, words: Any, at: Any) -> Any:
    """An int32 `at` elements behind a pointer, as int64."""

    def generate(context: Any, builder: Any, signature: Any, args: Any) -> Any:
        return builder.sext(builder.load(builder.gep(args[0], [args[1]])), I64)

    return types.int64(WORDS, types.int64), generate


@intrinsic
def number(typing_context: Any, packs: Any, at: Any, k: Any) -> Any:
    """The k-th of the sixteen whole numbers that begin `at` elements behind a pointer."""

    def generate(context: Any, builder: Any, signature: Any, args: Any) -> Any:
        numbers = builder.bitcast(builder.gep(args[0], [args[1]]), I32.as_pointer())
        return builder.sext(builder.load(builder.gep(numbers, [args[2]])), I64)

    return types.int64(PACKS, types.int64, types.int64), generate


@intrinsic
def put(typing_context: Any, stack: Any, at: Any, value: Any) -> Any:
    """Write a whole number to slot `at` of a stack."""

    def generate(context: Any, builder: Any, signature: Any, args: Any) -> Any:
        builder.store(args[2], builder.gep(args[0], [args[1]]))
        return context.get_dummy_value()

    return types.void(WHOLE, types.int64, types.int64), generate


@intrinsic
def get(typing_context: Any, stack: Any, at: Any) -> Any:
    """The whole number in slot `at` of a stack."""

    def generate(context: Any, builder: Any, signature: Any, args: Any) -> Any:
        return builder.load(builder.gep(args[0], [args[1]]))

    return types.int64(WHOLE, types.int64), generate


@intrinsic
def lane(typing_context: Any, room: Any, at: Any) -> Any:
    """Number `at` of what a test has left in the room."""

    def generate(context: Any, builder: Any, signature: Any, args: Any) -> Any:
        return builder.load(builder.gep(args[0], [args[1]]))

    return types.float64(REAL, types.int64), generate


@intrinsic
def set_lane(typing_context: Any, room: Any, at: Any, value: Any) -> Any:
    """Write number `at` of a room."""

    def generate(context: Any, builder: Any, signature: Any, args: Any) -> Any:
        builder.store(args[2], builder.gep(args[0], [args[1]]))
        return context.get_dummy_value()

    return types.void(REAL, types.int64, types.float64), generate


@intrinsic
def wholes(typing_context: Any, room: Any) -> Any:
    """A room read as whole numbers."""

    def generate(context: Any, builder: Any, signature: Any, args: Any) -> Any:
        return builder.bitcast(args[0], I64.as_pointer())

    return WHOLE(REAL), generate


@intrinsic
def first_bit(typing_context: Any, mask: Any) -> Any:
    """Place of the lowest bit that is set."""

    def generate(context: Any, builder: Any, signature: Any, args: Any) -> Any:
        return builder.cttz(args[0], I1(0))

    return types.int64(types.int64), generate


# Tests.


@intrinsic
def prepare(typing_context: Any, origin: Any, direction: Any, room: Any) -> Any:
    """Put a ray's numbers into its room: direction, origin and one over the direction as x, y, z, x, y; and, for the
    test of boxes, four times x, y, z as float32: minus the origin over the direction for the near and for the far
    planes, and one over the direction for both. A bit is set for each axis along which the direction is negative.

    Boxes only grow by rounding: near planes are met from an origin moved up the ray, far ones from one moved down,
    and a little later. One over zero is a large number, so that a ray in a box's plane makes no not-a-number.
    """

    def generate(context: Any, builder: Any, signature: Any, args: Any) -> Any:
        def four(values: Any) -> Any:
            vector = ir.Constant(ir.VectorType(F64, 4), [0.0] * 4)
            for k, value in enumerate([*values, values[0]]):
                vector = builder.insert_element(vector, value, I32(k))
            return Lanes(builder, vector)

        def same(value: float) -> Lanes:
            return Lanes(builder, ir.Constant(ir.VectorType(F64, 4), [value] * 4))

        def single(value: Lanes) -> Any:
            return builder.fptrunc(value.value, ir.VectorType(F32, 4))

        def write(value: Any, at: int) -> None:
            place = builder.bitcast(builder.gep(args[2], [I64(at)]), value.type.as_pointer())
            builder.store(value, place, align=4)

        o, d = (cgutils.unpack_tuple(builder, arg, 3) for arg in args[:2])
        origin, direction = four(o), four(d)
        negative = direction.is_("<", same(0.0))
        tiny = (direction * direction).is_("<", same(1e-56))
        inverse = tiny.where(negative.where(same(-1e28), same(1e28)), same(1.0) / direction)
        for values, more, at in ((direction, d[1], RAY_D), (origin, o[1], RAY_O)):
            write(values.value, at)
            write(more, at + 4)
        write(inverse.value, RAY_INVERSE)
        write(builder.extract_element(inverse.value, I32(1)), RAY_INVERSE + 4)
        a = origin * inverse
        size = a.size()
        near, far = size * same(-OUTWARD) - a, size * same(OUTWARD * LATER) - a * same(LATER)
        for k, numbers in enumerate((near, far, inverse, inverse * same(LATER))):
            write(single(numbers), RAY_SINGLES + 2 * k)
        written(builder, args[2])
        return builder.zext(builder.bitcast(negative.value, ir.IntType(4)), I64)

    return types.int64(THREE_REAL, THREE_REAL, REAL), generate


@intrinsic
def children_hit(typing_context: Any, nodes: Any, node: Any, near: Any, ray: Any, reach: Any, room: Any) -> Any:
    """Which of a node's eight boxes a ray meets up to `reach`, a bit each; where it enters them is left in the room.

    `near`: where in a node the planes begin that the ray meets first, an axis each. `ray`: the ray's room.
    """

    def generate(context: Any, builder: Any, signature: Any, args: Any) -> Any:
        planes = row_behind(builder, args[0], args[1], NODE_WIDTH)
        offsets = cgutils.unpack_tuple(builder, args[2], 3)
        singles = builder.bitcast(builder.gep(args[3], [I64(RAY_SINGLES)]), F32.as_pointer())
        numbers = [
            [splat(builder, builder.load(builder.gep(singles, [I64(4 * k + axis)]))) for axis in range(3)]
            for k in range(4)
        ]
        first, last = [], []
        for axis in range(3):
            at = offsets[axis]
            first.append(loaded(builder, planes, at, F32).times_plus(numbers[2][axis], numbers[0][axis]))
            far = loaded(builder, planes, builder.xor(at, I64(8)), F32)
            last.append(far.times_plus(numbers[3][axis], numbers[1][axis]))
        enter = first[0].most(first[1]).most(first[2].most(constant(builder, F32, 0.0)))
        leave = last[0].least(last[1]).least(last[2].least(splat(builder, args[4])))
        enter.store(builder.bitcast(args[5], F32.as_pointer()))
        # Fetched early, for the next step waits for one of them.
        loaded(builder, planes, 48, F32).store(builder.bitcast(args[5], F32.as_pointer()), 1)
        return enter.is_("<=", leave).bits()

    return types.int64(NODES, types.int64, THREE_WHOLE, REAL, types.float32, REAL), generate


@intrinsic
def entry(typing_context: Any, room: Any, at: Any) -> Any:
    """A stack's entry for child `at`: where the ray enters it (bits of a float32) above, its number below."""

    def generate(context: Any, builder: Any, signature: Any, args: Any) -> Any:
        words = builder.bitcast(args[0], I32.as_pointer())
        distance = builder.load(builder.gep(words, [args[1]]))
        child = builder.load(builder.gep(words, [builder.add(args[1], I64(N))]))
        return builder.or_(builder.shl(builder.zext(distance, I64), I64(32)), builder.zext(child, I64))

    return types.int64(REAL, types.int64), generate


@intrinsic
def prefetch(typing_context: Any, nodes: Any, packs: Any, child: Any) -> Any:
    """Ask for the memory of a node, or the first of a pack of triangles, before it is needed."""

    def generate(context: Any, builder: Any, signature: Any, args: Any) -> Any:
        byte = I8.as_pointer()
        node = builder.bitcast(row_behind(builder, args[0], args[2], NODE_WIDTH), byte)
        pack = builder.bitcast(row_behind(builder, args[1], builder.not_(args[2]), PACK_WIDTH), byte)
        inner = builder.icmp_signed(">=", args[2], I64(0))
        ask_for(builder, builder.select(inner, node, pack), range(4))
        with builder.if_then(builder.not_(inner)):
            ask_for(builder, pack, range(4, 10))
        return context.get_dummy_value()

    return types.void(NODES, PACKS, types.int64), generate


@intrinsic
def single_bits(typing_context: Any, value: Any) -> Any:
    """The bits of a float32."""

    def generate(context: Any, builder: Any, signature: Any, args: Any) -> Any:
        return builder.zext(builder.bitcast(args[0], I32), I64)

    return types.int64(types.float32), generate


@intrinsic
def triangles_hit(
    typing_context: Any, packs: Any, pack: Any, axes: Any, origin: Any, shear: Any, least: Any, most: Any, room: Any
) -> Any:
    """Which of a pack's eight triangles a ray meets at a distance in [least, most], a bit each.

    Distances, the weights of b and c, and what these are to be divided by, are left in the room, eight each. `axes`:
    where in a pack each of the ray's axes begins, the longest last; `origin` and `shear` in the same order.
    Watertight: the edge numbers of neighbours are exact negations of each other, so that no ray passes between them
    (Woop, Benthin & Wald, "Watertight Ray/Triangle Intersection", JCGT 2(1), 2013, here in float64).
    """

    def generate(context: Any, builder: Any, signature: Any, args: Any) -> Any:
        numbers = row_behind(builder, args[0], args[1], PACK_WIDTH)
        ask_for(builder, numbers, [9])  # whose triangles these are, which a hit will want at once
        axes = cgutils.unpack_tuple(builder, args[2], 3)
        origin = [splat(builder, value) for value in cgutils.unpack_tuple(builder, args[3], 3)]
        sx, sy, sz = (splat(builder, value) for value in cgutils.unpack_tuple(builder, args[4], 3))
        (ax, bx, cx), (ay, by, cy), (az, bz, cz) = (
            [loaded(builder, numbers, builder.add(axes[k], I64(8 * c)), F64) - origin[k] for c in range(3)]
            for k in range(3)
        )
        ax, ay, bx, by, cx, cy = ax - sx * az, ay - sy * az, bx - sx * bz, by - sy * bz, cx - sx * cz, cy - sy * cz
        u, v, w = cx * by - cy * bx, ax * cy - ay * cx, bx * ay - by * ax
        det = u + v + w
        zero = constant(builder, F64, 0.0)
        inside = u.least(v).least(w).is_(">=", zero) | u.most(v).most(w).is_("<=", zero)
        mask = (inside & det.is_("!=", zero)).bits()
        found = cgutils.alloca_once_value(builder, mask)
        with builder.if_then(builder.icmp_unsigned("!=", mask, I64(0)), likely=False):
            t = (u * az + v * bz + w * cz) * sz / det
            t.store(args[7])
            v.store(args[7], 1)
            w.store(args[7], 2)
            det.store(args[7], 3)
            within = t.is_(">=", splat(builder, args[5])) & t.is_("<=", splat(builder, args[6]))
            builder.store(builder.and_(mask, within.bits()), found)
        return builder.load(found)

    arguments = (PACKS, types.int64, THREE_WHOLE, THREE_REAL, THREE_REAL, types.float64, types.float64, REAL)
    return types.int64(*arguments), generate


@intrinsic
def spheres_hit(typing_context: Any, balls: Any, pack: Any, ray: Any, least: Any, most: Any, room: Any) -> Any:
    """Which of a pack's eight spheres a ray is inside of at some distance in [least, most], a bit each.

    Both distances, near and far, are left in the room, eight each; the direction need not be unit; a mere touch counts
    as a miss. The discriminant is formed so that small spheres far away lose no digits (Haines et al., "Precision
    Improvements for Ray/Sphere Intersection", Ray Tracing Gems, 2019, ch. 7).
    """

    def generate(context: Any, builder: Any, signature: Any, args: Any) -> Any:
        numbers = row_behind(builder, args[0], args[1], BALL_WIDTH)
        ask_for(builder, numbers, [4])  # whose spheres these are
        written(builder, args[2])

        def of_ray(at: int) -> Lanes:
            return splat(builder, builder.load(builder.gep(args[2], [I64(at)])))

        f = [of_ray(RAY_O + k) - loaded(builder, numbers, 8 * k, F64) for k in range(3)]
        d = [of_ray(RAY_D + k) for k in range(3)]
        radius = loaded(builder, numbers, 24, F64)
        zero = constant(builder, F64, 0.0)
        a = d[0] * d[0] + d[1] * d[1] + d[2] * d[2]
        b = zero - (f[0] * d[0] + f[1] * d[1] + f[2] * d[2])
        s = b / a
        g = [f[k] + s * d[k] for k in range(3)]
        rest = radius * radius - (g[0] * g[0] + g[1] * g[1] + g[2] * g[2])
        mask = rest.is_(">", zero).bits()
        found = cgutils.alloca_once_value(builder, mask)
        with builder.if_then(builder.icmp_unsigned("!=", mask, I64(0)), likely=False):
            root = (a * rest).root()
            distance = (f[0] * f[0] + f[1] * f[1] + f[2] * f[2]).root()
            c = (distance - radius) * (distance + radius)
            q = b.is_(">=", zero).where(b + root, b - root)
            first, second = c / q, q / a
            near, far = first.least(second), first.most(second)
            near.store(args[5])
            far.store(args[5], 1)
            within = near.is_("<=", splat(builder, args[4])) & far.is_(">=", splat(builder, args[3]))
            builder.store(builder.and_(mask, (within & near.is_("<", far)).bits()), found)
        return builder.load(found)

    arguments = (PACKS, types.int64, REAL, types.float64, types.float64, REAL)
    return types.int64(*arguments), generate


# Rows of eight float32 while a tree is built: low x, y, z, a number, and minus high x, y, z, a number.


@intrinsic
def unite(typing_context: Any, boxes: Any, i: Any, others: Any, j: Any) -> Any:
    """Make box i hold box j of others."""

    def generate(context: Any, builder: Any, signature: Any, args: Any) -> Any:
        to = row_pointer(context, builder, signature.args[0], args[0], args[1], N)
        other = loaded(builder, row_pointer(context, builder, signature.args[2], args[2], args[3], N), 0, F32)
        other.least(loaded(builder, to, 0, F32)).store(to)
        return context.get_dummy_value()

    return types.void(boxes, types.int64, others, types.int64), generate


@intrinsic
def unite_middle(typing_context: Any, boxes: Any, i: Any, others: Any, j: Any) -> Any:
    """Make box i hold the middle, doubled, of box j of others."""

    def generate(context: Any, builder: Any, signature: Any, args: Any) -> Any:
        to = row_pointer(context, builder, signature.args[0], args[0], args[1], N)
        other = loaded(builder, row_pointer(context, builder, signature.args[2], args[2], args[3], N), 0, F32)
        swap = ir.Constant(ir.VectorType(I32, N), [4, 5, 6, 7, 0, 1, 2, 3])
        swapped = Lanes(builder, builder.shuffle_vector(other.value, other.value, swap))
        (other - swapped).least(loaded(builder, to, 0, F32)).store(to)
        return context.get_dummy_value()

    return types.void(boxes, types.int64, others, types.int64), generate


@intrinsic
def swap_rows(typing_context: Any, boxes: Any, i: Any, j: Any) -> Any:
    """Exchange two rows, whatever their numbers mean."""

    def generate(context: Any, builder: Any, signature: Any, args: Any) -> Any:
        words = ir.VectorType(I32, N).as_pointer()
        one, two = (
            builder.bitcast(row_pointer(context, builder, signature.args[0], args[0], row, N), words)
            for row in args[1:]
        )
        kept = builder.load(one, align=4)
        builder.store(builder.load(two, align=4), one, align=4)
        builder.store(kept, two, align=4)
        return context.get_dummy_value()

    return types.void(boxes, types.int64, types.int64), generate


@intrinsic
def empty_row(typing_context: Any, boxes: Any, i: Any) -> Any:
    """Make box i empty."""

    def generate(context: Any, builder: Any, signature: Any, args: Any) -> Any:
        to = row_pointer(context, builder, signature.args[0], args[0], args[1], N)
        constant(builder, F32, float("inf")).store(to)
        return context.get_dummy_value()

    return types.void(boxes, types.int64), generate
