//! The whole next order in `eps` of the uniform field on a curved profile.
//!
//! With `H = h_n(p)`, `sigma(p) = 1/T'(h_c - H)` the local slope over that at cut-off and `' = d/dp`, the factor
//! `p` of the amplitude inside becomes `p (1 + eps beta)`, outside
//! `p (1 + eps (beta + sigma [(1 - m)/(2 p D) + i H'/(4 p)]))`,
//!
//! ```text
//! beta = sigma m/(12 p D) - (i/(16 p H')) (sigma'' - (2/3) sigma'^2/sigma) + r2 sigma' + integral of w sigma' dp
//! r2 = i H''/(24 p H'^2) + i/(48 p^2 H'),     w = r1 - r2'
//! r1 = [ C + (i/(8 p)) H'''/H' - 2 i H'' ( 1/(12 p^2 H') + 5 H''/(48 p H'^2) ) ]/(2 H')
//! C  = i [ m/2 - m^2/6 + (m - 1/2 - m^3/2) p^2 - (1 - m)(1 - m^2) p^4/2 ]/(p kappa^2 D^2)
//!      + m H/(2 kappa^2 D) - i p H^2/(6 kappa^2)
//! ```
//!
//! On a straight profile the first term alone is left. `w sigma'` has a pole of third order at `p = 0`,
//! `A_3/p^3 + A_2/p^2 + A_1/p + ..`; these are integrated in closed form, the rest by a table. What remains
//! of poles in `p beta` cancels; `A_1 p log p` stays. The cut of the logarithm leads straight down, away from the contour
//! and through the zero of `H'` on the negative imaginary axis, where `beta` has a pole.
//!
//! Near `p = 0` all is summed from Laurent series, whose coefficients come from a circle (trapezoidal rule, DLMF
//! 3.5(i)). The constant of the integral is 0 at `p = 0`; the amplitude and phase of the incoming mode fix it.
//!
//! Source: derived here; checked in `tests/guide_profiles.rs`.

use super::curve::Bend;
use super::dispersion::Dispersion;
use super::table::Table;
use crate::Complex64;
use std::f64::consts::{FRAC_PI_2, TAU};

const I: Complex64 = Complex64::new(0.0, 1.0);
const CIRCLE: usize = 64;
const TERMS: usize = 32;
const NAN: Complex64 = Complex64::new(f64::NAN, f64::NAN);

/// The next order of one mode on one profile.
#[derive(Clone, PartialEq)]
pub(super) struct Second {
    /// Radius in `p` within which the series serve.
    near: f64,
    /// Taylor coefficients of `p^3 w sigma'` and of `p^2` times the terms outside the integral.
    rate: Vec<Complex64>,
    local: Vec<Complex64>,
    table: Table,
}

/// `H` and its derivatives with respect to `p`, and what else both parts need.
struct Local {
    p: Complex64,
    kappa2: Complex64,
    density: Complex64,
    h: [Complex64; 4],
    /// `sigma`, its derivatives with respect to the width lost, `1/sigma`.
    s: [Complex64; 4],
}

impl Local {
    fn new(dispersion: Dispersion, bend: &Bend, w: Complex64) -> Local {
        let m = dispersion.m;
        let (p, kappa) = (w.sinh(), w.cosh());
        let (kappa2, density) = (kappa * kappa, dispersion.density(p));
        let width = dispersion.width(w);
        // kappa^2 H' + p H = -i m/D, differentiated twice.
        let first = dispersion.width_slope(w, width);
        let d_slope = p * (2.0 * (1.0 - m * m)) / density;
        let second = (I * m * d_slope / density - p * first * 3.0 - width) / kappa2;
        let bent = (2.0 * (1.0 - m * m)) / density - d_slope * d_slope * 2.0;
        let third = (I * m * bent / density - p * second * 5.0 - first * 4.0) / kappa2;
        let s = bend.local(dispersion.cutoff - width);
        Local { p, kappa2, density, h: [width, first, second, third], s }
    }

    /// `w sigma'`.
    fn rate(&self, m: f64) -> Complex64 {
        let Local { p, kappa2, density, h: [h, h1, h2, h3], s: [_, s1, _, _] } = *self;
        let (p2, inverse) = (p * p, h1.inv());
        let quartic = m / 2.0 - m * m / 6.0 + p2 * (m - 0.5 - 0.5 * m.powi(3))
            - p2 * p2 * (0.5 * (1.0 - m) * (1.0 - m * m));
        let c = I * quartic / (p * kappa2 * density * density) + h * m / (kappa2 * density * 2.0)
            - I * p * h * h / (kappa2 * 6.0);
        let bent = h2 * inverse;
        let r1 = (c + I * h3 * inverse / (p * 8.0)
            - I * bent * 2.0 * ((p2 * 12.0).inv() + bent / p * (5.0 / 48.0)))
            * inverse
            * 0.5;
        let r2_slope = I / 24.0 * inverse * inverse / p * (h3 - h2 / p - h2 * bent * 2.0)
            - I / 48.0 * inverse / p2 * (p.inv() * 2.0 + bent);
        // sigma' = -H' dsigma/du
        (r2_slope - r1) * s1 * h1
    }

    /// The terms of `beta` outside the integral.
    fn local(&self, m: f64) -> Complex64 {
        let Local { p, density, h: [_, h1, h2, _], s: [sigma, s1, s2, inverse], .. } = *self;
        // (sigma'' - (2/3) sigma'^2/sigma)/H'
        let bent = s2 * h1 - s1 * h2 / h1 - s1 * s1 * h1 * inverse * (2.0 / 3.0);
        let r2_turned = -(I * h2 / (p * h1) / 24.0 + I / (p * p) / 48.0) * s1;
        sigma * m / (p * density * 12.0) - I * bent / (p * 16.0) + r2_turned
    }
}

/// Places on a circle round `p = 0`.
struct Ring {
    radius: f64,
    places: Vec<Local>,
}

impl Ring {
    fn new(dispersion: Dispersion, bend: &Bend, radius: f64) -> Ring {
        let at = |j: usize| {
            let p = Complex64::from_polar(radius, TAU * j as f64 / CIRCLE as f64);
            Local::new(dispersion, bend, p.asinh())
        };
        Ring { radius, places: (0..CIRCLE).map(at).collect() }
    }

    /// Taylor coefficients, if the function is analytic inside: those of negative powers vanish then.
    fn taylor(&self, function: impl Fn(&Local) -> Complex64) -> Option<Vec<Complex64>> {
        let values: Vec<Complex64> = self.places.iter().map(function).collect();
        let size: f64 = values.iter().map(|v| v.norm()).sum();
        let coefficient = |n: usize| {
            let turned = |j: usize| {
                Complex64::from_polar(1.0, -TAU * (j * n % CIRCLE) as f64 / CIRCLE as f64)
            };
            let sum: Complex64 = values.iter().enumerate().map(|(j, v)| v * turned(j)).sum();
            sum
        };
        let analytic = (CIRCLE - 12..CIRCLE).all(|n| coefficient(n).norm() < 1e-11 * size);
        let scaled = |n: usize| coefficient(n) / (CIRCLE as f64 * self.radius.powi(n as i32));
        analytic.then(|| (0..TERMS).map(scaled).collect())
    }
}

impl Second {
    pub(super) fn new(dispersion: Dispersion, bend: &Bend) -> Second {
        let m = dispersion.m;
        // The zero of H' nearest to 0: p H D = -i m, by Newton in w.
        let mut w = -I * (m / dispersion.cutoff);
        for _ in 0..20 {
            let width = dispersion.width(w);
            let value = dispersion.width_slope(w, width);
            let step = 1e-5;
            let ahead = dispersion.width_slope(w + step, dispersion.width(w + step));
            let change = value * step / (ahead - value);
            if change.norm() < 0.5 {
                w -= change;
            }
        }
        let zero = w.sinh().norm().min(m / dispersion.cutoff);
        let brewster = if m > 1.0 { (m * m - 1.0).sqrt().recip() } else { 1.0 };
        let mut circle = 0.6 * zero.min(brewster);
        // Smaller where something singular is near.
        let (rate, local) = loop {
            let ring = Ring::new(dispersion, bend, circle);
            let rate = ring.taylor(|l| l.rate(m) * l.p.powi(3));
            let local = ring.taylor(|l| l.local(m) * l.p.powi(2));
            match (rate, local) {
                (Some(rate), Some(local)) => break (rate, local),
                _ if circle < 1e-3 => break (vec![NAN; TERMS], vec![NAN; TERMS]),
                _ => circle *= 0.7,
            }
        };
        let near = 0.5 * circle;
        let table = Table::new(dispersion.way_round(), 1e-11, 1e-8);
        Second { near, rate, local, table }
    }

    /// `A_1`, the factor of `p log p` in `p beta`.
    pub(super) fn logarithm(&self) -> Complex64 {
        self.rate[2]
    }

    /// `p beta` less its logarithm.
    pub(super) fn smooth(&self, dispersion: Dispersion, bend: &Bend, w: Complex64) -> Complex64 {
        let p = w.sinh();
        let Second { near, rate, local, table } = self;
        let rest = table.value(w, |w| smooth_rate(dispersion, bend, rate, *near, w));
        if p.norm() < *near {
            // local[0] = rate[0]/2: the poles of second order cancel.
            let tail = series(&local[2..], p);
            return local[1] - rate[1] + p * (tail + rest);
        }
        let terms = Local::new(dispersion, bend, w).local(dispersion.m);
        p * (terms + rest) - rate[0] / (p * 2.0) - rate[1]
    }
}

/// `w sigma'` less its pole, with respect to `dw`.
fn smooth_rate(
    dispersion: Dispersion,
    bend: &Bend,
    rate: &[Complex64],
    near: f64,
    w: Complex64,
) -> Complex64 {
    let p = w.sinh();
    if p.norm() < near {
        return series(&rate[3..], p) * w.cosh();
    }
    let pole = ((rate[0] / p + rate[1]) / p + rate[2]) / p;
    (Local::new(dispersion, bend, w).rate(dispersion.m) - pole) * w.cosh()
}

fn series(coefficients: &[Complex64], p: Complex64) -> Complex64 {
    coefficients.iter().rev().fold(Complex64::new(0.0, 0.0), |sum, c| sum * p + c)
}

/// The logarithm of `p` with its cut straight down.
pub(super) fn log_above(p: Complex64) -> Complex64 {
    (-I * p).ln() + I * FRAC_PI_2
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn poles_cancel_and_series_join() {
        let c = Complex64::new;
        for (n, m) in [(1, 1.0), (2, 0.55), (3, 1.0), (1, 1.5), (2, 1.5)] {
            let dispersion = Dispersion::new(n, m);
            let bend = &Bend::new(&[c(0.25, 0.01), c(0.1, 0.0)]);
            let second = Second::new(dispersion, bend);
            let [a3, l2] = [second.rate[0], second.local[0]];
            assert!((l2 - a3 * 0.5).norm() < 1e-9, "n {n} m {m}: {a3} {l2}");
            // Inside and outside of the circle of the series.
            for angle in [-0.6f64, 0.5, 2.0] {
                let at = |share: f64| {
                    let p = Complex64::from_polar(second.near * share, angle);
                    second.smooth(dispersion, bend, p.asinh())
                };
                let (a, b) = (at(1.0 - 1e-9), at(1.0 + 1e-9));
                assert!((a - b).norm() < 1e-7 * (1.0 + a.norm()), "n {n} m {m}: {a} {b}");
            }
        }
    }
}
