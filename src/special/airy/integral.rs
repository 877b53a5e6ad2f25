//! Integrals of Ai (DLMF 9.10).
//!
//! Through the Scorer functions: with the algebraic solution V of the module `scorer`,
//! `pi (Ai V' - Ai' V)` is minus the integral from z to infinity for `arg z <= 2 pi/3`, and the one
//! from minus infinity to z beyond (DLMF 9.10.1, 9.10.2; V and Gi differ there by a multiple of Ai,
//! which drops out). Near 0 the Maclaurin series.

use super::asymptotic::{self, FARTHEST};
use super::pair::{Fate, NAN, Value, fate, in_range, pair, pair_real};
use super::scorer::{algebraic, algebraic_real};
use super::taylor::{self, Point};
use crate::Scaled;
use crate::scaled::ldexp;
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
/// Accuracy, relative to the modulus: 2e-15 away from the zeros. Cost: some 0.25 microseconds.
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
    integral_any(z)
}

/// [`ai_integral`] with the exponents carried apart.
///
/// ```
/// use merging_saddles::{Complex64, special::airy::{ai_integral_extended, airy_extended}};
/// // The integral from x on is Ai/sqrt(x) (1 - 41/(48 zeta) ...), DLMF 9.10.4 and 9.7.5: e^-1000000 here.
/// let x = 1.5e6f64.powf(2.0 / 3.0);
/// let v = ai_integral_extended(Complex64::new(x, 0.0)).to_infinity;
/// let ai = airy_extended(Complex64::new(x, 0.0)).ai;
/// assert_eq!(v.exponent.abs() / 1000, 1442);
/// assert!((v.ln_norm() - ai.ln_norm() + 0.5 * x.ln()).abs() < 2e-6);
/// ```
pub fn ai_integral_extended(z: Complex64) -> AiryIntegral<Scaled> {
    integral_any(z)
}

#[inline]
fn integral_any<T: Value>(z: Complex64) -> AiryIntegral<T> {
    if z.im.is_sign_negative() {
        let v: AiryIntegral<T> = integral_above(z.conj());
        let (from_zero, to_infinity) = (v.from_zero.conjugate(), v.to_infinity.conjugate());
        return AiryIntegral { from_zero, to_infinity };
    }
    integral_above(z)
}

fn integral_above<T: Value>(z: Complex64) -> AiryIntegral<T> {
    let plain = |v: f64| T::assemble(v.into(), 0);
    if z.im == 0.0 {
        let (v, n) = real_parts(z.re);
        let assemble = |v: f64, n: i64| T::assemble(v.into(), n);
        return AiryIntegral { from_zero: plain(v[0]), to_infinity: assemble(v[1], n) };
    }
    let (to_infinity, minus) = if in_range(z) {
        let [v, v_prime] = algebraic(z);
        let p = pair(z);
        let wronskian = |a: Complex64, a_prime: Complex64| PI * (a * v_prime - a_prime * v);
        // Its two parts, the second beyond the Stokes line only.
        let (one, two) = (wronskian(p.a, p.a_prime), wronskian(p.b, p.b_prime));
        let sum = |sign: f64| {
            let falling = T::assemble(one * sign, p.n);
            if !p.beyond {
                return falling;
            }
            falling + T::assemble(Complex64::I * two * (0.5 * sign), -p.n)
        };
        if asymptotic::beyond_stokes(z) {
            (plain(1.0) + sum(-1.0), plain(-1.0) + sum(1.0))
        } else {
            (sum(-1.0), sum(1.0))
        }
    } else if fate(z) == Fate::Vanishes {
        (plain(0.0), plain(0.0))
    } else {
        (T::assemble(NAN, 0), T::assemble(NAN, 0))
    };
    let from_zero = if z.norm_sqr() < SMALL * SMALL {
        T::assemble(small(z), 0)
    } else {
        plain(1.0 / 3.0) + minus
    };
    AiryIntegral { from_zero, to_infinity }
}

/// The integrals of Ai from 0 to x and from x to infinity, at a real point.
///
/// Formulas, accuracy and range as in [`ai_integral`]; infinity has its limits 1/3, 0 and -2/3, 1.
/// Cost: some 0.1 microseconds.
///
/// ```
/// use merging_saddles::special::airy::ai_integral_real;
/// let v = ai_integral_real(f64::NEG_INFINITY);
/// // DLMF 9.10.11.
/// assert_eq!((v.from_zero, v.to_infinity), (-2.0 / 3.0, 1.0));
/// ```
pub fn ai_integral_real(x: f64) -> AiryIntegral<f64> {
    let ([from_zero, to_infinity], n) = real_parts(x);
    AiryIntegral { from_zero, to_infinity: ldexp(to_infinity, n) }
}

/// The integral from 0 to x, and the one from x on in units of `2^n`.
fn real_parts(x: f64) -> ([f64; 2], i64) {
    if x == f64::NEG_INFINITY {
        return ([-2.0 / 3.0, 1.0], 0);
    }
    if x > FARTHEST {
        return ([1.0 / 3.0, 0.0], 0);
    }
    if x.is_nan() || x < -FARTHEST {
        return ([f64::NAN; 2], 0);
    }
    let [v, v_prime] = algebraic_real(x);
    let ([a, a_prime, ..], n) = pair_real(x);
    let wronskian = PI * (a * v_prime - a_prime * v);
    let to_infinity = if x >= 0.0 { wronskian } else { 1.0 - wronskian };
    if x.abs() < SMALL {
        return ([small(x), to_infinity], n);
    }
    ([1.0 / 3.0 - ldexp(to_infinity, n), to_infinity], n)
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
