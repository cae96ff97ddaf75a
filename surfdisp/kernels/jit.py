"""The one place where kernels are compiled: options, and the compile cache.

The cache lives in a per-user folder named after a digest of all kernel sources: numba looks only at the
file of the function it loads, so an edited callee would otherwise leave its cached callers stale. Where no
such folder can be written a private temporary one is used, and removed when the process ends.

Kernels check nothing: float64 or complex128 arrays, C order, writable (numba compiles a second time for
read-only ones, so callers pass copies). Failure is NaN plus an integer status.
"""

from __future__ import annotations

import atexit
import hashlib
import os
import shutil
import tempfile
from collections.abc import Callable
from pathlib import Path
from typing import Any, TypeVar

import numba
from numba.core import config

F = TypeVar("F", bound=Callable[..., Any])


def _source_digest() -> str:
    digest = hashlib.sha256(numba.__version__.encode())
    for path in sorted(Path(__file__).parent.glob("*.py")):
        digest.update(path.name.encode())
        digest.update(path.read_bytes())
    return digest.hexdigest()[:16]


def _user_cache() -> Path:
    base = os.environ.get("SURFDISP_CACHE") or os.environ.get("XDG_CACHE_HOME")
    return (Path(base) if base else Path.home() / ".cache") / "surfdisp"


def _cache_folder() -> Path:
    try:
        folder = _user_cache() / f"kernels-{_source_digest()}"
        folder.mkdir(mode=0o700, parents=True, exist_ok=True)
        with tempfile.TemporaryFile(dir=folder):
            return folder
    except (OSError, RuntimeError):  # RuntimeError: no home folder is known
        folder = Path(tempfile.mkdtemp(prefix="surfdisp-kernels-"))
        atexit.register(shutil.rmtree, folder, ignore_errors=True)
        return folder


CACHE_FOLDER = _cache_folder()


def is_cold() -> bool:
    """Tell whether nothing has been compiled yet, so that a first run can say that it prepares once."""
    return not any(CACHE_FOLDER.rglob("*.nbi"))


def _compiled(function: F, **options: Any) -> F:
    settings: Any = config  # numba sets its options at run time, unseen by a type checker
    before = settings.CACHE_DIR
    settings.CACHE_DIR = str(CACHE_FOLDER)  # read by numba while it decorates, and only then
    try:
        made: F = numba.njit(cache=True, nogil=True, error_model="numpy", **options)(function)
    finally:
        settings.CACHE_DIR = before
    return made


def kernel(function: F) -> F:
    """Compile `function` with strict IEEE arithmetic."""
    return _compiled(function)


def inlined(function: F) -> F:
    """Compile a small scalar formula that its callers should inline."""
    return _compiled(function, inline="never", forceinline=True)


def summing(function: F) -> F:
    """Compile a summation whose terms may be reordered and fused, so that it vectorises; NaN stays NaN."""
    return _compiled(function, fastmath={"reassoc", "contract", "nsz"})
