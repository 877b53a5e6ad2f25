//! What a caller hands in: a phase, an amplitude and a contour.
//!
//! The integral is `I(k) = integral over C of g(z) exp(i k f(z)) dz` with the wavenumber `k > 0`
//! as the large parameter, `f` (the phase) and `g` (the amplitude) analytic near the contour.

use num_complex::Complex64;

mod contour;
mod jet;
mod phase;
mod root;

pub use contour::{Contour, Termination};
pub use jet::{Formula, Jet};
pub use phase::{Amplitude, Phase, Polynomial, Unit, ValueOnly};
pub use root::{OverRoot, RootAmplitude, RootPhase};

/// An oscillatory integral with everything but its wavenumber.
#[derive(Clone, Debug)]
pub struct Integral<P, A = Unit> {
    phase: P,
    amplitude: A,
    contour: Contour,
    poles: Vec<Complex64>,
}

impl<P: Phase> Integral<P> {
    /// The integral of `exp(i k f(z))` along a contour, with amplitude 1.
    pub fn new(phase: P, contour: Contour) -> Self {
        Integral { phase, amplitude: Unit, contour, poles: Vec::new() }
    }

    /// The same with the amplitude `g(z)`.
    pub fn amplitude<A: Amplitude>(self, amplitude: A) -> Integral<P, A> {
        Integral { phase: self.phase, amplitude, contour: self.contour, poles: self.poles }
    }
}

impl<P: Phase, A: Amplitude> Integral<P, A> {
    /// Says that the amplitude has a simple or double pole at `z`.
    ///
    /// A plan needs to know the poles near the saddles and those that the contour must be drawn
    /// across on its way down; the principal part is measured from values round the pole.
    pub fn pole(mut self, z: Complex64) -> Self {
        self.poles.push(z);
        self
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
