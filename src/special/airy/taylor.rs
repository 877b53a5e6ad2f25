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
//! DLMF 9.2.1, at `z0`). All four are evaluated side by side; a polynomial with real coefficients
//! at a complex point takes the three-term form of the recurrence (common practice), which needs
//! half the multiplications of Horner's.
//!
//! Region: `|z| < 8.8`, `|d| <= sqrt(2)/4`; the first neglected term is below 1e-17.

use super::nodes::{NODES, ROW, SPACING};
use num_complex::Complex64;

/// Coefficients of F, G, F', G' at one power of `c`, by powers of `q`.
type Level<const N: usize> = [[f64; 4]; N];

/// Powers of `c` kept, and of `q` at the lowest one.
const LEVELS: usize = 7;
const POWERS: usize = 11;

/// `phi[j][k]` of `sum phi c^j q^k`, for f (start 0) or g/d (start 1).
const fn series(start: usize) -> [[f64; POWERS + 1]; LEVELS] {
    let mut phi = [[0.0; POWERS + 1]; LEVELS];
    phi[0][0] = 1.0;
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

/// Level `j` of the four series. F' is shifted: its level 0 multiplies `z0 d`, level `j` `d^2 c^(j-1)`.
const fn level<const N: usize>(j: usize) -> Level<N> {
    let f = series(0);
    let g = series(1);
    let mut out = [[0.0; 4]; N];
    let mut k = 0;
    while k < N {
        let slope = if j == 0 {
            (2 * k + 2) as f64 * f[0][k + 1]
        } else {
            (3 * j + 2 * k) as f64 * f[j][k]
        };
        out[k] = [f[j][k], g[j][k], slope, (1 + 3 * j + 2 * k) as f64 * g[j][k]];
        k += 1;
    }
    out
}

const L0: Level<11> = level(0);
const L1: Level<10> = level(1);
const L2: Level<8> = level(2);
const L3: Level<7> = level(3);
const L4: Level<5> = level(4);
const L5: Level<3> = level(5);

/// Four real polynomials at one complex point: the last two steps of the three-term form are
/// `p(q) = a_0 + q b_1 - |q|^2 b_2`.
#[inline]
pub(super) fn at_complex(level: &[[f64; 4]], q: Complex64) -> [Complex64; 4] {
    let (twice, square) = (2.0 * q.re, q.norm_sqr());
    let (mut b1, mut b2) = ([0.0; 4], [0.0; 4]);
    let Some((first, rest)) = level.split_first() else {
        return [Complex64::ZERO; 4];
    };
    for a in rest.iter().rev() {
        let mut b = [0.0; 4];
        for i in 0..4 {
            b[i] = (a[i] - square * b2[i]) + twice * b1[i];
        }
        (b2, b1) = (b1, b);
    }
    let mut out = [Complex64::ZERO; 4];
    for i in 0..4 {
        out[i] = Complex64::new((first[i] - square * b2[i]) + q.re * b1[i], q.im * b1[i]);
    }
    out
}

/// Four real polynomials at one real point.
#[inline]
pub(super) fn at_real(level: &[[f64; 4]], q: f64) -> [f64; 4] {
    let mut sum = [0.0; 4];
    for a in level.iter().rev() {
        for i in 0..4 {
            sum[i] = sum[i] * q + a[i];
        }
    }
    sum
}

/// Ai, Ai', B1, B1' (B1 = Bi - i Ai) for `|z| < RADIUS`, `Im z >= 0`.
#[inline]
pub(super) fn near(z: Complex64) -> [Complex64; 4] {
    let m = (z.re / SPACING + ROUNDER) - ROUNDER;
    let n = (z.im / SPACING + ROUNDER) - ROUNDER;
    let z0 = Complex64::new(m * SPACING, n * SPACING);
    let u = &NODES[(ROW[n as usize] as i64 + m as i64) as usize];
    let d = z - z0;
    let d2 = d * d;
    let (q, c) = (z0 * d2, d2 * d);
    let mut high = at_complex(&L5, q);
    for level in [&L4[..], &L3, &L2, &L1] {
        let next = at_complex(level, q);
        for i in 0..4 {
            high[i] = next[i] + c * high[i];
        }
    }
    let low = at_complex(&L0, q);
    let f = low[0] + c * high[0];
    let g = d * (low[1] + c * high[1]);
    let f_prime = z0 * d * low[2] + d2 * high[2];
    let g_prime = low[3] + c * high[3];
    let value = |i: usize| Complex64::new(u[i], u[i + 1]);
    let (a, a1, b, b1) = (value(0), value(2), value(4), value(6));
    [a * f + a1 * g, a * f_prime + a1 * g_prime, b * f + b1 * g, b * f_prime + b1 * g_prime]
}

/// Ai, Ai', Bi, Bi' for real `|x| < RADIUS`.
#[inline]
pub(super) fn near_real(x: f64) -> [f64; 4] {
    let m = (x / SPACING + ROUNDER) - ROUNDER;
    let x0 = m * SPACING;
    let u = &NODES[(ROW[0] as i64 + m as i64) as usize];
    let d = x - x0;
    let d2 = d * d;
    let (q, c) = (x0 * d2, d2 * d);
    // |d| <= 1/4 here: fewer terms than off the axis.
    let mut high = at_real(&L4[..4], q);
    for level in [&L3[..6], &L2[..7], &L1[..8]] {
        let next = at_real(level, q);
        for i in 0..4 {
            high[i] = next[i] + c * high[i];
        }
    }
    let low = at_real(&L0[..9], q);
    let f = low[0] + c * high[0];
    let g = d * (low[1] + c * high[1]);
    let f_prime = x0 * d * low[2] + d2 * high[2];
    let g_prime = low[3] + c * high[3];
    // On the axis B1 = Bi - i Ai has the real part Bi.
    let (a, a1, b, b1) = (u[0], u[2], u[4], u[6]);
    [a * f + a1 * g, a * f_prime + a1 * g_prime, b * f + b1 * g, b * f_prime + b1 * g_prime]
}

/// Adding and subtracting it rounds to the nearest integer.
const ROUNDER: f64 = 6_755_399_441_055_744.0; // 1.5 * 2^52
