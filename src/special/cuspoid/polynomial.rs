//! Complex polynomials of the degree of the phase: Taylor shift, values, moments, and the value
//! and slope at a point in double-double.

use crate::special::double_double::Precise;
use num_complex::Complex64;

/// Coefficients of the largest polynomial (degree 6).
pub(super) const TERMS: usize = 7;
/// Coefficients, constant term first. A polynomial of degree `D` leaves the rest zero.
pub(super) type Polynomial = [Complex64; TERMS];
pub(super) const ZERO: Complex64 = Complex64::new(0.0, 0.0);

/// `p(t + s)` as a polynomial in `s`.
#[inline]
pub(super) fn shifted<const D: usize>(p: &Polynomial, t: Complex64) -> Polynomial {
    let mut out = *p;
    for i in 0..D {
        for m in (i..D).rev() {
            out[m] += t * out[m + 1];
        }
    }
    out
}

/// `p(c x)` as a polynomial in `x`.
#[inline]
pub(super) fn stretched<const D: usize>(p: &Polynomial, c: Complex64) -> Polynomial {
    let mut out = *p;
    let mut power = c;
    for coefficient in &mut out[1..=D] {
        *coefficient *= power;
        power *= c;
    }
    out
}

/// `p(t)`.
#[inline]
pub(super) fn value<const D: usize>(p: &Polynomial, t: Complex64) -> Complex64 {
    (0..D).rev().fold(p[D], |sum, m| sum * t + p[m])
}

/// `p'(t)`.
#[inline]
pub(super) fn slope<const D: usize>(p: &Polynomial, t: Complex64) -> Complex64 {
    (1..D).rev().fold(p[D] * D as f64, |sum, m| sum * t + p[m] * m as f64)
}

/// Moments about 0 (`integral of t^n ..`) made of those about `t` (`integral of (t' - t)^n ..`).
#[inline]
pub(super) fn moments_about_zero<const N: usize>(
    moments: &mut [Complex64; N],
    count: usize,
    t: Complex64,
) {
    for i in 1..count {
        for n in (i..count).rev() {
            let lower = moments[n - 1];
            moments[n] += t * lower;
        }
    }
}

/// `p(t)` and `p'(t)` in double-double.
pub(super) fn precise<const D: usize>(p: &Polynomial, t: Complex64) -> (Precise, Precise) {
    let mut value = Precise::from(p[D]);
    let mut slope = Precise::from(ZERO);
    for m in (0..D).rev() {
        slope = slope.times_plus(t, value);
        value = value.times_plus(t, Precise::from(p[m]));
    }
    (value, slope)
}
