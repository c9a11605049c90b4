//! Rows of an orbital solution every 1000 years: form in a file, checksum, interpolation.
//!
//! What: elements of the Earth's orbit at any age within a table, and the table as bytes.
//! Equations: rows hold k = e cos(w) and h = e sin(w), w the longitude of perihelion in a frame
//! that does not turn, the obliquity, and the precession p from the moving equinox to that frame.
//! e = sqrt(k^2 + h^2), longitude of perihelion from the equinox = atan2(h, k) + p. Each of the
//! four columns is slow, so a cubic through four rows is enough; e sin(perihelion) itself, which
//! turns in 21 kyr, would lose fifty times more.
//! Units: rad; kyr before 1950 CE.
//! Numerics: polynomial through the two rows before and the two after (Lagrange). Against ten
//! rows: e 5e-8, e sin(perihelion) 7e-8, obliquity 2.6e-5, precession 7.5e-5 degrees (measured over
//! the table of the integrated orbit).
//! Form: lines of text that end with a line "rows", then for every row, youngest first, four
//! IEEE 754 double numbers, least byte first.

use std::fmt::Write as _;

use sha2::{Digest, Sha256};
use thiserror::Error;

use crate::numerics::lagrange::{weighted, weights};

/// Rows needed beyond the oldest and youngest age that can be read.
pub(in crate::orbit) const READING_MARGIN_KYR: i32 = 1;
/// Rows that an interpolation uses.
const NEIGHBOURS: usize = 4;
/// Columns.
const COLUMNS: usize = 4;
/// Bytes of a row.
const ROW_BYTES: usize = COLUMNS * size_of::<f64>();
/// First line of the file.
const MAGIC: &str = "orbicline orbit table 1";
/// Last line of the text.
const BEFORE_ROWS: &str = "\nrows\n";

/// One row.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct OrbitRow {
    /// e cos(w).
    pub k: f64,
    /// e sin(w).
    pub h: f64,
    /// Obliquity, rad.
    pub obliquity_rad: f64,
    /// From the moving equinox to the direction from which w is counted, rad, continuous in time.
    pub precession_rad: f64,
}

impl OrbitRow {
    fn columns(&self) -> [f64; COLUMNS] {
        [self.k, self.h, self.obliquity_rad, self.precession_rad]
    }

    fn from_columns([k, h, obliquity_rad, precession_rad]: [f64; COLUMNS]) -> Self {
        Self {
            k,
            h,
            obliquity_rad,
            precession_rad,
        }
    }

    /// Eccentricity.
    pub fn eccentricity(&self) -> f64 {
        (self.k * self.k + self.h * self.h).sqrt()
    }

    /// Obliquity, degrees.
    pub fn obliquity_deg(&self) -> f64 {
        self.obliquity_rad.to_degrees()
    }

    /// Heliocentric longitude of perihelion from the moving equinox, degrees (not wrapped).
    pub fn perihelion_deg(&self) -> f64 {
        (libm::atan2(self.h, self.k) + self.precession_rad).to_degrees()
    }

    /// Climatic precession e sin(heliocentric longitude of perihelion).
    pub fn climatic_precession(&self) -> f64 {
        // e sin(w + p), without passing through w.
        let (sine, cosine) = libm::sincos(self.precession_rad);
        self.h * cosine + self.k * sine
    }
}

/// A table of rows at whole kyr.
#[derive(Clone, Debug, PartialEq)]
pub struct OrbitTable {
    youngest_kyr: i32,
    rows: Vec<[f64; COLUMNS]>,
}

/// Why bytes are not a table.
#[derive(Clone, Debug, Error, PartialEq, Eq)]
pub enum TableFault {
    /// The text at the beginning is not that of a table.
    #[error(
        "the file does not begin as an orbit table of version 1 ({problem}); make it again with `orbicline orbit --integrate`"
    )]
    Header {
        /// What is missing.
        problem: &'static str,
    },
    /// The rows are not those that were written.
    #[error(
        "SHA-256 of the rows is {found}, the file says {expected}: the file is damaged; make it again with `orbicline orbit --integrate`"
    )]
    Checksum {
        /// Computed.
        found: String,
        /// Written in the file.
        expected: String,
    },
    /// Fewer rows than an interpolation needs, or a part of a row.
    #[error(
        "{bytes} bytes of rows: at least 4 whole rows of 32 bytes are needed; make the file again with `orbicline orbit --integrate`"
    )]
    Rows {
        /// Number of bytes.
        bytes: usize,
    },
}

impl OrbitTable {
    /// From rows at whole kyr before 1950, youngest first.
    pub(in crate::orbit) fn new(youngest_kyr: i32, rows: &[OrbitRow]) -> Self {
        Self {
            youngest_kyr,
            rows: rows.iter().map(OrbitRow::columns).collect(),
        }
    }

    /// Oldest and youngest age that can be read, kyr before 1950.
    pub fn range_kyr(&self) -> [f64; 2] {
        let rows = self.rows.len() as f64 - 1.0;
        let (youngest, margin) = (f64::from(self.youngest_kyr), f64::from(READING_MARGIN_KYR));
        [youngest + rows - margin, youngest + margin]
    }

    /// Rows that can be read, with their ages, oldest first.
    pub fn rows(&self) -> impl Iterator<Item = (i32, OrbitRow)> {
        let ages = self.youngest_kyr..;
        let rows: Vec<_> = ages.zip(&self.rows).collect();
        let margin = usize::try_from(READING_MARGIN_KYR).unwrap_or(0);
        let count = rows.len().saturating_sub(2 * margin);
        let inner = rows.into_iter().skip(margin).take(count).rev();
        inner.map(|(age, row)| (age, OrbitRow::from_columns(*row)))
    }

    /// The interpolated row at an age, kyr before 1950; `None` outside [`OrbitTable::range_kyr`].
    pub fn at(&self, age_kyr: f64) -> Option<OrbitRow> {
        let [oldest, youngest] = self.range_kyr();
        if !(youngest..=oldest).contains(&age_kyr) {
            return None;
        }
        let place = age_kyr - f64::from(self.youngest_kyr);
        // Two rows on either side; at the oldest age the last interval serves.
        #[expect(
            clippy::cast_possible_truncation,
            clippy::cast_sign_loss,
            reason = "between one and the number of rows"
        )]
        let first = (place.floor() as usize - 1).min(self.rows.len() - NEIGHBOURS);
        let weights = weights::<NEIGHBOURS>(place - first as f64);
        let neighbours = &self.rows[first..first + NEIGHBOURS];
        Some(OrbitRow::from_columns(weighted(&weights, neighbours)))
    }

    /// The table as the bytes of a file; `notes` are lines of its text, `name = value`.
    pub fn to_bytes(&self, notes: &[(&str, String)]) -> Vec<u8> {
        let mut body = Vec::with_capacity(self.rows.len() * ROW_BYTES);
        for value in self.rows.as_flattened() {
            body.extend(value.to_le_bytes());
        }
        let [readable, _] = self.range_kyr();
        let oldest = readable + f64::from(READING_MARGIN_KYR);
        let mut text = format!(
            "{MAGIC}\n\
             columns = k = e cos w, h = e sin w (w from the equinox of J2000.0), obliquity (rad), precession (rad)\n\
             form = IEEE 754 double, least byte first; one row for every kyr, youngest first\n\
             youngest_age_kyr_before_1950 = {}\n\
             oldest_age_kyr_before_1950 = {oldest}\n",
            self.youngest_kyr
        );
        for (name, value) in notes {
            // Writing to a string cannot fail.
            let _ = writeln!(text, "{name} = {value}");
        }
        let _ = write!(text, "sha256_of_rows = {}{BEFORE_ROWS}", hexadecimal(&body));
        let mut bytes = text.into_bytes();
        bytes.extend(body);
        bytes
    }

    /// Reads the bytes of a file and checks them.
    ///
    /// # Errors
    /// When they are not such a table, or not the one that was written.
    pub fn from_bytes(bytes: &[u8]) -> Result<Self, TableFault> {
        let fault = |problem| TableFault::Header { problem };
        let end = BEFORE_ROWS.as_bytes();
        let text_length = bytes
            .windows(end.len())
            .position(|window| window == end)
            .ok_or(fault("no line `rows`"))?;
        let text = std::str::from_utf8(&bytes[..text_length]).map_err(|_| fault("not text"))?;
        if text.lines().next() != Some(MAGIC) {
            return Err(fault("another first line"));
        }
        let note = |name: &str| {
            let found = text.lines().filter_map(|line| line.split_once(" = "));
            let mut found = found.filter(|(key, _)| *key == name);
            found.next().map(|(_, value)| value)
        };
        let youngest_kyr = note("youngest_age_kyr_before_1950")
            .and_then(|value| value.parse().ok())
            .ok_or(fault("no youngest age"))?;
        let expected = note("sha256_of_rows").ok_or(fault("no SHA-256"))?;
        let body = &bytes[text_length + end.len()..];
        let found = hexadecimal(body);
        if found != expected {
            let expected = expected.to_owned();
            return Err(TableFault::Checksum { found, expected });
        }
        let (numbers, rest) = body.as_chunks::<{ size_of::<f64>() }>();
        let numbers: Vec<f64> = numbers.iter().map(|b| f64::from_le_bytes(*b)).collect();
        let (rows, part) = numbers.as_chunks::<COLUMNS>();
        if rows.len() < NEIGHBOURS || !rest.is_empty() || !part.is_empty() {
            return Err(TableFault::Rows { bytes: body.len() });
        }
        Ok(Self {
            youngest_kyr,
            rows: rows.to_vec(),
        })
    }
}

/// SHA-256 in hexadecimal.
pub(super) fn hexadecimal(bytes: &[u8]) -> String {
    let digest = Sha256::digest(bytes);
    digest.iter().fold(String::new(), |mut text, byte| {
        // Writing to a string cannot fail.
        let _ = write!(text, "{byte:02x}");
        text
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Rows of slow sinusoids like those of the Earth, from -3 to 97 kyr.
    fn table() -> OrbitTable {
        let rows: Vec<_> = (-3..=97).map(|age| exact(f64::from(age))).collect();
        OrbitTable::new(-3, &rows)
    }

    fn exact(age_kyr: f64) -> OrbitRow {
        let angle = age_kyr * std::f64::consts::TAU / 46.0;
        OrbitRow {
            k: 0.02 * angle.cos(),
            h: 0.02 * angle.sin() + 0.01,
            obliquity_rad: 0.41 + 0.02 * (1.1 * angle).cos(),
            precession_rad: -0.244 * age_kyr + 0.02 * angle.sin(),
        }
    }

    #[test]
    fn converges_to_the_course_between_rows() {
        let table = table();
        let [oldest, youngest] = table.range_kyr();
        assert!((oldest - 96.0).abs() < 1e-12 && (youngest + 2.0).abs() < 1e-12);
        for i in 0..=980 {
            let age = f64::from(i) * 0.1 - 2.0;
            let (got, expected) = (table.at(age).unwrap(), exact(age));
            assert!(
                (got.eccentricity() - expected.eccentricity()).abs() < 4e-7,
                "{age}"
            );
            assert!(
                (got.obliquity_deg() - expected.obliquity_deg()).abs() < 3e-5,
                "{age}"
            );
            let difference = got.climatic_precession() - expected.climatic_precession();
            assert!(difference.abs() < 5e-7, "{age}: {difference:e}");
        }
    }

    #[test]
    fn analytic_rows_are_met_exactly_and_ages_outside_refused() {
        let table = table();
        for (age, row) in table.rows() {
            assert_eq!(table.at(f64::from(age)), Some(row));
        }
        assert_eq!(table.rows().count(), 99);
        for age in [-2.001, 96.001, f64::NAN] {
            assert_eq!(table.at(age), None);
        }
    }

    #[test]
    fn analytic_precession_and_perihelion_agree() {
        let row = exact(12.3);
        let direct = row.eccentricity() * row.perihelion_deg().to_radians().sin();
        assert!((row.climatic_precession() - direct).abs() < 1e-16);
    }

    #[test]
    fn regress_bytes_give_the_table_back() {
        let table = table();
        let bytes = table.to_bytes(&[("solution", "made up".to_owned())]);
        assert_eq!(OrbitTable::from_bytes(&bytes).as_ref(), Ok(&table));
        let cut = OrbitTable::from_bytes(&bytes[..bytes.len() - 8]).unwrap_err();
        assert!(matches!(cut, TableFault::Checksum { .. }), "{cut}");
        let short = OrbitTable::new(0, &[exact(0.0); 3]).to_bytes(&[]);
        let fault = OrbitTable::from_bytes(&short).unwrap_err();
        assert_eq!(fault, TableFault::Rows { bytes: 96 });
    }
}
