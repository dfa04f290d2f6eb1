"""tools/demo and tools/test: plain sh, and one clear sentence when there is nothing to run them with."""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
SCRIPTS = ("tools/demo", "tools/test")

pytestmark = pytest.mark.skipif(shutil.which("sh") is None, reason="there is no sh here")


def run(script: str, **environment: str) -> subprocess.CompletedProcess[str]:
    """A script of ours, from another folder, with variables set."""
    return subprocess.run(
        ["sh", str(ROOT / script)],
        env={**os.environ, **environment},
        cwd="/",
        stdin=subprocess.DEVNULL,
        capture_output=True,
        text=True,
        encoding="utf-8",
        timeout=60,
        check=False,
    )


@pytest.mark.parametrize("script", [*SCRIPTS, "tools/environment.sh"])
def test_scripts_are_plain_sh(script: str) -> None:
    """The strictest shell that is here reads them."""
    shell = shutil.which("dash") or shutil.which("sh")
    assert shell is not None
    done = subprocess.run([shell, "-n", str(ROOT / script)], capture_output=True, text=True, check=False)
    assert (done.returncode, done.stderr) == (0, "")


@pytest.mark.parametrize("script", SCRIPTS)
def test_a_python_that_will_not_do_is_refused_in_one_sentence(script: str, tmp_path: Path) -> None:
    """Exit 2, and nothing is made."""
    out = tmp_path / "environment"
    done = run(script, ANTISOLAR_PYTHON="/bin/false", ANTISOLAR_ENV=str(out))
    assert done.returncode == 2
    assert done.stderr.startswith("error: ANTISOLAR_PYTHON=/bin/false is not a Python of 3.11 or newer")
    assert not out.exists()


@pytest.mark.parametrize("script", SCRIPTS)
def test_no_python_at_all_is_said_with_what_to_do(script: str, tmp_path: Path) -> None:
    """A machine with a shell and its plain tools, but without Python."""
    for tool in ("sh", "cat", "dirname", "mkdir", "rmdir", "printf"):
        found = shutil.which(tool)
        if found:
            (tmp_path / tool).symlink_to(found)
    done = run(script, PATH=str(tmp_path), ANTISOLAR_PYTHON="", ANTISOLAR_ENV=str(tmp_path / "environment"))
    assert done.returncode == 2
    assert "no Python 3.11 or newer" in done.stderr
    assert "ANTISOLAR_PYTHON=" in done.stderr


@pytest.mark.parametrize("script", SCRIPTS)
def test_a_folder_that_is_not_ours_is_never_emptied(script: str, tmp_path: Path) -> None:
    """Someone's own environment, named by mistake, stays as it is."""
    (tmp_path / "pyvenv.cfg").write_text("home = /usr/bin\n", encoding="utf-8")
    (tmp_path / "precious").write_text("kept", encoding="utf-8")
    done = run(script, ANTISOLAR_ENV=str(tmp_path), ANTISOLAR_PYTHON=sys.executable)
    assert done.returncode == 2
    assert "was not made by this command" in done.stderr
    assert (tmp_path / "precious").read_text(encoding="utf-8") == "kept"
