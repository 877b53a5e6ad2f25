//! Zeros of Ai, Bi and their derivatives (DLMF 9.9).
//!
//! From the tenth zero on, McMahon-type expansions in `t = 3 pi (4k - 1)/8` or `3 pi (4k - 3)/8`
//! (DLMF 9.9.6 to 9.9.21; the terms beyond those printed there follow from inverting the phase
//! function of DLMF 9.8 in rational arithmetic, `tests/data/make_airy_zero_series.py`). Below it
//! the same expansions, cut short, start Newton's iteration on the functions themselves.

use super::{airy, airy_real};
use crate::Error;
use num_complex::Complex64;
use std::f64::consts::{FRAC_PI_3, FRAC_PI_6, LN_2, PI, SQRT_2};
use std::ops::{Add, Mul};

/// A zero, and what is left there.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Zero<T> {
    /// Where it is.
    pub location: T,
    /// The derivative at a zero of the function; the function at a zero of the derivative.
    pub value: T,
}

/// Coefficients by powers of `t^-2`.
type Series = [f64; 8];

/// T: location of the zeros of Ai and Bi, DLMF 9.9.18.
const T: Series = [
    1.0,
    5.0 / 48.0,
    -5.0 / 36.0,
    77_125.0 / 82_944.0,
    -108_056_875.0 / 6_967_296.0,
    162_375_596_875.0 / 334_430_208.0,
    -1_622_671_914_671_875.0 / 66_217_181_184.0,
    1816653.1815056219,
];

/// V: the derivative at the former, 9.9.20.
const V: Series = [
    1.0,
    5.0 / 48.0,
    -1_525.0 / 4_608.0,
    2_397_875.0 / 663_552.0,
    -74_898_940_625.0 / 891_813_888.0,
    144_198_303_734_375.0 / 42_807_066_624.0,
    -207132.3110660789,
    18097282.066882778,
];

/// U: of those of the derivatives, 9.9.19.
const U: Series = [
    1.0,
    -7.0 / 48.0,
    35.0 / 288.0,
    -181_223.0 / 207_360.0,
    18_683_371.0 / 1_244_160.0,
    -91_145_884_361.0 / 191_102_976.0,
    24241.309444872288,
    -1803656.9459973376,
];

/// W: the function at the latter, 9.9.21.
const W: Series = [
    1.0,
    -7.0 / 96.0,
    1_673.0 / 6_144.0,
    -84_394_709.0 / 26_542_080.0,
    780_277_135_421.0 / 10_192_158_720.0,
    -204_449_051_051_945.0 / 65_229_815_808.0,
    195264.6754746758,
    -17214881.804894473,
];

/// From this zero on the expansions are right to the last place.
const EXPANDED: usize = 10;
/// Newton's steps below it; the starting values have two digits.
const STEPS: usize = 6;

fn sum<P: Copy + Mul<Output = P> + Add<f64, Output = P> + From<f64>>(series: &[f64], x: P) -> P {
    series.iter().rev().fold(P::from(0.0), |sum, c| sum * x + *c)
}

/// `3 pi (4k - j)/8`, for `k >= 1`.
fn argument(k: usize, j: f64) -> f64 {
    3.0 * PI * (4.0 * k as f64 - j) / 8.0
}

/// `(-1)^k`.
fn sign(k: usize) -> f64 {
    if k.is_multiple_of(2) { 1.0 } else { -1.0 }
}

fn numbered(k: usize) -> Result<(), Error> {
    if k == 0 {
        return Err(Error::domain("k", 0.0, "number the zeros from 1"));
    }
    Ok(())
}

/// A real zero: `-t^(2/3) place(t^-2)`, and `leading t^(power) rest(t^-2)` there, or by Newton's
/// iteration with `step(x) = (correction, value)`.
fn real_zero(
    t: f64,
    expanded: bool,
    [place, rest]: [&Series; 2],
    leading: f64,
    power: f64,
    step: impl Fn(f64) -> (f64, f64),
) -> Zero<f64> {
    let root = t.cbrt();
    let x = 1.0 / (t * t);
    if expanded {
        let value = leading * t.powf(power) / PI.sqrt() * sum(rest, x);
        return Zero { location: -root * root * sum(place, x), value };
    }
    let mut location = -root * root * sum(&place[..2], x);
    for _ in 0..STEPS {
        location -= step(location).0;
    }
    Zero { location, value: step(location).1 }
}

/// The k-th zero of Ai, `a_k`, and `Ai'(a_k)`; all are negative, numbered from the origin.
///
/// `a_k = -T(3 pi (4k-1)/8)`, `Ai'(a_k) = (-1)^(k-1) V(3 pi (4k-1)/8)` (DLMF 9.9.6, 9.9.7).
/// Accuracy: 1e-15, relative, for any k. Error: `k = 0`.
///
/// ```
/// use merging_saddles::special::airy::ai_zero;
/// // DLMF table 9.9.1.
/// let zero = ai_zero(1)?;
/// assert!((zero.location + 2.33810_74105).abs() < 1e-10);
/// assert!((zero.value - 0.70121_08227).abs() < 1e-10);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn ai_zero(k: usize) -> Result<Zero<f64>, Error> {
    numbered(k)?;
    Ok(real_zero(argument(k, 1.0), k >= EXPANDED, [&T, &V], -sign(k), 1.0 / 6.0, |x| {
        let v = airy_real(x);
        (v.ai / v.ai_prime, v.ai_prime)
    }))
}

/// The k-th zero of Ai', `a'_k`, and `Ai(a'_k)`.
///
/// `a'_k = -U(3 pi (4k-3)/8)`, `Ai(a'_k) = (-1)^(k-1) W(3 pi (4k-3)/8)` (DLMF 9.9.8, 9.9.9).
/// Accuracy: 1e-15, relative, for any k. Error: `k = 0`.
///
/// ```
/// use merging_saddles::special::airy::ai_prime_zero;
/// // DLMF table 9.9.1.
/// let zero = ai_prime_zero(1)?;
/// assert!((zero.location + 1.01879_29716).abs() < 1e-10);
/// assert!((zero.value - 0.53565_66560).abs() < 1e-10);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn ai_prime_zero(k: usize) -> Result<Zero<f64>, Error> {
    numbered(k)?;
    Ok(real_zero(argument(k, 3.0), k >= EXPANDED, [&U, &W], -sign(k), -1.0 / 6.0, |x| {
        let v = airy_real(x);
        (v.ai_prime / (x * v.ai), v.ai)
    }))
}

/// The k-th real zero of Bi, `b_k`, and `Bi'(b_k)`.
///
/// `b_k = -T(3 pi (4k-3)/8)`, `Bi'(b_k) = (-1)^(k-1) V(3 pi (4k-3)/8)` (DLMF 9.9.10, 9.9.11).
/// Accuracy: 1e-15, relative, for any k. Error: `k = 0`.
///
/// ```
/// use merging_saddles::special::airy::bi_zero;
/// // DLMF table 9.9.2.
/// let zero = bi_zero(1)?;
/// assert!((zero.location + 1.17371_32227).abs() < 1e-10);
/// assert!((zero.value - 0.60195_78880).abs() < 1e-10);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn bi_zero(k: usize) -> Result<Zero<f64>, Error> {
    numbered(k)?;
    Ok(real_zero(argument(k, 3.0), k >= EXPANDED, [&T, &V], -sign(k), 1.0 / 6.0, |x| {
        let v = airy_real(x);
        (v.bi / v.bi_prime, v.bi_prime)
    }))
}

/// The k-th real zero of Bi', `b'_k`, and `Bi(b'_k)`.
///
/// `b'_k = -U(3 pi (4k-1)/8)`, `Bi(b'_k) = (-1)^k W(3 pi (4k-1)/8)` (DLMF 9.9.12, 9.9.13).
/// Accuracy: 1e-15, relative, for any k. Error: `k = 0`.
///
/// ```
/// use merging_saddles::special::airy::bi_prime_zero;
/// // DLMF table 9.9.2.
/// let zero = bi_prime_zero(1)?;
/// assert!((zero.location + 2.29443_96826).abs() < 1e-10);
/// assert!((zero.value + 0.45494_43836).abs() < 1e-10);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn bi_prime_zero(k: usize) -> Result<Zero<f64>, Error> {
    numbered(k)?;
    Ok(real_zero(argument(k, 1.0), k >= EXPANDED, [&U, &W], sign(k), -1.0 / 6.0, |x| {
        let v = airy_real(x);
        (v.bi_prime / (x * v.bi), v.bi)
    }))
}

/// The k-th complex zero of Bi in the upper half plane, `beta_k`, and `Bi'(beta_k)`; the conjugates
/// are the other complex zeros.
///
/// `beta_k = e^(i pi/3) T(t)`, `Bi'(beta_k) = (-1)^k sqrt(2) e^(-i pi/6) V(t)` with
/// `t = 3 pi (4k-1)/8 + (3/4) i ln 2` (DLMF 9.9.14, 9.9.15).
/// Accuracy: 1e-15, relative to the modulus, for any k. Error: `k = 0`.
///
/// ```
/// use merging_saddles::special::airy::bi_complex_zero;
/// // DLMF table 9.9.3: e^(-i pi/3) beta_1 has modulus 2.354 and phase 0.095.
/// let (modulus, phase) = bi_complex_zero(1)?.location.to_polar();
/// assert!((modulus - 2.354).abs() < 1e-3);
/// assert!((phase - std::f64::consts::FRAC_PI_3 - 0.095).abs() < 1e-3);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn bi_complex_zero(k: usize) -> Result<Zero<Complex64>, Error> {
    numbered(k)?;
    let t = Complex64::new(argument(k, 1.0), 0.75 * LN_2);
    let x = 1.0 / (t * t);
    let direction = Complex64::from_polar(1.0, FRAC_PI_3);
    if k >= EXPANDED {
        let turned = Complex64::from_polar(sign(k) * SQRT_2 / PI.sqrt(), -FRAC_PI_6);
        let value = turned * t.powf(1.0 / 6.0) * sum(&V, x);
        return Ok(Zero { location: direction * t.powf(2.0 / 3.0) * sum(&T, x), value });
    }
    let mut z = direction * t.powf(2.0 / 3.0) * sum(&T[..2], x);
    for _ in 0..STEPS {
        let v = airy(z);
        z -= v.bi / v.bi_prime;
    }
    Ok(Zero { location: z, value: airy(z).bi_prime })
}

/// The k-th complex zero of Bi' in the upper half plane, `beta'_k`, and `Bi(beta'_k)`.
///
/// `beta'_k = e^(i pi/3) U(t)`, `Bi(beta'_k) = (-1)^(k-1) sqrt(2) e^(i pi/6) W(t)` with
/// `t = 3 pi (4k-3)/8 + (3/4) i ln 2` (DLMF 9.9.16, 9.9.17).
/// Accuracy: 1e-15, relative to the modulus, for any k. Error: `k = 0`.
///
/// ```
/// use merging_saddles::special::airy::{airy, bi_prime_complex_zero};
/// // By definition Bi' vanishes there (DLMF 9.9(i)) and Bi, known from the Wronskian 9.2.7, does not.
/// let zero = bi_prime_complex_zero(1)?;
/// let v = airy(zero.location);
/// assert!(v.bi_prime.norm() < 1e-15);
/// assert!((zero.value * v.ai_prime * std::f64::consts::PI + 1.0).norm() < 1e-14);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn bi_prime_complex_zero(k: usize) -> Result<Zero<Complex64>, Error> {
    numbered(k)?;
    let t = Complex64::new(argument(k, 3.0), 0.75 * LN_2);
    let x = 1.0 / (t * t);
    let direction = Complex64::from_polar(1.0, FRAC_PI_3);
    if k >= EXPANDED {
        let turned = Complex64::from_polar(-sign(k) * SQRT_2 / PI.sqrt(), FRAC_PI_6);
        let value = turned * t.powf(-1.0 / 6.0) * sum(&W, x);
        return Ok(Zero { location: direction * t.powf(2.0 / 3.0) * sum(&U, x), value });
    }
    let mut z = direction * t.powf(2.0 / 3.0) * sum(&U[..2], x);
    for _ in 0..STEPS {
        let v = airy(z);
        z -= v.bi_prime / (z * v.bi);
    }
    Ok(Zero { location: z, value: airy(z).bi })
}
