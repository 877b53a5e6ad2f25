//! Ai and Bi with the exponential taken out.
//!
//! Outside `|z| = 8.8` the expansions are used without it; inside, the plain values are multiplied
//! by it, its exponent in double-double. Source: DLMF 9.7.5 to 9.7.8.

use super::asymptotic::{self, FARTHEST, Far};
use super::nodes::RADIUS;
use super::pair::{Fate, I, INFINITE, NAN, fate, in_range, pair, reflect};
use super::{Airy, airy_real, taylor};
use crate::scaled::ldexp;
use crate::special::double_double::{Dd, exp_both, sin_cos};
use num_complex::Complex64;

/// `e^zeta Ai`, `e^zeta Ai'`, `e^-|Re zeta| Bi`, `e^-|Re zeta| Bi'` with `zeta = (2/3) z^(3/2)`.
///
/// Principal branch: on the negative real axis `arg z = pi`, or `-pi` where the imaginary part is
/// -0.0. Beyond `|z| = 1e12` the scaled Ai is still right where no phase enters; the rest is NaN.
///
/// Accuracy: 1e-15 on the natural scale for `|z| <= 1e6`. Cost: some 0.15 microseconds.
/// Source: DLMF 9.7.5 to 9.7.8.
///
/// ```
/// use merging_saddles::{Complex64, special::airy::airy_scaled};
/// let v = airy_scaled(Complex64::new(1e6, 0.0));
/// // Leading terms of DLMF 9.7.5 and 9.7.7: 1/(2 sqrt(pi) z^(1/4)) and twice that; u_1/zeta is 1e-10.
/// assert!((v.ai.re * 2.0 * 1000f64.sqrt() * std::f64::consts::PI.sqrt() - 1.0).abs() < 2e-10);
/// assert!((v.bi.re * 1000f64.sqrt() * std::f64::consts::PI.sqrt() - 1.0).abs() < 2e-10);
/// ```
pub fn airy_scaled(z: Complex64) -> Airy<Complex64> {
    reflect(z, |z| {
        let mut scaled = if !in_range(z) {
            scaled_beyond(z)
        } else if z.norm_sqr() < RADIUS * RADIUS {
            scaled_near(z)
        } else {
            scaled_far(z)
        };
        if z.im == 0.0 {
            // Real, and e^-|Re zeta| is 1 on the negative side.
            let real = airy_real_scaled(z.re);
            scaled.bi = real.bi.into();
            scaled.bi_prime = real.bi_prime.into();
        }
        scaled
    })
}

/// For `|z| < RADIUS`: the plain values times the factors.
fn scaled_near(z: Complex64) -> Airy<Complex64> {
    let plain: Airy<Complex64> = pair(z).airy();
    // zeta < 1e-17 changes nothing.
    if z.norm_sqr() < 1e-24 {
        return plain;
    }
    let (re, im, _) = asymptotic::phase(z);
    let (grow, shrink) = exponentials(re);
    let (sin, cos) = sin_cos(im);
    let (up, down) = (Complex64::new(cos * grow, sin * grow), grow.min(shrink));
    Airy {
        ai: plain.ai * up,
        ai_prime: plain.ai_prime * up,
        bi: plain.bi * down,
        bi_prime: plain.bi_prime * down,
    }
}

/// `e^x` and `e^-x` for small `x`.
fn exponentials(x: Dd) -> (f64, f64) {
    let (up, down, n) = exp_both(x);
    (ldexp(up, n), ldexp(down, -n))
}

fn scaled_far(z: Complex64) -> Airy<Complex64> {
    let Far { factors: [a, a_prime, b, b_prime], phase: (re, im), beyond } = asymptotic::far(z);
    let (sin, cos) = sin_cos(im);
    let turn = Complex64::new(cos, sin);
    // e^(-2 |Re zeta|)
    let size = if re.hi < 0.0 { re } else { re.minus() };
    let (up, _, n) = exp_both(size);
    let square = ldexp(up * up, 2 * n);
    let (falling, rising) = if re.hi < 0.0 { (1.0, square) } else { (square, 1.0) };
    let mixed = |a: Complex64, b: Complex64| {
        let (own, share) = if beyond {
            (I * b * turn * turn * (0.5 * rising), 0.5)
        } else {
            (Complex64::ZERO, 1.0)
        };
        (a + own, I * a * turn.conj() * falling + b * turn * (share * rising))
    };
    let (ai, bi) = mixed(a, b);
    let (ai_prime, bi_prime) = mixed(a_prime, b_prime);
    Airy { ai, ai_prime, bi, bi_prime }
}

/// Beyond the known phase: the leading terms, where they need none.
fn scaled_beyond(z: Complex64) -> Airy<Complex64> {
    let nan = Airy { ai: NAN, ai_prime: NAN, bi: NAN, bi_prime: NAN };
    if z.re.is_nan() || z.im.is_nan() {
        return nan;
    }
    // Past the Stokes line the second exponential counts unless it is known to vanish.
    if asymptotic::beyond_stokes(z) && fate(z) != Fate::Explodes {
        return nan;
    }
    let rooted = z.sqrt().sqrt();
    let half = 0.5 / std::f64::consts::PI.sqrt();
    if rooted.re.is_finite() && rooted.im.is_finite() {
        return Airy { ai: half / rooted, ai_prime: -half * rooted, ..nan };
    }
    Airy { ai: Complex64::ZERO, ai_prime: if z.im == 0.0 { -INFINITE } else { NAN }, ..nan }
}

/// `e^zeta Ai`, `e^zeta Ai'`, `e^-zeta Bi`, `e^-zeta Bi'` for `x >= 0` with `zeta = (2/3) x^(3/2)`;
/// for `x < 0`, where zeta is imaginary, the plain values.
///
/// In both cases the factor is `e^(+-Re zeta)`, so that the results are real. For positive `x` of
/// any size the values are right; below -1e12 they are NaN.
///
/// Accuracy: 1e-15 for `x >= -1e6` (measured as in [`airy_real`]). Cost: some 0.06 microseconds.
/// Source: DLMF 9.7.5 to 9.7.8.
///
/// ```
/// use merging_saddles::special::airy::airy_real_scaled;
/// let v = airy_real_scaled(50.0);
/// // The Wronskian Ai Bi' - Ai' Bi = 1/pi (DLMF 9.2.7): the factors cancel.
/// let wronskian = v.ai * v.bi_prime - v.ai_prime * v.bi;
/// assert!((wronskian * std::f64::consts::PI - 1.0).abs() < 1e-15);
/// ```
pub fn airy_real_scaled(x: f64) -> Airy<f64> {
    if x < 0.0 || x.is_nan() {
        return airy_real(x);
    }
    if x > FARTHEST {
        let root = x.sqrt().sqrt();
        let half = 0.5 / std::f64::consts::PI.sqrt();
        let (g, h) = (half / root, half * root);
        return Airy { ai: g, ai_prime: -h, bi: 2.0 * g, bi_prime: 2.0 * h };
    }
    let [ai, ai_prime, bi, bi_prime] = if x < RADIUS {
        let [a, a_prime, b, b_prime] = taylor::near_real(x);
        let (up, down) =
            if x < 1e-12 { (1.0, 1.0) } else { exponentials(asymptotic::phase_real(x).0) };
        [a * up, a_prime * up, b * down, b_prime * down]
    } else {
        let (xi, w) = asymptotic::phase_real(x);
        asymptotic::growing(xi.hi, w)
    };
    Airy { ai, ai_prime, bi, bi_prime }
}
