//! What a plan needs of the algebraic ends of a contour.

use super::build::{Problem, undecided};
use super::plan::AlgebraicEnd;
use crate::Error;
use crate::expansion::{AlgebraicSeries, Series};
use crate::saddles::{Branch, Saddle, Sheeting, Sheets, Tree};
use num_complex::Complex64;
use std::f64::consts::PI;

/// Saddles are taken together with an end if no other is nearer to the end than this many times their
/// distance.
const APART: f64 = 1.3;
/// Saddles that may be taken together with an end.
const MOST: usize = 2;

/// The algebraic ends.
pub(super) fn branches(problem: &Problem) -> Result<Vec<Branch>, Error> {
    let points = problem.contour.points();
    let last = points.len() - 1;
    let mut list = Vec::new();
    for (end, (base, next)) in
        [(points[0], points[1]), (points[last], points[last - 1])].into_iter().enumerate()
    {
        let lambda = problem.powers[end];
        if lambda == 1.0 {
            continue;
        }
        if !problem.poles.is_empty() {
            return Err(Error::Unsupported {
                what: "a pole together with an algebraic end".to_owned(),
                remedy: "use `quadrature`",
            });
        }
        let unit = (next - base) / (next - base).norm();
        let forward = if end == 0 { unit } else { -unit };
        let constant = Complex64::from_polar(1.0, forward.arg() * (lambda - 1.0));
        list.push(Branch { base, lambda, unit, constant, end });
    }
    Ok(list)
}

/// The series of each algebraic end, alone and with each saddle or pair of saddles near it.
pub(super) fn algebraic_ends(
    problem: &Problem,
    sheeting: &mut Sheeting,
    tree: &Tree,
    saddles: &[Saddle],
    size: f64,
) -> Result<Vec<AlgebraicEnd>, Error> {
    let mut list = Vec::new();
    let branches = sheeting.branches().to_vec();
    let branches = &branches[..];
    for (slot, branch) in branches.iter().enumerate() {
        let distance = |z: Complex64| (z - branch.base).norm();
        let other = branches.iter().map(|b| distance(b.base)).filter(|&d| d > 0.0);
        let clear = other.fold(size, f64::min);
        let series = |sheeting: &Sheeting, count, reach| {
            let (phase, amplitude) = (problem.phase, problem.amplitude);
            AlgebraicSeries::new(phase, amplitude, sheeting, (branches, slot), count, reach)
        };
        let nearest = saddles.iter().map(|s| distance(s.z)).fold(clear, f64::min);
        let own = series(sheeting, 0, (0.3 * nearest, 1e-6 * size));
        if let Some(unrolled) = own.as_ref().and_then(|own| own.unrolled()) {
            sheeting.set_copies(slot, unrolled);
        }
        let mut near = Vec::new();
        for (node, group) in tree.groups.iter().enumerate() {
            if group.members.len() > MOST {
                continue;
            }
            let inside = |n: &usize| group.members.contains(n);
            let members = group.members.iter().map(|&n| distance(saddles[n].z));
            let here = members.fold(0.0, f64::max);
            let others = (0..saddles.len()).filter(|n| !inside(n));
            let next = others.map(|n| distance(saddles[n].z)).fold(clear, f64::min);
            if next > APART * here {
                let reach = ((1.5 * here).max(0.3 * next), 1.2 * here);
                let count = group.members.len();
                near.extend(series(sheeting, count, reach).map(|series| (node, series)));
            }
        }
        if own.is_none() && near.is_empty() {
            return Err(undecided(format!(
                "the end point {} is too close to a singularity or to several saddles",
                branch.base
            )));
        }
        list.push(AlgebraicEnd { own, near });
    }
    Ok(list)
}

/// A series with its multiplicities on all sheets.
pub(super) fn on_sheets(series: Series, branches: &[Branch], sheets: &Sheets) -> Series {
    let mut sum = sheets[0].1;
    for (_, m) in &sheets[1..] {
        for (sum, m) in sum.iter_mut().zip(m) {
            *sum += m;
        }
    }
    let factor = |turns: &[i32; 2]| {
        let angle: f64 =
            branches.iter().zip(turns).map(|(b, &n)| 2.0 * PI * b.lambda * f64::from(n)).sum();
        Complex64::from_polar(1.0, angle)
    };
    let list = sheets.iter().map(|(turns, m)| (factor(turns), *m)).collect();
    series.with_multiplicities(sum).with_sheets(list)
}
