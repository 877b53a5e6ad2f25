//! The phase and the flux of a mode along a guide, tabulated: adiabatic modes, common practice.

use crate::{Complex64, Error};

const I: Complex64 = Complex64::new(0.0, 1.0);

/// Wavenumber along a guide, and the sum of a rate of phase from the first range on.
#[derive(Clone, Debug)]
pub(super) struct Along {
    from: f64,
    step: f64,
    cells: Vec<Cell>,
}

/// Wavenumber and rate at the beginning, the middle and the end of a step, and the phase up to it.
#[derive(Clone, Debug)]
struct Cell {
    wavenumber: [Complex64; 3],
    rate: [Complex64; 3],
    phase: Complex64,
}

impl Along {
    /// From a function that returns the wavenumber and the rate at a range, in steps of Simpson's rule.
    pub(super) fn new(
        from: f64,
        to: f64,
        at: impl Fn(f64) -> Result<(Complex64, Complex64), Error>,
    ) -> Result<Self, Error> {
        const STEPS: u32 = 100;
        let step = (to - from) / f64::from(STEPS);
        let mut phase = Complex64::new(0.0, 0.0);
        let mut left = at(from)?;
        let mut cells = Vec::with_capacity(STEPS as usize);
        for j in 0..STEPS {
            let middle = at(from + step * (f64::from(j) + 0.5))?;
            let right = at(if j + 1 == STEPS { to } else { from + step * f64::from(j + 1) })?;
            let cell = Cell {
                wavenumber: [left.0, middle.0, right.0],
                rate: [left.1, middle.1, right.1],
                phase,
            };
            phase += (left.1 + middle.1 * 4.0 + right.1) * (step / 6.0);
            cells.push(cell);
            left = right;
        }
        Ok(Along { from, step, cells })
    }

    /// `(k_n(from)/k_n)^(1/2) exp(i phase)` at a range; beyond the last one as there.
    pub(super) fn factor(&self, range: f64) -> Complex64 {
        let places = if self.step == 0.0 { 0.0 } else { (range - self.from) / self.step };
        let places = places.clamp(0.0, self.cells.len() as f64);
        let j = (places as usize).min(self.cells.len().saturating_sub(1));
        let (Some(first), Some(cell)) = (self.cells.first(), self.cells.get(j)) else {
            return Complex64::from(1.0);
        };
        // A parabola through the three places of the step, and its integral.
        let u = places - j as f64;
        let bend = |[a, b, c]: [Complex64; 3]| {
            (b * 4.0 - a * 3.0 - c, (a + c - b * 2.0) * 2.0) // linear and square coefficients
        };
        let (slope, square) = bend(cell.wavenumber);
        let here = cell.wavenumber[0] + (slope + square * u) * u;
        let (slope, square) = bend(cell.rate);
        let part = (cell.rate[0] + (slope * 0.5 + square * (u / 3.0)) * u) * (u * self.step);
        (first.wavenumber[0] / here).sqrt() * (I * (cell.phase + part)).exp()
    }
}
