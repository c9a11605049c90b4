//! Variables the column contributes to a record: names, units and words.
//!
//! The order is that of `OceanColumn::record`. Units follow UDUNITS; names follow CF where its table has
//! one (it has none for the thermocline).

use crate::series::{Axis, Scale, Statistic, Variable};

fn plain(name: &'static str, units: &'static str, long_name: &'static str) -> Variable {
    Variable {
        name,
        axes: &[],
        units,
        long_name,
        standard_name: None,
        scale: Scale::Plain,
        statistic: Statistic::Mean,
    }
}

fn temperature(name: &'static str, long_name: &'static str) -> Variable {
    Variable {
        scale: Scale::Temperature,
        ..plain(name, "degC", long_name)
    }
}

/// All variables, in order.
pub(super) fn declared() -> Vec<Variable> {
    let profile = Variable {
        axes: &[Axis::Depth],
        standard_name: Some("sea_water_potential_temperature"),
        ..temperature(
            "column_temperature",
            "temperature of the low-latitude ocean column",
        )
    };
    let mut all = vec![profile];
    all.extend(depths());
    all.extend(flows());
    all.extend([
        temperature(
            "deep_sinking_temperature",
            "temperature of the water that sinks in high latitudes",
        ),
        temperature(
            "low_latitude_surface_temperature",
            "mixed-layer temperature above the column",
        ),
    ]);
    all
}

fn depths() -> [Variable; 5] {
    [
        plain(
            "isotherm_20c_depth",
            "m",
            "depth of the 20 degree C isotherm",
        ),
        plain(
            "relative_isotherm_depth",
            "m",
            "depth of the isotherm 5 K colder than the top of the column",
        ),
        plain(
            "pycnocline_depth",
            "m",
            "pycnocline scale: heat content over top-to-bottom contrast",
        ),
        plain(
            "half_contrast_depth",
            "m",
            "depth where temperature is half-way from top to bottom",
        ),
        plain(
            "warm_water_heat",
            "J m-2",
            "heat above the 20 degree C isotherm, counted from 20 degree C",
        ),
    ]
}

fn flows() -> [Variable; 4] {
    [
        plain(
            "deep_sinking",
            "m3 s-1",
            "sinking of water in high latitudes",
        ),
        plain(
            "subtropical_cell",
            "m3 s-1",
            "sinking of water in the wind-driven shallow cell",
        ),
        plain(
            "southern_upwelling",
            "m3 s-1",
            "upwelling of deep water in the Southern Ocean",
        ),
        plain(
            "overturning",
            "m3 s-1",
            "all water that passes through the column",
        ),
    ]
}
