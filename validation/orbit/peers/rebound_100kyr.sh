#!/bin/sh
# The map of Orbicline against a general N-body library over 100 kyr; optional, about three minutes.
#
#   sh validation/orbit/peers/rebound_100kyr.sh [PROGRAM]
#
# Installs rebound (PyPI, below version 5: later ones have another interface) and numpy into a
# temporary folder, which is deleted at the end, so it needs Python 3.11 and a package index.
# PROGRAM is the built orbicline, by default target/release/orbicline.
set -eu
here=$(cd "$(dirname "$0")" && pwd)
root=$(cd "$here/../../.." && pwd)
program=${1:-$root/target/release/orbicline}
folder=$(mktemp -d)
trap 'rm -rf "$folder"' EXIT INT TERM
python3 -m venv "$folder/venv"
"$folder/venv/bin/pip" --quiet install 'rebound<5' numpy
# Newton's law alone: no relativity, Moon or flattening, which the library's integrator lacks.
"$program" orbit --integrate --from-kyr 100 --to-kyr 0 --out "$folder/own.table" --quiet \
    --set units.light_speed_km_s=1e15 --set moon.quadrupole_factor=0 --set sun.j2=0
"$folder/venv/bin/python" "$here/rebound_100kyr.py" \
    "$root/configs/orbit_constants.toml" "$folder/own.table"
