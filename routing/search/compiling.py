"""Where compiled kernels are kept, and whether they are there yet.

The folder's name carries a hash of the kernel sources: numba's own check looks at the file of the outer
kernel only, so after an edit of an inner one it would run yesterday's code.
"""

from __future__ import annotations

import hashlib
import os
import sys
import tempfile
from importlib import metadata
from pathlib import Path

import platformdirs

_HERE = Path(__file__).parent
_KERNEL_FILES = ("kernel.py", "flooding.py", "dividing.py")


def _fingerprint() -> str:
    """Hash of the kernel sources, their place, the numba release and the Python release."""
    digest = hashlib.sha256()
    for name in _KERNEL_FILES:
        digest.update((_HERE / name).read_bytes())
    # numba keeps kernels by the place of their sources: another install of the same release has to compile its own.
    digest.update(f"{_HERE.resolve()} {metadata.version('numba')} {sys.version}".encode())
    return digest.hexdigest()[:16]


def _writable(folder: Path) -> bool:
    """Whether files can be made in ``folder`` (it is made if need be)."""
    try:
        folder.mkdir(parents=True, exist_ok=True)
        with tempfile.TemporaryFile(dir=folder):
            return True
    except OSError:
        return False


def cache_folder() -> Path:
    """Return the folder that compiled kernels are kept in.

    The user's cache folder, or a temporary one where that cannot be written (read-only home, no home): the
    kernels are then compiled anew after each restart of the machine.
    """
    own = os.environ.get("NUMBA_CACHE_DIR")
    if own:
        return Path(own)
    user = Path(platformdirs.user_cache_dir("overcrest", appauthor=False)) / f"kernels-{_fingerprint()}"
    if _writable(user):
        return user
    owner = os.getuid() if hasattr(os, "getuid") else "user"
    return Path(tempfile.gettempdir()) / f"overcrest-{owner}" / f"kernels-{_fingerprint()}"


def use_cache_folder() -> None:
    """Tell numba where to keep compiled kernels. Must run before numba is imported."""
    os.environ.setdefault("NUMBA_CACHE_DIR", str(cache_folder()))


def kernels_ready() -> bool:
    """Whether the kernels have been compiled by an earlier run (or need not be: JIT off)."""
    if os.environ.get("NUMBA_DISABLE_JIT", "0") not in {"", "0"}:
        return True
    found = {path.name.split("-")[0] for path in cache_folder().rglob("*.nbi")}
    return {"kernel.settle", "flooding.flood"} <= found
