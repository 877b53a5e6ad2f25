//! Airy functions (DLMF chapter 9): Ai, Bi and their derivatives, for complex and real argument,
//! plain, scaled, or with the exponent apart.
//!
//! Method: everything is done in the upper half plane (below by conjugation) with the pair Ai and
//! `B1 = Bi - i Ai = 2 e^(-i pi/6) Ai(z e^(-2 pi i/3))` (DLMF 9.2.11), whose combinations do not
//! cancel. Inside `|z| < 8.8` one Taylor step from a lattice of nodes; outside the asymptotic
//! expansions DLMF 9.7 with the phase `(2/3) z^(3/2)` in double-double.
//!
//! Accuracy: on the natural scale, that is, `|error of f| / max(|f|, |f'|/sqrt(1+|z|))` and
//! `|error of f'| / max(|f'|, |f| sqrt(1+|z|))`, which is the relative error away from zeros.
//!
//! Range: beyond `|z| = 1e12` the phase exceeds 10^18 and no digit of an oscillating value can be
//! had. There the functions return the limits that need no phase (0 where Ai is recessive,
//! infinity for Bi on the positive real axis, `e^zeta Ai` in full) and NaN for the rest.

mod asymptotic;
mod nodes;
mod taylor;

use crate::Scaled;
use crate::scaled::ldexp;
use crate::special::double_double::{Dd, exp_both, sin_cos};
use asymptotic::{FARTHEST, Far};
use nodes::RADIUS;
use num_complex::Complex64;
use std::ops::Add;

/// The four values of the Airy functions at one point.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Airy<T> {
    /// Ai.
    pub ai: T,
    /// Ai'.
    pub ai_prime: T,
    /// Bi.
    pub bi: T,
    /// Bi'.
    pub bi_prime: T,
}

/// The rotated pair: Ai and Ai' at `z e^(2 pi i/3)` (`plus`) and at `z e^(-2 pi i/3)` (`minus`).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Rotated<T> {
    /// Ai(z e^(2 pi i/3)).
    pub plus: T,
    /// Ai'(z e^(2 pi i/3)), the derivative of Ai taken at the rotated point.
    pub plus_prime: T,
    /// Ai(z e^(-2 pi i/3)).
    pub minus: T,
    /// Ai'(z e^(-2 pi i/3)).
    pub minus_prime: T,
}

const I: Complex64 = Complex64::new(0.0, 1.0);
const NAN: Complex64 = Complex64::new(f64::NAN, f64::NAN);
const INFINITE: Complex64 = Complex64::new(f64::INFINITY, 0.0);
/// sqrt(3)/2
const SIN_60: f64 = 0.866_025_403_784_438_6;

/// The kinds of number that the functions return.
trait Value: Copy + Add<Output = Self> {
    /// `mantissa * 2^exponent`.
    fn assemble(mantissa: Complex64, exponent: i64) -> Self;
    fn conjugate(self) -> Self;
}

impl Value for Complex64 {
    #[inline]
    fn assemble(mantissa: Complex64, exponent: i64) -> Self {
        Complex64::new(ldexp(mantissa.re, exponent), ldexp(mantissa.im, exponent))
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
    fn conjugate(self) -> Self {
        self.conj()
    }
}

impl<T> Airy<T> {
    /// The same operation on all four.
    #[inline]
    fn map<U>(self, operation: impl Fn(T) -> U) -> Airy<U> {
        Airy {
            ai: operation(self.ai),
            ai_prime: operation(self.ai_prime),
            bi: operation(self.bi),
            bi_prime: operation(self.bi_prime),
        }
    }
}

/// The pair in the upper half plane: `Ai = a 2^n + (i/2) b 2^-n` beyond the Stokes line, else
/// `a 2^n`; `B1 = b 2^-n`.
struct Pair {
    a: Complex64,
    a_prime: Complex64,
    b: Complex64,
    b_prime: Complex64,
    n: i64,
    beyond: bool,
}

/// For `Im z >= 0`, `|z| <= FARTHEST`.
#[inline]
fn pair(z: Complex64) -> Pair {
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
    fn airy<T: Value>(&self) -> Airy<T> {
        let combine = |a: Complex64, b: Complex64| {
            let falling = T::assemble(a, self.n);
            let turned = T::assemble(I * a, self.n);
            if self.beyond {
                let half = b * 0.5;
                (falling + T::assemble(I * half, -self.n), turned + T::assemble(half, -self.n))
            } else {
                (falling, turned + T::assemble(b, -self.n))
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
    fn rotated<T: Value>(&self) -> Rotated<T> {
        const E60: Complex64 = Complex64::new(0.5, SIN_60);
        const HALF_E30: Complex64 = Complex64::new(0.5 * SIN_60, 0.25);
        let b = HALF_E30 * self.b;
        // e^(5 pi i/6) B1'/2
        let b_prime = Complex64::new(-HALF_E30.re, HALF_E30.im) * self.b_prime;
        let (mut plus, mut plus_prime) =
            (T::assemble(E60 * self.a, self.n), T::assemble(E60.conj() * self.a_prime, self.n));
        if !self.beyond {
            plus = plus + T::assemble(HALF_E30.conj() * self.b, -self.n);
            let turned = Complex64::new(-HALF_E30.re, -HALF_E30.im) * self.b_prime;
            plus_prime = plus_prime + T::assemble(turned, -self.n);
        }
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
fn pair_real(x: f64) -> ([f64; 4], i64) {
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
fn in_range(z: Complex64) -> bool {
    z.norm_sqr() <= FARTHEST * FARTHEST
}

/// What becomes of `e^-zeta` beyond `FARTHEST`, `Im z >= 0`.
#[derive(Clone, Copy, PartialEq)]
enum Fate {
    Vanishes,
    Explodes,
    Unknown,
}

fn fate(z: Complex64) -> Fate {
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
fn airy_beyond<T: Value>(z: Complex64) -> Airy<T> {
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
fn reflect<T: Value>(z: Complex64, upper: impl Fn(Complex64) -> Airy<T>) -> Airy<T> {
    if z.im.is_sign_negative() { upper(z.conj()).map(T::conjugate) } else { upper(z) }
}

#[inline]
fn airy_any<T: Value>(z: Complex64) -> Airy<T> {
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
fn rotated_any<T: Value>(z: Complex64) -> Rotated<T> {
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

/// Ai, Ai', Bi, Bi' at a complex point.
///
/// The solutions of `u'' = z u` of DLMF 9.2. Overflow gives infinite components, underflow zeros
/// or subnormal numbers; NaN gives NaN. Beyond `|z| = 1e12` see the module's page.
///
/// Accuracy (natural scale, see the module's page): 1e-15 at most for `|z| <= 100`. The imaginary
/// part of Bi close to the positive real axis, where it is exponentially small beside the real
/// part, is right on that scale only. Cost: some 0.15 microseconds.
///
/// Source: DLMF 9.2, 9.7.
///
/// ```
/// use merging_saddles::{Complex64, special::airy::airy};
/// let v = airy(Complex64::new(0.0, 0.0));
/// // Ai(0) = 3^(-2/3)/Gamma(2/3), Bi(0) = 3^(-1/6)/Gamma(2/3): DLMF 9.2.3, 9.2.5.
/// assert!((v.ai.re - 0.355028053887817239).abs() < 1e-16);
/// assert!((v.bi.re - 0.614926627446000736).abs() < 2e-16);
/// ```
pub fn airy(z: Complex64) -> Airy<Complex64> {
    airy_any(z)
}

/// Ai, Ai', Bi, Bi' at a real point.
///
/// Overflow and underflow as in [`airy`]. Accuracy: 1e-15 for `-1e6 <= x <= 100`, relative for
/// `x >= 0` and to the modulus `sqrt(Ai^2 + Bi^2)` (or that of the derivatives) for `x < 0`.
/// Cost: some 0.06 microseconds. Source: DLMF 9.2, 9.7.
///
/// ```
/// use merging_saddles::special::airy::airy_real;
/// // The first zero of Ai and the slope there: DLMF table 9.9.1.
/// let v = airy_real(-2.338107410459767);
/// assert!(v.ai.abs() < 1e-15 && (v.ai_prime - 0.70121_08227).abs() < 1e-10);
/// ```
pub fn airy_real(x: f64) -> Airy<f64> {
    let z = Complex64::new(x, 0.0);
    if !in_range(z) {
        return airy_beyond::<Complex64>(z).map(|v| v.re);
    }
    let ([a, a_prime, b, b_prime], n) = pair_real(x);
    Airy {
        ai: ldexp(a, n),
        ai_prime: ldexp(a_prime, n),
        bi: ldexp(b, -n),
        bi_prime: ldexp(b_prime, -n),
    }
}

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

/// Ai, Ai', Bi, Bi' with the exponent carried apart: nothing over- or underflows for `|z| <= 1e12`.
///
/// Accuracy: 1e-15 on the natural scale for `|z| <= 1e6`, 1e-14 up to 1e12; the real and the imaginary part share
/// the exponent. Cost: some 0.2 microseconds. Source: DLMF 9.2, 9.7.
///
/// ```
/// use merging_saddles::{Complex64, special::airy::airy_extended};
/// let v = airy_extended(Complex64::new(1e4, 1e4));
/// // The Wronskian (DLMF 9.2.7) of values near 10^-500000 and 10^500000.
/// let wronskian = v.ai * v.bi_prime + -(v.ai_prime * v.bi);
/// assert!((wronskian.to_complex() * std::f64::consts::PI - 1.0).norm() < 1e-14);
/// ```
pub fn airy_extended(z: Complex64) -> Airy<Scaled> {
    airy_any(z)
}

/// Ai and Ai' at `z e^(2 pi i/3)` and `z e^(-2 pi i/3)`.
///
/// Any two of `Ai(z)` and these two make a pair of solutions; `minus` is the recessive one in the
/// sector around `arg z = 2 pi/3`, `plus` around `-2 pi/3`. The rotated point itself is never
/// rounded. Overflow and NaN as in [`airy`]. Accuracy: 2e-15 on the natural scale for
/// `|z| <= 100`. Cost: as [`airy`]. Source: DLMF 9.2.10 to 9.2.12.
///
/// ```
/// use merging_saddles::{Complex64, special::airy::{airy, rotated}};
/// let z = Complex64::new(0.7, -0.4);
/// let (r, w) = (rotated(z), Complex64::from_polar(1.0, 2.0 * std::f64::consts::PI / 3.0));
/// // DLMF 9.2.12: Ai(z) + w Ai(z w) + w^-1 Ai(z w^-1) = 0.
/// assert!((airy(z).ai + w * r.plus + r.minus / w).norm() < 1e-15);
/// ```
pub fn rotated(z: Complex64) -> Rotated<Complex64> {
    rotated_any(z)
}

/// [`rotated`] with the exponents carried apart.
///
/// ```
/// use merging_saddles::{Complex64, special::airy::rotated_extended};
/// let r = rotated_extended(Complex64::new(-2e4, 2e4));
/// // DLMF 9.2.9: the Wronskian of Ai(z e^(-2 pi i/3)) and Ai(z e^(2 pi i/3)) is 1/(2 pi i); the
/// // derivatives of the two functions of z carry the factors e^(-+2 pi i/3).
/// let w = Complex64::from_polar(1.0, 2.0 * std::f64::consts::PI / 3.0);
/// let wronskian = r.minus * r.plus_prime * w + -(r.minus_prime * r.plus * w.conj());
/// let exact = Complex64::new(0.0, -0.5 / std::f64::consts::PI);
/// assert!((wronskian.to_complex() - exact).norm() < 1e-15);
/// ```
pub fn rotated_extended(z: Complex64) -> Rotated<Scaled> {
    rotated_any(z)
}
