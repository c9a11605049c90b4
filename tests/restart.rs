//! A run that goes on from a saved state is the run that was never stopped, bit for bit.
#![cfg(feature = "netcdf")]

#[path = "support/accounts.rs"]
mod accounts;
#[path = "support/forced.rs"]
mod forced;
#[path = "support/reference.rs"]
mod reference;
#[path = "support/short.rs"]
mod short;

use accounts::{accounts, flows};
use orbicline::config::run::Experiment;
use orbicline::model::Model;
use orbicline::model::clock::Plan;
use orbicline::model::observer::Nobody;
use orbicline::model::observer::{Keep, Observer, Restart};
use orbicline::output::RunFile;
use orbicline::series::Record;
use std::convert::Infallible;

fn fresh(experiment: &Experiment) -> Model {
    experiment.build().expect("a model").model
}

/// Years of a fast orbit, each with its own; from year `from` up to `to`.
fn years(model: &mut Model, from: u32, to: u32, slow_years: f64) {
    for year in from..to {
        let age_kyr = 220.0 - 0.2 * f64::from(year);
        let outcome = model.held_year::<Infallible>(age_kyr, slow_years);
        outcome.expect("a year without fault");
    }
}

/// Everything that can be seen of a model, as bits.
fn bits(model: &Model) -> Vec<(String, Vec<u64>)> {
    let mut all = model.restart().0;
    for component in model.components() {
        let mut record = Vec::new();
        component.record(&mut record);
        all.push((format!("record of {}", component.name()), record));
    }
    for account in accounts(model) {
        let amounts = flows(&account).flat_map(|f| f.amount.parts());
        let values = amounts.chain(account.stored.parts()).collect();
        all.push((format!("account of {}", account.component), values));
    }
    all.into_iter()
        .map(|(name, values)| (name, values.iter().map(|v| v.to_bits()).collect()))
        .collect()
}

/// Names of the parts that differ.
fn different(a: &Model, b: &Model) -> Vec<String> {
    let (a, b) = (bits(a), bits(b));
    assert_eq!(a.len(), b.len(), "other parts");
    let differ = a.iter().zip(&b).filter(|(x, y)| x != y);
    differ.map(|(x, _)| x.0.clone()).collect()
}

/// 20 years in one go, and 10 years and then, in a new model, 10 more.
fn whole_and_continued(
    edits: &[&str],
    slow_years: f64,
    spoil: impl Fn(&mut Restart),
) -> [Model; 2] {
    let experiment = reference::experiment(edits);
    let mut whole = fresh(&experiment);
    years(&mut whole, 0, 20, slow_years);
    let mut first = fresh(&experiment);
    years(&mut first, 0, 10, slow_years);
    let mut saved = first.restart();
    spoil(&mut saved);
    let mut second = fresh(&experiment);
    let restored = second.restore::<Infallible>(&saved);
    restored.expect("a state that fits");
    years(&mut second, 10, 20, slow_years);
    [whole, second]
}

#[test]
fn a_continued_model_is_the_same_bit_for_bit() {
    for edits in [
        &[][..],
        &["grid.bands=72"],
        &["physics.ocean_column.evolution=frozen"],
    ] {
        for slow_years in [1.0, 20.0] {
            let [whole, continued] = whole_and_continued(edits, slow_years, |_| ());
            let names = different(&whole, &continued);
            assert!(names.is_empty(), "{edits:?}, M = {slow_years}: {names:?}");
        }
    }
}

#[test]
fn a_model_under_moving_land_ice_is_continued_the_same_bit_for_bit() {
    let folder = tempfile::tempdir().expect("a folder");
    let path = folder.path().join("ice.csv");
    // The edge crosses several bands within the 20 years.
    std::fs::write(&path, "age,edge\n216,75\n220,45\n").expect("a table");
    let edit = format!(
        "land_ice={{kind=\"table\",path=\"{}\",layout=\"comma\",age_column=\"age\",\
         age_unit=\"kyr\",age_zero_ce=1950,age_direction=\"past_positive\",\
         age_order=\"youngest_first\",largest_gap_kyr=4,column=\"edge\",angle_unit=\"degree\"}}",
        path.display()
    );
    // The run ends where the table does.
    let edits = [edit.as_str(), "time.start_kyr=220", "time.end_kyr=216"];
    let [whole, continued] = whole_and_continued(&edits, 1.0, |_| ());
    let names = different(&whole, &continued);
    assert!(names.is_empty(), "{names:?}");
    let [none, _] = whole_and_continued(&edits[1..], 1.0, |_| ());
    assert!(
        !different(&whole, &none).is_empty(),
        "the ice does not matter"
    );
}

/// Moves every number of one part by its last bit: not each of them lives on into the next year.
fn nudge(state: &mut Restart, part: &str) {
    let found = state.0.iter_mut().find(|(name, _)| name == part);
    for value in &mut found.expect("a part of that name").1 {
        *value = f64::from_bits(value.to_bits() + 1);
    }
}

#[test]
fn the_last_bits_lost_in_any_part_are_seen() {
    let nudged = ["energy_balance", "ocean_column", "exchange", "ledger"];
    let parts = fresh(&reference::experiment(&[])).restart().0.len();
    // The equatorial Pacific keeps last year's contrast only to choose among several balances, and
    // the present climate has one.
    assert_eq!(parts, nudged.len() + 1, "parts without a nudge");
    for part in nudged {
        let [whole, continued] = whole_and_continued(&[], 1.0, |s| nudge(s, part));
        assert!(
            !different(&whole, &continued).is_empty(),
            "{part} does not matter"
        );
    }
}

#[test]
fn a_part_that_is_missing_or_of_another_size_is_refused_by_name() {
    let experiment = reference::experiment(&[]);
    let saved = fresh(&experiment).restart();
    for number in 0..saved.0.len() {
        let name = saved.0[number].0.clone();
        let mut without = saved.clone();
        without.0.remove(number);
        let mut longer = saved.clone();
        longer.0[number].1.push(0.0);
        for wrong in [without, longer] {
            let refused = fresh(&experiment).restore::<Infallible>(&wrong);
            let message = refused.expect_err("a state that does not fit").to_string();
            assert!(message.contains(&name), "{message} lacks {name}");
        }
    }
    let other = reference::experiment(&["grid.bands=72"]);
    let refused = fresh(&other).restore::<Infallible>(&saved);
    assert!(refused.is_err(), "36 bands went into 72");
}

/// Forcing of some years as bits, by a drive that begins with the first of them.
fn forcing(from: u32, to: u32) -> Vec<Vec<u64>> {
    let edits = [
        "orbit.perihelion={ kind = \"uniform_rotation\", heliocentric_deg_at_1950 = 0.0, period_kyr = 21.0 }",
    ];
    let experiment = reference::experiment(&edits);
    let setting = experiment.build().expect("a model").setting;
    let mut drive = forced::drive(&experiment, &setting);
    let mut year = |passed| {
        let f = drive.year(100.0, passed, 1.0).expect("a forcing");
        let all = f.insolation_w_m2.iter().chain(f.zenith_cosine);
        all.map(|v| v.to_bits()).collect()
    };
    (from..to).map(|y| year(f64::from(y) + 0.5)).collect()
}

#[test]
fn the_forcing_is_the_same_when_it_begins_within_an_interval_of_insolation() {
    let whole = forcing(0, 40);
    // Ten years share a table: year 13 is the fourth of its interval.
    assert!(
        whole[10] == whole[19] && whole[9] != whole[10],
        "no intervals"
    );
    for begin in [7, 13, 20, 29] {
        let continued = forcing(begin, 40);
        let first = usize::try_from(begin).expect("a small number");
        assert!(whole[first..] == continued, "differs from year {begin}");
    }
    // Counted from another start the tables would be others.
    assert!(forcing(0, 10) != whole[13..23], "the start does not matter");
}

/// Keeps records and the state behind the last.
#[derive(Default)]
struct Both {
    keep: Keep,
    last: Option<Restart>,
}

impl Observer for Both {
    type Error = Infallible;

    fn record(&mut self, record: &Record, restart: &dyn Fn() -> Restart) -> Result<(), Infallible> {
        self.last = Some(restart());
        self.keep.record(record, restart)
    }
}

#[test]
fn the_state_in_the_file_is_that_of_the_model_behind_the_last_record() {
    let folder = tempfile::tempdir().expect("a folder");
    let experiment = reference::experiment(&short::EDITS);
    let path = short::run(&experiment, &folder.path().join("run.nc"), 2);
    let stored = RunFile::open(&path)
        .and_then(|f| f.restart())
        .expect("a state");

    let mut model = fresh(&experiment);
    let plan = Plan::new(&experiment.run.time).expect("a plan");
    let spun = model.spin_up(plan.start_kyr(), experiment.run.time.spin_up, &mut Nobody);
    spun.expect("a spin-up");
    let mut seen = Both::default();
    model.run(&plan, &mut seen).expect("a run");
    let records = usize::try_from(plan.records()).expect("a small number");
    assert_eq!(seen.keep.records.len(), records);
    assert_eq!(seen.last.as_ref(), Some(&model.restart()));

    let mut again = fresh(&experiment);
    let restored = again.restore::<Infallible>(&Restart(stored));
    restored.expect("the state of the file");
    years(&mut again, 0, 3, 1.0);
    years(&mut model, 0, 3, 1.0);
    assert!(
        different(&model, &again).is_empty(),
        "{:?}",
        different(&model, &again)
    );
}
