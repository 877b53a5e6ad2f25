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
//! `m < 1` beta and S have logarithms where `D = 0`, at `w = i pi/2 +- artanh m` (the jumps of the
//! two cancel there in the phase to leading order); for `m > 1` at the real `w = +-artanh(1/m)`,
//! the Brewster condition. The contour comes from the valley at `-infinity + 3 pi i/4`, crosses the
//! line `Im w = pi/2` between `i pi/2 - artanh m` and `i pi/2`, and stays above the positive real
//! axis. So the cuts lie on `Im w = pi/2`, `|Re w| > artanh m`, or on the real axis,
//! `|Re w| > artanh(1/m)`: the principal arctan (artanh) and root of D have just these; beta is
//! `artanh(m tanh w)` below `Im w = pi/4` and `artanh(coth(w)/m) + i pi/2` above, the same function
//! there, and so on with the period `i pi`. The amplitude outside has besides an essential singularity at `i pi/2` (`h_n` has a
//! pole), to the right of the contour's left arm.
//!
//! Source: derived here.

use crate::Complex64;
use crate::integral::{Amplitude, Phase};
use std::f64::consts::{FRAC_PI_2, FRAC_PI_4, PI};

const I: Complex64 = Complex64::new(0.0, 1.0);

/// Mode number and density ratio.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Dispersion {
    /// `(n - 1/2) pi`, the width at cut-off.
    pub cutoff: f64,
    /// Density inside over density outside.
    pub m: f64,
}

impl Dispersion {
    pub(super) fn new(mode: u32, m: f64) -> Self {
        Dispersion { cutoff: (f64::from(mode) - 0.5) * PI, m }
    }

    /// `beta(w)`, continuous along the contour; `beta(w + i pi) = beta(w) + i pi`.
    fn beta(&self, w: Complex64) -> Complex64 {
        if self.m == 1.0 {
            return w;
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

    /// `S` from `p`.
    fn s(&self, p: Complex64) -> Complex64 {
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
        let odd = if self.m == 1.0 {
            moment(w)
        } else {
            w.cosh() * self.beta(w) - self.s(w.sinh()) * self.m
        };
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

/// The phase of the uniform field, `f = turn (phi(p) - p^2 r + p d)` as a function of `w`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ModePhase {
    pub(super) dispersion: Dispersion,
    /// Width of the guide at this range.
    pub(super) h: Complex64,
    /// `eps (x - h)`: zero inside.
    pub(super) d: Complex64,
    /// `|eps|/eps`, so that the wavenumber `1/|eps|` is real.
    pub(super) turn: Complex64,
}

impl Phase for ModePhase {
    fn value_and_derivative(&self, w: Complex64) -> (Complex64, Complex64) {
        let (p, kappa) = (w.sinh(), w.cosh());
        let value = self.dispersion.action(w, self.h) + p * self.d;
        (value * self.turn, self.slope(p, kappa, self.dispersion.beta(w)) * self.turn)
    }

    fn value(&self, w: Complex64) -> Complex64 {
        (self.dispersion.action(w, self.h) + w.sinh() * self.d) * self.turn
    }

    fn jet(&self, w: Complex64) -> [Complex64; 3] {
        let (p, kappa) = (w.sinh(), w.cosh());
        let beta = self.dispersion.beta(w);
        let Dispersion { cutoff, m } = self.dispersion;
        let value = self.dispersion.action(w, self.h) + p * self.d;
        let excess = self.h * kappa - cutoff + I * beta;
        let second = kappa * excess * 2.0
            + p * 2.0 * (self.h * p + I * m / self.dispersion.density(p))
            + p * self.d;
        [value, self.slope(p, kappa, beta), second].map(|x| x * self.turn)
    }

    fn noise_scale(&self, w: Complex64) -> f64 {
        let p = w.sinh();
        let q = (w * 0.5).sinh().norm_sqr();
        let Dispersion { cutoff, m } = self.dispersion;
        let even = 4.0 * q * ((self.h - cutoff).norm() + self.h.norm() * q);
        let odd = if m == 1.0 && w.norm() < 0.7 {
            0.0
        } else {
            2.0 * (w.cosh() * self.dispersion.beta(w)).norm()
                + 2.0 * m * self.dispersion.s(p).norm()
        };
        even + odd + (p * self.d).norm()
    }
}

impl ModePhase {
    /// `df/dw` without the turn.
    fn slope(&self, p: Complex64, kappa: Complex64, beta: Complex64) -> Complex64 {
        p * 2.0 * (self.h * kappa - self.dispersion.cutoff + I * beta) + kappa * self.d
    }
}

/// The amplitude of the uniform field with respect to `dw`, inside or outside.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ModeAmplitude {
    pub(super) dispersion: Dispersion,
    /// Width of the guide at this range.
    pub(super) h: Complex64,
    /// The small parameter where the next order is wanted, else zero.
    pub(super) eps: Complex64,
    /// Where the field is wanted.
    pub(super) side: Side,
}

/// Inside at `x`, or outside (at the distance that the phase holds).
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Side {
    Inside { x: Complex64 },
    Outside,
}

impl Amplitude for ModeAmplitude {
    fn value(&self, w: Complex64) -> Complex64 {
        let (p, kappa) = (w.sinh(), w.cosh());
        let m = self.dispersion.m;
        let d = self.dispersion.density(p);
        match self.side {
            // p D^(-1/2) sin(kappa x)/sin(kappa h_n) dp, sin(kappa h_n) = kappa/sqrt(D) up to sign.
            Side::Inside { x } => (p + self.eps * m / (d * 12.0)) * (kappa * x).sin(),
            Side::Outside => {
                let width = self.dispersion.width(w);
                let mut factor = p;
                if self.eps != Complex64::new(0.0, 0.0) {
                    let bend = self.dispersion.width_slope(w, width) * I * 0.25;
                    factor += self.eps * ((6.0 - 5.0 * m) / (d * 12.0) + bend);
                }
                factor * (I * p * (self.h - width)).exp() * kappa / d.sqrt()
            }
        }
    }
}
