"""Writes a pickled run over and over into one growing file until it is killed or the disk is full; run as a program.

    python endless_writer.py RUN.pickle PATH [BYTES]

The number of time steps that are safe is printed after every block. BYTES limits the size of any file, as a full disk
would; the error it leads to is printed last.
"""

import pickle
import resource
import sys
from pathlib import Path

from toeline.errors import RunError
from toeline.results import netcdf_writer

MINUTE = 60_000


def main(pickle_path: str, path: str, limit: str = "") -> None:
    static, attributes, start, blocks = pickle.loads(Path(pickle_path).read_bytes())
    sink = netcdf_writer.NetcdfSink(path, static, attributes, start)
    if limit:
        resource.setrlimit(resource.RLIMIT_FSIZE, (int(limit), int(limit)))
    try:
        write_on(sink, blocks)
    except RunError as error:
        sink.close("complete")
        print(error)


def write_on(sink: netcdf_writer.NetcdfSink, blocks: list) -> None:
    steps = shift = 0
    while True:
        for block in blocks:
            sink.write(block | {clock: block[clock] + shift * MINUTE for clock in ("time", "profile_time")})
            sink.save_copy({})
            steps += len(block["time"])
            print(steps, flush=True)
        shift = steps


if __name__ == "__main__":
    main(*sys.argv[1:])
