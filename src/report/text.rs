//! How wide a text becomes, for laying out.
//!
//! Numerics: sum of the advance widths of DejaVu Sans (the font that comes with the program), without
//! kerning; characters beyond ASCII count as wide as a digit, the minus sign as itself.
//! Source: table `hmtx` of the font.

/// Units of the font in its size.
const UNITS: f64 = 2048.0;
/// Advance widths of the characters from blank to tilde.
const WIDTHS: [u16; 95] = [
    651, 821, 942, 1716, 1303, 1946, 1597, 563, 799, 799, 1024, 1716, 651, 739, 651, 690, 1303,
    1303, 1303, 1303, 1303, 1303, 1303, 1303, 1303, 1303, 690, 690, 1716, 1716, 1716, 1087, 2048,
    1401, 1405, 1430, 1577, 1294, 1178, 1587, 1540, 604, 604, 1343, 1141, 1767, 1532, 1612, 1235,
    1612, 1423, 1300, 1251, 1499, 1401, 2025, 1403, 1251, 1403, 799, 690, 799, 1716, 1024, 1024,
    1255, 1300, 1126, 1300, 1260, 721, 1300, 1298, 569, 569, 1186, 569, 1995, 1298, 1253, 1300,
    1300, 842, 1067, 803, 1298, 1212, 1675, 1212, 1212, 1075, 1303, 690, 1303, 1716,
];
/// Width of a digit.
const DIGIT: u16 = 1303;
/// Width of the minus sign.
const MINUS: u16 = 1716;

/// Width of a text in points at a size in points.
pub(super) fn width_pt(text: &str, size_pt: f64) -> f64 {
    let width = |c: char| {
        let ascii = u32::from(c).checked_sub(32);
        let known = ascii.and_then(|i| WIDTHS.get(usize::try_from(i).ok()?));
        match (known, c) {
            (Some(width), _) => *width,
            (None, '\u{2212}') => MINUS,
            (None, _) => DIGIT,
        }
    };
    text.chars().map(|c| f64::from(width(c))).sum::<f64>() / UNITS * size_pt
}

/// A number with so many decimals and the minus sign of typography.
pub(super) fn number(value: f64, decimals: usize) -> String {
    let text = format!("{value:.decimals$}");
    // What rounds to zero has no sign.
    match text.strip_prefix('-') {
        Some(rest) if rest.bytes().all(|b| b == b'0' || b == b'.') => rest.to_owned(),
        Some(rest) => format!("\u{2212}{rest}"),
        None => text,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn analytic_widths_and_numbers() {
        assert!((width_pt("10", 2048.0) - 2606.0).abs() < 1e-9);
        assert!((width_pt("\u{2212}1", 2048.0) - 3019.0).abs() < 1e-9);
        assert_eq!(number(-0.04, 1), "0.0");
        assert_eq!(number(-2.5, 1), "\u{2212}2.5");
    }
}
