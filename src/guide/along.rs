//! From the one-way equation to the wave equation along the guide.
//!
//! The one-way equation has the wavenumber `k + q^2 gamma^2/(2 k)` in place of a bound mode's
//! `k_n = (k^2 + q^2 gamma^2)^(1/2)`. In a deep guide that is a radian after some hundred wavelengths, and with
//! losses outside alone the mode even grows a little. At cut-off `gamma` is zero and nothing is left of it, so the
//! difference, summed up to there, is a factor of each mode. With it goes the energy flux, which is `k_n` times the
//! square. Source: derived here; adiabatic modes, common practice.

use super::passage::{Media, Passage};
use crate::{Complex64, Error};

const I: Complex64 = Complex64::new(0.0, 1.0);

/// Wavenumber of a bound mode, and what it has more than that of the one-way equation.
pub(super) fn wavenumber(media: &Media, gamma: Complex64) -> (Complex64, Complex64) {
    let (k, extra) = (media.k, (media.q * gamma).powi(2));
    let full = (k * k + extra).sqrt();
    (full, -extra * extra / (k * 2.0 * (full + k).powi(2)))
}

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

impl Passage {
    /// What a field of the one-way equation, known at one range and computed at another, is to be multiplied by for
    /// the wavenumber, the losses and the energy flux of the wave equation: `(k_n(from)/k_n(to))^(1/2) exp(i integral
    /// of (k_n - k - q^2 gamma^2/(2 k)) ds)`, up to cut-off.
    ///
    /// Without losses its phase turns the whole mode and its modulus is a few per cent from 1. With losses
    /// outside it takes away the growth that the one-way equation has far before cut-off. For a quantum well it is 1.
    /// [`AcousticGuide::source`](super::AcousticGuide::source) and [`SlabGuide::launch`](super::SlabGuide::launch) have
    /// it in them, fields of one mode have not.
    ///
    /// Cost: 201 adiabatic modes. Errors: [`Error::Domain`] for ranges off the profile, or where the mode is not bound
    /// at `from`.
    ///
    /// ```
    /// use merging_saddles::guide::{AcousticGuide, TwoLayer};
    /// let guide = AcousticGuide::new(TwoLayer {
    ///     frequency_hz: 100.0,
    ///     water_speed_m_per_s: 1500.0,
    ///     bottom_speed_m_per_s: 1650.0,
    ///     water_density_kg_per_m3: 1000.0,
    ///     bottom_density_kg_per_m3: 1800.0,
    ///     water_attenuation_db_per_wavelength: 0.0,
    ///     bottom_attenuation_db_per_wavelength: 0.0,
    /// })?;
    /// let run = guide.upslope(1, 0.01, 100.0)?;
    /// let deep = -(100.0 - run.cutoff_depth_m()) / 0.01f64.tan();
    /// // Deep down k_n is that of the water, nearly: the flux changes by the speeds' ratio (textbook modal relation).
    /// let factor = run.passage().wide_angle_factor(deep, 100.0)?;
    /// assert!((factor.norm() - (1650.0f64 / 1500.0).sqrt()).abs() < 0.01);
    /// // Beyond cut-off it stays what it is there.
    /// assert_eq!(factor, run.passage().wide_angle_factor(deep, 200.0)?);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn wide_angle_factor(&self, from: f64, to: f64) -> Result<Complex64, Error> {
        Ok(self.along(from, to)?.map_or(Complex64::from(1.0), |along| along.factor(to)))
    }

    /// The same for all ranges up to the last or to cut-off; none for a well.
    pub(super) fn along(&self, from: f64, to: f64) -> Result<Option<Along>, Error> {
        let media = *self.media();
        if media.carrier == Complex64::new(0.0, 0.0) {
            return Ok(None);
        }
        let [first, last] = self.profile().ranges();
        for range in [from, to] {
            if !(range.is_finite() && range >= first && range <= last) {
                return Err(Error::domain("range", range, "stay on the profile"));
            }
        }
        if from >= self.cutoff_range() {
            let remedy = "begin where the mode is bound, before its cut-off";
            return Err(Error::domain("range", from, remedy));
        }
        let at = |range: f64| -> Result<(Complex64, Complex64), Error> {
            match self.bound_shape(range) {
                Ok(mode) => Ok(wavenumber(&media, mode.gamma)),
                // At cut-off, and with losses a little before: the difference goes with gamma^4.
                Err(_) if self.profile().width(range) < 1.1 * self.cutoff_width() => {
                    Ok((media.k, Complex64::new(0.0, 0.0)))
                }
                Err(error) => Err(error),
            }
        };
        Along::new(from, to.min(self.cutoff_range()), at).map(Some)
    }
}
