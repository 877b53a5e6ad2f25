//! How far the uniform field itself is from the wave equation, measured without a reference.
//!
//! Inside and outside have separate formulas; at the boundary two conditions join them, and the formulas keep
//! these only as well as the expansion in `eps` goes. The mismatch is the size of the order left out. Source:
//! derived here; calibrated in `tests/guide_profiles.rs`.

use super::passage::Passage;
use crate::{Complex64, Error, Estimate, Scaled};

impl Passage {
    /// How well the formula holds at a range: one and a half times the mismatch of the two conditions at the boundary
    /// ([`SlopingGuide::mismatch`](super::SlopingGuide::mismatch)), plus the phase that the fit of the profile leaves.
    ///
    /// Relative to the field at the boundary, as an amplitude; the constant phase of about `eps/2` at the
    /// start is not in it. [`station`](Self::station) makes an error figure of it.
    ///
    /// Cost: four quadratures. Errors: as [`field`](Self::field).
    pub fn departure(&self, range: f64) -> Result<f64, Error> {
        self.uniform(range, 0.0)?;
        Ok(1.5 * self.guide().mismatch_at(self.place(range))? + self.fit_departure())
    }

    /// A range at which fields are wanted with the whole error figure, that of the formula included.
    ///
    /// Cost: nine quadratures, then one for each field. Errors: as [`field`](Self::field).
    ///
    /// ```
    /// use merging_saddles::guide::{Profile, QuantumWell};
    /// let well = QuantumWell.along(1, Profile::plane(3.5, 0.01)?, 0.0)?;
    /// let wall = well.cutoff_width();
    /// let at_release = well.station(well.cutoff_range())?;
    /// let (inside, outside) = (at_release.field(wall * (1.0 - 1e-9))?, at_release.field(wall)?);
    /// // Two formulas for one value (psi is continuous): they agree within their figures.
    /// let apart = (inside.value - outside.value).norm();
    /// assert!(apart <= inside.error + outside.error && outside.relative_error < 0.02);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn station(&self, range: f64) -> Result<Station<'_>, Error> {
        let departure = self.departure(range)?;
        let at_boundary = self.field(range, self.profile().width(range))?.value.norm();
        // What the beam carries away from its birth.
        let h = self.media().q * self.cutoff_width();
        let birth = 1.5 * self.guide().mismatch(h)? + self.fit_departure();
        Ok(Station { passage: self, range, absolute: departure * at_boundary, relative: birth })
    }
}

/// A range of a [`Passage`] where the error of the formula itself has been measured.
#[derive(Clone, Copy, Debug)]
pub struct Station<'a> {
    passage: &'a Passage,
    range: f64,
    /// Error that the field has near the boundary, and what the beam has of its own.
    absolute: f64,
    relative: f64,
}

impl Station<'_> {
    /// The uniform field at the position `x`, with an error figure for the integral, for the order in
    /// `eps` that is left out and for the fit of the profile; all but a constant phase of about `eps/2`.
    ///
    /// Errors: as [`Passage::field`].
    pub fn field(&self, x: f64) -> Result<Estimate, Error> {
        let field = self.passage.field(self.range, x)?;
        let own = field.value.norm() * self.relative;
        let error = field.error + self.absolute + own;
        let error = Scaled::from(Complex64::from(error));
        Ok(Estimate::new(field.scaled, error, field.orders, field.form))
    }
}
