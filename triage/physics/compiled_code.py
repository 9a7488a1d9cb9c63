"""The compiler of the numerical kernel, and where its code is kept, so that it always belongs to its source.

The compiler keeps machine code by the age of the one file a function stands in; a change in another file of the kernel, or an
installation that sets all ages alike, would leave old code in use. The folder is therefore named after the content of all files
of the kernel. It must be
named before the compiler is imported, so this is the only module that imports it.
"""

import hashlib
import os
from pathlib import Path

KERNEL = ("transient_*.py", "network_solver.py", "netlist.py")


def kernel_digest() -> str:
    """Short text that changes with any file of the compiled kernel."""
    here = Path(__file__).parent
    digest = hashlib.sha256()
    for path in sorted(path for pattern in KERNEL for path in here.glob(pattern)):
        digest.update(path.read_bytes())
    return digest.hexdigest()[:16]


def keep_compiled_code() -> None:
    """Tell the compiler where to keep its code, unless the environment already does."""
    named = os.environ.get("XDG_CACHE_HOME", "")
    base = Path(named) if os.path.isabs(named) else Path.home() / ".cache"
    os.environ.setdefault("NUMBA_CACHE_DIR", str(base / "triage" / "compiled" / kernel_digest()))


keep_compiled_code()

from numba import njit  # noqa: E402

__all__ = ["kernel_digest", "njit"]
