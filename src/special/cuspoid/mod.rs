//! Cuspoid canonical integrals (DLMF chapter 36).

mod descent;
mod hubs;
mod panel;
mod polynomial;
mod walk;

use crate::{Error, Scaled};
use descent::VALLEYS;
use num_complex::Complex64;
use polynomial::{Polynomial, ZERO};

/// A cuspoid integral and its first derivatives at one point.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Cuspoid<T, const K: usize> {
    /// Psi_K.
    pub psi: T,
    /// `dPsi_K/dx_m` in place `m - 1`.
    pub derivatives: [T; K],
}

/// Moments `integral of t^n e^(i f(t)) dt`, n = 0 .. K, as mantissas with one exponent of two.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Moments {
    /// `values[n] * 2^exponent`; beyond `n = K` zero.
    pub values: [Complex64; 5],
    /// The common exponent.
    pub exponent: i64,
}

/// sum_v weights_v ray_v.
pub fn moments(x: &[Complex64], weights: &[i32]) -> Result<Moments, Error> {
    let k = x.len();
    if !(1..=4).contains(&k) {
        return Err(Error::Unsupported {
            what: format!("a cuspoid integral with {k} parameters"),
            remedy: "pass one to four parameters",
        });
    }
    let mut w = [0; VALLEYS];
    w[..k + 2].copy_from_slice(&weights[..k + 2]);
    let mut h: Polynomial = [ZERO; 7];
    for (m, x) in x.iter().enumerate() {
        h[m + 1] = Complex64::new(-x.im, x.re);
    }
    h[k + 2] = Complex64::new(0.0, 1.0);
    let sum = match k {
        1 => descent::sum::<3>(&h, &w),
        2 => descent::sum::<4>(&h, &w),
        3 => descent::sum::<5>(&h, &w),
        _ => descent::sum::<6>(&h, &w),
    }?;
    Ok(Moments { values: sum.values, exponent: sum.exponent })
}

/// From valley to valley.
pub fn between<const K: usize>(
    x: &[Complex64; K],
    from: usize,
    to: usize,
) -> Result<Cuspoid<Scaled, K>, Error> {
    let mut w = [0; VALLEYS];
    w[from] -= 1;
    w[to] += 1;
    let m = moments(x, &w)?;
    let i = Complex64::new(0.0, 1.0);
    Ok(Cuspoid {
        psi: Scaled::new(m.values[0], m.exponent),
        derivatives: std::array::from_fn(|j| Scaled::new(i * m.values[j + 1], m.exponent)),
    })
}
