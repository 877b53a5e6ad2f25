//! The numerical core: analytic functions held on a circle, divided and brought to normal form.
//!
//! Method. A function analytic in `|u| <= R` is held by its values at [`POINTS`] equally spaced
//! points of `|u| = R` and by its Taylor coefficients in `v = u/R`, the first [`KEPT`] of them;
//! one fast Fourier transform leads from the one to the other. On that rest
//! - [`divide`]: Weierstrass division by a polynomial whose zeros all lie inside the ring,
//! - [`NormalForm`]: `f(z(u)) = A + u^(K+2) + x_K u^K + .. + x_1 u` (the cuspoid unfolding,
//!   DLMF 36.2.1) by Newton's method with that division,
//! - [`Orders`]: the coefficients of the uniform expansion by repeated division and
//!   differentiation (integration by parts).
//!
//! Nothing here needs a saddle point, so nothing degenerates when saddles merge.
//!
//! Source: C. Chester, B. Friedman, F. Ursell, Proc. Camb. Phil. Soc. 53 (1957) 599 for two
//! saddles; N. Bleistein, Comm. Pure Appl. Math. 19 (1966) 353 for the integration by parts;
//! Weierstrass division is textbook material.

mod based;
mod division;
mod normal_form;
mod orders;

pub(crate) use based::{Based, BasedForm, BasedOrders, MAX_DEGREE};
pub use division::divide;
pub use normal_form::NormalForm;
pub use orders::{MAX_ORDERS, Orders, Start};

use num_complex::Complex64;
use rustfft::{Fft, FftPlanner};
use std::sync::{Arc, OnceLock};

/// Points on the ring.
pub const POINTS: usize = 128;
/// Taylor coefficients kept; the other half of the transform holds the negative powers, which
/// vanish for a function that is analytic inside.
pub const KEPT: usize = POINTS / 2;
/// Points of a first rough look at a ring.
const COARSE: usize = 32;
/// The largest number of saddles in one cluster.
pub const MAX_SADDLES: usize = 5;

/// Values on the ring, or all [`POINTS`] coefficients of their transform.
pub type Values = [Complex64; POINTS];
/// Taylor coefficients in `v = u/R`.
pub type Coefficients = [Complex64; KEPT];

pub(crate) const ZERO: Complex64 = Complex64::new(0.0, 0.0);
pub(crate) const I: Complex64 = Complex64::new(0.0, 1.0);

/// The transforms of one length.
struct Pair {
    forward: Arc<dyn Fft<f64>>,
    inverse: Arc<dyn Fft<f64>>,
}

struct Transforms {
    full: Pair,
    coarse: Pair,
    /// `exp(2 pi i s/POINTS)`.
    roots: Values,
}

fn transforms() -> &'static Transforms {
    static ONCE: OnceLock<Transforms> = OnceLock::new();
    ONCE.get_or_init(|| {
        let mut planner = FftPlanner::new();
        let mut pair = |length| Pair {
            forward: planner.plan_fft_forward(length),
            inverse: planner.plan_fft_inverse(length),
        };
        Transforms { full: pair(POINTS), coarse: pair(COARSE), roots: std::array::from_fn(root) }
    })
}

/// `exp(2 pi i s/POINTS)` by the symmetries of the circle: the rounding of larger angles would turn
/// all points one way, and shift the mean of a phase over the ring.
fn root(s: usize) -> Complex64 {
    const QUARTER: usize = POINTS / 4;
    let within = s % QUARTER;
    let angle = |n: usize| std::f64::consts::FRAC_PI_2 * n as f64 / QUARTER as f64;
    let z = if 2 * within <= QUARTER {
        let (sin, cos) = angle(within).sin_cos();
        Complex64::new(cos, sin)
    } else {
        let (sin, cos) = angle(QUARTER - within).sin_cos();
        Complex64::new(sin, cos)
    };
    (0..s / QUARTER).fold(z, |z, _| z * I)
}

/// The transforms of length `N`, [`POINTS`] or [`COARSE`].
fn pair<const N: usize>() -> &'static Pair {
    const { assert!(N == POINTS || N == COARSE) };
    if N == POINTS { &transforms().full } else { &transforms().coarse }
}

/// The points of the unit circle that a ring is sampled at.
pub fn unit_points() -> &'static Values {
    &transforms().roots
}

/// From values on the ring to coefficients: index `n < N/2` belongs to `v^n`, index `N - n` to
/// `v^(-n)`.
pub fn to_coefficients<const N: usize>(values: &mut [Complex64; N]) {
    let mut scratch = [ZERO; N];
    pair::<N>().forward.process_with_scratch(values, &mut scratch);
    for c in values.iter_mut() {
        *c *= 1.0 / N as f64;
    }
}

/// From Taylor coefficients to values on the ring.
pub fn to_values(coefficients: &Coefficients) -> Values {
    values_of::<POINTS>(coefficients)
}

/// The same on `N` points, by the first `N/2` coefficients.
fn values_of<const N: usize>(coefficients: &Coefficients) -> [Complex64; N] {
    let mut values = [ZERO; N];
    values[..N / 2].copy_from_slice(&coefficients[..N / 2]);
    let mut scratch = [ZERO; N];
    pair::<N>().inverse.process_with_scratch(&mut values, &mut scratch);
    values
}

/// The Taylor half of a full transform.
pub(crate) fn taylor(full: &Values) -> Coefficients {
    std::array::from_fn(|n| full[n])
}

/// `sum c_n v^n`.
pub(crate) fn evaluate(coefficients: &[Complex64], v: Complex64) -> Complex64 {
    coefficients.iter().rev().fold(ZERO, |sum, &c| sum * v + c)
}

/// How far the coefficients have not decayed: the largest of the last quarter of the Taylor half
/// and of the negative half, over the largest of all from index `from` on (or over `least`, if that
/// is more).
pub(crate) fn tail(full: &Values, from: usize, least: f64) -> f64 {
    let largest = |part: &[Complex64]| part.iter().fold(0.0f64, |m, c| m.max(c.norm_sqr()));
    let all = largest(&full[from..KEPT]).max(least * least);
    let rest = largest(&full[KEPT * 3 / 4..]);
    if all > 0.0 && all.is_finite() { (rest / all).sqrt() } else { f64::INFINITY }
}

/// [`tail`] of a map, which has no negative powers.
fn map_tail(map: &Coefficients) -> f64 {
    let mut full = [ZERO; POINTS];
    full[..KEPT].copy_from_slice(map);
    tail(&full, 1, 0.0)
}

/// Coefficients of powers on a ring `factor` times as large.
fn rescale(coefficients: &mut [Complex64], factor: f64) {
    let mut power = 1.0;
    for c in coefficients {
        *c *= power;
        power *= factor;
    }
}

/// What [`tail`] will be on a ring larger by `factor`, by the decay from the second quarter of the
/// coefficients to the third; 0 where rounding hides it.
pub(crate) fn foreseen_tail(coefficients: &Coefficients, from: usize, factor: f64) -> f64 {
    const QUARTER: usize = KEPT / 4;
    let largest = |part: &[Complex64]| part.iter().fold(0.0f64, |m, c| m.max(c.norm_sqr())).sqrt();
    let all = largest(&coefficients[from..]);
    let second = largest(&coefficients[QUARTER..2 * QUARTER]);
    let third = largest(&coefficients[2 * QUARTER..3 * QUARTER]);
    if third > 50.0 * f64::EPSILON * all {
        third / second * third / all * factor.powi(3 * QUARTER as i32)
    } else {
        0.0
    }
}

/// `v` with `z(v) = z` for a map given by its coefficients, by Newton's method from `start`; None if it
/// leaves the neighbourhood of the disc.
pub(crate) fn preimage(map: &Coefficients, z: Complex64, start: Complex64) -> Option<Complex64> {
    let mut v = start;
    let size = map[1].norm();
    for _ in 0..40 {
        let (mut value, mut slope) = (ZERO, ZERO);
        for &c in map.iter().rev() {
            slope = slope * v + value;
            value = value * v + c;
        }
        let mut step = (z - value) / slope;
        if !(step.re.is_finite() && step.im.is_finite()) {
            return None;
        }
        if step.norm() > 0.3 {
            step *= 0.3 / step.norm();
        }
        v += step;
        if v.norm() > 1.3 {
            return None;
        }
        if step.norm() < 1e-15 || (z - value).norm() < 1e-16 * size {
            return Some(v);
        }
    }
    // Rounding may keep the last digit in motion.
    ((z - evaluate(map, v)).norm() < 1e-13 * (size + z.norm())).then_some(v)
}
