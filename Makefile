# Everything a newcomer needs. `make` lists the targets; `make demo` shows what comes out.
# CARGO_TARGET_DIR and HDF5_DIR are respected when set.

SHELL = /bin/sh
target = $(or $(CARGO_TARGET_DIR),target)
# Asked at the moment of use, since setup may only then have installed the library.
cargo = env $$(sh scripts/setup.sh env) cargo

.PHONY: help setup demo build test readers bench lint clean

help:
	@echo 'make demo    build, then run the last million years into out/'
	@echo 'make build   the optimised program'
	@echo 'make test    all tests'
	@echo 'make readers the file of a short run, read by xarray, ncdump, nccopy, h5py, the CF checker'
	@echo 'make bench   speed of the hot parts'
	@echo 'make lint    format, lints and documentation, warnings as errors'
	@echo 'make clean   remove what was built; out/ stays'

setup:
	@sh scripts/setup.sh

demo: build
	$(target)/release/orbicline run configs/last_million_years.toml --out out/last_million_years.nc --overwrite

build: setup
	$(cargo) build --release --locked

test: setup
	$(cargo) test --locked

readers: build
	@sh scripts/readers.sh $(target)/release/orbicline $(RENEW)

bench: setup
	$(cargo) bench --locked

lint: setup
	$(cargo) fmt --check
	$(cargo) clippy --all-targets --locked -- -D warnings
	RUSTDOCFLAGS='-D warnings' $(cargo) doc --no-deps --locked

clean:
	cargo clean
