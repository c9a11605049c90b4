//! Where sinking water comes to rest: at its neutral level.
//!
//! A parcel of temperature T enters at the first level not warmer than itself. It is split between that
//! level and the one above in proportion to the temperature differences, so that the depth is
//! continuous in T: share below = (`T_above` - T)/(`T_above` - `T_below`). Warmer than the top it
//! stays at the top, colder than everything it goes to the bottom. Volume (m3) and volume times
//! temperature (m3 degC) are split alike: heat is exact.
//! Source: filling box of Baines & Turner 1969 (J. Fluid Mech. 37:51; memory), without entrainment.

/// Finds neutral levels in one temperature profile.
#[derive(Clone, Debug)]
pub struct NeutralLevels {
    coldest_so_far: Vec<f64>,
}

/// Level of a parcel and the share that goes to the level above it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Place {
    /// The lower of the two levels.
    pub level: usize,
    /// Share that enters the level above, 0-1; zero for the top.
    pub share_above: f64,
}

impl NeutralLevels {
    /// For a column of `levels` levels.
    pub fn new(levels: usize) -> Self {
        Self {
            coldest_so_far: vec![0.0; levels],
        }
    }

    /// Takes a new profile, top to bottom.
    pub fn set(&mut self, temperature_c: &[f64]) {
        let mut coldest = f64::INFINITY;
        for (slot, t) in self.coldest_so_far.iter_mut().zip(temperature_c) {
            coldest = coldest.min(*t);
            *slot = coldest;
        }
    }

    /// Where a parcel of `parcel_c` enters the profile `temperature_c` given to [`Self::set`].
    pub fn place(&self, temperature_c: &[f64], parcel_c: f64) -> Place {
        let n = self.coldest_so_far.len();
        let level = self.coldest_so_far.partition_point(|t| *t > parcel_c);
        if level == 0 {
            return Place {
                level: 0,
                share_above: 0.0,
            };
        }
        if level == n {
            return Place {
                level: n - 1,
                share_above: 0.0,
            };
        }
        let (above, below) = (temperature_c[level - 1], temperature_c[level]);
        Place {
            level,
            share_above: ((parcel_c - below) / (above - below)).clamp(0.0, 1.0),
        }
    }
}

/// Water that sinks together.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Parcel {
    /// Volume, m3, or volume per time, m3 s-1.
    pub volume: f64,
    /// Volume times temperature, m3 degC, or per time.
    pub heat: f64,
    /// Temperature, degC; infinite (to the top) for heat without volume.
    pub temperature_c: f64,
}

/// Collects the parcels that hold water or heat, multiplied by `rate`.
pub fn gather(parcels: &mut Vec<Parcel>, volumes: &[f64], heats: &[f64], rate: f64) {
    parcels.clear();
    let pairs = volumes.iter().zip(heats);
    let present = pairs.filter(|(volume, heat)| **volume != 0.0 || **heat != 0.0);
    parcels.extend(present.map(|(volume, heat)| Parcel {
        volume: rate * volume,
        heat: rate * heat,
        temperature_c: if *volume > 0.0 {
            heat / volume
        } else {
            f64::INFINITY
        },
    }));
}

/// Water and heat that enter the levels when `parcels` sink into the profile `temperature_c`.
pub fn insert(
    levels: &mut NeutralLevels,
    temperature_c: &[f64],
    parcels: &[Parcel],
    [inflow, inflow_heat]: [&mut [f64]; 2],
) {
    levels.set(temperature_c);
    inflow.fill(0.0);
    inflow_heat.fill(0.0);
    for parcel in parcels {
        let place = levels.place(temperature_c, parcel.temperature_c);
        let k = place.level;
        if place.share_above > 0.0 {
            let (volume, heat) = (
                parcel.volume * place.share_above,
                parcel.heat * place.share_above,
            );
            inflow[k - 1] += volume;
            inflow_heat[k - 1] += heat;
            inflow[k] += parcel.volume - volume;
            inflow_heat[k] += parcel.heat - heat;
        } else {
            inflow[k] += parcel.volume;
            inflow_heat[k] += parcel.heat;
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn analytic_neutral_level_is_continuous_in_the_temperature_of_the_parcel() {
        let profile = [25.0, 20.0, 10.0, 12.0, 4.0, 2.0];
        let mut levels = NeutralLevels::new(6);
        levels.set(&profile);
        let depth = |t: f64| {
            let place = levels.place(&profile, t);
            place.level as f64 - place.share_above
        };
        let mut last = depth(30.0);
        assert!(last.abs() < 1e-15 && (depth(-3.0) - 5.0).abs() < 1e-15);
        assert!((depth(15.0) - 1.5).abs() < 1e-15 && (depth(4.0) - 4.0).abs() < 1e-15);
        // The inversion between levels 2 and 3 makes one jump; everywhere else it is continuous.
        let mut jumps = 0;
        for i in 1..=33_000 {
            let now = depth(30.0 - f64::from(i) * 1e-3);
            assert!(now >= last);
            jumps += u32::from(now - last > 1e-3);
            last = now;
        }
        assert_eq!(jumps, 1);
    }

    #[test]
    fn conserves_volume_and_heat_of_parcels() {
        let profile = [25.0, 20.0, 10.0, 4.0, 2.0];
        let volumes: Vec<f64> = (0..400).map(|i| f64::from(i % 7)).collect();
        let pairs = volumes.iter().zip(0..400);
        let heats: Vec<f64> = pairs
            .map(|(v, i)| v * (-3.0 + 0.09 * f64::from(i)))
            .collect();
        let (mut inflow, mut heat) = (vec![0.0; 5], vec![0.0; 5]);
        let mut parcels = Vec::new();
        gather(&mut parcels, &volumes, &heats, 1.0);
        insert(
            &mut NeutralLevels::new(5),
            &profile,
            &parcels,
            [&mut inflow, &mut heat],
        );
        let total: (f64, f64) = (volumes.iter().sum(), heats.iter().sum());
        assert!((inflow.iter().sum::<f64>() / total.0 - 1.0).abs() < 1e-14);
        assert!((heat.iter().sum::<f64>() / total.1 - 1.0).abs() < 1e-14);
    }
}
