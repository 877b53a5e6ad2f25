//! One straight piece of a path in the plane of q, by the 20-point Gauss-Legendre rule (DLMF 3.5.19).
//!
//! Both exponentials are branch-free over the nodes: reduction by ln 2 and pi/2 in two parts (common
//! practice), Taylor series.

use super::landscape::Landscape;
use num_complex::Complex64;
use std::f64::consts::{FRAC_2_PI, LOG2_E};

/// Positive nodes: zeros of P_20, refined by Newton steps at 40 digits.
const NODES: [f64; HALF] = [
    0.9931285991850949,
    0.9639719272779138,
    0.912234428251326,
    0.8391169718222188,
    0.7463319064601508,
    0.636053680726515,
    0.5108670019508271,
    0.37370608871541955,
    0.22778585114164507,
    0.07652652113349734,
];
/// Weights `2/((1 - x^2) P_20'(x)^2)`.
const WEIGHTS: [f64; HALF] = [
    0.017614007139152118,
    0.04060142980038694,
    0.06267204833410907,
    0.08327674157670475,
    0.10193011981724044,
    0.11819453196151841,
    0.13168863844917664,
    0.14209610931838204,
    0.14917298647260374,
    0.15275338713072584,
];
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

/// `1.5 * 2^52`: added and subtracted, it rounds to an integer, which then stands in the low bits.
const ROUNDER: f64 = 6_755_399_441_055_744.0;
/// ln 2 and pi/2 with trailing zero bits, and what is missing.
const LN2: [f64; 2] = [0.693_147_180_369_123_8, 1.908_214_929_270_587_7e-10];
const HALF_PI: [f64; 2] = [1.570_796_326_734_125_6, 6.077_100_506_506_192e-11];

/// `1/n!`
const INVERSE: [f64; 18] = {
    let mut table = [1.0; 18];
    let (mut n, mut factorial) = (1, 1.0);
    while n < 18 {
        factorial *= n as f64;
        table[n] = 1.0 / factorial;
        n += 1;
    }
    table
};

/// Replaces the real and imaginary parts of numbers `w` by those of `e^w`; underflow gives
/// something below 1e-304, and imaginary parts are to stay below 1e6 for full accuracy.
fn exponentials(re: &mut [f64; ALL], im: &mut [f64; ALL]) {
    for k in 0..ALL {
        let x = re[k].clamp(-700.0, 700.0);
        let shifted = x * LOG2_E + ROUNDER;
        let n = shifted - ROUNDER;
        let r = (x - n * LN2[0]) - n * LN2[1];
        let mut series = INVERSE[13];
        for j in (0..13).rev() {
            series = series * r + INVERSE[j];
        }
        let power = f64::from_bits((shifted.to_bits().wrapping_add(1023)) << 52);
        let size = series * power;

        let y = im[k];
        let shifted = y * FRAC_2_PI + ROUNDER;
        let turns = shifted.to_bits();
        let n = shifted - ROUNDER;
        let r = (y - n * HALF_PI[0]) - n * HALF_PI[1];
        let q = r * r;
        let (mut sin, mut cos) = (INVERSE[17], INVERSE[16]);
        for j in 1..8 {
            sin = INVERSE[17 - 2 * j] - q * sin;
            cos = INVERSE[16 - 2 * j] - q * cos;
        }
        let (sin, cos) = ((r * (1.0 - q * sin)).to_bits(), (1.0 - q * cos).to_bits());
        // Odd quarter turns swap the two; the signs follow the quadrant.
        let swap = 0u64.wrapping_sub(turns & 1);
        let s = ((sin & !swap) | (cos & swap)) ^ ((turns & 2) << 62);
        let c = ((cos & !swap) | (sin & swap)) ^ ((turns.wrapping_add(1) & 2) << 62);
        re[k] = size * f64::from_bits(c);
        im[k] = size * f64::from_bits(s);
    }
}
