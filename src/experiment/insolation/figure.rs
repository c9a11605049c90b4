//! A table of insolation as a figure.
//!
//! What: lines against age (one panel for each latitude, one line for each moment of the year); for one
//! age lines against season or latitude (one line for each value of the other), or a map of both where
//! there are too many lines; so also maps of age and latitude, or of age and season.

use super::super::axes_of_figures::{about, axis, name};
use super::super::destination::{DestinationError, Drawing};
use crate::output::table::{Table, TableAxis, TableVariable};
use crate::report::axis::Axis;
use crate::report::colour::ColourMap;
use crate::report::lines::{Line, LineFigure, MOST_LINES, MOST_PANELS, Panel};
use crate::report::map::MapFigure;

/// Unit of what is drawn, in the table and in words.
const UNIT: &str = "W m-2";
const LABEL: &str = "Insolation (W m\u{207b}²)";
const ANOMALY_LABEL: &str = "Anomaly (W m\u{207b}²)";

/// What a figure of this table looks like.
enum Look {
    /// Lines along an axis.
    Lines(TableAxis),
    /// Colours over two axes, the horizontal one first.
    Map(TableAxis, TableAxis),
}

/// Draws the table as SVG.
///
/// # Errors
/// When the numbers make no readable figure.
pub fn draw(table: &Table, drawing: Drawing) -> Result<String, DestinationError> {
    let drawn: Vec<_> = table.variables.iter().filter(|v| v.units == UNIT).collect();
    match look(table, drawn.len())? {
        Look::Lines(along) => Ok(lines(table, &drawn, along, drawing).svg()),
        Look::Map(x, y) => match drawn.first() {
            Some(variable) => Ok(map(table, variable, [x, y], drawing).svg()?),
            None => Err(none("it holds no insolation")),
        },
    }
}

fn none(problem: &str) -> DestinationError {
    DestinationError::Figure {
        problem: problem.to_owned(),
    }
}

/// The axis of the season, if the table has one.
fn season(table: &Table) -> Option<TableAxis> {
    let axes = table.axes.iter().map(|(axis, _)| *axis);
    axes.into_iter()
        .find(|axis| !matches!(axis, TableAxis::Age | TableAxis::Latitude))
}

fn look(table: &Table, variables: usize) -> Result<Look, DestinationError> {
    use TableAxis::{Age, Latitude};
    let season = season(table);
    let moments = season.map_or(1, |axis| table.along(axis).len());
    let (ages, latitudes) = (table.along(Age).len(), table.along(Latitude).len());
    let few = moments <= MOST_LINES && latitudes * variables <= MOST_PANELS;
    match (ages > 1, season) {
        (true, _) if few => Ok(Look::Lines(Age)),
        (true, _) if moments == 1 => Ok(Look::Map(Age, Latitude)),
        (true, Some(season)) if latitudes == 1 => Ok(Look::Map(Age, season)),
        (true, _) => Err(none(&format!(
            "{latitudes} latitudes and {moments} moments of the year against age; take one latitude, \
             one moment, one age (--at-kyr), or at most {MOST_LINES} moments and {MOST_PANELS} latitudes"
        ))),
        (false, Some(season)) if moments > 1 && latitudes <= MOST_LINES => Ok(Look::Lines(season)),
        (false, _) if latitudes > 1 && moments <= MOST_LINES => Ok(Look::Lines(Latitude)),
        (false, Some(season)) if latitudes > 1 => Ok(Look::Map(season, Latitude)),
        (false, _) => Err(none(
            "one age, one latitude and one moment of the year is a single number; give several of one \
             of them",
        )),
    }
}

/// Whether the table holds differences.
fn is_anomaly(variable: &TableVariable) -> bool {
    variable.name.ends_with("anomaly")
}

fn lines(
    table: &Table,
    drawn: &[&TableVariable],
    along: TableAxis,
    drawing: Drawing,
) -> LineFigure {
    let (x, places) = axis(table, along, drawing);
    // Against age each latitude has a panel; otherwise the values of the other axis are lines.
    let panels_of = match along {
        TableAxis::Age => table.along(TableAxis::Latitude).len(),
        _ => 1,
    };
    let of = |variable: &TableVariable| {
        // The northernmost panel is on top.
        let panels = (0..panels_of).rev();
        panels
            .map(|latitude| panel(table, variable, along, latitude))
            .collect::<Vec<_>>()
    };
    let panels = drawn.iter().flat_map(|variable| of(variable)).collect();
    LineFigure {
        about: about(table),
        width_mm: drawing.width_mm,
        x,
        places,
        panels,
    }
}

/// The axis whose values are the lines of a panel: that of the season, or of latitude where the
/// season is the horizontal axis.
fn line_axis(table: &Table, along: TableAxis) -> Option<TableAxis> {
    match along {
        TableAxis::Age | TableAxis::Latitude => season(table),
        _ => Some(TableAxis::Latitude),
    }
}

fn panel(table: &Table, variable: &TableVariable, along: TableAxis, latitude: usize) -> Panel {
    let of_lines = line_axis(table, along);
    let values = of_lines.map_or(&[][..], |axis| table.along(axis));
    let line = |number: usize| {
        let value = |place: usize| {
            table.value(variable, |axis| match axis {
                axis if axis == along => place,
                axis if Some(axis) == of_lines => number,
                TableAxis::Latitude => latitude,
                _ => 0,
            })
        };
        let known = of_lines.zip(values.get(number));
        Line {
            name: known.map_or_else(String::new, |(axis, value)| name(axis, *value)),
            values: (0..table.along(along).len()).map(value).collect(),
        }
    };
    let lines: Vec<_> = (0..values.len().max(1)).map(line).collect();
    let all = lines.iter().flat_map(|line| line.values.iter().copied());
    let label = if is_anomaly(variable) {
        ANOMALY_LABEL
    } else {
        LABEL
    };
    Panel {
        name: panel_name(table, variable, along, latitude, &lines),
        y: Axis::numbers(label, Axis::around(all)),
        lines,
    }
}

/// What the lines of a panel have in common.
fn panel_name(
    table: &Table,
    variable: &TableVariable,
    along: TableAxis,
    latitude: usize,
    lines: &[Line],
) -> String {
    let mut words = Vec::new();
    if along == TableAxis::Age {
        let at = table.along(TableAxis::Latitude).get(latitude);
        words.extend(at.map(|at| name(TableAxis::Latitude, *at)));
    }
    match variable.name {
        name if name.starts_with("summer") => words.push("summer half-year".to_owned()),
        name if name.starts_with("winter") => words.push("winter half-year".to_owned()),
        _ => {}
    }
    if let [line] = lines {
        words.push(line.name.clone());
    }
    if along != TableAxis::Age {
        let age = table.along(TableAxis::Age).first();
        words.extend(age.map(|age| name(TableAxis::Age, *age)));
    }
    words.retain(|word| !word.is_empty());
    words.join(", ")
}

fn map(
    table: &Table,
    variable: &TableVariable,
    [x_axis, y_axis]: [TableAxis; 2],
    drawing: Drawing,
) -> MapFigure {
    let (x, x_places) = axis(table, x_axis, drawing);
    let (y, y_places) = axis(table, y_axis, drawing);
    let at = |i: usize, j: usize| {
        table.value(variable, |axis| match axis {
            axis if axis == x_axis => i,
            axis if axis == y_axis => j,
            _ => 0,
        })
    };
    let columns = 0..x_places.len();
    let values = columns.flat_map(|i| (0..y_places.len()).map(move |j| (i, j)));
    let values = values.map(|(i, j)| at(i, j)).collect();
    let (label, colours) = if is_anomaly(variable) {
        (ANOMALY_LABEL, ColourMap::Diverging)
    } else {
        (LABEL, ColourMap::Rising)
    };
    MapFigure {
        about: about(table),
        width_mm: drawing.width_mm,
        x,
        y,
        x_places,
        y_places,
        values,
        label: label.to_owned(),
        colours,
    }
}
