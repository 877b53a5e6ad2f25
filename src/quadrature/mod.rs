//! The yardstick: the integral itself, by quadrature on the contour flowed downhill.
//!
//! No saddle is located and no asymptotic formula is used. The contour descends on `|exp(i k f)|`
//! within its homotopy class (`flow`) until nothing of it lies higher than it must, and is then
//! integrated by adaptive Gauss panels (`panels`). Every other method of the crate can be checked
//! against it, point by point, by the person who uses it.

mod flow;
mod panels;
mod rule;
mod terrain;

use crate::integral::{Amplitude, Integral, Phase};
use crate::{Error, Estimate, Form, Scaled};
use flow::Flow;
use num_complex::Complex64;
use panels::Quadrature;
use terrain::Sampler;

/// Deepenings of the floor, should the amplitude grow into the valleys.
const ROUNDS: usize = 8;

impl<P: Phase, A: Amplitude> Integral<P, A> {
    /// `I(k) = integral over C of g(z) exp(i k f(z)) dz` by quadrature on the contour flowed
    /// downhill, to a relative tolerance.
    pub fn quadrature(&self, k: f64, tolerance: f64) -> Result<Estimate, Error> {
        Error::require_positive("k", k)?;
        Error::require_positive("tolerance", tolerance)?;
        self.contour().check()?;
        let tolerance = tolerance.clamp(f64::EPSILON, 0.1);
        let sampler = Sampler::new(self);
        let mut flow = Flow::new(&sampler, self.contour(), k)?;
        let mut depth = 6.0 - tolerance.ln();
        for _ in 0..ROUNDS {
            flow.relax(depth)?;
            let flowed = flow.contour(depth)?;
            let Some(summit) = flowed
                .pieces
                .iter()
                .flat_map(|(a, b)| [a, b])
                .max_by(|a, b| a.h.re.total_cmp(&b.h.re))
            else {
                break;
            };
            let digits = -(k * f64::EPSILON * sampler.noise_scale(summit.z)).log10();
            if digits < 0.5 {
                return Err(Error::NoDigits {
                    what: "the quadrature",
                    value: Complex64::new(k, 0.0),
                    digits,
                    remedy: "take a smaller k, or move a constant out of the phase",
                });
            }
            let quadrature = Quadrature { sampler: &sampler, k, h0: summit.h, floor: flowed.floor };
            let sum = quadrature.over(&flowed.pieces, tolerance)?;
            let left_out = sum.left_out
                + flowed.sunk.iter().map(|c| quadrature.left_out(c)).sum::<f64>()
                + flowed.tails.iter().map(|s| quadrature.tail(s)).sum::<f64>();
            let goal = (tolerance * sum.value.norm()).max(f64::EPSILON * sum.size);
            if left_out > 0.25 * goal {
                depth += 2.0 + (left_out / goal).ln().max(0.0);
                continue;
            }
            let reference = reference_factor(k, summit.h);
            let turn = k * f64::EPSILON * summit.h.norm() * sum.value.norm();
            let error = sum.defect + sum.noise + left_out + turn;
            let scale = Scaled::exp(Complex64::new(reference.0.re, 0.0));
            return Ok(Estimate::new(
                Scaled::exp(reference.0) * (sum.value * (1.0 + reference.1)),
                scale * error,
                0,
                Form::Quadrature { evaluations: sampler.count() },
            ));
        }
        Err(Error::NoConvergence {
            what: "the depth to which the integrand was followed",
            limit: ROUNDS,
            remedy: "the amplitude grows nearly as fast as exp(i k f) decays: put its exponential \
                     part into the phase",
        })
    }
}

/// `k h` as the rounded product and the rest that rounding left.
fn reference_factor(k: f64, h: Complex64) -> (Complex64, Complex64) {
    let product = h * k;
    let rest = Complex64::new(k.mul_add(h.re, -product.re), k.mul_add(h.im, -product.im));
    (product, rest)
}
