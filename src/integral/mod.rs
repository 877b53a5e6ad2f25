//! What a caller hands in: a phase, an amplitude and a contour.
//!
//! The integral is `I(k) = integral over C of g(z) exp(i k f(z)) dz` with the wavenumber `k > 0`
//! as the large parameter, `f` (the phase) and `g` (the amplitude) analytic near the contour.

mod contour;
mod jet;
mod phase;

pub use contour::{Contour, Termination};
pub use jet::{Formula, Jet};
pub use phase::{Amplitude, Phase, Polynomial, Unit, ValueOnly};

/// An oscillatory integral with everything but its wavenumber.
#[derive(Clone, Debug)]
pub struct Integral<P, A = Unit> {
    phase: P,
    amplitude: A,
    contour: Contour,
}

impl<P: Phase> Integral<P> {
    /// The integral of `exp(i k f(z))` along a contour, with amplitude 1.
    pub fn new(phase: P, contour: Contour) -> Self {
        Integral { phase, amplitude: Unit, contour }
    }

    /// The same with the amplitude `g(z)`.
    pub fn amplitude<A: Amplitude>(self, amplitude: A) -> Integral<P, A> {
        Integral { phase: self.phase, amplitude, contour: self.contour }
    }
}

impl<P: Phase, A: Amplitude> Integral<P, A> {
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
    pub fn amplitude_at(&self, z: crate::Complex64) -> crate::Complex64 {
        self.amplitude.value(z)
    }
}
