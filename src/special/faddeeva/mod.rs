//! The Faddeeva function and what hangs on it (DLMF chapter 7): w(z), error functions, Dawson's
//! integral, Fresnel integrals, for complex and real argument.
//!
//! Method: a quadrature sum with the residue of a pole as correction near the origin, Gauss-Hermite
//! sums outside, `exp(-z^2)` with its square in double-double (sources and regions: the file `kernel`);
//! Maclaurin series where a function is small at the origin.
//!
//! Accuracy: relative to the modulus away from zeros. Each function is a sum of at most two terms, one
//! with `exp(-z^2)` and one algebraic; near a zero, where the terms cancel (w in the lower half plane
//! near the diagonals, for instance), the error counts against the larger of the two.
//!
//! Range: `exp(-z^2)` has the phase `2 x y`, which is known exactly for exact inputs up to `|x|`, `|y|` =
//! 1e9. Beyond, the functions return what needs no phase (w in the upper half plane; limits; zero and
//! infinity where that is the value) and NaN for the rest. NaN in gives NaN out.

mod error;
mod fresnel;
mod kernel;
mod nodes;
mod real;
mod slices;
mod split;

pub use self::error::{erf, erf_extended, erfc, erfc_extended, erfc_scaled, erfc_scaled_extended};
pub use self::fresnel::{
    Fresnel, complex_fresnel, complex_fresnel_extended, fresnel, fresnel_extended, fresnel_real,
};
pub use self::real::{dawson_real, erf_real, erfc_real, erfc_scaled_real};
pub use self::slices::*;

use self::kernel::{Wave, exponential, near, sum};
use self::split::{Split, odd};
use crate::Scaled;
use num_complex::Complex64;
use std::f64::consts::FRAC_2_SQRT_PI;

const HALF_ROOT_PI: f64 = 0.886_226_925_452_758;
/// Maclaurin series serve w and erf below this `|z|^2`.
const SMALL: f64 = 0.25;
const NAN: Complex64 = Complex64::new(f64::NAN, f64::NAN);

/// Below this height K counts as 1 where the quadrature sum stands alone: `exp(-x^2)` is below 1e-18 there
/// and seen in Re w at most.
const STRIP: f64 = 0.05;

/// w in the first quadrant.
#[inline]
fn upper(x: f64, y: f64) -> Split {
    let (sum, offset) = sum(x, y);
    let (re, decay) = ((x - y) * (x + y), 4.0 * std::f64::consts::PI * y);
    if near(x, y) {
        // Beyond 2 pi the correction is no longer one; it is below 2e-18 on the boundary.
        if y < std::f64::consts::TAU && (re + decay < 41.0 || y < STRIP) {
            let (e, exponent) = exponential(x, y);
            return Split { mantissa: e * Wave::at(y, offset).k(), exponent, rest: sum };
        }
    } else if y < STRIP && x < 28.0 {
        let (e, exponent) = exponential(x, y);
        return Split { mantissa: e.re.into(), exponent, rest: sum };
    }
    Split::moderate(sum)
}

/// w(-z) for z in the first quadrant: `exp(-z^2) (2 - K) - S`.
#[inline]
fn lower(x: f64, y: f64) -> Split {
    let (sum, offset) = sum(x, y);
    let (e, exponent) = exponential(x, y);
    let mantissa = if near(x, y) {
        e * Wave::at(y, offset).two_less_k()
    } else if y < STRIP {
        e
    } else {
        e * 2.0
    };
    Split { mantissa, exponent, rest: -sum }
}

#[inline]
fn anywhere(z: Complex64) -> Split {
    let (x, y) = (z.re.abs(), z.im.abs());
    if x.is_nan() || y.is_nan() {
        return Split::moderate(NAN);
    }
    if x * x + y * y < SMALL {
        // exp(-z^2) + (2 i/sqrt(pi)) F(z): DLMF 7.5.1. The sum would lose digits of Im w.
        let f = z * polynomial(&DAWSON[..14], z * z) * FRAC_2_SQRT_PI;
        let (e, exponent) = exponential(x, y);
        let mantissa = Complex64::new(e.re, e.im.copysign(-(z.re * z.im)));
        return Split { mantissa, exponent, rest: Complex64::new(-f.im, f.re) };
    }
    // w(-conj z) = conj w(z): DLMF 7.4.3.
    if z.im >= 0.0 {
        let value = upper(x, y);
        if z.re < 0.0 { value.conj() } else { value }
    } else {
        let value = lower(x, y);
        if z.re > 0.0 { value.conj() } else { value }
    }
}

/// `w(z) = exp(-z^2) erfc(-i z)`.
///
/// Infinite components where it overflows in the lower half plane, NaN where it is not known (see the
/// module's page).
///
/// Accuracy: 1e-15 relative, in the upper half plane also of the real and imaginary part each. Cost:
/// some 0.1 microseconds. Source: DLMF 7.2.3.
///
/// ```
/// use merging_saddles::{Complex64, special::faddeeva::w};
/// assert_eq!(w(Complex64::new(0.0, 0.0)), Complex64::new(1.0, 0.0)); // DLMF 7.2.3, 7.2.4
/// // On the real axis Re w = exp(-x^2) (DLMF 7.2.3, 7.2.1).
/// let v = w(Complex64::new(5.0, 0.0));
/// assert!((v.re - (-25f64).exp()).abs() < 1e-15 * v.re);
/// ```
pub fn w(z: Complex64) -> Complex64 {
    anywhere(z).plain()
}

/// [`w`] with the exponent apart: nothing overflows for `|z| <= 1e9`.
///
/// Accuracy and cost as [`w`].
///
/// ```
/// use merging_saddles::{Complex64, special::faddeeva::w_extended};
/// // w(-1000 i) = 2 exp(10^6) - w(1000 i): DLMF 7.4.3.
/// let v = w_extended(Complex64::new(0.0, -1000.0));
/// assert!((v.ln_norm() - (1e6 + std::f64::consts::LN_2)).abs() < 1e-9);
/// ```
pub fn w_extended(z: Complex64) -> Scaled {
    anywhere(z).extended()
}

/// Dawson's integral in the first quadrant: `(i sqrt(pi)/2)(exp(-z^2) (1 - K) - S)`.
#[inline]
fn dawson_first(x: f64, y: f64) -> Split {
    if x * x + y * y < 1.0 {
        let z = Complex64::new(x, y);
        return Split::moderate(z * polynomial(&DAWSON, z * z));
    }
    let (sum, offset) = sum(x, y);
    let (e, exponent) = exponential(x, y);
    let mantissa = if near(x, y) {
        e * Wave::at(y, offset).one_less_k()
    } else if y < STRIP {
        Complex64::ZERO
    } else {
        e
    };
    let turn = |v: Complex64| Complex64::new(-v.im, v.re) * HALF_ROOT_PI;
    Split { mantissa: turn(mantissa), exponent, rest: turn(-sum) }
}

/// Maclaurin series of Dawson's integral, `(-2)^n/(2n+1)!!`; all for `|z| < 1`, 14 for `|z| < 1/2`.
const DAWSON: [f64; 20] = {
    let mut out = [1.0; 20];
    let mut n = 1;
    while n < 20 {
        out[n] = out[n - 1] * -2.0 / (2 * n + 1) as f64;
        n += 1;
    }
    out
};

/// A polynomial with real coefficients at a complex point (three-term form; common practice).
#[inline]
fn polynomial(coefficients: &[f64], at: Complex64) -> Complex64 {
    let (twice, square) = (2.0 * at.re, at.norm_sqr());
    let (mut b1, mut b2) = (0.0, 0.0);
    for a in coefficients[1..].iter().rev() {
        (b1, b2) = ((a - square * b2) + twice * b1, b1);
    }
    Complex64::new((coefficients[0] - square * b2) + at.re * b1, at.im * b1)
}

#[inline]
fn dawson_anywhere(z: Complex64) -> Split {
    if z.re.is_nan() || z.im.is_nan() { Split::moderate(NAN) } else { odd(z, dawson_first) }
}

/// Dawson's integral `F(z) = exp(-z^2) integral from 0 to z of exp(t^2) dt`.
///
/// Overflow (near the imaginary axis) and range as in [`w`].
///
/// Accuracy: 2e-15 relative. Cost: some 0.1 microseconds. Source: DLMF 7.2.5.
///
/// ```
/// use merging_saddles::{Complex64, special::faddeeva::{dawson, w}};
/// let z = Complex64::new(0.6, 0.8);
/// // 2 F(z) = i sqrt(pi) (exp(-z^2) - w(z)): DLMF 7.5.1.
/// let exact = Complex64::new(0.0, 0.5 * std::f64::consts::PI.sqrt()) * ((-z * z).exp() - w(z));
/// assert!((dawson(z) - exact).norm() < 1e-15);
/// ```
pub fn dawson(z: Complex64) -> Complex64 {
    dawson_anywhere(z).plain()
}

/// [`dawson`] with the exponent apart: nothing overflows for `|z| <= 1e9`.
///
/// ```
/// use merging_saddles::{Complex64, special::faddeeva::dawson_extended};
/// // F(i y) = (i sqrt(pi)/2) (exp(y^2) - w(i y)): DLMF 7.5.1; here the exponential is all.
/// let v = dawson_extended(Complex64::new(0.0, 100.0));
/// let exact = 1e4 + (0.5 * std::f64::consts::PI.sqrt()).ln();
/// assert!((v.ln_norm() - exact).abs() < 1e-11 && v.mantissa.re == 0.0);
/// ```
pub fn dawson_extended(z: Complex64) -> Scaled {
    dawson_anywhere(z).extended()
}
