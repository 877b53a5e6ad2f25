//! Whether a phase is continuous along a contour.
//!
//! Method. On each chord the change of `f` is held against Simpson's rule for `f'` (DLMF 3.5.7); a chord on
//! which they differ is halved. What still differs when the chord is of the size of rounding is a jump:
//! a branch cut of the caller's closure, or a derivative that is not that of the value.

use super::{Contour, Phase};
use crate::Error;
use num_complex::Complex64;

/// Pieces that each side of a contour is cut into.
const PIECES: usize = 6;
/// How far the change of `f` may be from the rule, against the largest `f'`.
const CLOSE: f64 = 0.03;
/// Halvings and chords at most.
const DEPTH: u32 = 44;
const CHORDS: usize = 4000;

type Site = (Complex64, Complex64, Complex64);

/// Refuses a contour along which the phase jumps.
pub(crate) fn check_continuous(phase: &dyn Phase, contour: &Contour) -> Result<(), Error> {
    let site = |z: Complex64| {
        let (f, slope) = phase.value_and_derivative(z);
        (z, f, slope)
    };
    for side in contour.points().windows(2) {
        let mut from = site(side[0]);
        for piece in 1..=PIECES {
            let to = site(side[0] + (side[1] - side[0]) * (piece as f64 / PIECES as f64));
            if let Some((z, jump)) = jump(&site, from, to) {
                return Err(Error::Undecided {
                    reason: format!(
                        "at z = {z:.6} on the contour the phase jumps by {jump:.4}: it crosses a branch \
                         cut of the closure there, or the derivative is not that of the value"
                    ),
                    remedy: "lead the contour round the branch point on the side of the closure's \
                             sheet, or turn the cut away: ln(z - b) as ln((z - b)/u) + ln u, with u \
                             the direction from b to the middle of the contour",
                });
            }
            from = to;
        }
    }
    Ok(())
}

/// A jump on a chord: where, and its size.
fn jump(site: &dyn Fn(Complex64) -> Site, from: Site, to: Site) -> Option<(Complex64, Complex64)> {
    let mut stack = vec![(from, to, 0)];
    for _ in 0..CHORDS {
        let (a, b, depth) = stack.pop()?;
        let step = b.0 - a.0;
        let middle = site((a.0 + b.0) * 0.5);
        let rule = (a.2 + middle.2 * 4.0 + b.2) * step / 6.0;
        let largest = a.2.norm().max(b.2.norm()).max(middle.2.norm()) * step.norm();
        let rounding = 64.0 * f64::EPSILON * (a.1.norm() + b.1.norm());
        let miss = b.1 - a.1 - rule;
        let allowed = CLOSE * largest + rounding;
        if miss.norm() <= allowed || !allowed.is_finite() {
            // Continuous, or not finite: a singularity on the contour is refused elsewhere.
            continue;
        }
        if depth == DEPTH || step.norm() < 1e-12 * (a.0.norm() + b.0.norm()) {
            if miss.norm() > 10.0 * largest {
                return Some((a.0, b.1 - a.1));
            }
            continue;
        }
        stack.push((middle, b, depth + 1));
        stack.push((a, middle, depth + 1));
    }
    None
}
