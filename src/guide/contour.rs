//! The contour of the uniform field's integral, and where it may end.
//!
//! On a straight profile it runs from valley to valley. For `m > 1` it ends before the Brewster parameter,
//! where the expansion in `eps` breaks down; on a curved profile both ends are finite, since the fit of the
//! profile says nothing about far valleys: they lie where the bend of the profile still counts for less in the
//! exponent than the rest. What is cut off is measured and refused above a tolerance. So is the integrand at a complex
//! width where the profile turns, if the contour crosses the cut from there: on which side such a point is passed is
//! for the contour of steepest descent to say, and no fit is known well enough for that.

use super::dispersion::ModePhase;
use super::uniform::SlopingGuide;
use crate::integral::Phase;
use crate::{Complex64, Contour, Error};
use std::f64::consts::{FRAC_PI_2, PI};

const I: Complex64 = Complex64::new(0.0, 1.0);
/// No less than this has to be looked for.
const NOTHING: f64 = 1e-17;

impl SlopingGuide {
    /// From the valley on the left to the right, with the size of the exponential where it ends (0
    /// at infinity).
    ///
    /// For `m > 1` it ends before the Brewster parameter, beyond which the integrand grows again; on a curved
    /// profile both ends are finite, since the fit says nothing about far valleys.
    pub(super) fn contour(&self, phase: &ModePhase, k: f64) -> Result<(Contour, f64), Error> {
        let m = self.dispersion.m;
        let gate = self.dispersion.gate();
        let left = Complex64::new(-1.5f64.max(gate + 0.5), 0.75 * PI);
        let middle = Complex64::new(-gate, FRAC_PI_2);
        // Near the saddles but on none of them: a contour that is flowed downhill would rest there.
        let near = Complex64::new(0.1, 0.3);
        let right = Complex64::new(1.5, 0.25 * PI);
        if m <= 1.0 && self.curve.is_none() {
            return Ok((Contour::through([left, middle, near, right]), 0.0));
        }
        // Inside and at the boundary; farther out the exponential of the distance turns only.
        let inside = ModePhase { d: Complex64::new(0.0, 0.0), ..phase.clone() };
        let brewster = if m > 1.0 { m.recip().atanh() } else { f64::INFINITY };
        let reach = (0.95 * brewster).min(2.2);
        let angles: &[f64] = if m > 1.0 { &[0.0] } else { &[0.3, 0.6, 0.0] };
        let mut neglected;
        let contour = if self.curve.is_none() {
            let (right, size) = lowest(&inside, k, Complex64::new(0.0, 0.0), angles, |_| reach);
            neglected = size;
            Contour::ending_at([left, middle, near, right])
        } else {
            // From the bound mode's saddle, below all that is singular on the line Im w = pi/2.
            let omega = self.bound_angle(phase.h.re);
            let length = |angle: f64| ((1.5 - omega) / angle.sin()).min(2.2);
            let (left, left_size) = lowest(&inside, k, I * omega, &[1.85, 2.1, 2.35, 2.6], length);
            // The right end by which the least is lost, the turns of the profile included.
            let (mut right, mut jump) = (near, f64::INFINITY);
            neglected = f64::INFINITY;
            for angle in angles {
                let (end, size) =
                    lowest(&inside, k, Complex64::new(0.0, 0.0), &[*angle], |_| reach);
                let here = self.jump(&inside, k, [left, near, end]);
                if size + here < neglected {
                    (right, jump, neglected) = (end, here, size + here);
                }
                if neglected < NOTHING {
                    break;
                }
            }
            if jump > self.tolerance {
                return Err(Error::Undecided {
                    reason: format!(
                        "the profile turns at a complex width where the integrand has still the size {jump:.1e}"
                    ),
                    remedy: "take a smaller eps or a straighter profile, smoothed over its small bends",
                });
            }
            neglected += left_size;
            Contour::between([left, near, right])
        };
        if neglected.is_nan() || neglected > self.tolerance {
            let reason = if m > 1.0 {
                format!(
                    "the integrand has still the size {neglected:.1e} near the Brewster parameter \
                     p = {:.3}, where the expansion in eps breaks down",
                    brewster.sinh()
                )
            } else {
                format!(
                    "with eps = {:.3} the integrand keeps the size {neglected:.1e} as far as the fit of \
                     the profile can be continued",
                    self.eps.norm()
                )
            };
            return Err(Error::Undecided {
                reason,
                remedy: "take a smaller eps, a density ratio nearer to 1 or a straighter profile, or \
                         accept it with `tolerance`",
            });
        }
        Ok((contour, neglected))
    }

    /// Largest size of the exponential on the cuts of `T(u)` that a path crosses, from there in to the turn of the
    /// profile at which they begin.
    fn jump(&self, phase: &ModePhase, k: f64, points: [Complex64; 3]) -> f64 {
        const STEPS: u32 = 40;
        let Some(curve) = &self.curve else { return 0.0 };
        let lost = |w: Complex64| self.dispersion.cutoff - self.dispersion.width(w);
        let root = |u: Complex64| curve.slope(u).0;
        let apart = |a: Complex64, b: Complex64| (a - b).norm() / (a.norm() + b.norm());
        let (mut from, mut most) = (points[0], 0.0f64);
        for ends in points.windows(2) {
            for j in 1..=STEPS {
                let to = ends[0] + (ends[1] - ends[0]) * (f64::from(j) / f64::from(STEPS));
                let (mut before, mut after) = (from, to);
                from = to;
                let [mut low, mut high] = [before, after].map(|w| root(lost(w)));
                if apart(low, high) < 0.1 {
                    continue;
                }
                for _ in 0..30 {
                    let middle = 0.5 * (before + after);
                    let there = root(lost(middle));
                    if apart(low, there) > apart(there, high) {
                        (after, high) = (middle, there);
                    } else {
                        (before, low) = (middle, there);
                    }
                }
                if apart(low, high) < 1e-3 {
                    continue;
                }
                // The cut leads straight away from u = 0.
                let (mut w, far) = (after, lost(after));
                for step in (1..STEPS).rev() {
                    most = most.max((I * k * phase.value(w)).re.exp());
                    let u = far * (f64::from(step) / f64::from(STEPS));
                    let sides = [1e-7, -1e-7].map(|turn| root(u * (1.0 + I * turn)));
                    if apart(sides[0], sides[1]) < 1e-3 {
                        break;
                    }
                    for _ in 0..8 {
                        let width = self.dispersion.width(w);
                        let slope = self.dispersion.width_slope(w, width) * w.cosh();
                        w -= (width - (self.dispersion.cutoff - u)) / slope;
                    }
                }
            }
        }
        most
    }

    /// `omega` of the bound mode `p = i sin(omega)` at the width `h` (without losses), 0 beyond cut-off:
    /// by bisection, as `h_n(i omega)` rises from the cut-off to infinity.
    pub(super) fn bound_angle(&self, h: f64) -> f64 {
        let (mut low, mut high) = (0.0, FRAC_PI_2);
        for _ in 0..60 {
            let omega = 0.5 * (low + high);
            if self.dispersion.width(I * omega).re < h { low = omega } else { high = omega }
        }
        0.5 * (low + high)
    }
}

/// The end of a contour: on rays from a point, the first place where the exponential is below 1e-17, or the
/// lowest there is; with its size.
fn lowest(
    phase: &ModePhase,
    k: f64,
    from: Complex64,
    angles: &[f64],
    length: impl Fn(f64) -> f64,
) -> (Complex64, f64) {
    const STEPS: u32 = 30;
    let straight = ModePhase { curve: None, ..phase.clone() };
    let mut best = (from, f64::INFINITY);
    for &angle in angles {
        let step = Complex64::from_polar(length(angle) / f64::from(STEPS), angle);
        let mut least = f64::INFINITY;
        for j in 1..=STEPS {
            let w = from + step * f64::from(j);
            let [height, plain] = [phase, &straight].map(|f| (I * k * f.value(w)).re);
            let size = height.exp();
            // Behind a hill lies no valley of the field, nor where the bend counts for nearly as much as the
            // straight profile: a polynomial has valleys of its own.
            least = least.min(size);
            if size > 10.0 * least || (height - plain).abs() > 1.0 + 0.7 * plain.abs() {
                break;
            }
            if size < best.1 {
                best = (w, size);
            }
            if size < NOTHING {
                return best;
            }
        }
    }
    best
}
