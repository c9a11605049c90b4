//! The prognostic fields with the levels that the third-order formula needs.
//!
//! Each field keeps its newest value and the last two increments d0 = `y_n` - `y_{n-1}`,
//! d1 = `y_{n-1}` - `y_{n-2}`, so that the new increment is
//!   d = (7 d0 - 2 d1)/11 + (gamma/C) F,  gamma = 6 h/11,
//! in small numbers only; what adding d to y loses to rounding is carried to the next step. In
//! these terms the quantity y + 5/6 d0 - 1/3 d1 changes by (h/C) F, and the heat budget closes
//! far below the rounding of y itself.

use super::coefficients::Coefficients;
use super::params::Start;
use super::snow::{SNOW_LEVELS, SnowLevel};
use crate::numerics::lanes::{Lanes, WIDTH};
use crate::numerics::sum::CompensatedSum;
use crate::units::{SEA_ICE_LATENT_HEAT_J_M3, SEA_WATER_FREEZING_C};

/// One field of four bands in its time levels.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Level {
    pub now: Lanes,
    /// What `now` lacks of the exact sum of all increments.
    lost: Lanes,
    last: Lanes,
    before: Lanes,
}

impl Level {
    /// A value at rest.
    pub(super) fn new(now: Lanes) -> Self {
        let still = Lanes::splat(0.0);
        Self {
            now,
            lost: still,
            last: still,
            before: still,
        }
    }

    /// Part of the new increment that follows from the last two, (7 d0 - 2 d1)/11.
    #[inline(always)]
    pub(super) fn momentum(&self) -> Lanes {
        (self.last * 7.0 - self.before * 2.0) * (1.0 / 11.0)
    }

    /// Extrapolation to the new time, y + 2 d0 - d1.
    #[inline(always)]
    pub(super) fn extrapolated(&self) -> Lanes {
        self.now + (self.last * 2.0 - self.before)
    }

    /// Share of the end of a step in the temperature of its middle.
    pub(super) const MIDDLE_SHARE: f64 = 5.0 / 16.0;

    /// Way back from `new`, the end of the step, to its middle on the cubic through the last four
    /// ends of steps: (5 y_{n+1} + 15 y_n - 5 y_{n-1} + y_{n-2})/16 - y_{n+1}.
    #[inline(always)]
    pub(super) fn back_to_middle(&self, new: Lanes) -> Lanes {
        let past = self.last * 4.0 - self.before;
        (self.now - new) * (1.0 - Self::MIDDLE_SHARE) + past * (1.0 / 16.0)
    }

    /// Extrapolation minus the level of the formula, (15 d0 - 9 d1)/11.
    #[inline(always)]
    pub(super) fn lead(&self) -> Lanes {
        (self.last * 15.0 - self.before * 9.0) * (1.0 / 11.0)
    }

    /// Adds the new increment, shifts the levels, and returns the new value.
    #[inline(always)]
    pub(super) fn push(&mut self, increment: Lanes) -> Lanes {
        let step = increment + self.lost;
        let new = self.now + step;
        self.lost = step - (new - self.now);
        self.before = self.last;
        self.last = increment;
        self.now = new;
        new
    }

    /// y + 5/6 d0 - 1/3 d1 of lane `k`, in parts: its change equals the flux of the new time.
    fn conserved(&self, k: usize) -> [f64; 4] {
        [
            self.now.0[k],
            self.lost.0[k],
            (5.0 / 6.0) * self.last.0[k],
            self.before.0[k] / -3.0,
        ]
    }

    fn lanes(&self) -> [Lanes; LEVELS] {
        [self.now, self.lost, self.last, self.before]
    }

    fn lanes_mut(&mut self) -> [&mut Lanes; LEVELS] {
        [
            &mut self.now,
            &mut self.lost,
            &mut self.last,
            &mut self.before,
        ]
    }
}

/// Numbers that one field keeps per band.
const LEVELS: usize = 4;
/// Lanes of one row in a restart state.
const ROW: usize = 4 * LEVELS + 2 + SNOW_LEVELS;

/// Prognostic state of four bands: temperatures in degC, enthalpy in J m-2.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct StateRow {
    /// Air temperature brought to sea level.
    pub air: Level,
    /// Land surface temperature at its own elevation.
    pub land: Level,
    /// Enthalpy of mixed layer and sea ice per area of ocean: heat above freezing when
    /// positive, minus the latent heat of the ice when negative.
    pub enthalpy: Level,
    /// Temperature of the seasonal thermocline.
    pub sub: Level,
    /// Ice surface temperature now and one step before.
    pub ice_surface: Lanes,
    pub ice_surface_before: Lanes,
    /// Snow cover of the land in the last steps.
    pub snow: SnowLevel,
}

impl StateRow {
    fn lanes(&self) -> impl Iterator<Item = Lanes> {
        let fields = [&self.air, &self.land, &self.enthalpy, &self.sub];
        fields
            .into_iter()
            .flat_map(Level::lanes)
            .chain([self.ice_surface, self.ice_surface_before])
            .chain(self.snow.lanes())
    }

    fn lanes_mut(&mut self) -> impl Iterator<Item = &mut Lanes> {
        let fields = [
            &mut self.air,
            &mut self.land,
            &mut self.enthalpy,
            &mut self.sub,
        ];
        fields
            .into_iter()
            .flat_map(Level::lanes_mut)
            .chain([&mut self.ice_surface, &mut self.ice_surface_before])
            .chain(self.snow.lanes_mut())
    }
}

/// Prognostic state, south to north.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct State {
    pub rows: Vec<StateRow>,
}

impl State {
    /// The start state; see [`Start`].
    pub(super) fn new(c: &Coefficients, mean_sine: &[f64], start: Start) -> Self {
        let ice = SEA_ICE_LATENT_HEAT_J_M3 * start.sea_ice_m;
        let rows = c
            .rows
            .iter()
            .zip(mean_sine.chunks_exact(WIDTH))
            .map(|(c, x)| {
                let x = Lanes::load(x, 0);
                let air = Lanes::splat(start.equator_c) - x * x * start.fall_k;
                let freezing = Lanes::splat(SEA_WATER_FREEZING_C);
                let water = (air + 2.0).max(freezing);
                StateRow {
                    air: Level::new(air),
                    land: Level::new(air + 2.0 - c.elevation_k),
                    enthalpy: Level::new(Lanes(std::array::from_fn(|k| {
                        if air.0[k] < freezing.0[k] {
                            -ice
                        } else {
                            ((water - freezing) / c.per_water_capacity).0[k]
                        }
                    }))),
                    sub: Level::new(water),
                    ice_surface: freezing,
                    ice_surface_before: freezing,
                    snow: SnowLevel::none(),
                }
            });
        Self {
            rows: rows.collect(),
        }
    }

    /// Heat stored on the planet's surface and in the air, J, in the combination that the
    /// formula conserves; summed exactly.
    pub(super) fn heat_j(&self, c: &Coefficients) -> CompensatedSum {
        let sub_on = if c.sub_exchange > 0.0 {
            c.sub_capacity
        } else {
            0.0
        };
        let mut heat = CompensatedSum::default();
        for (row, c_row) in self.rows.iter().zip(&c.rows) {
            let ocean = c_row.ocean_area_m2;
            for (capacity, level) in [
                (c_row.area_m2 * c.air_capacity, &row.air),
                (c_row.area_m2 * c_row.land * c.land_capacity, &row.land),
                (ocean, &row.enthalpy),
                (ocean * sub_on, &row.sub),
            ] {
                for k in 0..WIDTH {
                    for part in level.conserved(k) {
                        heat.add_product(capacity.0[k], part);
                    }
                }
            }
        }
        heat
    }

    /// One field of all bands.
    pub(super) fn field(&self, of: impl Fn(&StateRow) -> &Level) -> Vec<f64> {
        self.rows.iter().flat_map(|row| of(row).now.0).collect()
    }

    /// Replaces the air temperature by a state at rest.
    pub(super) fn rest_air(&mut self, air_c: &[f64]) {
        for (row, air) in self.rows.iter_mut().zip(air_c.chunks_exact(WIDTH)) {
            row.air = Level::new(Lanes::load(air, 0));
        }
    }

    /// Number of values in a restart state of `bands` bands.
    pub(super) const fn len(bands: usize) -> usize {
        ROW * bands
    }

    pub(super) fn save(&self, into: &mut Vec<f64>) {
        into.extend(
            self.rows
                .iter()
                .flat_map(StateRow::lanes)
                .flat_map(|lanes| lanes.0),
        );
    }

    /// What the numbers of a saved state count, K: the newest temperatures, and the enthalpy as a
    /// temperature of the mixed layer.
    pub(super) fn weights(c: &Coefficients) -> Vec<f64> {
        let none = Level::new(Lanes::splat(0.0));
        let rows = c.rows.iter().map(|row| StateRow {
            air: Level::new(Lanes::splat(1.0)),
            land: Level::new(row.land),
            enthalpy: Level::new(row.per_water_capacity * row.has_ocean),
            sub: Level::new(row.has_ocean),
            ice_surface: none.now,
            ice_surface_before: none.now,
            snow: SnowLevel::none(),
        });
        let mut values = Vec::new();
        Self {
            rows: rows.collect(),
        }
        .save(&mut values);
        values
    }

    /// Takes the first [`State::len`] values of `from`.
    pub(super) fn restore(&mut self, from: &[f64]) {
        let lanes = self.rows.iter_mut().flat_map(StateRow::lanes_mut);
        for (lanes, values) in lanes.zip(from.chunks_exact(WIDTH)) {
            *lanes = Lanes::load(values, 0);
        }
    }

    /// Fields and bands that are not finite, from the south.
    pub(super) fn broken(&self) -> impl Iterator<Item = (&'static str, usize)> {
        self.rows.iter().enumerate().flat_map(|(r, row)| {
            let fields = [
                ("air temperature", row.air.now),
                ("land temperature", row.land.now),
                ("ocean enthalpy", row.enthalpy.now),
                ("seasonal thermocline temperature", row.sub.now),
            ];
            fields.into_iter().flat_map(move |(name, lanes)| {
                let broken = (0..WIDTH).filter(move |lane| !lanes.0[*lane].is_finite());
                broken.map(move |lane| (name, WIDTH * r + lane))
            })
        })
    }
}
