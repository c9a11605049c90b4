"""What xarray makes of run files with both of its engines, without any option."""

import shutil
from pathlib import Path

import netCDF4
import numpy as np
import xarray as xr

ENGINES = ("netcdf4", "h5netcdf")
BOUNDED = {"age": "age_bnds", "lat": "lat_bnds", "depth": "depth_bnds", "month_middle": "month_bnds"}


def check_bounds(data: xr.Dataset) -> None:
    """Every bounded coordinate lies inside its cell, and cells of neighbours touch."""
    assert "age" in data.coords, "age is no coordinate"
    for name, bounds in BOUNDED.items():
        assert data[name].attrs.get("bounds") == bounds, f"{name} does not name {bounds}"
        middle, cells = data[name].values, data[bounds].values
        assert cells.shape == (len(middle), 2), f"{bounds} has shape {cells.shape}"
        assert np.isfinite(cells).all(), f"{bounds} has missing values"
        low, high = cells.min(axis=1), cells.max(axis=1)
        assert ((low <= middle) & (middle <= high)).all(), f"{name} leaves its cells"
        if name != "age":
            assert (cells[1:, 0] == cells[:-1, 1]).all(), f"{bounds} leaves gaps"


def check_content(data: xr.Dataset) -> None:
    """Dimensions are known, ages fall and select, nothing was decoded as a time."""
    assert not [d for d in data.dims if d.startswith("phony")], "a dimension is unknown"
    assert data.sizes["age"] == data["age"].size > 0
    assert (np.diff(data["age"].values) < 0).all(), "ages do not fall"
    check_bounds(data)
    first = data["age"].values[0]
    assert data.sel(age=first)["age"] == first
    for name, variable in data.variables.items():
        assert variable.dtype.kind not in "mM", f"{name} was decoded as a time"


def opened(path: Path, engine: str = "netcdf4") -> xr.Dataset:
    """The file, checked and loaded."""
    with xr.open_dataset(path, engine=engine) as data:
        check_content(data)
        return data.load()


def same(first: xr.Dataset, second: xr.Dataset, apart_from: tuple[str, ...] = ()) -> None:
    """Asserts that two sets have the same variables with the same values and attributes."""
    assert set(first.variables) == set(second.variables), "different variables"
    for name in first.variables:
        if name not in apart_from:
            one, other = first[name], second[name]
            np.testing.assert_array_equal(one.values, other.values, err_msg=name)
            assert one.dims == other.dims and one.attrs == other.attrs, f"{name} is described otherwise"


def check_file(path: Path) -> None:
    """Both engines read the same."""
    first, second = (opened(path, engine) for engine in ENGINES)
    same(first, second)


def check_append(path: Path, folder: Path) -> None:
    """Appends a record and a variable to a copy; the rest stays as it was."""
    copy = folder / "appended.nc"
    shutil.copy(path, copy)
    with netCDF4.Dataset(copy, "a") as data:
        count = len(data.dimensions["age"])
        step = data["age_bnds"][-1, 1] - data["age_bnds"][-1, 0]
        data["age"][count] = data["age"][count - 1] + step
        data["age_bnds"][count] = data["age_bnds"][count - 1] + step
        data.createVariable("added", "f8", ("age",))[:] = 1.0
        data.setncattr("history", "appended by a test")
    before, after = opened(path), opened(copy)
    assert after.sizes["age"] == count + 1
    assert float(after["added"].sum()) == count + 1
    same(before, after.drop_vars("added").isel(age=slice(0, count)))


def together(paths: list[Path], engine: str) -> xr.Dataset:
    """Segments of a run that is not complete, as one set."""
    with xr.open_mfdataset(
        paths,
        engine=engine,
        combine="nested",
        concat_dim="age",
        data_vars="minimal",
        coords="minimal",
        compat="override",
    ) as data:
        check_content(data)
        return data.load()


def check_segments(paths: list[Path], complete: Path) -> None:
    """Segments open together and hold the beginning of the complete run."""
    whole = opened(complete)
    for engine in ENGINES:
        part = together(paths, engine)
        count = part.sizes["age"]
        assert 128 < count < whole.sizes["age"], f"{count} records"
        # Each segment has the state at its own end.
        same(part, whole.isel(age=slice(0, count)), apart_from=("restart_state",))
