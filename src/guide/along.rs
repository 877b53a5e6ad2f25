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

/// The integral by Simpson's rule.
pub(super) fn simpson<T>(
    from: f64,
    to: f64,
    f: impl Fn(f64) -> Result<T, Error>,
) -> Result<T, Error>
where
    T: std::ops::Mul<f64, Output = T> + std::ops::Add<Output = T>,
{
    const STEPS: u32 = 200;
    let step = (to - from) / f64::from(STEPS);
    let mut sum = f(from)? + f(to)?;
    for j in 1..STEPS {
        let weight = if j % 2 == 1 { 4.0 } else { 2.0 };
        sum = sum + f(from + step * f64::from(j))? * weight;
    }
    Ok(sum * (step / 3.0))
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
    /// Cost: 200 adiabatic modes. Errors: [`Error::Domain`] for ranges off the profile, or where the mode is not bound
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
        let media = *self.media();
        if media.carrier == Complex64::new(0.0, 0.0) {
            return Ok(Complex64::from(1.0));
        }
        let [first, last] = self.profile().ranges();
        for range in [from, to] {
            if !(range.is_finite() && range >= first && range <= last) {
                return Err(Error::domain("range", range, "stay on the profile"));
            }
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
        if from >= self.cutoff_range() {
            let remedy = "begin where the mode is bound, before its cut-off";
            return Err(Error::domain("range", from, remedy));
        }
        let end = to.min(self.cutoff_range());
        let (before, after) = (at(from)?.0, at(end)?.0);
        let turned = simpson(from, end, |range| Ok(at(range)?.1))?;
        Ok((before / after).sqrt() * (I * turned).exp())
    }
}
