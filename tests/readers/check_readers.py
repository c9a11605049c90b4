"""Opens a run file the way users do, without any option, warnings being errors.

Usage: python check_readers.py RUN.nc
Make the file with `ORBICLINE_EXAMPLE_FILE=RUN.nc cargo test --test output_schema` (invented data)
or take any run. Prints OK, or fails with what is wrong.
"""

import shutil
import sys
import tempfile
import warnings
from pathlib import Path

import netCDF4
import numpy as np
import xarray as xr

BOUNDED = {"age": "age_bnds", "lat": "lat_bnds", "depth": "depth_bnds", "month_middle": "month_bnds"}


def check_bounds(data: xr.Dataset) -> None:
    """Every bounded coordinate lies inside its cell, and cells of neighbours touch."""
    assert "age" in data.coords, "age is no coordinate"
    for name, bounds in BOUNDED.items():
        if name not in data.variables:
            continue
        assert data[name].attrs.get("bounds") == bounds, f"{name} does not name {bounds}"
        middle, cells = data[name].values, data[bounds].values
        assert cells.shape == (len(middle), 2), f"{bounds} has shape {cells.shape}"
        assert np.isfinite(cells).all(), f"{bounds} has missing values"
        low, high = cells.min(axis=1), cells.max(axis=1)
        assert ((low <= middle) & (middle <= high)).all(), f"{name} leaves its cells"
        if name != "age":
            assert (cells[1:, 0] == cells[:-1, 1]).all(), f"{bounds} leaves gaps"


def check_xarray(path: Path, engine: str) -> xr.Dataset:
    """Opens, checks and loads the file with one engine."""
    with xr.open_dataset(path, engine=engine) as data:
        assert not [d for d in data.dims if d.startswith("phony")], "a dimension is unknown"
        assert data.sizes["age"] == data["age"].size > 0
        assert (np.diff(data["age"].values) < 0).all(), "ages do not fall"
        check_bounds(data)
        first = data["age"].values[0]
        assert data.sel(age=first)["age"] == first
        for name, variable in data.variables.items():
            assert variable.dtype.kind not in "mM", f"{name} was decoded as a time"
        return data.load()


def check_append(path: Path) -> None:
    """Appends a record and a variable to a copy; the rest stays as it was."""
    with tempfile.TemporaryDirectory() as folder:
        copy = Path(folder) / "copy.nc"
        shutil.copy(path, copy)
        with netCDF4.Dataset(copy, "a") as data:
            count = len(data.dimensions["age"])
            step = data["age_bnds"][-1, 1] - data["age_bnds"][-1, 0]
            data["age"][count] = data["age"][count - 1] + step
            data["age_bnds"][count] = data["age_bnds"][count - 1] + step
            data.createVariable("added", "f8", ("age",))[:] = 1.0
            data.setncattr("history", "appended by a test")
        with xr.open_dataset(copy) as after, xr.open_dataset(path) as before:
            assert after.sizes["age"] == count + 1
            assert float(after["added"].sum()) == count + 1
            for name in before.data_vars:
                old, new = before[name], after[name]
                if "age" in old.dims:
                    new = new.isel(age=slice(0, count))
                np.testing.assert_array_equal(old.values, new.values, err_msg=name)


def main() -> None:
    """Runs all checks on the file of the command line."""
    if len(sys.argv) != 2:
        sys.exit(__doc__)
    warnings.simplefilter("error")
    path = Path(sys.argv[1])
    first, second = (check_xarray(path, engine) for engine in ("netcdf4", "h5netcdf"))
    assert set(first.variables) == set(second.variables), "the engines see different variables"
    for name in first.variables:
        np.testing.assert_array_equal(first[name].values, second[name].values, err_msg=name)
    check_append(path)
    print("OK")


if __name__ == "__main__":
    main()
