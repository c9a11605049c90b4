//! Forcing that a configuration can shape: months of fixed angle, and a mask of another orbit.
#![cfg(feature = "netcdf")]

#[path = "support/reference.rs"]
mod reference;
#[path = "support/short.rs"]
mod short;

use ndarray::ArrayD;
use orbicline::grid::latitude::{LatitudeBands, Spacing};
use orbicline::output::RunFile;

/// 127 kyr ago, where perihelion in June shortens the months of summer.
const THEN: [&str; 2] = ["time.start_kyr=127.14", "time.end_kyr=127.0"];

fn run(edits: &[&str]) -> RunFile {
    let edits = [&short::EDITS[..], edits].concat();
    let folder = tempfile::tempdir().expect("a folder");
    let path = folder.path().join("run.nc");
    let file = short::run(&reference::experiment(&edits), &path, 1);
    // The file stays readable while it is open.
    RunFile::open(&file).expect("a file")
}

fn array(file: &RunFile, name: &str) -> ArrayD<f64> {
    file.array(name).expect("a variable")
}

/// Largest difference of two arrays.
fn apart(a: &ArrayD<f64>, b: &ArrayD<f64>) -> f64 {
    assert_eq!(a.shape(), b.shape());
    let pairs = a.iter().zip(b).filter(|(a, _)| a.is_finite());
    pairs.map(|(a, b)| (a - b).abs()).fold(0.0, f64::max)
}

#[test]
fn published_months_of_fixed_angle_are_in_the_file_and_the_year_is_the_same() {
    let angle = ["calendar.months=fixed_angle", "calendar.equinox_day=80.5"];
    let angle = run(&[&THEN[..], &angle].concat());
    let length = run(&[&THEN[..], &["calendar.equinox_day=80.5"]].concat());
    // Month lengths of 127 ka in a 365-day year, computed with a general library from Kepler's
    // equation (validation/orbit/month_lengths.csv); the last record is a year off.
    let lengths = array(&angle, "month_length");
    let then = [
        34.433, 30.161, 31.750, 29.009, 28.577, 26.924, 27.828, 28.608, 29.050, 31.792, 32.387,
        34.481,
    ];
    for (month, expected) in then.iter().enumerate() {
        let got = lengths[[69, month]] * 365.0 / 365.2422;
        assert!(
            (got - expected).abs() < 0.005,
            "month {month}: {got} {expected}"
        );
    }
    let begin = array(&angle, "month_begin")[[69, 0]] * 365.0;
    assert!(
        (begin + 6.312).abs() < 0.005,
        "January begins on day {begin}"
    );
    assert_eq!(
        angle.dimensions("month_length").expect("axes"),
        ["age", "month"]
    );
    assert!(
        angle.array("month_bnds").is_err(),
        "bounds of another calendar"
    );
    // The months differ; the year and the climate do not.
    let months = ["air_temperature_2m", "insolation"]
        .map(|name| apart(&array(&angle, name), &array(&length, name)));
    assert!(months[0] > 1.0 && months[1] > 10.0, "{months:?}");
    for name in [
        "global_air_temperature_2m",
        "planetary_albedo",
        "isotherm_20c_depth",
    ] {
        let apart = apart(&array(&angle, name), &array(&length, name));
        assert!(apart < 1e-9, "{name} differs by {apart}");
    }
}

/// A mask poleward of 50 degrees north with a tilt of 24.5 degrees.
const MASK: &str = "
extends = \"REFERENCE\"
[orbit.obliquity]
kind = \"constant\"
obliquity_deg = 22.0
[orbit_mask.latitude]
from_deg = 50.0
to_deg = 90.0
edge_deg = 0.0
[orbit_mask.orbit]
eccentricity = { kind = \"berger1978\" }
obliquity = { kind = \"constant\", obliquity_deg = 24.5 }
perihelion = { kind = \"berger1978\" }
";

fn masked(text: &str) -> RunFile {
    let folder = tempfile::tempdir().expect("a folder");
    let file = folder.path().join("mask.toml");
    let text = text.replace("REFERENCE", &reference::file().display().to_string());
    std::fs::write(&file, text).expect("a file");
    let edits = short::EDITS.map(str::to_owned);
    let experiment = orbicline::config::run::Experiment::load(&file, &edits).expect("a mask");
    let path = short::run(&experiment, &folder.path().join("run.nc"), 2);
    RunFile::open(&path).expect("a file")
}

#[test]
fn analytic_a_mask_lights_its_latitudes_only_and_tells_what_it_adds() {
    let mask = masked(MASK);
    let [low, high] = ["22.0", "24.5"].map(|tilt| {
        let edit = format!("orbit.obliquity={{kind=\"constant\",obliquity_deg={tilt}}}");
        array(&run(&[&edit]), "insolation")
    });
    let both = array(&mask, "insolation");
    let bands = LatitudeBands::new(36, Spacing::EqualLatitude).expect("bands");
    let mut added = 0.0;
    for month in 0..12 {
        for band in 0..36 {
            let (inside, at) = (band >= 28, [0, month, band]);
            let expected = if inside { high[at] } else { low[at] };
            assert!(
                (both[at] - expected).abs() < 1e-4,
                "month {month}, band {band}"
            );
            let share = bands.area_m2()[band] / bands.area_m2().iter().sum::<f64>();
            added += share * (both[at] - low[at]) / 12.0;
        }
    }
    // Months are not equally long, so this mean is only near the one that is told.
    let told = array(&mask, "mask_insolation_change")[[0]];
    assert!((told - added).abs() < 0.02 && told > 0.3, "{told} {added}");
    let tilt = array(&mask, "mask_obliquity");
    assert!(tilt.iter().all(|t| (t - 24.5).abs() < 1e-12));
    assert!((array(&mask, "obliquity")[[0]] - 22.0).abs() < 1e-12);
}

#[test]
fn a_mask_that_covers_everything_or_nothing_is_refused_with_its_key() {
    let folder = tempfile::tempdir().expect("a folder");
    let file = folder.path().join("mask.toml");
    for (from, to, fragment) in [
        (
            "from_deg = 50.0",
            "from_deg = 95.0",
            "orbit_mask.latitude.from_deg = 95",
        ),
        (
            "to_deg = 90.0",
            "to_deg = 40.0",
            "orbit_mask.latitude.to_deg = 40",
        ),
        (
            "obliquity_deg = 24.5",
            "obliquity_deg = 245",
            "orbit_mask.orbit.obliquity.obliquity_deg = 245",
        ),
        (
            "[orbit_mask.latitude]",
            "[orbit_mask.longitude]",
            "unknown key `longitude` in `orbit_mask`",
        ),
    ] {
        let text = MASK.replace("REFERENCE", &reference::file().display().to_string());
        std::fs::write(&file, text.replace(from, to)).expect("a file");
        let loaded = orbicline::config::run::Experiment::load(&file, &[]);
        let message = match loaded {
            Ok(experiment) => experiment.build().err().expect("a refusal").to_string(),
            Err(error) => error.to_string(),
        };
        assert!(message.contains(fragment), "no `{fragment}` in\n{message}");
        assert!(message.contains("mask.toml:"), "{message}");
    }
}
