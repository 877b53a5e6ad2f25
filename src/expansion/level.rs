//! `f` at one point and `exp(i k f)` there, to more than a double's rounding.
//!
//! Method. An analytic function's value is its mean over a circle (DLMF 1.9(iii)): over 32 points of a small
//! one the rounding errors of single values average out, and the harmonics that a smooth function
//! does not have measure them. The mean is kept as a double and what that lacks, and so is its product with
//! the wavenumber.

use crate::integral::Phase;
use crate::ring::{NormalForm, POINTS, ZERO, unit_points};
use num_complex::Complex64;

/// A phase's value at a point.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Level {
    pub value: Complex64,
    /// What `value` lacks as a double.
    pub rest: Complex64,
    /// Expected error of the two together.
    noise: f64,
}

impl Level {
    /// The mean over a circle of about `radius` or less; the value alone where no circle is free of
    /// singularities.
    pub fn of(phase: &dyn Phase, z: Complex64, radius: f64) -> Level {
        let (value, slope) = phase.value_and_derivative(z);
        let mut alone = 0.5 * f64::EPSILON * phase.noise_scale(z);
        let least = LEAST * f64::EPSILON * phase.noise_scale(z);
        // No larger than it takes for the rounding errors to be independent: farther out they are larger.
        let varied = VARIED * phase.noise_scale(z);
        let mut radius =
            radius.min(varied / slope.norm().max(f64::MIN_POSITIVE)).max(1e-3 * radius);
        for _ in 0..CIRCLES {
            let values: [Complex64; COUNT] = std::array::from_fn(|s| {
                phase.value(z + unit_points()[s * (POINTS / COUNT)] * radius) - value
            });
            let harmonic = |n: usize| {
                let turned = |(s, v): (usize, &Complex64)| {
                    v * unit_points()[(POINTS - n * s * (POINTS / COUNT) % POINTS) % POINTS]
                };
                values.iter().enumerate().map(turned).sum::<Complex64>() / COUNT as f64
            };
            let size = |band: std::ops::Range<usize>| {
                let count = band.len() as f64;
                (band.map(|n| harmonic(n).norm_sqr()).sum::<f64>() / count).sqrt()
            };
            // Flat where it is rounding, falling where a singularity is near.
            let (before, noise) = (size(8..12), size(12..21));
            let largest = values.iter().fold(0.0f64, |m, v| m.max(v.norm()));
            let near = largest <= 3.0 * varied.max(value.norm());
            if near && (noise > 0.3 * before || noise < least) {
                return Level { value, rest: harmonic(0), noise: noise.max(least) };
            }
            radius *= 0.25;
            alone = alone.max(noise * (COUNT as f64).sqrt());
        }
        Level { value, rest: ZERO, noise: alone }
    }

    /// `A` of a normal form: `f` where `u = 0`, or the mean over the ring where that is better known.
    pub fn of_form(phase: &dyn Phase, form: &NormalForm) -> Level {
        let mean = MEAN * form.residual();
        let ring = Level { value: form.level(), rest: form.level_rest(), noise: 2.0 * mean };
        let centre = Level::of(phase, form.map()[0], 0.2 * form.map()[1].norm());
        // The place of u = 0 is known to the noise of the map, rounding included.
        let slope = form.degree() as f64 * form.radius().powi(form.degree() as i32 - 1);
        let place = f64::EPSILON * form.map()[0].norm() * form.radius() / form.map()[1].norm();
        // Where f is not stationary rounding errors on a circle are less independent.
        let alike = if form.saddles() == 0 { 1.7 } else { 1.0 };
        let noise = alike * centre.noise + form.x(1).norm() * (mean / slope + 0.3 * place);
        if noise < ring.noise { Level { noise, ..centre } } else { ring }
    }

    /// Expected error of `f`.
    pub fn noise(&self) -> f64 {
        self.noise
    }

    /// `i k f`, rounded, and what rounding left.
    pub fn exponent(&self, k: f64) -> (Complex64, Complex64) {
        let product = self.value * k;
        let lost = Complex64::new(
            k.mul_add(self.value.re, -product.re),
            k.mul_add(self.value.im, -product.im),
        );
        let i = Complex64::new(0.0, 1.0);
        (i * product, i * (lost + self.rest * k))
    }

    /// Relative error of `exp(i k f)`.
    pub fn error(&self, k: f64) -> f64 {
        4.0 * f64::EPSILON + CERTAIN * k * self.noise
    }
}

/// Points of the circle.
const COUNT: usize = 32;
/// The least expected error of a mean, relative to rounding of what `f` is summed from.
const LEAST: f64 = 0.04;
/// Circles that are tried.
const CIRCLES: usize = 6;
/// Change of the phase round the circle, relative to what it is summed from.
const VARIED: f64 = 0.25;
/// Error in units of the expected one; parameters that are rounded within `f` move all its values alike, by
/// as much as single values scatter.
const CERTAIN: f64 = 8.0;
/// Root mean square of the mean of unit noise over a ring: `POINTS^(-1/2)`.
pub(super) const MEAN: f64 = 0.088_388_347_648_318_44;
