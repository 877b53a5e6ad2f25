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
/// The largest number of saddles in one cluster.
pub const MAX_SADDLES: usize = 5;

/// Values on the ring, or all [`POINTS`] coefficients of their transform.
pub type Values = [Complex64; POINTS];
/// Taylor coefficients in `v = u/R`.
pub type Coefficients = [Complex64; KEPT];

pub(crate) const ZERO: Complex64 = Complex64::new(0.0, 0.0);
pub(crate) const I: Complex64 = Complex64::new(0.0, 1.0);

struct Transforms {
    forward: Arc<dyn Fft<f64>>,
    inverse: Arc<dyn Fft<f64>>,
    /// `exp(2 pi i s/POINTS)`.
    roots: Values,
}

fn transforms() -> &'static Transforms {
    static ONCE: OnceLock<Transforms> = OnceLock::new();
    ONCE.get_or_init(|| {
        let mut planner = FftPlanner::new();
        Transforms {
            forward: planner.plan_fft_forward(POINTS),
            inverse: planner.plan_fft_inverse(POINTS),
            roots: std::array::from_fn(|s| {
                Complex64::from_polar(1.0, 2.0 * std::f64::consts::PI * s as f64 / POINTS as f64)
            }),
        }
    })
}

/// The points of the unit circle that a ring is sampled at.
pub fn unit_points() -> &'static Values {
    &transforms().roots
}

/// From values on the ring to coefficients: index `n < KEPT` belongs to `v^n`, index
/// `POINTS - n` to `v^(-n)`.
pub fn to_coefficients(values: &mut Values) {
    let mut scratch = [ZERO; POINTS];
    transforms().forward.process_with_scratch(values, &mut scratch);
    for c in values.iter_mut() {
        *c /= POINTS as f64;
    }
}

/// From Taylor coefficients to values on the ring.
pub fn to_values(coefficients: &Coefficients) -> Values {
    let mut values = [ZERO; POINTS];
    values[..KEPT].copy_from_slice(coefficients);
    let mut scratch = [ZERO; POINTS];
    transforms().inverse.process_with_scratch(&mut values, &mut scratch);
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
