//! The bound mode of a guide that changes slowly, well before cut-off.

use super::dispersion::Dispersion;
use super::uniform::{Place, SlopingGuide};
use crate::{Complex64, Error};
use std::f64::consts::FRAC_PI_2;

const I: Complex64 = Complex64::new(0.0, 1.0);

/// The incoming mode while it is still bound, to leading order in `eps` (adiabatic).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Adiabatic {
    /// `kappa`: inside the mode is `antinode * sin(kappa x)`.
    pub kappa: Complex64,
    /// `gamma`: outside it decays like `exp(-gamma (x - h))`.
    pub gamma: Complex64,
    /// Amplitude of the sine for unit energy (in the wide-angle form unit flux of energy), without the phase.
    pub antinode: Complex64,
    /// Logarithm of the factor that the mode carries relative to cut-off: an imaginary phase, and
    /// with losses the decay up to cut-off.
    pub exponent: Complex64,
}

impl SlopingGuide {
    /// The adiabatic mode where the guide has the width `h`, wider than at cut-off.
    ///
    /// Errors: [`Error::Domain`] at and beyond cut-off, [`Error::NoConvergence`] where losses are so
    /// large that the mode cannot be followed from the loss-free one.
    ///
    /// ```
    /// use merging_saddles::guide::SlopingGuide;
    /// let mode = SlopingGuide::new(1, 0.55, 0.05)?.adiabatic(3.0)?;
    /// // kappa cot(kappa h) = -m gamma, kappa^2 + gamma^2 = 1 (textbook modal relation).
    /// let (k, g) = (mode.kappa.re, mode.gamma.re);
    /// assert!((k / (3.0 * k).tan() + 0.55 * g).abs() < 1e-13);
    /// assert!((k * k + g * g - 1.0).abs() < 1e-15);
    /// // Unit energy: integral of psi^2, weight 1 inside and m outside.
    /// let inside = 1.5 - (6.0 * k).sin() / (4.0 * k);
    /// let outside = 0.55 * (3.0 * k).sin().powi(2) / (2.0 * g);
    /// assert!((mode.antinode.re.powi(2) * (inside + outside) - 1.0).abs() < 1e-13);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn adiabatic(&self, h: impl Into<Complex64>) -> Result<Adiabatic, Error> {
        self.adiabatic_at(self.place(h.into()))
    }

    pub(super) fn adiabatic_at(&self, place: Place) -> Result<Adiabatic, Error> {
        let Place { h, r } = place;
        let Dispersion { cutoff, m } = self.dispersion;
        if !(h.re > cutoff && h.norm().is_finite()) {
            return Err(Error::Domain {
                what: "width h",
                value: h,
                remedy: "the bound mode exists above the cut-off width only",
            });
        }
        // Newton from the loss-free mode to the complex width, and for the last digits.
        let mut w = I * self.bound_angle(h.re);
        let mut converged = false;
        for _ in 0..30 {
            let width = self.dispersion.width(w);
            let step = (width - h) / (self.dispersion.width_slope(w, width) * w.cosh());
            w -= step;
            // No better than the rounding of the width.
            if step.norm() <= 1e-14 * (w.norm() + h.norm()) {
                converged = true;
                break;
            }
        }
        if !(converged && w.im > 0.0 && w.im < FRAC_PI_2) {
            return Err(Error::NoConvergence {
                what: "the bound mode with losses",
                limit: 30,
                remedy: "reduce the losses, or go farther from cut-off",
            });
        }
        let (p, kappa) = (w.sinh(), w.cosh());
        let gamma = -I * p;
        let wide = self.wide();
        let shape = gamma * 2.0 / (m / self.dispersion.density(p) + gamma * h);
        let antinode = (shape / wide.cosine(p)).sqrt();
        let mut action = self.dispersion.action(w, h);
        if let Some(curve) = &self.curve {
            action += curve.phase_once(wide.variable(p))
                - p * p * (r - (cutoff - h))
                - wide.excess(p) * r;
        }
        let exponent = I * action / self.eps;
        Ok(Adiabatic { kappa, gamma, antinode, exponent })
    }
}
