"""tools/kernels.py must see each fault it is there for, and must not cry at what is allowed."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
HEAD = "import numpy as np\nfrom renderer.base.jit import kernel, prange\n\n\n"

FAULTY = {
    "njit": ("import numba\n\n\n@numba.njit\ndef f(x):\n    '''Doc.'''\n    return x\n", "numba's own decorator"),
    "imported njit": ("from numba import njit\n", "numba's own decorator"),
    "fastmath": (HEAD + "@kernel(fastmath=True)\ndef f(x):\n    '''Doc.'''\n    return x\n", "fastmath"),
    "raise": (HEAD + "@kernel\ndef f(x):\n    '''Doc.'''\n    raise ValueError\n", "f raises"),
    "print": (HEAD + "@kernel\ndef f(x):\n    '''Doc.'''\n    print(x)\n", "f prints"),
    "random": (HEAD + "@kernel\ndef f(x):\n    '''Doc.'''\n    return x + np.random.random()\n", "np.random"),
    "docstring": (HEAD + "@kernel\ndef f(x):\n    return x\n", "no docstring"),
    "array in a leaf": (
        HEAD
        + "@kernel\ndef leaf(x):\n    '''Doc.'''\n    return np.empty(3)\n\n\n"
        + "@kernel(parallel=True)\ndef outer(x):\n    '''Doc.'''\n    return leaf(x)\n",
        "leaf, which others call, makes an array",
    ),
    "long kernel": (HEAD + "@kernel\ndef f(x):\n    '''Doc.'''\n" + "    x += 1\n" * 100, "f has 101 lines"),
    "long parallel kernel": (
        HEAD + "@kernel(parallel=True)\ndef f(x):\n    '''Doc.'''\n" + "    x += 1\n" * 40,
        "f has 41 lines",
    ),
}

ALLOWED = (
    HEAD
    + "@kernel\ndef leaf(x):\n    '''Doc\n\n    over lines.\n    '''\n"
    + "    x += 1\n" * 99
    + "\n\n@kernel(parallel=True)\ndef outer(xs):\n    '''Doc.'''\n    out = np.empty(xs.shape[0])\n"
    + "    for k in prange(xs.shape[0]):\n        out[k] = leaf(xs[k])\n    return out\n\n\n"
    + "def plain():\n    print('talk')\n    raise ValueError\n\n\nspread = np.vectorize(plain)\n"
)


def run(folder: Path) -> subprocess.CompletedProcess[str]:
    """The command on one folder."""
    command = [sys.executable, str(ROOT / "tools" / "kernels.py"), str(folder)]
    return subprocess.run(command, capture_output=True, text=True, encoding="utf-8", check=False)


@pytest.mark.parametrize("name", FAULTY)
def test_each_fault_is_named_with_its_line(tmp_path: Path, name: str) -> None:
    """One file with one fault: exit 1, one line, the right sentence."""
    source, sentence = FAULTY[name]
    (tmp_path / "faulty.py").write_text(source, encoding="utf-8")
    done = run(tmp_path)
    assert done.returncode == 1
    assert done.stdout.startswith("faulty.py:")
    assert sentence in done.stdout
    assert len(done.stdout.splitlines()) == 1


def test_what_is_allowed_passes(tmp_path: Path) -> None:
    """A leaf of exactly the longest length, arrays in the parallel outer function, talk and errors in plain Python."""
    (tmp_path / "fine.py").write_text(ALLOWED, encoding="utf-8")
    assert run(tmp_path).returncode == 0


def test_base_may_compile(tmp_path: Path) -> None:
    """The one decorator lives in base/, and nothing there is a fault for compiling."""
    (tmp_path / "base").mkdir()
    (tmp_path / "base" / "jit.py").write_text("import numba\n\nkernel = numba.njit\n", encoding="utf-8")
    assert run(tmp_path).returncode == 0


def test_an_empty_folder_is_no_pass(tmp_path: Path) -> None:
    """A wrong path must not look like a clean house."""
    assert run(tmp_path).returncode == 1


def test_the_package_keeps_the_rules() -> None:
    """Every kernel of the project."""
    done = run(ROOT / "renderer")
    assert done.returncode == 0, done.stdout
