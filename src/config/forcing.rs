//! Builds what a configuration gives against age besides the orbit, and checks that all of it reaches
//! the ages of the run.

use super::data;
use super::fault::{Fault, Faults};
use super::run::RunSpec;
use crate::forcing::carbon_dioxide::{CarbonDioxide, CarbonDioxideSpec};
use crate::forcing::land_ice::{IceEdge, LandIceSpec};
use crate::model::clock::is_age;
use crate::orbit::solution::Orbit;
use crate::tables::declared::WidestGap;
use crate::tables::{self, Columns, Layout};
use std::path::Path;

/// What is given against age; none where it is given at all ages or has a fault.
#[derive(Clone, Copy, Debug)]
pub(super) struct GivenAges<'a> {
    /// Orbit of the run and of a mask.
    pub(super) orbits: [Option<&'a Orbit>; 2],
    /// Carbon dioxide.
    pub(super) co2: Option<&'a CarbonDioxide>,
    /// Edge of the land ice.
    pub(super) ice_edge: Option<&'a IceEdge>,
}

impl RunSpec {
    pub(super) fn carbon_dioxide(
        &self,
        folder: &Path,
        faults: &mut Faults,
    ) -> Option<CarbonDioxide> {
        match &self.co2 {
            CarbonDioxideSpec::Constant { co2_ppm } => {
                let built = CarbonDioxide::constant(*co2_ppm);
                faults.take(built, Fault::CarbonDioxide)
            }
            CarbonDioxideSpec::Linear {
                from_kyr,
                from_ppm,
                to_kyr,
                to_ppm,
            } => {
                let built = CarbonDioxide::linear([*from_kyr, *from_ppm], [*to_kyr, *to_ppm]);
                faults.take_all(built, Fault::CarbonDioxide)
            }
            CarbonDioxideSpec::Table { path } => {
                let path = folder.join(path);
                let names = ["age_kyr", "co2_ppm"];
                let read = tables::read_columns(&path, Layout::Comma, &names);
                let Columns { values, lines } = faults.take(read, |error| Fault::Table {
                    table: "co2".to_owned(),
                    error,
                })?;
                let mut values = values.into_iter();
                let (age, ppm) = (values.next()?, values.next()?);
                faults.take_all(CarbonDioxide::table(age, ppm), |error| {
                    Fault::in_table(error, &path, &lines)
                })
            }
            CarbonDioxideSpec::DeclaredTable(table) => {
                let declaration = table.declaration();
                let series = data::series(&declaration, WidestGap::ANY, "co2", folder, faults)?;
                let built = CarbonDioxide::table(series.age_kyr, series.values);
                faults.take_all(built, |error| {
                    Fault::in_table(error, &series.path, &series.lines)
                })
            }
        }
    }

    /// The southern edge of the northern land ice; `None` without such ice, or when a fault was noted.
    pub(super) fn ice_edge(&self, folder: &Path, faults: &mut Faults) -> Option<IceEdge> {
        let built = match &self.land_ice {
            LandIceSpec::None {} => return None,
            LandIceSpec::Constant { edge_deg } => IceEdge::constant(*edge_deg),
            LandIceSpec::Table(table) => {
                let declaration = table.declaration();
                let series =
                    data::series(&declaration, WidestGap::ANY, "land_ice", folder, faults)?;
                IceEdge::table(&series, table.angle_unit)
            }
        };
        faults.take(built, Fault::LandIce)
    }

    /// Checks that all that is given reaches the ages of the run.
    pub(super) fn check_ages(&self, given: GivenAges<'_>, faults: &mut Faults) {
        for (key, age) in [
            ("time.start_kyr", self.time.start_kyr),
            ("time.end_kyr", self.time.end_kyr),
        ] {
            // What is no age at all was told already.
            if !is_age(age) {
                continue;
            }
            for orbit in given.orbits.into_iter().flatten() {
                let reached = orbit.check_range(age, age);
                faults.take(reached, |error| Fault::OrbitAge { key, error });
            }
            if let Some(co2) = given.co2 {
                faults.take(co2.at(age), |error| Fault::CarbonDioxideAge { key, error });
            }
            if let Some(edge) = given.ice_edge {
                faults.take(edge.at(age), |error| Fault::LandIceAge { key, error });
            }
        }
    }
}
