//! Tables of the orbit.

use super::{Folder, Rows, close, published, run};

#[test]
fn published_orbits_of_the_intercomparisons() {
    // published_orbits.csv: e to 5e-7, obliquity to 5e-4, perihelion to 5e-3 degrees (half of the last
    // digit printed) where the table is the series of Berger (1978).
    let folder = Folder::new();
    let all = published(include_str!("../../validation/orbit/published_orbits.csv"));
    for age in [0.0, 6.0, 21.0, 127.0] {
        let row = all
            .iter()
            .find(|row| (row[0] - age).abs() < 1e-9)
            .expect("an age");
        let words =
            format!("orbit --solution berger1978 --from-kyr {age} --to-kyr {age} --step-kyr 1");
        let table = Rows::of(&run(&folder, &words));
        close(&table.column("eccentricity"), &row[1..2], 6e-7);
        close(&table.column("obliquity_deg"), &row[2..3], 6e-4);
        close(
            &table.column("perihelion_heliocentric_deg"),
            &row[3..4],
            6e-3,
        );
    }
}

#[test]
fn published_spot_value_of_the_integrated_solution() {
    // Laskar et al. (2004) at 127.05 kyr before 2000: e 0.040986, obliquity 24.091 (its own short-period
    // noise is 5e-5 in e).
    let folder = Folder::new();
    let words = "orbit --from-kyr 127 --to-kyr 127 --step-kyr 1";
    let table = Rows::of(&run(&folder, words));
    close(&table.column("eccentricity"), &[0.040_986], 1e-4);
    close(&table.column("obliquity_deg"), &[24.091], 0.01);
}

#[test]
fn a_table_has_the_columns_asked_for_and_says_what_is_not_known() {
    let folder = Folder::new();
    let outcome = run(&folder, "orbit --from-kyr 0.2 --to-kyr -0.1 --step-kyr 0.1");
    let table = Rows::of(&outcome);
    let names =
        "age_kyr,eccentricity,obliquity_deg,perihelion_heliocentric_deg,climatic_precession";
    assert_eq!(table.names.join(","), names);
    let ages: Vec<_> = table.rows.iter().map(|row| row[0].as_str()).collect();
    assert_eq!(ages, ["0.2", "0.1", "0", "-0.1"]);
    for part in [
        "# orbital_solution: integrated",
        "Not known: the tide",
        "negative after",
        "102.9",
    ] {
        assert!(outcome.out.contains(part), "no {part} in\n{}", outcome.out);
    }
    let series = run(
        &folder,
        "orbit --solution berger1978 --from-kyr 1 --to-kyr 0 --step-kyr 1",
    );
    assert!(series.out.contains("Berger 1978") && !series.out.contains("Not known"));
}

#[test]
fn analytic_each_element_of_a_configuration_from_its_own_source() {
    let folder = Folder::new();
    let words = "orbit --config short.toml --from-kyr 10 --to-kyr 0 --step-kyr 10 \
                 --set orbit.obliquity={kind=\"constant\",obliquity_deg=23.25} \
                 --set orbit.eccentricity={kind=\"integrated\"}";
    let outcome = run(&folder, words);
    let table = Rows::of(&outcome);
    close(&table.column("obliquity_deg"), &[23.25, 23.25], 1e-12);
    let own = Rows::of(&run(
        &folder,
        "orbit --from-kyr 10 --to-kyr 0 --step-kyr 10",
    ));
    close(
        &table.column("eccentricity"),
        &own.column("eccentricity"),
        1e-12,
    );
    assert!(outcome.out.contains("obliquity_deg = 23.25") && outcome.out.contains("Not known"));
}

#[test]
fn the_netcdf_form_has_the_names_of_run_files() {
    let folder = Folder::new();
    let words = "orbit --from-kyr 2 --to-kyr 0 --step-kyr 1 --out orbit.nc";
    assert_eq!(run(&folder, words).out, "orbit.nc\n");
    let file = hdf5::File::open(folder.path("orbit.nc")).expect("a file");
    for name in [
        "eccentricity",
        "obliquity",
        "perihelion_longitude",
        "climatic_precession",
    ] {
        assert_eq!(file.dataset(name).expect(name).shape(), [3]);
    }
    let age = file.dataset("age").expect("age");
    assert!(age.attr("standard_name").is_err() && age.attr("units").is_ok());
}

#[test]
fn whoever_reads_only_the_beginning_gets_no_error() {
    let folder = Folder::new();
    let words = [
        "orbit",
        "--from-kyr",
        "5000",
        "--to-kyr",
        "0",
        "--step-kyr",
        "0.1",
    ];
    let mut child = folder
        .command(&words)
        .stdout(std::process::Stdio::piped())
        .stderr(std::process::Stdio::piped())
        .spawn()
        .expect("a program");
    drop(child.stdout.take());
    let output = child.wait_with_output().expect("an end");
    assert!(
        output.status.success() && output.stderr.is_empty(),
        "{output:?}"
    );
}
