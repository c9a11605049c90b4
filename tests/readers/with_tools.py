"""What the tools of NetCDF, HDF5 and the CF conventions make of run files."""

import difflib
import json
import re
import shutil
import subprocess
import sys
from pathlib import Path

import h5py
import netCDF4
import with_xarray

SNAPSHOT = Path(__file__).with_name("schema.cdl")
# Attributes whose text depends on the version, the command or the place of the files.
VOLATILE = (
    "history",
    "configuration",
    "configuration_sha256",
    "source",
    "orbicline_version",
    "orbicline_commit",
    "command_line",
    "input_sha256",
)


def header(path: Path) -> str:
    """What `ncdump -h` prints, without what changes from one run to the next."""
    words = ["ncdump", "-h", path]
    text = subprocess.run(words, check=True, capture_output=True, text=True).stdout
    text = re.sub(r"^netcdf .* {", "netcdf run {", text)
    # The last digits of a state depend on the machine's mathematical functions.
    text = re.sub(r'(restart_state:sha256 = )"\w+"', r'\1"(varies)"', text)
    names = "|".join(VOLATILE)
    return re.sub(rf'^(\t\t:(?:{names}) = )"(?:[^"\\]|\\.|"(?! ;\n))*" ;\n', r'\1"(varies)" ;' "\n", text, flags=re.M)


def check_schema(path: Path) -> None:
    """Dimensions, variables and attributes are those of the snapshot."""
    now, snapshot = header(path), SNAPSHOT.read_text()
    if now != snapshot:
        lines = (snapshot.splitlines(), now.splitlines())
        print(*difflib.unified_diff(*lines, "schema.cdl", "now", lineterm=""), sep="\n")
        sys.exit(
            "The file is not as in tests/readers/schema.cdl. If that is meant, renew it with "
            "`make readers RENEW=--renew`, read what changed, and tell users in CHANGELOG.md."
        )


def renew_schema(path: Path) -> None:
    """Takes the file as it is for the snapshot."""
    SNAPSHOT.write_text(header(path))


def check_copies(path: Path, folder: Path) -> None:
    """`nccopy` copies the file: as it is, compressed harder, and in older formats."""
    before = with_xarray.opened(path)
    for name, options in {
        "nc4": ("-k", "nc4"),
        "deflated": ("-k", "nc4", "-d", "4", "-s"),
        "classic_model": ("-k", "nc7", "-d", "4"),
        "classic": ("-k", "nc6"),
    }.items():
        copy = folder / f"{name}.nc"
        subprocess.run(["nccopy", *options, path, copy], check=True)
        with_xarray.same(before, with_xarray.opened(copy))
        if name == "deflated":
            with_xarray.check_append(copy, folder)


def check_h5py(path: Path) -> None:
    """Every dataset reads, and every axis has exactly one scale, of its own length."""
    with h5py.File(path) as data:
        count = 0
        for name, dataset in data.items():
            assert isinstance(dataset, h5py.Dataset), f"{name} is no dataset"
            dataset[()]
            count += 1
            if dataset.is_scale:
                continue
            for axis, dimension in enumerate(dataset.dims):
                assert len(dimension) == 1, f"axis {axis} of {name} has {len(dimension)} scales"
                scale = dimension[0]
                assert scale.is_scale and scale.shape == (dataset.shape[axis],), f"{name}, axis {axis}"
        assert count > 60, f"only {count} datasets"


def findings(path: Path, folder: Path) -> list[str]:
    """What the CF checker finds; it needs no network."""
    report = folder / "report.json"
    words = ["compliance-checker", "--test", "cf:1.11", "--criteria", "strict", "-f", "json"]
    # A finding of any weight makes its status 1 under these criteria.
    status = subprocess.run([*words, "-o", report, path], capture_output=True, text=True)
    result = json.loads(report.read_text())["cf:1.11"]
    found = [
        f"{item['name']}: {message}"
        for weight in ("high_priorities", "medium_priorities", "low_priorities")
        for item in result[weight]
        for message in item["msgs"]
    ]
    assert (status.returncode == 0) == (not found), f"status {status.returncode}: {status.stderr}"
    return found


def check_conventions(path: Path, folder: Path) -> None:
    """The CF checker finds nothing, and it would find a missing unit and a missing remark."""
    found = findings(path, folder)
    assert not found, "\n".join(found)
    spoiled = folder / "spoiled.nc"
    shutil.copy(path, spoiled)
    with netCDF4.Dataset(spoiled, "a") as data:
        data["co2"].delncattr("units")
        data["air_temperature_2m"].delncattr("units_metadata")
    found = "\n".join(findings(spoiled, folder))
    assert "co2" in found and "air_temperature_2m" in found, f"the checker only found: {found}"
