"""Compiled code: arrays in, arrays and status out.

Everything here is mm, radians, unit vectors and float64, in the eye frame. Kernels never raise; every
ray ends with a status. The compile cache lies in a folder named by a hash of these sources and of
numba's version and the processor, so that it can never be stale: numba itself does not notice that
a called function in another file changed.
"""

from __future__ import annotations

import hashlib
import os
import shutil
import sys
import tempfile
from pathlib import Path

import numba

KEEP_CACHES = 3  # older caches are removed


def _sources_digest() -> str:
    """Hash of the kernel sources, numba's version and the processor's name."""
    from llvmlite import binding

    digest = hashlib.sha256()
    for path in sorted(Path(__file__).parent.glob("*.py")):
        digest.update(path.name.encode() + path.read_bytes())
    digest.update(f"{numba.__version__} {binding.get_host_cpu_name()} {sys.version}".encode())
    return digest.hexdigest()[:12]


def _cache_home() -> Path:
    """The user's cache folder for compiled kernels."""
    base = os.environ.get("GONIOSIM_CACHE") or os.environ.get("XDG_CACHE_HOME")
    home = Path(base) if base else Path(os.path.expanduser("~")) / ".cache"
    return home / "goniosim"


def _writable(folder: Path) -> bool:
    try:
        folder.mkdir(parents=True, exist_ok=True)
        with tempfile.TemporaryFile(dir=folder):
            return True
    except OSError:
        return False


def _choose_cache() -> Path | None:
    """Folder for this version's compiled kernels, or None where nothing can be written."""
    name = f"kernels-{_sources_digest()}"
    for home in (_cache_home(), Path(tempfile.gettempdir()) / f"goniosim-{os.getuid() if hasattr(os, 'getuid') else 'user'}"):
        if _writable(home / name):
            _prune(home, keep=name)
            return home / name
    return None


def _prune(home: Path, keep: str) -> None:
    """Remove all but the newest few caches, so that upgrades do not fill the disk."""
    folders = sorted(home.glob("kernels-*"), key=lambda path: path.stat().st_mtime, reverse=True)
    for folder in [path for path in folders if path.name != keep][KEEP_CACHES - 1:]:
        shutil.rmtree(folder, ignore_errors=True)


CACHE_FOLDER = _choose_cache()
_before = numba.config.CACHE_DIR
if CACHE_FOLDER is not None:
    numba.config.CACHE_DIR = str(CACHE_FOLDER)


def kernel(function):
    """Compile a function on first use, cached on disk; it lets other threads run."""
    return _compiled(function)


def small_kernel(function):
    """A kernel that is copied into its callers: handing arrays on costs more than its few lines."""
    return _compiled(function, forceinline=True)


def _compiled(function, **options):
    return numba.njit(cache=CACHE_FOLDER is not None, nogil=True, error_model="numpy", fastmath={"contract"},
                      **options)(function)


def compiled_before() -> bool:
    """Whether the main kernel of this version has been compiled on this machine."""
    return CACHE_FOLDER is not None and any(CACHE_FOLDER.rglob("bundle.trace_bundle-*.nbi"))


from . import aim, bundle, replay, shapes, starts  # noqa: E402  (the cache folder must be set before they are decorated)

numba.config.CACHE_DIR = _before

__all__ = ["aim", "bundle", "compiled_before", "kernel", "replay", "shapes", "starts"]
