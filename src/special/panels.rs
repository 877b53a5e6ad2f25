//! What straight pieces of a path share: the 20-point Gauss-Legendre rule (DLMF 3.5.19) and
//! exponentials at many nodes at once.
//!
//! The exponentials are branch-free over the nodes: reduction by ln 2 and pi/2 in two parts (common
//! practice), Taylor series.

use std::f64::consts::{FRAC_2_PI, LOG2_E};

/// Positive nodes: zeros of P_20, refined by Newton steps at 40 digits.
pub(super) const NODES: [f64; 10] = [
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
pub(super) const WEIGHTS: [f64; 10] = [
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

/// The same as pairs of a positive node and its weight, from the middle outwards.
pub(crate) const RULE: [(f64, f64); 10] = {
    let mut pairs = [(0.0, 0.0); 10];
    let mut k = 0;
    while k < 10 {
        pairs[k] = (NODES[9 - k], WEIGHTS[9 - k]);
        k += 1;
    }
    pairs
};

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
/// something below 1e-304, and imaginary parts are to stay below 1e6.
#[inline(always)]
pub(super) fn exponentials<const N: usize>(re: &mut [f64; N], im: &mut [f64; N]) {
    for k in 0..N {
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
