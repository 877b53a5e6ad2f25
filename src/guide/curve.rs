//! What the bend of a profile adds to the phase of the uniform field.
//!
//! Round cut-off the scaled range is a polynomial of the width, `T(u) = u + c_2 u^2 + c_3 u^3 + ..`,
//! `u = h_c - h` (unit slope at cut-off). The phase is `phi(p) = integral of 2 p T(h_n(p)) dp`; its part
//! from `T = u` is elementary, the rest
//!
//! ```text
//! J(w) = integral from 0 to w of 2 sinh w cosh w G(h_c - h_n(w)) dw,   G(u) = c_2 u^2 + c_3 u^3 + ..
//! ```
//!
//! is not. It is tabulated once per profile: Taylor series about the points of a grid of step 0.4, from
//! values on circles that stay clear of the pole of the width at `i pi/2`, of the branch cuts and of the
//! Brewster point (`m > 1`). Where no circle fits, and outside the grid, Gauss-Legendre panels (DLMF
//! 3.5(v)) lead from 0 to the point, round the pole on the side of the contour.
//!
//! Source: derived here.

use super::dispersion::Dispersion;
use crate::Complex64;
use std::f64::consts::{FRAC_PI_2, TAU};
use std::fmt;

/// The grid: step, lower left corner, columns and rows.
const STEP: f64 = 0.4;
const CORNER: Complex64 = Complex64::new(-2.4, -0.8);
const COLUMNS: usize = 13;
const ROWS: usize = 9;
/// Terms of a series, and places on its circle.
const TERMS: usize = 36;
const CIRCLE: usize = 64;
/// The least distance from everything singular; half a diagonal of the grid is 0.283.
const CLEAR: f64 = 0.65;

/// Nodes and weights of the 6-point Gauss-Legendre rule on (-1, 1), positive half (DLMF 3.5(v)).
const GAUSS: [(f64, f64); 3] = [
    (0.238_619_186_083_196_93, 0.467_913_934_572_691),
    (0.661_209_386_466_264_5, 0.360_761_573_048_138_6),
    (0.932_469_514_203_152, 0.171_324_492_379_170_36),
];

/// A curved profile for one mode.
#[derive(Clone, PartialEq)]
pub(super) struct Curve {
    dispersion: Dispersion,
    /// `c_2, c_3, ..`
    higher: Vec<Complex64>,
    /// Taylor coefficients of `J` in powers of `(w - centre)/STEP`, one list for each point of the grid.
    patches: Vec<Option<Vec<Complex64>>>,
    /// Where the contour crosses the line `Im w = pi/2`.
    gate: Complex64,
}

impl fmt::Debug for Curve {
    /// Without the table.
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(out, "Curve({:?}, {:?})", self.dispersion, self.higher)
    }
}

impl Curve {
    pub(super) fn new(dispersion: Dispersion, higher: Vec<Complex64>) -> Curve {
        let gate = Complex64::new(-dispersion.gate(), FRAC_PI_2);
        let mut curve = Curve { dispersion, higher, patches: Vec::new(), gate };
        let turns: Vec<Complex64> = (0..CIRCLE)
            .map(|j| Complex64::from_polar(1.0, TAU * j as f64 / CIRCLE as f64))
            .collect();
        let cells = (0..ROWS).flat_map(|row| (0..COLUMNS).map(move |column| (column, row)));
        curve.patches = cells.map(|cell| curve.patch(centre(cell), &turns)).collect();
        curve
    }

    /// The series about a point: coefficients of `J'` by the trapezoidal rule on a circle, integrated term
    /// by term.
    fn patch(&self, centre: Complex64, turns: &[Complex64]) -> Option<Vec<Complex64>> {
        let clear = self.dispersion.clearance(centre);
        if clear < CLEAR {
            return None;
        }
        let circle = 0.6 * clear.min(1.6);
        let values: Vec<Complex64> = turns.iter().map(|t| self.rate(centre + t * circle)).collect();
        let mut series = vec![self.led(centre)];
        let mut scale = STEP / CIRCLE as f64;
        for n in 0..TERMS {
            let sum: Complex64 =
                values.iter().enumerate().map(|(j, v)| v * turns[j * n % CIRCLE].conj()).sum();
            series.push(sum * (scale / (n + 1) as f64));
            scale *= STEP / circle;
        }
        Some(series)
    }

    /// `G(u)` and `G'(u)`.
    pub(super) fn excess(&self, u: Complex64) -> (Complex64, Complex64) {
        let zero = Complex64::new(0.0, 0.0);
        let (mut value, mut slope) = (zero, zero);
        for c in self.higher.iter().rev() {
            slope = slope * u + value;
            value = value * u + c;
        }
        // value = G/u^2
        (value * u * u, (value * 2.0 + slope * u) * u)
    }

    /// `dT/du`: the slope at cut-off over the local slope.
    pub(super) fn flatness(&self, u: Complex64) -> Complex64 {
        self.excess(u).1 + 1.0
    }

    /// `dJ/dw`.
    pub(super) fn rate(&self, w: Complex64) -> Complex64 {
        let u = self.dispersion.cutoff - self.dispersion.width(w);
        w.sinh() * w.cosh() * self.excess(u).0 * 2.0
    }

    /// `J(w)`.
    pub(super) fn phase(&self, w: Complex64) -> Complex64 {
        let place = (w - CORNER) / STEP;
        let (column, row) = (place.re.round(), place.im.round());
        if (0.0..COLUMNS as f64).contains(&column) && (0.0..ROWS as f64).contains(&row) {
            let cell = (column as usize, row as usize);
            if let Some(series) = &self.patches[cell.1 * COLUMNS + cell.0] {
                let offset = (w - centre(cell)) / STEP;
                let start = Complex64::new(0.0, 0.0);
                return series.iter().rev().fold(start, |sum, c| sum * offset + c);
            }
        }
        self.led(w)
    }

    /// `J(w)` from panels.
    fn led(&self, w: Complex64) -> Complex64 {
        let zero = Complex64::new(0.0, 0.0);
        if w.im <= FRAC_PI_2 {
            self.along(zero, w)
        } else {
            self.along(zero, self.gate) + self.along(self.gate, w)
        }
    }

    /// The integral of `rate` along a straight line.
    fn along(&self, from: Complex64, to: Complex64) -> Complex64 {
        // Short beside the distance from the poles; a bounded number however far `to` is.
        let panels = ((to - from).norm() / 0.25).ceil().clamp(1.0, 64.0);
        let step = (to - from) / panels;
        let mut sum = Complex64::new(0.0, 0.0);
        for j in 0..panels as u32 {
            let middle = from + step * (f64::from(j) + 0.5);
            for (node, weight) in GAUSS {
                let offset = step * (0.5 * node);
                sum += (self.rate(middle + offset) + self.rate(middle - offset)) * weight;
            }
        }
        sum * step * 0.5
    }
}

fn centre((column, row): (usize, usize)) -> Complex64 {
    CORNER + Complex64::new(STEP * column as f64, STEP * row as f64)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn phase_is_the_integral_of_its_rate() {
        let c = Complex64::new;
        for (n, m) in [(1, 1.0), (2, 0.55), (1, 0.9), (1, 1.3)] {
            let curve = Curve::new(Dispersion::new(n, m), vec![c(0.25, 0.01), c(-0.1, 0.0)]);
            let points = [
                c(0.1, 0.2),
                c(-0.3, 0.3),
                c(0.0, 1.0),
                c(0.0, 1.2),
                c(-0.3, 1.0),
                c(-1.4, 1.5),
                c(-1.4, 1.65),
                c(-1.8, 2.3),
                c(-2.9, 2.4),
                c(if m > 1.0 { 0.7 * m.recip().atanh() } else { 1.4 }, 0.1),
            ];
            for w in points {
                let step = 1e-4;
                let slope = (curve.phase(w + step) - curve.phase(w - step)) / (2.0 * step);
                let rate = curve.rate(w);
                let error = (slope - rate).norm() / (1.0 + rate.norm());
                assert!(error < 1e-6, "n {n} m {m} w {w}: {slope} {rate}");
                // The table against the panels.
                let error = (curve.phase(w) - curve.led(w)).norm() / (1.0 + rate.norm());
                assert!(error < 1e-9, "n {n} m {m} w {w}: {error:e}");
            }
        }
    }
}
