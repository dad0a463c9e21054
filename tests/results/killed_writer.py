"""Writes a pickled run over and over into one growing file until it is killed; run as a program by the kill test.

    python killed_writer.py RUN.pickle PATH

The number of time steps safe on the disk is announced on standard output after every block.
"""

import math
import pickle
import sys
from pathlib import Path

from toeline.results import netcdf_writer


def main(pickle_path: str, path: str) -> None:
    netcdf_writer.COPY_EVERY, netcdf_writer.COPY_SHARE = 0.0, math.inf  # a copy after every block
    run = pickle.loads(Path(pickle_path).read_bytes())
    sink = netcdf_writer.NetcdfSink(path, run["static"], run["attributes"], run["start"])
    steps = shift = 0
    while True:
        for block in run["blocks"]:
            sink.write(block | {clock: block[clock] + shift for clock in ("time", "profile_time")})
            steps += len(block["time"])
            print(steps, flush=True)
        shift += run["length_ms"]


if __name__ == "__main__":
    main(*sys.argv[1:])
