"""The wave solver: numba and numpy only, floats and arrays, no units and no other part of matchup.

Compiled code is kept in the user's cache folder, because the package's own folder may not be
writable; where there is no home either, a temporary folder serves. numba notices a change in the
file of a compiled function but not in the files of those it calls, so the folder's name carries a
digest of all sources of the solver.
"""

from __future__ import annotations

import contextlib
import hashlib
import os
import tempfile
from pathlib import Path

import numba


def _bases() -> list[Path]:
    base = os.environ.get("XDG_CACHE_HOME") or os.environ.get("LOCALAPPDATA")
    bases = [Path(base)] if base else []
    with contextlib.suppress(RuntimeError):  # no home directory at all
        bases.append(Path.home() / ".cache")
    user = str(os.getuid()) if hasattr(os, "getuid") else "user"
    return [*bases, Path(tempfile.gettempdir()) / f"cache-{user}"]


def _cache_folder() -> str | None:
    digest = hashlib.sha256()
    for source in sorted(Path(__file__).parent.glob("*.py")):
        digest.update(source.read_bytes())
    for base in _bases():
        folder = base / "matchup" / digest.hexdigest()[:12]
        try:
            folder.mkdir(parents=True, exist_ok=True)
        except OSError:
            continue
        if os.access(folder, os.W_OK):
            return str(folder)
    return None


if not os.environ.get("NUMBA_CACHE_DIR") and (folder := _cache_folder()):
    numba.config.CACHE_DIR = folder  # type: ignore[attr-defined]
