"""Makes the files to be read: a short run with every component, and one that is not complete."""

import shutil
import signal
import subprocess
import time
from pathlib import Path

REFERENCE = Path(__file__).resolve().parents[2] / "configs" / "reference.toml"
# 140 years in 70 records, more than the 64 of a segment, with little spin-up.
SHORT = f"""extends = "{REFERENCE}"
title = "A short run"
[time]
start_kyr = 10.14
end_kyr = 10.0
record_every_yr = 2
[time.spin_up]
seasonal_yr = 5
settling_yr = 5
"""
# Long enough to be stopped in the middle: the same in 3,000 records.
LONG = SHORT.replace("start_kyr = 10.14", "start_kyr = 16.0")


def short_run(program: Path, folder: Path) -> Path:
    """The complete file."""
    (folder / "short.toml").write_text(SHORT)
    words = [program, "run", "short.toml", "--out", "short.nc", "--quiet"]
    subprocess.run(words, cwd=folder, check=True)
    return folder / "short.nc"


def long_run(program: Path, folder: Path, *words: str) -> subprocess.Popen:
    """Starts the long run."""
    (folder / "long.toml").write_text(LONG)
    command = [program, "run", "long.toml", "--out", "long.nc", "--quiet", *words]
    return subprocess.Popen(command, cwd=folder, stderr=subprocess.DEVNULL)


def segments(program: Path, folder: Path) -> list[Path]:
    """Copies of the segments of the long run, stopped when three of them are there."""
    run = long_run(program, folder)
    while run.poll() is None and not (folder / "long.nc.seg0002.nc").exists():
        time.sleep(0.01)
    run.send_signal(signal.SIGTERM)
    assert run.wait() == 128 + signal.SIGTERM, f"the run ended with {run.returncode}"
    copies = folder / "segments"
    copies.mkdir()
    # When the run goes on and is complete, it deletes its own.
    return [Path(shutil.copy(path, copies)) for path in sorted(folder.glob("long.nc.seg*.nc"))]


def resumed(program: Path, folder: Path) -> Path:
    """The complete file of the long run, from its segments on."""
    assert long_run(program, folder, "--resume").wait() == 0, "the run did not go on"
    return folder / "long.nc"
