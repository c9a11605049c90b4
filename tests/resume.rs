//! A run that was killed or stopped goes on and ends with the numbers of a run in one go.
//!
//! Slow: some 20 s, for 50 kills at random moments.
#![cfg(feature = "netcdf")]

#[path = "cli/program.rs"]
mod program;

use orbicline::output::RunFile;
use program::{Folder, Outcome};
use std::io::Read;
use std::path::Path;
use std::process::{Child, Stdio};
use std::time::{Duration, Instant};

/// 1,000 years in 200 records: three full segments and a rest, about a third of a second.
const LONG: &str = "extends = \"REFERENCE\"
title = \"A run to kill\"
[time]
start_kyr = 11.0
end_kyr = 10.0
record_every_yr = 5
[time.spin_up]
seasonal_yr = 5
settling_yr = 5";

fn folder() -> Folder {
    let folder = Folder::new();
    folder.write("long.toml", LONG);
    folder
}

const RESUME: [&str; 6] = [
    "run",
    "long.toml",
    "--out",
    "killed.nc",
    "--quiet",
    "--resume",
];

fn start(folder: &Folder, words: &[&str]) -> Child {
    let mut command = folder.command(words);
    let quiet = command.stdout(Stdio::piped()).stderr(Stdio::piped());
    quiet.spawn().expect("a program")
}

/// Every variable of a file, as bits.
fn bits(path: &Path) -> Vec<(String, Vec<u64>)> {
    let file = RunFile::open(path).expect("a run file");
    let mut all = Vec::new();
    for name in file.variables() {
        // Names of hemispheres are letters.
        if let Ok(values) = file.array(name) {
            all.push((
                name.to_owned(),
                values.iter().map(|v| v.to_bits()).collect(),
            ));
        }
    }
    assert!(all.len() > 30, "only {} variables", all.len());
    for (name, values) in file.restart().expect("a state") {
        all.push((name, values.iter().map(|v| v.to_bits()).collect()));
    }
    all
}

/// A file made in one go, and the time it took.
fn in_one_go(folder: &Folder) -> (Vec<(String, Vec<u64>)>, Duration) {
    let started = Instant::now();
    let words = ["run", "long.toml", "--out", "whole.nc", "--quiet"];
    let outcome = folder.orbicline(&words);
    assert!(outcome.ok, "{outcome:?}");
    (bits(&folder.path("whole.nc")), started.elapsed())
}

fn segments(folder: &Folder) -> Vec<String> {
    let names = folder.files().into_iter();
    names
        .filter(|n| n.starts_with("killed.nc.seg") && !n.contains("tmp"))
        .collect()
}

#[test]
fn fifty_kills_at_random_moments_change_no_bit() {
    let folder = folder();
    let (whole, took) = in_one_go(&folder);
    let (mut kills, mut with_segments, mut draw) = (0, 0, 42_u64);
    while kills < 50 {
        let mut child = start(&folder, &RESUME);
        // Lehmer's generator (Park & Miller 1988), any seed would do; beyond the whole time it is
        // left alone now and then.
        draw = draw * 48_271 % 2_147_483_647;
        let wait = took.mul_f64(1.1 * draw as f64 / 2_147_483_647.0);
        std::thread::sleep(wait);
        child.kill().expect("a kill");
        let output = child.wait_with_output().expect("an end");
        if output.status.success() {
            assert_eq!(
                bits(&folder.path("killed.nc")),
                whole,
                "after {kills} kills"
            );
            assert!(segments(&folder).is_empty(), "{:?}", folder.files());
            std::fs::remove_file(folder.path("killed.nc")).expect("a file to remove");
        } else {
            assert_eq!(output.status.code(), None, "{:?}", Outcome::of(&output));
            kills += 1;
            with_segments += usize::from(!segments(&folder).is_empty());
        }
    }
    let outcome = folder.orbicline(&RESUME);
    assert!(outcome.ok, "{outcome:?}");
    assert_eq!(bits(&folder.path("killed.nc")), whole);
    assert!(
        with_segments >= 10,
        "only {with_segments} kills in the middle of a run"
    );
}

/// Sends a signal once the run has saved a segment, and waits for the end.
fn stopped_by(folder: &Folder, words: &[&str], signal: &str) -> Outcome {
    let mut child = start(folder, words);
    let since = Instant::now();
    while segments(folder).is_empty() && since.elapsed() < Duration::from_mins(1) {
        std::thread::sleep(Duration::from_millis(2));
    }
    let kill = format!("kill -{signal} {}", child.id());
    let sent = std::process::Command::new("sh")
        .args(["-c", &kill])
        .status();
    assert!(sent.expect("a shell").success());
    let status = child.wait().expect("an end");
    let mut output = std::process::Output {
        status,
        stdout: Vec::new(),
        stderr: Vec::new(),
    };
    let mut pipe = child.stdout.take().expect("a pipe");
    pipe.read_to_end(&mut output.stdout).expect("its words");
    let mut pipe = child.stderr.take().expect("a pipe");
    pipe.read_to_end(&mut output.stderr).expect("its words");
    Outcome::of(&output)
}

#[test]
fn a_signal_closes_the_segment_and_names_the_command_that_goes_on() {
    let folder = folder();
    let (whole, _) = in_one_go(&folder);
    for (signal, code) in [("INT", 130), ("TERM", 143)] {
        let words = ["run", "long.toml", "--out", "killed.nc"];
        let outcome = stopped_by(&folder, &words, signal);
        assert_eq!(outcome.code, Some(code), "{outcome:?}");
        outcome.tells(&[
            "stopped: ",
            " of 200 records",
            "kyr before 1950",
            "killed.nc",
        ]);
        let command = outcome.err.trim_end().lines().last().expect("a command");
        assert!(
            command.ends_with("run long.toml --out killed.nc --resume"),
            "{command}"
        );
        // Not only full segments are kept: the last record before the signal is.
        let count = segments(&folder).len();
        let last = folder.path(&format!("killed.nc.seg{:04}.nc", count - 1));
        let records = 64 * (count - 1) + bits_of_age(&last);
        let told = outcome.err.split_whitespace().nth(1).expect("a number");
        assert_eq!(told, records.to_string(), "{outcome:?}");
        let outcome = folder.orbicline(&RESUME);
        assert!(outcome.ok, "{outcome:?}");
        assert_eq!(bits(&folder.path("killed.nc")), whole, "{signal}");
        let history = RunFile::open(&folder.path("killed.nc")).expect("a file");
        assert_eq!(
            history.global("history").expect("commands").lines().count(),
            2
        );
        std::fs::remove_file(folder.path("killed.nc")).expect("a file to remove");
    }
}

fn bits_of_age(path: &Path) -> usize {
    RunFile::open(path)
        .expect("a segment")
        .array("age")
        .expect("ages")
        .len()
}

#[test]
fn another_configuration_or_version_is_refused_with_the_difference_named() {
    let folder = folder();
    let words = ["run", "long.toml", "--out", "killed.nc"];
    stopped_by(&folder, &words, "TERM");
    let before = folder.files();
    let other = [
        &RESUME[..],
        &["--set", "co2.co2_ppm=300", "--set", "grid.bands=72"],
    ]
    .concat();
    folder.orbicline(&other).says(&[
        "killed.nc.seg0000.nc cannot go on",
        "co2.co2_ppm was 280.0, is now 300",
        "grid.bands was 36, is now 72",
        "--overwrite",
    ]);
    // A segment of another version.
    let segment = folder.path("killed.nc.seg0000.nc");
    for name in segments(&folder) {
        if name != "killed.nc.seg0000.nc" {
            std::fs::remove_file(folder.path(&name)).expect("a segment to remove");
        }
    }
    let file = hdf5::File::open_rw(&segment).expect("a segment");
    let version = file.attr("orbicline_version").expect("a version");
    let other = hdf5::types::FixedAscii::<5>::from_ascii("9.9").expect("ASCII");
    version.write_scalar(&other).expect("another version");
    drop((version, file));
    let is = format!("is now {}", env!("CARGO_PKG_VERSION"));
    folder
        .orbicline(&RESUME)
        .says(&["the program was 9.9", &is]);
    // Without --resume it is not touched either.
    folder
        .orbicline(&words)
        .says(&["--resume", "unfinished run"]);
    assert!(before.contains(&"killed.nc.seg0000.nc".to_owned()) && segment.exists());
}

#[test]
fn a_run_under_a_table_of_land_ice_goes_on_unless_the_table_has_changed() {
    let folder = folder();
    let ice = "[land_ice]\nkind = \"table\"\npath = \"ice.csv\"\nlayout = \"comma\"\n\
               age_column = \"age\"\nage_unit = \"kyr\"\nage_zero_ce = 1950\n\
               age_direction = \"past_positive\"\nage_order = \"youngest_first\"\n\
               largest_gap_kyr = 1\ncolumn = \"edge\"\nangle_unit = \"degree\"\n";
    folder.write("long.toml", &format!("{LONG}\n{ice}"));
    folder.write("ice.csv", "age,edge\n10,75\n11,45\n");
    let (whole, _) = in_one_go(&folder);
    stopped_by(&folder, &["run", "long.toml", "--out", "killed.nc"], "TERM");
    folder.write("ice.csv", "age,edge\n10,75\n11,46\n");
    folder
        .orbicline(&RESUME)
        .says(&["killed.nc.seg0000.nc cannot go on", "the data had SHA-256 "]);
    folder.write("ice.csv", "age,edge\n10,75\n11,45\n");
    let outcome = folder.orbicline(&RESUME);
    assert!(outcome.ok, "{outcome:?}");
    assert_eq!(bits(&folder.path("killed.nc")), whole);
}

#[test]
fn whatever_a_kill_left_behind_the_run_goes_on() {
    let folder = folder();
    let (whole, _) = in_one_go(&folder);
    let copy = |from: &str, to: &str| std::fs::copy(folder.path(from), folder.path(to));
    // Killed while a segment or the merged file was written.
    stopped_by(&folder, &["run", "long.toml", "--out", "killed.nc"], "TERM");
    folder.write("killed.nc.seg0001.tmp", "half a segment");
    folder.write("killed.nc.merging.tmp", "half a file");
    let kept = segments(&folder);
    for name in &kept {
        copy(name, &format!("kept.{name}")).expect("a copy");
    }
    assert!(folder.orbicline(&RESUME).ok);
    assert_eq!(bits(&folder.path("killed.nc")), whole);
    // Killed after the file had taken its name, before the segments were deleted.
    for name in &kept {
        copy(&format!("kept.{name}"), name).expect("a copy");
    }
    let outcome = folder.orbicline(
        &RESUME[..5]
            .iter()
            .chain(&["--resume"])
            .copied()
            .collect::<Vec<_>>(),
    );
    assert!(outcome.ok && segments(&folder).is_empty(), "{outcome:?}");
    assert_eq!(bits(&folder.path("killed.nc")), whole);
    // Complete: nothing is run, and that is said.
    let outcome = folder.orbicline(&["run", "long.toml", "--out", "killed.nc", "--resume"]);
    assert!(
        outcome.ok && outcome.out.contains("complete already"),
        "{outcome:?}"
    );
    // A segment is gone.
    std::fs::remove_file(folder.path("killed.nc")).expect("a file to remove");
    copy(&format!("kept.{}", kept[0]), "killed.nc.seg0001.nc").expect("a copy");
    folder
        .orbicline(&RESUME)
        .says(&["killed.nc.seg0000.nc is missing"]);
}

#[test]
fn an_older_file_is_replaced_only_when_that_is_asked_for() {
    let folder = folder();
    folder.write("killed.nc", "an earlier result");
    folder
        .orbicline(&RESUME)
        .says(&["killed.nc is there but is no run"]);
    let words = ["run", "long.toml", "--out", "killed.nc", "--overwrite"];
    stopped_by(&folder, &words, "INT");
    assert_eq!(folder.read("killed.nc"), b"an earlier result");
    folder
        .orbicline(&RESUME)
        .says(&["killed.nc exists already", "--overwrite"]);
    assert!(!segments(&folder).is_empty(), "segments are gone");
    let outcome = folder.orbicline(&[&words[..], &["--resume"]].concat());
    assert!(outcome.ok, "{outcome:?}");
    assert_eq!(bits_of_age(&folder.path("killed.nc")), 200);
}

/// A run stopped when all but the last segment are there; names of the segments.
fn nearly_done(folder: &Folder) -> Vec<String> {
    let mut words = vec!["run", "long.toml", "--out", "killed.nc", "--quiet"];
    words.extend(["--threads", "1"]);
    let mut child = start(folder, &words);
    let since = Instant::now();
    while segments(folder).len() < 3 && since.elapsed() < Duration::from_mins(1) {
        std::thread::sleep(Duration::from_millis(2));
    }
    child.kill().expect("a kill");
    child.wait().expect("an end");
    segments(folder)
}

#[test]
fn segments_that_do_not_belong_there_are_refused_before_anything_is_computed() {
    let folder = folder();
    let names = nearly_done(&folder);
    assert!(names.len() >= 3, "{names:?}");
    let at = |n: usize| folder.path(&format!("killed.nc.seg{n:04}.nc"));
    let keep: Vec<_> = (0..3)
        .map(|n| std::fs::read(at(n)).expect("a segment"))
        .collect();
    let put = |n: usize, bytes: &[u8]| std::fs::write(at(n), bytes).expect("a segment");
    // Two of them swapped.
    put(0, &keep[1]);
    put(1, &keep[0]);
    folder
        .orbicline(&RESUME)
        .says(&["killed.nc.seg0000.nc does not hold the records"]);
    // One twice.
    put(0, &keep[0]);
    put(1, &keep[2]);
    folder
        .orbicline(&RESUME)
        .says(&["killed.nc.seg0001.nc does not hold the records"]);
    // One of another run.
    let words = [
        "run",
        "long.toml",
        "--out",
        "other.nc",
        "--quiet",
        "--set",
        "co2.co2_ppm=400",
    ];
    assert!(folder.orbicline(&words).ok);
    put(1, &folder.read("other.nc"));
    folder
        .orbicline(&RESUME)
        .says(&["killed.nc.seg0001.nc", "co2.co2_ppm was 400, is now 280.0"]);
    // One cut short, and one whose state was changed.
    put(1, &keep[1][..keep[1].len() / 2]);
    folder
        .orbicline(&RESUME)
        .says(&["killed.nc.seg0001.nc is damaged", "say --resume again"]);
    put(1, &keep[1]);
    let file = hdf5::File::open_rw(at(2)).expect("a segment");
    let state = file.dataset("restart_state").expect("a state");
    let mut numbers = state.read_raw::<f64>().expect("numbers");
    numbers[0] *= 1.0 + f64::EPSILON;
    state.write_raw(&numbers).expect("numbers");
    drop((state, file));
    for name in segments(&folder).iter().skip(3) {
        std::fs::remove_file(folder.path(name)).expect("a segment to remove");
    }
    folder
        .orbicline(&RESUME)
        .says(&["killed.nc.seg0002.nc", "SHA-256"]);
    // With what belongs there the run goes on.
    put(2, &keep[2]);
    let outcome = folder.orbicline(&RESUME);
    assert!(outcome.ok, "{outcome:?}");
    assert_eq!(bits(&folder.path("killed.nc")), in_one_go(&folder).0);
}

#[test]
fn resume_with_overwrite_begins_anew_over_another_result() {
    let folder = folder();
    folder.write("killed.nc", "an earlier result");
    let outcome = folder.orbicline(&[&RESUME[..], &["--overwrite"]].concat());
    assert!(outcome.ok, "{outcome:?}");
    assert_eq!(bits_of_age(&folder.path("killed.nc")), 200);
}
