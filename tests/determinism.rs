//! The same run gives the same file, byte for byte, whatever the number of threads.
#![cfg(feature = "netcdf")]

#[path = "support/reference.rs"]
mod reference;
#[path = "support/short.rs"]
mod short;

use std::path::Path;

/// Bytes of the file of a run with these edits besides those of a short run.
fn bytes(folder: &Path, name: &str, edits: &[&str], threads: usize) -> Vec<u8> {
    let all = [&short::EDITS[..], edits].concat();
    let path = short::run(&reference::experiment(&all), &folder.join(name), threads);
    std::fs::read(path).expect("a file")
}

/// Where two files differ first.
fn first_difference(a: &[u8], b: &[u8]) -> Option<usize> {
    let differ = a.iter().zip(b).position(|(x, y)| x != y);
    differ.or((a.len() != b.len()).then_some(a.len().min(b.len())))
}

#[test]
fn the_same_run_gives_the_same_bytes_with_any_number_of_threads() {
    let folder = tempfile::tempdir().expect("a folder");
    for bands in ["grid.bands=36", "grid.bands=72"] {
        let first = bytes(folder.path(), &format!("{bands}-1.nc"), &[bands], 1);
        assert!(first.len() > 100_000, "only {} bytes", first.len());
        for (number, threads) in [1, 2, 2, 4, 4].into_iter().enumerate() {
            let name = format!("{bands}-{threads}-{number}.nc");
            let again = bytes(folder.path(), &name, &[bands], threads);
            let place = first_difference(&first, &again);
            assert_eq!(
                place, None,
                "{bands}, {threads} threads: differs from this byte on"
            );
        }
    }
}

#[test]
fn a_change_in_the_last_digit_of_one_parameter_changes_the_file() {
    let folder = tempfile::tempdir().expect("a folder");
    let [one, other] = ["0.2870000000000001", "0.2870000000000002"].map(|value| {
        let edit = format!("physics.energy_balance.transport.diffusivity_w_m2_k={value}");
        bytes(folder.path(), &format!("{value}.nc"), &[&edit], 2)
    });
    assert!(first_difference(&one, &other).is_some());
}
