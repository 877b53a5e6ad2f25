//! One straight piece of a path in the plane of q, by the 20-point Gauss-Legendre rule (DLMF 3.5.19).
//!
//! Both exponentials are branch-free over the nodes: reduction by ln 2 and pi/2 in two parts (common
//! practice), Taylor series.

use super::super::panels::{NODES, WEIGHTS, exponentials};
use super::landscape::Landscape;
use num_complex::Complex64;

const HALF: usize = 10;
const ALL: usize = 2 * HALF;

/// Integrals of `e^H` times 1, r, r^2, 1/r.
pub(super) type Moments = [Complex64; 4];

/// `integral of (1, r, r^2, 1/r) e^(H - reference) dq` along a straight piece.
pub(super) fn moments(
    land: &Landscape,
    from: Complex64,
    to: Complex64,
    reference: Complex64,
) -> Moments {
    let (middle, half) = ((from + to) * 0.5, (to - from) * 0.5);
    let (mut q_re, mut q_im) = ([0.0; ALL], [0.0; ALL]);
    for k in 0..HALF {
        let (a, b) = (half.re * NODES[k], half.im * NODES[k]);
        (q_re[k], q_re[k + HALF]) = (middle.re + a, middle.re - a);
        (q_im[k], q_im[k + HALF]) = (middle.im + b, middle.im - b);
    }
    let (mut re, mut im) = (q_re, q_im);
    exponentials(&mut re, &mut im);
    let [c1, c2, c3] = land.outer;
    let (mut h_re, mut h_im) = ([0.0; ALL], [0.0; ALL]);
    for k in 0..ALL {
        let (x, y) = (re[k], im[k]);
        // c_1 + c_2 r + c_3 r^2, times r
        let (a, b) = (c2 + c3 * x, c3 * y);
        let (a, b) = (c1 + a * x - b * y, a * y + b * x);
        let (a, b) = (a * x - b * y, a * y + b * x);
        let over = land.inner / (x * x + y * y);
        let (a, b) = (a + over * x, b - over * y);
        h_re[k] = 0.5 * q_re[k] - b - reference.re;
        h_im[k] = 0.5 * q_im[k] + a - reference.im;
    }
    exponentials(&mut h_re, &mut h_im);
    let mut sums = [Complex64::ZERO; 4];
    for k in 0..ALL {
        let r = Complex64::new(re[k], im[k]);
        let value = Complex64::new(h_re[k], h_im[k]) * WEIGHTS[k % HALF];
        let first = value * r;
        sums[0] += value;
        sums[1] += first;
        sums[2] += first * r;
        sums[3] += value * r.conj() / r.norm_sqr();
    }
    sums.map(|sum| sum * half)
}
