//! The revival of a released mode at the cut-offs of lower modes.
//!
//! After mode `n` has gone, the field near the boundary is nearly static, `psi ~ B (x - h)`,
//! `|B| = (eps/sqrt 2) |r - r_n|^(-3/2)` for unit energy, with unit slope at the cut-off `r_n` of mode `n`: the
//! saddle `p = 0` of the uniform field, where the density ratio and the parity play no part. When a lower mode reaches
//! its own cut-off the boundary turns resonant and the field inside rises again, from order `eps` to `eps^(2/3)`:
//! in the layer of the lower mode by the factor
//!
//! ```text
//! R(t, y) = y + 2 i integral from 0 to infinity of p exp(i p y - i p^2 t - (2/3) p^3) dp
//! ```
//!
//! times `|B| L`, `L = (m/(eps sigma))^(1/3)` with the slope `sigma` at the cut-off of the lower mode. It is
//! an integral with two saddles and an end point beside them (an incomplete Airy function, DLMF 9.5.4 for the
//! complete one), `R(t, 0) -> 1/t` for `t -> -infinity`.
//!
//! Source: derived here; checked against the differential equation in `tests/guide_revival.rs`.

use super::SlopingGuide;
use crate::integral::{Amplitude, Polynomial};
use crate::{Complex64, Contour, Error, Estimate, Integral, Scaled};
use std::f64::consts::{PI, SQRT_2};

const I: Complex64 = Complex64::new(0.0, 1.0);

/// `R(t, y)`: the static field and its response at the cut-off of a lower mode.
///
/// `t` is complex where the media absorb.
///
/// Accuracy: relative 1e-10 (with `y` taken off), with an error figure. Cost: one quadrature.
///
/// Errors: [`Error::Domain`] for arguments that are not finite, or `y` below 0; what
/// [`Integral::quadrature`] refuses.
///
/// ```
/// use merging_saddles::guide::revival;
/// // R(0, 0) = 2 i integral of p exp(-(2/3) p^3) dp = (2 i/3) (3/2)^(2/3) Gamma(2/3) (DLMF 5.9.1 with
/// // the substitution (2/3) p^3), Gamma(2/3) = 1.354117939426400 (DLMF 5.4).
/// let r = revival(0.0, 0.0)?.value;
/// let exact = 2.0 / 3.0 * 1.5f64.powf(2.0 / 3.0) * 1.3541179394264;
/// assert!((r.im - exact).abs() < 1e-12 && r.re.abs() < 1e-12);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn revival(t: impl Into<Complex64>, y: f64) -> Result<Estimate, Error> {
    let t = t.into();
    if !(t.re.is_finite() && t.im.is_finite()) {
        return Err(Error::Domain { what: "t", value: t, remedy: "pass a finite number" });
    }
    Error::require_finite("y", y)?;
    if y < 0.0 {
        return Err(Error::domain("y", y, "count y outwards from the boundary"));
    }
    let (re, zero) = (Complex64::from, Complex64::new(0.0, 0.0));
    let phase = Polynomial(vec![zero, re(y), -t, I * (2.0 / 3.0)]);
    // The cube wins beyond the saddles.
    let end = 2.0 + t.norm() + y.sqrt();
    let contour = Contour::starting_at([zero, re(end)]);
    let integral = Integral::new(phase, contour).amplitude(Momentum).quadrature(1.0, 1e-10)?;
    let value = integral.scaled * (I * 2.0) + Scaled::from(re(y));
    let error = Scaled::from(re(2.0 * integral.error));
    Ok(Estimate::new(value, error, integral.orders, integral.form))
}

/// The amplitude `p`.
struct Momentum;

impl Amplitude for Momentum {
    fn value(&self, p: Complex64) -> Complex64 {
        p
    }
}

impl SlopingGuide {
    /// Amplitude inside, for unit energy and without the carrier, to which the released mode revives at the cut-off
    /// of mode `lower` of the same parity, where the guide has the width `h` (near that mode's cut-off):
    /// `|B L R(t, 0)|`. The field there is that times the sine or cosine of the lower mode.
    ///
    /// Any density ratio, both parities, curved profiles (with the range and slope of the profile at the lower
    /// cut-off, so its coefficients must hold as far as that), and losses.
    ///
    /// Leading order: within 15 % of the wave equation at `eps = 0.01`.
    ///
    /// Errors: [`Error::Domain`] for a mode that is not lower than this one, an even mode 1, which is never cut
    /// off, and a profile that has not fallen to the lower cut-off or does not fall there.
    ///
    /// ```
    /// use merging_saddles::guide::SlopingGuide;
    /// let guide = SlopingGuide::new(2, 1.0, 0.01)?;
    /// // eps^(2/3) 2^(-1/2) pi^(-3/2) |R(0, 0)| (derived relation), |R(0, 0)| = 1.18295.
    /// let seen = guide.revival(1, 0.5 * std::f64::consts::PI)?;
    /// let expected = 0.01f64.powf(2.0 / 3.0) / 2f64.sqrt() * std::f64::consts::PI.powf(-1.5) * 1.18295;
    /// assert!((seen / expected - 1.0).abs() < 1e-4);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn revival(&self, lower: u32, h: f64) -> Result<f64, Error> {
        Error::require_positive("width h", h)?;
        let (cutoff, m, eps) = (self.cutoff_width(), self.density_ratio(), self.eps());
        let least = if self.is_even() { 2 } else { 1 };
        let width = (f64::from(lower) - if self.is_even() { 1.0 } else { 0.5 }) * PI;
        if lower < least || width >= cutoff {
            let remedy = "give the number of a lower mode that has a cut-off, from 1 on (even modes: from 2)";
            return Err(Error::domain("lower mode", f64::from(lower), remedy));
        }
        // Range and slope at the lower cut-off, and the range now.
        let (there, flatness) = self.range_lost(cutoff - width);
        let (here, _) = self.range_lost(cutoff - h);
        if !(there.re > 0.0 && flatness.re > 0.0) {
            let remedy = "give a profile that goes on falling to the cut-off of the lower mode";
            return Err(Error::domain("range of the lower cut-off", there.re, remedy));
        }
        let length = (flatness * m / eps).powf(1.0 / 3.0);
        let t = (here - there) / (eps * length * length);
        let static_slope = eps * there.powf(-1.5) / SQRT_2;
        Ok((static_slope * length * revival(t, 0.0)?.value).norm())
    }
}
