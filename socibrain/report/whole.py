"""Files written whole or not at all."""

from __future__ import annotations

import os
from pathlib import Path


def write_whole(path: Path, content: bytes) -> None:
    """Write under a temporary name beside ``path``, then move it there.

    Raises `OSError` when that cannot be done; then nothing is left behind and an older file stays.
    """
    half = path.with_name(f".{path.name}.{os.getpid()}.half")
    try:
        half.write_bytes(content)
        half.replace(path)
    finally:
        half.unlink(missing_ok=True)
