//! A tapered slab waveguide: a core between two equal claddings, whose half width falls along the taper.
//!
//! All lengths in nanometres. With `k = 2 pi n_cladding/lambda`, `q = (2 pi/lambda) (n_core^2 -
//! n_cladding^2)^(1/2)` the scaled guide has `h = q *` half width. TE: `psi` is the electric field, `m = 1`;
//! TM: the magnetic field, `psi_x/n^2` continuous, `m = (n_core/n_cladding)^2`. Mode `j = 0, 1, ..` is even
//! or odd in `x` as `j` is, and cut off at `V = j pi/2` (textbook slab relation, common practice).

use super::passage::Passage;
use super::profile::Profile;
use super::sensitivity::{Figure, Figures};
use super::symmetric::{LaunchedField, Symmetric};
use crate::{Complex64, Error};
use std::f64::consts::TAU;

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
    guide: Symmetric,
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
        Ok(SlabGuide { guide: Symmetric::new(k, q, m, k) })
    }

    /// Half width in nm at which mode `index = 1, 2, ..` is cut off: `V = index pi/2`.
    ///
    /// Errors: [`Error::Domain`] for mode 0, which a symmetric slab traps at any width.
    pub fn cutoff_half_width_nm(&self, index: u32) -> Result<f64, Error> {
        self.guide.cutoff_half_width(index)
    }

    /// How many modes of the one polarization a slab of this half width in nm traps.
    ///
    /// Errors: [`Error::Domain`] for a width that is not finite and positive.
    pub fn mode_count(&self, half_width_nm: f64) -> Result<u32, Error> {
        Error::require_positive("half_width_nm", half_width_nm)?;
        self.guide.mode_count(half_width_nm)
    }

    /// Every mode that is cut off along a taper, highest first, with its index and the range in nm: the first one at
    /// which the half width has fallen to the cut-off's. For one mode:
    /// [`Profile::first_range_of_width`] of [`cutoff_half_width_nm`](Self::cutoff_half_width_nm).
    ///
    /// Errors: [`Error::Domain`] for widths that are not finite, and for more than 10,000 modes.
    ///
    /// ```
    /// use merging_saddles::guide::{Polarization, Profile, Slab, SlabGuide};
    /// # let guide = SlabGuide::new(Slab {
    /// #     vacuum_wavelength_nm: 1550.0, core_index: 1.475, cladding_index: 1.444,
    /// #     polarization: Polarization::Te })?;
    /// let taper = Profile::from_samples(&[0.0, 1e6, 2e6], &[6000.0, 3800.0, 1500.0])?;
    /// let lost = guide.cutoffs(&taper)?;
    /// // V = 2 pi a (n1^2 - n2^2)^(1/2)/lambda is 7.3 at first and 1.8 at last: modes 4, 3 and 2 go, at V =
    /// // 2 pi, 3 pi/2 and pi (textbook slab relation).
    /// let indices: Vec<u32> = lost.iter().map(|(index, _)| *index).collect();
    /// assert_eq!(indices, [4, 3, 2]);
    /// let (index, range) = lost[1];
    /// assert!((taper.width(range) - guide.cutoff_half_width_nm(index)?).abs() < 1e-6);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn cutoffs(&self, half_width_nm: &Profile) -> Result<Vec<(u32, f64)>, Error> {
        self.guide.cutoffs(half_width_nm)
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
        self.guide.along(index, half_width_nm, reference_range_nm)
    }

    /// What becomes of light sent into the taper at a range: the field there against `x`, to both sides of the middle,
    /// is taken apart into the modes trapped there, and each goes its way. Give the electric field in TE, the
    /// magnetic in TM.
    ///
    /// Errors: [`Error::Domain`] for a range off the profile, and for more than 200 modes; [`Error::NotFinite`] for
    /// such a field, [`Error::NoConvergence`] for one with jumps; what [`along`](Self::along) refuses for a
    /// mode that is cut off.
    ///
    /// ```
    /// use merging_saddles::Complex64;
    /// use merging_saddles::guide::{Polarization, Profile, Slab, SlabGuide, level_db};
    /// # let guide = SlabGuide::new(Slab {
    /// #     vacuum_wavelength_nm: 1550.0, core_index: 1.475, cladding_index: 1.444,
    /// #     polarization: Polarization::Te })?;
    /// // A Gaussian spot of 2500 nm, 1000 nm beside the middle of a taper that loses two of its three modes.
    /// let taper = Profile::plane(3000.0, 0.002)?;
    /// let spot = |x: f64| Complex64::from((-((x - 1000.0) / 2500.0).powi(2)).exp());
    /// let light = guide.launch(taper, 0.0, spot)?;
    /// let carried: f64 = light.energies().map(|(_, energy)| energy).sum();
    /// // No more than all the light (Bessel's inequality): the integral of its square.
    /// let all = 2500.0 * (std::f64::consts::PI / 2.0).sqrt();
    /// assert!(carried > 0.9 * all && carried < all);
    /// // Behind the last cut-off one mode is left in the core, on both sides of the middle the same.
    /// let (left, right) = (light.value(1.4e6, -100.0)?, light.value(1.4e6, 100.0)?);
    /// assert!((level_db(left) - level_db(right)).abs() < 1.0);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn launch(
        &self,
        half_width_nm: Profile,
        range_nm: f64,
        field: impl Fn(f64) -> Complex64,
    ) -> Result<LaunchedField, Error> {
        self.guide.launch(half_width_nm, range_nm, field)
    }
}
