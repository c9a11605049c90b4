//! The variables that the energy balance contributes to a record, in the order in which
//! [`super::report`] works them out.

use crate::series::{Axis, Scale, Statistic, Variable};

const BY_MONTH: &[Axis] = &[Axis::Month, Axis::Latitude];

macro_rules! variable {
    ($name:literal, $axes:expr, $units:literal, $long:literal, $standard:expr, $scale:ident) => {
        Variable {
            name: $name,
            axes: $axes,
            units: $units,
            long_name: $long,
            standard_name: $standard,
            scale: Scale::$scale,
            statistic: Statistic::Mean,
        }
    };
}

/// All variables, in order.
pub(super) fn variables() -> Vec<Variable> {
    let mut list = monthly_variables();
    list.extend(annual_variables());
    list
}

fn monthly_variables() -> Vec<Variable> {
    vec![
        variable!(
            "insolation",
            BY_MONTH,
            "W m-2",
            "insolation at the top of the atmosphere",
            Some("toa_incoming_shortwave_flux"),
            Plain
        ),
        variable!(
            "air_temperature_sea_level",
            BY_MONTH,
            "degC",
            "temperature of the air column brought to sea level",
            None,
            Temperature
        ),
        variable!(
            "land_surface_temperature",
            BY_MONTH,
            "degC",
            "land surface temperature at the land's elevation",
            Some("surface_temperature"),
            Temperature
        ),
        variable!(
            "ocean_temperature",
            BY_MONTH,
            "degC",
            "temperature of the ocean mixed layer",
            Some("sea_surface_temperature"),
            Temperature
        ),
        variable!(
            "air_temperature_2m",
            BY_MONTH,
            "degC",
            "air temperature at 2 m",
            Some("air_temperature"),
            Temperature
        ),
        variable!(
            "land_air_temperature_2m",
            BY_MONTH,
            "degC",
            "air temperature at 2 m over land",
            Some("air_temperature"),
            Temperature
        ),
        variable!(
            "ocean_air_temperature_2m",
            BY_MONTH,
            "degC",
            "air temperature at 2 m over ocean and sea ice",
            Some("air_temperature"),
            Temperature
        ),
        variable!(
            "snow_cover",
            BY_MONTH,
            "1",
            "fraction of the land under snow or ice sheet",
            Some("surface_snow_area_fraction"),
            Plain
        ),
        variable!(
            "sea_ice_fraction",
            BY_MONTH,
            "1",
            "fraction of the ocean under sea ice",
            Some("sea_ice_area_fraction"),
            Plain
        ),
        variable!(
            "sea_ice_thickness",
            BY_MONTH,
            "m",
            "sea-ice volume per area of ocean",
            None,
            Plain
        ),
    ]
}

fn annual_variables() -> Vec<Variable> {
    const EDGES: &[Axis] = &[Axis::LatitudeEdge];
    const BOTH: &[Axis] = &[Axis::Hemisphere];
    vec![
        variable!(
            "ocean_heat_transport",
            EDGES,
            "PW",
            "northward heat transport of the ocean",
            Some("northward_ocean_heat_transport"),
            Plain
        ),
        variable!(
            "atmosphere_heat_transport",
            EDGES,
            "PW",
            "northward heat transport of the atmosphere",
            Some("northward_atmosphere_heat_transport"),
            Plain
        ),
        variable!(
            "total_heat_transport",
            EDGES,
            "PW",
            "northward heat transport of ocean and atmosphere",
            None,
            Plain
        ),
        variable!(
            "ocean_surface_gain",
            &[Axis::Latitude],
            "W m-2",
            "net heat gain of the ocean through its surface, per area of ocean",
            Some("surface_downward_heat_flux_in_sea_water"),
            Plain
        ),
        variable!(
            "absorbed_solar",
            &[Axis::Latitude],
            "W m-2",
            "absorbed solar radiation",
            None,
            Plain
        ),
        variable!(
            "outgoing_longwave",
            &[Axis::Latitude],
            "W m-2",
            "outgoing longwave radiation",
            Some("toa_outgoing_longwave_flux"),
            Plain
        ),
        variable!(
            "sea_ice_area",
            BOTH,
            "m2",
            "sea-ice area",
            Some("sea_ice_area"),
            Plain
        ),
        variable!(
            "high_latitude_ocean_loss_net",
            BOTH,
            "PW",
            "net annual heat loss of the ocean poleward of 45 degrees",
            None,
            Plain
        ),
        variable!(
            "sinking_region_loss_net",
            BOTH,
            "PW",
            "net annual heat loss of the ocean in the deep-sinking regions",
            None,
            Plain
        ),
        variable!(
            "sinking_region_loss_gross",
            BOTH,
            "PW",
            "heat loss of the ocean in the deep-sinking regions, seasons of loss only",
            None,
            Plain
        ),
        variable!(
            "tropical_ocean_gain",
            &[],
            "PW",
            "net annual heat gain of the ocean within 30 degrees of the equator",
            None,
            Plain
        ),
        variable!(
            "global_air_temperature_2m",
            &[],
            "degC",
            "global annual mean air temperature at 2 m",
            Some("air_temperature"),
            Temperature
        ),
        variable!(
            "global_absorbed_solar",
            &[],
            "W m-2",
            "global mean absorbed solar radiation",
            None,
            Plain
        ),
        variable!(
            "global_outgoing_longwave",
            &[],
            "W m-2",
            "global mean outgoing longwave radiation",
            Some("toa_outgoing_longwave_flux"),
            Plain
        ),
        variable!(
            "planetary_albedo",
            &[],
            "1",
            "planetary albedo",
            Some("planetary_albedo"),
            Plain
        ),
    ]
}
