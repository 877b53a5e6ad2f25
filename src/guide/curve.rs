//! What the bend of a profile adds to the phase of the uniform field.
//!
//! Round cut-off the scaled range is a polynomial of the width, `T(u) = u + c_2 u^2 + c_3 u^3 + ..`,
//! `u = h_c - h` (unit slope at cut-off). The phase is `phi(p) = integral of 2 p T(h_n(p)) dp`; its part
//! from `T = u` is elementary, the rest
//!
//! ```text
//! J(w) = integral from 0 to w of 2 sinh w cosh w G(h_c - h_n(w)) dw,   G(u) = c_2 u^2 + c_3 u^3 + ..
//! ```
//!
//! is not. Two regions: within half the distance of the nearest singularity (`pi/2`, where the width
//! has a pole; for `m > 1` the Brewster point) its Taylor series, from values on a circle; beyond,
//! Gauss-Legendre panels from there on (DLMF 3.5(v)), led round the pole on the side of the
//! contour.
//!
//! Source: derived here.

use super::dispersion::Dispersion;
use crate::Complex64;
use std::f64::consts::{FRAC_PI_2, TAU};

const TERMS: usize = 56;
const CIRCLE: u32 = 192;

/// Nodes and weights of the 6-point Gauss-Legendre rule on (-1, 1), positive half (DLMF 3.5(v)).
const GAUSS: [(f64, f64); 3] = [
    (0.238_619_186_083_196_93, 0.467_913_934_572_691),
    (0.661_209_386_466_264_5, 0.360_761_573_048_138_6),
    (0.932_469_514_203_152, 0.171_324_492_379_170_36),
];

/// A curved profile for one mode.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Curve {
    dispersion: Dispersion,
    /// `c_2, c_3, ..`
    higher: Vec<Complex64>,
    /// The series of `J` is used within this radius.
    radius: f64,
    /// Taylor coefficients of `J`, in powers of `w/radius`, from the zeroth on.
    series: Vec<Complex64>,
    /// Where the contour crosses the line `Im w = pi/2`.
    gate: Complex64,
}

impl Curve {
    pub(super) fn new(dispersion: Dispersion, higher: Vec<Complex64>) -> Curve {
        let m = dispersion.m;
        let nearest = if m > 1.0 { m.recip().atanh() } else { FRAC_PI_2 };
        let gate = Complex64::new(-dispersion.gate(), FRAC_PI_2);
        let radius = 0.5 * nearest;
        let mut curve = Curve { dispersion, higher, radius, series: Vec::new(), gate };
        // Coefficients of J' by the trapezoidal rule on a circle, integrated term by term.
        let circle = 1.6 * radius;
        let values: Vec<Complex64> = (0..CIRCLE)
            .map(|j| {
                let turn = Complex64::from_polar(circle, TAU * f64::from(j) / f64::from(CIRCLE));
                curve.rate(turn)
            })
            .collect();
        let mut series = vec![Complex64::new(0.0, 0.0)];
        for n in 0..TERMS as u32 {
            let sum: Complex64 = (0..CIRCLE)
                .zip(&values)
                .map(|(j, v)| {
                    let angle = -TAU * f64::from(j * n % CIRCLE) / f64::from(CIRCLE);
                    v * Complex64::from_polar(1.0, angle)
                })
                .sum();
            let order = f64::from(n + 1);
            series.push(sum * (radius / order * 1.6f64.powi(-(n as i32)) / f64::from(CIRCLE)));
        }
        curve.series = series;
        curve
    }

    /// `G(u)` and `G'(u)`.
    pub(super) fn excess(&self, u: Complex64) -> (Complex64, Complex64) {
        let zero = Complex64::new(0.0, 0.0);
        let (mut value, mut slope) = (zero, zero);
        for c in self.higher.iter().rev() {
            slope = slope * u + value;
            value = value * u + c;
        }
        // value = G/u^2
        (value * u * u, (value * 2.0 + slope * u) * u)
    }

    /// `dT/du`: the slope at cut-off over the local slope.
    pub(super) fn flatness(&self, u: Complex64) -> Complex64 {
        self.excess(u).1 + 1.0
    }

    /// `dJ/dw`.
    pub(super) fn rate(&self, w: Complex64) -> Complex64 {
        let u = self.dispersion.cutoff - self.dispersion.width(w);
        w.sinh() * w.cosh() * self.excess(u).0 * 2.0
    }

    /// `J(w)`.
    pub(super) fn phase(&self, w: Complex64) -> Complex64 {
        let size = w.norm();
        if size <= self.radius {
            return self.summed(w);
        }
        if w.im <= FRAC_PI_2 {
            let edge = w * (self.radius / size);
            return self.summed(edge) + self.along(edge, w);
        }
        let edge = self.gate * (self.radius / self.gate.norm());
        self.summed(edge) + self.along(edge, self.gate) + self.along(self.gate, w)
    }

    fn summed(&self, w: Complex64) -> Complex64 {
        let w = w / self.radius;
        self.series.iter().rev().fold(Complex64::new(0.0, 0.0), |sum, c| sum * w + c)
    }

    /// The integral of `rate` along a straight line.
    fn along(&self, from: Complex64, to: Complex64) -> Complex64 {
        // Short beside the distance from the poles; a bounded number however far `to` is.
        let panels = ((to - from).norm() / 0.25).ceil().clamp(1.0, 64.0);
        let step = (to - from) / panels;
        let mut sum = Complex64::new(0.0, 0.0);
        for j in 0..panels as u32 {
            let middle = from + step * (f64::from(j) + 0.5);
            for (node, weight) in GAUSS {
                let offset = step * (0.5 * node);
                sum += (self.rate(middle + offset) + self.rate(middle - offset)) * weight;
            }
        }
        sum * step * 0.5
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn phase_is_the_integral_of_its_rate() {
        let c = Complex64::new;
        for (n, m) in [(1, 1.0), (2, 0.55), (1, 0.9), (1, 1.3)] {
            let curve = Curve::new(Dispersion::new(n, m), vec![c(0.25, 0.01), c(-0.1, 0.0)]);
            let edge = 0.999 * curve.radius;
            let points = [
                c(0.1, 0.2),
                c(-0.3, 0.3),
                c(0.0, edge),
                c(0.0, edge * 1.003),
                c(-0.3, 1.0),
                c(-1.4, 1.5),
                c(-1.4, 1.65),
                c(-1.8, 2.3),
                c(if m > 1.0 { 0.7 * m.recip().atanh() } else { 1.4 }, 0.1),
            ];
            for w in points {
                let step = 1e-4;
                let slope = (curve.phase(w + step) - curve.phase(w - step)) / (2.0 * step);
                let rate = curve.rate(w);
                let error = (slope - rate).norm() / (1.0 + rate.norm());
                assert!(error < 1e-6, "n {n} m {m} w {w}: {slope} {rate}");
            }
        }
    }
}
