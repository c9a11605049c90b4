//! Levels of the ocean column, thin at the surface and thick below.
//!
//! Level edges follow z(s) = H (e^{a s} - 1) / (e^a - 1) with s = k/K: the thickness grows by a
//! constant factor e^{a/K} from one level to the next. `a` is found by bisection so that the
//! first level has the thickness asked for.

/// Levels from the surface (index 0) down.
#[expect(clippy::struct_field_names, reason = "the unit belongs to every name")]
#[derive(Clone, Debug, PartialEq)]
pub struct ColumnLevels {
    edge_m: Vec<f64>,
    middle_m: Vec<f64>,
    thickness_m: Vec<f64>,
}

/// Levels that cannot be built.
#[derive(Clone, Copy, Debug, PartialEq, thiserror::Error)]
#[error(
    "{levels} column levels to {depth_m} m with a first level of {first_m} m cannot be built: take 5 \
     to 400 levels, a positive depth and a first level thinner than the depth over the number of levels"
)]
pub struct LevelsError {
    /// Number of levels asked for.
    pub levels: usize,
    /// Depth of the column, m.
    pub depth_m: f64,
    /// Thickness of the first level, m.
    pub first_m: f64,
}

impl ColumnLevels {
    /// Builds `levels` levels down to `depth_m`, the first one `first_m` thick.
    ///
    /// # Errors
    /// When no such levels exist.
    pub fn new(levels: usize, depth_m: f64, first_m: f64) -> Result<Self, LevelsError> {
        let usable = depth_m.is_finite() && first_m > 0.0 && first_m * (levels as f64) < depth_m;
        if !(5..=400).contains(&levels) || !usable {
            return Err(LevelsError {
                levels,
                depth_m,
                first_m,
            });
        }
        let depth =
            |a: f64, k: usize| depth_m * (a * k as f64 / levels as f64).exp_m1() / a.exp_m1();
        let (mut low, mut high) = (1e-9, 50.0);
        for _ in 0..200 {
            let a = 0.5 * (low + high);
            if depth(a, 1) > first_m {
                low = a;
            } else {
                high = a;
            }
        }
        let mut edge_m: Vec<f64> = (0..=levels).map(|k| depth(low, k)).collect();
        edge_m[levels] = depth_m;
        let middle_m = edge_m.windows(2).map(|e| 0.5 * (e[0] + e[1])).collect();
        let thickness_m = edge_m.windows(2).map(|e| e[1] - e[0]).collect();
        Ok(Self {
            edge_m,
            middle_m,
            thickness_m,
        })
    }

    /// Number of levels.
    #[expect(
        clippy::len_without_is_empty,
        reason = "never empty: at least five levels"
    )]
    pub fn len(&self) -> usize {
        self.thickness_m.len()
    }

    /// Depth of the level edges, m, `len() + 1` values from 0 down.
    pub fn edge_m(&self) -> &[f64] {
        &self.edge_m
    }

    /// Depth of the middle of each level, m.
    pub fn middle_m(&self) -> &[f64] {
        &self.middle_m
    }

    /// Thickness of each level, m.
    pub fn thickness_m(&self) -> &[f64] {
        &self.thickness_m
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn analytic_levels_reach_the_bottom_and_grow_by_a_constant_factor() {
        let levels = ColumnLevels::new(40, 4000.0, 15.0).unwrap();
        let d = levels.thickness_m();
        assert!((d[0] - 15.0).abs() < 1e-9 && (d.iter().sum::<f64>() - 4000.0).abs() < 1e-9);
        let factor = d[1] / d[0];
        assert!(d.windows(2).all(|w| (w[1] / w[0] - factor).abs() < 1e-9));
    }

    #[test]
    fn impossible_levels_are_refused() {
        assert!(ColumnLevels::new(40, 4000.0, 200.0).is_err());
        assert!(ColumnLevels::new(2, 4000.0, 10.0).is_err());
        assert!(ColumnLevels::new(40, f64::NAN, 10.0).is_err());
    }
}
