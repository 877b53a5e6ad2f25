//! A two-layer sea over a sloping bed, in physical units.
//!
//! Water with a pressure-release surface over a fluid bottom in which sound is faster. Time factor
//! `exp(-i omega t)`. Ranges run along the bed, upslope; heights and depths are vertical: to the
//! accuracy of the formula (the slope squared) this makes no difference.
//!
//! With `q^2 = k_w^2 - k_b^2` and `g` the depth lost per metre of range, the scaled guide of
//! [`SlopingGuide`] has `x = q z`, `r = q g s`, `eps = 2 k_b g/q`, `m = rho_w/rho_b` and
//! `psi = p exp(-i k_b s)`; the layer at cut-off has `L_z = (2 k_b Gamma)^(-1/3)`,
//! `L_s = 2 k_b L_z^2`, `Gamma = q^2 g/m`. Attenuation makes `k_b` and `q`, and with them every
//! length and the place of cut-off, complex; the lengths returned here are those without loss, the
//! fields have it all. They are those of Helmholtz's equation ([`SlopingGuide::wide_angle`]); by the one-way equation
//! ([`Passage::paraxial`]) modes run by `(k_n - k_b)^2/(2 k_b)` too fast far before cut-off, and where the bottom alone is
//! lossy they even grow there.
//!
//! Source: derived here; the cut-off depth is the textbook modal relation (common practice).

use super::modes::counts;
use super::passage::{Media, ModeNumber, Passage};
use super::profile::Profile;
use super::sensitivity::{Figure, Figures};
use super::uniform::Order;
use crate::{Complex64, Error, Estimate};
use std::f64::consts::{FRAC_PI_4, LOG10_E, PI, TAU};

/// What is known of the sea and its bottom: numbers, or something else for each of them
/// ([`sensitivities`](super::sensitivities)).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct TwoLayer<T = f64> {
    /// Frequency in Hz.
    pub frequency_hz: T,
    /// Sound speed in the water in m/s.
    pub water_speed_m_per_s: T,
    /// Sound speed in the bottom in m/s, above that in the water.
    pub bottom_speed_m_per_s: T,
    /// Density of the water in kg/m^3.
    pub water_density_kg_per_m3: T,
    /// Density of the bottom in kg/m^3.
    pub bottom_density_kg_per_m3: T,
    /// Attenuation in the water in dB per wavelength; 0 for none.
    pub water_attenuation_db_per_wavelength: T,
    /// Attenuation in the bottom in dB per wavelength; 0 for none.
    pub bottom_attenuation_db_per_wavelength: T,
}

impl Figures for TwoLayer {
    type Of<T> = TwoLayer<T>;

    fn map<T>(&self, mut f: impl FnMut(Figure) -> Result<T, Error>) -> Result<TwoLayer<T>, Error> {
        // Results are singular where the speeds are equal.
        let apart = self.bottom_speed_m_per_s - self.water_speed_m_per_s;
        let mut own = |value: f64| f(Figure::new(value, value));
        let frequency_hz = own(self.frequency_hz)?;
        let water_density_kg_per_m3 = own(self.water_density_kg_per_m3)?;
        let bottom_density_kg_per_m3 = own(self.bottom_density_kg_per_m3)?;
        let mut speed = |value: f64| f(Figure::new(value, apart.min(value)));
        let water_speed_m_per_s = speed(self.water_speed_m_per_s)?;
        let bottom_speed_m_per_s = speed(self.bottom_speed_m_per_s)?;
        let mut loss = |value: f64| f(Figure::new(value, 1.0).within(0.0, MOST_ATTENUATION));
        Ok(TwoLayer {
            frequency_hz,
            water_speed_m_per_s,
            bottom_speed_m_per_s,
            water_density_kg_per_m3,
            bottom_density_kg_per_m3,
            water_attenuation_db_per_wavelength: loss(self.water_attenuation_db_per_wavelength)?,
            bottom_attenuation_db_per_wavelength: loss(self.bottom_attenuation_db_per_wavelength)?,
        })
    }
}

/// Largest attenuation taken, in dB per wavelength.
const MOST_ATTENUATION: f64 = 5.0;

/// A validated two-layer sea at one frequency.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct AcousticGuide {
    k_water: f64,
    k_bottom: f64,
    water_loss: f64,
    loss: f64,
    density_ratio: f64,
}

/// Where a mode is cut off on a depth profile.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct CutOffPlace {
    /// Range in m at which the depth has fallen to the cut-off depth.
    pub range_m: f64,
    /// Slope of the bed there in rad, positive upslope.
    pub slope_rad: f64,
}

impl AcousticGuide {
    /// Checks the figures.
    ///
    /// Errors ([`Error::Domain`], naming the field): a figure that is not finite and positive, a
    /// bottom that is not faster than the water, an attenuation below 0 or above 5 dB per
    /// wavelength.
    ///
    /// ```
    /// use merging_saddles::guide::{AcousticGuide, TwoLayer};
    /// let sea = TwoLayer {
    ///     frequency_hz: 100.0,
    ///     water_speed_m_per_s: 1500.0,
    ///     bottom_speed_m_per_s: 1650.0,
    ///     water_density_kg_per_m3: 1000.0,
    ///     bottom_density_kg_per_m3: 1800.0,
    ///     water_attenuation_db_per_wavelength: 0.0,
    ///     bottom_attenuation_db_per_wavelength: 0.0,
    /// };
    /// let guide = AcousticGuide::new(sea)?;
    /// // Cut-off depth (n - 1/2) pi/sqrt(k_w^2 - k_b^2): textbook modal relation, common practice.
    /// assert!((guide.cutoff_depth_m(2)? - 27.0).abs() < 0.05);
    /// assert_eq!(guide.mode_count(30.0)?, 2);
    /// // The lengths and the angle of the beam follow from the layer's scaling (derived relations).
    /// let cut_off = guide.upslope(2, 2f64.to_radians(), 60.0)?;
    /// assert!((cut_off.layer_height_m() - 8.82).abs() < 0.005);
    /// assert!((cut_off.layer_range_m() - 59.2).abs() < 0.05);
    /// assert!((cut_off.take_off_angle_small_rad().to_degrees() - 13.5).abs() < 0.05);
    ///
    /// let slow = TwoLayer { bottom_speed_m_per_s: 1450.0, ..sea };
    /// println!("{}", AcousticGuide::new(slow).unwrap_err());
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn new(sea: TwoLayer) -> Result<Self, Error> {
        Error::require_positive("frequency_hz", sea.frequency_hz)?;
        Error::require_positive("water_speed_m_per_s", sea.water_speed_m_per_s)?;
        Error::require_positive("bottom_speed_m_per_s", sea.bottom_speed_m_per_s)?;
        Error::require_positive("water_density_kg_per_m3", sea.water_density_kg_per_m3)?;
        Error::require_positive("bottom_density_kg_per_m3", sea.bottom_density_kg_per_m3)?;
        if sea.bottom_speed_m_per_s <= sea.water_speed_m_per_s {
            return Err(Error::domain(
                "bottom_speed_m_per_s",
                sea.bottom_speed_m_per_s,
                "a bottom that is not faster than the water traps no mode: give a speed above \
                 water_speed_m_per_s",
            ));
        }
        for (what, attenuation) in [
            ("water_attenuation_db_per_wavelength", sea.water_attenuation_db_per_wavelength),
            ("bottom_attenuation_db_per_wavelength", sea.bottom_attenuation_db_per_wavelength),
        ] {
            if !(0.0..=MOST_ATTENUATION).contains(&attenuation) {
                return Err(Error::domain(
                    what,
                    attenuation,
                    "give 0 to 5 dB per wavelength (0.1 to 1 for sediments); dB per metre is to be \
                     multiplied by the wavelength",
                ));
            }
        }
        let omega = TAU * sea.frequency_hz;
        // A field exp(-k loss x) loses the attenuation in dB over x = 2 pi/k.
        let loss = |attenuation: f64| attenuation / (40.0 * PI * LOG10_E);
        Ok(AcousticGuide {
            k_water: omega / sea.water_speed_m_per_s,
            k_bottom: omega / sea.bottom_speed_m_per_s,
            water_loss: loss(sea.water_attenuation_db_per_wavelength),
            loss: loss(sea.bottom_attenuation_db_per_wavelength),
            density_ratio: sea.water_density_kg_per_m3 / sea.bottom_density_kg_per_m3,
        })
    }

    /// Wavenumber in the water in rad/m.
    pub fn water_wavenumber(&self) -> f64 {
        self.k_water
    }

    /// Wavenumber in the bottom in rad/m; its imaginary part is the attenuation in Np/m.
    pub fn bottom_wavenumber(&self) -> Complex64 {
        Complex64::new(self.k_bottom, self.k_bottom * self.loss)
    }

    /// Density of the water over that of the bottom.
    pub fn density_ratio(&self) -> f64 {
        self.density_ratio
    }

    /// `sqrt(k_w^2 - k_b^2)` without loss, in rad/m.
    fn q(&self) -> f64 {
        ((self.k_water - self.k_bottom) * (self.k_water + self.k_bottom)).sqrt()
    }

    /// The two media for the core.
    pub(super) fn media(&self) -> Media {
        let k = self.bottom_wavenumber();
        let water = Complex64::new(self.k_water, self.k_water * self.water_loss);
        let q = (water * water - k * k).sqrt();
        Media { k, q, k_real: self.k_bottom, q_real: self.q(), m: self.density_ratio, carrier: k }
    }

    /// Depth in m below which mode `n = 1, 2, ..` is no longer trapped (without loss):
    /// `(n - 1/2) pi/sqrt(k_w^2 - k_b^2)`, the textbook modal relation.
    ///
    /// Errors: [`Error::Domain`] for mode 0.
    pub fn cutoff_depth_m(&self, mode: u32) -> Result<f64, Error> {
        if mode == 0 {
            return Err(Error::domain("mode", 0.0, "modes are counted from 1"));
        }
        Ok((f64::from(mode) - 0.5) * PI / self.q())
    }

    /// How many modes water of this depth traps.
    ///
    /// Errors: [`Error::Domain`] for a depth that is not finite and positive.
    pub fn mode_count(&self, depth_m: f64) -> Result<u32, Error> {
        Error::require_positive("depth_m", depth_m)?;
        // Saturates for depths that no sea has.
        Ok((depth_m * self.q() / PI + 0.5).floor() as u32)
    }

    /// Where on a track a mode is cut off: the first range at which the depth falls to its cut-off depth.
    ///
    /// Errors: [`Error::Domain`] for mode 0 and depths that are not finite; [`Error::Undecided`] where the
    /// mode is already cut off at the first range, or never is.
    ///
    /// ```
    /// use merging_saddles::guide::{AcousticGuide, Profile, TwoLayer};
    /// # let guide = AcousticGuide::new(TwoLayer {
    /// #     frequency_hz: 100.0, water_speed_m_per_s: 1500.0, bottom_speed_m_per_s: 1650.0,
    /// #     water_density_kg_per_m3: 1000.0, bottom_density_kg_per_m3: 1800.0,
    /// #     water_attenuation_db_per_wavelength: 0.0,
    /// #     bottom_attenuation_db_per_wavelength: 0.0 })?;
    /// let place = guide.cutoff_place(2, &Profile::plane(80.0, 0.03)?)?;
    /// // On a plane bed (depth - cut-off depth)/slope, by definition.
    /// assert!((place.range_m - (80.0 - guide.cutoff_depth_m(2)?) / 0.03).abs() < 1e-6);
    /// assert!((place.slope_rad - 0.03f64.atan()).abs() < 1e-8);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn cutoff_place(&self, mode: u32, profile: &Profile) -> Result<CutOffPlace, Error> {
        let range_m = profile.first_range_of_width(self.cutoff_depth_m(mode)?)?;
        Ok(CutOffPlace { range_m, slope_rad: profile.fall(range_m).atan() })
    }

    /// Every mode that is cut off on a track, highest first, with the place.
    ///
    /// Errors: [`Error::Domain`] for depths that are not finite, and for more than 10,000 modes.
    ///
    /// ```
    /// use merging_saddles::guide::{AcousticGuide, Profile, TwoLayer};
    /// # let guide = AcousticGuide::new(TwoLayer {
    /// #     frequency_hz: 100.0, water_speed_m_per_s: 1500.0, bottom_speed_m_per_s: 1650.0,
    /// #     water_density_kg_per_m3: 1000.0, bottom_density_kg_per_m3: 1800.0,
    /// #     water_attenuation_db_per_wavelength: 0.0,
    /// #     bottom_attenuation_db_per_wavelength: 0.0 })?;
    /// let track = Profile::from_samples(&[0.0, 2000.0, 3000.0], &[70.0, 40.0, 12.0])?;
    /// let modes: Vec<u32> = guide.cutoffs(&track)?.iter().map(|(mode, _)| *mode).collect();
    /// // Cut-off depths 9.0, 27.0, 45.0, 63.0 m: (n - 1/2) pi/q, textbook modal relation.
    /// assert_eq!(modes, [4, 3, 2]);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn cutoffs(&self, profile: &Profile) -> Result<Vec<(u32, CutOffPlace)>, Error> {
        let [shallow, deep] = counts(profile, |depth| self.mode_count(depth))?;
        (shallow + 1..=deep)
            .rev()
            .map(|mode| Ok((mode, self.cutoff_place(mode, profile)?)))
            .collect()
    }

    /// A mode going upslope through its cut-off on a bed of constant slope; ranges are counted from
    /// cut-off.
    ///
    /// `reference_depth_m` is the depth of water, before cut-off, where the incoming mode is known:
    /// every pressure is relative to its largest pressure (antinode) in the water there.
    ///
    /// Errors ([`Error::Domain`]): mode 0; a slope that is not between 0 and pi/4; a reference depth
    /// that does not trap the mode. [`Error::Undecided`]: so steep that `eps` exceeds 1.
    pub fn upslope(
        &self,
        mode: u32,
        slope_rad: f64,
        reference_depth_m: f64,
    ) -> Result<ModeCutOff, Error> {
        let cutoff_depth_m = self.cutoff_depth_m(mode)?;
        if !(slope_rad > 0.0 && slope_rad < FRAC_PI_4) {
            return Err(Error::domain(
                "slope_rad",
                slope_rad,
                "give the slope in rad, above 0 and below pi/4; the bed must rise along the way",
            ));
        }
        Error::require_finite("reference_depth_m", reference_depth_m)?;
        if reference_depth_m <= cutoff_depth_m {
            return Err(Error::domain(
                "reference_depth_m",
                reference_depth_m,
                "give a depth above the cut-off depth of the mode, where it is still trapped",
            ));
        }
        let gradient = slope_rad.tan();
        let profile = Profile::plane(cutoff_depth_m, gradient)?;
        self.along(mode, profile, (cutoff_depth_m - reference_depth_m) / gradient)
    }

    /// A mode going through its cut-off along a track of the caller's own; ranges are those of the
    /// profile, widths its depths in m.
    ///
    /// Every pressure is relative to the mode's largest pressure in the water at `reference_range_m`,
    /// before cut-off. How the profile is smoothed round the cut-off: see [`Profile`] and
    /// [`Passage::fit_departure`].
    ///
    /// Errors: [`Error::Domain`] for mode 0 and a reference range that is not on the profile and before
    /// cut-off; [`Error::Undecided`] where the mode is not cut off on the profile, or this narrows or bends too fast
    /// there (the message says how fast, with `eps`).
    ///
    /// ```
    /// use merging_saddles::guide::{AcousticGuide, Profile, TwoLayer, level_db};
    /// # let guide = AcousticGuide::new(TwoLayer {
    /// #     frequency_hz: 100.0, water_speed_m_per_s: 1500.0, bottom_speed_m_per_s: 1650.0,
    /// #     water_density_kg_per_m3: 1000.0, bottom_density_kg_per_m3: 1800.0,
    /// #     water_attenuation_db_per_wavelength: 0.0,
    /// #     bottom_attenuation_db_per_wavelength: 0.0 })?;
    /// let (ranges, depths) = ([0.0, 600.0, 1200.0, 1800.0, 2400.0], [60.0, 48.0, 35.0, 21.0, 6.0]);
    /// let run = guide.along(2, Profile::from_samples(&ranges, &depths)?, 0.0)?;
    /// // Cut off in 27.0 m (textbook modal relation, 1.5 pi/q).
    /// assert!((run.depth_m(run.cutoff_range_m()) - 27.0).abs() < 0.1);
    /// let level = level_db(run.pressure_uniform(1800.0, 10.0)?.value);
    /// assert!(level < -5.0); // the water is left
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn along(
        &self,
        mode: u32,
        profile: Profile,
        reference_range_m: f64,
    ) -> Result<ModeCutOff, Error> {
        self.cutoff_depth_m(mode)?;
        let number = ModeNumber { n: mode, even: false };
        let passage = Passage::new(self.media(), number, profile, reference_range_m)?;
        Ok(ModeCutOff { passage })
    }
}

/// A mode that goes upslope through its cut-off.
///
/// Ranges in m are those of the profile ([`AcousticGuide::along`]) or counted from the (loss-free)
/// cut-off ([`AcousticGuide::upslope`]), depths in m from the surface. What is not particular to sound is
/// at the [`passage`](Self::passage), in metres too.
#[derive(Clone, Debug)]
pub struct ModeCutOff {
    passage: Passage,
}

impl ModeCutOff {
    /// With the uniform field to the given order in `eps` (without a call: [`Order::Next`]).
    pub fn order(self, order: Order) -> Self {
        ModeCutOff { passage: self.passage.order(order) }
    }

    /// By the one-way (paraxial) equation instead of Helmholtz's: see [`Passage::paraxial`].
    ///
    /// Errors: as there.
    pub fn paraxial(self) -> Result<ModeCutOff, Error> {
        Ok(ModeCutOff { passage: self.passage.paraxial()? })
    }

    /// The mode's passage through cut-off: beam, energy, levels; all lengths in m.
    pub fn passage(&self) -> &Passage {
        &self.passage
    }

    /// Depth of the water in m where the mode is cut off (without loss).
    pub fn cutoff_depth_m(&self) -> f64 {
        self.passage.cutoff_width()
    }

    /// Range in m of the cut-off (without loss), on the smoothed profile.
    pub fn cutoff_range_m(&self) -> f64 {
        self.passage.cutoff_range()
    }

    /// `L_z`: height in m over which the field at cut-off reaches into the bottom.
    pub fn layer_height_m(&self) -> f64 {
        self.passage.layer_height()
    }

    /// `L_s`: range in m over which the mode turns into a beam.
    pub fn layer_range_m(&self) -> f64 {
        self.passage.layer_range()
    }

    /// The small parameter `eps = 2 k_b g/sqrt(k_w^2 - k_b^2)`, the same at every frequency and for
    /// every mode; [`pressure_uniform`](Self::pressure_uniform) is good to a per cent or so up to 0.1.
    pub fn eps(&self) -> f64 {
        self.passage.eps()
    }

    /// Angle in rad between the beam's axis and the bed, from the small-angle formula
    /// `[((c_b/c_w)^2 - 1) (rho_b/rho_w) g]^(1/3)`: no frequency and no mode number in it.
    pub fn take_off_angle_small_rad(&self) -> f64 {
        self.passage.take_off_angle_small_rad()
    }

    /// The same angle with the exact relation `k_b sin(theta) = p/L_z`.
    ///
    /// Errors: [`Error::Domain`] where no such angle exists; the formula has long failed
    /// there.
    pub fn take_off_angle_rad(&self) -> Result<f64, Error> {
        self.passage.take_off_angle_rad()
    }

    /// Depth of the water in m at a range in m.
    pub fn depth_m(&self, range_m: f64) -> f64 {
        self.passage.profile().width(range_m)
    }

    /// The layer's coordinates `(t, y)` of a place, complex with losses; `y` is counted into the
    /// bottom.
    pub fn layer_coordinates(&self, range_m: f64, depth_m: f64) -> (Complex64, Complex64) {
        self.passage.layer_coordinates(range_m, depth_m)
    }

    /// Pressure from the boundary-layer formula, relative to the incoming mode's antinode at the
    /// reference; good within a few [`layer_range_m`](Self::layer_range_m) of cut-off, to
    /// some `eps^(1/3)`. With losses `t` of
    /// [`layer_coordinates`](Self::layer_coordinates) has an imaginary part, the larger the gentler
    /// the slope: beyond 1 or so only [`pressure_uniform`](Self::pressure_uniform) is right.
    ///
    /// Cheap: one pair of Airy functions, in closed form.
    ///
    /// Errors: as [`Passage::field_in_layer`].
    pub fn pressure_layer(&self, range_m: f64, depth_m: f64) -> Result<Complex64, Error> {
        self.passage.field_in_layer(range_m, depth_m)
    }

    /// Pressure from the uniform field, relative to the incoming mode's antinode at the reference;
    /// good before, at and after cut-off, at any distance from it.
    ///
    /// The error figure is that of the integral; the formula itself is good to about `eps^2` in the
    /// bottom (0.2 % at `eps = 0.02`, 1 to 4 % at 0.1) and somewhat less in the water late after cut-off,
    /// beside a constant phase of about `eps/2`: [`Passage::departure`] measures it.
    ///
    /// Cost and errors: as [`Passage::field`].
    pub fn pressure_uniform(&self, range_m: f64, depth_m: f64) -> Result<Estimate, Error> {
        self.passage.field(range_m, depth_m)
    }
}

/// Level in dB of a relative pressure: `20 log10 |p|`, re whatever the pressure is relative to.
///
/// ```
/// use merging_saddles::{Complex64, guide::level_db};
/// // A tenth of the pressure is 20 dB less (definition of the decibel).
/// assert!((level_db(Complex64::new(0.0, 0.1)) + 20.0).abs() < 1e-12);
/// ```
pub fn level_db(relative_pressure: Complex64) -> f64 {
    20.0 * relative_pressure.norm().log10()
}
