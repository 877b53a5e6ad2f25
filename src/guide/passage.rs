//! One mode of a guide that narrows along a profile, through its cut-off: what the three physics share.
//!
//! A guide is described by the wavenumber `k` of the medium outside, the transverse wavenumber
//! `q = sqrt(k_in^2 - k^2)` at cut-off and the density ratio `m`; its width `D(s)` is the profile. The
//! scaled guide of [`SlopingGuide`] has `x = q z`, `r = q g (s - s_c)`, `eps = 2 k g/q`, with the
//! slope `g` at the cut-off range `s_c`; `psi = field * exp(-i k s)`. With losses `q` and `k`
//! are complex, and with them `s_c` and `g`: the fit of the profile is re-expanded about the complex
//! cut-off width. The lengths returned are those without losses, the fields have it all.
//!
//! Source: derived here.

use super::adiabatic::Adiabatic;
use super::layer::bound_extended;
use super::profile::{LocalFit, Profile};
use super::uniform::{Order, Place, SlopingGuide, UniformField, times};
use crate::{Complex64, Error, Estimate, Scaled};
use std::f64::consts::FRAC_PI_4;

const I: Complex64 = Complex64::new(0.0, 1.0);

/// The two media of a guide.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Media {
    /// Wavenumber outside.
    pub k: Complex64,
    /// `sqrt(k_in^2 - k^2)`.
    pub q: Complex64,
    /// Both without losses.
    pub k_real: f64,
    pub q_real: f64,
    /// Density inside over outside.
    pub m: f64,
    /// Wavenumber of the carrier: `k`, or zero where ranges are times.
    pub carrier: Complex64,
}

impl Media {
    /// Wavenumber along the guide of a bound mode; for a well 1.
    pub(super) fn along(&self, gamma: Complex64) -> Complex64 {
        if self.carrier.norm() == 0.0 {
            return Complex64::new(1.0, 0.0);
        }
        (self.k * self.k + (self.q * gamma).powi(2)).sqrt()
    }

    /// The flux of a bound mode over the integral of its square, in units of the carrier's.
    pub(super) fn flux(&self, gamma: Complex64) -> Complex64 {
        let one = Complex64::new(1.0, 0.0);
        if self.carrier.norm() == 0.0 { one } else { self.along(gamma) / self.k }
    }

    /// `(q/k)^2` of the wide-angle form, 0 where ranges are times.
    fn delta(&self) -> Complex64 {
        if self.carrier.norm() > 0.0 { (self.q / self.k).powi(2) } else { self.carrier }
    }
}

/// The number of a mode within its half of the modes.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct ModeNumber {
    pub n: u32,
    pub even: bool,
}

/// One mode that goes through its cut-off along a profile.
///
/// Made by the guides of the three physics, whose unit of length it keeps: metres for
/// [`AcousticGuide`](super::AcousticGuide), nanometres for [`SlabGuide`](super::SlabGuide), scaled lengths for
/// [`QuantumWell`](super::QuantumWell). Ranges are those of the profile; positions `x` across are counted
/// from the surface, or from the middle of a symmetric guide. Values are relative to the incoming
/// mode's largest value inside at the reference range.
#[derive(Clone, Debug)]
pub struct Passage {
    guide: SlopingGuide,
    media: Media,
    profile: Profile,
    even: bool,
    cutoff_width: f64,
    cutoff_range: f64,
    slope: f64,
    /// Cut-off range and slope with losses.
    centre: Complex64,
    turned_slope: Complex64,
    /// Where the fit begins, and its departure in transition lengths.
    fitted_from: f64,
    fit_departure: f64,
    /// None where nothing is fitted.
    fit: Option<LocalFit>,
    reference: f64,
    incoming_exponent: Complex64,
    incoming_antinode: Complex64,
    height: f64,
}

impl Passage {
    pub(super) fn new(
        media: Media,
        mode: ModeNumber,
        profile: Profile,
        reference: f64,
    ) -> Result<Self, Error> {
        let ModeNumber { n, even } = mode;
        let scaled = |eps: Complex64| -> Result<SlopingGuide, Error> {
            let guide = SlopingGuide::new(n, media.m, eps)?;
            if even { guide.even() } else { Ok(guide) }
        };
        // A small eps to learn the cut-off width.
        let cutoff = scaled(Complex64::new(1e-3, 0.0))?.cutoff_width();
        let cutoff_width = cutoff / media.q_real;
        let crossing = profile.first_range_of_width(cutoff_width)?;
        let first_slope = profile.fall(crossing);
        let first_eps = 2.0 * media.k_real * first_slope / media.q_real;
        if !(first_slope > 0.0 && first_eps <= 1.0) {
            return Err(too_fast(first_eps, first_slope));
        }
        let step = (media.m * media.m * first_eps).cbrt();
        // In range: eps (m/eps)^(2/3)/(q g).
        let length = step / (media.q_real * first_slope);
        let fit = profile.fit(cutoff_width, 3.0 * step / media.q_real, 1e-3 * length)?;
        let (crossing, real) = fit.about(Complex64::from(cutoff_width));
        let (cutoff_range, slope) = (crossing.re, -real[1].re);
        let eps = 2.0 * media.k_real * slope / media.q_real;
        if !(slope > 0.0 && eps <= 1.0) {
            return Err(too_fast(eps, slope));
        }
        // About the complex width at cut-off.
        let (centre, turned) = fit.about(media.q.inv() * cutoff);
        let turned_slope = -turned[1];
        let mut guide = scaled(media.k * 2.0 * turned_slope / media.q)?;
        let higher: Vec<Complex64> = (2..turned.len())
            .map(|j| turned[j] * media.q / (media.q * turned_slope).powi(j as i32))
            .collect();
        if !higher.is_empty() {
            let bend: f64 = (0..)
                .zip(&higher)
                .map(|(j, c)| f64::from(j + 2) * c.norm() * step.powi(j + 1))
                .sum();
            if bend > 0.9 {
                return Err(Error::Undecided {
                    reason: format!(
                        "at the cut-off (range {cutoff_range}) the slope changes by {:.0} % within one \
                         transition length, at eps = {eps:.3}: the profile bends too fast",
                        100.0 * bend
                    ),
                    remedy: "smooth the profile, or go to a shorter wavelength, where the transition is \
                             shorter",
                });
            }
            guide = guide.curved(&higher)?;
        }
        guide = guide.wide_angle(media.delta())?;
        let passage = Passage {
            guide,
            media,
            profile,
            even,
            cutoff_width,
            cutoff_range,
            slope,
            centre,
            turned_slope,
            fitted_from: fit.window[0],
            fit_departure: fit.residual / length,
            fit: (fit.coefficients.len() > 2).then_some(fit),
            reference,
            incoming_exponent: Complex64::new(0.0, 0.0),
            incoming_antinode: Complex64::new(1.0, 0.0),
            height: (2.0 * media.k_real * media.q_real * media.q_real * slope / media.m)
                .powf(-1.0 / 3.0),
        };
        let [from, _] = passage.profile.ranges();
        if !(reference.is_finite() && reference >= from && reference < passage.cutoff_range) {
            let remedy =
                "give a range on the profile, before cut-off, where the mode is still trapped";
            return Err(Error::domain("reference range", reference, remedy));
        }
        passage.referred()
    }

    /// With the incoming mode's amplitude and phase at the reference.
    fn referred(self) -> Result<Self, Error> {
        let (incoming_antinode, incoming_exponent) = self.bound_mode(self.reference)?;
        Ok(Passage { incoming_antinode, incoming_exponent, ..self })
    }

    /// A mode that stays trapped as far as the profile goes: adiabatic everywhere.
    pub(super) fn trapped(
        media: Media,
        mode: ModeNumber,
        profile: Profile,
        reference: f64,
    ) -> Result<Self, Error> {
        let ModeNumber { n, even } = mode;
        let guide = SlopingGuide::new(n, media.m, Complex64::new(1e-3, 0.0))?;
        let guide = if even { guide.even()? } else { guide };
        let guide = guide.wide_angle(media.delta())?;
        let cutoff_width = guide.cutoff_width() / media.q_real;
        let [_, to] = profile.ranges();
        let passage = Passage {
            guide,
            media,
            profile,
            even,
            cutoff_width,
            cutoff_range: f64::INFINITY,
            slope: 0.0,
            centre: Complex64::from(to),
            turned_slope: Complex64::new(0.0, 0.0),
            fitted_from: f64::INFINITY,
            fit_departure: 0.0,
            fit: None,
            reference,
            incoming_exponent: Complex64::new(0.0, 0.0),
            incoming_antinode: Complex64::new(1.0, 0.0),
            height: f64::INFINITY,
        };
        passage.referred()
    }

    /// By the one-way (paraxial, narrow-angle) equation instead of Helmholtz's: to compare with solutions of that, and
    /// quicker on straight profiles, where all is in closed form. The fields differ by a phase of about
    /// `(k L_s/8) angle^4` of each wave's angle to the axis of range per transition length, and by the square of the angle in amplitude. A quantum well has
    /// no other equation.
    ///
    /// Errors: as for the guide's own constructor.
    ///
    /// ```
    /// use merging_saddles::guide::{Polarization, Profile, Slab, SlabGuide, level_db};
    /// let slab = SlabGuide::new(Slab {
    ///     vacuum_wavelength_nm: 1550.0,
    ///     core_index: 1.475,
    ///     cladding_index: 1.444,
    ///     polarization: Polarization::Te,
    /// })?;
    /// let taper = Profile::plane(5000.0, 0.004)?;
    /// let leak = slab.along(1, taper, 0.0)?;
    /// let narrow = leak.clone().paraxial()?;
    /// let (range, x) = (leak.cutoff_range(), leak.cutoff_width());
    /// // The light leaves at some three degrees: the two equations differ by little (derived relation).
    /// let ratio = leak.field(range, x)?.value.norm() / narrow.field(range, x)?.value.norm();
    /// assert!((ratio - 1.0).abs() < 0.01 && ratio != 1.0);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn paraxial(self) -> Result<Self, Error> {
        let guide = self.guide.clone().wide_angle(0.0)?;
        Passage { guide, ..self }.referred()
    }

    /// Whether the field is that of Helmholtz's equation.
    pub(super) fn is_wide(&self) -> bool {
        self.guide.wide().is_on()
    }

    /// With the uniform field to the given order in `eps` (without a call: [`Order::Next`]).
    pub fn order(self, order: Order) -> Self {
        Passage { guide: self.guide.order(order), ..self }
    }

    /// With another limit for what may be neglected at the Brewster parameter of a guide with `m > 1`:
    /// see [`SlopingGuide::tolerance`].
    pub fn tolerance(self, tolerance: f64) -> Self {
        Passage { guide: self.guide.tolerance(tolerance), ..self }
    }

    /// The profile.
    pub fn profile(&self) -> &Profile {
        &self.profile
    }

    /// Width of the guide where the mode is cut off (without losses).
    pub fn cutoff_width(&self) -> f64 {
        self.cutoff_width
    }

    /// Range of the cut-off on the smoothed profile (without losses).
    pub fn cutoff_range(&self) -> f64 {
        self.cutoff_range
    }

    /// Width lost per unit of range at cut-off.
    pub fn slope(&self) -> f64 {
        self.slope
    }

    /// The small parameter `eps = 2 k g/q` at cut-off.
    pub fn eps(&self) -> f64 {
        2.0 * self.media.k_real * self.slope / self.media.q_real
    }

    /// `L_z`: how far the field reaches outside at cut-off.
    pub fn layer_height(&self) -> f64 {
        self.height
    }

    /// `L_s`: the transition length, the range over which the mode turns into a beam.
    ///
    /// ```
    /// use merging_saddles::guide::{Profile, QuantumWell};
    /// // In scaled units k = 1/2, q = m = 1: the height is v^(-1/3) and the time v^(-2/3) for walls of speed v
    /// // (derived relation).
    /// let well = QuantumWell.along(1, Profile::plane(3.0, 1e-3)?, 0.0)?;
    /// assert!((well.layer_height() - 10.0).abs() < 1e-12);
    /// assert!((well.layer_range() - 100.0).abs() < 1e-10);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn layer_range(&self) -> f64 {
        2.0 * self.media.k_real * self.height * self.height
    }

    /// Largest departure of the local fit from the profile, in transition lengths; it turns the phase of
    /// the field by about as many radians.
    pub fn fit_departure(&self) -> f64 {
        self.fit_departure
    }

    /// The profile as the field has it round the cut-off, `(range, width)`: 41 points of the local fit. Empty
    /// where the profile is straight and is not fitted.
    pub fn fitted_profile(&self) -> Vec<(f64, f64)> {
        let Some(fit) = &self.fit else { return Vec::new() };
        let [from, to] = fit.window;
        let ranges = (0..=40).map(|j| from + (to - from) * f64::from(j) / 40.0);
        ranges.map(|s| (s, fit.width(s))).collect()
    }

    /// First range of the fit; before it [`adiabatic`](Self::adiabatic) is right.
    pub fn fitted_from(&self) -> f64 {
        self.fitted_from
    }

    pub(super) fn media(&self) -> &Media {
        &self.media
    }

    pub(super) fn incoming_antinode(&self) -> Complex64 {
        self.incoming_antinode
    }

    pub(super) fn guide(&self) -> &SlopingGuide {
        &self.guide
    }

    /// Refuses places without a field; says whether `x` lies inside.
    fn check(&self, range: f64, x: f64) -> Result<bool, Error> {
        Error::require_finite("range", range)?;
        if !(x >= 0.0 && x.is_finite()) {
            let remedy = "count positions from the surface or the middle, in a finite number that is not \
                          negative";
            return Err(Error::domain("position", x, remedy));
        }
        let [from, to] = self.profile.ranges();
        let width = self.profile.width(range);
        if !(range >= from && range <= to && width > 0.0) {
            let remedy = "stay on the profile and before the guide's tip";
            return Err(Error::domain("range", range, remedy));
        }
        Ok(x < width)
    }

    /// The place in scaled units.
    pub(super) fn place(&self, range: f64) -> Place {
        let h = self.media.q * self.profile.width(range);
        Place { h, r: self.media.q * self.turned_slope * (range - self.centre) }
    }

    /// The integral of the uniform field at one point.
    pub(super) fn uniform(&self, range: f64, x: f64) -> Result<UniformField, Error> {
        let inside = self.check(range, x)?;
        if range < self.fitted_from {
            return Err(Error::domain(
                "range",
                range,
                "before the fitted part of the profile the mode is adiabatic: ask for that",
            ));
        }
        let place = self.place(range);
        if inside {
            self.guide.inside_at(place, self.media.q * x)
        } else {
            let distance = x - self.profile.width(range);
            self.guide.outside_at(place, self.media.q * distance)
        }
    }

    /// The derivative of the field along the range, over `i k`, at a place inside; before the fitted part of the profile that
    /// of the bound mode.
    pub(super) fn flow(&self, range: f64, x: f64) -> Result<Complex64, Error> {
        if range < self.fitted_from {
            let p = I * self.bound_shape(range)?.gamma;
            return Ok(self.adiabatic(range, x)? * self.guide.wide().cosine(p));
        }
        self.uniform(range, x)?;
        let flow = self.guide.flow_at(self.place(range), self.media.q * x)?;
        Ok(times(flow.quadrature(1e-9)?, self.relative(range)).value)
    }

    /// The uniform field at a point by quadrature, relative to the incoming mode: right before, at and
    /// after cut-off, inside and outside.
    ///
    /// The error figure is that of the integral (relative 1e-9 is asked for); what the formula leaves
    /// out is [`departure`](Self::departure), and a constant phase of about `eps/2`.
    ///
    /// Cost: 0.1 to 0.7 ms on a straight profile, a few times that on a curved one, at any wavelength.
    ///
    /// Errors: [`Error::Domain`] for a place off the profile, before
    /// [`fitted_from`](Self::fitted_from) or beyond the tip; [`Error::Undecided`] where the Brewster angle lies in the
    /// beam (`m > 1`); what [`crate::Integral::quadrature`] refuses.
    ///
    /// ```
    /// use merging_saddles::guide::{Profile, QuantumWell};
    /// // At the wall at release, walls of speed v -> 0: v^(1/6) |U(0, 0)| over the antinode of the incoming mode,
    /// // |U(0, 0)| = sqrt(8 pi) 2^(-2/3) |Ai'(0)| (derived relation), Ai'(0) = -0.2588194037928068 (DLMF 9.2.6).
    /// let (v, wide) = (1e-9f64, 3.0);
    /// let well = QuantumWell.along(1, Profile::plane(wide, v)?, 0.0)?;
    /// let u = (8.0 * std::f64::consts::PI).sqrt() * 0.5f64.powf(2.0 / 3.0) * 0.2588194037928068;
    /// // Of unit energy: the integral of sin^2 inside and of its tail, kappa = -kappa cot(3 kappa)/gamma, by hand.
    /// let kappa = 0.7596207; // kappa = sin(3 kappa), the textbook's square well
    /// let antinode = (1.5 + 0.5 / (1.0f64 - kappa * kappa).sqrt()).sqrt().recip();
    /// let expected = v.powf(1.0 / 6.0) * u / antinode;
    /// let seen = well.field(well.cutoff_range(), well.cutoff_width())?;
    /// assert!((seen.value.norm() / expected - 1.0).abs() < 2e-3);
    /// assert!(seen.relative_error < 1e-6);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn field(&self, range: f64, x: f64) -> Result<Estimate, Error> {
        Ok(times(self.uniform(range, x)?.quadrature(1e-9)?, self.relative(range)))
    }

    /// The same by expansions at the merging saddles: the crate's own plan, made for the one wavenumber.
    ///
    /// Errors: as [`field`](Self::field), and where the plan could not be made.
    ///
    /// ```
    /// use merging_saddles::guide::{Profile, QuantumWell};
    /// let well = QuantumWell.along(1, Profile::plane(3.5, 0.01)?, 0.0)?;
    /// let (time, x) = (well.cutoff_range() + 10.0, 6.0);
    /// let (quadrature, saddles) = (well.field(time, x)?, well.field_at_saddles(time, x)?);
    /// // Two ways to one integral.
    /// assert!((quadrature.value - saddles.value).norm() <= quadrature.error + saddles.error);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn field_at_saddles(&self, range: f64, x: f64) -> Result<Estimate, Error> {
        Ok(times(self.uniform(range, x)?.evaluate()?, self.relative(range)))
    }

    /// The boundary-layer form at a point, for a quick look: one pair of Airy functions. Good within a few
    /// [`layer_range`](Self::layer_range) of cut-off, to some `n eps^(1/3)` for mode `n`: 5 dB off for mode 3 at
    /// `eps = 0.09`, 1 % at `eps = 1e-7`.
    ///
    /// Errors: [`Error::Domain`] for a place off the profile; [`Error::NoDigits`] hopelessly far from
    /// cut-off.
    ///
    /// ```
    /// use merging_saddles::guide::{Profile, QuantumWell};
    /// let well = QuantumWell.along(1, Profile::plane(3.0, 1e-6)?, 0.0)?;
    /// let (time, x) = (well.cutoff_range() + well.layer_range(), well.cutoff_width() + 50.0);
    /// // The leading term of the uniform field: they differ by eps^(1/3) = 0.01 (derived relation).
    /// let ratio = well.field_in_layer(time, x)? / well.field(time, x)?.value;
    /// assert!((ratio - 1.0).norm() < 0.03);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn field_in_layer(&self, range: f64, x: f64) -> Result<Complex64, Error> {
        let inside = self.check(range, x)?;
        let width = self.profile.width(range);
        let (t, y) = self.layer_coordinates(range, if inside { width } else { x });
        let u = bound_extended(t, y)?.u;
        let eps = self.media.k * 2.0 * self.turned_slope / self.media.q;
        let size = (-I * FRAC_PI_4).exp() * eps.powf(1.0 / 6.0) * self.media.m.powf(-2.0 / 3.0);
        let profile = if inside {
            self.guide.sign() * self.wave(self.guide.cutoff_width() * x / width)
        } else {
            1.0
        };
        Ok((u * (size * profile) * self.relative(range)).to_complex())
    }

    fn wave(&self, phase: f64) -> f64 {
        if self.even { phase.cos() } else { phase.sin() }
    }

    /// The layer's coordinates `(t, y)` of a place, complex with losses; `y` is counted outwards.
    ///
    /// ```
    /// use merging_saddles::guide::{Profile, QuantumWell};
    /// let well = QuantumWell.along(1, Profile::plane(3.0, 1e-3)?, 0.0)?;
    /// // One transition length after cut-off, one height outside: t = y = 1 by definition.
    /// let range = well.cutoff_range() + well.layer_range();
    /// let (t, y) = well.layer_coordinates(range, well.profile().width(range) + well.layer_height());
    /// assert!((t - 1.0).norm() < 1e-12 && (y - 1.0).norm() < 1e-12);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn layer_coordinates(&self, range: f64, x: f64) -> (Complex64, Complex64) {
        let Media { k, q, m, .. } = self.media;
        let height = (k * 2.0 * q * q * self.turned_slope / m).powf(-1.0 / 3.0);
        let along = k * 2.0 * height * height;
        ((range - self.centre) / along, (x - self.profile.width(range)) / height)
    }

    /// Amplitude of the sine for unit energy, and the logarithm of the factor carried, of the bound
    /// mode at a range before cut-off.
    fn bound_mode(&self, range: f64) -> Result<(Complex64, Complex64), Error> {
        if range >= self.fitted_from {
            let mode = self.guide.adiabatic_at(self.place(range))?;
            return Ok((mode.antinode, mode.exponent));
        }
        // i (beta - k) over the range, by Simpson's rule on the profile itself.
        let media = &self.media;
        let rate = |s: f64| -> Result<Complex64, Error> {
            let shift = (media.q * self.bound_shape(s)?.gamma).powi(2);
            // beta - k, in the one-way equation shift/(2 k).
            let sum = if self.is_wide() {
                (media.k * media.k + shift).sqrt() + media.k
            } else {
                media.k * 2.0
            };
            Ok(I * shift / sum)
        };
        // Up to the fit, or from the reference on where nothing is fitted.
        let (to, known) = if self.fitted_from.is_finite() {
            let mode = self.guide.adiabatic_at(self.place(self.fitted_from))?;
            (self.fitted_from, mode.exponent)
        } else {
            (self.reference, Complex64::new(0.0, 0.0))
        };
        const STEPS: u32 = 100;
        let step = (to - range) / f64::from(STEPS);
        let mut sum = rate(range)? + rate(to)?;
        for j in 1..STEPS {
            let weight = if j % 2 == 1 { 4.0 } else { 2.0 };
            sum += rate(range + step * f64::from(j))? * weight;
        }
        Ok((self.bound_shape(range)?.antinode, known - sum * (step / 3.0)))
    }

    /// The bound mode's shape at a range.
    pub(super) fn bound_shape(&self, range: f64) -> Result<Adiabatic, Error> {
        self.guide.adiabatic(self.media.q * self.profile.width(range))
    }

    /// The field at a point by the form that holds there, to six digits: uniform from the fitted part of the profile
    /// on; before it, where the profile is not known at complex widths, that of the guide which goes on straight, with
    /// what the mode has gathered on its own way; and adiabatic deep in the guide, where `gamma^2 > 2/3`.
    ///
    /// [`adiabatic`](Self::adiabatic) alone is off by `eps`, and far out by more, since the field there comes from a ray
    /// with a complex angle that left the guide earlier: by 2 dB at 35 dB below the mode, where `eps = 0.07`.
    ///
    /// Errors: as [`adiabatic`](Self::adiabatic) and [`field`](Self::field).
    ///
    /// ```
    /// use merging_saddles::guide::{Profile, QuantumWell};
    /// let walls = Profile::from_fn(0.0, 600.0, |t| {
    ///     (4.0 - 3e-3 * t - 4e-6 * t * t, -3e-3 - 8e-6 * t)
    /// })?;
    /// let well = QuantumWell.along(1, walls, 0.0)?;
    /// let join = well.fitted_from();
    /// // Both forms hold where they join: within eps.
    /// let (before, after) = (well.value(join - 1e-6, 1.0)?, well.value(join + 1e-6, 1.0)?);
    /// assert!(join > 0.0 && (before / after - 1.0).norm() < well.eps());
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn value(&self, range: f64, x: f64) -> Result<Complex64, Error> {
        let inside = self.check(range, x)?;
        if range >= self.fitted_from {
            let field = self.uniform(range, x)?.quadrature(1e-6)?;
            return Ok(times(field, self.relative(range)).value);
        }
        match self.straight(range, x, inside) {
            Some((field, own)) => {
                let carried = Scaled::exp(self.bound_mode(range)?.1 - own);
                Ok((field * carried * self.relative(range)).to_complex())
            }
            None => self.adiabatic(range, x),
        }
    }

    /// The field of the guide that goes on straight, and the exponent of its own bound mode: none where the guide does
    /// not narrow, where the Brewster condition lies in the beam, and near the branch points of `kappa`: the
    /// mismatch at the boundary is 5 `eps` at `gamma^2 = 2/3` and grows from there.
    fn straight(&self, range: f64, x: f64, inside: bool) -> Option<(Scaled, Complex64)> {
        let Media { k, q, .. } = self.media;
        let width = self.profile.width(range);
        let guide = self.guide.straight(k * 2.0 * self.profile.fall(range) / q).ok()?;
        let mode = guide.adiabatic(q * width).ok()?;
        let field = if inside {
            guide.inside(q * width, q * x)
        } else {
            guide.outside(q * width, q * (x - width))
        };
        let shallow = mode.gamma.norm_sqr() <= 2.0 / 3.0;
        let field = shallow.then_some(field.ok()?)?;
        Some((field.quadrature(1e-6).ok()?.scaled, mode.exponent))
    }

    /// Levels in dB re the incoming mode along a line of receivers `(range, x)`, each by the form that holds
    /// there ([`value`](Self::value)).
    ///
    /// Errors: each receiver has its own.
    ///
    /// ```
    /// use merging_saddles::guide::{Profile, QuantumWell};
    /// // Mode 2 is even: its largest value lies in the middle, and is 0 dB at the reference by definition.
    /// let well = QuantumWell.along(2, Profile::plane(6.0, 0.01)?, 0.0)?;
    /// let line = [(0.0, 0.0), (0.0, -1.0), (well.cutoff_range() + 100.0, 20.0)];
    /// let levels = well.levels_db(&line);
    /// assert!(matches!(levels[0], Ok(level) if level.abs() < 0.1));
    /// assert!(levels[1].is_err()); // positions count from the middle
    /// assert!(matches!(levels[2], Ok(level) if level < 0.0 && level > -20.0)); // in the beam
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn levels_db(&self, receivers: &[(f64, f64)]) -> Vec<Result<f64, Error>> {
        receivers.iter().map(|&(s, x)| self.value(s, x).map(super::level_db)).collect()
    }

    /// The adiabatic mode at a point, relative to the incoming one: for ranges well before cut-off.
    ///
    /// Errors: [`Error::Domain`] off the profile or where the guide is no wider than at cut-off.
    ///
    /// ```
    /// use merging_saddles::guide::{AcousticGuide, TwoLayer};
    /// # let guide = AcousticGuide::new(TwoLayer {
    /// #     frequency_hz: 100.0, water_speed_m_per_s: 1500.0, bottom_speed_m_per_s: 1650.0,
    /// #     water_density_kg_per_m3: 1000.0, bottom_density_kg_per_m3: 1800.0,
    /// #     water_attenuation_db_per_wavelength: 0.0,
    /// #     bottom_attenuation_db_per_wavelength: 0.0 })?;
    /// let run = guide.upslope(1, 1e-3, 60.0)?;
    /// let deep = -(60.0 - run.cutoff_depth_m()) / 1e-3f64.tan();
    /// let at = |depth: f64| run.passage().adiabatic(deep, depth).map(|p| p.norm());
    /// // In the bottom a bound mode falls off by the same factor over equal heights (textbook modal relation).
    /// let [a, b, c] = [at(60.0)?, at(65.0)?, at(70.0)?];
    /// assert!((a / b - b / c).abs() < 1e-12);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn adiabatic(&self, range: f64, x: f64) -> Result<Complex64, Error> {
        let inside = self.check(range, x)?;
        let width = self.profile.width(range);
        let (antinode, exponent) = self.bound_mode(range)?;
        let mode = self.bound_shape(range)?;
        let across = |x: f64| {
            let angle = mode.kappa * self.media.q * x;
            if self.even { angle.cos() } else { angle.sin() }
        };
        let shape = if inside {
            across(x)
        } else {
            across(width) * (-mode.gamma * self.media.q * (x - width)).exp()
        };
        let size = antinode * shape * self.guide.sign();
        Ok((Scaled::exp(exponent) * size * self.relative(range)).to_complex())
    }

    /// From a field of unit energy, without its carrier, to one relative to the incoming mode.
    fn relative(&self, range: f64) -> Scaled {
        let carrier = I * self.media.carrier * (range - self.reference);
        Scaled::exp(carrier - self.incoming_exponent)
            * (self.incoming_antinode.inv() * self.guide.sign())
    }
}

fn too_fast(eps: f64, slope: f64) -> Error {
    Error::Undecided {
        reason: format!(
            "at cut-off the guide narrows by {slope} per unit of range, eps = {eps:.3}, and the \
             formulas need 0 < eps <= 1"
        ),
        remedy: "take a gentler slope that falls, or a stronger contrast of the media",
    }
}
