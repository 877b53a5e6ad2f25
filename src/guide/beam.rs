//! The beam that a mode becomes, and what is left in the guide.
//!
//! Well after cut-off the field outside is a spectrum of plane waves in the scaled momentum `p > 0`. From
//! the uniform field, with `|dp|` the measure of energy (derived here):
//!
//! ```text
//! density(p) = (4 m/eps) |p + eps sigma (..)|^2/|D sigma| |exp(-i p h_n(p) + (i/eps) phi(p))|^2
//! ```
//!
//! (wide-angle: over the cosine of the wave's angle, and with the phase of `wide.rs`)
//! whose integral is 1 without losses; for `eps -> 0` it is that of the layer,
//! `4 P^2 exp(-(4/3) P^3)`, `P = p (m/eps)^(1/3)`. A wave of momentum `p` runs at the angle `theta` with
//! `k sin(theta) = q p` kept exactly (the one-way equation itself has the tangent there).
//! Angles are from the axis of range (the surface, the middle of the guide), not from the boundary that
//! slopes against it; to leading order there is no difference. The ray starts where the phase is
//! stationary: at the range `Re T(p)`, `Re[h_n + p h_n']` from the middle.

use super::passage::{Media, Passage};
use crate::{Complex64, Error};

/// The beam, angles in rad from the axis of range.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Beam {
    /// Angle of greatest energy per angle.
    pub axis_rad: f64,
    /// Angles to both sides where that has fallen to half.
    pub half_power_rad: [f64; 2],
}

impl Beam {
    /// Angle between the two half-power angles in rad.
    pub fn half_power_width_rad(&self) -> f64 {
        self.half_power_rad[1] - self.half_power_rad[0]
    }
}

/// Where a beam meets a line of constant position.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Footprint {
    /// Range at which the axis crosses.
    pub axis: f64,
    /// Ranges at which the rays of the two half-power angles cross, the nearer first.
    pub half_power: [f64; 2],
}

impl Passage {
    /// Angle in rad between the beam's axis and the boundary, from the small-angle formula
    /// `2^(-1/3)/(k L_z)`: no wavelength and no mode number in it.
    ///
    /// ```
    /// use merging_saddles::guide::{AcousticGuide, TwoLayer};
    /// # let guide = AcousticGuide::new(TwoLayer {
    /// #     frequency_hz: 100.0, water_speed_m_per_s: 1500.0, bottom_speed_m_per_s: 1650.0,
    /// #     water_density_kg_per_m3: 1000.0, bottom_density_kg_per_m3: 1800.0,
    /// #     water_attenuation_db_per_wavelength: 0.0,
    /// #     bottom_attenuation_db_per_wavelength: 0.0 })?;
    /// let run = guide.upslope(2, 2f64.to_radians(), 60.0)?;
    /// let angle = run.passage().take_off_angle_small_rad();
    /// // [((c_b/c_w)^2 - 1) (rho_b/rho_w) g]^(1/3), the slope g (derived relation).
    /// let expected = ((1.1f64.powi(2) - 1.0) * 1.8 * 2f64.to_radians().tan()).cbrt();
    /// assert!((angle - expected).abs() < 1e-12);
    /// // The exact relation gives a little more.
    /// assert!((run.passage().take_off_angle_rad()?.sin() - angle).abs() < 1e-15);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn take_off_angle_small_rad(&self) -> f64 {
        // The radiated momentum density 4 p^2 exp(-(4/3) p^3) peaks at p = 2^(-1/3).
        0.5f64.cbrt() / (self.layer_height() * self.media().k_real)
    }

    /// The same angle with the exact relation `k sin(theta) = p/L_z`.
    ///
    /// Errors: [`Error::Domain`] where no such angle exists; the formula has long failed
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

    /// Energy radiated per radian at an angle from the axis of range, over the incoming mode's (its integral over
    /// all angles is 1 without losses, to about `eps`).
    ///
    /// Errors: [`Error::Domain`] for an angle that is not between 0 and pi/2, or beyond the Brewster condition
    /// (as [`radiation_per_wavenumber`](Self::radiation_per_wavenumber)).
    ///
    /// ```
    /// use merging_saddles::guide::{AcousticGuide, TwoLayer};
    /// # let guide = AcousticGuide::new(TwoLayer {
    /// #     frequency_hz: 100.0, water_speed_m_per_s: 1500.0, bottom_speed_m_per_s: 1650.0,
    /// #     water_density_kg_per_m3: 1000.0, bottom_density_kg_per_m3: 1800.0,
    /// #     water_attenuation_db_per_wavelength: 0.0,
    /// #     bottom_attenuation_db_per_wavelength: 0.0 })?;
    /// let run = guide.upslope(1, 0.003, 20.0)?;
    /// // All of the mode's energy leaves, at some angle (eps = 0.013).
    /// let step = 1e-3;
    /// let energy: Result<Vec<f64>, _> =
    ///     (0..1000).map(|j| run.passage().radiation_per_rad((f64::from(j) + 0.5) * step)).collect();
    /// assert!((energy?.iter().sum::<f64>() * step - 1.0).abs() < 1e-3);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn radiation_per_rad(&self, angle_rad: f64) -> Result<f64, Error> {
        if !(0.0..std::f64::consts::FRAC_PI_2).contains(&angle_rad) {
            let remedy = "give an angle from the axis of range, from 0 to below pi/2";
            return Err(Error::domain("angle_rad", angle_rad, remedy));
        }
        let k_real = self.media().k_real;
        let per_wavenumber = self.radiation_per_wavenumber(k_real * angle_rad.sin())?;
        Ok(per_wavenumber * k_real * angle_rad.cos())
    }

    /// Energy radiated per wavenumber across the guide (radians per unit of length; the momentum of a released
    /// particle), over the incoming mode's.
    ///
    /// Errors: [`Error::Domain`] for a wavenumber that is negative or not finite, or, for `m > 1`, at and
    /// beyond that of the Brewster condition.
    ///
    /// ```
    /// use merging_saddles::guide::{Profile, QuantumWell};
    /// // Slowly closing walls: the released particle's momentum is spread as 4 P^2 exp(-(4/3) P^3), P = p/v^(1/3)
    /// // (derived relation).
    /// let v = 1e-6f64;
    /// let well = QuantumWell.along(1, Profile::plane(3.0, v)?, 0.0)?;
    /// for p in [0.5, 0.8, 1.2] {
    ///     let expected = 4.0 * p * p * (-4.0 / 3.0 * f64::powi(p, 3)).exp();
    ///     let seen = well.radiation_per_wavenumber(p * v.cbrt())? * v.cbrt();
    ///     assert!((seen / expected - 1.0).abs() < 0.02);
    /// }
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn radiation_per_wavenumber(&self, across: f64) -> Result<f64, Error> {
        let Media { q_real, m, .. } = *self.media();
        let p = across / q_real;
        let limit = if m > 1.0 { 0.98 / (m * m - 1.0).sqrt() } else { 1e6 };
        if !(p >= 0.0 && p < limit) {
            let remedy =
                "give a number from 0 on, and below that of the Brewster condition if there is one";
            return Err(Error::domain("wavenumber across the guide", across, remedy));
        }
        Ok(self.guide().momentum_density(p) / q_real)
    }

    /// The beam's axis and half-power angles from the energy per angle.
    ///
    /// Cost: some hundred evaluations in closed form (quadratures of the phase on a curved profile).
    ///
    /// Errors: [`Error::Undecided`] where the energy per angle has no maximum with both half-power angles
    /// below pi/2.
    ///
    /// ```
    /// use merging_saddles::guide::{AcousticGuide, TwoLayer};
    /// # let guide = AcousticGuide::new(TwoLayer {
    /// #     frequency_hz: 100.0, water_speed_m_per_s: 1500.0, bottom_speed_m_per_s: 1650.0,
    /// #     water_density_kg_per_m3: 1000.0, bottom_density_kg_per_m3: 1800.0,
    /// #     water_attenuation_db_per_wavelength: 0.0,
    /// #     bottom_attenuation_db_per_wavelength: 0.0 })?;
    /// // On a gentle slope the axis is that of the small-angle formula, and the half-power angles are 0.5327 and
    /// // 1.4742 of it: 4 p^2 exp(-(4/3) p^3) is half its maximum at p = 0.42280 and 1.17008, the maximum at
    /// // 2^(-1/3) (derived relation).
    /// let run = guide.upslope(1, 1e-6, 20.0)?;
    /// let (beam, angle) = (run.passage().beam()?, run.take_off_angle_small_rad());
    /// assert!((beam.axis_rad / angle - 1.0).abs() < 2e-3);
    /// assert!((beam.half_power_rad[0] / angle - 0.5327).abs() < 2e-3);
    /// assert!((beam.half_power_rad[1] / angle - 1.4742).abs() < 2e-3);
    /// assert_eq!(beam.half_power_width_rad(), beam.half_power_rad[1] - beam.half_power_rad[0]);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn beam(&self) -> Result<Beam, Error> {
        let at = |angle: f64| self.radiation_per_rad(angle).unwrap_or(0.0);
        let limit = std::f64::consts::FRAC_PI_2 * (1.0 - 1e-9);
        let scale = self.take_off_angle_small_rad().min(1.0);
        // The maximum among steps of a twentieth, then by thirds.
        let step = 0.05 * scale;
        let mut best = 0.0;
        for j in 1..=60 {
            let angle = step * f64::from(j);
            if angle < limit && at(angle) > at(best) {
                best = angle;
            }
        }
        let (mut low, mut high) = ((best - step).max(0.0), (best + step).min(limit));
        for _ in 0..12 {
            let (a, b) = ((2.0 * low + high) / 3.0, (low + 2.0 * high) / 3.0);
            if at(a) < at(b) { low = a } else { high = b }
        }
        // Thirds see the top to the root of rounding only; the slope, by differences of fourth order, to 1e-9.
        let (mut axis_rad, gap) = (0.5 * (low + high), 0.2 * step);
        for _ in 0..4 {
            let [a, b, c, d, e] = [-2.0, -1.0, 0.0, 1.0, 2.0].map(|j| at(axis_rad + gap * j));
            let shift = gap * (a - 8.0 * b + 8.0 * d - e) / (12.0 * (b - 2.0 * c + d));
            if !(shift.abs() < 0.2 * gap
                && axis_rad - 2.0 * gap > 0.0
                && axis_rad + 2.0 * gap < limit)
            {
                break;
            }
            axis_rad -= shift;
        }
        let half = 0.5 * at(axis_rad);
        let crossing = |mut above: f64, mut below: f64| {
            for _ in 0..50 {
                let middle = 0.5 * (above + below);
                if at(middle) > half { above = middle } else { below = middle }
            }
            0.5 * (above + below)
        };
        let outer = (1..=60).map(|j| axis_rad + step * f64::from(j)).find(|&a| at(a) < half);
        match outer.filter(|&a| a < limit && half > 0.0) {
            Some(outer) => {
                let half_power_rad = [crossing(axis_rad, 0.0), crossing(axis_rad, outer)];
                Ok(Beam { axis_rad, half_power_rad })
            }
            None => Err(Error::Undecided {
                reason: format!(
                    "at eps = {:.3} the radiation forms no beam below a right angle",
                    self.eps()
                ),
                remedy: "take a gentler slope or a weaker contrast",
            }),
        }
    }

    /// Range and position at which the ray of an angle leaves the guide.
    pub fn ray_start(&self, angle_rad: f64) -> (f64, f64) {
        let Media { k_real, q_real, .. } = *self.media();
        let (r, x) = self.guide().ray_start(k_real * angle_rad.sin() / q_real);
        (self.cutoff_range() + r / (q_real * self.slope()), x / q_real)
    }

    /// Where the beam crosses the position `x` (a depth in the bottom), by straight rays of the
    /// axis and the half-power angles.
    ///
    /// Errors: as [`beam`](Self::beam); [`Error::Domain`] for a position that is not outside.
    ///
    /// ```
    /// use merging_saddles::guide::{AcousticGuide, TwoLayer};
    /// # let guide = AcousticGuide::new(TwoLayer {
    /// #     frequency_hz: 100.0, water_speed_m_per_s: 1500.0, bottom_speed_m_per_s: 1650.0,
    /// #     water_density_kg_per_m3: 1000.0, bottom_density_kg_per_m3: 1800.0,
    /// #     water_attenuation_db_per_wavelength: 0.0,
    /// #     bottom_attenuation_db_per_wavelength: 0.0 })?;
    /// let run = guide.upslope(1, 0.003, 20.0)?;
    /// let (beam, print) = (run.passage().beam()?, run.passage().footprint(120.0)?);
    /// // Straight rays, by definition.
    /// let (range, depth) = run.passage().ray_start(beam.axis_rad);
    /// assert!((print.axis - range - (120.0 - depth) / beam.axis_rad.tan()).abs() < 1e-9);
    /// assert!(print.half_power[0] < print.axis && print.axis < print.half_power[1]);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn footprint(&self, x: f64) -> Result<Footprint, Error> {
        let beam = self.beam()?;
        let cross = |angle: f64| -> Result<f64, Error> {
            let (range, from) = self.ray_start(angle);
            if !(x.is_finite() && x > from) {
                let remedy = "give a position outside the guide at its cut-off";
                return Err(Error::domain("position", x, remedy));
            }
            Ok(range + (x - from) / angle.tan())
        };
        let ([low, high], axis) = (beam.half_power_rad, cross(beam.axis_rad)?);
        Ok(Footprint { axis, half_power: [cross(high)?, cross(low)?] })
    }

    /// Energy inside the guide at a range, over the incoming mode's (inside and outside, at the reference), by Gauss
    /// panels over the field; of sound and light the flux of energy along the range.
    ///
    /// Cost: some ten fields for the first mode, twenty in the wide-angle form. Errors: as [`Passage::field`].
    ///
    /// ```
    /// use merging_saddles::guide::{AcousticGuide, TwoLayer};
    /// # let guide = AcousticGuide::new(TwoLayer {
    /// #     frequency_hz: 100.0, water_speed_m_per_s: 1500.0, bottom_speed_m_per_s: 1650.0,
    /// #     water_density_kg_per_m3: 1000.0, bottom_density_kg_per_m3: 1800.0,
    /// #     water_attenuation_db_per_wavelength: 0.0,
    /// #     bottom_attenuation_db_per_wavelength: 0.0 })?;
    /// // At cut-off, to leading order: eps^(1/3) m^(-4/3) |U(0, 0)|^2 h/2, with h = pi/2 of the scaled guide and
    /// // |U(0, 0)|^2 = 8 pi 2^(-4/3) Ai'(0)^2 (derived relation; Ai'(0) = -0.2588194037928068, DLMF 9.2.6).
    /// let run = guide.upslope(1, 1e-6, 20.0)?;
    /// let pi = std::f64::consts::PI;
    /// let u = 8.0 * pi * 0.5f64.powf(4.0 / 3.0) * 0.2588194037928068f64.powi(2);
    /// let expected = run.eps().cbrt() * 1.8f64.powf(4.0 / 3.0) * u * pi / 4.0;
    /// assert!((run.passage().energy_inside(0.0)? / expected - 1.0).abs() < 0.01);
    /// // A transition length later hardly any is left.
    /// assert!(run.passage().energy_inside(run.layer_range_m())? < 0.2 * expected);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn energy_inside(&self, range: f64) -> Result<f64, Error> {
        let width = self.profile().width(range);
        let waves = self.guide().cutoff_width() / std::f64::consts::PI;
        let panels = waves.ceil().clamp(1.0, 1000.0);
        let step = width / panels;
        let mut sum = 0.0;
        for j in 0..panels as u32 {
            for (node, weight) in GAUSS {
                for node in [-node, node] {
                    let x = step * (f64::from(j) + 0.5 * (1.0 + node));
                    let field = self.value(range, x)?;
                    let flow = if self.is_wide() { self.flow(range, x)? } else { field };
                    sum += 0.5 * step * weight * (field.conj() * flow).re;
                }
            }
        }
        // Unit energy in scaled units is (antinode)^-2 in these.
        Ok(sum * self.media().q_real * self.incoming_antinode().norm_sqr())
    }
}

/// Positive nodes and weights of the 8-point Gauss-Legendre rule (DLMF 3.5(v)).
const GAUSS: [(f64, f64); 4] = [
    (0.183_434_642_495_649_8, 0.362_683_783_378_362),
    (0.525_532_409_916_329, 0.313_706_645_877_887_3),
    (0.796_666_477_413_626_7, 0.222_381_034_453_374_48),
    (0.960_289_856_497_536_2, 0.101_228_536_290_376_26),
];

impl super::SlopingGuide {
    /// Radiated energy per scaled momentum `p`, over that of the incoming mode at cut-off.
    pub(super) fn momentum_density(&self, p: f64) -> f64 {
        let (amplitude, exponent) = self.spectrum(p);
        let density = 4.0 * self.density_ratio() / self.eps().norm() * amplitude.norm_sqr();
        // The flux of energy, not the integral of psi^2.
        let cosine = self.wide().cosine(Complex64::from(p)).re;
        density * cosine * (2.0 * exponent.re).exp()
    }
}
