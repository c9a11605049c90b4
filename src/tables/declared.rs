//! Values against age in a user's table, of which everything is declared.
//!
//! What: where the table lies, how its cells are separated, which column holds the age, in which
//! unit, counted from which year and in which direction, in which order the rows stand and how far
//! apart they may be. A number cannot tell any of this, so nothing is assumed.
//! Equation: age before 1950 CE = +-a + (1950 - z), a the number in the table, + when it grows into
//! the past, z the year CE of its zero.
//! Units: kyr before 1950 CE.
//! Numerics: none; nothing is interpolated here.

use super::{Layout, TableError, read_columns};
use serde::{Deserialize, Serialize};
use std::path::{Path, PathBuf};

/// Unit of an age column.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub enum AgeUnit {
    /// Years.
    #[serde(rename = "yr")]
    Year,
    /// Thousands of years.
    #[serde(rename = "kyr")]
    ThousandYears,
    /// Millions of years.
    #[serde(rename = "Myr")]
    MillionYears,
}

/// Where the numbers of an age column grow.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum AgeDirection {
    /// Larger numbers are older.
    PastPositive,
    /// Larger numbers are younger.
    FuturePositive,
}

/// In which order the rows stand.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum AgeOrder {
    /// The youngest row first.
    YoungestFirst,
    /// The oldest row first.
    OldestFirst,
}

/// Unit of a column of angles.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum AngleUnit {
    /// Degrees.
    Degree,
    /// Radians.
    Radian,
}

impl AngleUnit {
    /// An angle of this unit in degrees.
    pub fn degrees(self, angle: f64) -> f64 {
        match self {
            Self::Degree => angle,
            Self::Radian => angle.to_degrees(),
        }
    }
}

/// Makes the form of a declared table in a configuration: the keys that every table needs, and
/// those of the quantity it holds. (Serde cannot refuse unknown keys of a flattened structure.)
macro_rules! declared_table {
    (
        $(#[$doc:meta])*
        $name:ident { $($(#[$key_doc:meta])* $key:ident: $type:ty),* $(,)? }
    ) => {
        $(#[$doc])*
        #[derive(Clone, Debug, PartialEq, serde::Serialize, serde::Deserialize)]
        #[serde(deny_unknown_fields)]
        pub struct $name {
            /// Path of the file, from the folder of the configuration.
            pub path: String,
            /// What stands between the cells.
            pub layout: $crate::tables::Layout,
            /// Name of the column of ages.
            pub age_column: String,
            /// Unit of the ages.
            pub age_unit: $crate::tables::declared::AgeUnit,
            /// Year CE at which the age is zero, such as 1950 or 2000.
            pub age_zero_ce: f64,
            /// Where the numbers grow.
            pub age_direction: $crate::tables::declared::AgeDirection,
            /// In which order the rows stand.
            pub age_order: $crate::tables::declared::AgeOrder,
            /// Largest distance of neighbouring rows, kyr; a larger one is a gap and refused.
            pub largest_gap_kyr: f64,
            /// Name of the column of values.
            pub column: String,
            $($(#[$key_doc])* pub $key: $type,)*
        }

        impl $name {
            /// What every table needs.
            pub fn declaration(&self) -> $crate::tables::declared::Declaration<'_> {
                $crate::tables::declared::Declaration {
                    path: &self.path,
                    layout: self.layout,
                    age_column: &self.age_column,
                    age_unit: self.age_unit,
                    age_zero_ce: self.age_zero_ce,
                    age_direction: self.age_direction,
                    age_order: self.age_order,
                    largest_gap_kyr: self.largest_gap_kyr,
                    column: &self.column,
                }
            }
        }
    };
}
pub(crate) use declared_table;

/// What is declared of a table, whatever it holds; see the keys of a configuration.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Declaration<'a> {
    /// Path of the file.
    pub path: &'a str,
    /// What stands between the cells.
    pub layout: Layout,
    /// Name of the column of ages.
    pub age_column: &'a str,
    /// Unit of the ages.
    pub age_unit: AgeUnit,
    /// Year CE at which the age is zero.
    pub age_zero_ce: f64,
    /// Where the numbers grow.
    pub age_direction: AgeDirection,
    /// In which order the rows stand.
    pub age_order: AgeOrder,
    /// Largest distance of neighbouring rows, kyr.
    pub largest_gap_kyr: f64,
    /// Name of the column of values.
    pub column: &'a str,
}

/// Values against age as a table gives them, youngest first.
#[derive(Clone, Debug, PartialEq)]
pub struct Series {
    /// The file.
    pub path: PathBuf,
    /// Ages, kyr before 1950 CE, increasing; at least two.
    pub age_kyr: Vec<f64>,
    /// Values in the unit of the table, as many.
    pub values: Vec<f64>,
    /// Lines in the file, from 1, as many.
    pub lines: Vec<u64>,
}

/// Calendar years that a table can be counted from (chosen here: no scale in use lies outside).
const ZEROS_CE: std::ops::RangeInclusive<f64> = -10_000.0..=10_000.0;

/// Share by which a distance may exceed the largest gap: rounding of printed ages.
const GAP_ROUNDING: f64 = 1e-6;

/// The largest gap that may be declared.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct WidestGap {
    /// Its length, kyr.
    pub kyr: f64,
    /// The limit in words.
    pub limit: &'static str,
}

impl WidestGap {
    /// For what may change as slowly as it likes.
    pub const ANY: Self = Self {
        kyr: f64::MAX,
        limit: "must be a finite number above 0 kyr",
    };
}

impl Declaration<'_> {
    /// Numbers of the declaration that have no meaning: key, value, and what is allowed.
    pub fn violations(&self, widest: WidestGap) -> Vec<(&'static str, f64, &'static str)> {
        let mut wrong = Vec::new();
        if !ZEROS_CE.contains(&self.age_zero_ce) {
            let limit = "must be a year CE between -10000 and 10000, such as 1950 or 2000";
            wrong.push(("age_zero_ce", self.age_zero_ce, limit));
        }
        if !(self.largest_gap_kyr > 0.0 && self.largest_gap_kyr <= widest.kyr) {
            wrong.push(("largest_gap_kyr", self.largest_gap_kyr, widest.limit));
        }
        wrong
    }

    /// An age of the table in kyr before 1950 CE.
    pub fn age_kyr(&self, age: f64) -> f64 {
        let from_zero_kyr = match self.age_unit {
            AgeUnit::Year => age / 1000.0,
            AgeUnit::ThousandYears => age,
            AgeUnit::MillionYears => age * 1000.0,
        };
        let zero_kyr = (1950.0 - self.age_zero_ce) / 1000.0;
        match self.age_direction {
            AgeDirection::PastPositive => zero_kyr + from_zero_kyr,
            AgeDirection::FuturePositive => zero_kyr - from_zero_kyr,
        }
    }

    /// Reads the table; `folder` is where its path starts.
    ///
    /// # Errors
    /// When it cannot be read; else every kind of fault in its ages, with the first line of each.
    pub fn read(&self, folder: &Path) -> Result<Series, Vec<TableError>> {
        let path = folder.join(self.path);
        let names = [self.age_column, self.column];
        let read = read_columns(&path, self.layout, &names).map_err(|error| vec![error])?;
        let mut columns = read.values.into_iter();
        let ages = columns.next().unwrap_or_default();
        let mut series = Series {
            age_kyr: ages.iter().map(|age| self.age_kyr(*age)).collect(),
            values: columns.next().unwrap_or_default(),
            lines: read.lines,
            path,
        };
        let wrong = self.faults(&ages, &series);
        if !wrong.is_empty() {
            return Err(wrong);
        }
        if self.age_order == AgeOrder::OldestFirst {
            series.age_kyr.reverse();
            series.values.reverse();
            series.lines.reverse();
        }
        Ok(series)
    }

    /// What is wrong with the ages of a table in the order of its rows.
    fn faults(&self, ages: &[f64], series: &Series) -> Vec<TableError> {
        let (downwards, found, declared) = match self.age_order {
            AgeOrder::YoungestFirst => (1.0, "younger", "youngest_first"),
            AgeOrder::OldestFirst => (-1.0, "older", "oldest_first"),
        };
        let steps: Vec<f64> = series
            .age_kyr
            .windows(2)
            .map(|pair| downwards * (pair[1] - pair[0]))
            .collect();
        let path = || series.path.clone();
        // The first row at the end of such a step, and the number of those below.
        let first = |is_it: &dyn Fn(f64) -> bool| {
            let mut rows = (1..ages.len()).filter(|row| is_it(steps[row - 1]));
            Some((rows.next()?, rows.count()))
        };
        let largest_kyr = self.largest_gap_kyr;
        let mut wrong = Vec::new();
        if ages.len() < 2 {
            wrong.push(TableError::OneRow { path: path() });
        }
        if let Some((row, others)) = first(&|step| step == 0.0) {
            wrong.push(TableError::SameAge {
                path: path(),
                line: series.lines[row],
                age: ages[row],
                others,
            });
        }
        if let Some((row, others)) = first(&|step| step < 0.0) {
            wrong.push(TableError::Order {
                path: path(),
                line: series.lines[row],
                first: ages[row - 1],
                second: ages[row],
                found,
                declared,
                others,
            });
        }
        if let Some((row, others)) = first(&|step| step > largest_kyr * (1.0 + GAP_ROUNDING)) {
            wrong.push(TableError::Gap {
                path: path(),
                line: series.lines[row],
                age: ages[row],
                // Rounded for the reader.
                gap_kyr: (steps[row - 1] * 1e6).round() / 1e6,
                largest_kyr,
                others,
            });
        }
        wrong
    }
}

#[cfg(test)]
mod tests {
    use super::AgeDirection::{FuturePositive, PastPositive};
    use super::AgeOrder::{OldestFirst, YoungestFirst};
    use super::*;

    const DECLARATION: Declaration<'static> = Declaration {
        path: "table.csv",
        layout: Layout::Comma,
        age_column: "age",
        age_unit: AgeUnit::ThousandYears,
        age_zero_ce: 1950.0,
        age_direction: AgeDirection::PastPositive,
        age_order: AgeOrder::YoungestFirst,
        largest_gap_kyr: 1.0,
        column: "x",
    };

    fn read(declaration: Declaration<'_>, text: &str) -> Result<Series, Vec<TableError>> {
        let folder = tempfile::tempdir().unwrap();
        std::fs::write(folder.path().join(declaration.path), text).unwrap();
        declaration.read(folder.path())
    }

    #[test]
    fn analytic_every_way_to_write_the_same_ages_gives_them_back() {
        let other = |age_unit, age_zero_ce, age_direction, age_order| Declaration {
            age_unit,
            age_zero_ce,
            age_direction,
            age_order,
            ..DECLARATION
        };
        for (declaration, text) in [
            (DECLARATION, "age,x\n-0.05,1\n0.5,2\n1.25,3"),
            (
                other(AgeUnit::Year, 2000.0, PastPositive, YoungestFirst),
                "age,x\n0,1\n550,2\n1300,3",
            ),
            (
                other(AgeUnit::MillionYears, 2000.0, FuturePositive, OldestFirst),
                "age,x\n-0.0013,3\n-0.00055,2\n0,1",
            ),
            (
                other(AgeUnit::Year, 0.0, FuturePositive, OldestFirst),
                "age,x\n700,3\n1450,2\n2000,1",
            ),
        ] {
            let series = read(declaration, text).unwrap();
            for (got, expected) in series.age_kyr.iter().zip([-0.05, 0.5, 1.25]) {
                assert!((got - expected).abs() < 1e-12, "{text}: {got} {expected}");
            }
            assert_eq!(series.values, [1.0, 2.0, 3.0]);
        }
    }

    #[test]
    fn what_is_wrong_with_the_ages_is_told_at_once() {
        let told = |declaration, text: &str| {
            let wrong = read(declaration, text).unwrap_err();
            let lines: Vec<_> = wrong.iter().map(ToString::to_string).collect();
            lines.join("\n")
        };
        let all = told(DECLARATION, "age,x\n0,1\n1,1\n1,1\n5,1\n3,1\n2,1");
        for part in [
            ":4: the age 1 is there twice;",
            ":6: the age 3 follows 5, which is younger, but youngest_first is declared (and one row below)",
            ":5: a gap of 4 kyr before the age 5, largest_gap_kyr allows 1;",
        ] {
            assert!(
                all.contains(part.trim_end_matches(';')),
                "no {part} in\n{all}"
            );
        }
        // The direction is wrong: all ages run the other way.
        let future = Declaration {
            age_direction: AgeDirection::FuturePositive,
            ..DECLARATION
        };
        assert!(
            told(future, "age,x\n0,1\n1,1\n2,1").contains("correct age_order or age_direction")
        );
        assert!(told(DECLARATION, "age,x\n0,1").contains("one row"));
        assert!(told(DECLARATION, "age,x\n0,1\n0.5,NaN").contains("`NaN` in column `x`"));
        let wrong = Declaration {
            age_zero_ce: f64::NAN,
            largest_gap_kyr: 6.0,
            ..DECLARATION
        };
        let keys: Vec<_> = wrong
            .violations(WidestGap {
                kyr: 5.0,
                limit: "",
            })
            .iter()
            .map(|v| v.0)
            .collect();
        assert_eq!(keys, ["age_zero_ce", "largest_gap_kyr"]);
    }
}
