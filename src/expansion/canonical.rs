//! The canonical integrals of one cluster between its valleys.
//!
//! `C_l = sum_j m_j integral from valley j to valley j+1 of u^l exp(i k Phi(u)) du`, with
//! `Phi = u^D + x_K u^K + .. + x_1 u`, `D = K + 2`, valley `j` along `arg u = pi/(2D) + 2 pi j/D`.
//!
//! - No saddle (`Phi = u`): `C_0 = i/k`, from an end point into its valley.
//! - K = 0: `C_0 = -(m_0 - m_1) sqrt(pi/k) e^(i pi/4)` (Gauss).
//! - K = 1: with `xi = k^(2/3) 3^(-1/3) x_1`, `w = e^(2 pi i/3)`,
//!   `C_0 = -2 pi (3k)^(-1/3) sum_j m_j w^j Ai(w^j xi)`,
//!   `C_1 = 2 pi i (3k)^(-2/3) sum_j m_j w^(2j) Ai'(w^j xi)` (DLMF 9.5.4).
//! - K = 2, 3, 4: the cuspoid integrals after `u = k^(-1/D) t` (DLMF 36.2.4, 36.6), the weight of
//!   valley `v` being `m_(v-1) - m_v`.

use super::unfolding::Unfolding;
use crate::Scaled;
use crate::ring::{MAX_SADDLES, ZERO};
use crate::saddles::Multiplicities;
use crate::scaled::ldexp;
use crate::special::airy::{airy_extended, rotated_extended};
use crate::special::cuspoid;
use num_complex::Complex64;
use std::f64::consts::PI;

/// `C_0 .. C_K` as mantissas with one common exponent.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Moments {
    pub values: [Complex64; MAX_SADDLES],
    pub exponent: i64,
}

impl Moments {
    /// For one cluster at one wavenumber; None where the parameters are beyond the range in which
    /// any digit is right.
    pub fn new(phi: &Unfolding, m: &Multiplicities, k: f64) -> Option<Moments> {
        let mut values = [ZERO; MAX_SADDLES];
        match phi.degree() - 1 {
            0 => values[0] = Complex64::new(0.0, 1.0 / k),
            1 => {
                let weight = f64::from(m[1] - m[0]);
                values[0] = Complex64::from_polar(weight * (PI / k).sqrt(), PI / 4.0);
            }
            2 => return Some(fold(phi, m, k)),
            _ => return cuspoid(phi, m, k),
        }
        Some(Moments { values, exponent: 0 })
    }

    /// All times a factor.
    pub fn times(mut self, factor: Complex64) -> Moments {
        for value in &mut self.values {
            *value *= factor;
        }
        self
    }

    /// Sum, at the larger exponent of the two.
    pub fn plus(&self, other: &Moments) -> Moments {
        let is_zero = |m: &Moments| m.values.iter().all(|v| *v == ZERO);
        if is_zero(self) || is_zero(other) {
            return if is_zero(self) { *other } else { *self };
        }
        let exponent = self.exponent.max(other.exponent);
        let at = |m: &Moments, j: usize| {
            let shift = m.exponent - exponent;
            Complex64::new(ldexp(m.values[j].re, shift), ldexp(m.values[j].im, shift))
        };
        Moments { values: std::array::from_fn(|j| at(self, j) + at(other, j)), exponent }
    }
}

/// K = 2, 3, 4.
fn cuspoid(phi: &Unfolding, m: &Multiplicities, k: f64) -> Option<Moments> {
    let degree = phi.degree();
    let unit = k.powf(-1.0 / degree as f64);
    let mut x = [ZERO; MAX_SADDLES - 1];
    let mut power = k;
    for (j, x) in x.iter_mut().enumerate().take(degree - 2) {
        power *= unit;
        *x = phi.x(j + 1) * power;
    }
    let mut weights = [0; MAX_SADDLES + 1];
    for (v, weight) in weights.iter_mut().enumerate().take(degree) {
        *weight = m[(v + degree - 1) % degree] - m[v];
    }
    let moments = cuspoid::moments(&x[..degree - 2], &weights[..degree]).ok()?;
    let mut values = [ZERO; MAX_SADDLES];
    let mut power = 1.0;
    for (value, &moment) in values.iter_mut().zip(&moments.mantissas).take(degree - 1) {
        power *= unit;
        *value = moment * power;
    }
    Some(Moments { values, exponent: moments.exponent })
}

/// K = 1. The three Airy functions add up to zero (DLMF 9.2.12), so one of the three may be left
/// out: the largest, unless its multiplicity is alone in differing.
fn fold(phi: &Unfolding, m: &Multiplicities, k: f64) -> Moments {
    let xi = phi.x(1) * (k * k / 3.0).cbrt();
    let plain = airy_extended(xi);
    let rotated = rotated_extended(xi);
    let values = [plain.ai, rotated.plus, rotated.minus];
    let slopes = [plain.ai_prime, rotated.plus_prime, rotated.minus_prime];
    // One term alone if two multiplicities agree; else leave out the largest of the three.
    let common = if m[0] == m[1] || m[0] == m[2] {
        m[0]
    } else if m[1] == m[2] {
        m[1]
    } else {
        let size = |j: usize| values[j].ln_norm().max(slopes[j].ln_norm());
        let largest = (1..3).fold(0, |best, j| if size(j) > size(best) { j } else { best });
        m[largest]
    };
    let mut sums = [Scaled::ZERO; 2];
    for j in 0..3 {
        let weight = f64::from(m[j] - common);
        if weight != 0.0 {
            let turn = |n: usize| Complex64::from_polar(weight, 2.0 * PI * (n % 3) as f64 / 3.0);
            sums[0] = sums[0] + values[j] * turn(j);
            sums[1] = sums[1] + slopes[j] * turn(2 * j);
        }
    }
    let third = (3.0 * k).cbrt();
    let c0 = sums[0] * (-2.0 * PI / third);
    let c1 = sums[1] * Complex64::new(0.0, 2.0 * PI / (third * third));
    let exponent = match (c0.is_zero(), c1.is_zero()) {
        (false, false) => c0.exponent.max(c1.exponent),
        (false, true) => c0.exponent,
        _ => c1.exponent,
    };
    let mut list = [ZERO; MAX_SADDLES];
    list[0] = c0.mantissa_at(exponent);
    list[1] = c1.mantissa_at(exponent);
    Moments { values: list, exponent }
}
