//! A point source in the water of a sloping sea: the modes it sends out, added with their phases.
//!
//! At the source range the modes have the textbook excitation (point source, far field, common practice;
//! F. B. Jensen et al., Computational Ocean Acoustics, ch. 5, cited from memory)
//!
//! ```text
//! p/p(1 m) = (2 pi/s)^(1/2) e^(i pi/4) sum over n of Psi_n(z_s) Psi_n(z) e^(i k_n s)/(rho_s k_n^(1/2))
//! ```
//!
//! From there each runs along the track by itself: adiabatic while it is trapped, by the uniform field
//! through its cut-off. Modes that the source's own depth does not trap are left out: the field is that at
//! distances of some depths and more.

use super::acoustic::AcousticGuide;
use super::modes::{check_count, counts, passage};
use super::passage::{ModeNumber, Passage};
use super::profile::Profile;
use crate::{Complex64, Error};
use std::f64::consts::{FRAC_PI_4, TAU};

/// The field of a point source as a sum of modes.
#[derive(Clone, Debug)]
pub struct SourceField {
    modes: Vec<Mode>,
    source_range_m: f64,
}

#[derive(Clone, Debug)]
struct Mode {
    weight: Complex64,
    passage: Passage,
}

impl AcousticGuide {
    /// The field of a point source at a range and depth in m on a track, by the modes trapped there.
    ///
    /// Errors: [`Error::Domain`] for a source off the profile or not in the water, or one in water that traps no
    /// mode or more than 200; what [`AcousticGuide::along`] refuses for a mode that is cut off.
    ///
    /// ```
    /// use merging_saddles::guide::{AcousticGuide, Profile, TwoLayer};
    /// # let guide = AcousticGuide::new(TwoLayer {
    /// #     frequency_hz: 100.0, water_speed_m_per_s: 1500.0, bottom_speed_m_per_s: 1650.0,
    /// #     water_density_kg_per_m3: 1000.0, bottom_density_kg_per_m3: 1800.0,
    /// #     water_attenuation_db_per_wavelength: 0.0,
    /// #     bottom_attenuation_db_per_wavelength: 0.2 })?;
    /// let track = Profile::from_samples(&[0.0, 1000.0, 2000.0, 3000.0], &[60.0, 48.0, 34.0, 18.0])?;
    /// let source = guide.source(track, 0.0, 20.0)?;
    /// assert_eq!(source.mode_count(), 3); // cut-off depths 9, 27, 45 m: textbook modal relation
    /// assert_eq!(source.cut_off_modes().count(), 2); // all but the first
    /// let loss_db = source.transmission_loss_db(1500.0, 25.0)?;
    /// assert!(loss_db > 40.0 && loss_db < 75.0);
    ///
    /// // One mode over a bed as good as flat: cylindrical spreading, 3 dB for twice the distance (common practice).
    /// # let guide = AcousticGuide::new(TwoLayer {
    /// #     frequency_hz: 100.0, water_speed_m_per_s: 1500.0, bottom_speed_m_per_s: 1650.0,
    /// #     water_density_kg_per_m3: 1000.0, bottom_density_kg_per_m3: 1800.0,
    /// #     water_attenuation_db_per_wavelength: 0.0,
    /// #     bottom_attenuation_db_per_wavelength: 0.0 })?;
    /// let flat = Profile::from_fn(0.0, 5000.0, |s| (20.0 - 1e-7 * s, -1e-7))?;
    /// let source = guide.source(flat, 0.0, 8.0)?;
    /// let more = source.transmission_loss_db(4000.0, 15.0)? - source.transmission_loss_db(2000.0, 15.0)?;
    /// assert!((more - 10.0 * 2f64.log10()).abs() < 1e-3);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn source(
        &self,
        profile: Profile,
        source_range_m: f64,
        source_depth_m: f64,
    ) -> Result<SourceField, Error> {
        Error::require_finite("source_range_m", source_range_m)?;
        let [from, to] = profile.ranges();
        if !(source_range_m >= from && source_range_m < to) {
            let remedy = "put the source on the profile, before its end";
            return Err(Error::domain("source_range_m", source_range_m, remedy));
        }
        let water = profile.width(source_range_m);
        if !(source_depth_m > 0.0 && source_depth_m < water) {
            let remedy = "put the source into the water";
            return Err(Error::domain("source_depth_m", source_depth_m, remedy));
        }
        let count = self.mode_count(water)?;
        check_count(count)?;
        let [kept, _] = counts(&profile, |depth| self.mode_count(depth))?;
        let media = self.media();
        let modes = (1..=count).map(|n| -> Result<_, Error> {
            let number = ModeNumber { n, even: false };
            let passage = passage(media, number, &profile, source_range_m, n <= kept)?;
            let mode = passage.bound_shape(source_range_m)?;
            // Wavenumber along the track, and Psi_n(z_s) times the antinode.
            let here = media.along(mode.gamma);
            let at_source = (mode.kappa * media.q * source_depth_m).sin();
            let weight =
                media.q * mode.antinode.powi(2) * media.flux(mode.gamma) * at_source / here.sqrt();
            Ok(Mode { weight, passage })
        });
        Ok(SourceField { modes: modes.collect::<Result<_, _>>()?, source_range_m })
    }
}

impl SourceField {
    /// How many modes the source sends out.
    pub fn mode_count(&self) -> usize {
        self.modes.len()
    }

    /// The passages of the modes that the track cuts off, lowest mode first, each relative to its antinode at the
    /// source: beams, footprints, transition lengths, error figures.
    pub fn cut_off_modes(&self) -> impl Iterator<Item = &Passage> {
        let passages = self.modes.iter().map(|mode| &mode.passage);
        passages.filter(|passage| passage.cutoff_range().is_finite())
    }

    /// With another limit for what may be neglected in a mode's field: see
    /// [`SlopingGuide::tolerance`](super::SlopingGuide::tolerance). A mode that is refused somewhere takes the whole sum with it.
    pub fn tolerance(self, tolerance: f64) -> Self {
        let modes = self.modes.into_iter();
        let modes = modes.map(|mode| Mode { passage: mode.passage.tolerance(tolerance), ..mode });
        SourceField { modes: modes.collect(), ..self }
    }

    /// Pressure over that at 1 m from the source in open water.
    ///
    /// Errors: [`Error::Domain`] for a place that is not beyond the source or off the profile; what
    /// [`Passage::field`] refuses.
    pub fn pressure(&self, range_m: f64, depth_m: f64) -> Result<Complex64, Error> {
        let distance = range_m - self.source_range_m;
        Error::require_positive("distance from the source", distance)?;
        let mut sum = Complex64::new(0.0, 0.0);
        for Mode { weight, passage } in &self.modes {
            sum += weight * passage.value(range_m, depth_m)?;
        }
        Ok(sum * Complex64::from_polar((TAU / distance).sqrt(), FRAC_PI_4))
    }

    /// Transmission loss in dB re 1 m: `-20 log10` of [`pressure`](Self::pressure).
    ///
    /// Errors: as there.
    pub fn transmission_loss_db(&self, range_m: f64, depth_m: f64) -> Result<f64, Error> {
        Ok(-super::level_db(self.pressure(range_m, depth_m)?))
    }
}
