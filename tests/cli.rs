//! The program as its user meets it: what it prints, what it refuses, what is in its file. More of
//! what it refuses: `tests/bad_input.rs`.
#![cfg(feature = "netcdf")]

#[path = "cli/contents.rs"]
mod contents;
#[path = "cli/program.rs"]
mod program;

use orbicline::orbit::solution::orbit_table::OrbitTable;
use orbicline::output::RunFile;
use program::{Folder, Outcome, SHORT};

#[test]
fn a_run_ends_with_path_key_figures_and_two_lines_of_python() {
    let folder = Folder::new();
    let outcome = folder.orbicline(&["run", "short.toml", "--out", "short.nc"]);
    assert!(outcome.ok, "{outcome:?}");
    assert_eq!(outcome.err, "", "a progress bar without a terminal");
    assert_eq!(outcome.out.lines().next(), Some("short.nc"));
    for figure in [
        "global air temperature at 2 m",
        "depth of the 20 degC isotherm",
        "deep sinking",
        "eastern equatorial Pacific",
        "70 records",
        "M = 1 ",
        "largest residual",
    ] {
        assert!(
            outcome.out.contains(figure),
            "no {figure} in\n{}",
            outcome.out
        );
    }
    let last: Vec<_> = outcome.out.lines().rev().take(2).collect();
    let python = [
        "  run = xarray.open_dataset(\"short.nc\")",
        "  import xarray",
    ];
    assert_eq!(last, python);
    contents::check(&folder.path("short.nc"));
}

#[test]
fn the_key_figures_are_means_of_the_file() {
    let folder = Folder::new();
    let outcome = folder.orbicline(&["run", "short.toml", "--out", "short.nc"]);
    let file = RunFile::open(&folder.path("short.nc")).expect("a file");
    for (words, variable, factor) in [
        (
            "global air temperature at 2 m",
            "global_air_temperature_2m",
            1.0,
        ),
        ("deep sinking", "deep_sinking", 1e-6),
        ("west minus east", "west_east_contrast", 1.0),
    ] {
        let values = file.series(variable).expect("a series").values;
        let mean = factor * values.iter().sum::<f64>() / 70.0;
        let line = outcome
            .out
            .lines()
            .find(|l| l.starts_with(words))
            .expect("a line");
        let printed = line[words.len()..].split_whitespace().next();
        assert_eq!(printed, Some(format!("{mean:.3}").as_str()), "{line}");
    }
}

#[test]
fn quiet_prints_nothing_and_the_default_output_carries_the_name_of_the_configuration() {
    let folder = Folder::new();
    let outcome = folder.orbicline(&["run", "short.toml", "--quiet"]);
    assert!(outcome.ok, "{outcome:?}");
    assert_eq!((outcome.out.as_str(), outcome.err.as_str()), ("", ""));
    assert!(folder.path("out/short.nc").exists());
}

#[test]
fn an_existing_file_is_left_as_it_is_unless_overwriting_is_allowed() {
    let folder = Folder::new();
    folder.write("there.nc", "somebody's work");
    let refused = folder.orbicline(&["run", "short.toml", "--out", "there.nc"]);
    refused.says(&["there.nc", "exists already"]);
    assert_eq!(folder.read("there.nc"), b"somebody's work");
    assert_eq!(
        folder.files(),
        ["short.toml", "there.nc"],
        "something was left behind"
    );
    let words = [
        "run",
        "short.toml",
        "--out",
        "there.nc",
        "--overwrite",
        "--quiet",
    ];
    assert!(folder.orbicline(&words).ok);
    assert!(RunFile::open(&folder.path("there.nc")).is_ok());
    assert_eq!(
        folder.files(),
        ["short.toml", "there.nc"],
        "segments were left behind"
    );
}

fn refused(folder: &Folder, words: &[&str]) -> Outcome {
    let all = [&["run"], words, &["--out", "never.nc"]].concat();
    let outcome = folder.orbicline(&all);
    assert!(matches!(outcome.code, Some(1 | 2)), "{outcome:?}");
    assert!(
        !folder.path("never.nc").exists(),
        "a file in spite of {words:?}"
    );
    outcome
}

#[test]
fn an_unknown_key_is_answered_with_the_nearest() {
    let folder = Folder::new();
    let edit = "physics.ocean_column.mixing.uper_m2_s=1e-5";
    let outcome = refused(&folder, &["short.toml", "--set", edit]);
    outcome.says(&["--set physics", "`physics.ocean_column.mixing.upper_m2_s`"]);
    let outcome = refused(&folder, &["short.toml", "--set", "orbit.obliquity"]);
    outcome.says(&["key.path=value"]);
    folder.write("misspelt.toml", &format!("{SHORT}\n[grid]\nband = 72\n"));
    let outcome = refused(&folder, &["misspelt.toml"]);
    outcome.says(&["misspelt.toml:", "band", "bands"]);
}

#[test]
fn a_value_of_the_command_line_is_told_as_such() {
    let folder = Folder::new();
    let edit = "insolation.refresh_every_yr=0";
    let outcome = refused(&folder, &["short.toml", "--set", edit]);
    outcome.says(&[
        "--set insolation.refresh_every_yr=0: ",
        "between 1 and 1000",
    ]);
}

#[test]
fn a_missing_file_or_wrong_word_is_an_error_that_names_it() {
    let folder = Folder::new();
    refused(&folder, &["nothing.toml"]).says(&["nothing.toml", "cannot be read"]);
    folder.write("lonely.toml", "extends = \"nowhere.toml\"\n");
    refused(&folder, &["lonely.toml"]).says(&["nowhere.toml", "lonely.toml:1"]);
    refused(&folder, &["short.toml", "--threads", "0"]).says(&["--threads"]);
    refused(&folder, &["short.toml", "--thread", "2"]).says(&["--threads"]);
    folder.orbicline(&["walk"]).says(&["walk"]);
    let help = folder.orbicline(&["run", "--help"]);
    assert!(help.ok && help.out.contains("--overwrite"), "{help:?}");
}

/// A table of carbon dioxide that rises beyond bearing in the middle of the short run.
const DEADLY: &str = "age_kyr,co2_ppm\n9,100000\n10.05,100000\n10.06,353\n11,353\n";

#[test]
fn a_run_that_fails_leaves_an_earlier_file_as_it_was() {
    let folder = Folder::new();
    folder.write("deadly.csv", DEADLY);
    for threads in ["1", "2"] {
        folder.write("kept.nc", "an earlier result");
        let mut words = vec!["run", "short.toml", "--out", "kept.nc", "--overwrite"];
        words.extend(["--threads", threads]);
        words.extend(["--set", "co2={kind=\"table\",path=\"deadly.csv\"}"]);
        words.extend(["--set", "co2_forcing.co2_forcing_w_m2=500"]);
        let outcome = folder.orbicline(&words);
        outcome.says(&["energy_balance", "of the run", "kyr before 1950"]);
        assert_eq!(
            folder.read("kept.nc"),
            b"an earlier result",
            "{threads} threads"
        );
    }
}

#[test]
fn steps_too_long_for_a_cold_planet_are_refused_and_not_believed() {
    let folder = Folder::new();
    let edits = [
        "co2.co2_ppm=20",
        "grid.steps_per_year=24",
        "time.spin_up.seasonal_yr=60",
    ];
    let mut words = vec!["short.toml"];
    words.extend(edits.iter().flat_map(|edit| ["--set", *edit]));
    let outcome = refused(&folder, &words);
    outcome.says(&["energy_balance", "spin-up", "grid.steps_per_year"]);
}

#[test]
fn an_age_beyond_the_orbit_is_told_where_it_was_given() {
    let folder = Folder::new();
    let outcome = refused(&folder, &["short.toml", "--set", "time.start_kyr=5600"]);
    outcome.says(&["--set time.start_kyr=5600: ", "from 5500 to -100 kyr"]);
}

/// An integration of so few years that it takes a fraction of a second.
fn integrate<'a>(out: &'a str, more: &[&'a str]) -> Vec<&'a str> {
    let words = ["orbit", "--integrate", "--from-kyr", "2", "--to-kyr", "-1"];
    [&words[..], &["--out", out], more].concat()
}

#[test]
fn an_orbit_is_integrated_into_text_and_into_the_exact_form() {
    let folder = Folder::new();
    let outcome = folder.orbicline(&integrate("orbit.csv", &[]));
    assert!(outcome.ok, "{outcome:?}");
    assert_eq!(outcome.err, "", "a progress bar without a terminal");
    for part in ["orbit.csv\n2 to -1 kyr", "energy", "Not known: the tide"] {
        assert!(outcome.out.contains(part), "no {part} in\n{}", outcome.out);
    }
    let text = String::from_utf8(folder.read("orbit.csv")).expect("text");
    let lines: Vec<_> = text.lines().filter(|l| !l.starts_with('#')).collect();
    let names =
        "age_kyr,eccentricity,obliquity_deg,perihelion_heliocentric_deg,climatic_precession";
    assert_eq!(lines[0], names);
    assert_eq!(lines.len(), 5, "{text}");
    assert!(lines[1].starts_with("2,0.0175155"), "{}", lines[1]);
    assert!(lines[3].starts_with("0,0.0167295"), "{}", lines[3]);
    let outcome = folder.orbicline(&integrate("orbit.table", &["--quiet"]));
    assert_eq!((outcome.ok, outcome.out.as_str()), (true, ""));
    let table = OrbitTable::from_bytes(&folder.read("orbit.table")).expect("a table");
    let [oldest, youngest] = table.range_kyr();
    assert!((oldest - 2.0).abs() < 1e-12 && (youngest + 1.0).abs() < 1e-12);
}

#[test]
fn a_weaker_tide_by_file_or_edit_is_the_same_and_changes_the_table() {
    let folder = Folder::new();
    folder.write("weak.toml", "[tide]\nscale = 0.5\n");
    let table = |name: &str, more: &[&str]| {
        assert!(folder.orbicline(&integrate(name, more)).ok);
        folder.read(name)
    };
    let own = table("own.table", &[]);
    let file = table("file.table", &["--constants", "weak.toml"]);
    let edit = table("edit.table", &["--set", "tide.scale=0.5"]);
    assert!(file == edit && file != own);
}

#[test]
fn an_orbit_that_cannot_be_made_is_refused_before_anything_is_written() {
    let folder = Folder::new();
    folder.write("there.csv", "somebody's work");
    let says = |words: &[&str], fragments: &[&str]| folder.orbicline(words).says(fragments);
    says(
        &integrate("there.csv", &[]),
        &["there.csv", "exists already"],
    );
    says(&integrate("a.nc", &[]), &["a.nc", ".table", ".csv"]);
    says(
        &integrate("a.csv", &["--set", "tide.scal=1"]),
        &["`tide.scal`", "`tide.scale`"],
    );
    says(
        &integrate("a.csv", &["--set", "map.steps_per_century=900"]),
        &["map.steps_per_century = 900", "between 1075"],
    );
    let turned = ["orbit", "--integrate", "--from-kyr", "0", "--to-kyr", "9"];
    says(
        &[&turned[..], &["--out", "a.csv"]].concat(),
        &["exchange them"],
    );
    let nothing = [
        "orbit",
        "--from-kyr",
        "2",
        "--to-kyr",
        "0",
        "--out",
        "a.csv",
    ];
    says(&nothing, &["--step-kyr"]);
    assert_eq!(folder.read("there.csv"), b"somebody's work");
    assert_eq!(folder.files(), ["short.toml", "there.csv"]);
}

#[test]
fn a_run_with_the_integrated_orbit_goes_back_millions_of_years_and_no_farther() {
    let folder = Folder::new();
    let kinds = ["eccentricity", "obliquity", "perihelion"];
    let edits = kinds.map(|element| format!("orbit.{element}={{kind=\"integrated\"}}"));
    let words = |times: [&'static str; 2]| {
        let edits = edits.iter().map(String::as_str).chain(times);
        let sets: Vec<_> = edits.flat_map(|edit| ["--set", edit]).collect();
        [
            &["run", "short.toml", "--out", "old.nc", "--quiet"][..],
            &sets,
        ]
        .concat()
    };
    let old = words(["time.start_kyr=4000.14", "time.end_kyr=4000"]);
    let outcome = folder.orbicline(&old);
    assert!(outcome.ok, "{outcome:?}");
    let older = words(["time.start_kyr=5600.14", "time.end_kyr=5600"]);
    folder
        .orbicline(&older)
        .says(&["time.start_kyr", "5600.14", "\"integrated\"", "5500"]);
}

#[test]
fn a_dry_run_prints_a_configuration_that_makes_the_same_run_and_writes_nothing() {
    let folder = Folder::new();
    let words = ["run", "short.toml", "--out", "dry.nc", "--dry-run"];
    let dry = folder.orbicline(&words);
    assert!(dry.ok && dry.err.is_empty(), "{dry:?}");
    assert_eq!(folder.files(), ["short.toml"]);
    for fragment in [
        "# 10.140 to 10.000 kyr before 1950, 70 records of 2 years, 140 seasonal years (M = 1)",
        "# estimate: ",
        " years of orbit/s as busy as the machine is now, file ",
        "memory ",
        "# output dry.nc\n",
        "title = \"A short run\"",
    ] {
        assert!(dry.out.contains(fragment), "no {fragment} in\n{}", dry.out);
    }
    folder.write("resolved.toml", &dry.out);
    let again = folder.orbicline(&["run", "resolved.toml", "--out", "dry.nc", "--dry-run"]);
    let hash = |o: &Outcome| {
        o.out
            .lines()
            .find(|l| l.contains("SHA-256"))
            .map(str::to_owned)
    };
    assert!(
        hash(&dry).is_some() && hash(&again) == hash(&dry),
        "{again:?}"
    );
}

#[test]
fn the_estimate_of_the_file_is_near_its_size() {
    let folder = Folder::new();
    let outcome = folder.orbicline(&["run", "short.toml", "--out", "short.nc", "-v"]);
    assert!(outcome.ok, "{outcome:?}");
    let told = outcome
        .err
        .split("file ")
        .nth(1)
        .and_then(|t| t.split(" MB").next());
    let told: f64 = told.and_then(|t| t.parse().ok()).expect("a size");
    let size = std::fs::metadata(folder.path("short.nc"))
        .expect("a file")
        .len() as f64
        / 1e6;
    assert!(
        (told / size - 1.0).abs() < 0.35,
        "{told} MB told, {size} MB written"
    );
}

#[test]
fn the_log_has_what_happened_and_v_says_it_as_well() {
    let folder = Folder::new();
    let words = ["run", "short.toml", "--out", "short.nc", "-v"];
    let outcome = folder.orbicline(&words);
    let log = String::from_utf8(folder.read("short.nc.log")).expect("UTF-8");
    for fragment in [
        "spin-up of 10 seasonal years done",
        "merging",
        "complete: short.nc",
    ] {
        assert!(log.contains(fragment), "no {fragment} in\n{log}");
        assert!(
            outcome.err.contains(fragment),
            "no {fragment} in\n{}",
            outcome.err
        );
    }
    assert!(log.contains("--out short.nc -v") && log.contains(env!("CARGO_PKG_VERSION")));
    assert!(
        log.lines()
            .all(|l| l.as_bytes()[10] == b'T' && l.as_bytes()[19] == b'Z'),
        "{log}"
    );
    // A refused run does not touch the log of the one that is there.
    assert!(!folder.orbicline(&words).ok);
    assert_eq!(folder.read("short.nc.log"), log.as_bytes());
    // A failed one says why in its log.
    folder.write("deadly.csv", DEADLY);
    let mut words = vec!["run", "short.toml", "--out", "bad.nc", "--quiet"];
    words.extend(["--set", "co2={kind=\"table\",path=\"deadly.csv\"}"]);
    words.extend(["--set", "co2_forcing.co2_forcing_w_m2=500"]);
    folder
        .orbicline(&words)
        .says(&["records, to ", "are kept in segments beside bad.nc"]);
    let log = String::from_utf8(folder.read("bad.nc.log")).expect("UTF-8");
    assert!(log.contains("error: at "), "{log}");
}

#[test]
fn a_dot_in_the_name_of_a_configuration_is_part_of_the_name() {
    let folder = Folder::new();
    for name in ["co2_0.5", "co2_0.7"] {
        folder.write(&format!("{name}.toml"), SHORT);
        let file = format!("{name}.toml");
        assert!(folder.orbicline(&["run", &file, "--quiet"]).ok);
        assert!(folder.path(&format!("out/{name}.nc")).exists(), "{name}");
    }
}

#[test]
fn files_of_others_beside_the_output_are_neither_used_nor_deleted() {
    let folder = Folder::new();
    folder.write("Cargo.lock", "somebody's");
    let outcome = folder.orbicline(&["run", "short.toml", "--out", "Cargo"]);
    outcome.says(&["Cargo.lock", "choose another output"]);
    assert_eq!(folder.read("Cargo.lock"), b"somebody's");
    folder.write("run.nc.tmp", "somebody's");
    let words = [
        "run",
        "short.toml",
        "--out",
        "run.nc",
        "--overwrite",
        "--quiet",
    ];
    assert!(folder.orbicline(&words).ok);
    assert_eq!(folder.read("run.nc.tmp"), b"somebody's");
    let long = format!("{}.nc", "n".repeat(245));
    folder
        .orbicline(&["run", "short.toml", "--out", &long])
        .says(&["name"]);
    folder
        .orbicline(&["run", "short.toml", "--out", "newdir/"])
        .says(&["it is a folder"]);
}

#[test]
fn a_calendar_needs_only_what_differs() {
    let folder = Folder::new();
    let text = format!("{SHORT}\n[calendar]\nmonths = \"fixed_angle\"\n");
    folder.write("angle.toml", &text);
    let outcome = folder.orbicline(&["run", "angle.toml", "--dry-run"]);
    assert!(
        outcome.ok && outcome.out.contains("equinox_day = 79.5"),
        "{outcome:?}"
    );
}

#[test]
fn a_table_from_a_pipe_is_refused_since_its_hash_would_be_that_of_nothing() {
    let folder = Folder::new();
    let edit = "co2={kind=\"table\",path=\"/dev/null\"}";
    let outcome = folder.orbicline(&["run", "short.toml", "--set", edit]);
    outcome.says(&["/dev/null"]);
    assert_eq!(folder.files(), ["short.toml"]);
}
