//! Scorer functions Gi and Hi (DLMF 9.12).
//!
//! In the upper half plane the solution of `u'' = z u + 1/pi` that is algebraic at infinity is
//!
//! ```text
//! V = w Hi(z w),  w = e^(2 pi i/3)   for arg z <= 2 pi/3:   Hi = V + B1,  Gi = i Ai - V
//! V = Hi(z)                          beyond:                Hi = V,       Gi = Bi - V
//! ```
//!
//! with `B1 = Bi - i Ai` (DLMF 9.12.11, 9.12.14): nothing cancels but where Gi or Hi has a zero.
//!
//! V for `|z| < 16`: folded by rotation and conjugation onto Hi in `2 pi/3 <= arg z <= pi`, where one
//! Taylor step of the inhomogeneous equation leads from a lattice to the point. V being algebraic,
//! the rounding of the rotated point does not matter. Beyond: `-V = sum (3k)!/(k! 3^k) z^(-3k)/(pi z)`
//! (DLMF 9.12.25, 9.12.27), whose smallest term is below 1e-17. On the real axis the same in real
//! arithmetic, from nodes of Gi on its positive and of Hi on its negative part.

use super::pair::{Fate, NAN, Value, airy_any, fate, in_range, pair};
use super::scorer_nodes::{NEGATIVE, NODES, POSITIVE, RADIUS, ROW};
use super::taylor::{Point, inhomogeneous, nearest};
use super::{Airy, airy_real, asymptotic};
use crate::Scaled;
use num_complex::Complex64;
use std::f64::consts::FRAC_1_PI;

/// The Scorer functions and their derivatives at one point.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Scorer<T> {
    /// Gi.
    pub gi: T,
    /// Gi'.
    pub gi_prime: T,
    /// Hi.
    pub hi: T,
    /// Hi'.
    pub hi_prime: T,
}

impl<T> Scorer<T> {
    /// The same operation on all four.
    #[inline]
    fn map<U>(self, operation: impl Fn(T) -> U) -> Scorer<U> {
        Scorer {
            gi: operation(self.gi),
            gi_prime: operation(self.gi_prime),
            hi: operation(self.hi),
            hi_prime: operation(self.hi_prime),
        }
    }
}

/// `(3k)!/(k! 3^k)` and `(3k+1)!/(k! 3^k)`.
const SERIES: [[f64; 2]; 18] = {
    let mut out = [[1.0; 2]; 18];
    let mut k = 1;
    while k < 18 {
        let n = 3.0 * k as f64;
        out[k][0] = out[k - 1][0] * (n - 1.0) * (n - 2.0);
        out[k][1] = out[k][0] * (n + 1.0);
        k += 1;
    }
    out
};

/// Terms that leave an error below 1e-16 at the given `|z|`.
fn terms(size: f64) -> usize {
    const FROM: [(f64, usize); 10] = [
        (1553.0, 2),
        (219.0, 3),
        (86.0, 4),
        (50.6, 5),
        (36.3, 6),
        (29.0, 7),
        (24.8, 8),
        (20.4, 10),
        (18.3, 12),
        (17.2, 14),
    ];
    FROM.iter().find(|(from, _)| size >= *from).map_or(SERIES.len(), |(_, n)| *n)
}

/// V and V' for `Im z >= 0`, see the module's page.
#[inline]
pub(super) fn algebraic(z: Complex64) -> [Complex64; 2] {
    let size = z.norm();
    if size >= RADIUS {
        let inverse = 1.0 / z;
        let squared = inverse * inverse;
        let [value, slope] = Complex64::polynomials(&SERIES[..terms(size)], squared * inverse);
        return [-inverse * value * FRAC_1_PI, squared * slope * FRAC_1_PI];
    }
    if asymptotic::beyond_stokes(z) {
        return hi_on_lattice(z);
    }
    let w = Complex64::new(-0.5, super::pair::SIN_60);
    let turned = z * w;
    // Up to arg z = pi/3 the turned point lies above the axis, beyond it below.
    let [hi, slope] = if turned.im >= 0.0 {
        hi_on_lattice(turned)
    } else {
        hi_on_lattice(turned.conj()).map(|v| v.conj())
    };
    [w * hi, w.conj() * slope]
}

/// Hi and Hi' for `2 pi/3 <= arg z <= pi`, `|z| < RADIUS`.
#[inline]
fn hi_on_lattice(z: Complex64) -> [Complex64; 2] {
    let (m, n, z0, d) = nearest(z);
    let u = &NODES[(ROW[n as usize] as i64 + m) as usize];
    inhomogeneous(z0, d, [0, 2, 4].map(|i| Complex64::new(u[i], u[i + 1])))
}

/// On the real axis: Gi, Gi' for `x >= 0`, Hi, Hi' for `x < 0`.
#[inline]
pub(super) fn algebraic_real(x: f64) -> [f64; 2] {
    if x.abs() >= RADIUS {
        let inverse = 1.0 / x;
        let squared = inverse * inverse;
        let [value, slope] = f64::polynomials(&SERIES[..terms(x.abs())], squared * inverse);
        let [value, slope] = [inverse * value * FRAC_1_PI, -squared * slope * FRAC_1_PI];
        return if x > 0.0 { [value, slope] } else { [-value, -slope] };
    }
    let (m, _, x0, d) = nearest(Complex64::new(x, 0.0));
    let u = if x >= 0.0 { POSITIVE[m as usize] } else { NEGATIVE[(-m) as usize] };
    inhomogeneous(x0.re, d.re, u)
}

/// Gi, Gi', Hi, Hi' at a complex point: the solutions of `u'' = z u -+ 1/pi` of DLMF 9.12.
///
/// Overflow gives infinite components; NaN gives NaN. Beyond `|z| = 1e12` what contains an
/// oscillating or growing Airy function is NaN, the rest is right (see the module's page).
///
/// Accuracy, relative to the modulus: 1e-15 away from the zeros; near a zero of Gi or Hi 2e-15 on the
/// natural scale (see the page of [`airy`](super)). Cost: some 0.3 microseconds.
///
/// ```
/// use merging_saddles::{Complex64, special::airy::scorer};
/// // Hi(0) = 2/(3^(7/6) Gamma(2/3)) = 2 Gi(0): DLMF 9.12.6 (Gamma(2/3) from 18-digit arithmetic).
/// let v = scorer(Complex64::new(0.0, 0.0));
/// let exact = 2.0 / (3f64.powf(7.0 / 6.0) * 1.354117939426400417);
/// assert!((v.hi.re - exact).abs() < 2e-16 && (2.0 * v.gi.re - exact).abs() < 2e-16);
/// ```
pub fn scorer(z: Complex64) -> Scorer<Complex64> {
    scorer_any(z)
}

/// [`scorer`] with the exponents carried apart.
///
/// ```
/// use merging_saddles::{Complex64, special::airy::{airy_extended, scorer_extended}};
/// // Gi + Hi = Bi (DLMF 9.12.11), here of the size of e^600000: Hi is all of it.
/// let z = Complex64::new(9000.0, 1000.0);
/// let (s, v) = (scorer_extended(z), airy_extended(z));
/// assert_eq!(s.hi.exponent, v.bi.exponent);
/// assert!((s.hi.mantissa - v.bi.mantissa).norm() < 1e-15);
/// // Gi = 1/(pi z) (1 + 2/z^3 + ...): DLMF 9.12.25.
/// assert!((s.gi.to_complex() * z * std::f64::consts::PI - 1.0).norm() < 1e-11);
/// ```
pub fn scorer_extended(z: Complex64) -> Scorer<Scaled> {
    scorer_any(z)
}

#[inline]
fn scorer_any<T: Value>(z: Complex64) -> Scorer<T> {
    if z.im.is_sign_negative() {
        return scorer_above(z.conj()).map(T::conjugate);
    }
    scorer_above(z)
}

fn scorer_above<T: Value>(z: Complex64) -> Scorer<T> {
    let plain = |v: Complex64| T::assemble(v, 0);
    if z.re.is_nan() || z.im.is_nan() {
        return Scorer { gi: NAN, gi_prime: NAN, hi: NAN, hi_prime: NAN }.map(plain);
    }
    if z.im == 0.0 {
        let [v, v_prime] = algebraic_real(z.re).map(Complex64::from);
        let airy: Airy<T> = airy_any(z);
        let rest = (airy.bi + plain(-v), airy.bi_prime + plain(-v_prime));
        let (v, v_prime) = (plain(v), plain(v_prime));
        return if z.re >= 0.0 {
            Scorer { gi: v, gi_prime: v_prime, hi: rest.0, hi_prime: rest.1 }
        } else {
            Scorer { gi: rest.0, gi_prime: rest.1, hi: v, hi_prime: v_prime }
        };
    }
    if !in_range(z) {
        return scorer_beyond(z).map(plain);
    }
    let [v, v_prime] = algebraic(z);
    let p = pair(z);
    let beyond = asymptotic::beyond_stokes(z);
    let parts = |a: Complex64, b: Complex64, v: Complex64| {
        let falling = T::assemble(Complex64::I * a, p.n);
        if !beyond {
            return (falling + plain(-v), T::assemble(b, -p.n) + plain(v));
        }
        // Bi = i a 2^n + b 2^-n / 2 where the pair is split beyond the Stokes line.
        let rising = T::assemble(if p.beyond { b * 0.5 } else { b }, -p.n);
        (falling + rising + plain(-v), plain(v))
    };
    let (gi, hi) = parts(p.a, p.b, v);
    let (gi_prime, hi_prime) = parts(p.a_prime, p.b_prime, v_prime);
    Scorer { gi, gi_prime, hi, hi_prime }
}

/// Where the phase of the Airy functions is unknown.
fn scorer_beyond(z: Complex64) -> Scorer<Complex64> {
    let finite = z.re.is_finite() && z.im.is_finite();
    let inverse = if finite { 1.0 / z } else { Complex64::ZERO };
    let v = -inverse * FRAC_1_PI;
    let v_prime = inverse * inverse * FRAC_1_PI;
    let nan = Scorer { gi: NAN, gi_prime: NAN, hi: NAN, hi_prime: NAN };
    match fate(z) {
        Fate::Vanishes => Scorer { gi: -v, gi_prime: -v_prime, ..nan },
        Fate::Explodes => Scorer { hi: v, hi_prime: v_prime, ..nan },
        Fate::Unknown if asymptotic::beyond_stokes(z) => Scorer { hi: v, hi_prime: v_prime, ..nan },
        Fate::Unknown => nan,
    }
}

/// Gi, Gi', Hi, Hi' at a real point.
///
/// Range as in [`scorer`]. Accuracy: 1e-15 relative away from the zeros of Gi and Gi' on the negative
/// axis, 1e-15 of the modulus of the Airy functions near them. Cost: some 0.1 microseconds.
///
/// ```
/// use merging_saddles::special::airy::{airy_real, scorer_real};
/// // Gi + Hi = Bi: DLMF 9.12.11.
/// let (s, v) = (scorer_real(-1.5), airy_real(-1.5));
/// assert!((s.gi + s.hi - v.bi).abs() < 1e-15);
/// ```
pub fn scorer_real(x: f64) -> Scorer<f64> {
    if x.is_nan() {
        return Scorer { gi: x, gi_prime: x, hi: x, hi_prime: x };
    }
    let [v, v_prime] = algebraic_real(x);
    let airy = airy_real(x);
    if x >= 0.0 {
        Scorer { gi: v, gi_prime: v_prime, hi: airy.bi - v, hi_prime: airy.bi_prime - v_prime }
    } else {
        Scorer { gi: airy.bi - v, gi_prime: airy.bi_prime - v_prime, hi: v, hi_prime: v_prime }
    }
}
