use super::*;
use crate::output::schema::{AxisValues, REQUIRED_GLOBAL};
use crate::series::{Axis, Scale, Statistic, Variable};

/// Invented data: one number and one profile per record.
fn invented() -> (Schema, Vec<Record>) {
    let variable = |name, axes| Variable {
        name,
        axes,
        units: "1",
        long_name: "invented",
        standard_name: None,
        scale: Scale::Plain,
        statistic: Statistic::Mean,
    };
    let schema = Schema {
        axes: AxisValues {
            by_latitude: Vec::new(),
            depth_edges_m: vec![0.0, 1.0, 2.0, 3.0],
            ..AxisValues::default()
        },
        variables: vec![variable("number", &[]), variable("profile", &[Axis::Depth])],
        global: REQUIRED_GLOBAL
            .iter()
            .map(|k| ((*k).to_owned(), "invented".to_owned()))
            .collect(),
    };
    let record = |n: i32| {
        let age = f64::from(-n);
        let values = (0..4).map(|i| f64::from(n * 7 + i).sin()).collect();
        Record {
            age_kyr: age,
            age_bounds_kyr: [age, age - 1.0],
            values,
        }
    };
    (schema, (0..150).map(record).collect())
}

#[test]
fn merged_segments_equal_the_file_written_at_once() {
    let folder = tempfile::tempdir().unwrap();
    let (schema, records) = invented();
    let restart = vec![("ice".to_owned(), vec![1.0, 2.0])];
    let at_once = folder.path().join("at_once.nc");
    let layout = Layout::create(&at_once, &schema).unwrap();
    layout.write(0, &Block::gather(&schema, &records)).unwrap();
    layout.finish(&restart).unwrap();

    let merged = folder.path().join("merged.nc");
    let mut writer = RunWriter::create(&merged, schema.clone(), Overwrite::Refuse).unwrap();
    for record in &records {
        writer.push(record, &restart).unwrap();
    }
    writer.finish().unwrap();

    let (a, b) = (
        RunFile::open(&at_once).unwrap(),
        RunFile::open(&merged).unwrap(),
    );
    assert_eq!(a.block(&schema).unwrap(), b.block(&schema).unwrap());
    assert_eq!(a.restart().unwrap(), b.restart().unwrap());
    assert_eq!(a.variables(), b.variables());
}

#[test]
fn a_missing_segment_stops_the_merge_and_keeps_the_others() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("run.nc");
    let (schema, records) = invented();
    let mut writer = RunWriter::create(&path, schema, Overwrite::Refuse).unwrap();
    for record in &records {
        writer.push(record, &[]).unwrap();
    }
    std::fs::remove_file(segments::path(&path, 0)).unwrap();
    let message = writer.finish().unwrap_err().to_string();
    assert!(message.contains("seg0000"), "{message}");
    assert!(!path.exists() && segments::path(&path, 1).exists());
}

#[test]
fn a_failed_segment_is_reported_and_written_later() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("run.nc");
    let (schema, records) = invented();
    let mut writer = RunWriter::create(&path, schema, Overwrite::Refuse).unwrap();
    let obstacle = segments::temporary(&path, 0);
    std::fs::create_dir(&obstacle).unwrap();
    for (number, record) in records.iter().enumerate() {
        let state = vec![("ice".to_owned(), vec![record.age_kyr])];
        let result = writer.push(record, &state);
        match number {
            63 => assert!(result.unwrap_err().to_string().contains("seg0000.tmp")),
            64 => {
                assert!(result.is_err());
                std::fs::remove_dir(&obstacle).unwrap();
                writer.push(record, &state).unwrap();
                let first = RunFile::open(&segments::path(&path, 0)).unwrap();
                assert_eq!(first.restart().unwrap()[0].1, [-63.0]);
            }
            _ => result.unwrap(),
        }
    }
    let ages = RunFile::open(&writer.finish().unwrap())
        .unwrap()
        .array("age")
        .unwrap();
    assert!(
        ages.iter()
            .zip(&records)
            .all(|(age, r)| age.to_bits() == r.age_kyr.to_bits())
    );
    assert_eq!(ages.len(), 150);
}
