//! Poles outside the ring of a cluster but near enough to set the limit of its series.
//!
//! Method. Outside the ring the Taylor map knows nothing of the pole `z_p`; its place `u_p` is one of the
//! zeros of `Phi(u) = f(z_p) - A`. The right one is that which the inverse map, continued along the ray
//! from the ring to it, carries to `z_p`; if none is, the pole lies behind another saddle and is no
//! singularity of the expansion. The steepest ascent is carried into the plane of `u` in the same way.
//!
//! Source: worked out for this crate.

use super::level::MEAN;
use super::pole::{MappedPole, Pole};
use crate::integral::Phase;
use crate::ring::NormalForm;
use crate::saddles::Topology;
use num_complex::Complex64;

/// Poles beyond this multiple of the ring's radius are left in.
const FARTHEST: f64 = 4.0;
/// Steps of one ray.
const STEPS: usize = 32;
/// Pieces of each chord of the ascent.
const PIECES: usize = 4;

/// The pole in the plane of `u`; None if it is not next to the cluster. `ascent` is its steepest ascent.
pub(super) fn far_pole(
    phase: &dyn Phase,
    form: &NormalForm,
    pole: &Pole,
    ascent: &[Complex64],
) -> Option<MappedPole> {
    let rise = pole.value - form.level();
    let mut places = Places::new(form, rise);
    places.settle();
    let v = places.v[..form.degree()]
        .iter()
        .copied()
        .filter(|v| (1.0..FARTHEST).contains(&v.norm()))
        .find(|&v| arrives(phase, form, v, pole.z))?;
    let slope = form.slope(v);
    // dz/du = Phi'/f'.
    let stretch = slope / pole.slope;
    Some(MappedPole {
        u: v * form.radius(),
        simple: pole.simple,
        double: pole.double / stretch,
        noise: (pole.noise.0, pole.noise.1 / stretch.norm()),
        slope: stretch,
        blur: f64::EPSILON * v.norm() * form.radius()
            + (pole.level.noise() + MEAN * form.residual()) / slope.norm(),
        ridge: Topology::climbs_to(form, carried(phase, form, v, ascent)?)?,
    })
}

/// The zeros of `Phi(R v) - rise`.
struct Places<'a> {
    form: &'a NormalForm,
    rise: Complex64,
    v: [Complex64; 6],
}

impl Places<'_> {
    fn new(form: &NormalForm, rise: Complex64) -> Places<'_> {
        let size = rise.norm().powf(1.0 / form.degree() as f64) / form.radius();
        let v = std::array::from_fn(|n| {
            let turn = std::f64::consts::TAU * n as f64 / form.degree() as f64;
            Complex64::from_polar(size.max(1.0), 0.4 + turn)
        });
        Places { form, rise, v }
    }

    /// Simultaneous iteration (Weierstrass, Durand and Kerner).
    fn settle(&mut self) {
        let degree = self.form.degree();
        let lead = self.form.radius().powi(degree as i32);
        for _ in 0..60 {
            let mut largest = 0.0f64;
            for n in 0..degree {
                let v = self.v[n];
                let mut divisor = Complex64::new(lead, 0.0);
                for other in (0..degree).filter(|&other| other != n) {
                    divisor *= v - self.v[other];
                }
                let change = (self.form.unfolding_at(v) - self.rise) / divisor;
                if change.re.is_finite() && change.im.is_finite() {
                    self.v[n] -= change;
                    largest = largest.max(change.norm());
                }
            }
            if largest < 1e-15 {
                break;
            }
        }
    }
}

/// Whether `z(u)`, continued along the ray from the ring to `v`, comes to `goal`.
fn arrives(phase: &dyn Phase, form: &NormalForm, v: Complex64, goal: Complex64) -> bool {
    let mut here = v * (0.8 / v.norm());
    let mut z = form.point(here);
    let step = (v - here) / STEPS as f64;
    let (_, mut slope) = phase.value_and_derivative(z);
    let mut length = 0.0;
    for _ in 0..STEPS {
        let forecast = form.slope(here + step * 0.5) * form.radius() * step / slope;
        here += step;
        length = forecast.norm();
        z += forecast;
        let target = form.level() + form.unfolding_at(here);
        let mut last = f64::INFINITY;
        for _ in 0..6 {
            let (f, d) = phase.value_and_derivative(z);
            let change = (target - f) / d;
            slope = d;
            let calm = change.norm() < 0.3 * length && change.norm() < last.max(1e-10 * length);
            if !calm {
                return false;
            }
            z += change;
            last = change.norm();
            if last < 1e-9 * length {
                break;
            }
        }
    }
    (z - goal).norm() < 1e-3 * length
}

/// Where the steepest ascent from the pole at `v` comes to: out of the ring, or its end.
fn carried(
    phase: &dyn Phase,
    form: &NormalForm,
    v: Complex64,
    ascent: &[Complex64],
) -> Option<Complex64> {
    let mut v = v;
    let mut inside = false;
    for pair in ascent.windows(2) {
        for piece in 1..=PIECES {
            let z = pair[0] + (pair[1] - pair[0]) * (piece as f64 / PIECES as f64);
            let target = phase.value(z) - form.level();
            for _ in 0..8 {
                let change = (target - form.unfolding_at(v)) / (form.slope(v) * form.radius());
                if change.norm() >= 1.0 || change.re.is_nan() {
                    return None;
                }
                v += change;
                if change.norm() < 1e-10 {
                    break;
                }
            }
            if v.norm() < 0.95 {
                inside = true;
                // Inside the map says whether the branch is still the right one.
                if (form.point(v) - z).norm() > 1e-3 * form.map()[1].norm() {
                    return None;
                }
            } else if inside && v.norm() > 1.05 {
                return Some(v);
            }
        }
    }
    Some(v)
}
