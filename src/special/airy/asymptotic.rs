//! The Airy functions far from the origin: DLMF 9.7 with the phase in double-double.
//!
//! With `zeta = (2/3) z^(3/2)`, `P-+ = sum_k (-+1)^k u_k zeta^-k`, `g = 1/(2 sqrt(pi) z^(1/4))`
//! (DLMF 9.7.5, 9.7.6 and the connection formula 9.2.12) and `s = 1` beyond the Stokes line
//! `arg z = 2 pi/3`, else 0, in the upper half plane
//!
//! ```text
//! Ai = g (e^-zeta P- + i s e^zeta P+),   Bi - i Ai = 2 g e^zeta P+
//! ```
//!
//! and the derivatives with `z^(1/4)/(2 sqrt(pi))`, `v_k` and `-P-`. Even and odd parts are shared
//! between the signs: real polynomials in `zeta^-4` (four or eight side by side), as many terms as the size of zeta needs.
//! The recessive exponential is below the rounding at the Stokes line for `|zeta| > 17.4`.
//!
//! The phase: `w = sqrt z` has the error `dw = (z - w^2)/(2w)`, found from exact products, and
//! `zeta = (2/3)(z w + z dw)`; an error of the phase would be one of every value.

use super::taylor::Point;
use crate::special::double_double::{Dd, quick_two_sum, two_product, two_sum};
use num_complex::Complex64;

/// Beyond this distance the phase, of some 10^18, is not known from double-double arithmetic.
pub(super) const FARTHEST: f64 = 1e12;

/// Terms of the longest expansion, by powers of `zeta^-4`.
const LONGEST: usize = 7;

/// `u_4k .. u_(4k+3)`, then the same of v (DLMF 9.7.2).
const SERIES: [[f64; 8]; LONGEST] = {
    let mut out = [[0.0; 8]; LONGEST];
    let (mut u, mut n) = (1.0, 0);
    while n < 4 * LONGEST {
        let k = n as f64;
        if n > 0 {
            u *=
                (6.0 * k - 5.0) * (6.0 * k - 3.0) * (6.0 * k - 1.0) / (216.0 * k * (2.0 * k - 1.0));
        }
        out[n / 4][n % 4] = u;
        out[n / 4][4 + n % 4] = if n == 0 { 1.0 } else { (6.0 * k + 1.0) / (1.0 - 6.0 * k) * u };
        n += 1;
    }
    out
};

/// `u_4k .. u_(4k+3)` alone.
const VALUES: [[f64; 4]; LONGEST] = {
    let mut out = [[0.0; 4]; LONGEST];
    let mut k = 0;
    while k < LONGEST {
        out[k] = [SERIES[k][0], SERIES[k][1], SERIES[k][2], SERIES[k][3]];
        k += 1;
    }
    out
};

/// Terms that leave an error below 1e-17 at the given `|zeta|`.
#[inline]
fn terms(size: f64) -> usize {
    const FROM: [(f64, usize); 6] =
        [(1e4, 1), (135.0, 2), (44.0, 3), (28.0, 4), (22.0, 5), (19.5, 6)];
    FROM.iter().find(|(from, _)| size >= *from).map_or(LONGEST, |(_, n)| *n)
}

/// Even and odd parts in `1/zeta` of the expansions with `u_k` and `v_k`, given `t` and `t^2`
/// (`-t^2` for `zeta = i/t`; the odd parts are then without the factor 1/i).
#[inline]
fn parts<P: Point>(t: P, square: P, size: f64) -> [P; 4] {
    let [u0, u1, u2, u3, v0, v1, v2, v3] = P::polynomials(&SERIES[..terms(size)], square * square);
    [u0 + square * u2, t * (u1 + square * u3), v0 + square * v2, t * (v1 + square * v3)]
}

/// The first two of [`parts`].
#[inline]
fn parts_of_values<P: Point>(t: P, square: P, size: f64) -> [P; 2] {
    let [u0, u1, u2, u3] = P::polynomials(&VALUES[..terms(size)], square * square);
    [u0 + square * u2, t * (u1 + square * u3)]
}

/// 2/3.
const TWO_THIRDS: Dd = Dd { hi: 0.666_666_666_666_666_6, lo: 3.700_743_415_417_188e-17 };
/// `1/(2 sqrt(pi))`.
const HALF_RSQRT_PI: f64 = 0.282_094_791_773_878_14;

/// `1/sqrt(pi)`.
pub(super) const RSQRT_PI: f64 = 0.564_189_583_547_756_3;
/// `1/sqrt(2 pi)`.
const RSQRT_TAU: f64 = 0.398_942_280_401_432_7;

/// The square root of a number with `Im z >= 0` well inside the range.
#[inline]
fn sqrt(z: Complex64) -> Complex64 {
    let size = z.norm_sqr().sqrt();
    let large = (0.5 * (size + z.re.abs())).sqrt();
    let small = 0.5 * z.im / large;
    if z.re >= 0.0 { Complex64::new(large, small) } else { Complex64::new(small, large) }
}

/// `zeta = (2/3) z^(3/2)` in double-double (real part, imaginary part), and `sqrt z`, for
/// `Im z >= 0` and `1e-20 < |z| <= FARTHEST`.
#[inline]
pub(super) fn phase(z: Complex64) -> (Dd, Dd, Complex64) {
    let w = sqrt(z);
    let (rr, ii, ri) = (two_product(w.re, w.re), two_product(w.im, w.im), two_product(w.re, w.im));
    let first = two_sum(z.re, -rr.hi);
    let second = two_sum(first.hi, ii.hi);
    let lack = Complex64::new(
        second.hi + (second.lo + first.lo + (ii.lo - rr.lo)),
        (z.im - 2.0 * ri.hi) - 2.0 * ri.lo,
    );
    // z dw = (z/w) lack/2 = w lack/2 to the accuracy that is needed.
    let rest = w * lack * 0.5;
    let difference = |a: Dd, b: Dd, rest: f64| {
        let s = two_sum(a.hi, b.hi);
        two_sum(s.hi, s.lo + (a.lo + b.lo + rest))
    };
    let re = difference(two_product(z.re, w.re), two_product(-z.im, w.im), rest.re);
    let im = difference(two_product(z.re, w.im), two_product(z.im, w.re), rest.im);
    (re.times(TWO_THIRDS), im.times(TWO_THIRDS), w)
}

/// `xi = (2/3) x^(3/2)` in double-double, and `sqrt x`, for `1e-20 < x <= FARTHEST`.
#[inline]
pub(super) fn phase_real(x: f64) -> (Dd, f64) {
    let w = x.sqrt();
    let square = two_product(w, w);
    let lack = (x - square.hi) - square.lo;
    let product = two_product(x, w);
    (quick_two_sum(product.hi, product.lo + 0.5 * w * lack).times(TWO_THIRDS), w)
}

/// The expansion at one point, the exponentials left out.
pub(super) struct Far {
    /// `g P-`, its derivative's counterpart `-z^(1/4)/(2 sqrt pi) P-`, `2 g P+`, and that one's.
    pub factors: [Complex64; 4],
    /// zeta.
    pub phase: (Dd, Dd),
    /// True beyond the Stokes line.
    pub beyond: bool,
}

/// The expansions for `RADIUS <= |z| <= FARTHEST`, `Im z >= 0`.
#[inline]
pub(super) fn far(z: Complex64) -> Far {
    let (re, im, w) = phase(z);
    let factors = factors(Complex64::new(re.hi, im.hi), w);
    Far { factors, phase: (re, im), beyond: beyond_stokes(z) }
}

/// True between the Stokes line `arg z = 2 pi/3` and the negative real axis.
#[inline]
pub(super) fn beyond_stokes(z: Complex64) -> bool {
    const SQRT_3: f64 = 1.732_050_807_568_877_2;
    z.im < -SQRT_3 * z.re
}

/// See [`Far::factors`]; `w = sqrt z`.
#[inline]
fn factors(zeta: Complex64, w: Complex64) -> [Complex64; 4] {
    let size = zeta.norm_sqr();
    let t = Complex64::new(zeta.re / size, -zeta.im / size);
    let [u_even, u_odd, v_even, v_odd] = parts(t, t * t, size.sqrt());
    let root = sqrt(w);
    let scale = root.norm_sqr();
    let g = root.conj() * (HALF_RSQRT_PI / scale);
    let h = root * HALF_RSQRT_PI;
    [
        g * (u_even - u_odd),
        -h * (v_even - v_odd),
        g * (u_even + u_odd) * 2.0,
        h * (v_even + v_odd) * 2.0,
    ]
}

/// `g P-` and `2 g P+` alone, zeta in double-double, and whether beyond the Stokes line.
#[inline]
pub(super) fn far_values(z: Complex64) -> ([Complex64; 2], (Dd, Dd), bool) {
    let (re, im, w) = phase(z);
    let size = re.hi * re.hi + im.hi * im.hi;
    let t = Complex64::new(re.hi / size, -im.hi / size);
    let [even, odd] = parts_of_values(t, t * t, size.sqrt());
    let root = sqrt(w);
    let g = root.conj() * (HALF_RSQRT_PI / root.norm_sqr());
    ([g * (even - odd), g * (even + odd) * 2.0], (re, im), beyond_stokes(z))
}

/// `e^zeta Ai`, `e^zeta Ai'`, `e^-zeta Bi`, `e^-zeta Bi'` for real `x >= RADIUS`, given zeta and
/// `sqrt x`.
#[inline]
pub(super) fn growing(zeta: f64, w: f64) -> [f64; 4] {
    let t = 1.0 / zeta;
    let [u_even, u_odd, v_even, v_odd] = parts(t, t * t, zeta);
    let root = w.sqrt();
    let (g, h) = (HALF_RSQRT_PI / root, HALF_RSQRT_PI * root);
    [
        g * (u_even - u_odd),
        -h * (v_even - v_odd),
        2.0 * g * (u_even + u_odd),
        2.0 * h * (v_even + v_odd),
    ]
}

/// Even and odd parts at `zeta = i xi`, the odd ones without the factor 1/i.
#[inline]
pub(super) fn parts_turned(xi: f64) -> [f64; 4] {
    let t = 1.0 / xi;
    parts(t, -t * t, xi)
}

/// Ai, Ai', Bi, Bi' for `x = -y`, `y >= RADIUS`, given `xi = (2/3) y^(3/2)`, `sqrt y`, and sine and
/// cosine of xi (DLMF 9.7.9 to 9.7.12; the phase xi - pi/4 is taken apart).
#[inline]
pub(super) fn oscillating(xi: f64, w: f64, (sin, cos): (f64, f64)) -> [f64; 4] {
    let [u_even, u_odd, v_even, v_odd] = parts_turned(xi);
    let root = w.sqrt();
    let (g, h) = (RSQRT_TAU / root, RSQRT_TAU * root);
    let (sum, difference) = (cos + sin, cos - sin);
    [
        g * (sum * u_even - difference * u_odd),
        -h * (difference * v_even + sum * v_odd),
        g * (difference * u_even + sum * u_odd),
        h * (sum * v_even - difference * v_odd),
    ]
}

/// The first and the third of [`growing`].
#[inline]
pub(super) fn growing_values(zeta: f64, w: f64) -> [f64; 2] {
    let t = 1.0 / zeta;
    let [even, odd] = parts_of_values(t, t * t, zeta);
    let g = HALF_RSQRT_PI / w.sqrt();
    [g * (even - odd), 2.0 * g * (even + odd)]
}

/// The first and the third of [`oscillating`].
#[inline]
pub(super) fn oscillating_values(xi: f64, w: f64, (sin, cos): (f64, f64)) -> [f64; 2] {
    let t = 1.0 / xi;
    let [even, odd] = parts_of_values(t, -t * t, xi);
    let g = RSQRT_TAU / w.sqrt();
    let (sum, difference) = (cos + sin, cos - sin);
    [g * (sum * even - difference * odd), g * (difference * even + sum * odd)]
}
