//! The orbit integrated by this program, from the table that comes with it.
//!
//! What: eccentricity, obliquity and longitude of perihelion at any age of the table.
//! Equations: see [`super::orbit_table`] for the reading, [`crate::orbit::integration`] for how
//! the table was made: `orbicline orbit --integrate --from-kyr 5500 --to-kyr -100`.
//! Units: degrees; ages in kyr before 1950 CE.
//! Numerics: cubic through four rows of 1 kyr, 5e-8 in e and 2.6e-5 degrees in obliquity; the table's SHA-256 is checked once,
//! when the first orbit is built from it.
//! Validity: the ages of the table, never beyond. Against Laskar et al. 2004, A&A 428:261 over the
//! last 1.3 Myr: e 5e-5, which is that table's own short-period noise, obliquity 7e-4 degrees. What
//! is not known: [`crate::orbit::integration::NOT_KNOWN`].
//! Source: own integration; constants and their sources in `configs/orbit_constants.toml`.

use std::sync::OnceLock;

use super::orbit_table::{OrbitTable, TableFault};

/// The table as bytes.
const BYTES: &[u8] = include_bytes!("integrated.table");

/// The table that comes with the program.
///
/// # Errors
/// When its bytes are damaged.
pub fn table() -> Result<&'static OrbitTable, TableFault> {
    static TABLE: OnceLock<Result<OrbitTable, TableFault>> = OnceLock::new();
    TABLE
        .get_or_init(|| OrbitTable::from_bytes(BYTES))
        .as_ref()
        .map_err(Clone::clone)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::orbit::solution::orbit_table::hexadecimal;

    #[test]
    fn regress_the_table_is_the_one_that_was_checked() {
        // Remade when the integration or its constants change, which changes results.
        assert_eq!(hexadecimal(BYTES), include_str!("integrated.sha256").trim());
        assert!(BYTES.len() < 200_000, "{} bytes", BYTES.len());
        let range = table().unwrap().range_kyr();
        assert!((range[0] - 5500.0).abs() < 1e-9 && (range[1] + 100.0).abs() < 1e-9);
    }

    #[test]
    fn regress_a_damaged_table_is_refused() {
        let mut bytes = BYTES.to_vec();
        let last = bytes.len() - 100;
        bytes[last] ^= 1;
        let fault = OrbitTable::from_bytes(&bytes).unwrap_err();
        assert!(matches!(fault, TableFault::Checksum { .. }), "{fault}");
        let fault = OrbitTable::from_bytes(&BYTES[1..]).unwrap_err();
        assert!(matches!(fault, TableFault::Header { .. }), "{fault}");
        let fault = OrbitTable::from_bytes(b"age,e\n0,0.0167\n").unwrap_err();
        assert!(fault.to_string().contains("no line `rows`"), "{fault}");
    }
}
