//! A slowly narrowing quantum well: states released one by one.

use super::passage::{Media, Passage};
use super::profile::Profile;
use super::sensitivity::{Figure, Figures};
use super::slab::{has_cutoff, number};
use crate::{Complex64, Error};
use std::f64::consts::FRAC_PI_2;

/// A quantum well of constant depth whose half width falls slowly with time: its states are released one
/// by one.
///
/// Scaled units: energies in the well's depth `V`, lengths in `hbar/(2 M V)^(1/2)`, times in `hbar/V`, so
/// that `i psi_t = -psi_xx - psi` inside `|x| < a(t)` and `i psi_t = -psi_xx` outside. A range of the
/// [`Passage`] is a time, a half width `a` a width; `eps` is the speed of the wall at release. The
/// angles of the passage have no meaning here; wavenumbers and energies do.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct QuantumWell;

impl QuantumWell {
    /// Half width at which state `index = 1, 2, ..` (even or odd as `index`) is released: `index pi/2`.
    ///
    /// Errors: [`Error::Domain`] for state 0, which a symmetric well holds at any width.
    pub fn release_half_width(&self, index: u32) -> Result<f64, Error> {
        has_cutoff(index)?;
        Ok(f64::from(index) * FRAC_PI_2)
    }

    /// State `index` of a well whose half width against time is the profile; values are relative to the
    /// largest value of its wave function inside at `reference_time`, before release.
    ///
    /// ```
    /// use merging_saddles::guide::{Profile, QuantumWell};
    /// // The walls close in at the speed 0.01; the first odd state goes at a = pi/2 (textbook
    /// // relation of the square well).
    /// let well = QuantumWell.along(1, Profile::plane(3.5, 0.01)?, 0.0)?;
    /// assert!((well.cutoff_width() - std::f64::consts::FRAC_PI_2).abs() < 1e-12);
    /// let early = well.energy_inside(well.cutoff_range() - 150.0)?;
    /// let late = well.energy_inside(well.cutoff_range() + 60.0)?;
    /// assert!(early > 0.8 && late < 0.05);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    ///
    /// Errors: as [`SlabGuide::along`](super::SlabGuide::along).
    pub fn along(
        &self,
        index: u32,
        half_width: Profile,
        reference_time: f64,
    ) -> Result<Passage, Error> {
        has_cutoff(index)?;
        let one = Complex64::from(1.0);
        let media = Media {
            k: one * 0.5,
            q: one,
            k_real: 0.5,
            q_real: 1.0,
            m: 1.0,
            carrier: Complex64::from(0.0),
        };
        Passage::new(media, number(index), half_width, reference_time)
    }
}

impl Figures for QuantumWell {
    type Of<T> = QuantumWell;

    /// There are none: what can change is the profile.
    fn map<T>(&self, _: impl FnMut(Figure) -> Result<T, Error>) -> Result<QuantumWell, Error> {
        Ok(*self)
    }
}
