"""The compile cache: never stale, and never in the way of an install that cannot write."""

import os
import shutil
import subprocess
import sys
from pathlib import Path

import surfdisp

PACKAGE = Path(surfdisp.__file__).parent

CALLER = """from .callee import value
from .jit import kernel


@kernel
def doubled(x):
    return 2.0 * value(x)
"""
CALLEE = """from .jit import kernel


@kernel
def value(x):
    return x + {}
"""
RUN = "from surfdisp.kernels.caller import doubled; print(doubled(1.0))"


def run(code, folder, **variables):
    environment = {**os.environ, "PYTHONPATH": str(folder), "PYTHONDONTWRITEBYTECODE": "1", **variables}
    for name in [name for name, value in variables.items() if value is None]:
        del environment[name]
    done = subprocess.run(
        [sys.executable, "-W", "error", "-c", code],
        cwd=folder,
        env=environment,
        capture_output=True,
        text=True,
    )
    assert done.returncode == 0, done.stderr
    return done.stdout.strip()


def small_copy(folder):
    kernels = folder / "surfdisp" / "kernels"
    kernels.mkdir(parents=True)
    (folder / "surfdisp" / "__init__.py").write_text("")
    (kernels / "__init__.py").write_text("")
    shutil.copy(PACKAGE / "kernels" / "jit.py", kernels)
    (kernels / "caller.py").write_text(CALLER)
    (kernels / "callee.py").write_text(CALLEE.format("1.0"))
    return kernels


def test_an_edited_callee_reaches_its_callers(tmp_path):
    kernels = small_copy(tmp_path)
    cache = {"SURFDISP_CACHE": str(tmp_path / "cache")}
    assert run(RUN, tmp_path, **cache) == "4.0"
    assert list((tmp_path / "cache").rglob("*.nbi"))  # it was indeed cached
    assert run(RUN, tmp_path, **cache) == "4.0"
    (kernels / "callee.py").write_text(CALLEE.format("5.0"))
    assert run(RUN, tmp_path, **cache) == "12.0"


def test_an_install_that_cannot_write_anywhere_still_computes(tmp_path):
    small_copy(tmp_path)
    blocked = tmp_path / "blocked"
    blocked.write_text("a file where the cache folder should be")
    nowhere = {"SURFDISP_CACHE": str(blocked), "HOME": str(blocked), "XDG_CACHE_HOME": None}
    code = (
        RUN + "\nimport stat\nfrom surfdisp.kernels.jit import CACHE_FOLDER as folder"
        "\nprint(folder, oct(stat.S_IMODE(folder.stat().st_mode)))"
    )
    result, where = run(code, tmp_path, **nowhere).splitlines()
    folder, mode = where.split()
    assert result == "4.0"
    assert mode == "0o700"
    assert not Path(folder).exists()  # private, and removed when the process ended
