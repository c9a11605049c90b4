"""Reads run files with the general tools that users have, all warnings being errors.

Usage: python check_readers.py PROGRAM [--renew]
PROGRAM is the built orbicline; it makes the files, in a temporary folder. With --renew the snapshot
schema.cdl is taken from the new file. `make readers` calls this with the pinned versions.
"""

import re
import subprocess
import sys
import tempfile
import time
import warnings
from importlib.metadata import version
from pathlib import Path

import example
import h5py
import netCDF4
import with_tools
import with_xarray

PACKAGES = ("xarray", "netCDF4", "h5netcdf", "h5py", "dask", "numpy", "compliance-checker")


def tell_versions() -> None:
    """Prints what reads the files."""
    print(", ".join(f"{name} {version(name)}" for name in PACKAGES))
    ncdump = subprocess.run(["ncdump"], capture_output=True, text=True).stderr
    found = re.search(r"netcdf library version (\S+)", ncdump)
    print(f"ncdump, nccopy {found[1] if found else 'of unknown version'};", end=" ")
    print(f"HDF5 {h5py.version.hdf5_version} in h5py, {netCDF4.__hdf5libversion__} in netCDF4")


def timed(name: str, check, *arguments) -> None:
    """Does one check and says how long it took."""
    start = time.monotonic()
    check(*arguments)
    print(f"{name}: ok, {time.monotonic() - start:.1f} s", flush=True)


def main() -> None:
    """Makes the files and runs all checks."""
    words = sys.argv[1:]
    if len(words) not in (1, 2) or words[1:] not in ([], ["--renew"]):
        sys.exit(__doc__)
    program = Path(words[0]).resolve()
    warnings.simplefilter("error")
    tell_versions()
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        run = example.short_run(program, folder)
        if words[1:]:
            with_tools.renew_schema(run)
        timed("ncdump, against the snapshot", with_tools.check_schema, run)
        timed("xarray, both engines", with_xarray.check_file, run)
        timed("append", with_xarray.check_append, run, folder)
        timed("nccopy", with_tools.check_copies, run, folder)
        timed("h5py", with_tools.check_h5py, run)
        timed("CF checker", with_tools.check_conventions, run, folder)
        parts = example.segments(program, folder)
        complete = example.resumed(program, folder)
        timed("segments", with_xarray.check_segments, parts, complete)
    print("OK")


if __name__ == "__main__":
    main()
