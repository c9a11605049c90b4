//! Bad input: every fault with what is wrong and what to do.

use super::{Folder, run};

#[test]
fn numbers_out_of_range_are_refused() {
    let folder = Folder::new();
    let annual = "insolation annual --latitude 65";
    let range = "--from-kyr 10 --to-kyr 0 --step-kyr";
    for (words, fragments) in [
        (
            "insolation annual --latitude 91 --at-kyr 0".to_owned(),
            ["latitude 91", "-90 and 90"],
        ),
        (
            "insolation daily --latitude 65 --sun-longitude 361 --at-kyr 0".to_owned(),
            ["solar longitude 361", "0 and 360"],
        ),
        (
            "insolation season --latitude 65 --from-longitude -1 --to-longitude 9 --at-kyr 0"
                .to_owned(),
            ["solar longitude -1", "0 and 360"],
        ),
        (format!("{annual} {range} 0"), ["step of 0 kyr", "above 0"]),
        (
            format!("{annual} {range} -1"),
            ["step of -1 kyr", "above 0"],
        ),
        (
            format!("{annual} {range} 1e-9"),
            ["values in the table", "at most 10000000"],
        ),
        (format!("{annual} {range} nan"), ["step = NaN", "finite"]),
        (
            format!("{annual} --from-kyr 0 --to-kyr 10 --step-kyr 1"),
            ["from 0 to 10", "exchange them"],
        ),
        (
            format!("{annual} --at-kyr 5501"),
            ["age 5501 kyr", "from 5500 to -100"],
        ),
        (
            format!("{annual} --at-kyr 1200 --solution berger1978"),
            ["age 1200 kyr", "from 1000 to -1000"],
        ),
        (
            format!("{annual} --at-kyr 0 --against-kyr 6000"),
            ["age 6000 kyr", "5500"],
        ),
        (
            format!("{annual} --at-kyr 0 --solar-constant-w-m2 -5"),
            ["solar constant -5", "10000"],
        ),
        (
            "orbit --from-kyr 9 --to-kyr 0 --step-kyr 0".to_owned(),
            ["step of 0 kyr", "above 0"],
        ),
        (
            "orbit --from-kyr 0 --to-kyr 9 --step-kyr 1".to_owned(),
            ["from 0 to 9", "exchange"],
        ),
    ] {
        run(&folder, &words).says(&fragments);
    }
}

#[test]
fn words_that_are_not_understood_are_refused() {
    let folder = Folder::new();
    let age = "--at-kyr 0";
    for (words, fragments) in [
        (
            format!("insolation annual --latitude 65 {age} --solution berger78"),
            ["berger78", "similar value exists: 'berger1978'"],
        ),
        (
            format!("insolation annual --latitude 65N {age}"),
            ["`65N`", "no finite number"],
        ),
        (
            format!("insolation annual --latitude 9:0:1 {age}"),
            ["`9:0:1`", "from:to:step"],
        ),
        (
            format!("insolation daily --latitude 65 --date 02-30 {age}"),
            ["`02-30`", "06-21"],
        ),
        (
            format!("insolation daily --latitude 65 --sun-longitude summer {age}"),
            ["`summer`", "june-solstice"],
        ),
        (
            format!("insolation daily --latitude 65 {age}"),
            ["--sun-longitude", "--date"],
        ),
        (
            format!("insolation anual --latitude 65 {age}"),
            ["anual", "annual"],
        ),
        (
            format!("insolation annual --latitude 65 {age} --from-kyr 9"),
            ["--at-kyr", "cannot be used with"],
        ),
        (
            "insolation annual --latitude 65".to_owned(),
            ["--from-kyr", "required"],
        ),
        (
            format!(
                "insolation annual --latitude 65 {age} --config short.toml --solution integrated"
            ),
            ["--config", "cannot be used with"],
        ),
        (
            "orbit --from-kyr 1 --to-kyr 0 --step-kyr 1 --set tide.scale=1".to_owned(),
            ["required", "--integrate"],
        ),
        (
            "orbit --integrate --from-kyr 1 --to-kyr 0".to_owned(),
            ["required", "--out <FILE>"],
        ),
    ] {
        run(&folder, &words).says(&fragments);
    }
}

#[test]
fn files_are_refused_before_anything_is_computed() {
    let folder = Folder::new();
    folder.write("there.csv", "somebody's work");
    let words = "insolation annual --latitude 65 --at-kyr 0 --out";
    run(&folder, &format!("{words} there.csv")).says(&["there.csv", "exists already"]);
    run(&folder, &format!("{words} a.pdf")).says(&["a.pdf", ".csv or .nc", ".svg or .png"]);
    run(&folder, &format!("{words} a")).says(&["a: the ending"]);
    assert_eq!(folder.read("there.csv"), b"somebody's work");
    let replaced = run(&folder, &format!("{words} there.csv --overwrite"));
    assert!(replaced.ok && folder.read("there.csv") != b"somebody's work");
    // A failure leaves the file as it was.
    let good = folder.read("there.csv");
    run(
        &folder,
        &format!("{words} there.csv --overwrite --against-kyr 9999"),
    )
    .says(&["9999"]);
    assert_eq!(folder.read("there.csv"), good);
    assert_eq!(folder.files(), ["short.toml", "there.csv"]);
}

#[test]
fn a_faulty_configuration_is_told_with_its_place() {
    let folder = Folder::new();
    let words = "insolation annual --latitude 65 --at-kyr 0 --config short.toml --set";
    run(&folder, &format!("{words} orbit.obliqity=1")).says(&["obliqity", "obliquity"]);
    run(&folder, &format!("{words} grid.bands=3")).says(&["grid.bands"]);
    folder.write(
        "masked.toml",
        "extends = \"short.toml\"\n[orbit_mask.latitude]\nfrom_deg = 0\nto_deg = 90\nedge_deg = 5\n\
         [orbit_mask.orbit]\neccentricity = { kind = \"berger1978\" }\n\
         obliquity = { kind = \"berger1978\" }\nperihelion = { kind = \"berger1978\" }\n",
    );
    let words = "insolation annual --latitude 65 --at-kyr 0 --config masked.toml";
    run(&folder, words).says(&["orbit_mask", "one orbit only"]);
}
