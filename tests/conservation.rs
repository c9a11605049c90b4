//! Heat of the coupled model after a step change of the orbit, and the balance of a steady state.
//!
//! The residual is the change of the heat held minus all that came in, over centuries, in
//! compensated sums. The step: obliquity 22 to 24.5 degrees at eccentricity 0.05, from balance
//! with the old orbit.
#![expect(clippy::print_stdout, reason = "the numbers measured are worth seeing")]

#[path = "support/accounts.rs"]
mod accounts;
#[path = "support/balance.rs"]
mod balance;
#[path = "conservation/seen.rs"]
mod seen;
#[path = "conservation/setup.rs"]
mod setup;

use accounts::{accounts, flows};
use balance::imbalance;
use orbicline::model::Model;
use orbicline::numerics::sum::CompensatedSum;
use orbicline::physics::budget::{Account, Ledger, Quantity};
use seen::{in_transit, values};
use setup::{run, stepped, with_stove};

/// Residual over net change and over throughput.
fn residuals(what: &str, ledger: &Ledger) -> [f64; 2] {
    let of_net = (ledger.residual() / ledger.net_change()).abs();
    let of_throughput = ledger.relative_residual().abs();
    println!(
        "{what}: residual {:.2e} J, net change {:.2e} J, throughput {:.2e} J; over net {of_net:.1e}, over throughput {of_throughput:.1e}",
        ledger.residual(),
        ledger.net_change(),
        ledger.throughput()
    );
    [of_net, of_throughput]
}

fn after_step(what: &str, edits: &[&str], slow_years: f64, seasonal_years: u32) -> [f64; 2] {
    let mut model = stepped(edits);
    run(&mut model, slow_years, seasonal_years);
    residuals(what, model.ledger())
}

#[test]
fn conserves_heat_over_1000_years_with_the_column_frozen() {
    for bands in ["grid.bands=36", "grid.bands=72"] {
        let edits = [bands, "physics.ocean_column.evolution=frozen"];
        let [of_net, of_throughput] =
            after_step(&format!("frozen, {bands}, 1000 years"), &edits, 1.0, 1000);
        assert!(of_net < 1e-12 && of_throughput < 1e-14);
    }
}

#[test]
fn conserves_heat_over_1000_years_coupled() {
    for bands in ["grid.bands=36", "grid.bands=72"] {
        let [of_net, of_throughput] = after_step(
            &format!("coupled, {bands}, 1000 years"),
            &[bands],
            1.0,
            1000,
        );
        assert!(of_net < 1e-11 && of_throughput < 1e-14);
    }
}

#[test]
fn conserves_heat_with_an_accelerated_column() {
    let [of_net, of_throughput] = after_step("M = 20, 200 years", &[], 20.0, 10);
    assert!(of_net < 1e-11 && of_throughput < 1e-14);
    let [of_net, of_throughput] = after_step("M = 20, 4000 years", &[], 20.0, 200);
    assert!(of_net < 1e-11 && of_throughput < 1e-14);
}

#[test]
fn conserves_heat_while_land_ice_comes_and_goes() {
    let folder = tempfile::tempdir().expect("a folder");
    let path = folder.path().join("ice.csv");
    std::fs::write(&path, "age,edge\n-0.2,80\n0,40\n0.2,80\n").expect("a table");
    let edit = format!(
        "land_ice={{kind=\"table\",path=\"{}\",layout=\"comma\",age_column=\"age\",\
         age_unit=\"kyr\",age_zero_ce=1950,age_direction=\"past_positive\",\
         age_order=\"youngest_first\",largest_gap_kyr=1,column=\"edge\",angle_unit=\"degree\"}}",
        path.display()
    );
    let mut model = stepped(&[&edit]);
    // Up and down by two degrees a year.
    for year in 0..300_u32 {
        let within = year % 40;
        let age_kyr = 0.01 * f64::from(within.min(40 - within));
        let outcome = model.held_year::<std::convert::Infallible>(age_kyr, 1.0);
        outcome.expect("a year without fault");
    }
    let [of_net, of_throughput] = residuals("moving land ice, 300 years", model.ledger());
    assert!(of_net < 1e-11 && of_throughput < 1e-14);
}

#[test]
fn heat_that_a_component_slips_to_another_is_caught() {
    // 1e9 W, a millionth of a petawatt, over the whole ocean.
    let mut model = with_stove(1e9);
    run(&mut model, 1.0, 100);
    let [of_net, of_throughput] = residuals("with a stove of 1e9 W", model.ledger());
    assert!(of_net > 1e-7 && of_throughput > 1e-9);
    let mut model = with_stove(0.0);
    run(&mut model, 1.0, 100);
    assert!(model.ledger().relative_residual().abs() < 1e-14);
}

/// Accounts and heat in transit of some years after the step.
type Years = Vec<(Vec<Account>, CompensatedSum)>;

fn recorded(model: &mut Model, seasonal_years: u32) -> Years {
    let mut year = || {
        run(model, 1.0, 1);
        (accounts(model), in_transit(model))
    };
    (0..seasonal_years).map(|_| year()).collect()
}

/// The planet's ledger without the flow of that component and name.
fn planet(years: &Years, dropped: Option<(&str, &str)>) -> Ledger {
    let mut ledger = Ledger::new(Quantity::Energy);
    for (accounts, in_transit) in years {
        let mut accounts = accounts.clone();
        for a in &mut accounts {
            let component = a.component;
            a.from_outside
                .retain(|f| Some((component, f.name)) != dropped);
        }
        ledger.post(&accounts, *in_transit);
    }
    ledger
}

fn of_component<'a>(years: &'a Years, component: &str) -> Vec<&'a Account> {
    let find = |year: &'a (Vec<Account>, _)| {
        let found = year.0.iter().find(|a| a.component == component);
        found.expect("an account in every year")
    };
    years.iter().map(find).collect()
}

#[test]
fn conserves_with_every_flow_and_without_any_of_them_not() {
    let mut model = stepped(&[]);
    let years = recorded(&mut model, 300);
    let ledger = planet(&years, None);
    assert_eq!(&ledger, model.ledger(), "the model books otherwise");
    for account in &years[0].0 {
        let own = of_component(&years, account.component);
        let whole = imbalance(&own, None).abs();
        println!("{}: {whole:.1e} of its flows", account.component);
        assert!(whole < 1e-14);
        for flow in flows(account) {
            let left = imbalance(&own, Some(flow.name)).abs();
            println!("  without {}: {left:.1e}", flow.name);
            assert!(left > 1e9 * whole.max(1e-17), "{} is not needed", flow.name);
        }
        for flow in &account.from_outside {
            let without = planet(&years, Some((account.component, flow.name)));
            let of_throughput = without.residual().abs() / ledger.throughput();
            println!("  planet without {}: {of_throughput:.1e}", flow.name);
            assert!(of_throughput > 1e-3, "{} is not needed", flow.name);
        }
    }
}

#[test]
fn conserves_what_is_on_its_way_between_components() {
    let mut years = recorded(&mut stepped(&[]), 300);
    let whole = planet(&years, None).relative_residual().abs();
    for (_, in_transit) in &mut years {
        *in_transit = CompensatedSum::default();
    }
    let without = planet(&years, None).relative_residual().abs();
    println!("nothing in transit: {without:.1e}, was {whole:.1e}");
    assert!(whole < 1e-14 && without > 1e6 * whole);
}

fn amount(year: &(Vec<Account>, CompensatedSum), component: &str, name: &str) -> f64 {
    let account = year.0.iter().find(|a| a.component == component);
    let flow = account.and_then(|a| a.from_components.iter().find(|f| f.name == name));
    flow.expect("a flow of that name").amount.value()
}

#[test]
fn conserves_what_one_component_gives_and_the_other_receives() {
    let years = recorded(&mut stepped(&[]), 50);
    for pair in years.windows(2) {
        let lost = amount(&pair[1], "energy_balance", "sinking water");
        let received = amount(&pair[1], "ocean_column", "sinking water");
        assert!(
            (lost + received).abs() < 1e-14 * lost.abs(),
            "{lost} {received}"
        );
        // Given in one year, received in the next.
        let given = amount(&pair[0], "ocean_column", "given to the mixed layer");
        let arrived = amount(&pair[1], "energy_balance", "heat from the column");
        assert!(
            (given + arrived).abs() < 1e-14 * given.abs(),
            "{given} {arrived}"
        );
    }
    let [first, second] =
        [0, 1].map(|y| amount(&years[y], "ocean_column", "given to the mixed layer"));
    assert!(
        (first - second).abs() > 1e-12 * first.abs(),
        "the delay cannot be seen"
    );
}

/// Edges of the largest southward and northward transport, and what the ocean gains between.
fn peaks(transport: &[f64], gain_pw: &[f64]) -> [f64; 2] {
    let half = transport.len() / 2;
    let edge = |better: fn(f64, f64) -> bool, range: std::ops::Range<usize>| {
        range.reduce(|a, b| {
            if better(transport[b], transport[a]) {
                b
            } else {
                a
            }
        })
    };
    let south = edge(|b, a| b < a, 0..half + 1).expect("edges");
    let north = edge(|b, a| b > a, half..transport.len()).expect("edges");
    assert!(0 < south && south < north && north < transport.len() - 1);
    let gained: f64 = gain_pw[south..north].iter().sum();
    [transport[north] - transport[south], gained]
}

#[test]
fn conserves_in_a_steady_state_the_ocean_carries_away_what_it_gains() {
    let experiment = setup::reference::experiment(&[]);
    let built = experiment.build().expect("a model");
    let mut model = built.model;
    run(&mut model, 60.0, 3000);
    let transport = values(&model, &experiment, "ocean_heat_transport");
    let gain = values(&model, &experiment, "ocean_surface_gain");
    let area = &built.setting.surface.ocean_area_m2;
    let gain_pw: Vec<f64> = gain
        .iter()
        .zip(area)
        .map(|(g, a)| if *a > 0.0 { g * a * 1e-15 } else { 0.0 })
        .collect();
    let drift: f64 = gain_pw.iter().sum();
    let [carried, gained] = peaks(&transport, &gain_pw);
    println!(
        "peaks {carried:.9} PW, gain between {gained:.9} PW, gain of all oceans {drift:.1e} PW"
    );
    assert!(drift.abs() < 1e-6, "not steady");
    assert!((carried - gained).abs() < 1e-6);
    // The same by one band too many, as a wrong edge would.
    let shifted: Vec<f64> = gain_pw[1..].iter().copied().chain([0.0]).collect();
    let [_, wrong] = peaks(&transport, &shifted);
    assert!((carried - wrong).abs() > 1e-2, "one band does not matter");
}
