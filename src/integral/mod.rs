//! What a caller hands in: a phase, an amplitude and a contour.
//!
//! The integral is `I(k) = integral over C of g(z) exp(i k f(z)) dz` with the wavenumber `k > 0`
//! as the large parameter, `f` (the phase) and `g` (the amplitude) analytic near the contour.

use crate::Error;
use num_complex::Complex64;

mod contour;
mod gradient;
mod jet;
mod map;
mod phase;
mod root;
mod sheet;

pub use contour::{Contour, Termination};
pub(crate) use gradient::MovingEnd;
pub use gradient::{Fixed, Gradient, ParameterDerivatives};
pub use jet::{Formula, Jet};
pub use map::{MappedAmplitude, MappedPhase};
pub use phase::{Amplitude, Phase, Polynomial, Unit, ValueOnly};
pub use root::{OverRoot, RootAmplitude, RootPhase};
pub(crate) use sheet::check_continuous;

/// The range of exponents of algebraic ends.
const LEAST_POWER: f64 = 0.01;
const GREATEST_POWER: f64 = 100.0;

/// An oscillatory integral with everything but its wavenumber.
#[derive(Clone, Debug)]
pub struct Integral<P, A = Unit> {
    phase: P,
    amplitude: A,
    contour: Contour,
    poles: Vec<Complex64>,
    /// `lambda` at the start and at the finish.
    powers: [f64; 2],
}

impl<P: Phase> Integral<P> {
    /// The integral of `exp(i k f(z))` along a contour, with amplitude 1.
    pub fn new(phase: P, contour: Contour) -> Self {
        Integral { phase, amplitude: Unit, contour, poles: Vec::new(), powers: [1.0; 2] }
    }

    /// The same with the amplitude `g(z)`.
    pub fn amplitude<A: Amplitude>(self, amplitude: A) -> Integral<P, A> {
        Integral {
            phase: self.phase,
            amplitude,
            contour: self.contour,
            poles: self.poles,
            powers: self.powers,
        }
    }
}

impl<P: Phase, A: Amplitude> Integral<P, A> {
    /// Says that the amplitude has a simple or double pole at `z`.
    ///
    /// A plan needs to know the poles near the saddles and those that the contour must be drawn
    /// across on its way down; the principal part is measured from values round the pole. The yardstick finds
    /// poles by itself, but counts one below some 1e-11 of the amplitude only if it was named.
    pub fn pole(mut self, z: Complex64) -> Self {
        self.poles.push(z);
        self
    }

    /// Says that the integrand has the further factor `(z - z_0)^(lambda - 1)`, `lambda > 0`, at the finite
    /// start `z_0` of the contour.
    ///
    /// The power is continued along the contour, from its principal value where the contour leaves `z_0`;
    /// the amplitude is what is left, analytic at `z_0`. A plan follows it with up to two saddles near
    /// `z_0`; the contour may wind round its end.
    ///
    /// ```
    /// use merging_saddles::{Complex64 as C, Contour, Integral};
    /// // Gamma(1/3) k^(-1/3) = integral_0^inf t^(-2/3) e^(-k t) dt (DLMF 5.9.1);
    /// // Gamma(1/3) = 2.678938534707747633 (mpmath, 19 digits).
    /// let integral = Integral::new(
    ///     |t: C| (t * C::new(0.0, 1.0), C::new(0.0, 1.0)),
    ///     Contour::starting_at([C::new(0.0, 0.0), C::new(3.0, 0.0)]),
    /// ).power_at_start(1.0 / 3.0);
    /// let u = integral.plan()?.at(8.0)?;
    /// assert!((u.value.re - 2.678938534707747633 / 2.0).abs() < 1e-14);
    /// assert!((integral.quadrature(8.0, 1e-13)?.value - u.value).norm() < 1e-12);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    ///
    /// Source: Watson's lemma (DLMF 2.4(i)); with a saddle near the end N. Bleistein, Comm. Pure Appl.
    /// Math. 19 (1966) 353.
    pub fn power_at_start(mut self, lambda: f64) -> Self {
        self.powers[0] = lambda;
        self
    }

    /// The same at the finite end `z_1` of the contour, the factor being `(z_1 - z)^(lambda - 1)`.
    pub fn power_at_end(mut self, lambda: f64) -> Self {
        self.powers[1] = lambda;
        self
    }

    /// `lambda` at the start and at the end; 1 where there is no such factor.
    pub fn powers(&self) -> [f64; 2] {
        self.powers
    }

    /// Refuses powers at ends that are not finite, and exponents out of range.
    pub(crate) fn check_powers(&self) -> Result<(), Error> {
        for (lambda, termination) in
            self.powers.into_iter().zip([self.contour.start(), self.contour.end()])
        {
            if !(LEAST_POWER..=GREATEST_POWER).contains(&lambda) {
                let remedy = "give an exponent lambda from 0.01 to 100 in (z - z_0)^(lambda - 1)";
                return Err(Error::domain("exponent of an algebraic end", lambda, remedy));
            }
            if lambda != 1.0 && termination != Termination::Finite {
                let remedy = "only a finite end of the contour takes a power: write other factors \
                              into the amplitude";
                return Err(Error::domain("exponent at an end that is not finite", lambda, remedy));
            }
        }
        Ok(())
    }

    /// The poles that the caller named.
    pub fn poles(&self) -> &[Complex64] {
        &self.poles
    }

    /// The phase.
    pub fn phase(&self) -> &P {
        &self.phase
    }

    /// The contour.
    pub fn contour(&self) -> &Contour {
        &self.contour
    }

    pub(crate) fn amplitude_ref(&self) -> &A {
        &self.amplitude
    }

    /// The amplitude's value at a point.
    pub fn amplitude_at(&self, z: Complex64) -> Complex64 {
        self.amplitude.value(z)
    }
}
