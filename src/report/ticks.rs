//! Where the ticks of an axis are.
//!
//! What: round numbers within a range, about as many as fit.
//! Equation: the step is the number of the list {1, 2, 5} times a power of ten (for degrees {1, 2, 5,
//! 10, 15, 30, 45, 60, 90}) that comes nearest, in ratio, to the range divided by the number of
//! intervals that fit.
//! Source: Heckbert 1990, "Nice numbers for graph labels", in Graphics Gems (memory), with ticks kept
//! inside the range.

/// Most ticks that are ever set, a guard against ranges of no size.
const MOST: usize = 200;
/// Steps of angles, degrees.
const DEGREES: [f64; 9] = [1.0, 2.0, 5.0, 10.0, 15.0, 30.0, 45.0, 60.0, 90.0];

/// Ticks of an axis.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Ticks {
    /// Their places.
    pub(super) values: Vec<f64>,
    /// Decimals that tell them apart.
    pub(super) decimals: usize,
}

/// Which steps are round.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Round {
    /// 1, 2, 5 times powers of ten.
    Decimal,
    /// Parts of a circle.
    Degrees,
}

/// The step nearest to `wanted`.
pub(super) fn step(wanted: f64, round: Round) -> f64 {
    if !(wanted > 0.0 && wanted.is_finite()) {
        return 1.0;
    }
    let power = 10.0_f64.powf(wanted.log10().floor());
    let decimal = [1.0, 2.0, 5.0, 10.0].map(|n| n * power);
    let list: &[f64] = match round {
        // Below one degree a circle is divided like any other number.
        Round::Degrees if wanted >= 1.0 => &DEGREES,
        _ => &decimal,
    };
    let distance = |step: &f64| (step / wanted).ln().abs();
    let nearest = list
        .iter()
        .min_by(|a, b| distance(a).total_cmp(&distance(b)));
    nearest.copied().unwrap_or(1.0)
}

/// Ticks within a range, about `intervals` apart.
pub(super) fn ticks(range: [f64; 2], intervals: f64, round: Round) -> Ticks {
    let [low, high] = range;
    let step = step((high - low) / intervals.max(1.0), round);
    #[expect(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "at least 0 and at most 300, the smallest power of ten"
    )]
    let decimals = (-(step.log10() + 1e-9).floor()).max(0.0) as usize;
    // Ends that are missed by rounding only are kept.
    let slack = 1e-9 * step;
    let first = ((low - slack) / step).ceil();
    let values = (0..MOST)
        .map(|n| (first + n as f64) * step)
        .take_while(|value| *value <= high + slack)
        .collect();
    Ticks { values, decimals }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn analytic_ticks_are_round_and_inside() {
        let of = |low, high, n| ticks([low, high], n, Round::Decimal);
        assert_eq!(
            of(0.0, 1000.0, 5.0).values,
            [0.0, 200.0, 400.0, 600.0, 800.0, 1000.0]
        );
        let tenths = of(-0.06, 0.21, 3.0);
        assert_eq!(tenths.decimals, 1);
        assert_eq!(tenths.values.len(), 3);
        assert_eq!(of(22.1, 24.4, 4.0).decimals, 1);
        let degrees = ticks([-90.0, 90.0], 6.0, Round::Degrees).values;
        assert_eq!(degrees, [-90.0, -60.0, -30.0, 0.0, 30.0, 60.0, 90.0]);
        assert_eq!(ticks([0.0, 360.0], 4.0, Round::Degrees).values.len(), 5);
    }

    #[test]
    fn ranges_of_no_size_do_no_harm() {
        assert!(ticks([1.0, 1.0], 5.0, Round::Decimal).values.len() <= 1);
        assert!(
            ticks([f64::NAN, 1.0], 5.0, Round::Decimal)
                .values
                .is_empty()
        );
        assert!(ticks([0.0, 1e300], 5.0, Round::Decimal).values.len() < 10);
    }
}
