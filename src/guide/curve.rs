//! What the bend of a profile adds to the uniform field.
//!
//! Round cut-off the scaled range is `T(u) = u + G(u)`, `u = h_c - h` (unit slope at cut-off). The phase is `phi(p) =
//! integral of 2 p T(h_n(p)) dp`; its part from `T = u` is elementary, the rest
//!
//! ```text
//! J(w) = integral from 0 to w of 2 sinh w cosh w G(h_c - h_n(w)) dw
//! ```
//!
//! is not; it is tabulated once per profile (`table.rs`), when it is first wanted. In the wide-angle form (`wide.rs`)
//! `P'` takes the place of `2 p` in the whole phase, and what that adds is in `J`, on straight profiles too.
//!
//! `G` is known as a polynomial that fits the profile round the cut-off. The slope in the next order and its inverse are
//! polynomials of low degree of their own: `1/T'` would have poles where the fit turns, near the contour.
//!
//! Source: derived here.

use super::dispersion::Dispersion;
use super::second::Second;
use super::table::{Gate, Table, led};
use super::wide::{Spot, WideAngle};
use crate::Complex64;
use std::f64::consts::{FRAC_PI_2, PI};
use std::fmt;
use std::sync::OnceLock;

/// Terms of the slope.
/// Width on each side of cut-off that counts, over `(m^2 eps)^(1/3)`.
pub(super) const REACH: f64 = 2.5;
const SLOPES: usize = 4;
const ZERO: Complex64 = Complex64::new(0.0, 0.0);
const ONE: Complex64 = Complex64::new(1.0, 0.0);

/// A curved profile for one mode.
#[derive(Clone, PartialEq)]
pub(super) struct Curve {
    dispersion: Dispersion,
    bend: Bend,
    wide: WideAngle,
    slope: LocalSlope,
    table: OnceLock<Table>,
    /// What the bend adds to the next order, if there is one.
    second: Option<Second>,
}

impl fmt::Debug for Curve {
    /// Without the table.
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(out, "Curve({:?}, {:?})", self.dispersion, self.bend)
    }
}

impl Curve {
    /// `T(u) = u + c_2 u^2 + ..` from `c_2` on; `reach` is how much width to both sides of cut-off counts.
    pub(super) fn new(
        dispersion: Dispersion,
        higher: &[Complex64],
        wide: WideAngle,
        reach: f64,
    ) -> Curve {
        let at = |u: f64| {
            let (mut value, mut slope) = (ZERO, ZERO);
            for c in higher.iter().rev() {
                slope = slope * u + value;
                value = value * u + c;
            }
            // value = G/u^2, and T' = 1 + ..
            (value, (value * 2.0 + slope * u) * u + 1.0)
        };
        // As far as the slope stays within a factor 3.3 of that at cut-off.
        let tame = |u: f64| (0.3..3.3).contains(&at(u).1.norm()) && at(u).1.re > 0.0;
        let mut reach = reach;
        while reach > 1e-6 && !(-8..=8).all(|j| tame(reach * f64::from(j) / 8.0)) {
            reach *= 0.8;
        }
        let bend = Bend { higher: higher.to_vec() };
        let slope = LocalSlope::new(reach, |u| at(u).1);
        let second = (!higher.is_empty()).then(|| Second::new(dispersion, slope));
        Curve { dispersion, bend, wide, slope, table: OnceLock::new(), second }
    }

    /// Whether the profile is not straight.
    pub(super) fn bent(&self) -> bool {
        self.second.is_some()
    }

    /// The coefficients from `c_2` on.
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
        ((self.excess(u).1 + 1.0).sqrt(), above_one(&self.slope.sigma, u))
    }

    /// `dJ/dz`.
    pub(super) fn rate(&self, z: Complex64) -> Complex64 {
        let Spot { p, kappa, w, cosine, .. } = self.wide.spot(z);
        let u = self.dispersion.cutoff - self.dispersion.width(w);
        let g = self.excess(u).0;
        if self.wide.is_on() {
            // (2/delta) sin(theta) (u + G) - 2 p (dp/d theta) u
            return p * 2.0 / self.wide.root * (u * (1.0 - cosine) + g);
        }
        kappa * p * g * 2.0
    }

    /// `J(z)`.
    pub(super) fn phase(&self, z: Complex64) -> Complex64 {
        let table = self.table.get_or_init(|| Table::new(self.gate(), 1e-12, |z| self.rate(z)));
        table.value(z, |z| self.rate(z))
    }

    /// `J(z)` for a few places: without the table, in some ten microseconds.
    pub(super) fn phase_once(&self, z: Complex64) -> Complex64 {
        led(self.gate(), z, |z| self.rate(z))
    }

    /// How the places beyond `p = i` are reached.
    fn gate(&self) -> Gate {
        if !self.wide.is_on() {
            return self.dispersion.way_round();
        }
        let w = Complex64::new(-self.dispersion.gate(), FRAC_PI_2 - 0.35);
        Gate { by: self.wide.variable(w.sinh()), wide: Some(self.wide) }
    }

    /// `p beta`, the whole next order inside, less its logarithm.
    pub(super) fn smooth_beta(&self, w: Complex64) -> Complex64 {
        self.second.as_ref().map_or(ZERO, |s| s.smooth(self.dispersion, self.slope, w))
    }

    /// The factor of `p log p` in `p beta`.
    pub(super) fn logarithm(&self) -> Complex64 {
        self.second.as_ref().map_or(ZERO, Second::logarithm)
    }
}

/// `G = c_2 u^2 + c_3 u^3 + ..`.
#[derive(Clone, Debug, PartialEq)]
struct Bend {
    higher: Vec<Complex64>,
}

impl Bend {
    /// `G(u)` and `G'(u)`.
    fn excess(&self, u: Complex64) -> (Complex64, Complex64) {
        let (mut value, mut slope) = (ZERO, ZERO);
        for c in self.higher.iter().rev() {
            slope = slope * u + value;
            value = value * u + c;
        }
        // value = G/u^2
        (value * u * u, (value * 2.0 + slope * u) * u)
    }
}

/// The local slope over that at cut-off, `sigma = 1/T'`, and `1/sigma`, each as `1 + u (..)`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct LocalSlope {
    pub(super) sigma: [Complex64; SLOPES],
    pub(super) inverse: [Complex64; SLOPES],
}

impl LocalSlope {
    /// From `T'` on the window.
    pub(super) fn new(reach: f64, slope: impl Fn(f64) -> Complex64) -> LocalSlope {
        LocalSlope {
            sigma: fitted(reach, |u| (slope(u).inv() - 1.0) / u),
            inverse: fitted(reach, |u| (slope(u) - 1.0) / u),
        }
    }

    /// `sigma`, its first and second derivative, and `1/sigma` at `u`.
    pub(super) fn at(&self, u: Complex64) -> [Complex64; 4] {
        let [mut value, mut slope, mut bend] = [ZERO; 3];
        for c in self.sigma.iter().rev().copied().chain([ONE]) {
            bend = bend * u + slope;
            slope = slope * u + value;
            value = value * u + c;
        }
        [value, slope, bend * 2.0, above_one(&self.inverse, u)]
    }
}

/// `1 + u (c_0 + c_1 u + ..)`.
fn above_one(c: &[Complex64], u: Complex64) -> Complex64 {
    c.iter().rev().fold(ZERO, |sum, c| sum * u + c) * u + 1.0
}

/// Coefficients in powers of `u`, `|u| <= most`, from Chebyshev polynomials and the values at the zeros of
/// a higher one (DLMF 3.11(ii)).
fn fitted<const N: usize>(most: f64, value: impl Fn(f64) -> Complex64) -> [Complex64; N] {
    const PLACES: u32 = 16;
    let zero = [ZERO; N];
    let mut c = zero;
    for j in 0..PLACES {
        let angle = PI * (f64::from(j) + 0.5) / f64::from(PLACES);
        let value = value(most * angle.cos());
        for (n, c) in (0..).zip(&mut c) {
            let weight = if n == 0 { 1.0 } else { 2.0 } / f64::from(PLACES);
            *c += value * (weight * (f64::from(n) * angle).cos());
        }
    }
    // Clenshaw's recurrence (DLMF 3.11.15) on polynomials.
    let (mut last, mut before) = (zero, zero);
    for n in (0..N).rev() {
        let factor = if n == 0 { 1.0 } else { 2.0 } / most;
        let mut next = zero;
        for i in 0..N {
            let shifted = if i == 0 { c[n] } else { last[i - 1] * factor };
            next[i] = shifted - before[i];
        }
        before = last;
        last = next;
    }
    last
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn phase_is_the_integral_of_its_rate() {
        let c = Complex64::new;
        let higher = [c(0.25, 0.01), c(-0.1, 0.0)];
        for (n, m, delta) in [(1, 1.0, 0.0), (2, 0.55, 0.28), (1, 0.9, 0.0), (1, 1.3, 0.21)] {
            let wide = WideAngle::new(c(delta, -0.01 * delta));
            let curve = Curve::new(Dispersion::new(n, m), &higher, wide, 0.6);
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
