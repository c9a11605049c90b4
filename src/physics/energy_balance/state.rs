//! The prognostic fields with the levels that the third-order formula needs.
//!
//! Each field keeps its newest value and the last two increments d0 = `y_n` - `y_{n-1}`,
//! d1 = `y_{n-1}` - `y_{n-2}`: written in differences the coefficients of the formula sum to zero
//! exactly, which is what lets the heat budget close to round-off.

use super::coefficients::Coefficients;
use crate::numerics::lanes::{Lanes, Rows};
use crate::numerics::sum::compensated;
use crate::units::SEA_WATER_FREEZING_C;

/// One field in three time levels.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Levels {
    pub now: Rows,
    pub last: Rows,
    pub before: Rows,
}

impl Levels {
    fn new(values: &[f64]) -> Self {
        let still = Rows::new(values.len(), 0.0);
        Self {
            now: Rows::from_slice(values),
            last: still.clone(),
            before: still,
        }
    }

    /// Right-hand level of the formula, y + (7 d0 - 2 d1)/11.
    #[inline(always)]
    pub(super) fn base(&self, r: usize) -> Lanes {
        self.now.at(r) + (self.last.at(r) * 7.0 - self.before.at(r) * 2.0) * (1.0 / 11.0)
    }

    /// Extrapolation to the new time, y + 2 d0 - d1.
    #[inline(always)]
    pub(super) fn extrapolated(&self, r: usize) -> Lanes {
        self.now.at(r) + self.last.at(r) * 2.0 - self.before.at(r)
    }

    /// Takes the new value and shifts the levels.
    #[inline(always)]
    pub(super) fn push(&mut self, r: usize, new: Lanes) {
        self.before.set(r, self.last.at(r));
        self.last.set(r, new - self.now.at(r));
        self.now.set(r, new);
    }

    /// y + 5/6 d0 - 1/3 d1: the combination whose change equals the flux of the new time.
    fn conserved(&self, i: usize) -> f64 {
        self.now.flat()[i] + (5.0 / 6.0) * self.last.flat()[i] - self.before.flat()[i] / 3.0
    }

    fn rows(&self) -> [&Rows; 3] {
        [&self.now, &self.last, &self.before]
    }

    fn rows_mut(&mut self) -> [&mut Rows; 3] {
        [&mut self.now, &mut self.last, &mut self.before]
    }
}

/// Prognostic state: temperatures in degC, enthalpy in J m-2.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct State {
    /// Air temperature brought to sea level.
    pub air: Levels,
    /// Land surface temperature at its own elevation.
    pub land: Levels,
    /// Enthalpy of mixed layer and sea ice per area of ocean: heat above freezing when
    /// positive, minus the latent heat of the ice when negative.
    pub enthalpy: Levels,
    /// Temperature of the seasonal thermocline.
    pub sub: Levels,
    /// Ice surface temperature now and one step before.
    pub ice_surface: Rows,
    pub ice_surface_before: Rows,
}

impl State {
    /// A smooth start: 27 degC at the equator, falling with the square of sin(latitude).
    pub(super) fn new(c: &Coefficients, mean_sine: &[f64]) -> Self {
        let air: Vec<f64> = mean_sine.iter().map(|x| 25.0 - 40.0 * x * x).collect();
        let land: Vec<f64> = air
            .iter()
            .zip(c.elevation_k.flat())
            .map(|(t, lift)| t + 2.0 - lift)
            .collect();
        let water: Vec<f64> = air
            .iter()
            .map(|t| (t + 2.0).max(SEA_WATER_FREEZING_C))
            .collect();
        let enthalpy: Vec<f64> = water
            .iter()
            .zip(c.water_capacity.flat())
            .map(|(t, capacity)| (t - SEA_WATER_FREEZING_C) * capacity)
            .collect();
        let freezing = Rows::new(air.len(), SEA_WATER_FREEZING_C);
        Self {
            air: Levels::new(&air),
            land: Levels::new(&land),
            enthalpy: Levels::new(&enthalpy),
            sub: Levels::new(&water),
            ice_surface: freezing.clone(),
            ice_surface_before: freezing,
        }
    }

    /// Heat stored on the planet's surface and in the air, J, in the combination that the
    /// formula conserves.
    pub(super) fn heat_j(&self, c: &Coefficients) -> f64 {
        let sub_on = if c.sub_exchange > 0.0 {
            c.sub_capacity
        } else {
            0.0
        };
        compensated((0..c.bands).flat_map(|i| {
            let area = c.area_m2.flat()[i];
            let land = area * c.land.flat()[i] * c.land_capacity;
            let ocean = c.ocean_area_m2.flat()[i];
            [
                area * c.air_capacity * self.air.conserved(i),
                land * self.land.conserved(i),
                ocean * self.enthalpy.conserved(i),
                ocean * sub_on * self.sub.conserved(i),
            ]
        }))
    }

    fn all(&self) -> impl Iterator<Item = &Rows> {
        [&self.air, &self.land, &self.enthalpy, &self.sub]
            .into_iter()
            .flat_map(Levels::rows)
            .chain([&self.ice_surface, &self.ice_surface_before])
    }

    /// Number of values in a restart state of `bands` bands.
    pub(super) const fn len(bands: usize) -> usize {
        14 * bands
    }

    pub(super) fn save(&self, into: &mut Vec<f64>) {
        self.all()
            .for_each(|rows| into.extend_from_slice(rows.flat()));
    }

    /// Takes the first [`State::len`] values of `from`.
    pub(super) fn restore(&mut self, from: &[f64]) {
        let n = self.ice_surface.flat().len();
        let Self {
            air,
            land,
            enthalpy,
            sub,
            ice_surface,
            ice_surface_before,
        } = self;
        let levels = [air, land, enthalpy, sub]
            .into_iter()
            .flat_map(Levels::rows_mut);
        for (rows, values) in levels
            .chain([ice_surface, ice_surface_before])
            .zip(from.chunks(n))
        {
            rows.flat_mut().copy_from_slice(values);
        }
    }

    /// First field and band that is not finite.
    pub(super) fn broken(&self) -> Option<(&'static str, usize)> {
        let fields = [
            ("air temperature", &self.air.now),
            ("land temperature", &self.land.now),
            ("ocean enthalpy", &self.enthalpy.now),
            ("seasonal thermocline temperature", &self.sub.now),
        ];
        fields.into_iter().find_map(|(name, rows)| {
            rows.flat()
                .iter()
                .position(|v| !v.is_finite())
                .map(|band| (name, band))
        })
    }
}
