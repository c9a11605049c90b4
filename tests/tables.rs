//! Tables of a user's own, good ones: they give back the orbit they were written from, whatever the
//! way of writing, and what is in them belongs to the identity of a run.
//!
//! Bad tables lie in `tests/bad_input`.

use orbicline::config::run::Experiment;
use orbicline::orbit::elements::Elements;
use orbicline::orbit::solution::{Orbit, OrbitSpec, integrated};
use std::fmt::Write as _;
use std::path::Path;
use tempfile::TempDir;

/// How a table is written and declared.
#[derive(Clone, Copy)]
struct Form {
    layout: &'static str,
    between: &'static str,
    age_unit: &'static str,
    years_per_unit: f64,
    age_zero_ce: f64,
    direction: &'static str,
    order: &'static str,
    angle_unit: &'static str,
    convention: &'static str,
}

const PLAIN: Form = Form {
    layout: "comma",
    between: ",",
    age_unit: "kyr",
    years_per_unit: 1000.0,
    age_zero_ce: 1950.0,
    direction: "past_positive",
    order: "youngest_first",
    angle_unit: "degree",
    convention: "heliocentric",
};

/// A table of an orbit at these ages, kyr before 1950, youngest first.
fn table(form: Form, ages: &[f64], orbit: &dyn Fn(f64) -> Elements) -> String {
    let angle = |degrees: f64| match form.angle_unit {
        "degree" => degrees,
        _ => degrees.to_radians(),
    };
    let mut rows: Vec<String> = Vec::new();
    for age in ages {
        let e = orbit(*age);
        let years = 1000.0 * age - 1950.0 + form.age_zero_ce;
        let sign = if form.direction == "past_positive" {
            1.0
        } else {
            -1.0
        };
        let perihelion = match form.convention {
            "heliocentric" => e.perihelion.heliocentric_deg(),
            _ => e.perihelion.sun_longitude_deg(),
        };
        let cells = [
            sign * years / form.years_per_unit,
            e.eccentricity,
            angle(e.obliquity_deg),
            angle(perihelion),
        ];
        rows.push(cells.map(|cell| format!("{cell:.12}")).join(form.between));
    }
    if form.order == "oldest_first" {
        rows.reverse();
    }
    let head = ["t", "ecc", "obl", "per"].join(form.between);
    format!("# A made-up table.\n{head}\n{}\n", rows.join("\n"))
}

/// A run whose orbit comes from such a table.
fn configuration(form: Form) -> String {
    let reference = Path::new(env!("CARGO_MANIFEST_DIR")).join("configs/reference.toml");
    let mut text = format!(
        "extends = \"{}\"\n[time]\nstart_kyr = 40.0\nend_kyr = 20.0\n",
        reference.display()
    );
    for (element, column) in [
        ("eccentricity", "ecc"),
        ("obliquity", "obl"),
        ("perihelion", "per"),
    ] {
        let _ = write!(
            text,
            "[orbit.{element}]\nkind = \"table\"\npath = \"orbit.txt\"\nlayout = \"{}\"\n\
             age_column = \"t\"\nage_unit = \"{}\"\nage_zero_ce = {:.1}\nage_direction = \"{}\"\n\
             age_order = \"{}\"\nlargest_gap_kyr = 1.0\ncolumn = \"{column}\"\n",
            form.layout, form.age_unit, form.age_zero_ce, form.direction, form.order,
        );
        if element != "eccentricity" {
            let _ = writeln!(text, "angle_unit = \"{}\"", form.angle_unit);
        }
        if element == "perihelion" {
            let _ = writeln!(text, "convention = \"{}\"", form.convention);
        }
    }
    text
}

fn write(folder: &TempDir, name: &str, content: impl AsRef<[u8]>) {
    std::fs::write(folder.path().join(name), content).expect("a file");
}

fn load(folder: &TempDir, edits: &[&str]) -> Experiment {
    let edits: Vec<String> = edits.iter().map(|edit| (*edit).to_owned()).collect();
    Experiment::load(&folder.path().join("run.toml"), &edits).expect("an experiment")
}

/// Largest difference of a run's orbit from another in e, obliquity, and e sin and e cos of perihelion.
fn differences(experiment: &Experiment, exact: &dyn Fn(f64) -> Elements) -> [f64; 4] {
    let built = experiment.build().expect("a model");
    let time = &experiment.run.time;
    let mut largest = [0.0_f64; 4];
    for i in 0..=2000 {
        let age = time.end_kyr + (time.start_kyr - time.end_kyr) * f64::from(i) / 2000.0;
        let (got, exact) = (
            built.model.drive().orbit_at(age).expect("an orbit"),
            exact(age),
        );
        let vector = |e: &Elements| {
            let (sine, cosine) = e.perihelion.heliocentric_deg().to_radians().sin_cos();
            [e.eccentricity * sine, e.eccentricity * cosine]
        };
        let (a, b) = (vector(&got), vector(&exact));
        let found = [
            got.eccentricity - exact.eccentricity,
            got.obliquity_deg - exact.obliquity_deg,
            a[0] - b[0],
            a[1] - b[1],
        ];
        for (largest, found) in largest.iter_mut().zip(found) {
            *largest = largest.max(found.abs());
        }
    }
    largest
}

fn every_kyr(from: i32, to: i32) -> Vec<f64> {
    (from..=to).map(f64::from).collect()
}

fn within(found: [f64; 4], limits: [f64; 4], what: &str) {
    for (found, limit) in found.iter().zip(limits) {
        assert!(*found < limit, "{what}: {found:e} is not below {limit:e}");
    }
}

#[test]
fn analytic_every_way_of_writing_a_table_gives_the_orbit_it_was_written_from() {
    let series = Orbit::build(&OrbitSpec::berger1978()).expect("the series");
    let exact = |age: f64| series.at(age).expect("within a million years");
    let forms = [
        ("plain", PLAIN),
        (
            "radians, seen as the Sun",
            Form {
                angle_unit: "radian",
                convention: "sun_longitude",
                ..PLAIN
            },
        ),
        (
            "years before 2000, oldest first, tabs",
            Form {
                layout: "tab",
                between: "\t",
                age_unit: "yr",
                years_per_unit: 1.0,
                age_zero_ce: 2000.0,
                order: "oldest_first",
                ..PLAIN
            },
        ),
        (
            "million years into the future, spaces",
            Form {
                layout: "whitespace",
                between: "   ",
                age_unit: "Myr",
                years_per_unit: 1e6,
                direction: "future_positive",
                ..PLAIN
            },
        ),
        (
            "semicolons",
            Form {
                layout: "semicolon",
                between: " ; ",
                age_zero_ce: 0.0,
                ..PLAIN
            },
        ),
    ];
    for (what, form) in forms {
        let folder = tempfile::tempdir().expect("a folder");
        write(&folder, "orbit.txt", table(form, &every_kyr(0, 60), &exact));
        write(&folder, "run.toml", configuration(form));
        // Cubic through rows of 1 kyr, as measured in src/orbit/solution/nodes.rs; printed ages of
        // million years have 12 decimals.
        within(
            differences(&load(&folder, &[]), &exact),
            [2e-6, 3e-5, 3e-6, 3e-6],
            what,
        );
    }
}

#[test]
fn analytic_a_wrong_convention_or_zero_is_another_orbit() {
    let series = Orbit::build(&OrbitSpec::berger1978()).expect("the series");
    let exact = |age: f64| series.at(age).expect("within a million years");
    let folder = tempfile::tempdir().expect("a folder");
    write(
        &folder,
        "orbit.txt",
        table(PLAIN, &every_kyr(0, 60), &exact),
    );
    for (key, value, at_least) in [
        (
            "orbit.perihelion.convention",
            "sun_longitude",
            [0.0, 0.0, 0.03, 0.03],
        ),
        ("orbit.obliquity.age_zero_ce", "0", [0.0, 0.2, 0.0, 0.0]),
    ] {
        write(&folder, "run.toml", configuration(PLAIN));
        let found = differences(&load(&folder, &[&format!("{key}={value}")]), &exact);
        for (found, least) in found.iter().zip(at_least) {
            assert!(*found >= least, "{key}: {found} {least}");
        }
    }
}

#[test]
fn analytic_the_integrated_orbit_as_a_text_table_passes_every_check_and_gives_itself_back() {
    let own = integrated::table().expect("the table of the program");
    let whole = Orbit::build(&OrbitSpec::integrated()).expect("the orbit");
    let exact = |age: f64| whole.at(age).expect("within the table");
    let folder = tempfile::tempdir().expect("a folder");
    for form in [
        PLAIN,
        Form {
            angle_unit: "radian",
            ..PLAIN
        },
    ] {
        write(
            &folder,
            "orbit.txt",
            table(form, &every_kyr(-100, 5500), &exact),
        );
        write(&folder, "run.toml", configuration(form));
        let edits = ["time.start_kyr=5500.0", "time.end_kyr=-100.0"];
        let found = differences(&load(&folder, &edits), &exact);
        // Where e nearly vanishes it has a cusp, which rows of e cannot follow.
        within(found, [5e-4, 1e-4, 5e-4, 5e-4], form.angle_unit);
    }
    // The same as bytes of the program's own form: no difference at all.
    write(&folder, "own.table", own.to_bytes(&[]));
    let source = "{kind=\"integrated_table\",path=\"own.table\"}";
    let edit = format!("orbit={{eccentricity={source},obliquity={source},perihelion={source}}}");
    let found = differences(&load(&folder, &[&edit]), &exact);
    within(found, [f64::MIN_POSITIVE; 4], "own table");
}

#[test]
fn what_stands_in_a_table_belongs_to_the_identity_of_a_run() {
    let series = Orbit::build(&OrbitSpec::berger1978()).expect("the series");
    let exact = |age: f64| series.at(age).expect("within a million years");
    let folder = tempfile::tempdir().expect("a folder");
    let text = table(PLAIN, &every_kyr(0, 60), &exact);
    write(&folder, "orbit.txt", &text);
    write(&folder, "co2.txt", "t;c\n0;280\n100;200\n");
    write(
        &folder,
        "own.table",
        integrated::table().expect("a table").to_bytes(&[]),
    );
    let co2 = "\n[co2]\nkind = \"declared_table\"\npath = \"co2.txt\"\nlayout = \"semicolon\"\n\
               age_column = \"t\"\nage_unit = \"kyr\"\nage_zero_ce = 2000\n\
               age_direction = \"past_positive\"\nage_order = \"youngest_first\"\n\
               largest_gap_kyr = 100\ncolumn = \"c\"\n\
               [orbit_mask]\nlatitude = { from_deg = 50, to_deg = 90, edge_deg = 0 }\n\
               [orbit_mask.orbit]\neccentricity = { kind = \"integrated_table\", path = \"own.table\" }\n\
               obliquity = { kind = \"integrated\" }\nperihelion = { kind = \"integrated\" }\n";
    write(&folder, "run.toml", configuration(PLAIN) + co2);
    let experiment = load(&folder, &[]);
    let drive = experiment.build().expect("a model").model;
    // Halfway between 0 and 100 kyr before 2000, which is 49.95 kyr before 1950.
    let halfway = drive.drive().co2_at(49.95).expect("a concentration");
    assert!((halfway - 240.0).abs() < 1e-9, "{halfway}");
    let files = experiment.inputs().expect("files").len();
    assert_eq!(files, 2 + 3, "configurations and data, each once");
    let before = experiment.identity().expect("an identity");
    for (name, content) in [
        (
            "orbit.txt",
            text.replacen("# A", "# Another", 1).into_bytes(),
        ),
        ("co2.txt", b"t;c\n0;280\n100;201\n".to_vec()),
        (
            "own.table",
            integrated::table()
                .expect("a table")
                .to_bytes(&[("note", "1".to_owned())]),
        ),
    ] {
        let was = std::fs::read(folder.path().join(name)).expect("a file");
        write(&folder, name, content);
        let changes = before.changes(&load(&folder, &[]).identity().expect("an identity"));
        assert_eq!(changes.len(), 1, "{name}: {changes:?}");
        write(&folder, name, was);
    }
    assert!(
        before
            .changes(&experiment.identity().expect("an identity"))
            .is_empty()
    );
}
