//! The pair Ai and `B1 = Bi - i Ai` in the upper half plane, and what all public functions make of it.
//!
//! Regions and sources: see the modules `taylor` (inside) and `asymptotic` (outside).

use super::asymptotic::{self, FARTHEST, Far};
use super::nodes::RADIUS;
use super::{Airy, Rotated, taylor};
use crate::Scaled;
use crate::scaled::{ldexp, pow2};
use crate::special::double_double::{exp_both, sin_cos};
use num_complex::Complex64;
use std::ops::Add;

pub(super) const I: Complex64 = Complex64::new(0.0, 1.0);
pub(super) const NAN: Complex64 = Complex64::new(f64::NAN, f64::NAN);
pub(super) const INFINITE: Complex64 = Complex64::new(f64::INFINITY, 0.0);
/// sqrt(3)/2
pub(super) const SIN_60: f64 = 0.866_025_403_784_438_6;

/// The kinds of number that the functions return.
pub(super) trait Value: Copy + Add<Output = Self> {
    /// `mantissa * 2^exponent`.
    fn assemble(mantissa: Complex64, exponent: i64) -> Self;
    /// `a * 2^n + b * 2^-n`, for mantissas within 1e-5 and 1e5.
    fn mixed(a: Complex64, b: Complex64, n: i64) -> Self;
    fn conjugate(self) -> Self;
}

impl Value for Complex64 {
    #[inline]
    fn assemble(mantissa: Complex64, exponent: i64) -> Self {
        Complex64::new(ldexp(mantissa.re, exponent), ldexp(mantissa.im, exponent))
    }
    #[inline]
    fn mixed(a: Complex64, b: Complex64, n: i64) -> Self {
        if n.abs() < 1000 {
            return a * pow2(n) + b * pow2(-n);
        }
        Self::assemble(a, n) + Self::assemble(b, -n)
    }
    #[inline]
    fn conjugate(self) -> Self {
        self.conj()
    }
}

impl Value for Scaled {
    #[inline]
    fn assemble(mantissa: Complex64, exponent: i64) -> Self {
        Scaled::new(mantissa, exponent)
    }
    #[inline]
    fn mixed(a: Complex64, b: Complex64, n: i64) -> Self {
        // In units of the larger power.
        let less = pow2(-2 * n.abs());
        Scaled::new(if n > 0 { a + b * less } else { a * less + b }, n.abs())
    }
    #[inline]
    fn conjugate(self) -> Self {
        self.conj()
    }
}

/// The pair in the upper half plane: `Ai = a 2^n + (i/2) b 2^-n` beyond the Stokes line, else
/// `a 2^n`; `B1 = b 2^-n`.
pub(super) struct Pair {
    pub(super) a: Complex64,
    pub(super) a_prime: Complex64,
    pub(super) b: Complex64,
    pub(super) b_prime: Complex64,
    pub(super) n: i64,
    pub(super) beyond: bool,
}

/// For `Im z >= 0`, `|z| <= FARTHEST`.
#[inline]
pub(super) fn pair(z: Complex64) -> Pair {
    if z.norm_sqr() < RADIUS * RADIUS {
        let [a, a_prime, b, b_prime] = taylor::near(z);
        return Pair { a, a_prime, b, b_prime, n: 0, beyond: false };
    }
    let Far { factors, phase, beyond } = asymptotic::far(z);
    let (sin, cos) = sin_cos(phase.1);
    let (up, down, n) = exp_both(phase.0.minus());
    let falling = Complex64::new(cos * up, -sin * up);
    let rising = Complex64::new(cos * down, sin * down);
    Pair {
        a: factors[0] * falling,
        a_prime: factors[1] * falling,
        b: factors[2] * rising,
        b_prime: factors[3] * rising,
        n,
        beyond,
    }
}

impl Pair {
    #[inline]
    pub(super) fn airy<T: Value>(&self) -> Airy<T> {
        let combine = |a: Complex64, b: Complex64| {
            if self.beyond {
                let half = b * 0.5;
                (T::mixed(a, I * half, self.n), T::mixed(I * a, half, self.n))
            } else {
                (T::assemble(a, self.n), T::mixed(I * a, b, self.n))
            }
        };
        let (ai, bi) = combine(self.a, self.b);
        let (ai_prime, bi_prime) = combine(self.a_prime, self.b_prime);
        Airy { ai, ai_prime, bi, bi_prime }
    }

    /// `Ai(z w) = e^(i pi/3) Ai(z) + e^(-i pi/6) B1/2` and `Ai(z/w) = e^(i pi/6) B1/2` with
    /// `w = e^(2 pi i/3)` (DLMF 9.2.11, 9.2.12); beyond the Stokes line the first is
    /// `e^(i pi/3) a` alone.
    #[inline]
    pub(super) fn rotated<T: Value>(&self) -> Rotated<T> {
        const E60: Complex64 = Complex64::new(0.5, SIN_60);
        const HALF_E30: Complex64 = Complex64::new(0.5 * SIN_60, 0.25);
        let b = HALF_E30 * self.b;
        // e^(5 pi i/6) B1'/2
        let b_prime = Complex64::new(-HALF_E30.re, HALF_E30.im) * self.b_prime;
        let (a, a_prime) = (E60 * self.a, E60.conj() * self.a_prime);
        let (plus, plus_prime) = if self.beyond {
            (T::assemble(a, self.n), T::assemble(a_prime, self.n))
        } else {
            let turned = Complex64::new(-HALF_E30.re, -HALF_E30.im) * self.b_prime;
            let plus = T::mixed(a, HALF_E30.conj() * self.b, self.n);
            (plus, T::mixed(a_prime, turned, self.n))
        };
        Rotated {
            plus,
            plus_prime,
            minus: T::assemble(b, -self.n),
            minus_prime: T::assemble(b_prime, -self.n),
        }
    }
}

/// Real argument: Ai, Ai' in units of `2^n` and Bi, Bi' in units of `2^-n`; for `|x| <= FARTHEST`.
#[inline]
pub(super) fn pair_real(x: f64) -> ([f64; 4], i64) {
    if x.abs() < RADIUS {
        return (taylor::near_real(x), 0);
    }
    let (xi, w) = asymptotic::phase_real(x.abs());
    if x < 0.0 {
        return (asymptotic::oscillating(xi.hi, w, sin_cos(xi)), 0);
    }
    let [a, a_prime, b, b_prime] = asymptotic::growing(xi.hi, w);
    let (up, down, n) = exp_both(xi.minus());
    ([a * up, a_prime * up, b * down, b_prime * down], n)
}

/// True where the phase is known.
#[inline]
pub(super) fn in_range(z: Complex64) -> bool {
    z.norm_sqr() <= FARTHEST * FARTHEST
}

/// What becomes of `e^-zeta` beyond `FARTHEST`, `Im z >= 0`.
#[derive(Clone, Copy, PartialEq)]
pub(super) enum Fate {
    Vanishes,
    Explodes,
    Unknown,
}

pub(super) fn fate(z: Complex64) -> Fate {
    if z.re.is_nan() || z.im.is_nan() {
        return Fate::Unknown;
    }
    if z.im == 0.0 {
        return if z.re > 0.0 { Fate::Vanishes } else { Fate::Unknown };
    }
    if !(z.re.is_finite() && z.im.is_finite()) {
        let angle = z.im.atan2(z.re).abs();
        return match angle {
            a if a < std::f64::consts::FRAC_PI_3 => Fate::Vanishes,
            a if a < std::f64::consts::PI => Fate::Explodes,
            _ => Fate::Unknown,
        };
    }
    // The direction of zeta from unit-size numbers; its length cannot matter where it is this clear.
    let size = z.re.abs().max(z.im.abs());
    let unit = z / size;
    let zeta = unit * unit.sqrt();
    // |zeta| > 1e17 here: beyond this the exponential leaves every range by far.
    if zeta.re > 1e-13 {
        Fate::Vanishes
    } else if zeta.re < -1e-13 {
        Fate::Explodes
    } else {
        Fate::Unknown
    }
}

/// Ai, Ai', Bi, Bi' where `in_range` is false.
pub(super) fn airy_beyond<T: Value>(z: Complex64) -> Airy<T> {
    let all =
        |ai, ai_prime, bi, bi_prime| Airy { ai, ai_prime, bi, bi_prime }.map(|v| T::assemble(v, 0));
    let zero = Complex64::ZERO;
    if z.im == 0.0 && z.re > 0.0 {
        return all(zero, -zero, INFINITE, INFINITE);
    }
    if z.im == 0.0 && z.re == f64::NEG_INFINITY {
        return all(zero, NAN, zero, NAN);
    }
    match fate(z) {
        Fate::Vanishes => all(zero, zero, NAN, NAN),
        _ => all(NAN, NAN, NAN, NAN),
    }
}

/// Runs `upper` in the upper half plane and conjugates below.
#[inline]
pub(super) fn reflect<T: Value>(z: Complex64, upper: impl Fn(Complex64) -> Airy<T>) -> Airy<T> {
    if z.im.is_sign_negative() { upper(z.conj()).map(T::conjugate) } else { upper(z) }
}

#[inline]
pub(super) fn airy_any<T: Value>(z: Complex64) -> Airy<T> {
    reflect(z, |z| {
        if !in_range(z) {
            airy_beyond(z)
        } else if z.im == 0.0 {
            let ([a, a_prime, b, b_prime], n) = pair_real(z.re);
            let value = |x: f64, n: i64| T::assemble(Complex64::new(x, 0.0), n);
            Airy {
                ai: value(a, n),
                ai_prime: value(a_prime, n),
                bi: value(b, -n),
                bi_prime: value(b_prime, -n),
            }
        } else {
            pair(z).airy()
        }
    })
}

#[inline]
pub(super) fn rotated_any<T: Value>(z: Complex64) -> Rotated<T> {
    let upper = |z: Complex64| {
        if in_range(z) {
            return pair(z).rotated();
        }
        let minus = if fate(z) == Fate::Explodes { Complex64::ZERO } else { NAN };
        let (minus, nan) = (T::assemble(minus, 0), T::assemble(NAN, 0));
        Rotated { plus: nan, plus_prime: nan, minus, minus_prime: minus }
    };
    if !z.im.is_sign_negative() {
        return upper(z);
    }
    let mirrored = upper(z.conj());
    Rotated {
        plus: mirrored.minus.conjugate(),
        plus_prime: mirrored.minus_prime.conjugate(),
        minus: mirrored.plus.conjugate(),
        minus_prime: mirrored.plus_prime.conjugate(),
    }
}
