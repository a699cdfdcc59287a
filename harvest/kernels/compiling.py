"""How kernels are compiled and where their machine code is kept.

numba's own cache notices a change in the file of the cached function only. Kernels here call helpers from
other files, so the cache folder carries a digest of every kernel file: a changed helper means a new folder.
"""

from __future__ import annotations

import hashlib
import os
import tempfile
from collections.abc import Callable
from functools import cache
from pathlib import Path
from typing import Any

import numba
import platformdirs

#: Fast-math flags that keep the magic-number tricks of ``vectormath`` exact: everything but ``reassoc``.
CAREFUL = frozenset({"contract", "nnan", "ninf", "nsz"})
#: For plain sums of a lane, where the order of additions is the compiler's.
SUMS = frozenset({"contract", "nnan", "ninf", "nsz", "reassoc"})


def kernel_digest(folder: Path) -> str:
    """SHA-256 over the names and texts of all Python files of a folder, with numba's version: 16 digits."""
    digest = hashlib.sha256(numba.__version__.encode())
    for file in sorted(folder.glob("*.py")):
        digest.update(file.name.encode())
        digest.update(file.read_bytes())
    return digest.hexdigest()[:16]


@cache
def cache_folder() -> Path:
    """The folder of compiled kernels: ``HARVEST_CACHE`` if set, else the user's cache, else a temporary one."""
    base = os.environ.get("HARVEST_CACHE") or platformdirs.user_cache_dir("harvest", appauthor=False)
    folder = Path(base) / f"kernels-{kernel_digest(Path(__file__).parent)}"
    try:
        folder.mkdir(parents=True, exist_ok=True)
        with tempfile.TemporaryFile(dir=folder):
            return folder
    except OSError:
        return Path(tempfile.mkdtemp(prefix="harvest-kernels-"))


def is_warm() -> bool:
    """Whether compiled kernels from an earlier run are there (so that a start takes seconds less)."""
    return any(cache_folder().rglob("projection.*.nbc"))


def kernel(*, fastmath: frozenset[str] = CAREFUL, inline: bool = False) -> Callable[[Callable], Any]:
    """Compile a function with numba: releases the GIL, divides like numpy, cached by the digest of all kernels."""
    options: dict[str, Any] = {"nogil": True, "error_model": "numpy", "fastmath": set(fastmath)}
    if inline:
        return numba.njit(inline="always", **options)

    def compile_cached(function: Callable) -> Any:
        before = numba.config.CACHE_DIR
        numba.config.CACHE_DIR = str(cache_folder())
        try:
            return numba.njit(cache=True, **options)(function)
        finally:
            numba.config.CACHE_DIR = before

    return compile_cached
