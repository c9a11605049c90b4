//! Coordinates of the axes besides age, with their CF attributes.
//!
//! Format facts (CF 1.11): months are numbered 1 to 12; since bounds must have the units of
//! their coordinate, the edges of the months, in fractions of the year, bound an auxiliary
//! coordinate `month_middle` and not the month number. The hemispheres are named by a string
//! auxiliary coordinate (6.1). Only `lat` and `depth` declare an axis.

use super::{AxisValues, BOUNDS, LETTERS, MonthCells, Schema};
use crate::series::Axis;

/// Values of a coordinate.
#[derive(Clone, Debug, PartialEq)]
pub(crate) enum Content {
    /// Numbers.
    Numbers(Vec<f64>),
    /// Whole numbers.
    Integers(Vec<i32>),
    /// Letters of names of equal length.
    Letters(Vec<u8>),
}

/// A coordinate, its bounds, or a plain variable of an axis.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Coordinate {
    /// Name in the file.
    pub(crate) name: &'static str,
    /// Dimensions, slowest first.
    pub(crate) dimensions: &'static [&'static str],
    /// Values.
    pub(crate) content: Content,
    /// Attributes; bounds have none.
    pub(crate) attributes: Vec<(&'static str, String)>,
}

impl Schema {
    /// Dimensions besides age: name, length, and whether a variable of that name follows.
    pub(crate) fn dimensions(&self) -> Vec<(&'static str, usize, bool)> {
        let mut list = Vec::new();
        for axis in [Axis::Latitude, Axis::LatitudeEdge, Axis::Month, Axis::Depth] {
            list.push((super::dimension(axis), self.length(axis), true));
        }
        list.push((
            super::dimension(Axis::CoastalLatitude),
            self.length(Axis::CoastalLatitude),
            true,
        ));
        list.retain(|&(_, length, _)| length > 0);
        if self.uses_hemispheres() {
            list.push((super::dimension(Axis::Hemisphere), 2, true));
            list.push((LETTERS, HEMISPHERES.len() / 2, false));
        }
        list.push((BOUNDS, 2, false));
        list
    }

    /// All coordinates, bounds and plain variables of the axes besides age.
    pub(crate) fn coordinates(&self) -> Vec<Coordinate> {
        let mut list = Vec::new();
        if self.length(Axis::Latitude) > 0 {
            latitude(&self.axes, &mut list);
        }
        if self.length(Axis::Month) > 0 {
            month(&self.axes, &mut list);
        }
        if self.length(Axis::Depth) > 0 {
            depth(&self.axes, &mut list);
        }
        if self.length(Axis::CoastalLatitude) > 0 {
            let values = Content::Numbers(self.axes.coastal_latitudes_deg.clone());
            let attributes = latitude_attributes("latitude of coastal upwelling");
            list.push(coordinate(
                "coastal_lat",
                &["coastal_lat"],
                values,
                attributes,
            ));
        }
        if self.uses_hemispheres() {
            let attributes = text(&[
                ("long_name", "hemisphere: -1 southern, 1 northern"),
                ("units", "1"),
            ]);
            let sides = Content::Integers(vec![-1, 1]);
            list.push(coordinate("hemisphere", &["hemisphere"], sides, attributes));
            let values = Content::Letters(HEMISPHERES.to_vec());
            let attributes = text(&[("long_name", "hemisphere")]);
            list.push(coordinate(
                "hemisphere_name",
                &["hemisphere", LETTERS],
                values,
                attributes,
            ));
        }
        list
    }

    fn uses_hemispheres(&self) -> bool {
        self.variables
            .iter()
            .any(|v| v.axes.contains(&Axis::Hemisphere))
    }
}

/// Names of the hemispheres, of equal length, in the order of the axis.
const HEMISPHERES: &[u8; 16] = b"southernnorthern";

fn coordinate(
    name: &'static str,
    dimensions: &'static [&'static str],
    content: Content,
    attributes: Vec<(&'static str, String)>,
) -> Coordinate {
    Coordinate {
        name,
        dimensions,
        content,
        attributes,
    }
}

fn text(pairs: &[(&'static str, &str)]) -> Vec<(&'static str, String)> {
    pairs
        .iter()
        .map(|&(name, value)| (name, value.to_owned()))
        .collect()
}

fn latitude_attributes(long_name: &str) -> Vec<(&'static str, String)> {
    text(&[
        ("long_name", long_name),
        ("standard_name", "latitude"),
        ("units", "degrees_north"),
    ])
}

fn middles(edges: &[f64]) -> Content {
    Content::Numbers(edges.windows(2).map(|e| 0.5 * (e[0] + e[1])).collect())
}

fn cells(edges: &[f64]) -> Content {
    Content::Numbers(edges.windows(2).flatten().copied().collect())
}

fn latitude(axes: &AxisValues, list: &mut Vec<Coordinate>) {
    let edges = &axes.latitude_edges_deg;
    let mut attributes = latitude_attributes("latitude");
    attributes.extend(text(&[("axis", "Y"), ("bounds", "lat_bnds")]));
    list.push(coordinate("lat", &["lat"], middles(edges), attributes));
    list.push(coordinate(
        "lat_bnds",
        &["lat", BOUNDS],
        cells(edges),
        Vec::new(),
    ));
    let attributes = latitude_attributes("latitude of band edges");
    let values = Content::Numbers(edges.clone());
    list.push(coordinate("lat_edge", &["lat_edge"], values, attributes));
    for field in &axes.by_latitude {
        let mut attributes = text(&[("long_name", field.long_name), ("units", field.units)]);
        if let Some(name) = field.standard_name {
            attributes.insert(1, ("standard_name", name.to_owned()));
        }
        list.push(coordinate(
            field.name,
            &["lat"],
            Content::Numbers(field.values.clone()),
            attributes,
        ));
    }
}

fn month(axes: &AxisValues, list: &mut Vec<Coordinate>) {
    let attributes = text(&[("long_name", "month of the year"), ("units", "1")]);
    let numbers = Content::Integers((1..=12).collect());
    list.push(coordinate("month", &["month"], numbers, attributes));
    let MonthCells::Fixed {
        edges_year: edges,
        lengths_day: lengths,
    } = &axes.months
    else {
        return;
    };
    let attributes = text(&[
        ("long_name", "middle of the month, fraction of the year"),
        ("units", "1"),
        ("bounds", "month_bnds"),
    ]);
    list.push(coordinate(
        "month_middle",
        &["month"],
        middles(edges),
        attributes,
    ));
    list.push(coordinate(
        "month_bnds",
        &["month", BOUNDS],
        cells(edges),
        Vec::new(),
    ));
    let attributes = text(&[("long_name", "length of the month"), ("units", "day")]);
    let lengths = Content::Numbers(lengths.clone());
    list.push(coordinate("month_length", &["month"], lengths, attributes));
}

fn depth(axes: &AxisValues, list: &mut Vec<Coordinate>) {
    let edges = &axes.depth_edges_m;
    let attributes = text(&[
        ("long_name", "depth"),
        ("standard_name", "depth"),
        ("units", "m"),
        ("positive", "down"),
        ("axis", "Z"),
        ("bounds", "depth_bnds"),
    ]);
    list.push(coordinate("depth", &["depth"], middles(edges), attributes));
    list.push(coordinate(
        "depth_bnds",
        &["depth", BOUNDS],
        cells(edges),
        Vec::new(),
    ));
}

/// Attributes of the age of the records.
pub(crate) fn age_attributes() -> Vec<(&'static str, String)> {
    text(&[
        ("long_name", "age before 1950 CE"),
        ("units", "kyr"),
        ("bounds", super::AGE_BOUNDS),
        (
            "comment",
            "positive into the past; 0 is 1950 CE; 1 kyr is 1000 years",
        ),
    ])
}
