"""The sources of the program that made a run, as a digest: two versions of one number may have been edited apart."""

import hashlib
from functools import cache
from pathlib import Path

_READERS = ("cli", "findings", "report", "studies")
"""Rooms that no number of a run depends on: they work from the finished file, or say what is to be run."""


@cache
def source_digest() -> str:
    """Digest of the sources that the numbers of a run depend on (measured: 4 ms, once a process)."""
    package = Path(__file__).resolve().parent.parent
    digest = hashlib.sha256()
    for source in sorted(package.rglob("*.py")):
        name = source.relative_to(package)
        if name.parts[0] not in _READERS:
            digest.update(f"{name.as_posix()} {source.stat().st_size} ".encode() + source.read_bytes())
    return digest.hexdigest()
