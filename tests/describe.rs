//! `orbicline describe`: what it tells of a file and of a segment, and that damaged and foreign files
//! end in one message.
#![cfg(feature = "netcdf")]

#[path = "cli/program.rs"]
mod program;
#[path = "support/reference.rs"]
mod reference;

use hdf5::types::VarLenUnicode;
use orbicline::experiment::describe::{Part, describe};
use orbicline::experiment::follow::{Event, Follower};
use orbicline::experiment::single::{self, Begin, Destination, Outcome};
use orbicline::output::Overwrite;
use program::Folder;
use std::ops::ControlFlow;
use std::str::FromStr;

/// The edits that make the short run of the reference.
const EDITS: [&str; 5] = [
    "time.start_kyr=10.14",
    "time.end_kyr=10.0",
    "time.record_every_yr=2",
    "time.spin_up.seasonal_yr=5",
    "time.spin_up.settling_yr=5",
];

/// A folder with the file of the short run, an earlier edit of one key included.
fn with_file() -> Folder {
    let folder = Folder::new();
    let words = [
        "run",
        "short.toml",
        "--out",
        "short.nc",
        "--quiet",
        "--set",
        "physics.equatorial_pacific.tilt_m=50",
    ];
    assert!(folder.orbicline(&words).ok);
    folder
}

#[test]
fn a_complete_file_is_told_within_100_columns() {
    let folder = with_file();
    let outcome = folder.orbicline(&["describe", "short.nc"]);
    assert!(outcome.ok && outcome.err.is_empty(), "{outcome:?}");
    for fragment in [
        "short.nc\nA short run\n",
        "complete: all 70 records of 2 years",
        "10.140 to 10.000 kyr before 1950",
        "1 (years of orbit and ocean column per seasonal year)",
        "36 bands, 72 steps a year",
        "energy_balance, equatorial_pacific, ocean_column, rain_belt",
        concat!("Orbicline ", env!("CARGO_PKG_VERSION")),
        "this program",
        "run short.toml --out short.nc",
        "(configuration, data)",
        "configs/reference.toml",
        "6 keys differ",
        "  physics.equatorial_pacific.tilt_m: 60.0 -> 50\n",
        "  time.start_kyr: 0.0 -> 10.14\n",
        "berger1978",
        "constant, co2_ppm = 280.0",
        "280.0 to 280.0 ppm",
        "of the sunlight absorbed",
        "3248 numbers to go on from: energy_balance 1080",
        "before compression",
        "age 70, bnds 2, lat 36",
        "(age, month, lat)",
    ] {
        assert!(
            outcome.out.contains(fragment),
            "no `{fragment}` in\n{}",
            outcome.out
        );
    }
    assert!(!outcome.out.contains("title:") && !outcome.out.contains("WARNING"));
    // Paths and words of commands are left whole, however long.
    let wide = outcome.out.lines().find(|line| {
        line.chars().count() > 100 && line.trim_start().contains(' ') && !line.contains('/')
    });
    assert_eq!(wide, None);
}

#[test]
fn the_numbers_are_those_of_the_file() {
    let folder = with_file();
    let path = folder.path("short.nc");
    let told = describe(&path).expect("a description");
    let file = orbicline::output::RunFile::open(&path).expect("a file");
    let tilt = file.series("obliquity").expect("a series").values;
    let told_tilt = told.forcing.iter().find(|f| f.name == "obliquity");
    // It falls through the 140 years.
    let ends = [tilt[69].min(tilt[0]), tilt[69].max(tilt[0])];
    assert_eq!(told_tilt.map(|f| f.range), Some(ends));
    let heat = told.heat.expect("a ledger");
    let residual = file.series("heat_residual").expect("a series").values[69];
    assert_eq!(heat.last_j.to_bits(), residual.to_bits());
    assert!(heat.largest_relative < 1e-14 && heat.change_j.abs() > 1e20);
    assert_eq!(told.file_bytes, folder.read("short.nc").len() as u64);
    let insolation = told.variables.iter().find(|v| v.name == "insolation");
    let insolation = insolation.expect("a variable");
    assert_eq!(insolation.raw_bytes, 70 * 12 * 36 * 4);
    assert!(insolation.stored_bytes < insolation.raw_bytes);
    assert_eq!(told.origin.sha256, told.origin.stored_sha256);
    assert_eq!(told.origin.inputs.len(), 2);
    let names: Vec<_> = told.restart.iter().map(|(name, _)| name.as_str()).collect();
    assert!(
        names.contains(&"exchange") && names.contains(&"ledger"),
        "{names:?}"
    );
}

/// Stops a run after so many years.
struct Until(f64);

impl Follower for Until {
    fn told(&mut self, _: &Event) {}

    fn spun_up(&mut self, _: u32, _: u32) -> ControlFlow<()> {
        ControlFlow::Continue(())
    }

    fn passed(&mut self, years: f64) -> ControlFlow<()> {
        if years < self.0 {
            ControlFlow::Continue(())
        } else {
            ControlFlow::Break(())
        }
    }
}

#[test]
fn a_segment_says_which_records_it_holds() {
    let folder = Folder::new();
    let destination = Destination {
        path: folder.path("part.nc"),
        overwrite: Overwrite::Refuse,
        begin: Begin::Anew,
        threads: 1,
    };
    let words = ["orbicline", "run"].map(str::to_owned);
    let experiment = reference::experiment(&EDITS);
    let stopped = single::run(&experiment, &destination, &words, &mut Until(134.0));
    assert!(matches!(stopped, Ok(Outcome::Stopped(_))), "{stopped:?}");
    let segments = ["part.nc.seg0000.nc", "part.nc.seg0001.nc", "short.toml"];
    assert_eq!(folder.files(), segments);
    let told = describe(&folder.path(segments[0])).expect("a description");
    assert_eq!(told.span.part, Part::Segment { first: 1, of: 70 });
    let outcome = folder.orbicline(&["describe", "part.nc.seg0001.nc"]);
    assert!(outcome.ok, "{outcome:?}");
    let records = "not complete: records 65 to 67 of 70, each of 2 years";
    assert!(outcome.out.contains(records), "{}", outcome.out);
    assert!(
        outcome.out.contains("10.012 to 10.006 kyr"),
        "{}",
        outcome.out
    );
    // The output is not there yet: its segments are named instead.
    let outcome = folder.orbicline(&["describe", "part.nc"]);
    outcome.says(&["part.nc", "2 segment(s)", "part.nc.seg0001.nc"]);
    assert_eq!(outcome.code, Some(1));
}

/// Asserts that a file is refused with one line that holds the fragment.
fn refused(folder: &Folder, name: &str, fragment: &str) {
    let outcome = folder.orbicline(&["describe", name]);
    outcome.says(&["error: ", name, fragment]);
    assert_eq!(outcome.code, Some(1), "{outcome:?}");
    assert_eq!(outcome.err.lines().count(), 1, "{outcome:?}");
}

#[test]
fn what_is_no_run_file_is_refused_in_one_line() {
    let folder = Folder::new();
    folder.write("empty.nc", "");
    folder.write("text.nc", "somebody's words, longer than a signature");
    folder.write("classic.nc", "CDF\u{1} and what follows");
    std::fs::create_dir(folder.path("folder.nc")).expect("a folder");
    let foreign = hdf5::File::create(folder.path("foreign.h5")).expect("a file");
    let values = foreign.new_dataset::<f64>().shape(3).create("age");
    values
        .expect("a variable")
        .write(&[3.0, 2.0, 1.0])
        .expect("to write");
    foreign.close().expect("to close");
    for (name, fragment) in [
        ("missing.nc", "No such file"),
        ("empty.nc", "it is empty"),
        ("text.nc", "it does not begin as HDF5"),
        ("classic.nc", "classic NetCDF"),
        ("folder.nc", "it is a folder"),
        ("foreign.h5", "another program made it"),
    ] {
        refused(&folder, name, fragment);
    }
}

#[test]
fn a_file_cut_short_anywhere_is_refused_in_one_line() {
    let folder = with_file();
    let whole = folder.read("short.nc");
    let length = whole.len();
    for kept in [
        9,
        47,
        48,
        100,
        2000,
        length / 3,
        length / 2,
        length - 4096,
        length - 1,
    ] {
        std::fs::write(folder.path("cut.nc"), &whole[..kept]).expect("a file");
        refused(&folder, "cut.nc", "damaged or cut short");
    }
}

#[test]
fn damaged_bytes_end_in_one_line_or_are_not_seen() {
    let folder = with_file();
    let whole = folder.read("short.nc");
    let (mut seen, mut draw) = (0, 7_u64);
    for _ in 0..60 {
        let mut bytes = whole.clone();
        // Lehmer's generator (Park & Miller 1988); any seed would do.
        draw = draw * 48_271 % 2_147_483_647;
        let place = usize::try_from(draw).expect("an index") % bytes.len();
        bytes[place] ^= 0xff;
        std::fs::write(folder.path("damaged.nc"), &bytes).expect("a file");
        let outcome = folder.orbicline(&["describe", "damaged.nc"]);
        match outcome.code {
            // Unused space, and the few numbers that are not compressed, have no check sum.
            Some(0) => {}
            Some(1) => {
                outcome.says(&["error: ", "damaged.nc"]);
                assert_eq!(outcome.err.lines().count(), 1, "{outcome:?}");
                seen += 1;
            }
            _ => panic!("byte {place}: {outcome:?}"),
        }
    }
    assert!(seen >= 30, "only {seen} of 60 were seen");
}

#[test]
fn a_file_whose_attributes_were_changed_says_so() {
    let folder = with_file();
    let file = hdf5::File::open_rw(folder.path("short.nc")).expect("a file");
    for (name, text) in [
        ("title", "\u{1b}[31mred"),
        ("configuration", "[co2]\nx = 1\n"),
    ] {
        file.delete_attr(name).expect("to delete");
        let text = VarLenUnicode::from_str(text).expect("a text");
        let attribute = file.new_attr::<VarLenUnicode>().create(name);
        let written = attribute.expect("an attribute").write_scalar(&text);
        written.expect("to write");
    }
    file.close().expect("to close");
    let outcome = folder.orbicline(&["describe", "short.nc"]);
    assert!(outcome.ok, "{outcome:?}");
    for fragment in ["WARNING", "not understood", "co2.x: (not there) -> 1"] {
        assert!(outcome.out.contains(fragment), "{}", outcome.out);
    }
    assert!(!outcome.out.contains('\u{1b}'), "a control character");
}
