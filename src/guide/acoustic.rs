//! A two-layer sea over a sloping bed, in physical units.
//!
//! Water with a pressure-release surface over a fluid bottom in which sound is faster. Time factor
//! `exp(-i omega t)`. Ranges run along the bed, upslope; heights and depths are vertical: to the
//! accuracy of the one-way equation (the slope squared) this makes no difference.
//!
//! With `q^2 = k_w^2 - k_b^2` and `g` the depth lost per metre of range, the scaled guide of
//! [`SlopingGuide`] has `x = q z`, `r = q g s`, `eps = 2 k_b g/q`, `m = rho_w/rho_b` and
//! `psi = p exp(-i k_b s)`; the layer at cut-off has `L_z = (2 k_b Gamma)^(-1/3)`,
//! `L_s = 2 k_b L_z^2`, `Gamma = q^2 g/m`. Attenuation in the bottom makes `k_b`, and with it every
//! length and the place of cut-off, complex; the lengths returned here are those without loss, the
//! fields have it all.
//!
//! Source: derived here; the cut-off depth is the textbook modal relation (common practice).

use super::layer::bound_extended;
use super::uniform::{Order, SlopingGuide, times};
use crate::{Complex64, Error, Estimate, Scaled};
use std::f64::consts::{FRAC_PI_4, LOG10_E, PI, TAU};

const I: Complex64 = Complex64::new(0.0, 1.0);

/// What is known of the sea and its bottom.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct TwoLayer {
    /// Frequency in Hz.
    pub frequency_hz: f64,
    /// Sound speed in the water in m/s.
    pub water_speed_m_per_s: f64,
    /// Sound speed in the bottom in m/s, above that in the water.
    pub bottom_speed_m_per_s: f64,
    /// Density of the water in kg/m^3.
    pub water_density_kg_per_m3: f64,
    /// Density of the bottom in kg/m^3.
    pub bottom_density_kg_per_m3: f64,
    /// Attenuation in the bottom in dB per wavelength; 0 for none.
    pub bottom_attenuation_db_per_wavelength: f64,
}

/// A validated two-layer sea at one frequency.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct AcousticGuide {
    k_water: f64,
    k_bottom: f64,
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
        let attenuation = sea.bottom_attenuation_db_per_wavelength;
        if !(0.0..=5.0).contains(&attenuation) {
            return Err(Error::domain(
                "bottom_attenuation_db_per_wavelength",
                attenuation,
                "give 0 to 5 dB per wavelength in the bottom (0.1 to 1 for sediments); dB per \
                 metre is to be multiplied by the wavelength",
            ));
        }
        let omega = TAU * sea.frequency_hz;
        Ok(AcousticGuide {
            k_water: omega / sea.water_speed_m_per_s,
            k_bottom: omega / sea.bottom_speed_m_per_s,
            // A field exp(-k_b loss x) loses `attenuation` dB over x = 2 pi/k_b.
            loss: attenuation / (40.0 * PI * LOG10_E),
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

    /// `sqrt(k_w^2 - k_b^2)` without and with loss, in rad/m.
    fn q(&self) -> (f64, Complex64) {
        let real = ((self.k_water - self.k_bottom) * (self.k_water + self.k_bottom)).sqrt();
        let k = self.bottom_wavenumber();
        (real, (self.k_water * self.k_water - k * k).sqrt())
    }

    /// Depth in m below which mode `n = 1, 2, ..` is no longer trapped (without loss):
    /// `(n - 1/2) pi/sqrt(k_w^2 - k_b^2)`, the textbook modal relation.
    ///
    /// Errors: [`Error::Domain`] for mode 0.
    pub fn cutoff_depth_m(&self, mode: u32) -> Result<f64, Error> {
        if mode == 0 {
            return Err(Error::domain("mode", 0.0, "modes are counted from 1"));
        }
        Ok((f64::from(mode) - 0.5) * PI / self.q().0)
    }

    /// How many modes water of this depth traps.
    ///
    /// Errors: [`Error::Domain`] for a depth that is not finite and positive.
    pub fn mode_count(&self, depth_m: f64) -> Result<u32, Error> {
        Error::require_positive("depth_m", depth_m)?;
        // Saturates for depths that no sea has.
        Ok((depth_m * self.q().0 / PI + 0.5).floor() as u32)
    }

    /// The first place between two ranges where a depth profile falls to the cut-off depth of a
    /// mode; `depth_m` gives the depth in m at a range in m.
    ///
    /// The profile is sampled at 2000 equal steps, so a shoal narrower than that may be missed.
    ///
    /// Errors: [`Error::Domain`] for mode 0, ranges that are not finite and rising, and a depth
    /// that is not finite; [`Error::Undecided`] where the mode is already cut off at the first range, or
    /// never is.
    ///
    /// ```
    /// use merging_saddles::guide::{AcousticGuide, TwoLayer};
    /// # let guide = AcousticGuide::new(TwoLayer {
    /// #     frequency_hz: 100.0, water_speed_m_per_s: 1500.0, bottom_speed_m_per_s: 1650.0,
    /// #     water_density_kg_per_m3: 1000.0, bottom_density_kg_per_m3: 1800.0,
    /// #     bottom_attenuation_db_per_wavelength: 0.0 })?;
    /// let place = guide.cutoff_range_m(2, |s| 80.0 - 0.03 * s, 0.0, 2000.0)?;
    /// // On a plane bed (depth - cut-off depth)/slope, by definition.
    /// assert!((place.range_m - (80.0 - guide.cutoff_depth_m(2)?) / 0.03).abs() < 1e-6);
    /// assert!((place.slope_rad - 0.03f64.atan()).abs() < 1e-8);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn cutoff_range_m(
        &self,
        mode: u32,
        depth_m: impl Fn(f64) -> f64,
        from_m: f64,
        to_m: f64,
    ) -> Result<CutOffPlace, Error> {
        let target = self.cutoff_depth_m(mode)?;
        Error::require_finite("from_m", from_m)?;
        Error::require_finite("to_m", to_m)?;
        if from_m >= to_m {
            return Err(Error::domain("to_m", to_m, "give a range beyond from_m"));
        }
        let excess = |s: f64| -> Result<f64, Error> {
            let depth = depth_m(s);
            Error::require_finite("depth_m", depth)?;
            Ok(depth - target)
        };
        if excess(from_m)? <= 0.0 {
            return Err(Error::Undecided {
                reason: format!("mode {mode} is cut off already at range {from_m} m"),
                remedy: "begin where the water is deeper, or take a lower mode",
            });
        }
        const STEPS: u32 = 2000;
        let step = (to_m - from_m) / f64::from(STEPS);
        let mut low = from_m;
        for j in 1..=STEPS {
            let mut high = if j == STEPS { to_m } else { from_m + step * f64::from(j) };
            if excess(high)? > 0.0 {
                low = high;
                continue;
            }
            for _ in 0..60 {
                let middle = 0.5 * (low + high);
                if excess(middle)? > 0.0 { low = middle } else { high = middle }
            }
            let range_m = 0.5 * (low + high);
            let h = 1e-3 * step;
            let fall = (excess(range_m - h)? - excess(range_m + h)?) / (2.0 * h);
            return Ok(CutOffPlace { range_m, slope_rad: fall.atan() });
        }
        Err(Error::Undecided {
            reason: format!("mode {mode} stays trapped up to range {to_m} m"),
            remedy: "look farther upslope, or take a higher mode",
        })
    }

    /// A mode going upslope through its cut-off on a bed of constant slope.
    ///
    /// `reference_depth_m` is the depth of water, before cut-off, where the incoming mode is known:
    /// every pressure is relative to its largest pressure (antinode) in the water there.
    ///
    /// Errors ([`Error::Domain`]): mode 0; a slope that is not between 0 and pi/4, or so steep that
    /// `eps` exceeds 1; a reference depth that does not trap the mode.
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
        let (q_real, q) = self.q();
        let k_bottom = self.bottom_wavenumber();
        let sloping = SlopingGuide::new(mode, self.density_ratio, k_bottom * 2.0 * gradient / q)?;
        let incoming = sloping.adiabatic(q * reference_depth_m)?;
        Ok(ModeCutOff {
            sloping,
            sign: if mode.is_multiple_of(2) { -1.0 } else { 1.0 },
            gradient,
            density_ratio: self.density_ratio,
            cutoff_depth_m,
            reference_depth_m,
            k_bottom,
            q,
            eps: 2.0 * self.k_bottom * gradient / q_real,
            incoming_exponent: incoming.exponent,
            incoming_antinode: incoming.antinode,
            layer_height_m: (2.0 * self.k_bottom * q_real * q_real * gradient / self.density_ratio)
                .powf(-1.0 / 3.0),
        })
    }
}

/// A mode that goes upslope through its cut-off on a bed of constant slope.
///
/// Ranges are counted in m from the (loss-free) cut-off, negative before it, and depths in m from
/// the surface.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ModeCutOff {
    sloping: SlopingGuide,
    sign: f64,
    gradient: f64,
    density_ratio: f64,
    cutoff_depth_m: f64,
    reference_depth_m: f64,
    k_bottom: Complex64,
    q: Complex64,
    eps: f64,
    incoming_exponent: Complex64,
    incoming_antinode: Complex64,
    layer_height_m: f64,
}

impl ModeCutOff {
    /// With the uniform field to the given order in `eps` (without a call: [`Order::Next`]).
    pub fn order(self, order: Order) -> Self {
        ModeCutOff { sloping: self.sloping.order(order), ..self }
    }

    /// Depth of the water in m where the mode is cut off (without loss).
    pub fn cutoff_depth_m(&self) -> f64 {
        self.cutoff_depth_m
    }

    /// `L_z`: height in m over which the field at cut-off reaches into the bottom.
    pub fn layer_height_m(&self) -> f64 {
        self.layer_height_m
    }

    /// `L_s`: range in m over which the mode turns into a beam.
    pub fn layer_range_m(&self) -> f64 {
        2.0 * self.k_bottom.re * self.layer_height_m * self.layer_height_m
    }

    /// The small parameter `eps = 2 k_b g/sqrt(k_w^2 - k_b^2)`, the same at every frequency and for
    /// every mode; [`pressure_uniform`](Self::pressure_uniform) is good to a per cent or so up to 0.1.
    pub fn eps(&self) -> f64 {
        self.eps
    }

    /// Angle in rad between the beam's axis and the bed, from the small-angle formula
    /// `[((c_b/c_w)^2 - 1) (rho_b/rho_w) g]^(1/3)`: no frequency and no mode number in it.
    pub fn take_off_angle_small_rad(&self) -> f64 {
        let k = self.k_bottom.re;
        // The radiated momentum density 4 p^2 exp(-(4/3) p^3) peaks at p = 2^(-1/3).
        0.5f64.cbrt() / (self.layer_height_m * k)
    }

    /// The same angle with the exact relation `k_b sin(theta) = p/L_z`.
    ///
    /// Errors: [`Error::Domain`] where no such angle exists; the one-way equation has long failed
    /// there.
    pub fn take_off_angle_rad(&self) -> Result<f64, Error> {
        let sine = self.take_off_angle_small_rad();
        if sine > 1.0 {
            return Err(Error::domain(
                "sine of the take-off angle",
                sine,
                "take a gentler slope or a weaker contrast",
            ));
        }
        Ok(sine.asin())
    }

    /// Depth of the water in m at a range from cut-off in m (zero or less beyond the shore).
    pub fn depth_m(&self, range_m: f64) -> f64 {
        self.cutoff_depth_m - self.gradient * range_m
    }

    /// The layer's coordinates `(t, y)` of a place, complex with losses; `y` is counted into the
    /// bottom.
    pub fn layer_coordinates(&self, range_m: f64, depth_m: f64) -> (Complex64, Complex64) {
        let gamma = self.q * self.q * (self.gradient / self.density_ratio);
        let height = (self.k_bottom * 2.0 * gamma).powf(-1.0 / 3.0);
        let along = self.k_bottom * 2.0 * height * height;
        let water = self.depth_m(range_m);
        let t = (self.sloping.cutoff_width() / self.q - water) / (along * self.gradient);
        (t, (depth_m - water) / height)
    }

    /// Pressure from the boundary-layer formula, relative to the incoming mode's antinode at the
    /// reference depth; good within a few [`layer_range_m`](Self::layer_range_m) of cut-off, to
    /// some `eps^(1/3)`.
    ///
    /// Cheap: one pair of Airy functions, in closed form.
    ///
    /// Errors: [`Error::Domain`] for figures that are not finite, a place above the surface or
    /// beyond the shore; [`Error::NoDigits`] hopelessly far from cut-off.
    pub fn pressure_layer(&self, range_m: f64, depth_m: f64) -> Result<Complex64, Error> {
        let water = self.check(range_m, depth_m)?;
        let in_bottom = depth_m >= water;
        let (t, y) = self.layer_coordinates(range_m, if in_bottom { depth_m } else { water });
        let u = bound_extended(t, y)?.u;
        let eps = self.q.inv() * self.k_bottom * (2.0 * self.gradient);
        let size =
            (-I * FRAC_PI_4).exp() * eps.powf(1.0 / 6.0) * self.density_ratio.powf(-2.0 / 3.0);
        let profile = if in_bottom {
            1.0
        } else {
            self.sign * (self.sloping.cutoff_width() * depth_m / water).sin()
        };
        Ok((u * (size * profile) * self.relative(range_m)).to_complex())
    }

    /// Pressure from the uniform field, relative to the incoming mode's antinode at the reference
    /// depth; good before, at and after cut-off, at any distance from it.
    ///
    /// The error figure is that of the integral (relative 1e-9 is asked for). The formula itself is
    /// good to about `eps^2` in the bottom (0.2 % at `eps = 0.02`, 1 to 4 % at 0.1) and somewhat
    /// less in the water late after cut-off, beside a constant phase of about `eps/2`: see
    /// `tests/guide_pde.rs`.
    ///
    /// Cost: 0.1 to 0.7 ms at any frequency; 2 ms where the densities differ and `eps` is 0.1.
    ///
    /// Errors: as [`pressure_layer`](Self::pressure_layer); [`Error::Undecided`] for a bottom lighter
    /// than the water where the Brewster angle lies in the beam; what [`crate::Integral::quadrature`]
    /// refuses.
    pub fn pressure_uniform(&self, range_m: f64, depth_m: f64) -> Result<Estimate, Error> {
        let water = self.check(range_m, depth_m)?;
        let field = if depth_m >= water {
            self.sloping.outside(self.q * water, self.q * (depth_m - water))?
        } else {
            self.sloping.inside(self.q * water, self.q * depth_m)?
        };
        Ok(times(field.quadrature(1e-9)?, self.relative(range_m)))
    }

    /// From a field of unit energy, without its carrier, to pressure relative to the incoming mode.
    fn relative(&self, range_m: f64) -> Scaled {
        let from_reference = (self.reference_depth_m - self.depth_m(range_m)) / self.gradient;
        Scaled::exp(I * self.k_bottom * from_reference - self.incoming_exponent)
            * (self.incoming_antinode.inv() * self.sign)
    }

    /// Refuses places without a field; returns the depth of the water.
    fn check(&self, range_m: f64, depth_m: f64) -> Result<f64, Error> {
        Error::require_finite("range_m", range_m)?;
        Error::require_finite("depth_m", depth_m)?;
        if depth_m < 0.0 {
            return Err(Error::domain(
                "depth_m",
                depth_m,
                "count depths downwards from the surface",
            ));
        }
        let water = self.depth_m(range_m);
        if water <= 0.0 {
            return Err(Error::domain("range_m", range_m, "stay before the shore"));
        }
        Ok(water)
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
