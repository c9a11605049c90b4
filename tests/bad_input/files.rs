//! Files and folders that are not what they should be, other runs, and states that break down.

use super::program::{Folder, SHORT};
use orbicline::output::RunFile;
use std::io::Write;
use std::process::{Child, Command, Stdio};
use std::time::{Duration, Instant};

/// Says on the terminal why a check is left out; the test's own output is hidden.
pub(super) fn left_out(what: &str) {
    // Nothing depends on it.
    let _ = writeln!(std::io::stderr(), "left out: {what}");
}

/// Number of records of a file or segment.
pub(super) fn records(folder: &Folder, name: &str) -> usize {
    let file = RunFile::open(&folder.path(name)).expect("a readable file");
    file.array("age").expect("ages").len()
}

#[test]
fn a_folder_where_a_file_should_be_is_told_and_left_alone() {
    let folder = Folder::new();
    std::fs::create_dir(folder.path("taken")).expect("a folder");
    let cases: [(&[&str], &str); 3] = [
        (
            &["taken", "--out", "never.nc"],
            "taken: cannot be read: Is a directory",
        ),
        (
            &["short.toml", "--out", "taken"],
            "taken cannot be an output file: it is a folder",
        ),
        (
            &["short.toml", "--out", "short.toml/run.nc"],
            "a file stands where the folder should be",
        ),
    ];
    for (words, message) in cases {
        folder
            .orbicline(&[&["run"], words].concat())
            .says(&[message]);
        assert_eq!(folder.files(), ["short.toml", "taken"], "{words:?}");
    }
}

#[cfg(unix)]
#[test]
fn what_may_not_be_read_or_written_is_told() {
    use std::os::unix::fs::PermissionsExt;
    let folder = Folder::new();
    let forbid = |name, mode| {
        let mode = std::fs::Permissions::from_mode(mode);
        std::fs::set_permissions(folder.path(name), mode).expect("a mode");
    };
    folder.write("secret.toml", SHORT);
    forbid("secret.toml", 0o000);
    if std::fs::File::open(folder.path("secret.toml")).is_ok() {
        return left_out("files without permission; this user may read everything");
    }
    let outcome = folder.orbicline(&["run", "secret.toml", "--out", "never.nc"]);
    outcome.says(&["secret.toml: cannot be read: Permission denied"]);
    std::fs::create_dir(folder.path("locked")).expect("a folder");
    forbid("locked", 0o555);
    let outcome = folder.orbicline(&["run", "short.toml", "--out", "locked/run.nc"]);
    outcome.says(&[
        "locked/run.nc",
        "Permission denied",
        "choose an output elsewhere",
    ]);
}

/// A run, ended with the test if it has not ended itself.
struct Running(Child);

impl Drop for Running {
    fn drop(&mut self) {
        // Already gone, or ended here; either way there is nothing to say.
        let _ = self.0.kill();
        let _ = self.0.wait();
    }
}

#[test]
fn a_second_run_of_the_same_output_is_refused_and_disturbs_nothing() {
    let folder = Folder::new();
    let first = Command::new(env!("CARGO_BIN_EXE_orbicline"))
        .args(["run", "short.toml", "--out", "run.nc", "--quiet"])
        .args(["--set", "time.start_kyr=100"])
        .current_dir(folder.path(""))
        .stdout(Stdio::null())
        .spawn();
    let mut first = Running(first.expect("a program"));
    let begun = Instant::now();
    while !folder.path("run.nc.seg0001.nc").exists() {
        assert!(
            first.0.try_wait().expect("a status").is_none(),
            "the first run ended"
        );
        assert!(
            begun.elapsed() < Duration::from_mins(1),
            "the first run makes no segment"
        );
        std::thread::sleep(Duration::from_millis(5));
    }
    for more in [&[][..], &["--overwrite"]] {
        let words = [&["run", "short.toml", "--out", "run.nc"], more].concat();
        folder
            .orbicline(&words)
            .says(&["run.nc", "another run is writing it"]);
        assert_eq!(records(&folder, "run.nc.seg0000.nc"), 64, "{more:?}");
    }
    drop(first);
    let outcome = folder.orbicline(&["run", "short.toml", "--out", "run.nc"]);
    outcome.says(&["run.nc", "unfinished run", "run.nc.seg0000.nc"]);
    assert_eq!(records(&folder, "run.nc.seg0001.nc"), 64);
    assert!(!folder.path("run.nc").exists());
    let outcome = folder.orbicline(&["run", "short.toml", "--out", "run.nc", "--overwrite"]);
    assert!(outcome.ok, "{outcome:?}");
    assert_eq!(folder.files(), ["run.nc", "short.toml"]);
}

/// Carbon dioxide that rises beyond bearing after the first segment of 64 records.
const DEADLY: &str = "age_kyr,co2_ppm\n9,100000\n10.008,100000\n10.01,280\n11,280\n";

#[test]
fn a_state_that_breaks_down_is_told_with_year_latitude_and_variable() {
    let folder = Folder::new();
    folder.write("deadly.csv", DEADLY);
    let cases = [
        (
            "1e305",
            "air temperature is not finite at the band at -87.5 degrees north",
        ),
        ("100", "energy_balance: temperature reaches"),
    ];
    for (forcing, message) in cases {
        for threads in ["1", "2"] {
            let forcing = format!("co2_forcing.co2_forcing_w_m2={forcing}");
            let mut words = vec!["run", "short.toml", "--out", "run.nc", "--overwrite"];
            words.extend(["--set", "co2={kind=\"table\",path=\"deadly.csv\"}"]);
            words.extend(["--set", "co2_forcing.co2_reference_ppm=280"]);
            words.extend(["--set", &forcing, "--threads", threads]);
            let outcome = folder.orbicline(&words);
            outcome.says(&[
                "at 10.0",
                " kyr before 1950 (year 13",
                " of the run)",
                message,
            ]);
            outcome.says(&["degrees north"]);
            assert_eq!(records(&folder, "run.nc.seg0000.nc"), 64);
            assert_eq!(
                folder.files(),
                [
                    "deadly.csv",
                    "run.nc.seg0000.nc",
                    "run.nc.seg0001.nc",
                    "short.toml"
                ]
            );
            assert!(records(&folder, "run.nc.seg0001.nc") >= 1);
            outcome.says(&[" of 70 records, to 10.0", "are kept in segments"]);
        }
    }
}

#[test]
fn the_band_that_is_told_is_where_the_state_broke() {
    let folder = Folder::new();
    // Land that takes up more than all sunlight: the trouble begins where there is land and sun.
    let edit = "physics.energy_balance.albedo.land_excess=-1";
    let outcome = folder.orbicline(&["run", "short.toml", "--out", "run.nc", "--set", edit]);
    outcome.says(&["(spin-up)", "at the band at ", "degrees north"]);
    assert!(
        !outcome.err.contains("-87.5"),
        "the first of all bands: {outcome:?}"
    );
    assert_eq!(folder.files(), ["short.toml"]);
}
