//! Run files from outside the crate: metadata, round trip, equal bytes, refusals.
//!
//! All numbers are invented.
#![cfg(feature = "netcdf")]
#![expect(clippy::unwrap_used, reason = "a failing helper fails its test")]

use std::path::Path;

use orbicline::output::schema::MonthCells;
use orbicline::output::{AxisValues, OutputError, Overwrite, RunFile, RunWriter, Schema};
use orbicline::series::{Axis, Record, Scale, Statistic, Variable};

const fn plain(
    name: &'static str,
    axes: &'static [Axis],
    units: &'static str,
    long_name: &'static str,
) -> Variable {
    Variable {
        name,
        axes,
        units,
        long_name,
        standard_name: None,
        scale: Scale::Plain,
        statistic: Statistic::Mean,
    }
}

fn variables() -> Vec<Variable> {
    let t2m = Variable {
        standard_name: Some("air_temperature"),
        scale: Scale::Temperature,
        ..plain(
            "t2m",
            &[Axis::Month, Axis::Latitude],
            "K",
            "invented temperature at 2 m",
        )
    };
    let contrast = Variable {
        scale: Scale::TemperatureDifference,
        ..plain("contrast", &[], "K", "invented difference of temperatures")
    };
    let transport = Variable {
        standard_name: Some("northward_atmosphere_heat_transport"),
        ..plain(
            "transport",
            &[Axis::LatitudeEdge],
            "W",
            "invented heat transport",
        )
    };
    let ice = Variable {
        standard_name: Some("sea_ice_area_fraction"),
        ..plain("ice", &[Axis::Hemisphere], "1", "invented sea ice fraction")
    };
    vec![
        plain("obliquity", &[], "degree", "invented tilt of the axis"),
        t2m,
        contrast,
        transport,
        plain("mixing", &[Axis::Depth], "m2 s-1", "invented mixing"),
        ice,
        plain(
            "upwelling",
            &[Axis::CoastalLatitude],
            "m s-1",
            "invented upwelling",
        ),
    ]
}

fn schema() -> Schema {
    let texts = [
        ("title", "Invented data for a test"),
        ("institution", "none"),
        ("source", "a closed form without meaning"),
        ("history", "written by a test"),
        ("references", "none"),
        ("comment", "no number here describes any climate"),
        ("configuration", "[run]\nname = \"invented, Milanković\"\n"),
    ];
    Schema {
        axes: AxisValues {
            by_latitude: Vec::new(),
            latitude_edges_deg: (0..=6).map(|i| 30.0 * f64::from(i) - 90.0).collect(),
            depth_edges_m: vec![0.0, 10.0, 30.0, 70.0],
            months: MonthCells::Fixed {
                edges_year: (0..=12).map(|m| f64::from(m) / 12.0).collect(),
                lengths_day: vec![365.0 / 12.0; 12],
            },
            coastal_latitudes_deg: vec![-25.0, 35.0],
        },
        variables: variables(),
        global: texts
            .iter()
            .map(|(k, v)| ((*k).to_owned(), (*v).to_owned()))
            .collect(),
    }
}

fn record(number: u32, size: usize) -> Record {
    let age = 500.0 - f64::from(number);
    let wave = |i: u32| 280.0 + 20.0 * (0.1 * f64::from(number) + 0.7 * f64::from(i)).sin();
    let mut values: Vec<f64> = (0..u32::try_from(size).unwrap()).map(wave).collect();
    values[1] = -f64::NAN;
    Record {
        age_kyr: age,
        age_bounds_kyr: [age + 0.5, age - 0.5],
        values,
    }
}

fn state(number: u32) -> Vec<(String, Vec<f64>)> {
    vec![
        ("ocean".to_owned(), vec![0.1 * f64::from(number), -0.0]),
        ("air".to_owned(), vec![1.5]),
    ]
}

fn write(path: &Path, records: u32, overwrite: Overwrite) -> Result<(), OutputError> {
    let schema = schema();
    let size = schema.record_size();
    let mut writer = RunWriter::create(path, schema, overwrite)?;
    for number in 0..records {
        writer.push(&record(number, size), &state(number))?;
    }
    writer.finish().map(drop)
}

fn names(folder: &Path) -> Vec<String> {
    let entries = std::fs::read_dir(folder).unwrap();
    let mut names: Vec<String> = entries
        .map(|e| e.unwrap().file_name().into_string().unwrap())
        .collect();
    names.sort();
    names
}

#[test]
fn records_come_back_with_their_metadata() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("new/run.nc");
    write(&path, 150, Overwrite::Refuse).unwrap();
    assert_eq!(names(path.parent().unwrap()), ["run.nc"]);
    let run = RunFile::open(&path).unwrap();
    let size = schema().record_size();
    let obliquity = run.series("obliquity").unwrap();
    assert_eq!(obliquity.age_kyr.len(), 150);
    assert_eq!(obliquity.age_kyr[149].to_bits(), 351.0_f64.to_bits());
    for (n, value) in (0..).zip(&obliquity.values) {
        assert_eq!(value.to_bits(), record(n, size).values[0].to_bits());
    }
    let t2m = run.array("t2m").unwrap();
    assert_eq!(t2m.shape(), [150, 12, 6]);
    assert!(t2m[[149, 0, 0]].is_nan());
    let expected = record(149, size).values[1 + 71];
    assert!((t2m[[149, 11, 5]] - expected).abs() < 1e-4);
    let restart = run.restart().unwrap();
    assert_eq!(restart, state(149));
    assert!(restart[0].1[1].is_sign_negative());
    assert_eq!(run.dimensions("t2m").unwrap(), ["age", "month", "lat"]);
    assert_eq!(run.dimensions("age").unwrap(), ["age"]);
    let listed = run.variables();
    assert!(listed.contains(&"month_middle") && !listed.contains(&"bnds"));
    assert!(!listed.iter().any(|n| n.starts_with("restart_")));
}

#[test]
fn attributes_follow_the_table() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("run.nc");
    write(&path, 3, Overwrite::Refuse).unwrap();
    let run = RunFile::open(&path).unwrap();
    for (variable, name, value) in [
        ("age", "units", "kyr"),
        ("age", "long_name", "age before 1950 CE"),
        ("age", "bounds", "age_bnds"),
        ("lat", "units", "degrees_north"),
        ("lat", "axis", "Y"),
        ("depth", "positive", "down"),
        ("month_middle", "bounds", "month_bnds"),
        ("t2m", "standard_name", "air_temperature"),
        ("t2m", "units_metadata", "temperature: on_scale"),
        ("t2m", "cell_methods", "age: mean"),
        ("t2m", "coordinates", "month_middle"),
        ("contrast", "units_metadata", "temperature: difference"),
        ("ice", "coordinates", "hemisphere_name"),
    ] {
        assert_eq!(
            run.attribute(variable, name).unwrap(),
            value,
            "{variable}:{name}"
        );
    }
    for absent in ["standard_name", "axis"] {
        let error = run.attribute("age", absent).unwrap_err().to_string();
        assert!(
            error.contains("run.nc") && error.contains("`age`"),
            "{error}"
        );
    }
    assert_eq!(run.global("Conventions").unwrap(), "CF-1.11");
    assert!(run.global("configuration").unwrap().contains("Milanković"));
    for variable in run.variables() {
        let units = run.attribute(variable, "units");
        assert!(
            units.is_err() || !units.unwrap().contains("since"),
            "{variable}"
        );
    }
}

#[test]
fn equal_runs_give_equal_bytes() {
    let folder = tempfile::tempdir().unwrap();
    let (a, b) = (folder.path().join("a.nc"), folder.path().join("b.nc"));
    write(&a, 130, Overwrite::Refuse).unwrap();
    write(&b, 130, Overwrite::Refuse).unwrap();
    assert!(std::fs::read(&a).unwrap() == std::fs::read(&b).unwrap());
}

#[test]
fn existing_outputs_and_segments_are_refused_or_replaced() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("run.nc");
    write(&path, 2, Overwrite::Refuse).unwrap();
    let error = write(&path, 2, Overwrite::Refuse).unwrap_err().to_string();
    assert!(
        error.contains("run.nc") && error.contains("exists"),
        "{error}"
    );
    write(&path, 3, Overwrite::Replace).unwrap();
    assert_eq!(RunFile::open(&path).unwrap().array("age").unwrap().len(), 3);

    let path = folder.path().join("killed.nc");
    let mut killed = RunWriter::create(&path, schema(), Overwrite::Refuse).unwrap();
    for number in 0..70 {
        killed
            .push(&record(number, schema().record_size()), &state(number))
            .unwrap();
    }
    drop(killed);
    let segment = folder.path().join("killed.nc.seg0000.nc");
    let left = RunFile::open(&segment).unwrap();
    assert_eq!(
        (left.array("age").unwrap().len(), left.restart().unwrap()),
        (64, state(63))
    );
    drop(left);
    let error = write(&path, 2, Overwrite::Refuse).unwrap_err().to_string();
    assert!(
        error.contains("1 segment file(s)") && error.contains("seg0000"),
        "{error}"
    );
    write(&path, 2, Overwrite::Replace).unwrap();
    assert_eq!(names(folder.path()), ["killed.nc", "run.nc"]);
}

#[test]
fn folders_that_cannot_hold_the_file_are_errors() {
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("file");
    std::fs::write(&file, "not a folder").unwrap();
    let error = write(&file.join("run.nc"), 1, Overwrite::Refuse).unwrap_err();
    assert!(matches!(error, OutputError::Io { .. }), "{error}");
    let error = write(folder.path(), 1, Overwrite::Replace).unwrap_err();
    assert!(matches!(error, OutputError::BadPath { .. }), "{error}");

    let locked = folder.path().join("locked");
    std::fs::create_dir(&locked).unwrap();
    let mut rights = std::fs::metadata(&locked).unwrap().permissions();
    rights.set_readonly(true);
    std::fs::set_permissions(&locked, rights).unwrap();
    // A user above file rights can write everywhere; then there is nothing to refuse.
    let above_rights = std::fs::write(locked.join("probe"), "").is_ok();
    let result = write(&locked.join("run.nc"), 1, Overwrite::Refuse);
    assert_eq!(result.is_ok(), above_rights);
}

/// Spoils a record.
type Change<'a> = &'a dyn Fn(&mut Record);

#[test]
fn records_that_do_not_fit_are_errors() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("run.nc");
    let size = schema().record_size();
    let mut writer = RunWriter::create(&path, schema(), Overwrite::Refuse).unwrap();
    writer.push(&record(1, size), &[]).unwrap();
    let mut complaint = |change: Change| {
        let mut bad = record(2, size);
        change(&mut bad);
        writer.push(&bad, &[]).unwrap_err().to_string()
    };
    let cases: [(Change, &str); 5] = [
        (&|r| r.values.truncate(5), "the variables need"),
        (&|r| r.age_kyr = f64::NAN, "NaN kyr is not between"),
        (&|r| *r = record(1, 85), "must fall"),
        (&|r| r.values[5] = 1e39, "`t2m` is 1"),
        (&|r| r.values[0] = f64::INFINITY, "`obliquity` is inf"),
    ];
    for (change, expected) in cases {
        let message = complaint(change);
        assert!(
            message.contains(expected) && message.contains("record 1"),
            "{message}"
        );
    }
    let error = writer
        .push(&record(2, size), &[("a b".to_owned(), vec![1.0])])
        .unwrap_err();
    assert!(matches!(error, OutputError::Restart { .. }), "{error}");
    drop(writer);
    let empty = RunWriter::create(&path, schema(), Overwrite::Refuse).unwrap();
    assert!(matches!(
        empty.finish().unwrap_err(),
        OutputError::Empty { .. }
    ));
}

#[test]
fn an_output_in_use_is_refused_to_a_second_writer() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("run.nc");
    let first = RunWriter::create(&path, schema(), Overwrite::Replace).unwrap();
    let second = RunWriter::create(&path, schema(), Overwrite::Replace).unwrap_err();
    assert!(
        second.to_string().contains("another run is writing it"),
        "{second}"
    );
    drop(first);
    RunWriter::create(&path, schema(), Overwrite::Replace).unwrap();
    assert_eq!(
        std::fs::read_dir(folder.path()).unwrap().count(),
        0,
        "the lock is gone"
    );
}

#[cfg(unix)]
#[test]
fn a_link_is_not_replaced() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("link.nc");
    std::os::unix::fs::symlink(folder.path().join("elsewhere.nc"), &path).unwrap();
    let refused = RunWriter::create(&path, schema(), Overwrite::Replace).unwrap_err();
    assert!(
        refused.to_string().contains("not a regular file"),
        "{refused}"
    );
}
