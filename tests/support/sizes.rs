//! Sizes of variables.

use orbicline::config::run::Experiment;
use orbicline::series::{Axis, Variable};

/// Number of values of a variable: the product of its axes.
pub(crate) fn size(variable: &Variable, experiment: &Experiment) -> usize {
    let physics = &experiment.run.physics;
    let length = |axis: &Axis| match axis {
        Axis::Latitude => experiment.run.grid.bands,
        Axis::LatitudeEdge => experiment.run.grid.bands + 1,
        Axis::Month => 12,
        Axis::Depth => physics.ocean_column.as_ref().map_or(0, |p| p.levels.count),
        Axis::Hemisphere => 2,
        Axis::CoastalLatitude => {
            let pacific = physics.equatorial_pacific.as_ref();
            pacific.map_or(0, |p| p.coast.coastal_latitudes_deg.len())
        }
    };
    variable.axes.iter().map(length).product()
}
