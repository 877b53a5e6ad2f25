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
//! is not; it is tabulated once per profile (`table.rs`), when it is first wanted. In the wide-angle form (`wide.rs`)
//! `P'` takes the place of `2 p` in the whole phase, and what that adds is in `J`, on straight profiles too.
//!
//! Source: derived here.

use super::dispersion::Dispersion;
use super::second::Second;
use super::table::{Gate, Table, led};
use super::wide::{Spot, WideAngle};
use crate::Complex64;
use std::f64::consts::FRAC_PI_2;
use std::fmt;
use std::sync::Arc;

const ZERO: Complex64 = Complex64::new(0.0, 0.0);
/// Of the tabulated phase.
const ACCURACY: f64 = 2e-11;
const ONE: Complex64 = Complex64::new(1.0, 0.0);

/// A curved profile for one mode.
#[derive(Clone, PartialEq)]
pub(super) struct Curve {
    dispersion: Dispersion,
    bend: Bend,
    wide: WideAngle,
    /// How the places beyond `p = i` are reached.
    gate: Gate,
    table: Table,
    /// What the bend adds to the next order, if there is one.
    second: Option<Arc<Second>>,
}

impl fmt::Debug for Curve {
    /// Without the table.
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(out, "Curve({:?}, {:?})", self.dispersion, self.bend)
    }
}

impl Curve {
    /// The width lost is `r - a_2 r^2 - ..`, with the coefficients from `a_2` on.
    pub(super) fn new(dispersion: Dispersion, higher: &[Complex64], wide: WideAngle) -> Curve {
        let bend = Bend::new(higher);
        let second = (!higher.is_empty()).then(|| Arc::new(Second::new(dispersion, &bend)));
        Curve::with(dispersion, bend, wide, second)
    }

    fn with(
        dispersion: Dispersion,
        bend: Bend,
        wide: WideAngle,
        second: Option<Arc<Second>>,
    ) -> Curve {
        let gate = if wide.by_angle {
            let w = Complex64::new(-dispersion.gate(), FRAC_PI_2 - 0.35);
            Gate { by: wide.variable(w.sinh()), wide: Some(wide) }
        } else {
            dispersion.way_round()
        };
        Curve { dispersion, bend, wide, gate, table: Table::new(gate, 1e-12, ACCURACY), second }
    }

    /// The same with `w` as the variable of integration.
    pub(super) fn by_w(&self) -> Curve {
        Curve::with(self.dispersion, self.bend.clone(), self.wide.by_w(), self.second.clone())
    }

    /// Whether the profile is not straight.
    pub(super) fn bent(&self) -> bool {
        self.second.is_some()
    }

    /// The coefficients from `a_2` on.
    pub(super) fn higher(&self) -> &[Complex64] {
        &self.bend.higher
    }

    /// The wide-angle form.
    pub(super) fn wide(&self) -> WideAngle {
        self.wide
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

    /// `dJ/dz`.
    pub(super) fn rate(&self, z: Complex64) -> Complex64 {
        let Spot { p, w, cosine, measure, .. } = self.wide.spot(z);
        let u = self.dispersion.cutoff - self.dispersion.width(w);
        let g = self.excess(u).0;
        // P' (u + G) - 2 p u, with respect to z.
        let straight = if self.wide.is_on() { u * (1.0 - cosine) } else { ZERO };
        p * measure * 2.0 * (straight + g)
    }

    /// `J(z)`.
    pub(super) fn phase(&self, z: Complex64) -> Complex64 {
        self.table.value(z, |z| self.rate(z))
    }

    /// `J(z)` for a few places: without the table, in some ten microseconds.
    pub(super) fn phase_once(&self, z: Complex64) -> Complex64 {
        led(self.gate, z, Some(ACCURACY), |z| self.rate(z))
    }

    /// `p beta`, the whole next order inside, less its logarithm.
    pub(super) fn smooth_beta(&self, w: Complex64) -> Complex64 {
        self.second.as_ref().map_or(ZERO, |s| s.smooth(self.dispersion, &self.bend, w))
    }

    /// The factor of `p log p` in `p beta`.
    pub(super) fn logarithm(&self) -> Complex64 {
        self.second.as_ref().map_or(ZERO, |s| s.logarithm())
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
        if self.higher.is_empty() {
            return (ZERO, ZERO);
        }
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
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn phase_is_the_integral_of_its_rate() {
        let c = Complex64::new;
        let higher = [c(0.25, 0.01), c(-0.02, 0.0)];
        for (n, m, delta) in [(1, 1.0, 0.0), (2, 0.55, 0.28), (1, 0.9, 0.0), (1, 1.3, 0.21)] {
            let wide = WideAngle::new(c(delta, -0.01 * delta));
            let curve = Curve::new(Dispersion::new(n, m), &higher, wide);
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
