use super::*;
use crate::experiment::destination::{DestinationError, Drawing};
use crate::experiment::orbit_source::Solution;
use crate::report::axis::Direction;

fn request(quantity: Quantity) -> Request {
    Request {
        orbit: OrbitChoice::Solution(Solution::Berger1978),
        ages: AgeRange {
            from_kyr: 6.0,
            to_kyr: 0.0,
            step_kyr: 6.0,
        },
        against_kyr: None,
        latitudes_deg: vec![65.0, -65.0],
        quantity,
        solar_constant_w_m2: None,
        months: None,
        equinox_day: None,
    }
}

fn solstices() -> Quantity {
    Quantity::Daily(Moments::SunLongitudes(vec![270.0, 90.0]))
}

#[test]
fn published_solstices_of_two_ages() {
    // Closed form by a general library: 65N at 90 degrees 505.120 (6 ka), 477.973 (0 ka).
    let table = tabulate(&request(solstices()), &[]).unwrap();
    let variable = &table.variables[0];
    assert_eq!(variable.values.len(), 8);
    for (age, expected) in [(0, 505.120), (1, 477.973)] {
        let got = table.value(variable, |axis| match axis {
            TableAxis::Age => age,
            TableAxis::Latitude => 1,
            _ => 0,
        });
        assert!((got - expected).abs() < 0.01, "{got} {expected}");
    }
}

#[test]
fn analytic_anomalies_are_differences() {
    let plain = tabulate(&request(Quantity::Season([0.0, 180.0])), &[]).unwrap();
    let against = Request {
        against_kyr: Some(0.0),
        ..request(Quantity::Season([0.0, 180.0]))
    };
    let table = tabulate(&against, &[]).unwrap();
    let names: Vec<_> = table.variables.iter().map(|v| v.column).collect();
    assert_eq!(
        names,
        [
            "insolation_anomaly_w_m2",
            "energy_anomaly_mj_m2",
            "length_day"
        ]
    );
    let (a, b) = (&table.variables[0].values, &plain.variables[0].values);
    assert!((a[0] - (b[0] - b[2])).abs() < 1e-12 && a[2].abs() < f64::MIN_POSITIVE);
    assert_eq!(table.variables[2].values, plain.variables[2].values);
}

#[test]
fn what_has_no_meaning_is_refused() {
    let says = |wrong: Request, fragment: &str| {
        let message = tabulate(&wrong, &[]).unwrap_err().to_string();
        assert!(message.contains(fragment), "{message}");
    };
    let base = || request(Quantity::Annual);
    says(
        Request {
            latitudes_deg: vec![],
            ..base()
        },
        "no latitude",
    );
    says(
        Request {
            latitudes_deg: vec![90.5],
            ..base()
        },
        "latitude 90.5: must lie between -90 and 90",
    );
    says(
        Request {
            latitudes_deg: vec![5.0, 5.0],
            ..base()
        },
        "latitude 5 is given twice",
    );
    says(
        Request {
            solar_constant_w_m2: Some(-1.0),
            ..base()
        },
        "solar constant -1",
    );
    says(
        Request {
            against_kyr: Some(1e4),
            ..base()
        },
        "age 10000 kyr",
    );
    says(
        request(Quantity::Season([0.0, 400.0])),
        "solar longitude 400",
    );
    says(
        request(Quantity::Daily(Moments::Dates(vec![366.0]))),
        "day of the year 366",
    );
    let monthly = request(Quantity::Monthly);
    says(
        Request {
            equinox_day: Some(-3.0),
            ..monthly
        },
        "equinox_day = -3",
    );
}

fn drawn(request: &Request) -> Result<String, DestinationError> {
    let drawing = Drawing {
        ages: Direction::Falling,
        width_mm: 85.0,
    };
    draw(&tabulate(request, &[]).unwrap(), drawing)
}

#[test]
fn figures_have_the_form_that_the_numbers_ask_for() {
    let one = AgeRange::one(0.0);
    let many: Vec<f64> = (-9..=9).map(|k| 10.0 * f64::from(k)).collect();
    // Against age: two panels of two lines and their legend.
    let lines = drawn(&request(solstices())).unwrap();
    assert_eq!(lines.matches("<path").count(), 6);
    assert!(lines.find(">65°N<") < lines.find(">65°S<"));
    // One age, many latitudes: two lines against latitude.
    let request_of = |quantity, ages, latitudes_deg: &[f64]| Request {
        ages,
        latitudes_deg: latitudes_deg.to_vec(),
        ..request(quantity)
    };
    let along = drawn(&request_of(solstices(), one, &many)).unwrap();
    assert!(along.contains(">June solstice<") && along.contains(">Latitude<"));
    // All months: a map.
    let months = Quantity::Monthly;
    let map = drawn(&request_of(months.clone(), one, &many)).unwrap();
    assert_eq!(map.matches("<image").count(), 2);
    // Few latitudes: lines against the month.
    let course = drawn(&request_of(months.clone(), one, &[0.0, 65.0])).unwrap();
    assert!(course.contains(">Equator<") && course.contains(">Month<"));
    let message = drawn(&request_of(Quantity::Annual, one, &[0.0])).unwrap_err();
    assert!(message.to_string().contains("a single number"));
    let message = drawn(&Request {
        latitudes_deg: many,
        ..request(months)
    })
    .unwrap_err();
    assert!(message.to_string().contains("--at-kyr"), "{message}");
}
