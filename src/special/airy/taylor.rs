//! The Airy functions near the origin: one Taylor step from the nearest node of a lattice.
//!
//! With `z = z0 + d`, `q = z0 d^2`, `c = d^3` the two solutions of `u'' = z u` with unit initial
//! values at `z0` (f: 1, 0; g: 0, 1) are `f = sum_j c^j F_j(q)`, `g = d sum_j c^j G_j(q)`, and
//!
//! ```text
//! f' = z0 d F'_0(q) + d^2 sum_(j>=1) c^(j-1) F'_j(q),   g' = sum_j c^j G'_j(q)
//! ```
//!
//! with real polynomials that are the same at every node. They follow from the recurrence
//! `t_(n+2) = (q t_n + c t_(n-1))/((n+1)(n+2))` of the Taylor terms (the differential equation,
//! DLMF 9.2.1, at `z0`). A solution of `u'' = z u + r`, r constant, is
//! `u(z0) (1 + h) + u'(z0) g + u''(z0) p` with `h'' = z h + d` and `p'' = z p + 1`, both zero with
//! their derivatives at `z0` (`1 + h = f - z0 p`: r enters through `u''` alone, and nothing cancels
//! where u is algebraic). All polynomials are evaluated side by side;
//! one with real coefficients at a complex point takes the three-term form of the recurrence
//! (common practice), which needs half the multiplications of Horner's.
//!
//! Region: `|d| <= sqrt(2)/4` (real: 1/4), `|z| < 8.8` for the Airy, 16 for the Scorer functions; the neglected terms
//! are below 1e-16 of the largest.

use super::nodes::{NODES, ROW, SPACING};
use num_complex::Complex64;
use std::ops::{Add, Mul};

/// Powers of `c` kept, and of `q` at the lowest one.
const LEVELS: usize = 6;
const POWERS: usize = 11;

/// Coefficients of M series at one power of `c`, by powers of `q`.
type Level<const M: usize> = [[f64; M]; POWERS];

/// `phi[j][k]` of `sum phi c^j q^k`, for f (start 0), g/d (start 1), p/d^2 (2) or h/d^3 (3).
const fn series(start: usize) -> [[f64; POWERS + 1]; LEVELS] {
    let mut phi = [[0.0; POWERS + 1]; LEVELS];
    phi[0][0] = match start {
        2 => 1.0 / 2.0,
        3 => 1.0 / 6.0,
        _ => 1.0,
    };
    let mut j = 0;
    while j < LEVELS {
        let mut k = 0;
        while k <= POWERS {
            let power = start + 3 * j + 2 * k;
            let mut from = 0.0;
            if k > 0 {
                from += phi[j][k - 1];
            }
            if j > 0 {
                from += phi[j - 1][k];
            }
            if j + k > 0 {
                phi[j][k] = from / ((power - 1) * power) as f64;
            }
            k += 1;
        }
        j += 1;
    }
    phi
}

/// F, G, F', G'. F' is shifted: its level 0 multiplies `z0 d`, level `j` `d^2 c^(j-1)`.
const HOMOGENEOUS: [Level<4>; LEVELS] = {
    let (f, g) = (series(0), series(1));
    let mut out = [[[0.0; 4]; POWERS]; LEVELS];
    let mut j = 0;
    while j < LEVELS {
        let mut k = 0;
        while k < POWERS {
            let slope = if j == 0 {
                (2 * k + 2) as f64 * f[0][k + 1]
            } else {
                (3 * j + 2 * k) as f64 * f[j][k]
            };
            out[j][k] = [f[j][k], g[j][k], slope, (1 + 3 * j + 2 * k) as f64 * g[j][k]];
            k += 1;
        }
        j += 1;
    }
    out
};

/// F and G alone.
const VALUES: [Level<2>; LEVELS] = {
    let mut out = [[[0.0; 2]; POWERS]; LEVELS];
    let mut j = 0;
    while j < LEVELS {
        let mut k = 0;
        while k < POWERS {
            out[j][k] = [HOMOGENEOUS[j][k][0], HOMOGENEOUS[j][k][1]];
            k += 1;
        }
        j += 1;
    }
    out
};

/// `g/d`, `p/d^2`, `h/d^3`, `g'`, `p'/d`, `h'/d^2`.
const INHOMOGENEOUS: [Level<6>; LEVELS] = {
    let series = [series(1), series(2), series(3)];
    let mut out = [[[0.0; 6]; POWERS]; LEVELS];
    let mut j = 0;
    while j < LEVELS {
        let mut k = 0;
        while k < POWERS {
            let mut i = 0;
            while i < 3 {
                out[j][k][i] = series[i][j][k];
                out[j][k][3 + i] = (1 + i + 3 * j + 2 * k) as f64 * series[i][j][k];
                i += 1;
            }
            k += 1;
        }
        j += 1;
    }
    out
};

/// Real or complex: what the step needs of its numbers.
pub(super) trait Point:
    Copy + Add<Output = Self> + Mul<Output = Self> + Mul<f64, Output = Self>
{
    /// Coefficients that count at each level, for the region of the module's page.
    const COUNTS: [usize; LEVELS];
    /// M real polynomials at one point.
    fn polynomials<const M: usize>(coefficients: &[[f64; M]], at: Self) -> [Self; M];
}

impl Point for Complex64 {
    const COUNTS: [usize; LEVELS] = [11, 10, 8, 7, 5, 3];

    /// The last two steps of the three-term form are `p(q) = a_0 + q b_1 - |q|^2 b_2`.
    #[inline]
    fn polynomials<const M: usize>(coefficients: &[[f64; M]], at: Self) -> [Self; M] {
        let (twice, square) = (2.0 * at.re, at.norm_sqr());
        let (mut b1, mut b2) = ([0.0; M], [0.0; M]);
        let Some((first, rest)) = coefficients.split_first() else {
            return [Complex64::ZERO; M];
        };
        for a in rest.iter().rev() {
            let mut b = [0.0; M];
            for i in 0..M {
                b[i] = (a[i] - square * b2[i]) + twice * b1[i];
            }
            (b2, b1) = (b1, b);
        }
        let mut out = [Complex64::ZERO; M];
        for i in 0..M {
            out[i] = Complex64::new((first[i] - square * b2[i]) + at.re * b1[i], at.im * b1[i]);
        }
        out
    }
}

impl Point for f64 {
    const COUNTS: [usize; LEVELS] = [9, 8, 7, 6, 4, 2];

    #[inline]
    fn polynomials<const M: usize>(coefficients: &[[f64; M]], at: Self) -> [Self; M] {
        let mut sum = [0.0; M];
        for a in coefficients.iter().rev() {
            for i in 0..M {
                sum[i] = sum[i] * at + a[i];
            }
        }
        sum
    }
}

/// Level 0, and `sum_(j>=1) c^(j-1) level_j`, of M series.
#[inline]
fn sums<P: Point, const M: usize>(levels: &[Level<M>; LEVELS], q: P, c: P) -> [[P; M]; 2] {
    let at = |j: usize| P::polynomials(&levels[j][..P::COUNTS[j]], q);
    let mut high = at(LEVELS - 1);
    for j in (1..LEVELS - 1).rev() {
        let next = at(j);
        for i in 0..M {
            high[i] = next[i] + c * high[i];
        }
    }
    [at(0), high]
}

/// f, g, f', g' at the distance `d` from `z0`.
#[inline]
fn unit_solutions<P: Point>(z0: P, d: P) -> [P; 4] {
    let d2 = d * d;
    let c = d2 * d;
    let [low, high] = sums(&HOMOGENEOUS, z0 * d2, c);
    [
        low[0] + c * high[0],
        d * (low[1] + c * high[1]),
        z0 * d * low[2] + d2 * high[2],
        low[3] + c * high[3],
    ]
}

/// f and g alone.
#[inline]
fn unit_values<P: Point>(z0: P, d: P) -> [P; 2] {
    let d2 = d * d;
    let c = d2 * d;
    let [low, high] = sums(&VALUES, z0 * d2, c);
    [low[0] + c * high[0], d * (low[1] + c * high[1])]
}

/// The solution of `u'' = z u + r` and its derivative at the distance `d` from `z0`, where u, u', u''
/// are known.
#[inline]
pub(super) fn inhomogeneous<P: Point>(z0: P, d: P, [u, u1, u2]: [P; 3]) -> [P; 2] {
    let d2 = d * d;
    let c = d2 * d;
    let [mut s, high] = sums(&INHOMOGENEOUS, z0 * d2, c);
    for i in 0..6 {
        s[i] = s[i] + c * high[i];
    }
    let [g, p, h, g1, p1, h1] = s;
    [u + (d * (u1 * g) + d2 * (u2 * p) + c * (u * h)), u1 * g1 + d * (u2 * p1) + d2 * (u * h1)]
}

/// The nearest node to a point: its indices, itself, and the step to the point.
#[inline]
pub(super) fn nearest(z: Complex64) -> (i64, i64, Complex64, Complex64) {
    let (m, n) = (round(z.re / SPACING), round(z.im / SPACING));
    let z0 = Complex64::new(m * SPACING, n * SPACING);
    (m as i64, n as i64, z0, z - z0)
}

/// To the nearest integer, for small numbers.
#[inline]
fn round(x: f64) -> f64 {
    const ROUNDER: f64 = 6_755_399_441_055_744.0; // 1.5 * 2^52
    (x + ROUNDER) - ROUNDER
}

/// Ai(0) and Ai'(0).
pub(super) const ORIGIN: [f64; 2] = [0.355_028_053_887_817_2, -0.258_819_403_792_806_8];

/// The node's Ai, Ai', B1, B1'.
#[inline]
fn node(m: i64, n: i64) -> [Complex64; 4] {
    let u = &NODES[(ROW[n as usize] as i64 + m) as usize];
    [0, 2, 4, 6].map(|i| Complex64::new(u[i], u[i + 1]))
}

/// Ai, Ai', B1, B1' (B1 = Bi - i Ai) for `|z| < RADIUS`, `Im z >= 0`.
#[inline]
pub(super) fn near(z: Complex64) -> [Complex64; 4] {
    let (m, n, z0, d) = nearest(z);
    let [a, a1, b, b1] = node(m, n);
    let [f, g, f1, g1] = unit_solutions(z0, d);
    [a * f + a1 * g, a * f1 + a1 * g1, b * f + b1 * g, b * f1 + b1 * g1]
}

/// Ai alone, for `|z| < RADIUS`, `Im z >= 0`.
#[inline]
pub(super) fn near_ai(z: Complex64) -> Complex64 {
    let (m, n, z0, d) = nearest(z);
    let [a, a1, ..] = node(m, n);
    let [f, g] = unit_values(z0, d);
    a * f + a1 * g
}

/// Bi alone, likewise.
#[inline]
pub(super) fn near_bi(z: Complex64) -> Complex64 {
    let (m, n, z0, d) = nearest(z);
    let [a, a1, b, b1] = node(m, n);
    let [f, g] = unit_values(z0, d);
    (Complex64::I * a + b) * f + (Complex64::I * a1 + b1) * g
}

/// The node on the real axis, its Ai, Ai', Bi, Bi', and the step from it; for `|x| < RADIUS`.
#[inline]
fn nearest_real(x: f64) -> (f64, f64, [f64; 4]) {
    let m = round(x / SPACING);
    let u = &NODES[(ROW[0] as i64 + m as i64) as usize];
    // On the axis B1 = Bi - i Ai has the real part Bi.
    (m * SPACING, x - m * SPACING, [u[0], u[2], u[4], u[6]])
}

/// Ai, Ai', Bi, Bi' for real `|x| < RADIUS`.
#[inline]
pub(super) fn near_real(x: f64) -> [f64; 4] {
    let (x0, d, [a, a1, b, b1]) = nearest_real(x);
    let [f, g, f1, g1] = unit_solutions(x0, d);
    [a * f + a1 * g, a * f1 + a1 * g1, b * f + b1 * g, b * f1 + b1 * g1]
}

/// Ai and Bi alone for real `|x| < RADIUS`.
#[inline]
pub(super) fn near_real_values(x: f64) -> [f64; 2] {
    let (x0, d, [a, a1, b, b1]) = nearest_real(x);
    let [f, g] = unit_values(x0, d);
    [a * f + a1 * g, b * f + b1 * g]
}
