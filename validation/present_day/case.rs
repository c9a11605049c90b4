//! The model's present day against observed tables, and how its thermocline answers the orbit; see the
//! README of this folder.
#![expect(
    clippy::print_stdout,
    reason = "the comparison is for people to read: cargo test -- --nocapture"
)]

use crate::csv;
use crate::present_day_climate::{
    BANDS, Climate, Over, between, climate, observed_annual, rms, second_legendre, share,
};
use std::sync::OnceLock;

const T2M_TOTAL: &str = include_str!("t2m_total.csv");
const T2M_LAND: &str = include_str!("t2m_land.csv");
const T2M_OCEAN: &str = include_str!("t2m_ocean.csv");
const SST: &str = include_str!("sst.csv");

fn present() -> &'static Climate {
    static PRESENT: OnceLock<Climate> = OnceLock::new();
    PRESENT.get_or_init(|| climate(&[]))
}

/// T0 + T2 P2 that fits the observed bands from 70S to 80N best, area-weighted least squares.
fn best_two_modes(observed: &[f64]) -> Vec<f64> {
    let mean = |f: &dyn Fn(usize) -> f64| {
        let total: f64 = between(-70, 80).map(share).sum();
        between(-70, 80).map(|b| share(b) * f(b)).sum::<f64>() / total
    };
    let p = second_legendre;
    let (p_mean, t_mean) = (mean(&p), mean(&|b| observed[b]));
    let covariance = mean(&|b| (p(b) - p_mean) * (observed[b] - t_mean));
    let slope = covariance / mean(&|b| (p(b) - p_mean).powi(2));
    (0..BANDS)
        .map(|b| t_mean + slope * (p(b) - p_mean))
        .collect()
}

#[test]
fn observed_annual_temperature_by_latitude_and_better_than_two_modes() {
    let model = present().annual_bands("air_temperature_2m", Over::All);
    let observed = observed_annual(T2M_TOTAL);
    let fitted = best_two_modes(&observed);
    // North, Cahalan & Coakley 1981, modes of the annual mean (memory).
    let published: Vec<f64> = (0..BANDS)
        .map(|b| 14.9 - 28.0 * second_legendre(b))
        .collect();
    println!("south  observed  model  two modes fitted  published");
    for b in 0..BANDS {
        println!(
            "{:5.0} {:9.2} {:6.2} {:17.2} {:10.2}",
            10.0 * b as f64 - 90.0,
            observed[b],
            model[b],
            fitted[b],
            published[b]
        );
    }
    let score = |t: &[f64]| rms(t, &observed, between(-70, 80), share);
    let [ours, fitted, published] = [score(&model), score(&fitted), score(&published)];
    println!(
        "rms 70S-80N: model {ours:.2}, two modes fitted {fitted:.2}, published {published:.2}"
    );
    assert!(ours <= 1.5 && ours < fitted && ours < published);
    for b in between(-70, 80) {
        assert!((model[b] - observed[b]).abs() < 2.0, "band {b}");
    }
}

#[test]
fn observed_temperature_over_land_and_ocean_and_of_the_sea_surface() {
    let now = present();
    let one = |_: usize| 1.0;
    let land = rms(
        &now.annual_bands("land_air_temperature_2m", Over::Land),
        &observed_annual(T2M_LAND),
        between(-50, 80),
        one,
    );
    let air = rms(
        &now.annual_bands("ocean_air_temperature_2m", Over::Ocean),
        &observed_annual(T2M_OCEAN),
        between(-60, 60),
        share,
    );
    let sea = rms(
        &now.annual_bands("ocean_temperature", Over::Ocean),
        &observed_annual(SST),
        between(-60, 60),
        share,
    );
    println!("rms: land {land:.2}, air over ocean {air:.2}, sea surface {sea:.2} K");
    assert!(land <= 1.5, "land {land}");
    assert!(air <= 1.2, "air over ocean {air}");
    assert!(sea <= 0.9, "sea surface {sea}");
}

#[test]
fn observed_global_mean_and_its_seasonal_range() {
    let observed: Vec<f64> = {
        let rows = csv::numbers(T2M_TOTAL);
        let month = |m: usize| (0..BANDS).map(|b| share(b) * rows[b][m + 2]).sum();
        (0..13).map(month).collect()
    };
    let months = present().global_months("air_temperature_2m");
    let mean = present().number("global_air_temperature_2m");
    let [range, observed_range] = [months[6] - months[0], observed[6] - observed[0]];
    println!(
        "global mean {mean:.2} ({:.2}), July minus January {range:.2} ({observed_range:.2})",
        observed[12]
    );
    assert!((mean - observed[12]).abs() < 0.4);
    assert!((range - observed_range).abs() < 0.7);
}

#[test]
fn observed_planetary_albedo_and_transports() {
    let now = present();
    let albedo = now.number("planetary_albedo");
    // CERES-EBAF: 0.29; net radiation of 30S-30N implies 5.65 PW across 30N and 5.61 across 30S.
    assert!((albedo - 0.29).abs() < 0.005, "albedo {albedo}");
    let total = now.array("total_heat_transport");
    let [south, north] = [total[12], total[24]];
    println!("albedo {albedo:.4}, transport across 30S {south:.2}, 30N {north:.2} PW");
    assert!((north - 5.65).abs() < 0.4 && (south + 5.61).abs() < 0.4);
    let ocean = now.array("ocean_heat_transport");
    let most = ocean.iter().copied().fold(f64::MIN, f64::max);
    let least = ocean.iter().copied().fold(f64::MAX, f64::min);
    println!("ocean {least:.2} to {most:.2} PW");
    assert!((most - 1.5).abs() < 0.3 && (least + 1.1).abs() < 0.3);
}

#[test]
fn observed_thermocline_and_equatorial_contrast() {
    let now = present();
    let isotherms = csv::numbers(include_str!("isotherm_20c.csv"));
    let observed = isotherms.iter().find(|row| row[0] > 19.0).unwrap()[1];
    let depth = now.number("isotherm_20c_depth");
    println!("20 degC isotherm {depth:.1} m, observed {observed:.1}");
    assert!((depth - observed).abs() < 8.0);
    let profile = csv::numbers(include_str!("ocean_profile.csv"));
    let levels: Vec<_> = profile
        .iter()
        .filter(|row| (10.0..=3000.0).contains(&row[0]))
        .collect();
    let mut squares = 0.0;
    for row in &levels {
        let here = now.column_at(row[0]);
        println!("{:6.0} m {:6.2} observed {:6.2}", row[0], here, row[1]);
        squares += (here - row[1]).powi(2);
        assert!((here - row[1]).abs() < 1.6, "{} m", row[0]);
    }
    assert!((squares / levels.len() as f64).sqrt() < 0.8);
    let [west, east] = ["west", "east"].map(|s| now.number(&format!("{s}_pacific_temperature")));
    println!("west {west:.2}, east {east:.2} degC");
    assert!((west - 29.2).abs() < 0.5 && (east - 25.0).abs() < 0.5);
    assert!(now.number("equatorial_gain") < 1.0);
}

#[test]
fn observed_sea_ice_area_by_season() {
    let mut squares = 0.0;
    for row in csv::numbers(include_str!("sea_ice.csv")) {
        let model = present().sea_ice(row[0]);
        println!("side {:2}: {model:.1?} observed {:?}", row[0], &row[1..]);
        for (a, b) in model.iter().zip(&row[1..]) {
            squares += (a - b).powi(2);
        }
    }
    let rms = f64::sqrt(squares / 8.0);
    assert!(rms < 3.0, "rms {rms}");
}

#[test]
fn regress_warming_for_doubled_carbon_dioxide() {
    let doubled = climate(&["co2.co2_ppm=706.0"]);
    let name = "global_air_temperature_2m";
    let warming = doubled.number(name) - present().number(name);
    println!("2 x CO2: {warming:.2} K");
    assert!((2.0..2.6).contains(&warming));
}

const CIRCLE: &str = "orbit.eccentricity={kind=\"constant\",eccentricity=0.0}";
const ELLIPSE: &str = "orbit.eccentricity={kind=\"constant\",eccentricity=0.05}";

fn tilt(degrees: f64) -> String {
    format!("orbit.obliquity={{kind=\"constant\",obliquity_deg={degrees:.2}}}")
}

fn perihelion(sun_longitude: f64) -> String {
    format!(
        "orbit.perihelion={{kind=\"constant_sun_longitude\",sun_longitude_deg={sun_longitude:.1}}}"
    )
}

/// The columns of `closures.csv` in one state.
fn columns(state: &Climate) -> Vec<f64> {
    vec![
        state.number("isotherm_20c_depth"),
        state.number("relative_isotherm_depth"),
        state.number("pycnocline_depth"),
        state.number("deep_sinking") * 1e-6,
        state.both("sinking_region_loss_net"),
        state.both("sinking_region_loss_gross"),
        state.both("high_latitude_ocean_loss_net"),
        state.number("low_latitude_surface_temperature"),
        state.number("west_pacific_temperature"),
        state.number("east_pacific_temperature"),
    ]
}

const CLOSURES: [&str; 5] = ["fixed", "g", "x", "w", "n"];
const CASES: [&str; 5] = [
    "obliquity_22.0",
    "obliquity_24.5",
    "june_perihelion",
    "december_perihelion",
    "halved_rate",
];
const ISOTHERM: usize = 0;
const RELATIVE: usize = 1;
const DEPTH: usize = 2;
const RATE: usize = 3;
const NET: usize = 4;
const GROSS: usize = 5;

/// Control and changes from it, `[closure][control, then case][column]`.
fn answers() -> &'static [Vec<Vec<f64>>] {
    static ANSWERS: OnceLock<Vec<Vec<Vec<f64>>>> = OnceLock::new();
    ANSWERS.get_or_init(|| CLOSURES.iter().map(|name| answer(name)).collect())
}

fn answer(closure: &str) -> Vec<Vec<f64>> {
    let closure = match closure {
        "fixed" => "physics.ocean_column.sinking.closure={kind=\"fixed\"}".to_owned(),
        name => {
            format!("physics.ocean_column.sinking.closure={{kind=\"preset\",preset=\"{name}\"}}")
        }
    };
    let with = |edits: &[&str]| {
        let mut all = vec![closure.as_str()];
        all.extend(edits);
        columns(&climate(&all))
    };
    let middle = tilt(23.25);
    let control = with(&[CIRCLE, &middle]);
    let halved = "physics.ocean_column.sinking.reference_m3_s=8.02e6";
    let states = [
        with(&[CIRCLE, &tilt(22.0)]),
        with(&[CIRCLE, &tilt(24.5)]),
        with(&[ELLIPSE, &middle, &perihelion(90.0)]),
        with(&[ELLIPSE, &middle, &perihelion(270.0)]),
        with(&[CIRCLE, &middle, halved]),
    ];
    let change = |state: &Vec<f64>| {
        let pairs = state.iter().zip(&control);
        pairs.map(|(a, b)| a - b).collect::<Vec<f64>>()
    };
    let changes: Vec<_> = states.iter().map(change).collect();
    [vec![control], changes].concat()
}

/// Change of a column in a case, by closure in the order of [`CLOSURES`].
fn changes(case: &str, column: usize) -> [f64; 5] {
    let row = 1 + CASES.iter().position(|c| *c == case).unwrap();
    std::array::from_fn(|closure| answers()[closure][row][column])
}

#[test]
fn regress_all_numbers_of_the_closure_table() {
    // Twice the last printed digit of each column, and 5 % of the change.
    let smallest = [
        0.1, 0.1, 0.3, 0.02, 0.0004, 0.0004, 0.0004, 0.004, 0.004, 0.004,
    ];
    for row in csv::fields(include_str!("closures.csv")) {
        let closure = CLOSURES.iter().position(|c| *c == row[0]).unwrap();
        let name = if row[1] == "rate_x_0.5" || row[1] == "half_reference_rate" {
            "halved_rate"
        } else {
            row[1]
        };
        let state = match CASES.iter().position(|c| *c == name) {
            Some(case) => &answers()[closure][case + 1],
            None if name == "control" => &answers()[closure][0],
            None => continue,
        };
        let control = name == "control";
        for ((now, was), least) in state.iter().zip(&row[2..]).zip(smallest) {
            let was: f64 = was.parse().unwrap();
            let share = if control { 0.005 } else { 0.05 };
            assert!(
                (now - was).abs() <= least + share * was.abs(),
                "{} {}: {now} was {was}",
                row[0],
                row[1]
            );
        }
    }
}

#[test]
fn regress_all_closures_share_one_control_state() {
    // Each target rate is normalised by that state, so the target there is the reference rate.
    let controls = answers().iter().map(|c| c[0][RATE]);
    for rate in controls {
        assert!((rate / 16.04 - 1.0).abs() < 0.005, "{rate}");
    }
}

#[test]
fn regress_less_sinking_deepens_the_thermocline() {
    // Water that sinks must come up through the column; with half of it the upwelling that holds
    // the warm layer up is weaker and mixing carries warmth further down. G gives way least, since
    // its rate rises with the square of the depth, X less so; N and W most: the loss of heat falls
    // with the overturning that feeds it (net loss by a quarter, gross loss by a twentieth), and in
    // W the contrast in the denominator grows.
    let [fixed, g, x, w, n] = changes("halved_rate", ISOTHERM);
    println!("20 degC isotherm with half the rate: {fixed:.1} {g:.1} {x:.1} {w:.1} {n:.1} m");
    assert!((65.0..85.0).contains(&fixed));
    assert!((30.0..42.0).contains(&g));
    assert!(g < x && x < fixed && fixed < w && w < n);
    assert!(changes("halved_rate", RELATIVE).iter().all(|d| *d > 20.0));
    assert!(changes("halved_rate", NET).iter().all(|l| *l < -0.1));
}

#[test]
fn regress_low_tilt_deepens_and_high_tilt_shoals_the_isotherm() {
    // Low tilt warms the tropical surface by 0.24 K, which lowers a fixed isotherm by about 4 m even
    // with a fixed rate. Seasons at high latitudes are weaker: the ocean stores less heat in summer
    // and gives up less in winter, so the gross loss falls; in X and W, which follow it, the rate
    // falls too and deepens the pycnocline itself. In G and N the rate hardly moves.
    let low = changes("obliquity_22.0", ISOTHERM);
    let high = changes("obliquity_24.5", ISOTHERM);
    println!("20 degC isotherm, tilt 22.0: {low:.1?}, 24.5: {high:.1?} m");
    let [fixed, g, x, w, n] = low;
    assert!((3.7..4.7).contains(&fixed) && (3.2..4.3).contains(&g));
    assert!((8.0..11.0).contains(&x) && (12.5..16.0).contains(&w));
    assert!((2.8..4.0).contains(&n));
    for (down, up) in low.iter().zip(&high) {
        assert!((-1.15..-0.85).contains(&(up / down)));
    }
    assert!(changes("obliquity_22.0", GROSS).iter().all(|l| *l < -0.2));
    assert!(changes("obliquity_24.5", GROSS).iter().all(|l| *l > 0.2));
}

#[test]
fn regress_high_tilt_and_net_loss_differ_in_sign_between_closures() {
    // High tilt strengthens the seasons, so the gross winter loss rises; but high latitudes absorb
    // more sunlight in the annual mean, so with a fixed rate the *net* loss falls slightly. N follows
    // the net loss: weaker overturning and a deeper pycnocline. Measured from the surface the 20 degC
    // isotherm still rises in N, because the tropical surface cools; the relative isotherm deepens.
    let [fixed, g, x, w, n] = changes("obliquity_24.5", NET);
    assert!(fixed < 0.0 && g < 0.0 && n < fixed && x > 0.0 && w > x);
    let [_, _, x, w, n] = changes("obliquity_24.5", DEPTH);
    assert!((2.0..5.0).contains(&n) && (-18.0..-11.0).contains(&x) && (-34.0..-23.0).contains(&w));
    let [_, _, x, w, n] = changes("obliquity_24.5", RELATIVE);
    assert!(n > 1.0 && x < -2.0 && w < -5.0);
}

#[test]
fn regress_june_against_december_perihelion_matters_less_than_tilt() {
    // Perihelion cannot change the annual mean insolation of a latitude, and what one hemisphere's
    // winter loses the other's gains: gross losses change by -0.2 and +0.3 PW and nearly cancel.
    // Both perihelia share a shift from the larger mean insolation, 1/sqrt(1 - e^2), which the
    // difference removes. What is left comes from unequal hemispheres: the net loss is 0.014 PW
    // larger with perihelion in June; only N, which feeds on it, turns that into some metres.
    let june = changes("june_perihelion", ISOTHERM);
    let december = changes("december_perihelion", ISOTHERM);
    let low = changes("obliquity_22.0", ISOTHERM);
    let high = changes("obliquity_24.5", ISOTHERM);
    let perihelion: [f64; 5] = std::array::from_fn(|i| june[i] - december[i]);
    println!("20 degC isotherm, June minus December perihelion: {perihelion:.2?} m");
    let [fixed, g, x, w, n] = perihelion;
    assert!((-1.6..-0.5).contains(&fixed) && (-1.1..-0.2).contains(&g));
    assert!((-1.2..-0.2).contains(&x) && (-1.7..-0.5).contains(&w));
    assert!((-6.0..-2.5).contains(&n));
    for i in 0..4 {
        assert!((low[i] - high[i]) > 5.0 * perihelion[i].abs(), "{i}");
    }
    assert!(low[4] - high[4] > 1.2 * perihelion[4].abs());
}
