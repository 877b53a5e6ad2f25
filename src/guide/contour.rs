//! The contour of the uniform field's integral, and where it may end.
//!
//! On a straight profile it runs from valley to valley. For `m > 1` it ends before the Brewster parameter,
//! where the expansion in `eps` breaks down; on a curved profile both ends are finite, since the fit of the
//! profile says nothing about far valleys: they lie where the bend of the profile still counts for less in the
//! exponent than the rest. What is cut off is measured and refused above a tolerance, and so is the jump of the
//! amplitude where the fitted slope turns. In the wide-angle form both ends are finite too, each where the
//! exponential is below 1e-17 if there is such a place.

use super::curve::Curve;
use super::dispersion::ModePhase;
use super::uniform::SlopingGuide;
use super::wide::WideAngle;
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
        let curve = phase.curve.as_deref();
        if m <= 1.0 && curve.is_none() {
            return Ok((Contour::through([left, middle, near, right]), 0.0));
        }
        // Inside and at the boundary; farther out the exponential of the distance turns only.
        let inside = ModePhase { d: Complex64::new(0.0, 0.0), ..phase.clone() };
        let brewster = if m > 1.0 { m.recip().atanh() } else { f64::INFINITY };
        let wide = curve.map_or(WideAngle::new(Complex64::new(0.0, 0.0)), Curve::wide);
        let reach = (0.95 * brewster).min(2.2);
        let zero = Complex64::new(0.0, 0.0);
        let angles: &[f64] = if m > 1.0 { &[0.0] } else { &[0.3, 0.6, 0.0] };
        // Small beside the mode too where losses make it small so far before its cut-off.
        let bound = wide.variable(I * self.bound_angle(phase.h.re).sin());
        let enough = NOTHING * (I * k * inside.value(bound)).re.exp().min(1.0);
        let mut neglected;
        let contour = if curve.is_none() {
            let (right, size) = lowest(&inside, k, enough, zero, angles, |_| reach);
            neglected = size;
            Contour::ending_at([left, middle, near, right])
        } else if wide.is_on() {
            let reach = move |_: f64| {
                let brewster = (wide.root.norm() * brewster.sinh()).min(1.0).asin();
                if m > 1.0 && brewster < FRAC_PI_2 { 0.95 * brewster } else { 2.5 }
            };
            // Past the wave straight across the guide, to waves that run back.
            let angles: &[f64] = if m > 1.0 { &[0.0] } else { &[0.0, 0.2, -0.2, 0.4] };
            let (right, size) = lowest(&inside, k, enough, zero, angles, reach);
            // The same way on the left as in the one-way equation.
            let there = |w: Complex64| wide.variable(w.sinh());
            let angles = [1.6, 1.85, 2.1];
            let (left, left_size) = lowest_on(&inside, k, enough, middle, &angles, |_| 1.5, there);
            neglected = size + left_size;
            Contour::between([
                left,
                there(middle),
                there((middle + near) * 0.5),
                there(near),
                right,
            ])
        } else {
            // From the bound mode's saddle, below all that is singular on the line Im w = pi/2.
            let omega = self.bound_angle(phase.h.re);
            let length = |angle: f64| ((1.5 - omega) / angle.sin()).min(2.2);
            let (left, left_size) =
                lowest(&inside, k, enough, I * omega, &[1.85, 2.1, 2.35, 2.6], length);
            // The right end by which the least is lost, the jump of the slope's root included.
            let (mut right, mut jump) = (near, f64::INFINITY);
            neglected = f64::INFINITY;
            for angle in angles {
                let (end, size) = lowest(&inside, k, enough, zero, &[*angle], |_| reach);
                let here = self.jump(&inside, k, [left, near, end]);
                if size + here < neglected {
                    (right, jump, neglected) = (end, here, size + here);
                }
                if neglected < enough {
                    break;
                }
            }
            if jump > self.tolerance {
                return Err(Error::Undecided {
                    reason: format!(
                        "the fit of the profile turns where the integrand has still the size {jump:.1e}"
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

    /// Largest size of the exponential where a path crosses the cut of `T'(u)^(1/2)`: the fit of the profile turns
    /// near there, and the amplitude jumps.
    fn jump(&self, phase: &ModePhase, k: f64, points: [Complex64; 3]) -> f64 {
        const STEPS: u32 = 40;
        let Some(curve) = &self.curve else { return 0.0 };
        let root = |w: Complex64| curve.slope(self.dispersion.cutoff - self.dispersion.width(w)).0;
        let (mut last, mut most) = (root(points[0]), 0.0f64);
        for ends in points.windows(2) {
            for j in 1..=STEPS {
                let w = ends[0] + (ends[1] - ends[0]) * (f64::from(j) / f64::from(STEPS));
                let next = root(w);
                // A smooth root turns by little in a step, one that jumps by half a turn.
                if (next * last.conj()).re < 0.0 {
                    most = most.max((I * k * phase.value(w)).re.exp());
                }
                last = next;
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

/// The end of a contour: on rays from a point, the first place where the exponential is below `enough`, or the
/// lowest there is; with its size.
fn lowest(
    phase: &ModePhase,
    k: f64,
    enough: f64,
    from: Complex64,
    angles: &[f64],
    length: impl Fn(f64) -> f64,
) -> (Complex64, f64) {
    lowest_on(phase, k, enough, from, angles, length, |z| z)
}

/// The same on rays of another variable.
fn lowest_on(
    phase: &ModePhase,
    k: f64,
    enough: f64,
    from: Complex64,
    angles: &[f64],
    length: impl Fn(f64) -> f64,
    map: impl Fn(Complex64) -> Complex64,
) -> (Complex64, f64) {
    const STEPS: u32 = 30;
    let straight = ModePhase { curve: None, ..phase.clone() };
    let mut best = (from, f64::INFINITY);
    for &angle in angles {
        let step = Complex64::from_polar(length(angle) / f64::from(STEPS), angle);
        let mut least = f64::INFINITY;
        for j in 1..=STEPS {
            let z = map(from + step * f64::from(j));
            let height = (I * k * phase.value(z)).re;
            let size = height.exp();
            // Behind a hill lies no valley of the field, nor where the bend counts for nearly as much as the
            // straight profile: a polynomial has valleys of its own.
            let bent = || {
                if phase.on_wide_angle().is_some() {
                    return phase.bend_rules(z);
                }
                let plain = (I * k * straight.value(z)).re;
                (height - plain).abs() > 1.0 + 0.7 * plain.abs()
            };
            least = least.min(size);
            if size > 10.0 * least || bent() {
                break;
            }
            if size < best.1 {
                best = (z, size);
            }
            if size < enough {
                return best;
            }
        }
    }
    best
}
