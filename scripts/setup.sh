#!/bin/sh
# Prepares this machine for building: the serial HDF5 library with its headers, and a C compiler.
#
#   scripts/setup.sh        installs what is missing; does and prints nothing if nothing is
#   scripts/setup.sh env    prints HDF5_DIR=... for the build, where the serial HDF5 of Debian and
#                           its kin is installed; nothing elsewhere, or when HDF5_DIR is set
#   scripts/setup.sh readers    installs what `make readers` needs: ncdump, nccopy, venv of Python
#
# On machines with an MPI flavour of HDF5 the default search finds that one first, so the folder
# of the serial flavour is named explicitly.
set -eu

cd "$(dirname "$0")/.."
log=${CARGO_TARGET_DIR:-target}/setup.log

# Folder of the serial HDF5 of Debian and its kin, on any architecture.
serial_dir() {
    triplet=$(dpkg-architecture -qDEB_HOST_MULTIARCH 2>/dev/null) ||
        triplet=$(gcc -dumpmachine 2>/dev/null) ||
        triplet=
    for dir in "/usr/lib/$triplet/hdf5/serial" /usr/lib/*/hdf5/serial; do
        if [ -f "$dir/include/H5pubconf.h" ]; then
            printf '%s\n' "$dir"
            return
        fi
    done
}

has_hdf5() {
    [ -n "${HDF5_DIR:-}" ] || [ -n "$(serial_dir)" ] ||
        pkg-config --exists hdf5 2>/dev/null || [ -f /usr/include/H5pubconf.h ] ||
        { command -v brew && brew --prefix hdf5; } >/dev/null 2>&1
}

# apt-get with the rights to install, quietly; its words go to the log.
install_quietly() {
    mkdir -p "$(dirname "$log")"
    printf 'Installing %s (log: %s) ...\n' "$*" "$log" >&2
    # Without fresh lists the mirror may no longer have the versions that they name.
    if ! {
        $as_root env DEBIAN_FRONTEND=noninteractive apt-get -q update &&
            $as_root env DEBIAN_FRONTEND=noninteractive \
                apt-get -qy --no-install-recommends install "$@"
    } >"$log" 2>&1 </dev/null; then
        cat "$log" >&2
        printf 'setup: could not install %s; the log is above and in %s\n' "$*" "$log" >&2
        exit 1
    fi
}

if [ "${1:-}" = env ]; then
    if [ -z "${HDF5_DIR:-}" ]; then
        dir=$(serial_dir)
        [ -z "$dir" ] || printf 'HDF5_DIR=%s\n' "$dir"
    fi
    exit 0
fi

if ! command -v cargo >/dev/null 2>&1; then
    version=$(sed -n 's/^channel = "\(.*\)"/\1/p' rust-toolchain.toml)
    printf 'setup: cargo is missing; install the Rust toolchain %s with rustup\n' "$version" >&2
    exit 1
fi

missing=
purpose='; or set HDF5_DIR to an HDF5 folder'
if [ "${1:-}" = readers ]; then
    purpose=
    { command -v ncdump && command -v nccopy; } >/dev/null 2>&1 || missing="netcdf-bin "
    python3 -c 'import ensurepip, venv' >/dev/null 2>&1 || missing="${missing}python3-venv"
else
    command -v cc >/dev/null 2>&1 || missing="gcc libc6-dev "
    has_hdf5 || missing="${missing}libhdf5-dev"
fi
[ -n "$missing" ] || exit 0

as_root=
if command -v apt-get >/dev/null 2>&1; then
    if [ "$(id -u)" = 0 ]; then
        # The names are words on purpose.
        # shellcheck disable=SC2086
        install_quietly $missing
        exit 0
    elif sudo -n true >/dev/null 2>&1; then
        as_root="sudo -n"
        # shellcheck disable=SC2086
        install_quietly $missing
        exit 0
    fi
fi
printf 'setup: please install (names as in Debian): %s%s\n' "$missing" "$purpose" >&2
exit 1
