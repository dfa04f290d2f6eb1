"""Rules for compiled functions that no linter knows, read from the syntax tree: ``python tools/kernels.py [FOLDER]``.

Prints one line a fault, as ``file:line: sentence``, and exits with 1 when there is any.
"""

from __future__ import annotations

import ast
import sys
from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from pathlib import Path

LONGEST_KERNEL = 100  # lines without the docstring: longer ones compile slowly and read badly
LONGEST_PARALLEL = 40  # an outer loop is a prange, a call and the stores
MAKES_ARRAYS = frozenset(
    {"empty", "zeros", "ones", "full", "array", "empty_like", "zeros_like", "ones_like", "full_like"}
)
COMPILERS = frozenset({"njit", "jit", "vectorize", "guvectorize", "stencil"})

FunctionNode = ast.FunctionDef | ast.AsyncFunctionDef


@dataclass(frozen=True)
class Kernel:
    """A function under the kernel decorator."""

    path: Path
    node: FunctionNode
    parallel: bool


def is_named(node: ast.expr, name: str) -> bool:
    """Whether an expression is the bare name, or an attribute of that name."""
    return (isinstance(node, ast.Name) and node.id == name) or (isinstance(node, ast.Attribute) and node.attr == name)


def kernel_of(path: Path, node: FunctionNode) -> Kernel | None:
    """The kernel that this function is, or None."""
    for decorator in node.decorator_list:
        called = decorator.func if isinstance(decorator, ast.Call) else decorator
        if is_named(called, "kernel"):
            words = decorator.keywords if isinstance(decorator, ast.Call) else []
            parallel = any(
                word.arg == "parallel" and isinstance(word.value, ast.Constant) and word.value.value is True
                for word in words
            )
            return Kernel(path, node, parallel)
    return None


def kernels_in(path: Path, tree: ast.Module) -> list[Kernel]:
    """Every kernel of a module, nested ones too."""
    functions = (node for node in ast.walk(tree) if isinstance(node, FunctionNode))
    return [kernel for kernel in (kernel_of(path, node) for node in functions) if kernel]


def length(node: FunctionNode) -> int:
    """Lines from ``def`` to the end, without the docstring."""
    first = node.body[0]
    documented = ast.get_docstring(node) is not None
    doc_lines = (first.end_lineno or first.lineno) - first.lineno + 1 if documented else 0
    return (node.end_lineno or node.lineno) - node.lineno + 1 - doc_lines


def is_array_maker(node: ast.AST) -> bool:
    """Whether a node is a call such as ``np.empty(...)``."""
    return (
        isinstance(node, ast.Call)
        and isinstance(node.func, ast.Attribute)
        and is_named(node.func.value, "np")
        and node.func.attr in MAKES_ARRAYS
    )


def is_random(node: ast.AST) -> bool:
    """Whether a node is ``np.random``, whose state would tie a sample to what ran before it."""
    return isinstance(node, ast.Attribute) and node.attr == "random" and is_named(node.value, "np")


def called_names(kernel: Kernel) -> set[str]:
    """The plain names that a kernel calls."""
    return {
        node.func.id for node in ast.walk(kernel.node) if isinstance(node, ast.Call) and isinstance(node.func, ast.Name)
    }


def faults_of_kernel(kernel: Kernel, leaves: frozenset[str]) -> Iterator[tuple[int, str]]:
    """Line and sentence of each fault of one kernel. `leaves` are the kernels that others call."""
    name = kernel.node.name
    if not ast.get_docstring(kernel.node):
        yield kernel.node.lineno, f"the kernel {name} has no docstring"
    longest = LONGEST_PARALLEL if kernel.parallel else LONGEST_KERNEL
    if length(kernel.node) > longest:
        kind = "parallel kernel" if kernel.parallel else "kernel"
        yield kernel.node.lineno, f"the {kind} {name} has {length(kernel.node)} lines; at most {longest} are allowed"
    for node in ast.walk(kernel.node):
        line = getattr(node, "lineno", kernel.node.lineno)
        if isinstance(node, ast.Raise):
            yield line, f"the kernel {name} raises; kernels return a status instead"
        elif isinstance(node, ast.Call) and isinstance(node.func, ast.Name) and node.func.id == "print":
            yield line, f"the kernel {name} prints"
        elif is_random(node):
            yield line, f"the kernel {name} uses np.random; samples are a function of pixel, round and dimension"
        elif is_array_maker(node) and not kernel.parallel and name in leaves:
            yield line, f"the kernel {name}, which others call, makes an array; pass tuples of numbers"


def faults_of_compiler(tree: ast.Module, in_base: bool) -> Iterator[tuple[int, str]]:
    """Line and sentence of each use of the compiler that only base/ may make, or that nobody may."""
    for node in ast.walk(tree):
        line = getattr(node, "lineno", 1)
        if not in_base and is_compiler(node):
            yield line, "numba's own decorator is used; only renderer.base.jit.kernel compiles"
        elif isinstance(node, ast.keyword) and node.arg == "fastmath" and not is_false(node.value):
            yield line, "fastmath is set; it breaks the exact negations that ray search needs, and checks for NaN"


def is_compiler(node: ast.AST) -> bool:
    """Whether a node names one of Numba's own decorators, or imports it."""
    if isinstance(node, ast.ImportFrom):
        return (node.module or "").split(".")[0] == "numba" and any(a.name in COMPILERS for a in node.names)
    if isinstance(node, ast.Attribute):
        return node.attr in COMPILERS and (is_named(node.value, "numba") or is_named(node.value, "nb"))
    return isinstance(node, ast.Name) and node.id == "njit"


def is_false(node: ast.expr) -> bool:
    """Whether an expression is the constant False."""
    return isinstance(node, ast.Constant) and node.value is False


def faults(paths: Iterable[Path], root: Path) -> list[str]:
    """Every fault in the files, as ``file:line: sentence``, in the order of the files."""
    trees = {path: ast.parse(path.read_text(encoding="utf-8"), str(path)) for path in paths}
    kernels = {path: kernels_in(path, tree) for path, tree in trees.items()}
    every = [kernel for found in kernels.values() for kernel in found]
    known = {kernel.node.name for kernel in every}
    leaves = frozenset(name for kernel in every for name in called_names(kernel) if name in known)
    rows = []
    for path, tree in trees.items():
        shown = path.relative_to(root)
        found = list(faults_of_compiler(tree, in_base="base" in shown.parts))
        found += [fault for kernel in kernels[path] for fault in faults_of_kernel(kernel, leaves)]
        rows += [f"{shown}:{line}: {sentence}" for line, sentence in sorted(found)]
    return rows


def main(arguments: list[str]) -> int:
    """Check every Python file of a folder (default: the package); 1 when anything is wrong, else 0."""
    folder = Path(arguments[0]) if arguments else Path(__file__).resolve().parent.parent / "renderer"
    paths = sorted(folder.rglob("*.py"))
    if not paths:
        print(f"{folder} holds no Python file")
        return 1
    rows = faults(paths, folder)
    print("\n".join(rows) if rows else f"kernel rules: {len(paths)} files, nothing to mend")
    return 1 if rows else 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
