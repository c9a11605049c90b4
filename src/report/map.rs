//! A quantity over two axes as colours, with a colour bar.
//!
//! What: the values lie at places along both axes; between them colours follow linear interpolation,
//! except along an axis of named cells, which are filled evenly; elsewhere lines of equal value stand at
//! the ticks of the colour bar. Missing values (NaN) are grey.
//! Units: points.
//! Numerics: a picture of pixels with 256 colours inside the SVG, four pixels to a point.

use super::axis::{Axis, Names};
use super::colour::{ColourMap, index};
use super::contour;
use super::svg::{Anchor, INK, Run, Svg};
use super::text::width_pt;
use super::ticks::{Round, step};
use super::{About, POINTS_PER_MM, TEXT_PT};

/// A figure of one map.
#[derive(Clone, Debug, PartialEq)]
pub struct MapFigure {
    /// What it says about itself.
    pub about: About,
    /// Width, mm.
    pub width_mm: f64,
    /// Horizontal axis.
    pub x: Axis,
    /// Vertical axis.
    pub y: Axis,
    /// Places of the values along the horizontal axis, one way; of named cells their middles.
    pub x_places: Vec<f64>,
    /// The same along the vertical axis.
    pub y_places: Vec<f64>,
    /// Values, vertical axis fastest; NaN where there is none.
    pub values: Vec<f64>,
    /// What the colours mean, with the unit.
    pub label: String,
    /// The colours; those of differences have their middle at 0.
    pub colours: ColourMap,
}

/// A picture that could not be encoded.
#[derive(Debug, thiserror::Error)]
#[error("the map cannot be encoded: {0}")]
pub struct MapError(#[from] png::EncodingError);

const GAP_PT: f64 = 3.0;
const TICK_PT: f64 = 2.5;
const THIN_PT: f64 = 0.5;
/// Width of the colour bar.
const BAR_PT: f64 = 7.0;
/// Height of the map as a part of its width, and the largest height.
const SHAPE: f64 = 0.68;
const HIGHEST_PT: f64 = 260.0;
/// Points between two ticks, across, upwards and along the colour bar.
const TICK_DISTANCE_PT: [f64; 3] = [36.0, 20.0, 22.0];
/// Pixels to a point.
const PIXELS_PER_POINT: f64 = 4.0;
/// Intervals of the colour bar after which its range is rounded.
const COLOUR_INTERVALS: f64 = 10.0;
/// Width of lines of equal value.
const CONTOUR_PT: f64 = 0.4;
/// Lightness, of 255, below which lines are white.
const DARK: u32 = 110;
/// Colour of lines on dark colours.
const PAPER: &str = "#ffffff";
/// Colour of missing values.
const NOTHING: [u8; 3] = [190, 190, 190];

/// Where a pixel lies between two values: their numbers and the part of the second.
type Between = (usize, usize, f64);

impl MapFigure {
    /// The text of the SVG file.
    ///
    /// # Errors
    /// When the picture cannot be encoded.
    pub fn svg(&self) -> Result<String, MapError> {
        let bar = Axis::numbers(&self.label, self.colour_range());
        let width = self.width_mm * POINTS_PER_MM;
        let widest = |ticks: &[(f64, String)]| {
            let widths = ticks.iter().map(|(_, name)| width_pt(name, TEXT_PT));
            widths.fold(0.0, f64::max)
        };
        let rough = SHAPE * 0.62 * width;
        let left = TEXT_PT + 3.5 * GAP_PT + widest(&self.y.ticks(rough / TICK_DISTANCE_PT[1]));
        let bar_names = widest(&bar.ticks(rough / TICK_DISTANCE_PT[2])) + TICK_PT;
        let bar_left = width - TEXT_PT - 3.5 * GAP_PT - bar_names - BAR_PT;
        let map_width = bar_left - 3.0 * GAP_PT - left;
        let height = (SHAPE * map_width).min(HIGHEST_PT);
        let top = GAP_PT + 0.5 * TEXT_PT;
        let below = TICK_PT + 2.0 * TEXT_PT + 3.0 * GAP_PT;
        let mut svg = Svg::new([width, top + height + below]);
        let (at, size) = ([left, top], [map_width, height]);
        svg.image(at, size, &self.picture(size, bar.range)?);
        self.draw_contours(&mut svg, &bar, at, size);
        svg.frame(at, size);
        self.draw_axes(&mut svg, at, size);
        draw_bar(&mut svg, &bar, self.colours, [bar_left, top], height)?;
        let label_at = [width - 1.5 * GAP_PT, top + 0.5 * height];
        svg.text(label_at, &self.label, Anchor::Middle, Run::Upwards);
        Ok(svg.finish(&self.about))
    }

    /// Range of the colours: round numbers around all values.
    fn colour_range(&self) -> [f64; 2] {
        let (mut low, mut high) = (f64::INFINITY, f64::NEG_INFINITY);
        for value in self.values.iter().filter(|v| v.is_finite()) {
            (low, high) = (low.min(*value), high.max(*value));
        }
        if low > high {
            return [0.0, 1.0];
        }
        match self.colours {
            ColourMap::Rising => {
                let step = step((high - low) / COLOUR_INTERVALS, Round::Decimal);
                let (low, high) = ((low / step).floor() * step, (high / step).ceil() * step);
                [low, if high > low { high } else { low + step }]
            }
            ColourMap::Diverging => {
                let most = low.abs().max(high.abs());
                let step = step(2.0 * most / COLOUR_INTERVALS, Round::Decimal);
                let most = ((most / step).ceil() * step).max(step);
                [-most, most]
            }
        }
    }

    /// The pixels of the map as a PNG file.
    fn picture(&self, size: [f64; 2], range: [f64; 2]) -> Result<Vec<u8>, MapError> {
        let [columns, rows] = size.map(pixels);
        let along = |axis: &Axis, places: &[f64], count: usize| -> Vec<Between> {
            let at = |k: usize| {
                // The axis places values; a pixel's value is found the other way round.
                let part = (k as f64 + 0.5) / count as f64;
                let [low, high] = axis.range;
                let (first, last) = (axis.place(low, [0.0, 1.0]), axis.place(high, [0.0, 1.0]));
                let value = low + (high - low) * (part - first) / (last - first);
                between(value, places, &axis.names)
            };
            (0..count).map(at).collect()
        };
        let across = along(&self.x, &self.x_places, columns);
        let upwards = along(&self.y, &self.y_places, rows);
        let n = self.y_places.len();
        let mut indices = Vec::with_capacity(columns * rows);
        for &(j0, j1, q) in upwards.iter().rev() {
            for &(i0, i1, p) in &across {
                let mixed = |i: usize| {
                    let [a, b] = [self.values[i * n + j0], self.values[i * n + j1]];
                    a + q * (b - a)
                };
                let (a, b) = (mixed(i0), mixed(i1));
                let value = a + p * (b - a);
                // The last colour of the palette stands for missing values.
                indices.push(if value.is_nan() {
                    255
                } else {
                    index(value, range).min(254)
                });
            }
        }
        let mut palette = self.colours.palette();
        palette[255] = NOTHING;
        encode(&palette, [columns, rows], &indices)
    }

    /// Lines of equal value, dark on light colours and white on dark ones; none between named cells.
    fn draw_contours(&self, svg: &mut Svg, bar: &Axis, [left, top]: [f64; 2], size: [f64; 2]) {
        if [&self.x, &self.y]
            .iter()
            .any(|axis| matches!(axis.names, Names::Cells(_)))
        {
            return;
        }
        let [width, height] = size;
        let at = |places: &[f64], number: f64| {
            let low = whole(number).min(places.len().saturating_sub(2));
            let part = number - low as f64;
            places[low] + part * (places[low + 1] - places[low])
        };
        let palette = self.colours.palette();
        let (columns, rows) = (self.x_places.len(), self.y_places.len());
        for (level, _) in bar.ticks(height / TICK_DISTANCE_PT[2]) {
            // Where the ends of the colours are reached, as in polar night, there is no slope.
            if level <= bar.range[0] || level >= bar.range[1] {
                continue;
            }
            let found = contour::pieces(&self.values, columns, rows, level);
            let placed = |[x, y]: [f64; 2]| {
                [
                    self.x.place(at(&self.x_places, x), [left, left + width]),
                    self.y.place(at(&self.y_places, y), [top + height, top]),
                ]
            };
            let placed: Vec<_> = found.into_iter().map(|piece| piece.map(placed)).collect();
            if placed.is_empty() {
                continue;
            }
            let [r, g, b] = palette[usize::from(index(level, bar.range))].map(u32::from);
            let light = 3 * r + 6 * g + b > 10 * DARK;
            // The line at 0 divides gain from loss.
            let zero = level.abs() < 1e-9 && self.colours == ColourMap::Diverging;
            svg.pieces(
                &placed,
                if light { INK } else { PAPER },
                if zero { 1.6 * CONTOUR_PT } else { CONTOUR_PT },
            );
        }
    }

    fn draw_axes(&self, svg: &mut Svg, [left, top]: [f64; 2], [width, height]: [f64; 2]) {
        let bottom = top + height;
        for (value, name) in self.x.ticks(width / TICK_DISTANCE_PT[0]) {
            let x = self.x.place(value, [left, left + width]);
            svg.line([x, bottom], [x, bottom + TICK_PT], INK, THIN_PT);
            let at = [x, bottom + TICK_PT + TEXT_PT];
            svg.text(at, &name, Anchor::Middle, Run::Across);
        }
        for (value, name) in self.y.ticks(height / TICK_DISTANCE_PT[1]) {
            let y = self.y.place(value, [bottom, top]);
            svg.line([left - TICK_PT, y], [left, y], INK, THIN_PT);
            let at = [left - TICK_PT - 0.5 * GAP_PT, y + 0.36 * TEXT_PT];
            svg.text(at, &name, Anchor::End, Run::Across);
        }
        let at = [
            left + 0.5 * width,
            bottom + TICK_PT + 2.0 * TEXT_PT + GAP_PT,
        ];
        svg.text(at, &self.x.label, Anchor::Middle, Run::Across);
        let at = [GAP_PT + 0.75 * TEXT_PT, top + 0.5 * height];
        svg.text(at, &self.y.label, Anchor::Middle, Run::Upwards);
    }
}

/// Whole part of a number that is not negative.
#[expect(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "a number of columns or rows"
)]
fn whole(number: f64) -> usize {
    number.max(0.0).floor() as usize
}

/// The two values beside a place, and how far it is from the first to the second.
fn between(value: f64, places: &[f64], names: &Names) -> Between {
    let last = places.len().saturating_sub(1);
    let rising = places.first() <= places.last();
    let after = places.partition_point(|p| if rising { *p <= value } else { *p >= value });
    let (low, high) = (after.saturating_sub(1).min(last), after.min(last));
    if low == high {
        return (low, high, 0.0);
    }
    let part = ((value - places[low]) / (places[high] - places[low])).clamp(0.0, 1.0);
    match names {
        Names::Cells(_) if part < 0.5 => (low, low, 0.0),
        Names::Cells(_) => (high, high, 0.0),
        _ => (low, high, part),
    }
}

fn draw_bar(
    svg: &mut Svg,
    axis: &Axis,
    colours: ColourMap,
    at: [f64; 2],
    height: f64,
) -> Result<(), MapError> {
    let palette = colours.palette();
    // The top row of pixels is the largest value.
    let rows: Vec<u8> = (0..=255).rev().collect();
    svg.image(at, [BAR_PT, height], &encode(&palette, [1, 256], &rows)?);
    svg.frame(at, [BAR_PT, height]);
    let right = at[0] + BAR_PT;
    for (value, name) in axis.ticks(height / TICK_DISTANCE_PT[2]) {
        let y = axis.place(value, [at[1] + height, at[1]]);
        svg.line([right, y], [right + TICK_PT, y], INK, THIN_PT);
        let at = [right + TICK_PT + 0.5 * GAP_PT, y + 0.36 * TEXT_PT];
        svg.text(at, &name, Anchor::Start, Run::Across);
    }
    Ok(())
}

/// A PNG file of a palette and its numbers, row by row.
fn encode(
    palette: &[[u8; 3]],
    [columns, rows]: [usize; 2],
    indices: &[u8],
) -> Result<Vec<u8>, MapError> {
    let mut file = Vec::new();
    let size = |n: usize| u32::try_from(n).unwrap_or(u32::MAX);
    let mut encoder = png::Encoder::new(&mut file, size(columns), size(rows));
    encoder.set_color(png::ColorType::Indexed);
    encoder.set_depth(png::BitDepth::Eight);
    encoder.set_compression(png::Compression::High);
    encoder.set_palette(palette.concat());
    let mut writer = encoder.write_header()?;
    writer.write_image_data(indices)?;
    writer.finish()?;
    Ok(file)
}

/// Whole pixels of a length in points.
#[expect(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "a few hundred points"
)]
fn pixels(points: f64) -> usize {
    (points * PIXELS_PER_POINT).round().max(1.0) as usize
}

#[cfg(test)]
#[path = "map_tests.rs"]
mod tests;
