//! The dispersion relation of a two-layer guide, its phase and its amplitudes, in the variable `w`.
//!
//! With `p = sinh w`, `kappa = cosh w` (so `kappa^2 = 1 + p^2` and `arsinh p = w`) the width at which
//! mode `n` has the local parameter `p` is
//!
//! ```text
//! h_n = ((n - 1/2) pi + alpha)/kappa,    alpha = arctan(-i m p/kappa) = -i beta,
//! beta = artanh(m tanh w),               D = 1 + (1 - m^2) p^2
//! integral of 2 p h_n dp from 0 = 2 kappa ((n - 1/2) pi - i beta) - (2n - 1) pi + 2 i m S,
//! S = arctan(sqrt(1 - m^2) p)/sqrt(1 - m^2)
//! ```
//!
//! (checked by differentiation: `d alpha/dp = -i m/(kappa D)`, `dS/dp = 1/D`). The bound mode is
//! `w = i omega`, `0 < omega < pi/2`; the radiation is `w > 0`.
//!
//! Singularities and branches. For `m = 1` beta is `w`, S is `p`, and the phase is entire. For
//! `m < 1` beta and S have logarithms where `D = 0`, at `w = i pi/2 +- artanh m`; their leading
//! jumps cancel in the phase. For `m > 1` they lie at the real `w = +-artanh(1/m)`, the Brewster
//! condition. The amplitude outside has besides an essential singularity at `i pi/2`, where `h_n` has
//! a pole. The contour comes from the valley at `-infinity + 3 pi i/4`, crosses the line
//! `Im w = pi/2` to the left of `i pi/2`, and ends in the valley at `+infinity + pi i/4`, or for
//! `m > 1` before the Brewster point.
//!
//! On which side of `w_1 = i pi/2 - artanh m` it crosses matters to `exp(-Im f(w_1)/eps)` only,
//! `Im f(w_1) = 2 n pi m/sqrt(1 - m^2)` at the boundary: nothing. But the steepest descents from the saddles should
//! meet no cut. They cross that line about 0.9 left of `i pi/2`, so:
//!
//! - `m < 0.7`: to the left of `w_1`. Cut from `w_1` to the right along `Im w = pi/2`: beta is the
//!   principal `artanh(m tanh w)`; above the line S is the principal value less
//!   `pi/sqrt(1 - m^2)` and the root of D its negative.
//! - `m >= 0.7`: between `w_1` and `i pi/2`. Cuts on `Im w = pi/2`, `|Re w| > artanh m` (real axis,
//!   `|Re w| > artanh(1/m)` for `m > 1`): those of the principal S and root of D; beta is
//!   `artanh(m tanh w)` below `Im w = pi/4` and `artanh(coth(w)/m) + i pi/2` above, the same
//!   function there, and so on with the period `i pi`.
//!
//! Modes that are even in `x` have `(n - 1) pi` in place of `(n - 1/2) pi` and a cosine for the sine.
//!
//! Source: derived here.

use super::curve::Curve;
use super::second::log_above;
use super::table::Gate;
use super::wide::{Spot, WideAngle};
use crate::Complex64;
use crate::integral::{Amplitude, Phase};
use std::f64::consts::{FRAC_PI_2, FRAC_PI_4, PI};
use std::sync::Arc;

const I: Complex64 = Complex64::new(0.0, 1.0);

/// Density ratio below which the contour passes to the left of `i pi/2 - artanh m`.
const PASSES_LEFT: f64 = 0.7;

/// Mode number and density ratio.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Dispersion {
    /// `(n - 1/2) pi`, or `(n - 1) pi` for a mode that is even in `x`: the width at cut-off.
    pub cutoff: f64,
    /// Density inside over density outside.
    pub m: f64,
}

impl Dispersion {
    pub(super) fn new(mode: u32, m: f64) -> Self {
        Dispersion { cutoff: (f64::from(mode) - 0.5) * PI, m }
    }

    /// The same for modes that are even in `x`.
    pub(super) fn even(mode: u32, m: f64) -> Self {
        Dispersion { cutoff: (f64::from(mode) - 1.0) * PI, m }
    }

    /// How far to the left of `i pi/2` the contour crosses the line `Im w = pi/2`.
    pub(super) fn gate(&self) -> f64 {
        if self.passes_left() {
            self.m.atanh() + 0.35
        } else if self.m < 1.0 {
            (0.5 * self.m.atanh()).min(0.5)
        } else {
            0.5
        }
    }

    /// How straight lines from 0 get beyond the line `Im w = pi/2`.
    pub(super) fn way_round(&self) -> Gate {
        Gate { by: Complex64::new(-self.gate(), FRAC_PI_2), wide: None }
    }

    /// `beta(w)`, continuous along the contour; `beta(w + i pi) = beta(w) + i pi`.
    fn beta(&self, w: Complex64) -> Complex64 {
        if self.m == 1.0 {
            return w;
        }
        if self.passes_left() {
            return (w.tanh() * self.m).atanh();
        }
        let sheet = I * ((w.im / PI).round() * PI);
        let below = w - sheet;
        let slope = below.tanh() * self.m;
        sheet
            + if below.im.abs() < FRAC_PI_4 {
                slope.atanh()
            } else {
                slope.inv().atanh() + I * FRAC_PI_2.copysign(below.im)
            }
    }

    /// Whether the contour passes to the left of `i pi/2 - artanh m`.
    pub(super) fn passes_left(&self) -> bool {
        self.m < PASSES_LEFT
    }

    /// Whether `w` lies beyond the cut of the contour that passes left.
    fn beyond(&self, w: Complex64) -> bool {
        self.passes_left() && w.im > FRAC_PI_2
    }

    /// `S` on the contour's sheet.
    fn s(&self, w: Complex64) -> Complex64 {
        let s = self.s_principal(w.sinh());
        if self.beyond(w) { s - PI / (1.0 - self.m * self.m).sqrt() } else { s }
    }

    /// The square root of `D` on the contour's sheet.
    fn root_density(&self, w: Complex64) -> Complex64 {
        let root = self.density(w.sinh()).sqrt();
        if self.beyond(w) { -root } else { root }
    }

    /// `S` from `p`, principal.
    fn s_principal(&self, p: Complex64) -> Complex64 {
        let square = 1.0 - self.m * self.m;
        let root = square.abs().sqrt();
        if (p * root).norm() < 1e-4 {
            p * (1.0 - p * p * (square / 3.0))
        } else if square > 0.0 {
            (p * root).atan() / root
        } else {
            (p * root).atanh() / root
        }
    }

    /// `D` from `p`.
    pub(super) fn density(&self, p: Complex64) -> Complex64 {
        1.0 + p * p * (1.0 - self.m * self.m)
    }

    /// The width `h_n` at which the mode has the parameter `w`.
    pub(super) fn width(&self, w: Complex64) -> Complex64 {
        (self.cutoff - I * self.beta(w)) / w.cosh()
    }

    /// `d h_n/dp` from `w` and `h_n(w)`.
    pub(super) fn width_slope(&self, w: Complex64, width: Complex64) -> Complex64 {
        let (p, kappa) = (w.sinh(), w.cosh());
        -(I * self.m / self.density(p) + p * width) / (kappa * kappa)
    }

    /// `p^2 h - integral of 2 p h_n dp`.
    pub(super) fn action(&self, w: Complex64, h: Complex64) -> Complex64 {
        let half = (w * 0.5).sinh();
        let q = half * half;
        // p^2 h - (2n - 1) pi (kappa - 1), without the cancellation near cut-off.
        let even = q * 4.0 * ((h - self.cutoff) + h * q);
        let odd =
            if self.m == 1.0 { moment(w) } else { w.cosh() * self.beta(w) - self.s(w) * self.m };
        even + I * odd * 2.0
    }
}

/// `w cosh w - sinh w`, by its series where the two cancel.
fn moment(w: Complex64) -> Complex64 {
    if w.norm() > 0.7 {
        return w * w.cosh() - w.sinh();
    }
    // sum of 2 k w^(2k+1)/(2k+1)!
    let q = w * w;
    let (mut term, mut sum) = (w, Complex64::new(0.0, 0.0));
    for k in 1..=9 {
        let k = f64::from(k);
        term *= q / (2.0 * k * (2.0 * k + 1.0));
        sum += term * (2.0 * k);
    }
    sum
}

/// The phase of the uniform field, `f = turn (phi(p) - p^2 r + p d)` as a function of `z = w`; in the
/// wide-angle form with `P` for `p^2`, of `z = theta`.
#[derive(Clone, Debug, PartialEq)]
pub struct ModePhase {
    pub(super) dispersion: Dispersion,
    /// Width of the guide at this range.
    pub(super) h: Complex64,
    /// `eps (x - h)`: zero inside.
    pub(super) d: Complex64,
    /// `|eps|/eps`, so that the wavenumber `1/|eps|` is real.
    pub(super) turn: Complex64,
    /// The bend of the profile and the wide-angle form, if it has either.
    pub(super) curve: Option<Arc<Curve>>,
    /// Range less `h_c - h`: zero on a straight profile.
    pub(super) lag: Complex64,
}

impl Phase for ModePhase {
    fn value_and_derivative(&self, z: Complex64) -> (Complex64, Complex64) {
        let spot = self.wide().spot(z);
        (self.height(z, &spot) * self.turn, self.slope(z, &spot) * self.turn)
    }

    fn value(&self, z: Complex64) -> Complex64 {
        self.height(z, &self.wide().spot(z)) * self.turn
    }

    fn derivative(&self, z: Complex64) -> Complex64 {
        self.slope(z, &self.wide().spot(z)) * self.turn
    }

    fn jet(&self, z: Complex64) -> [Complex64; 3] {
        let spot = self.wide().spot(z);
        let Spot { p, kappa, w, .. } = spot;
        let Dispersion { cutoff, m } = self.dispersion;
        let second = if let Some(curve) = self.on_wide_angle() {
            // d(P' (T - r) + d)/dz, P' = 2 p measure
            let width = self.dispersion.width(w);
            let (g, slope) = curve.excess(cutoff - width);
            let narrowing = self.dispersion.width_slope(w, width) * spot.slope;
            let behind = self.h - width + g - self.lag;
            spot.turning * behind - p * spot.measure * (slope + 1.0) * narrowing * 2.0
                + spot.bend * self.d
        } else {
            let excess = self.h * kappa - cutoff + I * self.dispersion.beta(w);
            let mut second = kappa * excess * 2.0
                + p * 2.0 * (self.h * p + I * m / self.dispersion.density(p))
                + p * self.d;
            if let Some(curve) = &self.curve {
                let width = self.dispersion.width(w);
                let (g, slope) = curve.excess(cutoff - width);
                let turning = self.dispersion.width_slope(w, width) * kappa;
                second += (p * p + kappa * kappa) * (g - self.lag) * 2.0;
                second -= p * kappa * slope * turning * 2.0;
            }
            second
        };
        [self.height(z, &spot) * self.turn, self.slope(z, &spot) * self.turn, second * self.turn]
    }

    fn noise_scale(&self, z: Complex64) -> f64 {
        let Spot { p, kappa, w, cosine, .. } = self.wide().spot(z);
        let q = (w * 0.5).sinh().norm_sqr();
        let Dispersion { cutoff, m } = self.dispersion;
        let even = 4.0 * q * ((self.h - cutoff).norm() + self.h.norm() * q);
        let odd = if m == 1.0 && w.norm() < 0.7 {
            0.0
        } else {
            2.0 * (kappa * self.dispersion.beta(w)).norm() + 2.0 * m * self.dispersion.s(w).norm()
        };
        let bend = self.curve.as_ref().map_or(0.0, |c| {
            let beyond = c.wide().excess_at(cosine) * self.range();
            c.phase(z).norm() + (p * p * self.lag).norm() + beyond.norm()
        });
        even + odd + (p * self.d).norm() + bend
    }
}

impl ModePhase {
    /// The wide-angle form, perhaps that of the one-way equation.
    fn wide(&self) -> WideAngle {
        self.curve.as_ref().map(|c| c.wide()).unwrap_or_default()
    }

    pub(super) fn on_wide_angle(&self) -> Option<&Curve> {
        self.curve.as_deref().filter(|curve| curve.wide().is_on())
    }

    /// Whether the bend of the profile counts for nearly as much as the straight one.
    pub(super) fn bend_rules(&self, z: Complex64) -> bool {
        let u = self.dispersion.cutoff - self.dispersion.width(self.wide().spot(z).w);
        self.curve.as_ref().is_some_and(|c| c.excess(u).0.norm() > 0.9 * u.norm())
    }

    /// Range from cut-off.
    fn range(&self) -> Complex64 {
        self.dispersion.cutoff - self.h + self.lag
    }

    /// `f` without the turn.
    fn height(&self, z: Complex64, spot: &Spot) -> Complex64 {
        let Spot { p, w, cosine, .. } = *spot;
        let mut value = self.dispersion.action(w, self.h) + p * self.d;
        if let Some(curve) = &self.curve {
            value += curve.phase(z) - p * p * self.lag;
            value -= curve.wide().excess_at(cosine) * self.range();
        }
        value
    }

    /// `df/dz` without the turn.
    fn slope(&self, z: Complex64, spot: &Spot) -> Complex64 {
        let Spot { p, kappa, w, .. } = *spot;
        // kappa (h - h_n), without its cancellation.
        let above = self.h * kappa - self.dispersion.cutoff + I * self.dispersion.beta(w);
        if let Some(curve) = self.on_wide_angle() {
            let g = curve.excess(self.dispersion.cutoff - self.dispersion.width(w)).0;
            return p * 2.0 * spot.measure * (above / kappa + g - self.lag) + spot.slope * self.d;
        }
        let bend = match &self.curve {
            Some(curve) => curve.rate(z) - p * kappa * self.lag * 2.0,
            None => Complex64::new(0.0, 0.0),
        };
        p * 2.0 * above + bend + kappa * self.d
    }
}

/// The amplitude of the uniform field with respect to `dz`, inside or outside.
#[derive(Clone, Debug, PartialEq)]
pub struct ModeAmplitude {
    pub(super) dispersion: Dispersion,
    /// Width of the guide at this range.
    pub(super) h: Complex64,
    /// The small parameter where the next order is wanted, else zero.
    pub(super) eps: Complex64,
    /// Where the field is wanted.
    pub(super) side: Side,
    /// What of the next order is in it.
    pub(super) part: Part,
    /// The bend of the profile and the wide-angle form, if it has either.
    pub(super) curve: Option<Arc<Curve>>,
}

/// What of the next order the amplitude on a curved profile has.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Part {
    /// All but the logarithm at cut-off.
    Smooth,
    /// The logarithm alone, without the leading term.
    Logarithm,
    /// That of a straight profile with the local slope.
    LocalSlope,
    /// What `Smooth` has beyond `LocalSlope`, without the leading term.
    Rest,
}

/// Inside at `x`, or outside (at the distance that the phase holds).
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Side {
    /// `sin(kappa x)`, or `cos(kappa x)` for a mode that is even in `x`.
    Inside {
        x: Complex64,
        even: bool,
    },
    /// The derivative of that with respect to `x`.
    InsideSlope {
        x: Complex64,
        even: bool,
    },
    /// The derivative along the range, over `i k`, the carrier included: the field itself in the one-way equation.
    InsideFlow {
        x: Complex64,
        even: bool,
    },
    Outside,
    /// The derivative along the range outside.
    OutsideFlow,
    /// The derivative with respect to the distance.
    OutsideSlope,
}

impl Amplitude for ModeAmplitude {
    fn value(&self, z: Complex64) -> Complex64 {
        let wide = self.curve.as_ref().map(|c| c.wide()).unwrap_or_default();
        let Spot { p, kappa, w, cosine, measure, .. } = wide.spot(z);
        let m = self.dispersion.m;
        let d = self.dispersion.density(p);
        let (within, bent) = (self.inside(), self.curve.as_ref().filter(|c| c.bent()));
        let width =
            if within.is_none() || bent.is_some() { self.dispersion.width(w) } else { self.h };
        let one = Complex64::new(1.0, 0.0);
        let (root, slope) =
            bent.map_or((one, one), |curve| curve.slope(self.dispersion.cutoff - width));
        let local = self.eps * slope;
        // p D^(-1/2) sin(kappa x)/sin(kappa h_n) dp, sin(kappa h_n) = kappa/sqrt(D) up to sign.
        let mut factor = self.inside_factor(w, p, d, local, cosine);
        if within.is_none()
            && self.eps != Complex64::new(0.0, 0.0)
            && !matches!(self.part, Part::Logarithm | Part::Rest)
        {
            let bend = self.dispersion.width_slope(w, width) * I * 0.25;
            factor += local * cosine * ((1.0 - m) / (d * 2.0) + bend);
        }
        factor *= root;
        if matches!(self.side, Side::InsideFlow { .. } | Side::OutsideFlow) {
            factor *= cosine;
        }
        if within.is_some() {
            factor *= measure / kappa;
        }
        match self.side {
            Side::Inside { x, even } | Side::InsideFlow { x, even } => {
                factor * if even { (kappa * x).cos() } else { (kappa * x).sin() }
            }
            Side::InsideSlope { x, even } => {
                factor * kappa * if even { -(kappa * x).sin() } else { (kappa * x).cos() }
            }
            Side::Outside | Side::OutsideFlow | Side::OutsideSlope => {
                if self.side == Side::OutsideSlope {
                    factor *= I * p;
                }
                factor * (I * p * (self.h - width)).exp() * measure
                    / self.dispersion.root_density(w)
            }
        }
    }
}

impl ModeAmplitude {
    /// The position, if the field is wanted inside.
    fn inside(&self) -> Option<Complex64> {
        match self.side {
            Side::Inside { x, .. } | Side::InsideSlope { x, .. } | Side::InsideFlow { x, .. } => {
                Some(x)
            }
            Side::Outside | Side::OutsideSlope | Side::OutsideFlow => None,
        }
    }

    /// `p (1 + eps beta)`, or the part of it that is wanted; `local` is `eps` with the local slope.
    fn inside_factor(
        &self,
        w: Complex64,
        p: Complex64,
        density: Complex64,
        local: Complex64,
        cosine: Complex64,
    ) -> Complex64 {
        let zero = Complex64::new(0.0, 0.0);
        if self.eps == zero {
            return p;
        }
        let straight = local * self.dispersion.m / (density * 12.0);
        let (mut whole, mut bent) = (p + straight * cosine, None);
        if let Some(curve) = &self.curve {
            // The angle of the boundary against its tangent; the integral of 2 p h_n.
            let action = self.dispersion.action(w, Complex64::new(0.0, 0.0));
            whole += local * curve.wide().delta * I * p * action / 12.0;
            bent = Some(curve).filter(|c| c.bent());
        }
        let Some(curve) = bent else { return whole };
        match self.part {
            Part::LocalSlope => whole,
            Part::Smooth => whole + self.eps * curve.smooth_beta(w) - straight,
            Part::Rest => self.eps * curve.smooth_beta(w) - straight,
            _ if p == zero => zero,
            _ => self.eps * curve.logarithm() * p * log_above(p),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Largest change of phase, amplitude and derivative over what their slope explains, along a
    /// path: a jump shows as a number that does not shrink with the step.
    fn jump(dispersion: Dispersion, points: &[Complex64]) -> f64 {
        let one = Complex64::new(1.0, 0.0);
        let h = one * dispersion.cutoff;
        let lag = Complex64::new(0.0, 0.0);
        let phase = ModePhase { dispersion, h, d: one * 0.1, turn: one, curve: None, lag };
        let eps = one * 0.1;
        let amplitude = ModeAmplitude {
            dispersion,
            h,
            eps,
            side: Side::Outside,
            part: Part::Smooth,
            curve: None,
        };
        let mut worst = 0.0f64;
        for ends in points.windows(2) {
            let at = |j: i32| ends[0] + (ends[1] - ends[0]) * (f64::from(j) / 4000.0);
            for j in 0..4000 {
                let (a, b) = (at(j), at(j + 1));
                let [fa, da, _] = phase.jet(a);
                let [fb, db, _] = phase.jet(b);
                // The trapezoidal rule for f, plain continuity for g.
                worst = worst.max((fb - fa - (da + db) * 0.5 * (b - a)).norm());
                let (ga, gb) = (amplitude.value(a), amplitude.value(b));
                worst = worst.max(0.01 * (gb - ga).norm() / ga.norm());
            }
        }
        worst
    }

    #[test]
    fn no_branch_is_crossed_on_the_contour() {
        let c = Complex64::new;
        for m in [0.3f64, 0.55, 0.69, 0.71, 0.9, 1.0, 1.3] {
            let gate = Dispersion::new(1, m).gate();
            let right = if m > 1.0 { c(0.9 * m.recip().atanh(), 0.0) } else { c(1.5, 0.7) };
            let contour = [c(-1.9, 2.356), c(-gate, FRAC_PI_2), c(0.1, 0.3), right];
            for n in [1, 3] {
                let seen = jump(Dispersion::new(n, m), &contour);
                assert!(seen < 2e-3, "m {m} n {n}: {seen}");
            }
        }
    }

    #[test]
    fn jet_is_the_derivative() {
        for (m, delta) in
            [(0.55, 0.0), (0.55, 0.28), (0.8, 0.0), (1.0, 0.0), (1.0, 1.2), (1.3, 0.2)]
        {
            let h = Complex64::new(1.4, -0.02);
            let turn = Complex64::from_polar(1.0, -0.03);
            let d = Complex64::new(0.3, 0.01);
            let dispersion = Dispersion::new(2, m);
            let higher = [Complex64::new(0.2, 0.01), Complex64::new(-0.05, 0.0)];
            let wide = WideAngle::new(Complex64::new(delta, -0.01 * delta));
            let curve = Some(Arc::new(Curve::new(dispersion, &higher, wide)));
            let lag = Complex64::new(0.1, 0.02);
            let phase = ModePhase { dispersion, h, d, turn, curve, lag };
            // In the wide-angle form a wave that runs back, otherwise one beyond i pi/2.
            let far =
                if delta > 0.0 { Complex64::new(1.9, 0.3) } else { Complex64::new(-1.6, 2.2) };
            for w in [Complex64::new(0.1, 0.2), Complex64::new(-0.7, 1.2), far] {
                let [_, df, ddf] = phase.jet(w);
                let step = 1e-5;
                let ahead = phase.jet(w + step);
                let behind = phase.jet(w - step);
                assert!(
                    ((ahead[0] - behind[0]) / (2.0 * step) - df).norm() < 1e-7 * (1.0 + df.norm())
                );
                assert!(
                    ((ahead[1] - behind[1]) / (2.0 * step) - ddf).norm()
                        < 1e-7 * (1.0 + ddf.norm())
                );
            }
        }
    }
}
