#!/bin/sh
# Reads the file of a short run with the tools that users have; see tests/readers/check_readers.py.
#
#   scripts/readers.sh PROGRAM            PROGRAM is the built orbicline
#   scripts/readers.sh PROGRAM --renew    also renews the snapshot tests/readers/schema.cdl
#
# The Python packages go into a folder of their own below the build folder, once for each state of
# tests/readers/requirements.txt.
set -eu

cd "$(dirname "$0")/.."
sh scripts/setup.sh readers

packages=${CARGO_TARGET_DIR:-target}/readers
wanted=tests/readers/requirements.txt
if ! cmp -s "$wanted" "$packages/installed.txt"; then
    printf 'Installing the Python packages of %s into %s ...\n' "$wanted" "$packages"
    rm -rf "$packages"
    python3 -m venv "$packages"
    "$packages/bin/python" -m pip install --quiet --disable-pip-version-check --requirement "$wanted"
    cp "$wanted" "$packages/installed.txt"
fi

# No byte code beside the sources; the CF checker lies beside that Python.
packages=$(cd "$packages" && pwd)
export PATH="$packages/bin:$PATH" PYTHONDONTWRITEBYTECODE=1
exec python tests/readers/check_readers.py "$@"
