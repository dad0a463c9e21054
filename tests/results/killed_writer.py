"""Writes the pickled run over and over into one growing file until it is killed; run as a program by the kill test.

    python killed_writer.py RUN.pickle PATH TIME_CHUNK

Each block of the file's rows is announced on standard output once it is on the disk.
"""

import pickle
import sys
from pathlib import Path

from toeline.results.netcdf_writer import NetcdfSink


def main(pickle_path: str, path: str, time_chunk: str) -> None:
    run = pickle.loads(Path(pickle_path).read_bytes())
    sink = NetcdfSink(path, run["static"], run["attributes"], run["start"], time_chunk=int(time_chunk))
    shift = 0
    while True:
        for block in run["blocks"]:
            sink.write(block | {name: block[name] + shift for name in ("time", "profile_time")})
        shift += run["length_ms"]
        print(shift, flush=True)


if __name__ == "__main__":
    main(*sys.argv[1:])
