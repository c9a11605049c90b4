//! Figures: lines in panels that share an axis, and maps with a colour bar, as SVG or PNG.
//!
//! What: [`lines::LineFigure`] and [`map::MapFigure`] take numbers with their names and give the text of
//! an SVG file; [`raster`] turns it into pixels with the font that comes with the program. Nothing here
//! knows what the numbers are, and nothing touches files.
//! Units: points of 1/72 inch inside, millimetres for the width of a figure.
//! Numerics: two decimals of a point in the file; no clock, no random names, so equal numbers give
//! equal text.
//! Source: SVG 1.1 (W3C 2011); each choice of ticks and colours is sourced where it is made.

pub mod axis;
pub mod colour;
mod contour;
pub mod lines;
pub mod map;
pub mod raster;
mod svg;
mod text;
mod ticks;

use std::path::Path;

/// Form of a figure on disk.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum FigureForm {
    /// Scalable, with text as text.
    Svg,
    /// Pixels.
    Png,
}

impl FigureForm {
    /// The form that the ending of a name says; `None` if it says none.
    pub fn of(path: &Path) -> Option<Self> {
        match path.extension()?.to_str()? {
            "svg" => Some(Self::Svg),
            "png" => Some(Self::Png),
            _ => None,
        }
    }
}

/// What a figure says about itself to readers that look inside the file.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct About {
    /// What it shows, in a line.
    pub title: String,
    /// Where it comes from.
    pub description: String,
}

/// Points in a millimetre.
const POINTS_PER_MM: f64 = 72.0 / 25.4;
/// Size of all text, points: what journals ask for at the width of a column, 85 mm.
const TEXT_PT: f64 = 7.0;
