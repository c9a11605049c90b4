//! Lines of equal value through a grid of values.
//!
//! What: straight pieces, one or two in each cell of the grid.
//! Numerics: linear interpolation along the edges of a cell; where two pieces are possible in two ways
//! (a saddle), the mean of the four corners decides. Cells with a missing value have none.
//! Source: marching squares (Lorensen & Cline 1987, Comput. Graph. 21:163, in two dimensions; memory).

/// A piece of a line: both ends, in numbers of columns and rows from the first.
pub(super) type Piece = [[f64; 2]; 2];

/// The pieces at a level in values of `columns` columns with `rows` values each.
pub(super) fn pieces(values: &[f64], columns: usize, rows: usize, level: f64) -> Vec<Piece> {
    let mut found = Vec::new();
    for i in 0..columns.saturating_sub(1) {
        for j in 0..rows.saturating_sub(1) {
            let at = |di: usize, dj: usize| values[(i + di) * rows + j + dj];
            // Counter-clockwise from the first corner.
            let corners = [at(0, 0), at(1, 0), at(1, 1), at(0, 1)];
            for piece in in_cell(corners, level) {
                found.push(piece.map(|[x, y]| [i as f64 + x, j as f64 + y]));
            }
        }
    }
    found
}

/// The pieces in a cell of size 1.
fn in_cell(corners: [f64; 4], level: f64) -> Vec<Piece> {
    const PLACES: [[f64; 2]; 4] = [[0.0, 0.0], [1.0, 0.0], [1.0, 1.0], [0.0, 1.0]];
    if corners.iter().any(|c| c.is_nan()) {
        return Vec::new();
    }
    let crossing = |k: usize| {
        let (a, b) = (corners[k], corners[(k + 1) % 4]);
        let (from, to) = (PLACES[k], PLACES[(k + 1) % 4]);
        let part = (level - a) / (b - a);
        let crossed = (a > level) != (b > level);
        let place = |n: usize| from[n] + part * (to[n] - from[n]);
        crossed.then(|| [place(0), place(1)])
    };
    let crossings: Vec<[f64; 2]> = (0..4).filter_map(crossing).collect();
    match crossings[..] {
        [a, b] => vec![[a, b]],
        [a, b, c, d] => {
            let middle = corners.iter().sum::<f64>() / 4.0;
            if (middle > level) == (corners[0] > level) {
                vec![[a, b], [c, d]]
            } else {
                vec![[d, a], [b, c]]
            }
        }
        _ => Vec::new(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn analytic_a_slope_has_a_straight_line() {
        // Value = column + row on 3 by 3.
        let values = [0.0, 1.0, 2.0, 1.0, 2.0, 3.0, 2.0, 3.0, 4.0];
        let found = pieces(&values, 3, 3, 1.5);
        assert_eq!(found.len(), 3);
        for [x, y] in found.into_iter().flatten() {
            assert!((x + y - 1.5).abs() < 1e-12, "{x} {y}");
        }
    }

    #[test]
    fn analytic_saddles_and_gaps() {
        let saddle = in_cell([2.0, 0.0, 2.0, 0.0], 0.9);
        assert_eq!(saddle.len(), 2);
        // The middle is above: the lines cut off the low corners.
        assert!(
            saddle
                .iter()
                .all(|p| p.iter().any(|[x, _]| *x > 0.99) || p.iter().any(|[_, y]| *y > 0.99))
        );
        assert!(in_cell([f64::NAN, 0.0, 2.0, 0.0], 0.9).is_empty());
    }
}
