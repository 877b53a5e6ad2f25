//! A tapered slab waveguide: a core between two equal claddings, whose half width falls along the taper.
//!
//! All lengths in nanometres. With `k = 2 pi n_cladding/lambda`, `q = (2 pi/lambda) (n_core^2 -
//! n_cladding^2)^(1/2)` the scaled guide has `h = q *` half width. TE: `psi` is the electric field, `m = 1`;
//! TM: the magnetic field, `psi_x/n^2` continuous, `m = (n_core/n_cladding)^2`. Mode `j = 0, 1, ..` is even
//! or odd in `x` as `j` is, and cut off at `V = j pi/2` (textbook slab relation, common practice).

use super::passage::{Media, ModeNumber, Passage};
use super::profile::Profile;
use super::sensitivity::{Figure, Figures};
use crate::{Complex64, Error};
use std::f64::consts::{FRAC_PI_2, TAU};

/// Which field lies along the slab.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Polarization {
    /// The electric field is parallel to the layers.
    Te,
    /// The magnetic field is parallel to the layers.
    Tm,
}

/// What is known of a slab waveguide: numbers, or something else for each of them
/// ([`sensitivities`](super::sensitivities)).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Slab<T = f64> {
    /// Wavelength in vacuum in nm.
    pub vacuum_wavelength_nm: T,
    /// Refractive index of the core, above that of the cladding.
    pub core_index: T,
    /// Refractive index of both claddings.
    pub cladding_index: T,
    /// Polarization.
    pub polarization: Polarization,
}

impl Figures for Slab {
    type Of<T> = Slab<T>;

    fn map<T>(&self, mut f: impl FnMut(Figure) -> Result<T, Error>) -> Result<Slab<T>, Error> {
        // Results are singular where the indices are equal.
        let apart = self.core_index - self.cladding_index;
        Ok(Slab {
            vacuum_wavelength_nm: f(Figure::new(
                self.vacuum_wavelength_nm,
                self.vacuum_wavelength_nm,
            ))?,
            core_index: f(Figure::new(self.core_index, apart))?,
            cladding_index: f(Figure::new(self.cladding_index, apart.min(self.cladding_index)))?,
            polarization: self.polarization,
        })
    }
}

/// A validated slab waveguide at one wavelength.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct SlabGuide {
    media: Media,
}

impl SlabGuide {
    /// Checks the figures.
    ///
    /// Errors ([`Error::Domain`], naming the field): a figure that is not finite and positive, a cladding
    /// that is not of lower index than the core.
    ///
    /// ```
    /// use merging_saddles::guide::{Polarization, Profile, Slab, SlabGuide};
    /// let guide = SlabGuide::new(Slab {
    ///     vacuum_wavelength_nm: 1550.0,
    ///     core_index: 1.475,
    ///     cladding_index: 1.444,
    ///     polarization: Polarization::Te,
    /// })?;
    /// // Mode j is cut off at V = (2 pi/lambda) a (n1^2 - n2^2)^(1/2) = j pi/2: textbook slab relation.
    /// let a = guide.cutoff_half_width_nm(1)?;
    /// let v = std::f64::consts::TAU / 1550.0 * a * (1.475f64.powi(2) - 1.444f64.powi(2)).sqrt();
    /// assert!((v - std::f64::consts::FRAC_PI_2).abs() < 1e-12);
    /// assert_eq!(guide.mode_count(1.01 * a)?, 2);
    /// // A taper that loses 4 nm of half width per micrometre: the light leaves at some degrees.
    /// let leak = guide.along(1, Profile::plane(2.0 * a, 0.004)?, 0.0)?;
    /// let angle = leak.take_off_angle_rad()?.to_degrees();
    /// assert!(angle > 2.0 && angle < 4.0);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn new(slab: Slab) -> Result<Self, Error> {
        Error::require_positive("vacuum_wavelength_nm", slab.vacuum_wavelength_nm)?;
        Error::require_positive("core_index", slab.core_index)?;
        Error::require_positive("cladding_index", slab.cladding_index)?;
        let Slab { core_index: core, cladding_index: cladding, .. } = slab;
        if core <= cladding {
            let remedy = "a core that is not of higher index traps no light: give an index above \
                          cladding_index";
            return Err(Error::domain("core_index", core, remedy));
        }
        let vacuum = TAU / slab.vacuum_wavelength_nm;
        let (k, q) = (vacuum * cladding, vacuum * ((core - cladding) * (core + cladding)).sqrt());
        let m = match slab.polarization {
            Polarization::Te => 1.0,
            Polarization::Tm => (core / cladding).powi(2),
        };
        let media = Media {
            k: Complex64::from(k),
            q: Complex64::from(q),
            k_real: k,
            q_real: q,
            m,
            carrier: Complex64::from(k),
        };
        Ok(SlabGuide { media })
    }

    /// Half width in nm at which mode `index = 1, 2, ..` is cut off: `V = index pi/2`.
    ///
    /// Errors: [`Error::Domain`] for mode 0, which a symmetric slab traps at any width.
    pub fn cutoff_half_width_nm(&self, index: u32) -> Result<f64, Error> {
        has_cutoff(index)?;
        Ok(f64::from(index) * FRAC_PI_2 / self.media.q_real)
    }

    /// How many modes of the one polarization a slab of this half width in nm traps.
    ///
    /// Errors: [`Error::Domain`] for a width that is not finite and positive.
    pub fn mode_count(&self, half_width_nm: f64) -> Result<u32, Error> {
        Error::require_positive("half_width_nm", half_width_nm)?;
        Ok((half_width_nm * self.media.q_real / FRAC_PI_2).floor() as u32 + 1)
    }

    /// Mode `index` along a taper whose half width in nm against range in nm is the profile; values are
    /// relative to its largest value inside at `reference_range_nm`, before cut-off.
    ///
    /// TM of strong contrast (`m` = 5.8 for silicon in silica): on the field's contour lies the Brewster condition,
    /// `p = (m^2 - 1)^(-1/2)`, where light passes the boundary without reflection and the expansion in
    /// `eps` breaks down. Where its part of the beam exceeds 1e-3, [`Passage::field`] refuses and says so.
    ///
    /// Errors: [`Error::Domain`] for mode 0 and a reference range that is not on the profile and before
    /// cut-off; [`Error::Undecided`] where the mode is not cut off on the profile, or this narrows or bends too
    /// fast there.
    pub fn along(
        &self,
        index: u32,
        half_width_nm: Profile,
        reference_range_nm: f64,
    ) -> Result<Passage, Error> {
        has_cutoff(index)?;
        Passage::new(self.media, number(index), half_width_nm, reference_range_nm)
    }
}

pub(super) fn has_cutoff(index: u32) -> Result<(), Error> {
    if index == 0 {
        let remedy = "mode 0 of a symmetric guide is trapped at any width: take index 1 or higher";
        return Err(Error::domain("mode index", 0.0, remedy));
    }
    Ok(())
}

/// The number of a mode of a symmetric guide, counted from 0, among those of its parity.
pub(super) fn number(index: u32) -> ModeNumber {
    // Odd: 1, 3, .. are n = 1, 2, ..; even: 2, 4, .. are n = 2, 3, ..
    ModeNumber { n: index / 2 + 1, even: index.is_multiple_of(2) }
}
