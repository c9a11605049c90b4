//! Figures.

use super::{Folder, run};

/// Place of a text of a figure from the left.
fn across(svg: &str, text: &str) -> f64 {
    let line = svg
        .lines()
        .find(|line| line.ends_with(&format!(">{text}</text>")));
    let line = line.unwrap_or_else(|| panic!("no {text} in {svg}"));
    let place = line.split('"').nth(1).and_then(|x| x.parse().ok());
    place.expect("a place")
}

fn svg(folder: &Folder, words: &str) -> String {
    let outcome = run(
        folder,
        &format!("{words} --out figure.svg --overwrite --quiet"),
    );
    assert!(outcome.ok && outcome.err.is_empty(), "{outcome:?}");
    String::from_utf8(folder.read("figure.svg")).expect("text")
}

#[test]
fn the_orbit_as_three_panels_on_one_axis_that_runs_either_way() {
    let folder = Folder::new();
    let words = "orbit --from-kyr 400 --to-kyr 0 --step-kyr 1";
    let left = svg(&folder, words);
    for part in [
        "Eccentricity",
        "Obliquity (°)",
        "Age (kyr before 1950)",
        "width=\"85mm\"",
    ] {
        assert!(left.contains(part), "no {part}");
    }
    assert!(
        left.contains("Not known: the tide"),
        "the figure must say what it shows"
    );
    assert!(across(&left, "400") < across(&left, "100"));
    let right = svg(
        &folder,
        &format!("{words} --age-axis older-right --width-mm 170"),
    );
    assert!(across(&right, "400") > across(&right, "100"));
    assert!(right.contains("width=\"170mm\""));
}

#[test]
fn a_map_of_months_and_latitudes() {
    let folder = Folder::new();
    let words = "insolation monthly --latitude -90:90:10 --at-kyr 127";
    let map = svg(&folder, &format!("{words} --against-kyr 0"));
    for part in [
        "Anomaly (W m\u{207b}²)",
        ">60°S<",
        ">Month<",
        "data:image/png;base64,",
    ] {
        assert!(map.contains(part), "no {part}");
    }
    assert!(svg(&folder, words).contains("Insolation (W m\u{207b}²)"));
}

#[test]
fn the_same_words_give_the_same_text_and_pixels() {
    let folder = Folder::new();
    let words = "insolation caloric --latitude 65,-65 --from-kyr 100 --to-kyr 0 --step-kyr 2";
    let first = svg(&folder, words);
    assert!(first.contains(">65°N, summer half-year<"));
    assert!(first == svg(&folder, words));
    let pixels = || {
        let outcome = run(&folder, &format!("{words} --out a.png --overwrite"));
        assert_eq!((outcome.ok, outcome.out.as_str()), (true, "a.png\n"));
        folder.read("a.png")
    };
    let picture = pixels();
    assert!(picture.starts_with(b"\x89PNG") && picture == pixels());
}

#[test]
fn numbers_that_make_no_figure_are_refused_and_leave_nothing() {
    let folder = Folder::new();
    for (words, fragments) in [
        (
            "orbit --from-kyr 1 --to-kyr 1 --step-kyr 1 --out a.svg",
            ["one age", "range"],
        ),
        (
            "insolation annual --latitude 0 --at-kyr 0 --out a.png",
            ["single number", "several"],
        ),
        (
            "insolation monthly --latitude -90:90:10 --from-kyr 9 --to-kyr 0 --step-kyr 1 --out a.svg",
            ["19 latitudes and 12 moments", "--at-kyr"],
        ),
        (
            "insolation annual --latitude 0,9 --at-kyr 0 --out a.svg --width-mm 3",
            ["3 mm wide", "60 to 400"],
        ),
    ] {
        run(&folder, words).says(&fragments);
    }
    assert_eq!(folder.files(), ["short.toml"]);
}
