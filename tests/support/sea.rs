//! The sea of the guide's tests.

#![allow(dead_code)] // Each test uses its part.

use merging_saddles::guide::{Profile, TwoLayer};

/// 100 Hz, 1500 over 1650 m/s, densities 1 to 1.8.
pub const SEA: TwoLayer = TwoLayer {
    frequency_hz: 100.0,
    water_speed_m_per_s: 1500.0,
    bottom_speed_m_per_s: 1650.0,
    water_density_kg_per_m3: 1000.0,
    bottom_density_kg_per_m3: 1800.0,
    water_attenuation_db_per_wavelength: 0.0,
    bottom_attenuation_db_per_wavelength: 0.0,
};

/// Depth of a bay and its derivative.
pub fn depth(s: f64) -> (f64, f64) {
    let (angle, rate) = (s / 1500.0, 1.0 / 1500.0);
    (52.0 - 0.02 * s - 5.0 * angle.sin(), -0.02 - 5.0 * rate * angle.cos())
}

pub fn bay() -> Profile {
    Profile::from_fn(0.0, 2200.0, depth).unwrap()
}
