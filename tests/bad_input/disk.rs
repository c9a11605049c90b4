//! Disks that fill up: in a segment, in the merged file, and in the last bytes of either.
//!
//! Three such disks: a limit of the file size, which needs no privilege and cuts at any byte; a small
//! file system in memory, mounted where only the run sees it, which needs the right to mount (as root
//! or in a user namespace of Linux); and single calls that fail, which needs `strace`. Where something
//! is missing the test says so.
#![cfg(target_os = "linux")]

use super::files::{left_out, records};
use super::program::Folder;
use orbicline::output::RunFile;
use std::process::{Command, Output};

/// The run is made with these words in a shell, wherever the disk is.
const RUN: &str = "\"$PROGRAM\" run short.toml --out disk/run.nc --overwrite --quiet";
/// Exit status of a shell that could not make the disk.
const NO_DISK: i32 = 99;
/// Size of a page: what a file system in memory gives away at once, bytes.
const PAGE: u64 = 4096;

/// Runs a script in the folder, beginning with `before`, such as the program that gives rights.
fn shell(folder: &Folder, before: &[&str], script: &str) -> Output {
    let words: Vec<&str> = before.iter().copied().chain(["sh", "-c", script]).collect();
    Command::new(words[0])
        .args(&words[1..])
        .env("PROGRAM", env!("CARGO_BIN_EXE_orbicline"))
        .current_dir(folder.path(""))
        .output()
        .expect("a shell")
}

/// A folder with an earlier result in `disk`.
fn with_earlier_result() -> Folder {
    let folder = Folder::new();
    std::fs::create_dir(folder.path("disk")).expect("a folder");
    folder.write("disk/run.nc", "an earlier result");
    folder
}

fn exists(program: &str) -> bool {
    Command::new(program).arg("--version").output().is_ok()
}

fn size(folder: &Folder, name: &str) -> u64 {
    std::fs::metadata(folder.path(name)).expect("a file").len()
}

/// What is left in `kept` after a run on a disk that may have been too small: all or, with an
/// error, what there was before and whole segments. Returns the file that did not fit.
fn fate(folder: &Folder, kept: &str, outcome: &Output, words: &str) -> Option<String> {
    let told = String::from_utf8_lossy(&outcome.stderr).into_owned();
    let files = folder.files_in(kept);
    if outcome.status.success() {
        assert_eq!(files, ["run.nc"], "{told}");
        assert_eq!(records(folder, &format!("{kept}/run.nc")), 70);
        return None;
    }
    assert_eq!(outcome.status.code(), Some(1), "{told}");
    assert_eq!(told.lines().count(), 1, "{told}");
    assert!(told.contains(words), "{told}");
    assert_eq!(folder.read(&format!("{kept}/run.nc")), b"an earlier result");
    for (number, count) in [64, 6].iter().enumerate().take(files.len() - 1) {
        let name = format!("run.nc.seg000{number}.nc");
        assert_eq!(files[number + 1], name, "{told}");
        assert_eq!(records(folder, &format!("{kept}/{name}")), *count);
    }
    let word = told.split_whitespace().find(|w| w.contains("disk/run.nc"));
    let file = word.unwrap_or_else(|| panic!("no file in {told}"));
    Some(file.trim_end_matches(':').to_owned())
}

/// Runs where no file may be longer than `bytes`; the signal that says so is ignored, so that the
/// program meets an error of writing as on a full disk.
fn limited(folder: &Folder, bytes: u64) -> Option<String> {
    folder.write("disk/run.nc", "an earlier result");
    let limit = [
        "prlimit",
        &format!("--fsize={bytes}"),
        "env",
        "--ignore-signal=XFSZ",
    ];
    let outcome = shell(folder, &limit, RUN);
    fate(folder, "disk", &outcome, "File too large")
}

/// Sizes of the file and of its two segments, bytes.
fn sizes() -> [u64; 3] {
    let folder = with_earlier_result();
    assert!(shell(&folder, &["env"], RUN).status.success());
    let whole = size(&folder, "disk/run.nc");
    let file = limited(&folder, whole - 1).expect("one byte too few");
    assert_eq!(file, "disk/run.nc.merging.tmp");
    [
        whole,
        size(&folder, "disk/run.nc.seg0000.nc"),
        size(&folder, "disk/run.nc.seg0001.nc"),
    ]
}

#[test]
fn a_file_cut_at_any_byte_is_an_error_and_whole_segments_stay() {
    if !exists("prlimit") {
        return left_out("files cut at any byte; prlimit is not there");
    }
    let [whole, first, _] = sizes();
    let folder = with_earlier_result();
    for bytes in [0, 100, 3000, first / 2, first - 4000, first - 1] {
        let file = limited(&folder, bytes);
        assert_eq!(
            file.as_deref(),
            Some("disk/run.nc.seg0000.tmp"),
            "{bytes} bytes"
        );
    }
    // The library reaches some kilobytes beyond what it keeps, so which file is cut is not known;
    // whatever is, `fate` holds it to the rules, up to the last bytes written when it is closed.
    let last = (0..9).map(|k| whole - 2000 + 2000 * k);
    for bytes in [first, first + 5000, u64::midpoint(first, whole)]
        .into_iter()
        .chain(last)
    {
        limited(&folder, bytes);
    }
    assert_eq!(limited(&folder, 2 * whole), None, "the file fits");
}

/// What gives the right to mount in a name space of its own.
fn mounting(folder: &Folder) -> Option<&'static [&'static str]> {
    let ways: [&[&str]; 2] = [
        &["unshare", "--mount"],
        &["unshare", "--user", "--map-root-user", "--mount"],
    ];
    let mount = "mount -t tmpfs -o size=64k tmpfs disk";
    let works = |way: &&&[&str]| exists(way[0]) && shell(folder, way, mount).status.success();
    ways.iter().find(works).copied()
}

/// Runs on a disk of so many pages, one of which an earlier result takes.
fn on_disk(way: &[&str], pages: u64) -> Option<String> {
    let folder = with_earlier_result();
    std::fs::create_dir(folder.path("kept")).expect("a folder");
    // The mount ends with the shell, so what is on it is copied away.
    let script = format!(
        "mount -t tmpfs -o size={} tmpfs disk || exit {NO_DISK}
         printf 'an earlier result' > disk/run.nc
         {RUN}
         status=$?
         cp disk/* kept/ && exit $status",
        pages * PAGE
    );
    let outcome = shell(&folder, way, &script);
    assert_ne!(outcome.status.code(), Some(NO_DISK), "{outcome:?}");
    fate(
        &folder,
        "kept",
        &outcome,
        "No space left on device (os error 28); free space",
    )
}

#[test]
fn a_full_disk_is_an_error_and_all_that_was_on_it_stays() {
    let folder = with_earlier_result();
    let Some(way) = mounting(&folder).filter(|_| exists("prlimit")) else {
        return left_out("full disks; this user may not mount a file system");
    };
    let [whole, first, second] = sizes().map(|bytes| bytes.div_ceil(PAGE));
    // One page for the earlier result, one for the log.
    for (pages, file) in [
        (1, "disk/run.nc.seg0000.tmp"),
        (2 + first / 2, "disk/run.nc.seg0000.tmp"),
        (1 + first, "disk/run.nc.seg0000.tmp"),
        (2 + first + second / 2, "disk/run.nc.seg0001.tmp"),
        (1 + first + second, "disk/run.nc.seg0001.tmp"),
        (2 + first + second, "disk/run.nc.merging.tmp"),
        (2 + first + second + whole / 2, "disk/run.nc.merging.tmp"),
        (1 + first + second + whole, "disk/run.nc.merging.tmp"),
    ] {
        assert_eq!(on_disk(way, pages).as_deref(), Some(file), "{pages} pages");
    }
    let enough = 2 + first + second + whole;
    assert_eq!(on_disk(way, enough + 16), None, "the run fits");
}

#[test]
fn a_disk_that_may_only_be_read_is_told_at_once() {
    let folder = with_earlier_result();
    let Some(way) = mounting(&folder) else {
        return left_out("read-only disks; this user may not mount a file system");
    };
    let script = format!("mount -t tmpfs -o ro tmpfs disk || exit {NO_DISK}; {RUN}");
    let outcome = shell(&folder, way, &script);
    let told = String::from_utf8_lossy(&outcome.stderr).into_owned();
    assert_eq!(outcome.status.code(), Some(1), "{told}");
    for fragment in [
        "disk/run.nc",
        "Read-only file system",
        "choose an output elsewhere",
    ] {
        assert!(told.contains(fragment), "{told}");
    }
    assert!(
        RunFile::open(&folder.path("disk/run.nc")).is_err(),
        "the result below is untouched"
    );
}

/// Runs under `strace` with more of its options and returns what it did and the calls of `call`.
fn traced(folder: &Folder, call: &str, option: &str) -> (Output, usize) {
    folder.write("disk/run.nc", "an earlier result");
    let trace = format!("trace={call}");
    let mut words = vec!["strace", "-f", "-qq", "-o", "calls", "-e", &trace];
    if !option.is_empty() {
        words.extend(["-e", option]);
    }
    let outcome = shell(folder, &words, RUN);
    let calls = String::from_utf8_lossy(&folder.read("calls")).into_owned();
    (outcome, calls.matches(&format!("{call}(")).count())
}

#[test]
fn the_last_write_of_a_file_fails_when_it_is_closed_and_that_is_an_error() {
    let folder = with_earlier_result();
    folder.write("calls", "");
    if !exists("strace") || !traced(&folder, "pwrite64", "").0.status.success() {
        return left_out("writes that fail on closing; strace is not there or may not trace");
    }
    for call in ["pwrite64", "ftruncate", "fsync"] {
        let (_, calls) = traced(&folder, call, "");
        assert!(calls >= 6, "{calls} calls of {call}");
        // Syncing ends with the folder, when the file has its name already.
        let last = if call == "fsync" { calls - 1 } else { calls };
        let option = format!("inject={call}:error=ENOSPC:when={last}");
        let (outcome, _) = traced(&folder, call, &option);
        let file = fate(&folder, "disk", &outcome, "No space left on device");
        assert!(
            file.is_some_and(|file| file.contains("disk/run.nc.merging.tmp")),
            "{outcome:?}"
        );
        assert_eq!(records(&folder, "disk/run.nc.seg0001.nc"), 6, "{call}");
    }
}
