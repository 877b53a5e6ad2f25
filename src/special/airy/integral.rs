//! Integrals of Ai (DLMF 9.10).
//!
//! Through the Scorer functions: with the algebraic solution V of the module `scorer`,
//! `pi (Ai V' - Ai' V)` is minus the integral from z to infinity for `arg z <= 2 pi/3`, and the one
//! from minus infinity to z beyond (DLMF 9.10.1, 9.10.2; V and Gi differ there by a multiple of Ai,
//! which drops out). Near 0 the Maclaurin series.

use super::pair::{Fate, NAN, fate, in_range, pair};
use super::scorer::{algebraic, algebraic_real};
use super::taylor::{self, Point};
use super::{Airy, airy_real, asymptotic};
use num_complex::Complex64;
use std::f64::consts::PI;

/// The integral of Ai from two starting points.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct AiryIntegral<T> {
    /// The integral of Ai from 0 to z.
    pub from_zero: T,
    /// The integral of Ai from z to infinity in `|arg t| < pi/3`.
    pub to_infinity: T,
}

/// The integrals of Ai from 0 to z and from z to infinity (their sum is 1/3, DLMF 9.10.11).
///
/// `to_infinity = pi (Ai Gi' - Ai' Gi)` (DLMF 9.10.1) in a form that does not cancel where Ai decays,
/// `1 - pi (Ai Hi' - Ai' Hi)` (9.10.2) beyond `arg z = +-2 pi/3`; `from_zero` for `|z| < 1.5` by the
/// power series (9.4.1, integrated). Overflow, NaN and range as in [`scorer`](super::scorer()).
///
/// Accuracy, relative to the modulus: 1e-15 away from the zeros. Cost: some 0.3 microseconds.
///
/// ```
/// use merging_saddles::{Complex64, special::airy::ai_integral};
/// // The integral over the positive axis is 1/3: DLMF 9.10.11.
/// let v = ai_integral(Complex64::new(0.0, 0.0));
/// assert!((v.to_infinity.re - 1.0 / 3.0).abs() < 2e-16 && v.from_zero.re == 0.0);
/// // Over the negative axis it is 2/3: also DLMF 9.10.11; the rest is of size |z|^(-3/4).
/// let v = ai_integral(Complex64::new(-1e8, 0.0));
/// assert!((v.from_zero.re + 2.0 / 3.0).abs() < 1e-6);
/// ```
pub fn ai_integral(z: Complex64) -> AiryIntegral<Complex64> {
    if z.im.is_sign_negative() {
        let v = integral_above(z.conj());
        return AiryIntegral { from_zero: v.from_zero.conj(), to_infinity: v.to_infinity.conj() };
    }
    integral_above(z)
}

fn integral_above(z: Complex64) -> AiryIntegral<Complex64> {
    if z.im == 0.0 {
        let v = ai_integral_real(z.re);
        return AiryIntegral { from_zero: v.from_zero.into(), to_infinity: v.to_infinity.into() };
    }
    let to_infinity = if in_range(z) {
        let [v, v_prime] = algebraic(z);
        let airy: Airy<Complex64> = pair(z).airy();
        let wronskian = PI * (airy.ai * v_prime - airy.ai_prime * v);
        if asymptotic::beyond_stokes(z) { 1.0 - wronskian } else { -wronskian }
    } else if fate(z) == Fate::Vanishes {
        Complex64::ZERO
    } else {
        NAN
    };
    let from_zero = if z.norm_sqr() < SMALL * SMALL { small(z) } else { 1.0 / 3.0 - to_infinity };
    AiryIntegral { from_zero, to_infinity }
}

/// The integrals of Ai from 0 to x and from x to infinity, at a real point.
///
/// Formulas and range as in [`ai_integral`]; infinity has its limits 1/3, 0 and -2/3, 1.
///
/// ```
/// use merging_saddles::special::airy::ai_integral_real;
/// let v = ai_integral_real(f64::NEG_INFINITY);
/// // DLMF 9.10.11.
/// assert_eq!((v.from_zero, v.to_infinity), (-2.0 / 3.0, 1.0));
/// ```
pub fn ai_integral_real(x: f64) -> AiryIntegral<f64> {
    if x == f64::NEG_INFINITY {
        return AiryIntegral { from_zero: -2.0 / 3.0, to_infinity: 1.0 };
    }
    if x == f64::INFINITY {
        return AiryIntegral { from_zero: 1.0 / 3.0, to_infinity: 0.0 };
    }
    let [v, v_prime] = algebraic_real(x);
    let airy = airy_real(x);
    let wronskian = PI * (airy.ai * v_prime - airy.ai_prime * v);
    let to_infinity = if x >= 0.0 { wronskian } else { 1.0 - wronskian };
    let from_zero = if x.abs() < SMALL { small(x) } else { 1.0 / 3.0 - to_infinity };
    AiryIntegral { from_zero, to_infinity }
}

/// Below this the integral from 0 is summed as a power series.
const SMALL: f64 = 1.5;

/// The Maclaurin series of Ai, integrated: terms `z^(3k+1)` and `z^(3k+2)`.
const MACLAURIN: [[f64; 2]; 10] = {
    let mut out = [[0.0; 2]; 10];
    let node = taylor::ORIGIN;
    let (mut a, mut b, mut k) = (node[0], node[1] / 2.0, 0);
    while k < 10 {
        out[k] = [a, b];
        let n = 3.0 * k as f64;
        // Ai: c_(n+3) = c_n/((n+3)(n+2)); integration turns c_n into c_n/(n+1).
        a *= (n + 1.0) / ((n + 2.0) * (n + 3.0) * (n + 4.0));
        b *= (n + 2.0) / ((n + 3.0) * (n + 4.0) * (n + 5.0));
        k += 1;
    }
    out
};

fn small<P: Point>(z: P) -> P {
    let [first, second] = P::polynomials(&MACLAURIN, z * z * z);
    z * (first + z * second)
}
