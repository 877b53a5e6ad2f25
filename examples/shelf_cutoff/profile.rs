//! The sea bed along a track: depth over range as a smooth curve that never overshoots.

use crate::table::{Fault, Table};
use std::path::Path;

/// Depths that never increase with range, joined by monotone cubics.
pub struct Profile {
    range_m: Vec<f64>,
    depth_m: Vec<f64>,
    /// d depth / d range at the points.
    gradient: Vec<f64>,
}

impl Profile {
    /// Reads a file with the columns `range_m` and `depth_m`.
    pub fn read(path: &Path) -> Result<Profile, Fault> {
        let table = Table::read(path)?;
        let range_m = table.numbers("range_m")?;
        let depth_m = table.map("depth_m", "a depth above zero, in metres", |field| {
            field.parse().ok().filter(|x: &f64| x.is_finite() && *x > 0.0)
        })?;
        if range_m.len() < 2 {
            return Err(table.fault_at_row(0, "one point only: give at least two".into()));
        }
        for row in 1..range_m.len() {
            let (before, here) = (range_m[row - 1], range_m[row]);
            if here <= before {
                return Err(table.fault_at_row(
                    row,
                    format!("range {here} m does not follow {before} m: sort the rows by range"),
                ));
            }
            let (before, here) = (depth_m[row - 1], depth_m[row]);
            if here > before {
                return Err(table.fault_at_row(
                    row,
                    format!(
                        "the depth rises from {before} m to {here} m: give a track into shallower \
                         water, or cut it where the bed falls away"
                    ),
                ));
            }
        }
        let gradient = monotone_gradients(&range_m, &depth_m);
        Ok(Profile { range_m, depth_m, gradient })
    }

    /// First and last range.
    pub fn ranges_m(&self) -> [f64; 2] {
        [self.range_m[0], self.range_m[self.range_m.len() - 1]]
    }

    /// Greatest and least depth.
    pub fn depths_m(&self) -> [f64; 2] {
        [self.depth_m[0], self.depth_m[self.depth_m.len() - 1]]
    }

    /// Depth in m at a range in m. Beyond the ends the bed goes on flat.
    pub fn depth_at(&self, range_m: f64) -> f64 {
        let [first, last] = self.ranges_m();
        let range_m = range_m.clamp(first, last);
        let right =
            self.range_m.partition_point(|&r| r <= range_m).clamp(1, self.range_m.len() - 1);
        let left = right - 1;
        let width = self.range_m[right] - self.range_m[left];
        let u = (range_m - self.range_m[left]) / width;
        let [d0, d1] = [self.depth_m[left], self.depth_m[right]];
        let [g0, g1] = [self.gradient[left] * width, self.gradient[right] * width];
        // Cubic Hermite interpolation.
        let (c2, c3) = (3.0 * (d1 - d0) - 2.0 * g0 - g1, 2.0 * (d0 - d1) + g0 + g1);
        d0 + u * (g0 + u * (c2 + u * c3))
    }
}

/// Gradients at the points for which the cubics are monotone: the harmonic mean of the two
/// neighbouring slopes, weighted by their lengths (Fritsch & Butland, SIAM J. Sci. Stat. Comput. 5
/// (1984) 300, cited from memory), and the slope itself at the ends.
fn monotone_gradients(x: &[f64], y: &[f64]) -> Vec<f64> {
    let last = x.len() - 1;
    let slope = |i: usize| (y[i + 1] - y[i]) / (x[i + 1] - x[i]);
    (0..=last)
        .map(|i| {
            if i == 0 || i == last {
                return slope(if i == 0 { 0 } else { last - 1 });
            }
            let (before, after) = (slope(i - 1), slope(i));
            if before == 0.0 || after == 0.0 {
                return 0.0;
            }
            let (left, right) = (x[i] - x[i - 1], x[i + 1] - x[i]);
            let share = (left + 2.0 * right) / (3.0 * (left + right));
            1.0 / (share / before + (1.0 - share) / after)
        })
        .collect()
}
