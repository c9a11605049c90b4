//! The repeating seasonal cycle: found from anywhere, with the error that is told, or not at all.
#![cfg(feature = "netcdf")]

#[path = "cli/program.rs"]
mod program;
#[path = "support/reference.rs"]
mod reference;

use orbicline::model::clock::SpinUp;
use orbicline::model::observer::Nobody;
use orbicline::model::steady::{Search, Steady};
use orbicline::model::{Model, RunError};
use orbicline::output::RunFile;
use orbicline::physics::Component;
use program::Folder;

fn model(edits: &[&str]) -> Model {
    reference::experiment(edits).build().expect("a model").model
}

fn search(model: &mut Model, tolerance_k: f64) -> Steady {
    let search = Search::new(tolerance_k, 5000).expect("numbers in range");
    model.steady(0.0, search, &mut Nobody).expect("a cycle")
}

/// Largest weighted difference of the states of two models, K.
fn apart(a: &Model, b: &Model) -> f64 {
    let state = |m: &Model| -> Vec<f64> {
        let weighted = |c: &dyn Component| {
            let pairs = c.weights().into_iter().zip(c.save());
            pairs
                .map(|(w, v)| if w > 0.0 { w * v } else { 0.0 })
                .collect::<Vec<_>>()
        };
        m.components()
            .iter()
            .flat_map(|c| weighted(c.as_ref()))
            .collect()
    };
    let pairs = state(a).into_iter().zip(state(b));
    pairs.map(|(a, b)| (a - b).abs()).fold(0.0, f64::max)
}

/// What the found cycle is after very many plain years.
fn by_patience(edits: &[&str]) -> Model {
    let mut model = model(edits);
    let spin_up = SpinUp {
        seasonal_yr: 3000,
        slow_years_per_seasonal_year: 50.0,
        settling_yr: 300,
    };
    model
        .spin_up(0.0, spin_up, &mut Nobody)
        .expect("plain years");
    model
}

#[test]
fn analytic_the_cycle_is_that_of_many_plain_years_within_the_error_that_is_told() {
    for closure in ["g", "w"] {
        let edit = format!("physics.ocean_column.sinking.closure.preset={closure}");
        let exact = by_patience(&[&edit]);
        for tolerance_k in [1e-2, 1e-4] {
            let mut found = model(&[&edit]);
            let told = search(&mut found, tolerance_k);
            let error = apart(&found, &exact);
            // What 3,000 plain years still lack is below 1e-7 K.
            assert!(
                error <= told.error_k.max(1e-7),
                "{closure}: {error:e} K, told {told:?}"
            );
            assert!(
                told.error_k <= tolerance_k && told.years < 150,
                "{closure}: {told:?}"
            );
        }
    }
}

#[test]
fn a_warm_start_leads_to_the_same_cycle_and_without_the_column_it_is_found_as_well() {
    let warm = [
        "physics.energy_balance.start.equator_c=35",
        "physics.energy_balance.start.fall_k=20",
        "physics.ocean_column.initial.bottom_c=12",
    ];
    let (mut usual, mut other) = (model(&[]), model(&warm));
    let (a, b) = (search(&mut usual, 1e-4), search(&mut other, 1e-4));
    assert!(
        apart(&usual, &other) <= a.error_k + b.error_k,
        "{a:?} {b:?}"
    );
}

#[test]
fn what_does_not_repeat_is_an_error_and_never_a_result() {
    // On a frozen planet the ice grows for ever: there is no repeating cycle.
    let cold = [
        "physics.energy_balance.start.equator_c=-25",
        "physics.energy_balance.start.sea_ice_m=5",
        "physics.ocean_column.initial.surface_c=-1.8",
        "physics.ocean_column.initial.bottom_c=-1.8",
    ];
    let mut frozen = model(&cold);
    let search = Search::new(1e-3, 400).expect("numbers in range");
    let refused = frozen.steady(0.0, search, &mut Nobody);
    assert!(
        matches!(refused, Err(RunError::NotSteady(_))),
        "{refused:?}"
    );
    let folder = Folder::new();
    let words = ["steady", "short.toml", "--from", "cold", "--out", "cold.nc"];
    let outcome = folder.orbicline(&[&words[..], &["--most-years", "100"]].concat());
    outcome.says(&["no repeating cycle within 100 seasonal years", "K"]);
    assert_eq!(folder.files(), ["short.toml"]);
}

#[test]
fn the_file_of_a_cycle_holds_one_record_and_how_it_was_found() {
    let folder = Folder::new();
    let outcome = folder.orbicline(&["steady", "short.toml", "--out", "cycle.nc"]);
    assert!(outcome.ok && outcome.err.is_empty(), "{outcome:?}");
    let file = RunFile::open(&folder.path("cycle.nc")).expect("a file");
    let temperature = file.series("global_air_temperature_2m").expect("a series");
    assert_eq!(temperature.values.len(), 1);
    let told = file.global("steady_state").expect("how it was found");
    assert!(told.contains("seasonal cycle found in") && told.contains("estimated error"));
    let line = format!("{:.4}", temperature.values[0]);
    assert!(outcome.out.contains(&line), "no {line} in\n{}", outcome.out);
    for (option, value, fragment) in [
        ("--tolerance-k", "0", "a tolerance of 0 K"),
        ("--most-years", "7", "7 years: at least 50"),
        ("--from", "hot", "hot"),
    ] {
        folder
            .orbicline(&["steady", "short.toml", option, value])
            .says(&[fragment]);
    }
    let before = folder.read("cycle.nc");
    folder
        .orbicline(&["steady", "short.toml", "--out", "cycle.nc"])
        .says(&["exists already"]);
    assert_eq!(folder.read("cycle.nc"), before);
}
