//! Fresnel integrals.
//!
//! `integral from z to infinity of exp(i pi t^2/2) dt = (1 + i)/2 erfc(a z)`, `a = (sqrt(pi)/2)(1 - i)`
//! (DLMF 7.7.10 with 7.2.6 rewritten), so that for `Im zeta >= 0`, `zeta = i a z`,
//!
//! ```text
//! F(z) = (1 + i)/2 (exp(i pi z^2/2) S(zeta) + K(zeta))
//! C(z) + i S(z) = (1 + i)/2 - F(z)  (DLMF 7.2.7 to 7.2.9)
//! ```
//!
//! with the sum S and the correction K of the file `kernel`. The phase `(pi/2)(x^2 - y^2)` is reduced
//! by whole squares, exactly. `|z| < 1`: Maclaurin series (DLMF 7.6.4, 7.6.6).

use super::kernel::{Wave, near, sum};
use super::split::Split;
use super::{NAN, polynomial};
use crate::Scaled;
use crate::scaled::ldexp;
use crate::special::double_double::{Dd, exp_both, quick_two_sum, sin_cos, two_product};
use num_complex::Complex64;
use std::f64::consts::FRAC_PI_2;

/// Both Fresnel integrals at one point.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Fresnel<T> {
    /// C.
    pub c: T,
    /// S.
    pub s: T,
}

const HALF_ROOT_PI: f64 = super::HALF_ROOT_PI;
const HALF: Complex64 = Complex64::new(0.5, 0.5);
/// pi to twice the digits.
const PI: Dd = Dd { hi: std::f64::consts::PI, lo: 1.2246467991473532e-16 };
const HALF_PI: Dd = Dd { hi: FRAC_PI_2, lo: 6.123233995736766e-17 };

/// `(-1)^n (pi/2)^(2n)/((2n)! (4n+1))` and the same with `2n + 1` and `4n + 3`.
const SERIES: [[f64; 11]; 2] = {
    let mut out = [[0.0; 11]; 2];
    let (mut term, mut n) = (1.0, 0);
    while n < 22 {
        out[n % 2][n / 2] = term / (2 * n + 1) as f64;
        term *= FRAC_PI_2 / (n + 1) as f64;
        if n % 2 == 1 {
            term = -term;
        }
        n += 1;
    }
    out
};

/// `x^2` less a multiple of 4.
#[inline]
fn square_mod_4(x: f64) -> Dd {
    let x = x.abs();
    // Even from here, and its square divisible by 4.
    if x >= 18_014_398_509_481_984.0 {
        return Dd { hi: 0.0, lo: 0.0 };
    }
    let square = two_product(x, x);
    if square.hi < 1e15 {
        return quick_two_sum(square.hi - 4.0 * (0.25 * square.hi).floor(), square.lo);
    }
    let hi = square.hi % 4.0;
    Dd { hi, lo: 0.0 }.plus(Dd { hi: square.lo % 4.0, lo: 0.0 })
}

/// `exp(i pi (x^2 - y^2)/2)`.
#[inline]
fn turn(x: f64, y: f64) -> Complex64 {
    let squares = square_mod_4(x).plus(square_mod_4(y).minus());
    let n = squares.hi.round();
    let rest = quick_two_sum(squares.hi - n, squares.lo);
    let (sin, cos) = sin_cos(rest.times(HALF_PI));
    match n as i64 & 3 {
        0 => Complex64::new(cos, sin),
        1 => Complex64::new(-sin, cos),
        2 => Complex64::new(-cos, -sin),
        _ => Complex64::new(sin, -cos),
    }
}

/// `(S, K, 1 - K)` at a point of the upper half plane.
#[inline]
fn parts(re: f64, im: f64) -> [Complex64; 3] {
    let (sum, offset) = sum(re.abs(), im);
    let [k, rest] = if near(re, im) {
        let wave = Wave::at(im, offset);
        [wave.k(), wave.one_less_k()]
    } else {
        [Complex64::ZERO, Complex64::ONE]
    };
    if re < 0.0 { [sum.conj(), k.conj(), rest.conj()] } else { [sum, k, rest] }
}

/// True where `exp(pi |x y|)` is not even known as a number with the exponent apart.
fn unknown(z: Complex64) -> bool {
    z.re.is_nan() || z.im.is_nan() || (z.re != 0.0 && z.im != 0.0 && z.re.abs() * z.im.abs() > 1e18)
}

fn remainder(z: Complex64) -> Split {
    if unknown(z) {
        return Split::moderate(NAN);
    }
    // F(-z) = 1 + i - F(z): DLMF 7.4.6 and 7.2.9.
    if z.re + z.im < 0.0 {
        return (-remainder_above(-z)).plus(Complex64::new(1.0, 1.0));
    }
    remainder_above(z)
}

/// F for `Re z + Im z >= 0`.
fn remainder_above(z: Complex64) -> Split {
    let [sum, k, _] = parts(HALF_ROOT_PI * (z.re - z.im), HALF_ROOT_PI * (z.re + z.im));
    let (_, down, n) = exp_both(product(z.re, z.im).times(PI));
    Split { mantissa: turn(z.re, z.im) * sum * down, exponent: -n, rest: k }.times(HALF)
}

/// `x y`, of which one may be infinite if the other is zero.
#[inline]
fn product(x: f64, y: f64) -> Dd {
    if x == 0.0 || y == 0.0 { Dd { hi: 0.0, lo: 0.0 } } else { two_product(x, y) }
}

/// The complex Fresnel integral `F(z) = integral from z to infinity of exp(i pi t^2/2) dt`.
///
/// The path ends on the positive real axis. Infinite components where it overflows; NaN for
/// `|x y| > 1e18`. On the axes there is no limit to the argument.
///
/// Accuracy: 2e-15 relative away from the zeros. Cost: some 0.15 microseconds. Source: DLMF 7.2.6.
///
/// ```
/// use merging_saddles::{Complex64, special::faddeeva::complex_fresnel};
/// // F(0) = (1 + i)/2: DLMF 7.2.9 (limits of C and S) with 7.2.6.
/// let v = complex_fresnel(Complex64::new(0.0, 0.0));
/// assert!((v - Complex64::new(0.5, 0.5)).norm() < 2e-16);
/// ```
pub fn complex_fresnel(z: Complex64) -> Complex64 {
    remainder(z).plain()
}

/// [`complex_fresnel`] with the exponent apart.
///
/// ```
/// use merging_saddles::{Complex64, special::faddeeva::complex_fresnel_extended};
/// // F(z) ~ i exp(i pi z^2/2)/(pi z) (DLMF 7.12.2 to 7.12.4, leading term) at z = 100 (1 + i).
/// let v = complex_fresnel_extended(Complex64::new(100.0, 100.0));
/// let pi = std::f64::consts::PI;
/// assert!((v.ln_norm() + pi * 1e4 + (pi * 100.0 * 2f64.sqrt()).ln()).abs() < 1e-4);
/// ```
pub fn complex_fresnel_extended(z: Complex64) -> Scaled {
    remainder(z).extended()
}

/// C and S for `0 <= y <= x`.
fn first_octant(x: f64, y: f64) -> [Split; 2] {
    let z = Complex64::new(x, y);
    if z.norm_sqr() < 1.0 {
        let square = z * z;
        let fourth = square * square;
        return [
            Split::moderate(z * polynomial(&SERIES[0], fourth)),
            Split::moderate(z * square * polynomial(&SERIES[1], fourth)),
        ];
    }
    // A = C + i S here and B = C - i S, the conjugate of A at the conjugate point.
    let (sum, difference) = (HALF_ROOT_PI * (x + y), HALF_ROOT_PI * (x - y));
    let [s_a, _, k_a] = parts(difference, sum);
    let [s_b, _, k_b] = parts(sum, difference);
    let phase = turn(x, y);
    let (up, down, n) = exp_both(product(x, y).times(PI));
    let falling = phase * s_a * down;
    let falling = Complex64::new(ldexp(falling.re, -n), ldexp(falling.im, -n));
    let a = HALF * (k_a - falling);
    let growing = -(HALF * phase * s_b * up).conj();
    let level = (HALF * k_b).conj();
    let by_2i = |v: Complex64| Complex64::new(0.5 * v.im, -0.5 * v.re);
    [
        Split { mantissa: growing * 0.5, exponent: n, rest: (a + level) * 0.5 },
        Split { mantissa: -by_2i(growing), exponent: n, rest: by_2i(a - level) },
    ]
}

/// C and S anywhere.
fn both(z: Complex64) -> [Split; 2] {
    if unknown(z) {
        return [Split::moderate(NAN); 2];
    }
    let (x, y) = (z.re.abs(), z.im.abs());
    if y == 0.0 {
        // Real, and odd.
        let Fresnel { c, s } = fresnel_real(z.re);
        return [c, s].map(|v| Split::moderate(Complex64::new(v, 0.0)));
    }
    // C(i z) = i C(z), S(i z) = -i S(z), and both odd and real on the real axis: DLMF 7.4.5, 7.4.6.
    let values = if y <= x {
        first_octant(x, y)
    } else {
        let [c, s] = first_octant(y, x);
        [c.conj().times(Complex64::I), s.conj().times(-Complex64::I)]
    };
    values.map(|v| {
        let v = if z.re.is_sign_negative() != z.im.is_sign_negative() { v.conj() } else { v };
        if z.re.is_sign_negative() { -v } else { v }
    })
}

/// The Fresnel integrals `C(z) = integral from 0 to z of cos(pi t^2/2) dt` and S(z), with the sine.
///
/// Overflow and range as in [`complex_fresnel`].
///
/// Accuracy: 2e-15 relative away from the zeros. Cost: some 0.2 microseconds. Source: DLMF 7.2.7,
/// 7.2.8.
///
/// ```
/// use merging_saddles::{Complex64, special::faddeeva::fresnel};
/// // The first complex zero of C: DLMF table 7.13.3 (m); mpmath, 30 digits.
/// let zero = Complex64::new(1.74366_74862, 0.30573_50636);
/// assert!(fresnel(zero).c.norm() < 1e-9);
/// ```
pub fn fresnel(z: Complex64) -> Fresnel<Complex64> {
    let [c, s] = both(z).map(Split::plain);
    Fresnel { c, s }
}

/// [`fresnel`] with the exponents apart.
///
/// ```
/// use merging_saddles::{Complex64, special::faddeeva::{fresnel, fresnel_extended}};
/// let z = Complex64::new(3.0, 2.0);
/// assert_eq!(fresnel_extended(z).c.to_complex(), fresnel(z).c);
/// ```
pub fn fresnel_extended(z: Complex64) -> Fresnel<Scaled> {
    let [c, s] = both(z).map(Split::extended);
    Fresnel { c, s }
}

/// C and S of real argument, of any size: the phase is reduced exactly.
///
/// Accuracy: 1e-15 relative. Cost: some 0.06 microseconds. Source: DLMF 7.2.7, 7.2.8.
///
/// ```
/// use merging_saddles::special::faddeeva::fresnel_real;
/// // C and S tend to 1/2 (DLMF 7.2.9); C is at its first maximum at x = 1 (DLMF 7.2.7).
/// let far = fresnel_real(1e20);
/// assert_eq!((far.c, far.s), (0.5, 0.5));
/// assert!(fresnel_real(1.0).c > fresnel_real(1.0 + 1e-6).c);
/// ```
pub fn fresnel_real(x: f64) -> Fresnel<f64> {
    let size = x.abs();
    let (c, s) = if size < 1.0 {
        let square = size * size;
        let series = |n: usize| {
            SERIES[n].iter().rev().fold(0.0, |sum, a| sum * (square * square) + a) * size
        };
        (series(0), series(1) * square)
    } else {
        let at = HALF_ROOT_PI * size;
        let [sum, _, level] = parts(at, at);
        let a = HALF * (level - turn(size, 0.0) * sum);
        (a.re, a.im)
    };
    Fresnel { c: c.copysign(x), s: s.copysign(x) }
}
