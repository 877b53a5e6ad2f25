//! The contour of the uniform field's integral, and where it may end.
//!
//! On a straight profile it runs from valley to valley. For `m > 1` it ends before the Brewster parameter,
//! where the expansion in `eps` breaks down; on a curved profile both ends are finite, since the fit of the
//! profile says nothing about far valleys. What is cut off is measured and refused above a tolerance.

use super::dispersion::ModePhase;
use super::uniform::SlopingGuide;
use crate::integral::Phase;
use crate::{Complex64, Contour, Error};
use std::f64::consts::{FRAC_PI_2, PI};

const I: Complex64 = Complex64::new(0.0, 1.0);

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
        let angles: &[f64] = if m > 1.0 { &[0.0] } else { &[0.0, 0.3, 0.6] };
        let (right, right_size) = lowest(&inside, k, Complex64::new(0.0, 0.0), angles, |_| reach);
        let mut neglected = right_size;
        let contour = if self.curve.is_none() {
            Contour::ending_at([left, middle, near, right])
        } else {
            // From the bound mode's saddle, below all that is singular on the line Im w = pi/2.
            let omega = self.bound_angle(phase.h.re);
            let length = |angle: f64| ((1.5 - omega) / angle.sin()).min(2.2);
            let angles = [1.85, 2.1, 2.35, 2.6];
            let (left, left_size) = lowest(&inside, k, I * omega, &angles, length);
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
    let mut best = (from, f64::INFINITY);
    for &angle in angles {
        let step = Complex64::from_polar(length(angle) / f64::from(STEPS), angle);
        let mut least = f64::INFINITY;
        for j in 1..=STEPS {
            let w = from + step * f64::from(j);
            let size = (I * k * phase.value(w)).re.exp();
            // Behind a hill lies no valley of the field: a polynomial fit has some of its own.
            least = least.min(size);
            if size > 10.0 * least {
                break;
            }
            if size < best.1 {
                best = (w, size);
            }
            if size < 1e-17 {
                return best;
            }
        }
    }
    best
}
