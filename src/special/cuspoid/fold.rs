//! Two saddles of the Pearcey integral near the caustic, the third being far.
//!
//! About the point between them, `t_c = sqrt(-x_2/6)`, the phase is `f_c + alpha s + b s^3 + s^4` with `b = 4 t_c`. With
//! `lambda = (3 b)^(-1/3)`, `zeta = alpha lambda`, `epsilon = lambda^4` their part of the moments about t_c is
//!
//! ```text
//! lambda^(j+1) 2 pi (-i)^j e^(i f_c) sum_n (i epsilon)^n/n! Ai^(4n+j)(zeta)
//! ```
//!
//! (the quartic term expanded under the integral DLMF 9.5.4; derivatives of Ai from its differential
//! equation, `Ai^(k+2) = zeta Ai^(k) + k Ai^(k-1)`). Region: `epsilon` up to 0.02, as outside the table, and
//! `epsilon zeta^2` below 0.9 where Ai oscillates: beyond, the rounding of the derivatives would be seen.

use super::polynomial::{Polynomial, precise};
use crate::special::airy::airy_real;
use crate::special::double_double::{exponential, two_product};
use num_complex::Complex64;
use std::f64::consts::TAU;

/// Terms at most.
const TERMS: usize = 60;
/// Terms below this part of the sum are left out.
const SMALL: f64 = 1e-18;
/// Where the rounding of the terms would be seen.
const LARGEST: f64 = 0.9;
/// Beyond this zeta the two are complex and below rounding.
const DARK: f64 = 18.0;
const EPSILON: f64 = 0.02;

/// Adds the moments 0, 1, 2 of the two saddles at positive t for the exponent `h = i (t^4 + x_2 t^2 + x_1 t)`, `x_1 >= 0`;
/// false outside the region.
pub(super) fn add(h: &Polynomial, x2: f64, sum: &mut [Complex64; 3]) -> bool {
    if x2 >= 0.0 {
        return false;
    }
    let centre = (-x2 / 6.0).sqrt();
    let cube = 12.0 * centre;
    let lambda = cube.cbrt().recip();
    let epsilon = lambda * lambda * lambda * lambda;
    let (level, slope) = precise::<4>(h, centre.into());
    let alpha = slope.im.hi;
    let zeta = alpha * lambda;
    if !(epsilon < EPSILON && zeta < DARK && (zeta > 0.0 || epsilon * zeta * zeta < LARGEST)) {
        return false;
    }
    // The exact centre, where f'' = 0, lies off by what the root lacks.
    let square = two_product(centre, centre);
    let off = ((6.0 * square.hi + x2) + 6.0 * square.lo) / -cube;
    // What zeta lacks: lambda, by Newton's step to the exact cube, and the rounding of the product.
    let power = two_product(lambda, lambda).times(two_product(lambda, cube));
    let more = (two_product(12.0, centre).lo + 12.0 * off) / cube;
    let lack = ((1.0 - power.hi) - power.lo - more) / 3.0;
    let rest = two_product(alpha, lambda).lo + slope.im.lo * lambda + zeta * lack;
    let v = airy_real(zeta);
    // Ai^(k), Ai^(k+1), Ai^(k+2), and sums for j = 0 .. 3.
    let (mut a, mut b, mut c) = (v.ai, v.ai_prime, zeta * v.ai);
    let mut sums = [Complex64::ZERO; 4];
    let mut factor = Complex64::ONE;
    let mut k = 0.0;
    for n in 0..TERMS {
        let (mut size, mut whole) = (0.0, 0.0);
        for sum in &mut sums {
            let term = factor * a;
            *sum += term;
            size += term.re.abs() + term.im.abs();
            whole += sum.re.abs() + sum.im.abs();
            // Ai^(k+3) = zeta Ai^(k+1) + (k+1) Ai^(k)
            (a, b, c) = (b, c, zeta * b + (k + 1.0) * a);
            k += 1.0;
        }
        if n > 2 && size < SMALL * whole {
            break;
        }
        factor *= Complex64::new(0.0, epsilon / (n + 1) as f64);
    }
    // f_c at the exact centre.
    let (factor, _) = exponential(level);
    let turn = Complex64::new(1.0, alpha * off) * factor * (TAU * lambda);
    let mut m = [Complex64::ZERO; 3];
    let mut scale = turn;
    for j in 0..3 {
        m[j] = scale * (sums[j] + sums[j + 1] * rest);
        scale *= Complex64::new(0.0, -lambda);
    }
    // About 0.
    m[2] += (m[1] * 2.0 + m[0] * centre) * centre;
    m[1] += m[0] * centre;
    for (sum, m) in sum.iter_mut().zip(m) {
        *sum += m;
    }
    true
}
