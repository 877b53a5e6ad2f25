//! Simple and double poles of the amplitude.
//!
//! Far from all clusters a pole adds `2 pi i n Res`, `n` the signed crossings of its steepest ascent
//! with the contour. Near a cluster, at `p` in the plane of `u`, its part of the amplitude,
//! `r/(u - p) + s/(u - p)^2`, is split off before the expansion; what that part adds to the cluster,
//! beyond the term `2 pi i n Res` above, is
//!
//! `P = integral of exp(i k Phi)/(u - p) du = -i k sum_l C_l e^(i k Phi(p)) integral_p^(ridge) q_l(q) e^(-i k Phi(q)) dq`,
//! `sum_l q_l(q) u^l = (Phi'(u) - Phi'(q))/(u - q)`,
//!
//! the ridge being the one through which the pole's steepest ascent leaves the ring. It follows from
//! `dP/dp = i k Phi'(p) P + i k sum_l q_l(p) C_l` taken in the stable direction. The last integral is an
//! incomplete canonical integral of the conjugate problem. For K = 0 it is the error function
//! (DLMF 7.2). A double pole follows by differentiation: `i k [Phi'(p) P + sum_l q_l(p) C_l]`.
//!
//! Source: B. L. van der Waerden, Appl. Sci. Res. B 2 (1951) 33 for one saddle and a pole; the form
//! for clusters was worked out for this crate.

use super::contribution::Contribution;
use super::figure::RESIDUAL;
use super::incomplete::incomplete;
use super::level::Level;
use super::unfolding::Unfolding;
use crate::integral::{Amplitude, Phase};
use crate::ring::{
    KEPT, MAX_SADDLES, NormalForm, POINTS, Values, ZERO, evaluate, to_coefficients, unit_points,
};
use crate::saddles::Topology;
use crate::{Error, Scaled};
use num_complex::Complex64;
use std::f64::consts::PI;

/// A pole of the amplitude: `g = double/(z - z_p)^2 + simple/(z - z_p) + ..`.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Pole {
    pub z: Complex64,
    pub simple: Complex64,
    pub double: Complex64,
    /// Rounding errors of the two.
    pub noise: (f64, f64),
    /// Of the circle that they were measured on.
    pub radius: f64,
    /// `f` and `f'` there.
    pub value: Complex64,
    pub(super) level: Level,
    pub slope: Complex64,
    /// Signed crossings of its steepest ascent with the contour.
    pub crossings: i32,
}

impl Pole {
    /// Measures the principal part from [`POINTS`] values on a circle, made smaller from `radius`
    /// until nothing else singular is near it.
    ///
    /// # Errors
    /// If the amplitude is not finite there, or has a pole of higher order.
    pub fn measure(
        phase: &dyn Phase,
        amplitude: &dyn Amplitude,
        z: Complex64,
        radius: f64,
    ) -> Result<Pole, Error> {
        let mut radius = radius;
        for _ in 0..CIRCLES {
            // g (z - z_p)^2 at the points as they are rounded, which near another pole are not quite those
            // of the circle: carried over by the Taylor series.
            let points: Values = std::array::from_fn(|s| z + unit_points()[s] * radius);
            let found: Values =
                std::array::from_fn(|s| amplitude.value(points[s]) * (points[s] - z).powi(2));
            let size = found.iter().fold(0.0f64, |m, g| m.max(g.norm()));
            let mut values = found;
            to_coefficients(&mut values);
            let taylor: [Complex64; KEPT / 2] = std::array::from_fn(|n| values[n]);
            values = std::array::from_fn(|s| {
                let series = |v| evaluate(&taylor, v);
                found[s] - (series((points[s] - z) / radius) - series(unit_points()[s]))
            });
            to_coefficients(&mut values);
            // The last quarter of the Taylor half and the poles of higher order.
            let rest = values[KEPT * 3 / 4..].iter().fold(0.0f64, |m, c| m.max(c.norm()));
            if size.is_finite() && rest <= 1e-14 * size {
                let (value, slope) = phase.value_and_derivative(z);
                let noise = f64::EPSILON * size;
                return Ok(Pole {
                    z,
                    simple: values[1] / radius,
                    double: values[0],
                    noise: (noise / radius, noise),
                    radius,
                    value,
                    level: Level::of(phase, z, radius),
                    slope,
                    crossings: 0,
                });
            }
            radius *= 0.5;
        }
        Err(Error::Unsupported {
            what: format!("the amplitude's singularity at {z} (not a pole of order 1 or 2)"),
            remedy: "use `quadrature`, or write a higher pole as a derivative in a parameter",
        })
    }

    /// `2 pi i n Res(g exp(i k f))`.
    pub fn at(&self, k: f64) -> Contribution {
        let residue = self.simple + self.double * self.slope * Complex64::new(0.0, k);
        let value = residue * Complex64::new(0.0, 2.0 * PI * f64::from(self.crossings));
        let noise = (self.level.error(k) + 12.0 * f64::EPSILON) * value.norm()
            + (self.noise.0 + self.noise.1 * self.slope.norm() * k)
                * 7.0
                * f64::from(self.crossings.abs());
        Contribution::new(
            self.level.exponent(k),
            Scaled::from(value),
            Scaled::from(Complex64::new(noise, 0.0)),
            0,
        )
    }
}

/// A pole in the plane of `u` of one cluster.
#[derive(Clone, Debug)]
pub(crate) struct MappedPole {
    /// Its place; inside the ring where `|u| < R`.
    pub u: Complex64,
    pub simple: Complex64,
    pub double: Complex64,
    pub(super) noise: (f64, f64),
    /// `dz/du` there.
    pub(super) slope: Complex64,
    /// Error of `u`.
    pub(super) blur: f64,
    pub(super) ridge: usize,
}

impl MappedPole {
    /// None if the pole lies too far outside the ring. `ascent` is its steepest ascent.
    pub fn new(form: &NormalForm, pole: &Pole, ascent: &[Complex64]) -> Option<MappedPole> {
        let v = form.locate(pole.z)?;
        if v.norm() > OUTSIDE {
            return None;
        }
        let v = polished(form, pole.z, v);
        let ridge = Topology::leaves_by_ridge(form, v, ascent)?;
        let slope: Complex64 = form
            .map()
            .iter()
            .enumerate()
            .skip(1)
            .rev()
            .fold(ZERO, |sum, (n, c)| sum * v + c * n as f64)
            / form.radius();
        Some(MappedPole {
            u: v * form.radius(),
            // The residue of g dz does not depend on the variable.
            simple: pole.simple,
            double: pole.double / slope,
            noise: (pole.noise.0, pole.noise.1 / slope.norm()),
            slope,
            blur: f64::EPSILON * (v.norm() * form.radius() + pole.z.norm() / slope.norm())
                + unsteady(form, v),
            ridge,
        })
    }

    /// The same pole of another amplitude.
    pub fn with_part_of(&self, pole: &Pole) -> MappedPole {
        MappedPole {
            simple: pole.simple,
            double: pole.double / self.slope,
            noise: (pole.noise.0, pole.noise.1 / self.slope.norm()),
            ..*self
        }
    }

    /// Whether the ring keeps its distance from it.
    pub fn is_clear_of(&self, form: &NormalForm) -> bool {
        (self.u.norm() / form.radius() - 1.0).abs() > CLOSE
    }

    /// Its principal part at `u`.
    pub fn part(&self, u: Complex64) -> Complex64 {
        let inverse = (u - self.u).inv();
        (self.double * inverse + self.simple) * inverse
    }

    /// How far its place may be off.
    pub fn shift(&self) -> f64 {
        BLUR * self.blur
    }

    /// What it adds to a cluster with moments `c` (same exponent), and the rounding error of that. None if the
    /// ascent did not arrive.
    pub fn contribution(
        &self,
        phi: &Unfolding,
        c: &[Complex64; MAX_SADDLES],
        k: f64,
    ) -> Option<(Complex64, f64)> {
        let degree = phi.degree();
        let count = degree - 1;
        let valley = degree - 1 - self.ridge;
        let conjugate = incomplete(&phi.conj(), self.u.conj(), valley, k)?;
        let ik = Complex64::new(0.0, k);
        let d = phi.derivative();
        let mut integral = ZERO;
        let mut at_pole = ZERO;
        // Sizes of what the two principal parts are multiplied with.
        let (mut size, mut size_at_pole, mut lost) = (0.0, 0.0, 0.0);
        for (l, c) in c.iter().enumerate().take(count) {
            // q_l(q) = sum_(j > l) d_j q^(j - 1 - l)
            let mut power = Complex64::new(1.0, 0.0);
            for (s, d) in d[l + 1..degree].iter().enumerate() {
                let term = c * d * conjugate.values[s].conj();
                integral += term;
                at_pole += c * d * power;
                size += k * term.norm();
                lost += k * (c * d).norm() * conjugate.errors[s];
                size_at_pole += k * (c * d * power).norm();
                power *= self.u;
            }
        }
        let p = -ik * integral;
        let slope = d[..degree].iter().rev().fold(ZERO, |sum, d| sum * self.u + d);
        let second = ik * (slope * p + at_pole);
        // Rounding; the second order is a difference where the pole is far.
        lost = 2.0 * lost + 4.0 * f64::EPSILON * size;
        let rounding = self.simple.norm() * lost
            + self.double.norm() * (k * slope.norm() * lost + 4.0 * f64::EPSILON * size_at_pole);
        let shift = self.shift();
        let third = second.norm() * (2.0 / self.u.norm()).min(k * slope.norm()).max(k.sqrt());
        let place = shift * (self.simple.norm() * second.norm() + self.double.norm() * third);
        let measured = self.noise.0 * p.norm() + self.noise.1 * second.norm();
        // The derivatives in x_j are i k times the integrals with u^j = p u^(j-1) + (u - p) u^(j-1).
        let mut place = place;
        let far = self.u.norm();
        let (mut one, mut two) = (p.norm(), second.norm());
        for j in 1..count {
            (one, two) = (one * far + c[j - 1].norm(), two * far + one);
            let size = self.simple.norm() * one + self.double.norm() * two;
            place += 0.4 * RESIDUAL * k * phi.noise(j) * size;
        }
        Some((self.simple * p + self.double * second, rounding + place + measured))
    }
}

/// The place once more by Newton, all differences taken from the map's centre.
fn polished(form: &NormalForm, z: Complex64, mut v: Complex64) -> Complex64 {
    let map = form.map();
    let goal = z - map[0];
    for _ in 0..2 {
        let (mut value, mut slope) = (ZERO, ZERO);
        for &c in map[1..].iter().rev() {
            slope = slope * v + value;
            value = value * v + c;
        }
        slope = slope * v + value;
        let step = (goal - value * v) / slope;
        if step.norm() < 1e-9 {
            v += step;
        }
    }
    v
}

/// How far the noise of the map moves the place `R v`: the quotient of the residual by `Phi'`, all
/// its Taylor coefficients alike.
fn unsteady(form: &NormalForm, v: Complex64) -> f64 {
    let slope = form.degree() as f64 * form.radius().powi(form.degree() as i32 - 1);
    let square = v.norm_sqr();
    let powers: f64 = (0..KEPT).map(|n| square.powi(n as i32)).sum();
    form.residual() / slope * (powers / POINTS as f64).sqrt()
}

/// Circles round a pole that are tried.
const CIRCLES: usize = 12;
/// Error of a pole's place in units of its root mean square.
const BLUR: f64 = 6.0;
/// Poles up to this multiple of the ring's radius are split off.
const OUTSIDE: f64 = 1.15;
/// No ring may pass a pole closer than this part of its radius.
const CLOSE: f64 = 0.06;
