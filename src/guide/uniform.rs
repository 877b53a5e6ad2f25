//! The uniform field of one mode of a guide of constant slope, before, at and after its cut-off.
//!
//! Scaled guide (all lengths pure numbers; `m` the density inside over the density outside):
//!
//! ```text
//! i eps psi_r = -psi_xx - psi  (0 < x < h(r)),     i eps psi_r = -psi_xx  (x > h(r)),
//! psi(0) = 0,   h(r) = h0 - r,   psi and (1/rho)(psi_x + i (eps/2) psi) continuous at x = h
//! ```
//!
//! The mode comes in with unit energy (integral of `psi^2`, weight 1 inside and `m` outside, is 1).
//! Its field is an integral over the local parameter `p = sinh w`, with `f` and the dispersion
//! relation as in the module's notes on phase and branches:
//!
//! ```text
//! psi = -i sqrt(2 i/(pi eps)) * integral of g(w) exp((i/eps) f(w)) dw
//! outside g = p D^(-1/2) exp(i p (h - h_n(p))) kappa,      f = phi(p) - p^2 r + p eps (x - h)
//! inside  g = (-1)^(n-1) p sin(kappa x),                   f = phi(p) - p^2 r
//! ```
//!
//! Two saddles, `p = 0` and `p = i gamma`, merge at cut-off; at a distance from the boundary the
//! second one turns into the beam. The next order in `eps` replaces the factor `p` by
//! `p + eps m/(12 D)` inside and `p + eps ((6 - 5 m)/(12 D) + (i/4) h_n'(p))` outside, and gains
//! two orders of magnitude.
//!
//! How good the formula itself is, against the differential equation (mode 1, `m = 1`, relative L2 norms inside / outside,
//! one complex constant per run taken out at `t = 0`; `t = (h_c - h)/(m^2 eps)^(1/3)`; other modes, densities, profiles and
//! the exponents are in the notes of the module; `errors_of_all_cases` and, for `eps = 0.1`, `steep_and_bent` in
//! `tests/guide_accuracy.rs`):
//!
//! | eps | order | t = -2 | t = -1 | t = 0 | t = 1 | t = 2 |
//! | --- | --- | --- | --- | --- | --- | --- |
//! | 0.1 | next | 2.8e-3 / 1.3e-2 | 2.7e-3 / 7.2e-3 | 2.3e-3 / 4.5e-3 | 4.6e-3 / 3.9e-3 | 2.3e-2 / 4.7e-3 |
//! | 0.04 | next | 5.9e-4 / 1.6e-3 | 5.5e-4 / 1.1e-3 | 4.2e-4 / 8.3e-4 | 1.2e-3 / 8.5e-4 | 6.6e-3 / 1.1e-3 |
//! | 0.02 | next | 2.0e-4 / 3.2e-4 | 1.8e-4 / 2.5e-4 | 1.2e-4 / 2.2e-4 | 4.6e-4 / 2.6e-4 | 2.6e-3 / 3.8e-4 |
//! | 0.01 | next | 6.6e-5 / 7.4e-5 | 5.9e-5 / 6.6e-5 | 3.5e-5 / 6.4e-5 | 1.8e-4 / 8.4e-5 | 1.0e-3 / 1.3e-4 |
//! | 0.04 | leading | 2.6e-2 / 3.4e-2 | 2.3e-2 / 3.1e-2 | 1.7e-2 / 3.4e-2 | 2.0e-2 / 4.5e-2 | 6.8e-2 / 5.3e-2 |
//! | 0.02 | leading | 1.7e-2 / 1.5e-2 | 1.5e-2 / 1.5e-2 | 1.1e-2 / 1.9e-2 | 1.2e-2 / 2.7e-2 | 4.3e-2 / 3.3e-2 |
//! | 0.01 | leading | 1.0e-2 / 7.4e-3 | 9.1e-3 / 8.2e-3 | 6.1e-3 / 1.1e-2 | 6.9e-3 / 1.7e-2 | 2.7e-2 / 2.1e-2 |
//!
//! Evaluation. At fixed `h` and `eps (x - h)` the leading amplitude does not depend on `eps`, so one
//! plan serves every `eps`; the next order puts `eps` into the amplitude, and then a plan serves
//! its own `eps` only. For single points quadrature is the cheaper way (0.1 ms against 4 ms for a plan), at
//! any `eps`.
//!
//! On a curved profile the phase is `integral of 2 p T(h_n(p)) dp` (see `curve.rs`), the amplitude gains
//! `(-h'(T(p)))^(-1/2)`, and the next order has the local slope and its derivatives (`second.rs`). Modes even in `x` have `(n - 1) pi` for
//! `(n - 1/2) pi` and the cosine.
//!
//! Source: derived here; checked against a Crank-Nicolson solution in `tests/guide_accuracy.rs`, `tests/guide_pde.rs` and
//! `tests/guide_profiles.rs`.

use super::curve::Curve;
use super::dispersion::{Dispersion, ModeAmplitude, ModePhase, Part, Side};
use super::wide::{Spot, WideAngle};
use crate::integral::{Amplitude, Termination};
use crate::{Complex64, Contour, Error, Estimate, Integral, Scaled};
use std::f64::consts::PI;
use std::sync::Arc;

const I: Complex64 = Complex64::new(0.0, 1.0);

/// How many terms in `eps` the amplitude has.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Order {
    /// The leading term: error about `eps` before and `eps^(2/3)` after cut-off.
    Leading,
    /// The next term of a straight profile with the local slope: on a curved profile all but the slope's own
    /// change, some ten times better than the leading term.
    LocalSlope,
    /// The whole next term: some hundred times better than the leading one at `eps = 0.01`, on curved profiles
    /// too, where its amplitude has a logarithm at cut-off.
    #[default]
    Next,
}

/// One mode of a guide whose width falls, with unit slope at cut-off, in scaled units.
#[derive(Clone, Debug, PartialEq)]
pub struct SlopingGuide {
    pub(super) dispersion: Dispersion,
    mode: u32,
    even: bool,
    pub(super) eps: Complex64,
    order: Order,
    pub(super) tolerance: f64,
    pub(super) curve: Option<Arc<Curve>>,
    /// In the wide-angle form: the same by `w`, where it is bent, and that of a straight guide.
    early: Option<Arc<Curve>>,
    flat: Option<Arc<Curve>>,
}

/// A place along the guide: its width and its range, counted from cut-off.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Place {
    pub h: Complex64,
    pub r: Complex64,
}

impl SlopingGuide {
    /// Mode `n = 1, 2, ..` of a guide with density ratio `m` (inside over outside; 1 for a slab
    /// waveguide in TE or a quantum well) and the small parameter `eps`, complex where the media
    /// absorb.
    ///
    /// Errors ([`Error::Domain`]): mode 0; `m` not positive and finite; `eps` not finite, not in the
    /// right half plane, or above 1 in modulus, where no expansion in it means anything.
    ///
    /// ```
    /// use merging_saddles::guide::SlopingGuide;
    /// let guide = SlopingGuide::new(2, 0.55, 0.05)?;
    /// // Cut-off of mode n at the width (n - 1/2) pi (textbook modal relation, common practice).
    /// assert_eq!(guide.cutoff_width(), 1.5 * std::f64::consts::PI);
    /// assert!(SlopingGuide::new(0, 1.0, 0.05).is_err());
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn new(mode: u32, density_ratio: f64, eps: impl Into<Complex64>) -> Result<Self, Error> {
        let eps = eps.into();
        if mode == 0 {
            return Err(Error::domain("mode", 0.0, "modes are counted from 1"));
        }
        Error::require_positive("density ratio", density_ratio)?;
        if !(eps.re > 0.0 && eps.norm() <= 1.0) {
            return Err(Error::Domain {
                what: "eps",
                value: eps,
                remedy: "take a gentler slope or a stronger contrast: the expansion in eps needs \
                         0 < |eps| <= 1",
            });
        }
        let dispersion = Dispersion::new(mode, density_ratio);
        let order = Order::Next;
        Ok(SlopingGuide {
            dispersion,
            mode,
            even: false,
            eps,
            order,
            tolerance: 1e-3,
            curve: None,
            early: None,
            flat: None,
        })
    }

    /// The mode that is even in `x` (`psi_x = 0` in place of `psi = 0` at `x = 0`): the other half of
    /// the modes of a symmetric slab. It is cut off at the width `(n - 1) pi`. Call it before
    /// [`curved`](Self::curved) and [`wide_angle`](Self::wide_angle).
    ///
    /// Errors: [`Error::Domain`] for mode 1, the one mode of a symmetric slab that has no cut-off.
    ///
    /// ```
    /// use merging_saddles::guide::SlopingGuide;
    /// let guide = SlopingGuide::new(2, 1.0, 0.01)?.even()?;
    /// // The third mode of a slab of half width h: V = h = pi (textbook slab guide relation).
    /// assert_eq!(guide.cutoff_width(), std::f64::consts::PI);
    /// assert!(SlopingGuide::new(1, 1.0, 0.01)?.even().is_err());
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn even(self) -> Result<Self, Error> {
        if self.mode == 1 {
            let remedy = "the first even mode of a symmetric guide is trapped at any width: take \
                          mode 2 or higher";
            return Err(Error::domain("even mode", 1.0, remedy));
        }
        let dispersion = Dispersion::even(self.mode, self.dispersion.m);
        Ok(SlopingGuide { dispersion, even: true, curve: None, early: None, flat: None, ..self })
    }

    /// With a curved profile: at the range `r` from cut-off the width is `h_c - r + c_2 r^2 + c_3 r^3 + ..`,
    /// with the coefficients from `c_2` on. The slope at cut-off stays 1: `eps` is the one there.
    ///
    /// With the range `T` at which a width is reached, the phase is then `integral of 2 p T(h_n(p)) dp`, the amplitude
    /// has the factor `(-h'(T))^(-1/2)`, and the next order the local slope `-h'(T)` and its derivatives ([`Order`]).
    ///
    /// Errors: [`Error::Domain`] for a coefficient that is not finite.
    ///
    /// ```
    /// use merging_saddles::guide::SlopingGuide;
    /// let straight = SlopingGuide::new(1, 1.0, 0.01)?;
    /// let curved = straight.clone().curved(&[0.3])?;
    /// // At cut-off both have the same slope: they differ by O(eps^(1/3)) (derived relation).
    /// let [a, b] = [straight, curved].map(|g| g.outside(g.cutoff_width(), 0.0));
    /// let ratio = a?.quadrature(1e-9)?.value / b?.quadrature(1e-9)?.value;
    /// assert!((ratio - 1.0).norm() < 0.1);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn curved<T: Into<Complex64> + Copy>(self, coefficients: &[T]) -> Result<Self, Error> {
        let higher: Vec<Complex64> = coefficients.iter().map(|&c| c.into()).collect();
        if let Some(&value) = higher.iter().find(|c| !c.norm().is_finite()) {
            let remedy = "pass finite numbers";
            return Err(Error::Domain { what: "coefficient of the profile", value, remedy });
        }
        let wide = self.wide();
        Ok(self.shaped(&higher, wide))
    }

    /// In the wide-angle form: sound or light by Helmholtz's equation instead of the one-way equation, with
    /// `delta = (q/k)^2`, complex where the media absorb; 0 for the one-way equation again.
    ///
    /// A wave of scaled momentum `p` then runs at the angle whose sine is `delta^(1/2) p`, exactly, and keeps its
    /// wavelength: steep beams point the right way at any distance. Inside and outside each solve
    /// Helmholtz's equation; the mode comes in with unit flux of energy, `(beta/k)` times the integral of
    /// `psi^2`, `beta` its wavenumber along the guide. Cost: as on a curved profile, since the phase has no closed form.
    ///
    /// Errors: [`Error::Domain`] for a `delta` that is not finite or not in the right half plane.
    ///
    /// ```
    /// use merging_saddles::guide::SlopingGuide;
    /// let (eps, delta) = (0.1, 0.2844);
    /// let guide = SlopingGuide::new(1, 1.0, eps)?;
    /// let wide = guide.clone().wide_angle(delta)?;
    /// // Late and far out the field is a ray from near cut-off: its phase changes across the guide by q p =
    /// // k sin(angle), tan(angle) = distance over range (ray optics, common practice); in scaled units
    /// // p = sin(angle)/delta^(1/2), tan(angle) = d delta^(1/2) eps/(2 r).
    /// let (r, d, step) = (1.5, 14.0, 0.01);
    /// let at = |d: f64| wide.outside(wide.cutoff_width() - r, d)?.quadrature(1e-9);
    /// let p = (at(d + step)?.value / at(d)?.value).arg() / step;
    /// let ray = ((d - r) * f64::sqrt(delta) * eps / (2.0 * r)).atan().sin() / f64::sqrt(delta);
    /// assert!((p / ray - 1.0).abs() < 0.05);
    /// // And both conditions of Helmholtz's equation at the boundary are kept to order eps^(5/3).
    /// assert!(wide.mismatch(wide.cutoff_width())? < 0.02);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn wide_angle(self, delta: impl Into<Complex64>) -> Result<Self, Error> {
        let delta = delta.into();
        if !(delta.norm().is_finite() && (delta.re > 0.0 || delta.norm() == 0.0)) {
            let remedy = "pass (q/k)^2, with a positive real part, or 0 for the one-way equation";
            return Err(Error::Domain { what: "delta", value: delta, remedy });
        }
        let higher = self.curve.as_ref().map_or(Vec::new(), |c| c.higher().to_vec());
        Ok(self.shaped(&higher, WideAngle::new(delta)))
    }

    fn shaped(self, higher: &[Complex64], wide: WideAngle) -> Self {
        if higher.is_empty() && !wide.is_on() {
            return SlopingGuide { curve: None, early: None, flat: None, ..self };
        }
        let curve = Arc::new(Curve::new(self.dispersion, higher, wide));
        let early = (wide.is_on() && curve.bent()).then(|| Arc::new(curve.by_w()));
        let flat = wide.is_on().then(|| match curve.bent() {
            true => Arc::new(Curve::new(self.dispersion, &[], wide)),
            false => curve.clone(),
        });
        SlopingGuide { curve: Some(curve), early, flat, ..self }
    }

    /// The wide-angle form, with `delta = 0` for none.
    pub(super) fn wide(&self) -> WideAngle {
        self.curve.as_ref().map(|curve| curve.wide()).unwrap_or_default()
    }

    /// The same mode of a straight guide.
    pub(super) fn straight(&self, eps: Complex64) -> Result<Self, Error> {
        let guide = SlopingGuide::new(self.mode, self.dispersion.m, eps)?;
        Ok(SlopingGuide { curve: self.flat.clone(), early: None, eps: guide.eps, ..self.clone() })
    }

    /// With the amplitude to the given order in `eps` (without a call: [`Order::Next`]).
    pub fn order(self, order: Order) -> Self {
        SlopingGuide { order, ..self }
    }

    /// Largest neglected part that is accepted for `m > 1`, relative to the mode (without a call:
    /// 1e-3). There the contour is cut short of the Brewster parameter `p = 1/sqrt(m^2 - 1)`, where
    /// the expansion in `eps` breaks down; the integrand at its end is the neglected part.
    pub fn tolerance(self, tolerance: f64) -> Self {
        SlopingGuide { tolerance, ..self }
    }

    /// The width at cut-off, `(n - 1/2) pi` (even modes: `(n - 1) pi`).
    pub fn cutoff_width(&self) -> f64 {
        self.dispersion.cutoff
    }

    /// The place where the guide has the width `h`.
    pub(super) fn place(&self, h: Complex64) -> Place {
        let u = self.dispersion.cutoff - h;
        let bend = self.curve.as_ref().map_or(Complex64::new(0.0, 0.0), |c| c.excess(u).0);
        Place { h, r: u + bend }
    }

    /// The field inside at `x`, `0 <= x <= h`, where the guide has the width `h`.
    pub fn inside(
        &self,
        h: impl Into<Complex64>,
        x: impl Into<Complex64>,
    ) -> Result<UniformField, Error> {
        self.inside_at(self.place(h.into()), x.into())
    }

    /// The field outside at the distance `x - h >= 0` from the boundary, where the guide has the
    /// width `h`.
    pub fn outside(
        &self,
        h: impl Into<Complex64>,
        distance: impl Into<Complex64>,
    ) -> Result<UniformField, Error> {
        self.outside_at(self.place(h.into()), distance.into())
    }

    pub(super) fn inside_at(&self, place: Place, x: Complex64) -> Result<UniformField, Error> {
        let zero = Complex64::new(0.0, 0.0);
        self.field(place, Side::Inside { x, even: self.even }, zero, self.sign())
    }

    /// The derivative along the range inside, over `i k` (see [`Side::InsideFlow`]).
    pub(super) fn flow_at(&self, place: Place, x: Complex64) -> Result<UniformField, Error> {
        let zero = Complex64::new(0.0, 0.0);
        self.field(place, Side::InsideFlow { x, even: self.even }, zero, self.sign())
    }

    pub(super) fn outside_at(&self, place: Place, d: Complex64) -> Result<UniformField, Error> {
        self.field(place, Side::Outside, d, 1.0)
    }

    /// Sign of the sine at the boundary, `(-1)^(n-1)`.
    pub(super) fn sign(&self) -> f64 {
        if self.mode.is_multiple_of(2) { -1.0 } else { 1.0 }
    }

    /// By how much the formula fails the conditions at the boundary where the guide has the width
    /// `h`: `(|jump of psi| + (m/eps)^(1/3) |jump of the flux|/m)/|psi|`, psi on the outside.
    ///
    /// The two sides are separate formulas and fit only as well as the expansion in `eps` goes, so
    /// this measures the order left out without a reference. Relative to the field at the boundary.
    ///
    /// Cost: four quadratures, six in the wide-angle form. Errors: as [`UniformField::quadrature`].
    ///
    /// ```
    /// use merging_saddles::guide::{Order, SlopingGuide};
    /// // Falls with eps, and faster with the next order (derived relation).
    /// let guide = SlopingGuide::new(1, 1.0, 0.01)?;
    /// let next = guide.mismatch(guide.cutoff_width())?;
    /// let leading = guide.order(Order::Leading).mismatch(0.5 * std::f64::consts::PI)?;
    /// assert!(next < 0.1 * leading && leading < 0.2);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn mismatch(&self, h: impl Into<Complex64>) -> Result<f64, Error> {
        self.mismatch_at(self.place(h.into()))
    }

    pub(super) fn mismatch_at(&self, place: Place) -> Result<f64, Error> {
        let (zero, m, x, even) = (Complex64::new(0.0, 0.0), self.dispersion.m, place.h, self.even);
        let value = |side, sign| -> Result<Scaled, Error> {
            let field = self.field(place, side, zero, sign)?;
            Ok(field.quadrature(1e-9)?.scaled)
        };
        let outside = value(Side::Outside, 1.0)?;
        let slope = value(Side::OutsideSlope, 1.0)?;
        let within = value(Side::Inside { x, even }, self.sign())?;
        let within_slope = value(Side::InsideSlope { x, even }, self.sign())?;
        let wide = self.wide().is_on();
        let (flow, within_flow) = if wide {
            let within = value(Side::InsideFlow { x, even }, self.sign())?;
            (value(Side::OutsideFlow, 1.0)?, within)
        } else {
            (outside, within)
        };
        let size = outside.exponent;
        let [outside, slope, within, within_slope, flow, within_flow] =
            [outside, slope, within, within_slope, flow, within_flow].map(|v| v.mantissa_at(size));
        let steepness = match &self.curve {
            Some(curve) if curve.bent() => curve.slope(self.dispersion.cutoff - place.h).1,
            _ => Complex64::new(1.0, 0.0),
        };
        let drift = I * self.eps * 0.5 * steepness;
        let jump = within - outside;
        let flux = within_slope + drift * within_flow - (slope + drift * flow) * m;
        let length = (m / self.eps.norm()).cbrt();
        Ok((jump.norm() + length * flux.norm() / m) / outside.norm())
    }

    fn field(
        &self,
        place: Place,
        side: Side,
        distance: Complex64,
        sign: f64,
    ) -> Result<UniformField, Error> {
        let Place { h, r } = place;
        let x = match side {
            Side::Inside { x, .. } | Side::InsideSlope { x, .. } | Side::InsideFlow { x, .. } => x,
            Side::Outside | Side::OutsideSlope | Side::OutsideFlow => distance,
        };
        for (what, value) in [("width h", h), ("x or distance", x)] {
            if !(value.re.is_finite() && value.im.is_finite() && value.re >= 0.0) {
                let remedy = "give a finite number with a real part that is not negative";
                return Err(Error::Domain { what, value, remedy });
            }
        }
        if h.re <= 0.0 {
            return Err(Error::domain("width h", h.re, "stop before the guide's tip"));
        }
        let (eps, part) = self.next_order();
        let dispersion = self.dispersion;
        let lag = r - (dispersion.cutoff - h);
        let before = if h.re > self.dispersion.cutoff { self.early.as_ref() } else { None };
        let (curve, turn) =
            (before.or(self.curve.as_ref()).cloned(), self.eps.inv() * self.eps.norm());
        let amplitude = ModeAmplitude { dispersion, h, eps, side, part, curve: curve.clone() };
        let phase = ModePhase { dispersion, h, d: self.eps * distance, turn, curve, lag };
        let wavenumber = self.eps.norm().recip();
        let (contour, neglected) = self.contour(&phase, wavenumber)?;
        let prefactor = -I * (I * 2.0 / (PI * self.eps)).sqrt() * sign;
        let integral = Integral::new(phase, contour).amplitude(amplitude);
        let bent = self.curve.as_ref().is_some_and(|c| c.bent());
        let apart = part == Part::Smooth && bent;
        let logarithm = apart.then(|| integral.halves());
        Ok(UniformField { integral, logarithm, wavenumber, prefactor, neglected })
    }

    /// `eps` of the amplitude, zero at leading order, and which part of the next order it has.
    fn next_order(&self) -> (Complex64, Part) {
        match self.order {
            Order::Leading => (Complex64::new(0.0, 0.0), Part::LocalSlope),
            Order::LocalSlope => (self.eps, Part::LocalSlope),
            Order::Next => (self.eps, Part::Smooth),
        }
    }

    /// The amplitude per scaled momentum `p` of the radiation and its exponent, phases of free propagation
    /// apart.
    pub(super) fn spectrum(&self, p: f64) -> (Complex64, Complex64) {
        let (wide, cutoff) = (self.wide(), Complex64::from(self.dispersion.cutoff));
        let z = wide.variable(Complex64::from(p));
        let Spot { w, cosine, measure, .. } = wide.spot(z);
        let width = self.dispersion.width(w);
        let curve = self.curve.clone();
        let (eps, part) = self.next_order();
        // At h = h_n the amplitude has no exponential; the phase at cut-off is phi(p).
        let amplitude = ModeAmplitude {
            dispersion: self.dispersion,
            h: width,
            eps,
            side: Side::Outside,
            part,
            curve,
        };
        let mut phase = self.dispersion.action(w, cutoff);
        if let Some(curve) = &self.curve {
            phase += curve.phase(z);
        }
        let per_p = amplitude.value(z) / (measure * cosine);
        (per_p, I * phase / self.eps - I * p * width)
    }

    /// Range (from cut-off) and position where the ray of the scaled momentum `p` starts.
    pub(super) fn ray_start(&self, p: f64) -> (f64, f64) {
        let w = Complex64::new(p.asinh(), 0.0);
        let width = self.dispersion.width(w);
        let position = width + self.dispersion.width_slope(w, width) * p;
        (self.place(width).r.re, position.re)
    }

    /// Whether the mode is even in `x`.
    pub(super) fn is_even(&self) -> bool {
        self.even
    }

    /// Range from cut-off where the width `u` has been lost, by the caller's own polynomial, and its derivative.
    pub(super) fn range_lost(&self, u: f64) -> (Complex64, Complex64) {
        let one = Complex64::new(1.0, 0.0);
        self.curve.as_ref().map_or((one * u, one), |curve| curve.range(u))
    }

    /// Density inside over outside.
    pub fn density_ratio(&self) -> f64 {
        self.dispersion.m
    }

    /// The small parameter.
    pub fn eps(&self) -> Complex64 {
        self.eps
    }
}

type ModeIntegral = Integral<ModePhase, ModeAmplitude>;

impl ModeIntegral {
    /// The logarithm alone, on the two halves of the contour: it is singular at `p = 0`.
    fn halves(&self) -> [ModeIntegral; 2] {
        let contour = self.contour();
        let points = contour.points();
        let (zero, cut) = (Complex64::new(0.0, 0.0), points.len() - 1);
        let before = points[..cut].iter().copied().chain([zero]);
        let after = [zero, points[cut]];
        [
            Contour::new(before, contour.start(), Termination::Finite),
            Contour::new(after, Termination::Finite, contour.end()),
        ]
        .map(|contour| self.part(Part::Logarithm, contour))
    }

    /// With another part of the next order on another contour.
    fn part(&self, part: Part, contour: Contour) -> ModeIntegral {
        let amplitude = ModeAmplitude { part, ..self.amplitude_ref().clone() };
        Integral::new(self.phase().clone(), contour).amplitude(amplitude)
    }
}

/// The field at one point as an integral of the crate, `psi = prefactor * I(k)`.
#[derive(Clone, Debug)]
pub struct UniformField {
    integral: ModeIntegral,
    /// The logarithm of the next order on a curved profile, up to `p = 0` and from there on.
    logarithm: Option<[ModeIntegral; 2]>,
    wavenumber: f64,
    prefactor: Complex64,
    neglected: f64,
}

impl UniformField {
    /// The integral, to be planned or integrated at [`wavenumber`](Self::wavenumber) (its amplitude
    /// holds `eps` at the next order).
    pub fn integral(&self) -> &ModeIntegral {
        &self.integral
    }

    /// Its large parameter, `1/|eps|`.
    pub fn wavenumber(&self) -> f64 {
        self.wavenumber
    }

    /// What the integral is multiplied with to give the field.
    pub fn prefactor(&self) -> Complex64 {
        self.prefactor
    }

    /// The field by uniform expansions at the merging saddles.
    ///
    /// The error figure is that of the integral (and of what is neglected at the Brewster
    /// parameter), not of the formula in `eps`. Cost: a plan, some 4 ms on a straight profile by the one-way equation;
    /// otherwise 0.1 to 0.5 s, since the phase has no closed form where the search for saddles goes.
    ///
    /// Errors: as [`Integral::plan`] and [`crate::Plan::at`]. Refused often for `m > 1`, where the
    /// descent from the saddles runs into the Brewster point: use [`quadrature`](Self::quadrature) then. Higher modes have a third saddle near (at `w = -2 i
    /// m/((n - 1/2) pi)` at cut-off); the three are treated together.
    pub fn evaluate(&self) -> Result<Estimate, Error> {
        let k = self.wavenumber;
        if self.logarithm.is_none() {
            return Ok(self.finish(self.integral.plan_for(k..=k)?.at(k)?));
        }
        // The part of the next order that is tabulated is small: a few digits by quadrature are enough.
        let contour = self.integral.contour();
        let local = self.integral.part(Part::LocalSlope, contour.clone());
        let local = local.plan_for(k..=k)?.at(k)?;
        let rest = self.integral.part(Part::Rest, contour.clone()).quadrature(k, 1e-7)?;
        let (value, error) = (local.scaled + rest.scaled, error_of(&local) + error_of(&rest));
        self.with_logarithm(Estimate::new(value, error, local.orders, local.form), 1e-7)
    }

    /// Adds the integral of the logarithm, if there is one, to that of the rest; and the prefactor.
    fn with_logarithm(&self, rest: Estimate, tolerance: f64) -> Result<Estimate, Error> {
        let (mut value, mut error) = (rest.scaled, error_of(&rest));
        for half in self.logarithm.iter().flatten() {
            // It is small: some digits less are enough, and cheap beside a singular end.
            let half = half.quadrature(self.wavenumber, (1e2 * tolerance).clamp(1e-6, 1e-4))?;
            value = value + half.scaled;
            error = error + error_of(&half);
        }
        Ok(self.finish(Estimate::new(value, error, rest.orders, rest.form)))
    }

    /// The field by quadrature along the contour, to a relative `tolerance`.
    ///
    /// Right for every mode, density ratio and `eps` that was tried, with losses too. Cost: 0.1 to
    /// 0.7 ms, flat in `1/eps`.
    ///
    /// Errors: as [`Integral::quadrature`].
    ///
    /// ```
    /// use merging_saddles::guide::SlopingGuide;
    /// // At cut-off |psi| = eps^(1/6) |U(0, 0)| + O(eps^(1/2)) at the boundary (derived relation),
    /// // |U(0, 0)| = sqrt(2/pi) 2^(-2/3) 2 pi 0.2588194037928068 (Ai'(0): DLMF 9.2.4).
    /// let eps = 1e-9;
    /// let guide = SlopingGuide::new(1, 1.0, eps)?;
    /// let psi = guide.outside(guide.cutoff_width(), 0.0)?.quadrature(1e-10)?.value;
    /// assert!((psi.norm() / eps.powf(1.0 / 6.0) - 0.817391).abs() < 1e-3);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn quadrature(&self, tolerance: f64) -> Result<Estimate, Error> {
        // A descent that is to go deeper than the ends of the contour finds no way down from there.
        let tolerance = tolerance.max((400.0 * self.neglected).min(1e-3));
        self.with_logarithm(self.integral.quadrature(self.wavenumber, tolerance)?, tolerance)
    }

    /// Multiplies by the prefactor and adds what is neglected to the error.
    fn finish(&self, integral: Estimate) -> Estimate {
        let field = times(integral, Scaled::from(self.prefactor));
        if self.neglected == 0.0 {
            return field;
        }
        let neglected = Complex64::new(self.neglected * self.prefactor.norm(), 0.0);
        let error = error_of(&field) + Scaled::from(neglected);
        Estimate::new(field.scaled, error, field.orders, field.form)
    }

    /// Size of the exponential where the contour is cut short of the Brewster parameter, relative
    /// to the mode; 0 for `m <= 1`.
    pub fn neglected(&self) -> f64 {
        self.neglected
    }
}

/// An estimate multiplied by an exact factor.
pub(super) fn times(estimate: Estimate, factor: Scaled) -> Estimate {
    let size = Scaled::new(Complex64::new(factor.mantissa.norm(), 0.0), factor.exponent);
    let error = error_of(&estimate) * size;
    Estimate::new(estimate.scaled * factor, error, estimate.orders, estimate.form)
}

/// The error figure with its exponent apart.
fn error_of(estimate: &Estimate) -> Scaled {
    let value = estimate.scaled;
    if value.is_zero() || !estimate.relative_error.is_finite() {
        return Scaled::from(Complex64::new(estimate.error, 0.0));
    }
    let mantissa = estimate.relative_error * value.mantissa.norm();
    Scaled::new(Complex64::new(mantissa, 0.0), value.exponent)
}
