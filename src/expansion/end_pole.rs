//! A finite end point and a pole in one ring.
//!
//! From the end `u_e` down into a valley, with the principal part of a pole at `p`:
//!
//! `integral of exp(i k (Phi(u) - Phi(u_e))) [r/(u - p) + s/(u - p)^2] du`.
//!
//! Method. The chords of the descent from `u_e` (the same as in `incomplete`), each in four parts. Away
//! from `p`: 20-point Gauss-Legendre. Near `p`: with `E(u)` the exponential,
//! `(E(u) - E(p))/(u - p)` by the same rule and `E(p) ln((b - p)/(a - p))` in closed form; for the
//! double pole one more term is taken off. The differences are formed from `Phi(u) - Phi(p)` as a
//! polynomial in `u - p`, so nothing is lost where a node comes close to `p`. The chords may cross the
//! pole's steepest ascent, which the true descent never does: each crossing is made good by the
//! residue. If the descent ends in another valley than asked for, the complete integral between
//! the two (`pole`) makes up the difference.
//!
//! Source: textbook (subtraction of a singularity); put together for this crate.

use super::canonical::Moments;
use super::incomplete::{FLOOR, ROUNDING, RULE, STEPS, between, budget, descent, valley_of};
use super::pole::MappedPole;
use super::unfolding::Unfolding;
use crate::Scaled;
use crate::ring::{NormalForm, ZERO};
use crate::saddles::crossings;
use num_complex::Complex64;
use std::f64::consts::PI;

/// Parts of one chord.
const PARTS: usize = 4;
/// A pole farther away than this (in the parameter of Bernstein's ellipse) does not disturb the rule.
const FAR: f64 = 3.0;

/// A pole's steepest ascent in the plane of `u`, from the pole to where it leaves the ring.
pub(super) fn ascent_in_ring(
    form: &NormalForm,
    pole: &MappedPole,
    ascent: &[Complex64],
) -> Vec<Complex64> {
    let mut v = pole.u / form.radius();
    let mut line = vec![pole.u];
    for pair in ascent.windows(2) {
        const PIECES: usize = 4;
        for piece in 1..=PIECES {
            let z = pair[0] + (pair[1] - pair[0]) * (piece as f64 / PIECES as f64);
            let Some(ahead) = form.preimage(z, v) else { return line };
            v = ahead;
            line.push(v * form.radius());
        }
    }
    line
}

/// The integral, and its rounding error; None if the descent does not arrive.
pub(super) fn with_pole(
    phi: &Unfolding,
    (u_e, valley): (Complex64, usize),
    pole: &MappedPole,
    ascent: &[Complex64],
    k: f64,
) -> Option<(Complex64, f64)> {
    let degree = phi.degree();
    let ik = Complex64::new(0.0, k);
    let p = pole.u;
    let about = phi.about(p).map(|t| t * ik);
    let along = |taylor: &[Complex64], s: Complex64| {
        taylor[1..=degree].iter().rev().fold(ZERO, |sum, &t| (sum + t) * s)
    };
    let at_pole = along(&phi.about(u_e).map(|t| t * ik), p - u_e).exp();
    let mut total = Sum { simple: ZERO, double: ZERO, lost: (0.0, 0.0), blur: 0.0 };
    // Rounding of the exponents: along the descent, and at the pole.
    let mut blur = 8.0;
    let blur_at_pole = 8.0 + k * phi.terms(u_e, p - u_e);
    let mut points = [u_e; STEPS + 1];
    let mut count = 1;
    let mut exponent = ZERO;
    let mut u = u_e;
    while -exponent.re <= FLOOR {
        if count > STEPS {
            return None;
        }
        let taylor = phi.about(u).map(|t| t * ik);
        let step = descent(&taylor[1..=degree], budget(degree, -exponent.re))?;
        blur += k * phi.terms(u, step);
        for part in 0..PARTS {
            let cut = |n: usize| step * (n as f64 / PARTS as f64);
            let (from, to) = (cut(part), cut(part + 1));
            let (middle, half) = ((from + to) * 0.5, (to - from) * 0.5);
            let tau = (p - u - middle) / half;
            let root = (tau * tau - 1.0).sqrt();
            let far = (tau + root).norm().max((tau - root).norm()) > FAR;
            total.blur = if far { blur } else { blur.max(blur_at_pole) };
            for (node, weight) in RULE {
                for s in [middle - half * node, middle + half * node] {
                    let d = u + s - p;
                    if far {
                        let value = (exponent + along(&taylor, s)).exp() * half * weight;
                        total.add(value / d, value / (d * d));
                    } else {
                        // w = i k (Phi(u) - Phi(p)) = d slope, slope = w_1 + d rest;
                        // (e^w - 1 - w_1 d)/d^2 = (e^w - 1 - w)/d^2 + rest.
                        let rest = about[2..=degree].iter().rev().fold(ZERO, |sum, t| sum * d + t);
                        let slope = about[1] + rest * d;
                        let (first, second) = remainders(slope * d);
                        let scale = at_pole * half * weight;
                        total.add(scale * first * slope, scale * (second * slope * slope + rest));
                    }
                }
            }
            if !far {
                let (a, b) = (u + from - p, u + to - p);
                let logarithm = (b / a).ln();
                let double = about[1] * logarithm + a.inv() - b.inv();
                total.add(at_pole * logarithm, at_pole * double);
            }
        }
        exponent += along(&taylor, step);
        u += step;
        points[count] = u;
        count += 1;
    }
    let turns = f64::from(crossings(ascent, &points[..count]));
    if turns != 0.0 {
        total.blur = blur_at_pole;
        let residue = at_pole * Complex64::new(0.0, -2.0 * PI * turns);
        total.add(residue, residue * about[1]);
    }
    let (simple, double) = (pole.simple.norm(), pole.double.norm());
    let mut value = pole.simple * total.simple + pole.double * total.double;
    // The derivative in the pole's place is the integral of one order more.
    let nearest = points[..count].iter().map(|u| (u - p).norm()).fold(f64::INFINITY, f64::min);
    let local = about[1].norm() + k.sqrt() + 2.0 / (p - u_e).norm();
    let third = total.double.norm() * (2.0 / nearest).min(local);
    let place = pole.shift() * (total.double.norm() * simple + third * double);
    let mut error = 0.5 * ROUNDING * (total.lost.0 * simple + total.lost.1 * double)
        + place
        + pole.noise.0 * total.simple.norm()
        + pole.noise.1 * total.double.norm();
    let here = valley_of(phi, u, k)?;
    if here != valley {
        let moments = Moments::new(phi, &between(here, valley, degree), k)?;
        let (rest, rounding) = pole.contribution(phi, &moments.values, k)?;
        let factor = Scaled::exp(-ik * phi.value(u_e));
        let at = |x: Complex64| (factor * Scaled::new(x, moments.exponent)).to_complex();
        value += at(rest);
        error += at(Complex64::new(rounding, 0.0)).norm();
    }
    (value.re.is_finite() && value.im.is_finite()).then_some((value, error))
}

/// Integrals with the simple and the double pole, and the sums of the moduli of their terms times the
/// rounding of each.
struct Sum {
    simple: Complex64,
    double: Complex64,
    lost: (f64, f64),
    /// Rounding of the terms that are being added.
    blur: f64,
}

impl Sum {
    fn add(&mut self, simple: Complex64, double: Complex64) {
        self.simple += simple;
        self.double += double;
        self.lost.0 += self.blur * simple.norm();
        self.lost.1 += self.blur * double.norm();
    }
}

/// `(e^w - 1)/w` and `(e^w - 1 - w)/w^2`.
fn remainders(w: Complex64) -> (Complex64, Complex64) {
    if w.norm() < 0.5 {
        // (e^w - 1 - w)/w^2 = (1 + w/3 (1 + w/4 (1 + ..)))/2.
        let second =
            (3..20).rev().fold(Complex64::new(1.0, 0.0), |sum, n| sum * w / f64::from(n) + 1.0)
                * 0.5;
        (second * w + 1.0, second)
    } else {
        let first = (w.exp() - 1.0) / w;
        (first, (first - 1.0) / w)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_remainders_meet_where_the_series_ends() {
        for angle in 0..12 {
            let w = Complex64::from_polar(0.499, 0.5 * f64::from(angle));
            let (first, second) = remainders(w);
            let exact = (w.exp() - 1.0) / w;
            assert!((first - exact).norm() < 1e-15);
            assert!((second - (exact - 1.0) / w).norm() < 4e-15);
        }
    }
}
