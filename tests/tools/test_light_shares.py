"""tools/light_shares.py makes the shipped shares of white light, and its solver finds what another solver finds."""

from __future__ import annotations

import runpy
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest
from scipy.optimize import minimize

ROOT = Path(__file__).resolve().parents[2]
SCRIPT = ROOT / "tools" / "light_shares.py"
SHIPPED = ROOT / "renderer" / "colour" / "data" / "rec709_light_shares_1nm.csv"
LAST_DIGIT = 1.0e-12  # the table's; solvers of linear equations differ by less (condition number below 1e4)


def parts(text: str) -> tuple[list[str], np.ndarray]:
    """Remarks and headings, and the numbers below them."""
    lines = text.splitlines()
    first = next(k for k, line in enumerate(lines) if line[0].isdigit())
    return lines[:first], np.array([[float(entry) for entry in line.split(",")] for line in lines[first:]])


def test_the_shipped_table_is_what_the_script_makes(tmp_path: Path) -> None:
    """The same remarks, and the same numbers but for one step in the last printed digit."""
    made = tmp_path / "made.csv"
    subprocess.run([sys.executable, str(SCRIPT), "--out", str(made)], check=True, cwd=ROOT, capture_output=True)
    head, numbers = parts(made.read_text(encoding="utf-8"))
    shipped_head, shipped = parts(SHIPPED.read_text(encoding="utf-8"))
    assert head == shipped_head
    assert numbers.shape == (401, 4)
    np.testing.assert_allclose(shipped, numbers, rtol=0.0, atol=1.5 * LAST_DIGIT)


@pytest.mark.parametrize("seed", range(5))
def test_the_solver_finds_what_sequential_quadratic_programming_finds(seed: int) -> None:
    """Three curves of 12 values that add up to 1 and have given weighted sums: against scipy's SLSQP."""
    tools = runpy.run_path(str(SCRIPT))
    n, rng = 12, np.random.default_rng(seed)
    h = tools["roughness"](n)
    weights = rng.uniform(0.0, 1.0, (2, n))
    shares = rng.dirichlet([0.2, 0.2, 0.2], n).T  # what the conditions are made from, so that they can be met
    a = np.concatenate([np.kron(np.ones((1, 3)), np.eye(n)), np.kron(np.eye(2, 3), weights)])
    b = a @ shares.ravel()
    found = tools["least"](h, a, b)
    other = minimize(
        lambda x: 0.5 * x @ h @ x,
        np.full(3 * n, 1.0 / 3.0),
        jac=lambda x: h @ x,
        bounds=[(0.0, None)] * (3 * n),
        constraints={"type": "eq", "fun": lambda x: a @ x - b, "jac": lambda x: a},
        method="SLSQP",
        options={"ftol": 1e-15, "maxiter": 500},
    )
    assert other.success
    assert found.min() >= 0.0
    np.testing.assert_allclose(a @ found, b, atol=1e-12)
    np.testing.assert_allclose(found, other.x, atol=1e-6)
