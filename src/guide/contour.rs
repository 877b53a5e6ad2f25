//! The contour of the uniform field's integral, and where it may end.
//!
//! On a straight profile it runs from valley to valley. For `m > 1` it ends before the Brewster parameter,
//! where the expansion in `eps` breaks down; on a curved profile both ends are finite, since the fit of the
//! profile says nothing about far valleys: they lie where the bend of the profile still counts for less in the
//! exponent than the rest. What is cut off is measured and refused above a tolerance. So is the integrand at a complex
//! width where the profile turns, if the contour crosses the cut from there: on which side such a point is passed is
//! for the contour of steepest descent to say, and no fit is known well enough for that. In the wide-angle form
//! both ends are finite too, each where the exponential is below 1e-17 if there is such a place.

use super::curve::Curve;
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
        let curve = phase.curve.as_deref();
        let bent = curve.is_some_and(Curve::bent);
        if m <= 1.0 && curve.is_none() {
            return Ok((Contour::through([left, middle, near, right]), 0.0));
        }
        // Inside and at the boundary; farther out the exponential of the distance turns only.
        let inside = ModePhase { d: Complex64::new(0.0, 0.0), ..phase.clone() };
        let brewster = if m > 1.0 { m.recip().atanh() } else { f64::INFINITY };
        let wide = curve.map(Curve::wide).unwrap_or_default();
        let zero = Complex64::new(0.0, 0.0);
        // Small beside the mode too where losses make it small so far before its cut-off.
        let omega = self.bound_angle(phase.h.re);
        let bound = wide.variable(I * omega.sin());
        let enough = NOTHING * (I * k * inside.value(bound)).re.exp().min(1.0);
        let there = |w: Complex64| if wide.by_angle { wide.variable(w.sinh()) } else { w };
        let (points, left_size) = if curve.is_none() {
            (vec![left, middle, near], 0.0)
        } else if bent {
            // From the bound mode's saddle, below all that is singular on the line Im w = pi/2.
            let length = |angle: f64| ((1.5 - omega) / angle.sin()).min(2.2);
            let angles = [1.85, 2.1, 2.35, 2.6];
            let (left, size) = lowest(&inside, k, enough, I * omega, &angles, length, there);
            (vec![left, there(near)], size)
        } else {
            let (left, size) =
                lowest(&inside, k, enough, middle, &[1.6, 1.85, 2.1], |_| 1.5, there);
            (vec![left, there(middle), there(0.5 * (middle + near)), there(near)], size)
        };
        // The right end by which the least is lost, the turns of the profile included; in the wide-angle form past the
        // wave straight across the guide, to waves that run back.
        let angles: &[f64] = match (m > 1.0, wide.by_angle) {
            (true, _) => &[0.0],
            (false, true) => &[0.0, 0.2, -0.2, 0.4],
            (false, false) => &[0.3, 0.6, 0.0],
        };
        let reach = |angle: f64| {
            let across = wide.root.norm() * brewster.sinh();
            match (wide.by_angle, across < 1.0) {
                (true, true) => 0.95 * across.asin(),
                (true, false) => 2.5,
                // Along the real axis the branch point of the cosine.
                (false, _) if angle == 0.0 && wide.is_on() => {
                    0.95 * brewster.min(wide.root.norm().recip().asinh())
                }
                (false, _) => (0.95 * brewster).min(2.2),
            }
        };
        let (mut right, mut jump, mut neglected) = (near, f64::INFINITY, f64::INFINITY);
        for angle in angles {
            let (end, size) = lowest(&inside, k, enough, zero, &[*angle], reach, |z| z);
            let path = [&points[..], &[end]].concat();
            let here = if bent { self.jump(&inside, k, &path) } else { 0.0 };
            if size + here < neglected {
                (right, jump, neglected) = (end, here, size + here);
            }
            if neglected < enough {
                break;
            }
        }
        if bent && jump > self.tolerance {
            return Err(Error::Undecided {
                reason: format!(
                    "the profile turns at a complex width where the integrand has still the size {jump:.1e}"
                ),
                remedy: "take a smaller eps or a straighter profile, smoothed over its small bends",
            });
        }
        neglected += left_size;
        let points = [points, vec![right]].concat();
        let contour =
            if curve.is_none() { Contour::ending_at(points) } else { Contour::between(points) };
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
    fn jump(&self, phase: &ModePhase, k: f64, points: &[Complex64]) -> f64 {
        const STEPS: u32 = 40;
        let Some(curve) = &phase.curve else { return 0.0 };
        let wide = curve.wide();
        let from_w = |w: Complex64| if wide.by_angle { wide.variable(w.sinh()) } else { w };
        let lost = |w: Complex64| self.dispersion.cutoff - self.dispersion.width(w);
        let root = |u: Complex64| curve.slope(u).0;
        let apart = |a: Complex64, b: Complex64| (a - b).norm() / (a.norm() + b.norm());
        let (mut from, mut most) = (wide.spot(points[0]).w, 0.0f64);
        for ends in points.windows(2) {
            for j in 1..=STEPS {
                let z = ends[0] + (ends[1] - ends[0]) * (f64::from(j) / f64::from(STEPS));
                let to = wide.spot(z).w;
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
                    most = most.max((I * k * phase.value(from_w(w))).re.exp());
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

/// The end of a contour: on rays of another variable from a point, the first place where the exponential is below `enough`, or the
/// lowest there is; with its size.
fn lowest(
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
