//! The formula against the reference solution at the nodes of the latter.

use super::tapered::Snapshot;
use merging_saddles::Complex64 as C;

/// Indices of some 30 nodes inside and 60 outside, both with the boundary.
fn nodes(s: &Snapshot, reach: f64) -> [Vec<usize>; 2] {
    let spacing = s.x[s.inside + 1] - s.x[s.inside];
    let last = s.inside + (reach / spacing) as usize;
    assert!(last < s.end, "the comparison stays before the absorbing layer");
    let inside = (0..=s.inside).step_by(s.inside / 30).collect();
    [inside, (s.inside..=last).step_by(((last - s.inside) / 60).max(1)).collect()]
}

/// The formula and the solution at those nodes.
pub fn pairs(
    s: &Snapshot,
    reach: f64,
    mut field: impl FnMut(f64, f64, bool) -> C,
) -> [Vec<(C, C)>; 2] {
    let [inside, outside] = nodes(s, reach);
    [(inside, true), (outside, false)].map(|(which, within)| {
        which.iter().map(|&i| (field(s.h, s.x[i], within), s.psi[i])).collect()
    })
}

/// `e^(i phi)` that turns the formula into the solution best.
pub fn turn(sides: &[Vec<(C, C)>; 2]) -> C {
    let overlap: C = sides.iter().flatten().map(|(a, b)| a.conj() * b).sum();
    overlap / overlap.norm()
}

/// The same with its modulus: what the start of the solution leaves of the incoming mode.
pub fn incoming(sides: &[Vec<(C, C)>; 2]) -> C {
    let overlap: C = sides.iter().flatten().map(|(a, b)| a.conj() * b).sum();
    overlap / sides.iter().flatten().map(|(a, _)| a.norm_sqr()).sum::<f64>()
}

/// Relative L2 error with the phase taken out.
pub fn error(side: &[(C, C)], turn: C) -> f64 {
    let difference: f64 = side.iter().map(|(a, b)| (a * turn - b).norm_sqr()).sum();
    (difference / side.iter().map(|(_, b)| b.norm_sqr()).sum::<f64>()).sqrt()
}
