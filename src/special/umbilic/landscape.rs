//! The exponent of the one-dimensional integral, its saddles and its valleys.
//!
//! With `r = e^q` both umbilics are `integral of e^(H(q)) dq` (from DLMF 36.2.6, 36.2.8 with `u^2 = r`),
//!
//! ```text
//! H(q) = i (c_1 r + c_2 r^2 + c_3 r^3 + c_- / r) + q/2,   r = e^q,
//! ```
//!
//! real coefficients, `c_3 > 0`. In the plane of q nothing is singular, and the factor `1/sqrt(r)` is part of H: its
//! saddles stay apart from `r = 0` when `c_-` vanishes. Valleys: `Re q -> infinity` along `Im q = pi/6 + 2 pi n/3`,
//! and `Re q -> -infinity` along `Im q = -+pi/2 + 2 pi m` (for `c_- > 0`, `< 0`; anywhere for `c_- = 0`).
//! `H(q + 2 pi i) = H(q) + pi i`.

use num_complex::Complex64;
use std::f64::consts::{FRAC_PI_2, FRAC_PI_6, TAU};

/// Where a descent ends.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Valley {
    /// `r -> infinity` along `arg r = pi/6 + 2 pi n/3`.
    Outer(i32),
    /// `r -> 0` along `arg r = -+pi/2 + 2 pi m`.
    Inner(i32),
}

/// Derivatives of H that are used one by one.
const ORDERS: usize = 8;

/// The coefficients of H.
#[derive(Clone, Copy, Debug)]
pub(super) struct Landscape {
    /// `c_1, c_2, c_3`.
    pub(super) outer: [f64; 3],
    /// `c_-`.
    pub(super) inner: f64,
    /// The integrand is also wanted times `weight/r`.
    pub(super) weight: f64,
}

/// H and its terms at one point.
#[derive(Clone, Copy, Debug)]
pub(super) struct Site {
    pub(super) q: Complex64,
    pub(super) h: Complex64,
    /// The terms with `r`, `r^2`, `r^3`, `1/r`.
    terms: [Complex64; 4],
    /// `ln |weight/r|` where positive.
    surplus: f64,
}

/// `j` of the terms.
const POWERS: [f64; 4] = [1.0, 2.0, 3.0, -1.0];

impl Landscape {
    pub(super) fn site(&self, q: Complex64) -> Site {
        let r = q.exp();
        let ir = Complex64::new(-r.im, r.re);
        let [c1, c2, c3] = self.outer;
        let terms = [ir * c1, ir * r * c2, ir * r * r * c3, Complex64::new(0.0, self.inner) / r];
        let surplus = (self.weight.ln() - q.re).max(0.0);
        Site { q, h: terms[0] + terms[1] + terms[2] + terms[3] + q * 0.5, terms, surplus }
    }

    /// The saddles with `-pi < Im q <= pi`: roots of `3 c_3 r^4 + 2 c_2 r^3 + c_1 r^2 - (i/2) r - c_-`.
    /// They need not be exact: they are where paths branch, nothing else.
    pub(super) fn saddles(&self) -> ([Complex64; 4], usize) {
        let [c1, c2, c3] = self.outer;
        let real = |x: f64| Complex64::new(x, 0.0);
        let all = [
            real(-self.inner),
            Complex64::new(0.0, -0.5),
            real(c1),
            real(2.0 * c2),
            real(3.0 * c3),
        ];
        let coefficients = if self.inner == 0.0 { &all[1..] } else { &all[..] };
        let (mut roots, count) = roots(coefficients);
        for r in &mut roots[..count] {
            *r = r.ln();
        }
        (roots, count)
    }

    /// The valley that surely lies straight ahead.
    pub(super) fn valley(&self, site: &Site) -> Option<Valley> {
        let [t1, t2, t3, inner] = site.terms;
        if -3.0 * 0.98 * t3.re >= 2.0 * modulus(t2) + modulus(t1) + modulus(inner) + 0.5 {
            let n = ((site.q.im - FRAC_PI_6) * 3.0 / TAU).round();
            return Some(Valley::Outer(n as i32));
        }
        let outer = 3.0 * modulus(t3) + 2.0 * modulus(t2) + modulus(t1);
        if inner.re <= 0.0 && 0.5 - 0.98 * inner.re >= 1.02 * outer {
            let m = ((site.q.im + FRAC_PI_2.copysign(self.inner)) / TAU).round();
            return Some(Valley::Inner(if self.inner == 0.0 { 0 } else { m as i32 }));
        }
        None
    }
}

impl Site {
    /// Re H.
    pub(super) fn height(&self) -> f64 {
        self.h.re
    }

    /// The height of the highest of the wanted integrands.
    pub(super) fn crest(&self) -> f64 {
        self.h.re + self.surplus
    }

    /// `H^(m)/m!`, m = 1 .. 8.
    pub(super) fn taylor(&self) -> [Complex64; ORDERS] {
        let mut terms = self.terms;
        let mut factorial = 1.0;
        std::array::from_fn(|m| {
            for (term, j) in terms.iter_mut().zip(POWERS) {
                *term *= j;
            }
            factorial *= (m + 1) as f64;
            let sum = terms[0] + terms[1] + terms[2] + terms[3];
            (if m == 0 { sum + 0.5 } else { sum }) / factorial
        })
    }

    /// H'.
    pub(super) fn slope(&self) -> Complex64 {
        let [t1, t2, t3, inner] = self.terms;
        t1 + t2 * 2.0 + t3 * 3.0 - inner + 0.5
    }

    /// The radius at which the moduli of the Taylor terms add up to `spread`, or a little less; at
    /// most 4.
    pub(super) fn reach(&self, spread: f64) -> f64 {
        let moduli = self.taylor().map(modulus);
        let sizes = self.terms.map(modulus);
        // sum over m > 8 of x^m/m!
        let tail = |x: f64| {
            let x3 = x * x * x;
            let factor = if x < 7.0 { 10.0 / (10.0 - x) } else { x.exp() };
            x3 * x3 * x3 / 362_880.0 * factor
        };
        let sum = |rho: f64| {
            let head = moduli.iter().rev().fold(0.0, |sum, c| (sum + c) * rho);
            let [one, two, three] = [tail(rho), tail(2.0 * rho), tail(3.0 * rho)];
            head + (sizes[0] + sizes[3]) * one + sizes[1] * two + sizes[2] * three
        };
        let mut rho = (spread / moduli[0]).min((spread / moduli[1]).sqrt()).min(4.0);
        for _ in 0..30 {
            let ratio = sum(rho) / spread;
            if ratio <= 1.02 {
                break;
            }
            rho *= if ratio > 10.0 {
                0.6
            } else if ratio > 2.0 {
                0.8
            } else {
                1.0 - 0.3 * (ratio - 1.0)
            };
        }
        rho
    }
}

/// `|z|` where no square leaves the range.
#[inline]
fn modulus(z: Complex64) -> f64 {
    z.norm_sqr().sqrt()
}

/// All roots of a polynomial of degree up to 4 at once (Aberth's iteration), lowest coefficient first.
fn roots(coefficients: &[Complex64]) -> ([Complex64; 4], usize) {
    let n = coefficients.len() - 1;
    let lead = coefficients[n];
    // All roots lie within twice the largest of |a_j/a_n|^(1/(n-j)) (Fujiwara).
    let radius = (0..n)
        .map(|j| (coefficients[j] / lead).norm().powf(1.0 / (n - j) as f64))
        .fold(0.0, f64::max);
    let mut roots = [Complex64::ZERO; 4];
    for (k, root) in roots[..n].iter_mut().enumerate() {
        *root = Complex64::from_polar(radius, 0.4 + TAU * k as f64 / n as f64);
    }
    for _ in 0..60 {
        let mut moved = 0.0f64;
        for k in 0..n {
            let at = roots[k];
            let (mut value, mut slope) = (lead, Complex64::ZERO);
            for a in coefficients[..n].iter().rev() {
                slope = slope * at + value;
                value = value * at + a;
            }
            let repulsion: Complex64 =
                (0..n).filter(|j| *j != k && roots[*j] != at).map(|j| 1.0 / (at - roots[j])).sum();
            let step = value / (slope - value * repulsion);
            if step.re.is_finite() && step.im.is_finite() {
                roots[k] -= step;
                moved = moved.max(step.norm() / roots[k].norm());
            }
        }
        if moved < 1e-7 {
            break;
        }
    }
    (roots, n)
}
