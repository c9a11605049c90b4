//! Every key of the configuration, one after another, with a value that nobody can mean.

use orbicline::config::run::Experiment;
use std::path::{Path, PathBuf};
use toml::{Table, Value};

/// The kinds that the reference does not use.
const OTHER_KINDS: [&str; 6] = [
    "orbit={eccentricity={kind=\"sinusoid\",mean=0.03,amplitude=0.02,period_kyr=95,maximum_at_kyr=0},\
     obliquity={kind=\"constant\",obliquity_deg=23},\
     perihelion={kind=\"uniform_rotation\",heliocentric_deg_at_1950=102,period_kyr=21}}",
    "co2={kind=\"linear\",from_kyr=9,from_ppm=200,to_kyr=-9,to_ppm=280}",
    "physics.energy_balance.transport={kind=\"mean_relaxation\",rate_w_m2_k=3.8}",
    "physics.energy_balance.albedo={kind=\"ice_line\",free=0.3,free_second_legendre=0.1,ice=0.6,\
     edge={kind=\"temperature\",threshold_c=-10.0}}",
    "physics.ocean_column.sinking.closure={kind=\"custom\",loss=\"gross_winter\",loss_exponent=1.0,\
     temperature_exponent=1.0,depth_exponent=1.0}",
    "time.slow_years_per_seasonal_year=10",
];

fn reference() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("configs/reference.toml")
}

/// What becomes of the reference with these edits: nothing, or the message.
fn answer(edits: &[&str], last: Option<&str>) -> Option<String> {
    let edits: Vec<_> = edits
        .iter()
        .copied()
        .chain(last)
        .map(str::to_owned)
        .collect();
    match Experiment::load(&reference(), &edits) {
        Ok(experiment) => experiment.build().err().map(|e| e.to_string()),
        Err(error) => Some(error.to_string()),
    }
}

/// All keys with their values, tables taken apart.
fn leaves(path: &str, table: &Table, into: &mut Vec<(String, Value)>) {
    for (key, value) in table {
        let path = if path.is_empty() {
            key.clone()
        } else {
            format!("{path}.{key}")
        };
        match value {
            Value::Table(inner) => leaves(&path, inner, into),
            _ => into.push((path, value.clone())),
        }
    }
}

fn keys(edits: &[&str]) -> (Table, Vec<(String, Value)>) {
    assert_eq!(answer(edits, None), None, "the base is sound");
    let edits: Vec<_> = edits.iter().map(|e| (*e).to_owned()).collect();
    let experiment = Experiment::load(&reference(), &edits).expect("the reference");
    let text = experiment.tree.resolved_toml().expect("text");
    let table: Table = text.parse().expect("TOML");
    let mut found = Vec::new();
    leaves("", &table, &mut found);
    (table, found)
}

fn bases() -> [&'static [&'static str]; 2] {
    [&[], &OTHER_KINDS]
}

/// `value` with `number` in its place, or in the place of its last element.
fn spoilt(value: &Value, number: &str) -> Option<String> {
    match value {
        Value::Float(_) | Value::Integer(_) => Some(number.to_owned()),
        Value::Array(items) => {
            let sound = items.iter().take(items.len() - 1).map(ToString::to_string);
            let items: Vec<_> = sound.chain([number.to_owned()]).collect();
            Some(format!("[{}]", items.join(", ")))
        }
        _ => None,
    }
}

/// Messages that are missing, or that do not name the key.
fn unanswered(numbers: &[&str]) -> Vec<String> {
    let mut wrong = Vec::new();
    for base in bases() {
        for (key, value) in keys(base).1 {
            for number in numbers {
                let Some(value) = spoilt(&value, number) else {
                    continue;
                };
                let edit = format!("{key}={value}");
                match answer(base, Some(&edit)) {
                    None => wrong.push(format!("{edit} is taken")),
                    Some(told) if !told.contains(&key) => wrong.push(format!("{edit}: {told}")),
                    Some(_) => {}
                }
            }
        }
    }
    wrong
}

#[test]
fn no_key_takes_what_is_no_finite_number() {
    let wrong = unanswered(&["nan", "inf", "-inf"]);
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn no_number_however_large_or_small_breaks_the_reading() {
    for base in bases() {
        for (key, value) in keys(base).1 {
            for number in ["0", "-1", "1e300", "-1e300", "5e-324", "4294967295"] {
                if let Some(value) = spoilt(&value, number) {
                    answer(base, Some(&format!("{key}={value}")));
                }
            }
        }
    }
}

#[test]
fn a_value_of_the_wrong_type_is_told_with_its_key() {
    let mut wrong = Vec::new();
    for base in bases() {
        for (key, value) in keys(base).1 {
            let other = if value.is_str() { "7" } else { "some_words" };
            let edit = format!("{key}={other}");
            let told = answer(base, Some(&edit)).unwrap_or_default();
            let place = format!("--set {edit}: `{key}`: invalid type");
            if !told.starts_with(&place) || told.lines().count() != 1 {
                wrong.push(format!("{edit}: {told}"));
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn a_missing_key_is_told_with_its_table() {
    let folder = tempfile::tempdir().expect("a folder");
    let file = folder.path().join("lacks.toml");
    let mut wrong = Vec::new();
    for base in bases() {
        let (table, keys) = keys(base);
        for (path, _) in keys {
            let mut lacking = table.clone();
            let (mut within, mut rest) = (&mut lacking, path.as_str());
            while let Some((head, tail)) = rest.split_once('.') {
                let inner = within.get_mut(head).and_then(Value::as_table_mut);
                (within, rest) = (inner.expect("a table"), tail);
            }
            within.remove(rest);
            std::fs::write(&file, lacking.to_string()).expect("a file");
            let told = Experiment::load(&file, &[])
                .map(|_| ())
                .map_err(|e| e.to_string());
            let told = told.err().unwrap_or_default();
            let place = format!("missing key `{rest}` in ");
            if !told.contains(&place) || told.lines().count() != 1 {
                wrong.push(format!("{path}: {told}"));
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}
