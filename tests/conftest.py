"""Settings of the whole suite, made before the package is imported."""

import os
from pathlib import Path

WORKER = os.environ.get("PYTEST_XDIST_WORKER")
if WORKER:
    # Workers that compile one function for different arguments at once would overwrite each other's cached code.
    os.environ["TOELINE_CACHE_DIR"] = str(Path.home() / ".cache" / "toeline" / WORKER)
