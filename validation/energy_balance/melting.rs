//! Melting ice: its surface reaches the melting point in summer and does not pass it. See README.md.

use crate::energy_balance_set_up::reference;
use orbicline::model::observer::Nobody;

/// Monthly values of a variable of the energy balance, `[month][band]`.
fn monthly(values: &[f64], names: &[&str], name: &str, bands: usize) -> Vec<f64> {
    let place = names.iter().position(|n| *n == name).unwrap();
    assert!(place < 10, "the monthly variables come first");
    values[place * 12 * bands..(place + 1) * 12 * bands].to_vec()
}

#[test]
fn analytic_melting_ice_stays_at_the_melting_point() {
    // Fresh ice melts at 0 degC (handbook); sea water under it is at -1.8 degC in this model.
    let experiment = reference(&[]);
    let built = experiment.build().unwrap();
    let (mut model, bands) = (built.model, built.setting.surface.bands.len());
    model
        .spin_up(0.0, experiment.run.time.spin_up, &mut Nobody)
        .unwrap();
    let part = &model.components()[0];
    let (mut values, names) = (Vec::new(), part.variables());
    part.record(&mut values);
    let names: Vec<&str> = names.iter().map(|v| v.name).collect();
    let get = |name| monthly(&values, &names, name, bands);
    let (two_metre, air) = (
        get("ocean_air_temperature_2m"),
        get("air_temperature_sea_level"),
    );
    let cover = get("sea_ice_fraction");
    let p = experiment.run.physics.energy_balance.as_ref().unwrap();
    let w = p.air_2m_surface_weight;
    let icy = (0..12 * bands).filter(|&k| cover[k] > 0.9);
    let surface: Vec<f64> = icy
        .map(|k| (two_metre[k] - (1.0 - w) * air[k]) / w)
        .collect();
    let warmest = surface.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    assert!(surface.len() > 10, "{} icy months", surface.len());
    // The warmest month of closed ice: at the melting point but for the leads.
    assert!(warmest <= 1e-9 && warmest > -0.5, "{warmest} degC");
}
