//! The variables that the energy balance contributes to a record, in the order in which
//! `report` works them out.

use crate::series::{Axis, Scale, Statistic, Variable};

/// Name, units, long name, standard name.
type Row = (
    &'static str,
    &'static str,
    &'static str,
    Option<&'static str>,
);

const TEMPERATURE: &str = "degC";

const MONTHLY: [Row; 10] = [
    (
        "insolation",
        "W m-2",
        "insolation at the top of the atmosphere",
        Some("toa_incoming_shortwave_flux"),
    ),
    (
        "air_temperature_sea_level",
        TEMPERATURE,
        "temperature of the air column brought to sea level",
        None,
    ),
    (
        "land_surface_temperature",
        TEMPERATURE,
        "land surface temperature at the land's elevation",
        Some("surface_temperature"),
    ),
    (
        "ocean_temperature",
        TEMPERATURE,
        "temperature of the ocean mixed layer",
        Some("sea_surface_temperature"),
    ),
    (
        "air_temperature_2m",
        TEMPERATURE,
        "air temperature at 2 m",
        Some("air_temperature"),
    ),
    (
        "land_air_temperature_2m",
        TEMPERATURE,
        "air temperature at 2 m over land",
        Some("air_temperature"),
    ),
    (
        "ocean_air_temperature_2m",
        TEMPERATURE,
        "air temperature at 2 m over ocean and sea ice",
        Some("air_temperature"),
    ),
    (
        "snow_cover",
        "1",
        "fraction of the land under snow or ice sheet",
        Some("surface_snow_area_fraction"),
    ),
    (
        "sea_ice_fraction",
        "1",
        "fraction of the ocean under sea ice",
        Some("sea_ice_area_fraction"),
    ),
    (
        "sea_ice_thickness",
        "m",
        "sea-ice volume per area of ocean",
        None,
    ),
];

const BY_EDGE: [Row; 3] = [
    (
        "ocean_heat_transport",
        "PW",
        "northward heat transport of the ocean",
        Some("northward_ocean_heat_transport"),
    ),
    (
        "atmosphere_heat_transport",
        "PW",
        "northward heat transport of the atmosphere",
        Some("northward_atmosphere_heat_transport"),
    ),
    (
        "total_heat_transport",
        "PW",
        "northward heat transport of ocean and atmosphere",
        None,
    ),
];

const BY_BAND: [Row; 3] = [
    (
        "ocean_surface_gain",
        "W m-2",
        "net heat gain of the ocean through its surface, per area of ocean",
        Some("surface_downward_heat_flux_in_sea_water"),
    ),
    ("absorbed_solar", "W m-2", "absorbed solar radiation", None),
    (
        "outgoing_longwave",
        "W m-2",
        "outgoing longwave radiation",
        Some("toa_outgoing_longwave_flux"),
    ),
];

const BY_HEMISPHERE: [Row; 4] = [
    ("sea_ice_area", "m2", "sea-ice area", Some("sea_ice_area")),
    (
        "high_latitude_ocean_loss_net",
        "PW",
        "net annual heat loss of the ocean poleward of 45 degrees",
        None,
    ),
    (
        "sinking_region_loss_net",
        "PW",
        "net annual heat loss of the ocean in the deep-sinking regions",
        None,
    ),
    (
        "sinking_region_loss_gross",
        "PW",
        "heat loss of the ocean in the deep-sinking regions, seasons of loss only",
        None,
    ),
];

const GLOBAL: [Row; 5] = [
    (
        "tropical_ocean_gain",
        "PW",
        "net annual heat gain of the ocean within 30 degrees of the equator",
        None,
    ),
    (
        "global_air_temperature_2m",
        TEMPERATURE,
        "global annual mean air temperature at 2 m",
        Some("air_temperature"),
    ),
    (
        "global_absorbed_solar",
        "W m-2",
        "global mean absorbed solar radiation",
        None,
    ),
    (
        "global_outgoing_longwave",
        "W m-2",
        "global mean outgoing longwave radiation",
        Some("toa_outgoing_longwave_flux"),
    ),
    (
        "planetary_albedo",
        "1",
        "planetary albedo",
        Some("planetary_albedo"),
    ),
];

/// All variables, in order.
pub(super) fn variables() -> Vec<Variable> {
    let groups: [(&[Row], &'static [Axis]); 5] = [
        (&MONTHLY, &[Axis::Month, Axis::Latitude]),
        (&BY_EDGE, &[Axis::LatitudeEdge]),
        (&BY_BAND, &[Axis::Latitude]),
        (&BY_HEMISPHERE, &[Axis::Hemisphere]),
        (&GLOBAL, &[]),
    ];
    groups
        .into_iter()
        .flat_map(|(rows, axes)| rows.iter().map(move |row| variable(row, axes)))
        .collect()
}

fn variable(&(name, units, long_name, standard_name): &Row, axes: &'static [Axis]) -> Variable {
    Variable {
        name,
        axes,
        units,
        long_name,
        standard_name,
        scale: if units == TEMPERATURE {
            Scale::Temperature
        } else {
            Scale::Plain
        },
        statistic: Statistic::Mean,
    }
}
