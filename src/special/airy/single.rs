//! Ai alone and Bi alone: the values without the derivatives, at some two thirds of the cost.
//!
//! Method, regions and sources as for all four.

use super::asymptotic;
use super::nodes::RADIUS;
use super::pair::{Value, airy_beyond, in_range};
use super::taylor;
use crate::scaled::ldexp;
use crate::special::double_double::{exp_both, sin_cos};
use num_complex::Complex64;

/// `Ai = a 2^n + (i/2) b 2^-n` beyond the Stokes line, else `a 2^n`; `Bi = i a 2^n + share b 2^-n`.
struct Values {
    falling: Complex64,
    rising: Complex64,
    n: i64,
    beyond: bool,
}

/// For `RADIUS <= |z| <= FARTHEST`, `Im z >= 0`.
#[inline]
fn far(z: Complex64) -> Values {
    let ([a, b], (re, im), beyond) = asymptotic::far_values(z);
    let (sin, cos) = sin_cos(im);
    let (up, down, n) = exp_both(re.minus());
    Values {
        falling: a * Complex64::new(cos * up, -sin * up),
        rising: b * Complex64::new(cos * down, sin * down),
        n,
        beyond,
    }
}

#[inline]
fn in_upper(z: Complex64, upper: impl Fn(Complex64) -> Complex64) -> Complex64 {
    if z.im.is_sign_negative() { upper(z.conj()).conj() } else { upper(z) }
}

/// Ai at a complex point.
///
/// Overflow, underflow, NaN, range and accuracy as in [`airy`](super::airy). Source: DLMF 9.2, 9.7.
///
/// ```
/// use merging_saddles::{Complex64, special::airy::ai};
/// // Ai(0) = 3^(-2/3)/Gamma(2/3): DLMF 9.2.3.
/// assert!((ai(Complex64::new(0.0, 0.0)).re - 0.355028053887817239).abs() < 1e-16);
/// ```
pub fn ai(z: Complex64) -> Complex64 {
    in_upper(z, |z| {
        if z.im == 0.0 {
            return ai_real(z.re).into();
        }
        if z.norm_sqr() < RADIUS * RADIUS {
            return taylor::near_ai(z);
        }
        if !in_range(z) {
            return airy_beyond::<Complex64>(z).ai;
        }
        let v = far(z);
        let falling = Complex64::assemble(v.falling, v.n);
        if v.beyond {
            falling + Complex64::assemble(Complex64::I * v.rising * 0.5, -v.n)
        } else {
            falling
        }
    })
}

/// Bi at a complex point.
///
/// Overflow, underflow, NaN, range and accuracy as in [`airy`](super::airy). Source: DLMF 9.2, 9.7.
///
/// ```
/// use merging_saddles::{Complex64, special::airy::bi};
/// // Bi(0) = 3^(-1/6)/Gamma(2/3): DLMF 9.2.5.
/// assert!((bi(Complex64::new(0.0, 0.0)).re - 0.614926627446000736).abs() < 2e-16);
/// ```
pub fn bi(z: Complex64) -> Complex64 {
    in_upper(z, |z| {
        if z.im == 0.0 {
            return bi_real(z.re).into();
        }
        if z.norm_sqr() < RADIUS * RADIUS {
            return taylor::near_bi(z);
        }
        if !in_range(z) {
            return airy_beyond::<Complex64>(z).bi;
        }
        let v = far(z);
        let share = if v.beyond { 0.5 } else { 1.0 };
        Complex64::assemble(Complex64::I * v.falling, v.n)
            + Complex64::assemble(v.rising * share, -v.n)
    })
}

/// Ai and Bi as mantissas for `2^n` and `2^-n`; `|x| <= FARTHEST`.
#[inline]
fn values_real(x: f64) -> ([f64; 2], i64) {
    if x.abs() < RADIUS {
        return (taylor::near_real_values(x), 0);
    }
    let (xi, w) = asymptotic::phase_real(x.abs());
    if x < 0.0 {
        return (asymptotic::oscillating_values(xi.hi, w, sin_cos(xi)), 0);
    }
    let [a, b] = asymptotic::growing_values(xi.hi, w);
    let (up, down, n) = exp_both(xi.minus());
    ([a * up, b * down], n)
}

/// Ai at a real point. Range and accuracy as in [`airy_real`](super::airy_real).
///
/// ```
/// use merging_saddles::special::airy::ai_real;
/// // The first zero: DLMF table 9.9.1.
/// assert!(ai_real(-2.338107410459767).abs() < 1e-15);
/// ```
pub fn ai_real(x: f64) -> f64 {
    let z = Complex64::new(x, 0.0);
    if !in_range(z) {
        return airy_beyond::<Complex64>(z).ai.re;
    }
    let ([a, _], n) = values_real(x);
    ldexp(a, n)
}

/// Bi at a real point. Range and accuracy as in [`airy_real`](super::airy_real).
///
/// ```
/// use merging_saddles::special::airy::bi_real;
/// // The first zero: DLMF table 9.9.2.
/// assert!(bi_real(-1.17371_32227).abs() < 1e-10);
/// ```
pub fn bi_real(x: f64) -> f64 {
    let z = Complex64::new(x, 0.0);
    if !in_range(z) {
        return airy_beyond::<Complex64>(z).bi.re;
    }
    let ([_, b], n) = values_real(x);
    ldexp(b, -n)
}
