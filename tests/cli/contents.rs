//! What a run file must hold.

use orbicline::output::RunFile;
use std::path::Path;

/// Variables and their dimensions, with a range that no run of the present world leaves.
const VARIABLES: [(&str, &[&str], [f64; 2]); 44] = [
    ("age", &["age"], [10.0, 10.14]),
    ("age_bnds", &["age", "bnds"], [10.0, 10.14]),
    ("eccentricity", &["age"], [0.0, 0.07]),
    ("obliquity", &["age"], [22.0, 24.6]),
    ("perihelion_longitude", &["age"], [0.0, 360.0]),
    ("climatic_precession", &["age"], [-0.07, 0.07]),
    ("co2", &["age"], [280.0, 280.0]),
    ("co2_forcing", &["age"], [-1.3, -1.2]),
    ("insolation", MONTHLY, [0.0, 580.0]),
    ("air_temperature_sea_level", MONTHLY, [-70.0, 40.0]),
    ("land_surface_temperature", MONTHLY, [-80.0, 50.0]),
    ("ocean_temperature", MONTHLY, [-2.0, 32.0]),
    ("air_temperature_2m", MONTHLY, [-80.0, 45.0]),
    ("land_air_temperature_2m", MONTHLY, [-80.0, 45.0]),
    ("ocean_air_temperature_2m", MONTHLY, [-60.0, 35.0]),
    ("snow_cover", MONTHLY, [0.0, 1.0]),
    ("sea_ice_fraction", MONTHLY, [0.0, 1.0]),
    ("sea_ice_thickness", MONTHLY, [0.0, 20.0]),
    ("ocean_heat_transport", EDGES, [-4.0, 4.0]),
    ("atmosphere_heat_transport", EDGES, [-8.0, 8.0]),
    ("total_heat_transport", EDGES, [-8.0, 8.0]),
    ("ocean_surface_gain", BANDS, [-200.0, 200.0]),
    ("absorbed_solar", BANDS, [30.0, 350.0]),
    ("outgoing_longwave", BANDS, [80.0, 320.0]),
    ("sea_ice_area", SIDES, [0.0, 4e13]),
    ("high_latitude_ocean_loss_net", SIDES, [-2.0, 3.0]),
    ("sinking_region_loss_net", SIDES, [-2.0, 3.0]),
    ("sinking_region_loss_gross", SIDES, [0.0, 5.0]),
    ("tropical_ocean_gain", &["age"], [0.5, 4.0]),
    ("global_air_temperature_2m", &["age"], [5.0, 20.0]),
    ("global_absorbed_solar", &["age"], [210.0, 260.0]),
    ("global_outgoing_longwave", &["age"], [210.0, 260.0]),
    ("planetary_albedo", &["age"], [0.25, 0.36]),
    ("column_temperature", &["age", "depth"], [-2.0, 30.0]),
    ("isotherm_20c_depth", &["age"], [20.0, 400.0]),
    ("relative_isotherm_depth", &["age"], [20.0, 400.0]),
    ("overturning", &["age"], [1e7, 1e8]),
    ("deep_sinking", &["age"], [1e6, 1e8]),
    ("west_pacific_temperature", &["age"], [20.0, 35.0]),
    ("east_pacific_temperature", &["age"], [10.0, 35.0]),
    ("energy_flux_equator", &["age"], [-30.0, 30.0]),
    (
        "cross_equatorial_atmosphere_transport",
        &["age"],
        [-5e15, 5e15],
    ),
    ("summer_land_sea_contrast", SIDES, [-20.0, 40.0]),
    ("heat_residual_over_throughput", &["age"], [-1e-14, 1e-14]),
];
const MONTHLY: &[&str] = &["age", "month", "lat"];
const EDGES: &[&str] = &["age", "lat_edge"];
const BANDS: &[&str] = &["age", "lat"];
const SIDES: &[&str] = &["age", "hemisphere"];

/// Attributes and what must be in them.
const ATTRIBUTES: [(&str, &str); 7] = [
    ("configuration", "thickness_m = 100.0"),
    ("orbicline_version", env!("CARGO_PKG_VERSION")),
    ("orbicline_commit", ""),
    ("input_sha256", "reference.toml"),
    ("command_line", "run short.toml --out short.nc"),
    ("slow_years_per_seasonal_year", "1"),
    ("title", "A short run"),
];

/// Asserts that a file of the short run is complete.
pub(crate) fn check(path: &Path) {
    let file = RunFile::open(path).expect("a run file");
    for (name, dimensions, range) in VARIABLES {
        assert_eq!(
            file.dimensions(name).expect("dimensions"),
            dimensions,
            "{name}"
        );
        within(
            name,
            &file
                .array(name)
                .expect("numbers")
                .into_raw_vec_and_offset()
                .0,
            range,
        );
    }
    for (name, fragment) in ATTRIBUTES {
        let text = file.global(name).expect("an attribute");
        assert!(
            !text.is_empty() && text.contains(fragment),
            "{name} = {text}"
        );
    }
    for name in file.variables().into_iter().filter(|n| *n != "age_bnds") {
        let described = name.ends_with("_bnds") || file.attribute(name, "long_name").is_ok();
        assert!(described, "{name} has no long name");
    }
    let hashes = file.global("input_sha256").expect("hashes");
    assert_eq!(
        hashes.lines().count(),
        2,
        "short.toml and what it extends: {hashes}"
    );
    let ages = file.array("age").expect("ages").into_raw_vec_and_offset().0;
    assert_eq!(ages.len(), 70);
    assert!(ages.is_sorted_by(|older, younger| older > younger));
}

/// All numbers in the range, but for what does not exist; some must exist.
fn within(name: &str, values: &[f64], [low, high]: [f64; 2]) {
    let there: Vec<f64> = values.iter().copied().filter(|v| !v.is_nan()).collect();
    assert!(2 * there.len() > values.len(), "{name}: mostly missing");
    let rounding = 1e-6 * high.abs().max(low.abs());
    let outside = there
        .iter()
        .find(|v| **v < low - rounding || **v > high + rounding);
    assert!(
        outside.is_none(),
        "{name} = {outside:?}, not in {low} to {high}"
    );
}
