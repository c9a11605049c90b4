//! Lines in panels above one another that share their horizontal axis.
//!
//! What: each panel has a vertical axis of its own, a name, and lines; a legend stands above the first
//! panel that has its lines. Missing values (NaN) interrupt a line.
//! Units: points.
//! Numerics: where many values fall on one hundredth of the width, the first, lowest, highest and last
//! are drawn, which looks the same.

use super::axis::Axis;
use super::colour::LINES;
use super::svg::{Anchor, GRID, INK, Run, Svg};
use super::text::width_pt;
use super::{About, POINTS_PER_MM, TEXT_PT};

/// Most lines in a panel: more cannot be told apart.
pub const MOST_LINES: usize = LINES.len();
/// Most panels.
pub const MOST_PANELS: usize = 8;

/// A line: its name and a value at each place of the figure's horizontal axis.
#[derive(Clone, Debug, PartialEq)]
pub struct Line {
    /// Name in the legend.
    pub name: String,
    /// Values; NaN where there is none.
    pub values: Vec<f64>,
}

/// Lines on one vertical axis.
#[derive(Clone, Debug, PartialEq)]
pub struct Panel {
    /// What tells it from the others; empty if nothing needs to.
    pub name: String,
    /// Vertical axis.
    pub y: Axis,
    /// The lines.
    pub lines: Vec<Line>,
}

/// A figure of panels.
#[derive(Clone, Debug, PartialEq)]
pub struct LineFigure {
    /// What it says about itself.
    pub about: About,
    /// Width, mm.
    pub width_mm: f64,
    /// Horizontal axis.
    pub x: Axis,
    /// Places of the values on it.
    pub places: Vec<f64>,
    /// The panels, from top to bottom.
    pub panels: Vec<Panel>,
}

/// Points between things that belong together.
const GAP_PT: f64 = 3.0;
/// Length of a tick.
const TICK_PT: f64 = 2.5;
/// Height of a row of text.
const ROW_PT: f64 = 1.35 * TEXT_PT;
/// Height of the only panel, and of one among several.
const PANEL_PT: [f64; 2] = [112.0, 74.0];
/// Points between two ticks, across and upwards.
const TICK_DISTANCE_PT: [f64; 2] = [42.0, 20.0];
/// Length of the piece of line in the legend.
const SAMPLE_PT: f64 = 12.0;
/// Width of the lines.
const LINE_PT: f64 = 0.9;
/// Width of axes and grid.
const THIN_PT: f64 = 0.5;
/// Parts of a point within which places count as one.
const PARTS_OF_POINT: f64 = 10.0;

/// Where things are.
struct Layout {
    width: f64,
    left: f64,
    right: f64,
    panel: f64,
}

impl LineFigure {
    /// The text of the SVG file.
    pub fn svg(&self) -> String {
        let layout = self.layout();
        let tops = self.tops(&layout);
        let bottom = tops.last().map_or(0.0, |(_, top)| top + layout.panel);
        let height = bottom + TICK_PT + 2.0 * TEXT_PT + 3.0 * GAP_PT;
        let mut svg = Svg::new([layout.width, height]);
        for (panel, (legend, top)) in self.panels.iter().zip(&tops) {
            if let Legend::Shown(rows) = legend {
                draw_legend(&mut svg, rows, &layout, *top);
            }
            self.draw(&mut svg, panel, &layout, *top);
        }
        self.draw_x(&mut svg, &layout, bottom);
        svg.finish(&self.about)
    }

    fn layout(&self) -> Layout {
        let panel = PANEL_PT[usize::from(self.panels.len() > 1)];
        let ticks = self.panels.iter().flat_map(|p| y_ticks(&p.y, panel));
        let widest = ticks
            .map(|(_, name)| width_pt(&name, TEXT_PT))
            .fold(0.0, f64::max);
        let width = self.width_mm * POINTS_PER_MM;
        // Half of the last name of the horizontal axis may stick out.
        let names = self.x.ticks((width - 60.0) / TICK_DISTANCE_PT[0]);
        let half = names.iter().map(|(_, name)| 0.5 * width_pt(name, TEXT_PT));
        Layout {
            width,
            left: ROW_PT + 2.0 * GAP_PT + widest + TICK_PT,
            right: width - GAP_PT - half.fold(0.0, f64::max),
            panel,
        }
    }

    /// Legend and upper end of each panel.
    fn tops(&self, layout: &Layout) -> Vec<(Legend, f64)> {
        let mut y = GAP_PT;
        let mut before: Vec<&str> = Vec::new();
        let mut tops = Vec::new();
        for panel in &self.panels {
            let names: Vec<_> = panel.lines.iter().map(|l| l.name.as_str()).collect();
            let known = names.len() < 2 || names == before;
            let room = layout.right - layout.left;
            let legend = if known {
                Legend::None
            } else {
                Legend::Shown(legend_rows(&names, room))
            };
            let rows = match &legend {
                Legend::Shown(rows) => rows.len(),
                Legend::None => 0,
            };
            // A name that leaves room beside it stands in the last row of the legend.
            let free = room - legend.last_row_pt() - width_pt(&panel.name, TEXT_PT);
            let own = usize::from(!panel.name.is_empty() && (rows == 0 || free < 0.0));
            y += ROW_PT * (rows + own) as f64;
            let legend = legend.above(own);
            y += GAP_PT;
            tops.push((legend, y));
            y += layout.panel + GAP_PT;
            before = names;
        }
        tops
    }

    fn draw(&self, svg: &mut Svg, panel: &Panel, layout: &Layout, top: f64) {
        let (left, right, bottom) = (layout.left, layout.right, top + layout.panel);
        let ends = [bottom, top];
        for (value, _) in self.x_ticks(layout) {
            let x = self.x.place(value, [left, right]);
            svg.line([x, top], [x, bottom], GRID, THIN_PT);
        }
        for (value, name) in y_ticks(&panel.y, layout.panel) {
            let y = panel.y.place(value, ends);
            svg.line([left, y], [right, y], GRID, THIN_PT);
            svg.line([left - TICK_PT, y], [left, y], INK, THIN_PT);
            let at = [left - TICK_PT - 0.5 * GAP_PT, y + 0.36 * TEXT_PT];
            svg.text(at, &name, Anchor::End, Run::Across);
        }
        if panel.y.range[0] < 0.0 && panel.y.range[1] > 0.0 {
            let y = panel.y.place(0.0, ends);
            svg.line([left, y], [right, y], INK, THIN_PT);
        }
        for (line, colour) in panel.lines.iter().zip(LINES.iter().cycle()) {
            let place =
                |(x, y): (&f64, &f64)| [self.x.place(*x, [left, right]), panel.y.place(*y, ends)];
            let points: Vec<_> = self.places.iter().zip(&line.values).map(place).collect();
            for piece in points.split(|p| !p[1].is_finite()) {
                match piece {
                    [] => {}
                    [single] => svg.dot(*single, colour, LINE_PT),
                    _ => svg.path(&thinned(piece), colour, LINE_PT),
                }
            }
        }
        svg.line([left, top], [left, bottom], INK, THIN_PT);
        svg.line([left, bottom], [right, bottom], INK, THIN_PT);
        let middle = [GAP_PT + 0.75 * TEXT_PT, 0.5 * (top + bottom)];
        svg.text(middle, &panel.y.label, Anchor::Middle, Run::Upwards);
        if !panel.name.is_empty() {
            let at = [left, top - GAP_PT];
            svg.text(at, &panel.name, Anchor::Start, Run::Across);
        }
    }

    fn x_ticks(&self, layout: &Layout) -> Vec<(f64, String)> {
        self.x
            .ticks((layout.right - layout.left) / TICK_DISTANCE_PT[0])
    }

    fn draw_x(&self, svg: &mut Svg, layout: &Layout, bottom: f64) {
        for (value, name) in self.x_ticks(layout) {
            let x = self.x.place(value, [layout.left, layout.right]);
            svg.line([x, bottom], [x, bottom + TICK_PT], INK, THIN_PT);
            let at = [x, bottom + TICK_PT + TEXT_PT];
            svg.text(at, &name, Anchor::Middle, Run::Across);
        }
        let middle = 0.5 * (layout.left + layout.right);
        let at = [middle, bottom + TICK_PT + TEXT_PT + GAP_PT + TEXT_PT];
        svg.text(at, &self.x.label, Anchor::Middle, Run::Across);
    }
}

/// Ticks of a vertical axis of a height.
fn y_ticks(axis: &Axis, height: f64) -> Vec<(f64, String)> {
    axis.ticks(height / TICK_DISTANCE_PT[1])
}

/// Names with the numbers of their lines, in rows.
type LegendRows = Vec<Vec<(usize, String)>>;

enum Legend {
    None,
    Shown(LegendRows),
}

impl Legend {
    /// Width of the last row.
    fn last_row_pt(&self) -> f64 {
        match self {
            Self::Shown(rows) => rows.last().map_or(0.0, |row| row_width(row)),
            Self::None => 0.0,
        }
    }

    /// The same with free rows below it.
    fn above(self, free: usize) -> Self {
        match self {
            Self::Shown(mut rows) => {
                rows.extend(vec![Vec::new(); free]);
                Self::Shown(rows)
            }
            Self::None => Self::None,
        }
    }
}

fn row_width(row: &[(usize, String)]) -> f64 {
    row.iter().map(|(_, name)| legend_width(name)).sum()
}

fn legend_width(name: &str) -> f64 {
    SAMPLE_PT + GAP_PT + width_pt(name, TEXT_PT) + 3.0 * GAP_PT
}

/// Fills rows of a width with names.
fn legend_rows(names: &[&str], room: f64) -> LegendRows {
    let (mut rows, mut used): (LegendRows, f64) = (vec![Vec::new()], 0.0);
    for (number, name) in names.iter().enumerate() {
        let width = legend_width(name);
        if used > 0.0 && used + width > room {
            rows.push(Vec::new());
            used = 0.0;
        }
        used += width;
        if let Some(row) = rows.last_mut() {
            row.push((number, (*name).to_owned()));
        }
    }
    rows
}

/// Draws a legend that ends above the panel (and its name) at `top`.
fn draw_legend(svg: &mut Svg, rows: &LegendRows, layout: &Layout, top: f64) {
    for (n, row) in rows.iter().enumerate() {
        let mut x = layout.right - row_width(row) + 3.0 * GAP_PT;
        let base = top - GAP_PT - ROW_PT * (rows.len() - 1 - n) as f64;
        for (number, name) in row {
            let y = base - 0.33 * TEXT_PT;
            let colour = LINES[number % LINES.len()];
            svg.path(&[[x, y], [x + SAMPLE_PT, y]], colour, 1.5 * LINE_PT);
            let at = [x + SAMPLE_PT + GAP_PT, base];
            svg.text(at, name, Anchor::Start, Run::Across);
            x += legend_width(name);
        }
    }
}

/// Of all points within a part of a point of the width, the first, lowest, highest and last.
fn thinned(points: &[[f64; 2]]) -> Vec<[f64; 2]> {
    let column = |p: &[f64; 2]| (p[0] * PARTS_OF_POINT).floor();
    let same = |a: &[f64; 2], b: &[f64; 2]| (column(a) - column(b)).abs() < 0.5;
    let mut kept = Vec::with_capacity(points.len());
    for run in points.chunk_by(same) {
        if run.len() <= 4 {
            kept.extend_from_slice(run);
            continue;
        }
        let by_height = |a: &usize, b: &usize| run[*a][1].total_cmp(&run[*b][1]);
        let mut chosen = vec![0, run.len() - 1];
        chosen.extend((0..run.len()).min_by(by_height));
        chosen.extend((0..run.len()).max_by(by_height));
        chosen.sort_unstable();
        chosen.dedup();
        kept.extend(chosen.into_iter().map(|i| run[i]));
    }
    kept
}

#[cfg(test)]
#[path = "lines_tests.rs"]
mod tests;
