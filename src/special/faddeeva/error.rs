//! Error functions of complex argument.
//!
//! With `i z` in the upper half plane, folded: `erfc z = exp(-z^2) conj S + conj K` and
//! `erf z = conj(1 - K) - exp(-z^2) conj S` for z in the first quadrant, S and K taken at `Im z + i Re z`.
//! Sources: DLMF 7.2.1, 7.2.2, 7.2.3, 7.4.1, 7.4.2; near the origin 7.6.1.

use super::kernel::{Wave, exponential, near, sum};
use super::split::{Split, odd};
use super::{NAN, SMALL, STRIP, anywhere, polynomial};
use crate::Scaled;
use num_complex::Complex64;

/// `(2/sqrt(pi)) (-1)^n/(n! (2n+1))` (DLMF 7.6.1).
pub(super) const ERF: [f64; 13] = {
    let mut out = [std::f64::consts::FRAC_2_SQRT_PI; 13];
    let mut factor = std::f64::consts::FRAC_2_SQRT_PI;
    let mut n = 1;
    while n < 13 {
        factor /= -(n as f64);
        out[n] = factor / (2 * n + 1) as f64;
        n += 1;
    }
    out
};

/// `exp(-z^2)` times conj S with its exponent, conj K and conj (1 - K), in the first quadrant.
#[inline]
fn parts(x: f64, y: f64) -> (Complex64, i64, [Complex64; 2]) {
    let (sum, offset) = sum(y, x);
    let (e, exponent) = exponential(x, y);
    // Infinite on the imaginary axis only, where S is imaginary.
    let product =
        if e.re.is_infinite() { Complex64::new(0.0, f64::NEG_INFINITY) } else { e * sum.conj() };
    let k = if near(x, y) {
        let wave = Wave::at(x, offset);
        [wave.k().conj(), wave.one_less_k().conj()]
    } else if x < STRIP {
        [Complex64::ONE, Complex64::ZERO]
    } else {
        [Complex64::ZERO, Complex64::ONE]
    };
    (product, exponent, k)
}

fn erf_first(x: f64, y: f64) -> Split {
    if x * x + y * y < SMALL {
        let z = Complex64::new(x, y);
        return Split::moderate(z * polynomial(&ERF, z * z));
    }
    let (product, exponent, [_, rest]) = parts(x, y);
    Split { mantissa: -product, exponent, rest }
}

/// erfc z, Re z >= 0.
fn erfc_right(z: Complex64) -> Split {
    let (mantissa, exponent, [rest, _]) = parts(z.re.abs(), z.im.abs());
    let value = Split { mantissa, exponent, rest };
    if z.im < 0.0 { value.conj() } else { value }
}

fn erf_anywhere(z: Complex64) -> Split {
    if z.re.is_nan() || z.im.is_nan() { Split::moderate(NAN) } else { odd(z, erf_first) }
}

fn erfc_anywhere(z: Complex64) -> Split {
    if z.re.is_nan() || z.im.is_nan() {
        return Split::moderate(NAN);
    }
    if z.norm_sqr() < SMALL {
        return (-erf_anywhere(z)).plus(Complex64::ONE);
    }
    // erfc(-z) = 2 - erfc z: DLMF 7.4.2.
    if z.re < 0.0 { (-erfc_right(-z)).plus(Complex64::new(2.0, 0.0)) } else { erfc_right(z) }
}

/// `erf z = (2/sqrt(pi)) integral from 0 to z of exp(-t^2) dt`.
///
/// Overflow (near the imaginary axis) and range as in [`w`](super::w).
///
/// Accuracy: 2e-15 relative away from the zeros. Cost: some 0.1 microseconds. Source: DLMF 7.2.1.
///
/// ```
/// use merging_saddles::{Complex64, special::faddeeva::erf};
/// // The first complex zero: DLMF table 7.13.1 (m); mpmath, 30 digits.
/// let zero = Complex64::new(1.45061_61632, 1.88094_30002);
/// assert!(erf(zero).norm() < 1e-9);
/// ```
pub fn erf(z: Complex64) -> Complex64 {
    erf_anywhere(z).plain()
}

/// [`erf`] with the exponent apart.
///
/// ```
/// use merging_saddles::{Complex64, special::faddeeva::{dawson, erf_extended}};
/// // erf(i y) = (2 i/sqrt(pi)) exp(y^2) F(y): DLMF 7.5.1.
/// let v = erf_extended(Complex64::new(0.0, 40.0));
/// let f = dawson(Complex64::new(40.0, 0.0)).re;
/// let exact = 1600.0 + (std::f64::consts::FRAC_2_SQRT_PI * f).ln();
/// assert!((v.ln_norm() - exact).abs() < 1e-12);
/// ```
pub fn erf_extended(z: Complex64) -> Scaled {
    erf_anywhere(z).extended()
}

/// `erfc z = 1 - erf z`, without the cancellation.
///
/// Over- and underflow and range as in [`w`](super::w).
///
/// Accuracy: 2e-15 relative away from the zeros. Cost: some 0.1 microseconds. Source: DLMF 7.2.2.
///
/// ```
/// use merging_saddles::{Complex64, special::faddeeva::erfc};
/// // The first complex zero: DLMF table 7.13.2 (m); mpmath, 30 digits.
/// let zero = Complex64::new(-1.35481_01281, 1.99146_68428);
/// assert!(erfc(zero).norm() < 1e-8);
/// ```
pub fn erfc(z: Complex64) -> Complex64 {
    erfc_anywhere(z).plain()
}

/// [`erfc`] with the exponent apart.
///
/// ```
/// use merging_saddles::{Complex64, special::faddeeva::{erfc_extended, erfc_scaled}};
/// let z = Complex64::new(50.0, 0.0);
/// // erfc z = exp(-z^2) w(i z): DLMF 7.2.3.
/// let exact = erfc_scaled(z).re.ln() - 2500.0;
/// assert!((erfc_extended(z).ln_norm() - exact).abs() < 1e-12);
/// ```
pub fn erfc_extended(z: Complex64) -> Scaled {
    erfc_anywhere(z).extended()
}

/// The scaled complementary error function `exp(z^2) erfc z = w(i z)`.
///
/// Accuracy, cost and range as [`w`](super::w). Source: DLMF 7.2.3.
///
/// ```
/// use merging_saddles::{Complex64, special::faddeeva::erfc_scaled};
/// // Leading terms of DLMF 7.12.1: 1/(sqrt(pi) z) (1 - 1/(2 z^2)).
/// let v = erfc_scaled(Complex64::new(1e5, 0.0)).re;
/// assert!((v * 1e5 * std::f64::consts::PI.sqrt() - (1.0 - 0.5e-10)).abs() < 1e-15);
/// ```
pub fn erfc_scaled(z: Complex64) -> Complex64 {
    anywhere(Complex64::new(-z.im, z.re)).plain()
}

/// [`erfc_scaled`] with the exponent apart.
///
/// ```
/// use merging_saddles::{Complex64, special::faddeeva::erfc_scaled_extended};
/// // 2 exp(z^2) - exp(z^2) erfc(-z): DLMF 7.4.2.
/// let v = erfc_scaled_extended(Complex64::new(-30.0, 0.0));
/// assert!((v.ln_norm() - (900.0 + std::f64::consts::LN_2)).abs() < 1e-12);
/// ```
pub fn erfc_scaled_extended(z: Complex64) -> Scaled {
    anywhere(Complex64::new(-z.im, z.re)).extended()
}
