//! A slowly narrowing quantum well: states released one by one.

use super::passage::Passage;
use super::profile::Profile;
use super::sensitivity::{Figure, Figures};
use super::symmetric::{LaunchedField, Symmetric};
use crate::{Complex64, Error};

/// A quantum well of constant depth whose half width falls slowly with time: its states are released one
/// by one.
///
/// Scaled units: energies in the well's depth `V`, lengths in `hbar/(2 M V)^(1/2)`, times in `hbar/V`, so
/// that `i psi_t = -psi_xx - psi` inside `|x| < a(t)` and `i psi_t = -psi_xx` outside. A range of the
/// [`Passage`] is a time, a half width `a` a width; `eps` is the speed of the wall at release. The
/// angles of the passage have no meaning here; wavenumbers and energies do: the momentum of the released particle
/// is distributed as [`Passage::radiation_per_wavenumber`].
///
/// ```
/// use merging_saddles::guide::{Profile, QuantumWell};
/// // An electron in a well 0.2 eV deep: the units in nm and fs, with hbar = 6.582119569e-16 eV s and hbar^2/(2 M) =
/// // 0.0380998 eV nm^2 (CODATA 2018, from memory).
/// let (nm, fs) = ((0.0380998f64 / 0.2).sqrt(), 0.6582119569 / 0.2);
/// // Its half width falls from 3 nm by 0.2 nm in a picosecond: how many states, and when do they leave?
/// let walls = Profile::plane(3.0 / nm, 0.2e-3 / nm * fs)?;
/// assert_eq!(QuantumWell.state_count(walls.width(0.0))?, 5);
/// let first = QuantumWell.releases(&walls)?[0];
/// // State 4 at a = 2 pi (textbook relation of the square well): (3 nm - 2 pi 0.436 nm)/(2e-4 nm/fs) = 1288 fs.
/// assert!(first.0 == 4 && (first.1 * fs - 1288.0).abs() < 1.0);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct QuantumWell;

impl QuantumWell {
    /// In scaled units the Schroedinger equation is the guide's with `k = 1/2`, and no carrier.
    fn guide(&self) -> Symmetric {
        Symmetric::new(0.5, 1.0, 1.0, 0.0)
    }

    /// Half width at which state `index = 1, 2, ..` (even or odd as `index`) is released: `index pi/2`.
    ///
    /// Errors: [`Error::Domain`] for state 0, which a symmetric well holds at any width.
    pub fn release_half_width(&self, index: u32) -> Result<f64, Error> {
        self.guide().cutoff_half_width(index)
    }

    /// How many states a well of this half width holds.
    ///
    /// Errors: [`Error::Domain`] for a width that is not finite and positive.
    pub fn state_count(&self, half_width: f64) -> Result<u32, Error> {
        Error::require_positive("half_width", half_width)?;
        self.guide().mode_count(half_width)
    }

    /// Every state that is released as the well narrows, highest first, with its index and the time.
    ///
    /// Errors: [`Error::Domain`] for widths that are not finite, and for more than 10,000 states.
    ///
    /// ```
    /// use merging_saddles::guide::{Profile, QuantumWell};
    /// // a = 4 - t/100 passes pi and pi/2 (textbook relation of the square well).
    /// let releases = QuantumWell.releases(&Profile::plane(4.0, 0.01)?)?;
    /// let pi = std::f64::consts::PI;
    /// for ((index, time), (known, width)) in releases.iter().zip([(2, pi), (1, 0.5 * pi)]) {
    ///     assert!(*index == known && (time - (4.0 - width) / 0.01).abs() < 1e-9);
    /// }
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn releases(&self, half_width: &Profile) -> Result<Vec<(u32, f64)>, Error> {
        self.guide().cutoffs(half_width)
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
        self.guide().along(index, half_width, reference_time)
    }

    /// What becomes of a wave function put into the well at a time: against `x`, to both sides of the middle, it is
    /// taken apart into the states held then.
    ///
    /// Errors: as [`SlabGuide::launch`](super::SlabGuide::launch).
    ///
    /// ```
    /// use merging_saddles::Complex64;
    /// use merging_saddles::guide::{Profile, QuantumWell};
    /// // The ground state of a harmonic trap, moving slowly to the right; normalised.
    /// let packet = |x: f64| {
    ///     Complex64::from_polar((-0.25 * x * x).exp() * (2.0 * std::f64::consts::PI).powf(-0.25), 0.2 * x)
    /// };
    /// let state = QuantumWell.launch(Profile::plane(3.5, 0.01)?, 0.0, packet)?;
    /// // The chances to find it in states 0, 1, 2: the textbook overlaps, by an adaptive quadrature of another kind.
    /// let known = [0.812291448443, 0.028955867740, 0.107955924833];
    /// for ((_, chance), known) in state.energies().zip(known) {
    ///     assert!((chance - known).abs() < 1e-11);
    /// }
    /// // Both upper states are released by the time 300; what is left in the middle is the ground state, the more
    /// // the narrower the well.
    /// let (before, after) = (state.value(0.0, 0.0)?.norm(), state.value(300.0, 0.0)?.norm());
    /// assert!(before > 0.5 && after > 0.5);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn launch(
        &self,
        half_width: Profile,
        time: f64,
        wave_function: impl Fn(f64) -> Complex64,
    ) -> Result<LaunchedField, Error> {
        self.guide().launch(half_width, time, wave_function)
    }
}

impl Figures for QuantumWell {
    type Of<T> = QuantumWell;

    /// There are none: what can change is the profile.
    fn map<T>(&self, _: impl FnMut(Figure) -> Result<T, Error>) -> Result<QuantumWell, Error> {
        Ok(*self)
    }
}
