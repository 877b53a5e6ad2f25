//! How much any result changes with the figures of the sea.
//!
//! Fourth-order central differences (common practice) of whatever the caller computes from the figures; at
//! zero attenuation forward differences, since it can't be negative.

use super::acoustic::TwoLayer;
use crate::Error;

/// Derivatives of a result with respect to the figures it was computed from, in its unit per unit of
/// each.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Sensitivities {
    /// Per rad of the bed's slope.
    pub per_slope_rad: f64,
    /// Per Hz.
    pub per_frequency_hz: f64,
    /// Per m/s in the water.
    pub per_water_speed_m_per_s: f64,
    /// Per m/s in the bottom.
    pub per_bottom_speed_m_per_s: f64,
    /// Per kg/m^3 in the water.
    pub per_water_density_kg_per_m3: f64,
    /// Per kg/m^3 in the bottom.
    pub per_bottom_density_kg_per_m3: f64,
    /// Per dB per wavelength in the water.
    pub per_water_attenuation_db_per_wavelength: f64,
    /// Per dB per wavelength in the bottom.
    pub per_bottom_attenuation_db_per_wavelength: f64,
}

/// Derivatives of `quantity(sea, slope_rad)`: a cut-off range, an angle, a level, anything computed from
/// the figures.
///
/// Accuracy: relative 1e-8 or so for smooth results (steps of 1e-3 and 2e-3 of each figure); for the two speeds,
/// whose step counts against their difference, 3e-8 at 1500 over 1650 m/s and 2e-6 at 1500 over 1550 m/s (cut-off depth,
/// whose derivative is known). Cost: 32 evaluations.
///
/// Errors: those of `quantity`, at any of the neighbouring figures; [`Error::Domain`] for a result that is
/// not finite.
///
/// ```
/// use merging_saddles::guide::{AcousticGuide, TwoLayer, sensitivities};
/// let sea = TwoLayer {
///     frequency_hz: 100.0,
///     water_speed_m_per_s: 1500.0,
///     bottom_speed_m_per_s: 1650.0,
///     water_density_kg_per_m3: 1000.0,
///     bottom_density_kg_per_m3: 1800.0,
///     water_attenuation_db_per_wavelength: 0.0,
///     bottom_attenuation_db_per_wavelength: 0.0,
/// };
/// let slope = 2f64.to_radians();
/// let angle = |sea, slope| {
///     Ok(AcousticGuide::new(sea)?.upslope(1, slope, 60.0)?.take_off_angle_small_rad())
/// };
/// let s = sensitivities(sea, slope, angle)?;
/// // angle ~ (rho_b tan(slope))^(1/3) and no frequency: by differentiation of the small-angle formula.
/// let theta = angle(sea, slope)?;
/// assert!((s.per_bottom_density_kg_per_m3 / (theta / 3.0 / 1800.0) - 1.0).abs() < 1e-7);
/// assert!((s.per_slope_rad / (theta / 3.0 / (slope.sin() * slope.cos())) - 1.0).abs() < 1e-7);
/// assert!(s.per_frequency_hz.abs() < 1e-10);
/// // Cut-off depth h = (n - 1/2) pi/q (textbook modal relation): dh/dc_w = h (omega^2/c_w^3)/q^2.
/// for (bottom_speed_m_per_s, promise) in [(1650.0, 4e-8), (1550.0, 3e-6)] {
///     let sea = TwoLayer { bottom_speed_m_per_s, ..sea };
///     let depth = |sea, _| AcousticGuide::new(sea)?.cutoff_depth_m(2);
///     let s = sensitivities(sea, slope, depth)?;
///     let (water, bottom) = (1500f64.powi(-2), bottom_speed_m_per_s.powi(-2));
///     let exact = depth(sea, slope)? * water / (water - bottom) / 1500.0;
///     assert!((s.per_water_speed_m_per_s / exact - 1.0).abs() < promise);
/// }
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn sensitivities(
    sea: TwoLayer,
    slope_rad: f64,
    quantity: impl Fn(TwoLayer, f64) -> Result<f64, Error>,
) -> Result<Sensitivities, Error> {
    let at = |sea: TwoLayer, slope: f64| {
        let value = quantity(sea, slope)?;
        Error::require_finite("quantity", value)?;
        Ok(value)
    };
    type Set = fn(&mut TwoLayer, f64);
    let figure = |value: f64, set: Set| {
        derivative(value, |x| {
            let mut other = sea;
            set(&mut other, x);
            at(other, slope_rad)
        })
    };
    Ok(Sensitivities {
        per_slope_rad: derivative(slope_rad, |slope| at(sea, slope))?,
        per_frequency_hz: figure(sea.frequency_hz, |s, x| s.frequency_hz = x)?,
        per_water_speed_m_per_s: figure(sea.water_speed_m_per_s, |s, x| s.water_speed_m_per_s = x)?,
        per_bottom_speed_m_per_s: figure(sea.bottom_speed_m_per_s, |s, x| {
            s.bottom_speed_m_per_s = x;
        })?,
        per_water_density_kg_per_m3: figure(sea.water_density_kg_per_m3, |s, x| {
            s.water_density_kg_per_m3 = x;
        })?,
        per_bottom_density_kg_per_m3: figure(sea.bottom_density_kg_per_m3, |s, x| {
            s.bottom_density_kg_per_m3 = x;
        })?,
        per_water_attenuation_db_per_wavelength: figure(
            sea.water_attenuation_db_per_wavelength,
            |s, x| s.water_attenuation_db_per_wavelength = x,
        )?,
        per_bottom_attenuation_db_per_wavelength: figure(
            sea.bottom_attenuation_db_per_wavelength,
            |s, x| s.bottom_attenuation_db_per_wavelength = x,
        )?,
    })
}

/// Central differences of fourth order, forward ones at zero.
fn derivative(at: f64, f: impl Fn(f64) -> Result<f64, Error>) -> Result<f64, Error> {
    if at == 0.0 {
        let step = 1e-3;
        let [a, b, c, d, e] = [0.0, 1.0, 2.0, 3.0, 4.0].map(|j| f(step * j));
        return Ok((-25.0 * a? + 48.0 * b? - 36.0 * c? + 16.0 * d? - 3.0 * e?) / (12.0 * step));
    }
    let step = 1e-3 * at;
    let [a, b, c, d] = [-2.0, -1.0, 1.0, 2.0].map(|j| f(at + step * j));
    Ok((a? - 8.0 * b? + 8.0 * c? - d?) / (12.0 * step))
}
