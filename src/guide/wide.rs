//! The wide-angle form: sound and light at any angle, not only near the axis of range.
//!
//! A wave `exp(i q p x)` across the guide has the wavenumber `(k^2 - q^2 p^2)^(1/2)` along it, for which the one-way
//! equation takes `k - q^2 p^2/(2 k)`. With `delta = (q/k)^2` and the wave's angle `theta`, `sin(theta) = delta^(1/2) p`,
//! everything that the uniform field has from the one-way equation stays if its `p^2` is replaced by
//!
//! ```text
//! P(p) = (2/delta) (1 - cos(theta)) = p^2 + delta p^4/4 + ..,     P' = 2 p/cos(theta)
//! phase      phi'(p) = P' T(p),  f = phi(p) - P r + p d
//! measure    p dp -> P' dp/2 = delta^(-1/2) p d theta
//! next order inside   p -> p + eps sigma [cos(theta) m/(12 D) - (i delta/12) p * integral of P' h_n dp]
//!            outside  besides + eps sigma cos(theta) [(1 - m)/(2 D) + (i/4) h_n'(p)]
//! at the boundary  psi_x + i (eps/2) sigma cos(theta) psi  in place of psi_x + i (eps/2) sigma psi
//! ```
//!
//! Every integrand then solves Helmholtz's equation on both sides, and the flux of energy, not the integral of
//! `|psi|^2`, is kept. The term with `delta/12` is the sloping bed's own angle against its tangent: `eps^2 delta/12` is a third of
//! the slope squared.
//!
//! The variable of integration is `theta` (before cut-off on a curved profile `w`, which leaves more room about `p = i`): in `p`
//! the wave straight across the guide, `theta = pi/2`, is a branch point, to
//! whose other side (waves that run back) the steepest descents lead on. `kappa` and `w = arsinh p` have one at `p = i`, which
//! the contour passes on the left, to beyond `Im w = pi/2`; the cut leads from there to the right and upwards.
//!
//! On curved profiles the next order has `cos(theta)` and the term with `delta` with the local slope: what the slope's own
//! change adds to them (of order `eps delta` times that change) is left out, and `P'` under the integral
//! is taken as `2 p` (an error of order `eps delta^2 p^4/50`).
//!
//! Source: derived here, from the conditions at a boundary of constant slope as a difference equation in `P`; checked to
//! order `eps^2` with series of 40 digits, and against Helmholtz's equation in `tests/guide_helmholtz.rs`.

use crate::Complex64;

const I: Complex64 = Complex64::new(0.0, 1.0);
/// Cosine of 30 degrees.
const HALF_ROOT_3: f64 = 0.866_025_403_784_438_6;

/// `delta` and its root, zero for the one-way equation (the default).
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub(super) struct WideAngle {
    pub(super) delta: Complex64,
    pub(super) root: Complex64,
    /// Whether the variable of integration is the angle, else `w`.
    pub(super) by_angle: bool,
}

impl WideAngle {
    pub(super) fn new(delta: Complex64) -> WideAngle {
        WideAngle { delta, root: delta.sqrt(), by_angle: delta.norm() > 0.0 }
    }

    /// The same with `w` as the variable.
    pub(super) fn by_w(self) -> WideAngle {
        WideAngle { by_angle: false, ..self }
    }

    /// Whether it is not the one-way equation.
    pub(super) fn is_on(self) -> bool {
        self.delta.norm() > 0.0
    }

    /// `theta` or `w` of a wave that runs forth.
    pub(super) fn variable(self, p: Complex64) -> Complex64 {
        if self.by_angle { (self.root * p).asin() } else { arsinh(p, kappa(p)) }
    }

    /// The cosine of the angle of a wave that runs forth.
    pub(super) fn cosine(self, p: Complex64) -> Complex64 {
        (1.0 - self.delta * p * p).sqrt()
    }

    /// `P - p^2` of a wave that runs forth.
    pub(super) fn excess(self, p: Complex64) -> Complex64 {
        let over = p * p / (self.cosine(p) + 1.0);
        self.delta * over * over
    }

    /// `P - p^2` from the cosine.
    pub(super) fn excess_at(self, cosine: Complex64) -> Complex64 {
        let versine = 1.0 - cosine;
        if self.is_on() { versine * versine / self.delta } else { self.delta }
    }

    /// Whether `theta` lies to the left of the branch point `p = i` and above its cut.
    pub(super) fn beyond(self, theta: Complex64) -> bool {
        let p = theta.sin() / self.root;
        p.im - 1.0 > p.re.max(0.0) * (0.5 / HALF_ROOT_3)
    }

    /// The parameters at the variable of integration, `theta` or `w`.
    pub(super) fn spot(self, z: Complex64) -> Spot {
        if self.by_angle {
            let (p, cosine) = (z.sin() / self.root, z.cos());
            let kappa = kappa(p);
            let (slope, measure) = (cosine / self.root, self.root.inv());
            let turning = slope * measure * 2.0;
            return Spot {
                p,
                kappa,
                w: arsinh(p, kappa),
                cosine,
                slope,
                bend: -p,
                measure,
                turning,
            };
        }
        let (p, kappa) = (z.sinh(), z.cosh());
        let cosine = if self.is_on() { self.cosine(p) } else { Complex64::new(1.0, 0.0) };
        let measure = kappa / cosine;
        let turning = (p * p / kappa + kappa + self.delta * p * p * kappa / (cosine * cosine))
            * measure
            * 2.0;
        Spot { p, kappa, w: z, cosine, slope: kappa, bend: p, measure, turning }
    }
}

/// The parameters of a wave.
#[derive(Clone, Copy, Debug)]
pub(super) struct Spot {
    pub(super) p: Complex64,
    pub(super) kappa: Complex64,
    pub(super) w: Complex64,
    /// Of the angle; 1 in the one-way equation.
    pub(super) cosine: Complex64,
    /// `dp/dz` and `d^2p/dz^2` by the variable of integration `z`.
    pub(super) slope: Complex64,
    pub(super) bend: Complex64,
    /// `dp/dz` over the cosine.
    pub(super) measure: Complex64,
    /// `d(2 p measure)/dz`, that is `d^2P/dz^2`.
    pub(super) turning: Complex64,
}

/// `(1 + p^2)^(1/2)`, with the cut of the branch point `p = i` to the right, 30 degrees upwards.
fn kappa(p: Complex64) -> Complex64 {
    let along = I * p;
    let turned = (1.0 + along) * Complex64::new(0.5, HALF_ROOT_3);
    turned.sqrt() * Complex64::new(HALF_ROOT_3, -0.5) * (1.0 - along).sqrt()
}

/// The inverse of `sinh` with `cosh` given, to relative accuracy near 0 too.
fn arsinh(p: Complex64, kappa: Complex64) -> Complex64 {
    // One step of Newton's makes up for what cancels in the sum.
    let w = (p + kappa).ln();
    if kappa.norm() > 1e-3 { w - (w.sinh() - p) / kappa } else { w }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_inverse_of_sinh_is_one() {
        for (re, im) in [
            (1e-9, 1e-12),
            (-3e-5, 2e-4),
            (0.0, 0.7),
            (-0.2, 1.3),
            (2.0, -0.5),
            (-4.0, 0.1),
            (0.3, 1.6),
        ] {
            let p = Complex64::new(re, im);
            let w = arsinh(p, kappa(p));
            let error = (w.sinh() - p).norm() / p.norm();
            assert!((w.cosh() - kappa(p)).norm() < 1e-14);
            assert!(error < 4e-16, "{p}: {error:e}");
        }
    }

    #[test]
    fn both_forms_of_the_parameters_agree() {
        let wide = WideAngle::new(Complex64::new(0.3, -0.02));
        for (re, im) in [(0.4, 0.1), (-0.3, 0.4), (1.2, -0.3)] {
            let z = Complex64::new(re, im);
            let Spot { p, kappa, w, cosine, .. } = wide.spot(z);
            assert!((wide.variable(p) - z).norm() < 1e-15);
            assert!((wide.cosine(p) - cosine).norm() < 1e-15);
            assert!((w.cosh() - kappa).norm() < 1e-14);
            // P = (2/delta) (1 - cos(theta)).
            let square = (1.0 - cosine) * 2.0 / wide.delta;
            assert!((square - p * p - wide.excess(p)).norm() < 1e-14);
        }
    }
}
