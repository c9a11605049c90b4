//! Axes: from values to places and names.
//!
//! Units: those of the axis; points in the figure.

use super::text::number;
use super::ticks::{Round, ticks};

/// Which way an axis runs.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Direction {
    /// Values rise to the right, or upwards.
    Rising,
    /// Values rise to the left, or downwards.
    Falling,
}

/// How the values along an axis are named.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Names {
    /// As numbers.
    Numbers,
    /// As latitudes, 60°N.
    Latitudes,
    /// As angles, 90°.
    Degrees,
    /// By a name for each of the cells 0 to 1, 1 to 2 and so on.
    Cells(Vec<String>),
}

/// An axis.
#[derive(Clone, Debug, PartialEq)]
pub struct Axis {
    /// What lies along it, with the unit.
    pub label: String,
    /// Smallest and largest value.
    pub range: [f64; 2],
    /// Which way it runs.
    pub direction: Direction,
    /// How its values are named.
    pub names: Names,
}

/// A tick: its value and its name.
pub(super) type Tick = (f64, String);

impl Axis {
    /// An axis of numbers, rising.
    pub fn numbers(label: &str, range: [f64; 2]) -> Self {
        Self {
            label: label.to_owned(),
            range,
            direction: Direction::Rising,
            names: Names::Numbers,
        }
    }

    /// The range of some values with a little room on both sides; that of nothing is 0 to 1.
    pub fn around(values: impl Iterator<Item = f64>) -> [f64; 2] {
        let (mut low, mut high) = (f64::INFINITY, f64::NEG_INFINITY);
        for value in values.filter(|v| v.is_finite()) {
            (low, high) = (low.min(value), high.max(value));
        }
        if low > high {
            return [0.0, 1.0];
        }
        // A course that does not move gets a range in which it is seen not to move.
        let least = (1e-6 * high.abs().max(low.abs())).max(1e-9);
        let room = if high - low > least {
            ROOM * (high - low)
        } else {
            0.5 * high.abs().max(1.0)
        };
        // What is never negative does not get room below zero.
        let bottom = if low >= 0.0 { 0.0 } else { f64::NEG_INFINITY };
        [(low - room).max(bottom), high + room]
    }

    /// The ticks, about `intervals` apart.
    pub(super) fn ticks(&self, intervals: f64) -> Vec<Tick> {
        let named = |round, name: &dyn Fn(f64, usize) -> String| {
            let found = ticks(self.range, intervals, round);
            let named = |value: f64| (value, name(value, found.decimals));
            found.values.into_iter().map(named).collect()
        };
        match &self.names {
            Names::Numbers => named(Round::Decimal, &number),
            Names::Degrees => named(Round::Degrees, &|v, d| format!("{}°", number(v, d))),
            Names::Latitudes => named(Round::Degrees, &|v, d| match v {
                v if v > 1e-9 => format!("{}°N", number(v, d)),
                v if v < -1e-9 => format!("{}°S", number(-v, d)),
                _ => "0°".to_owned(),
            }),
            Names::Cells(names) => {
                let middle = |(n, name): (usize, &String)| (n as f64 + 0.5, name.clone());
                names.iter().enumerate().map(middle).collect()
            }
        }
    }

    /// Where a value lies between two ends of the axis in points: the left or lower one first.
    pub(super) fn place(&self, value: f64, [from_pt, to_pt]: [f64; 2]) -> f64 {
        let [low, high] = self.range;
        let part = (value - low) / (high - low);
        let part = match self.direction {
            Direction::Rising => part,
            Direction::Falling => 1.0 - part,
        };
        from_pt + part * (to_pt - from_pt)
    }
}

/// Room beside the values, as a part of their range.
const ROOM: f64 = 0.05;

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn analytic_places_run_either_way() {
        let mut axis = Axis::numbers("age", [0.0, 100.0]);
        assert!((axis.place(25.0, [10.0, 50.0]) - 20.0).abs() < 1e-12);
        axis.direction = Direction::Falling;
        assert!((axis.place(25.0, [10.0, 50.0]) - 40.0).abs() < 1e-12);
    }

    #[test]
    fn names_are_those_of_the_trade() {
        let mut axis = Axis::numbers("", [-90.0, 90.0]);
        axis.names = Names::Latitudes;
        let names: Vec<_> = axis.ticks(2.0).into_iter().map(|t| t.1).collect();
        assert_eq!(names, ["90°S", "0°", "90°N"]);
        axis.names = Names::Cells(vec!["J".to_owned(), "F".to_owned()]);
        assert_eq!(axis.ticks(9.0)[1], (1.5, "F".to_owned()));
    }

    #[test]
    fn ranges_have_room_even_around_a_constant() {
        let nothing = Axis::around([f64::NAN].into_iter());
        assert!(nothing[0].abs() < 1e-12 && (nothing[1] - 1.0).abs() < 1e-12);
        let ten = Axis::around([0.0, 10.0].into_iter());
        assert!(ten[0].abs() < 1e-12 && (ten[1] - 10.5).abs() < 1e-12);
        let both = Axis::around([-10.0, 10.0].into_iter());
        assert!((both[0] + 11.0).abs() < 1e-12 && (both[1] - 11.0).abs() < 1e-12);
        let [low, high] = Axis::around([23.0, 23.0].into_iter());
        assert!(low < 23.0 && high > 23.0);
    }
}
