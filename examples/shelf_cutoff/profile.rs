//! The sea bed along a track, read from a file.

use crate::table::{Fault, Table};
use merging_saddles::guide::Profile;
use std::path::Path;

/// Reads a file with the columns `range_m` and `depth_m`; depths must not increase with range.
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
    if range_m.len() == 2 {
        let gradient = (depth_m[1] - depth_m[0]) / (range_m[1] - range_m[0]);
        let (first, depth) = (range_m[0], depth_m[0]);
        let plane = move |s: f64| (depth + gradient * (s - first), gradient);
        return Profile::from_fn(range_m[0], range_m[1], plane).map_err(|e| Fault(e.to_string()));
    }
    Profile::from_samples(&range_m, &depth_m).map_err(|e| Fault(e.to_string()))
}
