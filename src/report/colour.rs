//! Colours that people with any kind of colour vision can tell apart.
//!
//! Sources: lines: Okabe & Ito 2008, Color Universal Design (memory), without the yellow, too pale on
//! white; rising values: "viridis" (van der Walt & Smith 2015; memory), whose lightness rises evenly;
//! differences: "RdBu" of ColorBrewer (Brewer, Harrower & Pennsylvania State University), turned so that
//! red is positive. Both maps from the crate `colorous`.

use colorous::{RED_BLUE, VIRIDIS};

/// Colours of lines, in the order in which they are used.
pub(super) const LINES: [&str; 7] = [
    "#0072b2", "#d55e00", "#009e73", "#cc79a7", "#56b4e9", "#e69f00", "#000000",
];
/// Steps of a colour map.
const STEPS: usize = 256;
/// The ends of the map of differences that are left out, being too dark to tell red from blue.
const DARK_END: f64 = 0.04;

/// Which colours a map has.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum ColourMap {
    /// From dark to light with rising values.
    Rising,
    /// Blue below, white at the middle, red above.
    Diverging,
}

impl ColourMap {
    /// The colours, from the smallest value to the largest, red, green and blue.
    pub(super) fn palette(self) -> Vec<[u8; 3]> {
        let colour = |k: usize| {
            let part = k as f64 / (STEPS - 1) as f64;
            let colour = match self {
                Self::Rising => VIRIDIS.eval_continuous(part),
                Self::Diverging => {
                    RED_BLUE.eval_continuous(1.0 - DARK_END - (1.0 - 2.0 * DARK_END) * part)
                }
            };
            [colour.r, colour.g, colour.b]
        };
        (0..STEPS).map(colour).collect()
    }
}

/// Number of the colour of a value in a range.
pub(super) fn index(value: f64, [low, high]: [f64; 2]) -> u8 {
    let part = ((value - low) / (high - low)).clamp(0.0, 1.0);
    #[expect(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "between 0 and 255; NaN becomes 0"
    )]
    let index = (part * (STEPS - 1) as f64).round() as u8;
    index
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn analytic_the_middle_of_differences_is_pale_and_red_is_above() {
        let palette = ColourMap::Diverging.palette();
        assert_eq!(palette.len(), STEPS);
        assert!(palette[127].iter().all(|c| *c > 235), "{:?}", palette[127]);
        assert!(palette[255][0] > palette[255][2] && palette[0][2] > palette[0][0]);
        assert_eq!(index(0.0, [-1.0, 1.0]), 128);
        assert_eq!(index(9.0, [-1.0, 1.0]), 255);
    }

    #[test]
    fn analytic_lightness_of_rising_values_rises() {
        let light = |c: &[u8; 3]| 2 * u32::from(c[0]) + 7 * u32::from(c[1]) + u32::from(c[2]);
        let palette = ColourMap::Rising.palette();
        assert!(palette.windows(12).all(|w| light(&w[11]) > light(&w[0])));
    }
}
