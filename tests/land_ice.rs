//! Prescribed northern land ice: where it lies, what it changes, and that none changes nothing.
#![cfg(feature = "netcdf")]

#[path = "support/reference.rs"]
mod reference;
#[path = "support/short.rs"]
mod short;

use ndarray::ArrayD;
use orbicline::grid::latitude::{LatitudeBands, Spacing};
use orbicline::output::RunFile;
use orbicline::units::EARTH_RADIUS_M;

/// The file of a short run; it stays readable while it is open.
fn run(edits: &[&str]) -> RunFile {
    let edits = [&short::EDITS[..], edits].concat();
    let folder = tempfile::tempdir().expect("a folder");
    let path = folder.path().join("run.nc");
    RunFile::open(&short::run(&reference::experiment(&edits), &path, 1)).expect("a file")
}

fn array(file: &RunFile, name: &str) -> ArrayD<f64> {
    file.array(name).expect("a variable")
}

fn bits(file: &RunFile) -> Vec<(String, Vec<u64>)> {
    let numbers = |name: &&str| {
        let values = file.array(name).ok()?;
        Some((
            (*name).to_owned(),
            values.iter().map(|v| v.to_bits()).collect(),
        ))
    };
    file.variables().iter().filter_map(numbers).collect()
}

#[test]
fn analytic_a_sheet_without_land_is_no_sheet_bit_for_bit() {
    let (without, beyond) = (
        run(&[]),
        run(&["land_ice={kind=\"constant\",edge_deg=90.0}"]),
    );
    assert!(without.array("northern_ice_sheet_edge").is_err());
    let ice = array(&beyond, "northern_ice_sheet_area");
    assert!(ice.iter().all(|area| *area == 0.0));
    let own = |name: &str| name.starts_with("northern_ice_sheet");
    let beyond: Vec<_> = bits(&beyond)
        .into_iter()
        .filter(|(name, _)| !own(name))
        .collect();
    assert_eq!(bits(&without), beyond);
    assert!(beyond.len() > 30);
}

#[test]
fn analytic_the_sheet_covers_the_land_north_of_its_edge_and_brightens_it() {
    let edge_deg = 52.0;
    let edit = format!("land_ice={{kind=\"constant\",edge_deg={edge_deg}}}");
    let (with, without) = (run(&[&edit]), run(&[]));
    let land = array(&with, "land_fraction");
    let bands = LatitudeBands::new(36, Spacing::EqualLatitude).expect("bands");
    let sine = |deg: f64| deg.to_radians().sin();
    let mut expected_area = 0.0;
    let (covered, free) = (array(&with, "snow_cover"), array(&without, "snow_cover"));
    for band in 0..36 {
        let [south, north] = [bands.edge_deg()[band], bands.edge_deg()[band + 1]];
        let share = (sine(north) - sine(south.max(edge_deg))) / (sine(north) - sine(south));
        let share = share.max(0.0);
        let zone = 2.0 * std::f64::consts::PI * EARTH_RADIUS_M * EARTH_RADIUS_M;
        expected_area += share * land[[band]] * zone * (sine(north) - sine(south));
        // No snow in July on the land south of the Arctic: what is white there is the sheet.
        if (50.0..65.0).contains(&south) {
            let july = [69, 6, band];
            assert!(free[july] < 0.05, "snow in July at {south}: {}", free[july]);
            assert!(
                covered[july] >= share - 1e-6,
                "{south}: {} {share}",
                covered[july]
            );
            assert!(
                covered[july] < share + 0.3,
                "{south}: {} {share}",
                covered[july]
            );
        }
    }
    let area = array(&with, "northern_ice_sheet_area");
    for area in &area {
        assert!(
            (area / expected_area - 1.0).abs() < 1e-6,
            "{area} {expected_area}"
        );
    }
    let edge = array(&with, "northern_ice_sheet_edge");
    assert!(edge.iter().all(|e| (e - edge_deg).abs() < 1e-5));
    // Land is brighter and the Earth colder; in the far south nothing is white that was not before.
    let last = |file: &RunFile, name: &str| array(file, name)[[69]];
    assert!(last(&with, "planetary_albedo") > last(&without, "planetary_albedo") + 0.002);
    let cooling =
        last(&without, "global_air_temperature_2m") - last(&with, "global_air_temperature_2m");
    assert!(cooling > 0.3, "{cooling}");
    let south = array(&with, "snow_cover")[[69, 6, 0]] - array(&without, "snow_cover")[[69, 6, 0]];
    assert!(south.abs() < 1e-12);
}

#[test]
fn converges_a_moving_edge_acts_without_jumps_across_the_edges_of_bands() {
    // The sheet over one band edge: the cooling grows with the area, not by whole bands.
    let albedo = |edge_deg: f64| {
        let edit = format!("land_ice={{kind=\"constant\",edge_deg={edge_deg}}}");
        array(&run(&[&edit]), "planetary_albedo")[[0]]
    };
    let [a, b, c, d] = [57.0, 56.0, 55.0, 54.0].map(albedo);
    for (first, second) in [(b - a, c - b), (c - b, d - c)] {
        assert!(
            first > 0.0 && (0.5..2.0).contains(&(second / first)),
            "{first:e} {second:e}"
        );
    }
}

#[test]
fn a_table_of_edges_is_in_the_file_and_in_the_forcing_of_each_year() {
    let folder = tempfile::tempdir().expect("a folder");
    let path = folder.path().join("ice.txt");
    // Years CE, oldest first: -8200 is 10.15 kyr before 1950, -8000 is 9.95.
    std::fs::write(&path, "year edge\n-8200 50\n-8000 70\n").expect("a table");
    let edit = format!(
        "land_ice={{kind=\"table\",path=\"{}\",layout=\"whitespace\",age_column=\"year\",\
         age_unit=\"yr\",age_zero_ce=0,age_direction=\"future_positive\",age_order=\"oldest_first\",\
         largest_gap_kyr=0.2,column=\"edge\",angle_unit=\"degree\"}}",
        path.display()
    );
    let file = run(&[&edit]);
    let (age, edge) = (array(&file, "age"), array(&file, "northern_ice_sheet_edge"));
    for (age, edge) in age.iter().zip(&edge) {
        let expected = 50.0 + (10.15 - age) / 0.2 * 20.0;
        assert!((edge - expected).abs() < 1e-4, "{age}: {edge} {expected}");
    }
    assert!(edge[[69]] > edge[[0]] + 10.0);
    let albedo = array(&file, "planetary_albedo");
    assert!(
        albedo[[0]] > albedo[[69]] + 0.002,
        "{} {}",
        albedo[[0]],
        albedo[[69]]
    );
}
