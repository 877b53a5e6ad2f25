//! `Phi(u) = u^(K+2) + x_K u^K + .. + x_1 u` (DLMF 36.2.1).

use super::level::MEAN;
use crate::ring::{MAX_SADDLES, NormalForm, ZERO};
use num_complex::Complex64;

/// `Phi` as a polynomial in `u` without constant term: coefficients of `u^0 .. u^D`.
pub(crate) struct Unfolding {
    c: [Complex64; MAX_SADDLES + 2],
    degree: usize,
    /// Errors of the `x_j`.
    noise: [f64; MAX_SADDLES],
}

impl Unfolding {
    /// Of a normal form.
    pub fn new(form: &NormalForm) -> Unfolding {
        let degree = form.degree();
        let mut c = [ZERO; MAX_SADDLES + 2];
        for (j, c) in c.iter_mut().enumerate().take(form.saddles()).skip(1) {
            *c = form.x(j);
        }
        c[degree] += 1.0;
        let mean = MEAN * form.residual();
        let noise = std::array::from_fn(|j| mean / form.radius().powi(j as i32));
        Unfolding { c, degree, noise }
    }

    /// Taylor coefficients of `Phi` about `u`.
    pub fn about(&self, u: Complex64) -> [Complex64; MAX_SADDLES + 2] {
        let mut t = self.c;
        for start in 0..self.degree {
            for j in (start..self.degree).rev() {
                t[j] += t[j + 1] * u;
            }
        }
        t
    }

    /// The sizes of all terms that `Phi(u + s) - Phi(u)` is summed from.
    pub fn terms(&self, u: Complex64, s: Complex64) -> f64 {
        let (u, s) = (u.norm(), s.norm());
        let at =
            |x: f64| self.c[..=self.degree].iter().rev().fold(0.0, |sum, c| sum * x + c.norm());
        at(u + s) - at(u)
    }

    /// Coefficients of `Phi'`, `u^0 .. u^(K+1)`.
    pub fn derivative(&self) -> [Complex64; MAX_SADDLES + 1] {
        std::array::from_fn(|j| self.c[j + 1] * (j + 1) as f64)
    }

    /// `K + 2`.
    pub fn degree(&self) -> usize {
        self.degree
    }

    /// `x_j`, `1 <= j <= K`.
    pub fn x(&self, j: usize) -> Complex64 {
        self.c[j]
    }

    /// Expected error of `x_j`.
    pub fn noise(&self, j: usize) -> f64 {
        self.noise[j]
    }

    /// The polynomial with conjugate coefficients: `conj Phi(conj u)`.
    pub fn conj(&self) -> Unfolding {
        Unfolding { c: self.c.map(|c| c.conj()), degree: self.degree, noise: self.noise }
    }

    /// `Phi(u)`.
    pub fn value(&self, u: Complex64) -> Complex64 {
        crate::ring::evaluate(&self.c[..=self.degree], u)
    }
}
