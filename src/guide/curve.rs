//! What the bend of a profile adds to the uniform field.
//!
//! Round cut-off the width lost is `u = h_c - h = r - a_2 r^2 - a_3 r^3 - ..` (unit slope at cut-off), a polynomial in
//! the range. The field needs its inverse, the range `r = T(u) = u + G(u)`, at complex widths: it is followed from
//! cut-off straight to `u` by Newton's method with the correction of second order, in steps over which the slope
//! changes by little. So `T` and `T'^(1/2) = u'(r)^(-1/2)` are analytic but for cuts from the zeros of `u'(r)`, where
//! the guide stops narrowing, straight away from cut-off; and for large `u` they are tame, where a polynomial in `u` is not.
//!
//! The phase is `phi(p) = integral of 2 p T(h_n(p)) dp`; its part from `T = u` is elementary, the rest
//!
//! ```text
//! J(w) = integral from 0 to w of 2 sinh w cosh w G(h_c - h_n(w)) dw
//! ```
//!
//! is not; it is tabulated once per profile (`table.rs`).
//!
//! Source: derived here.

use super::dispersion::Dispersion;
use super::second::Second;
use super::table::Table;
use crate::Complex64;
use std::fmt;

const ZERO: Complex64 = Complex64::new(0.0, 0.0);
const ONE: Complex64 = Complex64::new(1.0, 0.0);

/// A curved profile for one mode.
#[derive(Clone, PartialEq)]
pub(super) struct Curve {
    dispersion: Dispersion,
    bend: Bend,
    table: Table,
    /// What the bend adds to the next order.
    second: Second,
}

impl fmt::Debug for Curve {
    /// Without the table.
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(out, "Curve({:?}, {:?})", self.dispersion, self.bend)
    }
}

impl Curve {
    /// The width lost is `r - a_2 r^2 - ..`, with the coefficients from `a_2` on.
    pub(super) fn new(dispersion: Dispersion, higher: &[Complex64]) -> Curve {
        let bend = Bend::new(higher);
        let table = Table::new(dispersion.gate(), 1e-12, |w| bend.rate(dispersion, w));
        let second = Second::new(dispersion, &bend);
        Curve { dispersion, bend, table, second }
    }

    /// `T(u)` and `T'(u)`.
    pub(super) fn range(&self, u: f64) -> (Complex64, Complex64) {
        let (value, slope) = self.excess(Complex64::from(u));
        (value + u, slope + 1.0)
    }

    /// `G(u)` and `G'(u)`.
    pub(super) fn excess(&self, u: Complex64) -> (Complex64, Complex64) {
        self.bend.excess(u)
    }

    /// `T'(u)^(1/2)`, the amplitude's factor, and the local slope over that at cut-off.
    pub(super) fn slope(&self, u: Complex64) -> (Complex64, Complex64) {
        let (r, sign) = self.bend.follow(u);
        let slope = self.bend.lost(r)[1];
        (slope.sqrt().inv() * sign, slope)
    }

    /// `dJ/dw`.
    pub(super) fn rate(&self, w: Complex64) -> Complex64 {
        self.bend.rate(self.dispersion, w)
    }

    /// `J(w)`.
    pub(super) fn phase(&self, w: Complex64) -> Complex64 {
        self.table.value(w, |w| self.rate(w))
    }

    /// `p beta`, the whole next order inside, less its logarithm.
    pub(super) fn smooth_beta(&self, w: Complex64) -> Complex64 {
        self.second.smooth(self.dispersion, &self.bend, w)
    }

    /// The factor of `p log p` in `p beta`.
    pub(super) fn logarithm(&self) -> Complex64 {
        self.second.logarithm()
    }
}

/// The width lost as a polynomial of the range, `u = r - a_2 r^2 - a_3 r^3 - ..`, and its inverse.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Bend {
    higher: Vec<Complex64>,
}

impl Bend {
    /// From the coefficients from `a_2` on.
    pub(super) fn new(higher: &[Complex64]) -> Bend {
        Bend { higher: higher.to_vec() }
    }

    /// `G = a_2 r^2 + ..` at the range `r` and its first three derivatives.
    fn gained(&self, r: Complex64) -> [Complex64; 4] {
        let [mut value, mut slope, mut bend, mut third] = [ZERO; 4];
        for &a in self.higher.iter().rev().chain([&ZERO, &ZERO]) {
            third = third * r + bend;
            bend = bend * r + slope;
            slope = slope * r + value;
            value = value * r + a;
        }
        [value, slope, bend * 2.0, third * 6.0]
    }

    /// The width lost at the range `r` and its first three derivatives.
    fn lost(&self, r: Complex64) -> [Complex64; 4] {
        let [value, slope, bend, third] = self.gained(r);
        [r - value, ONE - slope, -bend, -third]
    }

    /// The range where the width `u` is lost, followed from cut-off straight to `u`, and `u'(r)^(1/2)` over its
    /// principal value there.
    fn follow(&self, u: Complex64) -> (Complex64, f64) {
        const STEPS: u32 = 100;
        let (mut r, mut sign, mut last) = (ZERO, 1.0, ONE);
        for _ in 0..STEPS {
            let [lost, slope, bend, _] = self.lost(r);
            // Over the cut of the principal root.
            if last.re.min(slope.re) < 0.0 && last.im * slope.im < 0.0 {
                sign = -sign;
            }
            last = slope;
            let left = u - lost;
            // A quarter of |u'|^2/|u''|: half of that, and the next zero of the slope may be reached.
            let (steep, bent) = (slope.norm_sqr(), bend.norm_sqr());
            let near = 16.0 * left.norm_sqr() * bent <= steep * steep;
            let share = if near { 1.0 } else { 0.25 * steep / (left.norm_sqr() * bent).sqrt() };
            let flat = slope.conj() / steep;
            let straight = left * flat * share;
            let step = straight * (1.0 - straight * bend * flat * 0.5);
            r += step;
            // The error of a step goes with its cube.
            if near && step.norm_sqr() <= 1e-11 * r.norm_sqr() {
                break;
            }
        }
        (r, sign)
    }

    /// `G(u)` and `G'(u)`.
    fn excess(&self, u: Complex64) -> (Complex64, Complex64) {
        let [value, slope, ..] = self.gained(self.follow(u).0);
        (value, slope / (1.0 - slope))
    }

    /// The local slope over that at cut-off, `sigma = u'(r)`, its first and second derivative with respect to `u`,
    /// and `1/sigma`.
    pub(super) fn local(&self, u: Complex64) -> [Complex64; 4] {
        let [_, slope, bend, third] = self.lost(self.follow(u).0);
        let flat = slope.inv();
        [slope, bend * flat, (third - bend * bend * flat) * flat * flat, flat]
    }

    /// `dJ/dw`.
    fn rate(&self, dispersion: Dispersion, w: Complex64) -> Complex64 {
        let u = dispersion.cutoff - dispersion.width(w);
        w.sinh() * w.cosh() * self.excess(u).0 * 2.0
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn phase_is_the_integral_of_its_rate() {
        let c = Complex64::new;
        for (n, m) in [(1, 1.0), (2, 0.55), (1, 0.9), (1, 1.3)] {
            let curve = Curve::new(Dispersion::new(n, m), &[c(0.25, 0.01), c(-0.02, 0.0)]);
            let points = [
                c(0.1, 0.2),
                c(-0.3, 0.3),
                c(0.0, 1.0),
                c(0.0, 1.2),
                c(-0.3, 1.0),
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
