//! A saddle far from all others: one straight line through it, trapezoidal rule.
//!
//! On the line of steepest descent the exponent is `-x^2` and small other terms; the trapezoidal
//! rule converges like `e^-(pi/step)^2` on it.

use super::panel::{self, MOMENTS};
use super::polynomial::{Polynomial, ZERO, stretched};
use num_complex::Complex64;

/// The other terms together where the leading one is 36 (short rule) and 81 (long rule).
const SHORT: f64 = 9.0;
const LONG: f64 = 48.0;

/// The terms beyond the second where that one is `far^2`.
#[inline]
fn others<const D: usize>(local: &Polynomial, far: f64) -> f64 {
    let size = |m: usize| local[m].re.abs() + local[m].im.abs();
    // 1/r^2 for the distance r at which the leading term is far^2, from below.
    let inverse = size(2) * (std::f64::consts::FRAC_1_SQRT_2 / (far * far));
    let r = inverse.sqrt().recip();
    let others = (3..=D).rev().fold(0.0, |sum, m| (sum + size(m)) * r);
    others * r * r
}

/// Whether the rule holds at the saddle with this exponent about it.
#[inline]
pub(super) fn is_lone<const D: usize>(local: &Polynomial) -> bool {
    others::<D>(local, 9.0) < LONG
}

/// Moments about the saddle, in units of the integrand there; the line runs in the direction
/// that makes an acute angle with `along`.
pub(super) fn moments<const D: usize>(
    local: &Polynomial,
    along: Complex64,
) -> [Complex64; MOMENTS] {
    let mut scale = (-local[2]).sqrt().inv();
    if (scale * along.conj()).re < 0.0 {
        scale = -scale;
    }
    let mut p = stretched::<D>(local, scale);
    p[0] = ZERO;
    let mut out = panel::bell::<D>(&p, others::<D>(local, 6.0) < SHORT);
    let mut power = scale;
    for m in &mut out[..D - 1] {
        *m *= power;
        power *= scale;
    }
    out
}
