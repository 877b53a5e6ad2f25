//! One straight piece of a path in the plane of q, by the 20-point Gauss-Legendre rule (DLMF 3.5.19).

use super::super::panels::{NODES, WEIGHTS, exponentials};
use super::landscape::Hub;
use num_complex::Complex64;

const HALF: usize = 10;
const ALL: usize = 2 * HALF;

/// Integrals of `e^(H - H_hub)` times 1, E, E^2, E/(1 + E) with `E = r/r_hub - 1`.
pub(super) type Moments = [Complex64; 4];

/// Up to this distance from the hub `e^d - 1` is summed as a power series.
const NEAR: f64 = 0.5;

/// `1/n!`, n = 1 .. 15.
const INVERSE: [f64; 15] = {
    let mut table = [1.0; 15];
    let mut n = 1;
    while n < 15 {
        table[n] = table[n - 1] / (n + 1) as f64;
        n += 1;
    }
    table
};

/// The integrals along a straight piece, its ends given by their distances from the hub.
pub(super) fn moments(hub: &Hub, from: Complex64, to: Complex64) -> Moments {
    let (middle, half) = ((from + to) * 0.5, (to - from) * 0.5);
    let (mut re, mut im) = ([0.0; ALL], [0.0; ALL]);
    for k in 0..HALF {
        let (a, b) = (half.re * NODES[k], half.im * NODES[k]);
        (re[k], re[k + HALF]) = (middle.re + a, middle.re - a);
        (im[k], im[k + HALF]) = (middle.im + b, middle.im - b);
    }
    let offset = re;
    // E = e^d - 1 in (re, im), and the real part of e^d, which may be next to nothing.
    let ratios;
    if to.norm_sqr() < NEAR * NEAR {
        for k in 0..ALL {
            let (x, y) = (re[k], im[k]);
            let (mut a, mut b) = (INVERSE[14], 0.0);
            for c in INVERSE[..14].iter().rev() {
                (a, b) = (a * x - b * y + c, a * y + b * x);
            }
            (re[k], im[k]) = (a * x - b * y, a * y + b * x);
        }
        ratios = re.map(|x| x + 1.0);
    } else {
        exponentials(&mut re, &mut im);
        ratios = re;
        for x in &mut re {
            *x -= 1.0;
        }
    }
    let [first, second, third] = hub.cubic;
    let inner = hub.terms[3];
    let (mut h_re, mut h_im) = ([0.0; ALL], [0.0; ALL]);
    let (mut over_re, mut over_im) = ([0.0; ALL], [0.0; ALL]);
    for k in 0..ALL {
        let (x, y) = (re[k], im[k]);
        let ratio = ratios[k];
        let size = 1.0 / (ratio * ratio + y * y);
        (over_re[k], over_im[k]) = (ratio * size, -y * size);
        let (a, b) = (
            third.re - (inner.re * over_re[k] - inner.im * over_im[k]),
            third.im - (inner.re * over_im[k] + inner.im * over_re[k]),
        );
        let (a, b) = (second.re + a * x - b * y, second.im + a * y + b * x);
        let (a, b) = (first.re + a * x - b * y, first.im + a * y + b * x);
        h_re[k] = a * x - b * y + 0.5 * offset[k];
        h_im[k] = a * y + b * x;
    }
    for k in 0..HALF {
        let (a, b) = (0.5 * half.im * NODES[k], 0.5 * middle.im);
        h_im[k] += b + a;
        h_im[k + HALF] += b - a;
    }
    exponentials(&mut h_re, &mut h_im);
    let mut sums = [Complex64::ZERO; 4];
    for k in 0..ALL {
        let e = Complex64::new(re[k], im[k]);
        let value = Complex64::new(h_re[k], h_im[k]) * WEIGHTS[k % HALF];
        let next = value * e;
        sums[0] += value;
        sums[1] += next;
        sums[2] += next * e;
        sums[3] += next * Complex64::new(over_re[k], over_im[k]);
    }
    sums.map(|sum| sum * half)
}
