//! Umbilic canonical integrals (DLMF chapter 36): elliptic and hyperbolic, with first derivatives.
//!
//! ```text
//! Psi^(E)(x, y, z) = double integral of exp(i (s^3 - 3 s t^2 + z (s^2 + t^2) + y t + x s)) ds dt
//! Psi^(H)(x, y, z) = double integral of exp(i (s^3 + t^3 + z s t + y t + x s)) ds dt
//! ```
//!
//! (DLMF 36.2.2, 36.2.3, 36.2.5). The inner integral is Gaussian after a linear change of variables; the
//! outer one is done saddle by saddle: along descents between its valleys (files `landscape`, `paths`, `panel`),
//! a saddle far from the others on one line (`lone`). Phases are carried in double-double.
//!
//! Accuracy is counted against `max(|Psi|, 0.1)`, for a derivative against `max(|dPsi|, 0.1)`.
//!
//! Range: the inputs are taken as exact; no digit is lost as they grow. Where `|x|^(3/2)`, `|y|^(3/2)` or `|z|^3`, the
//! size of the phase at the outermost saddle, exceeds 1e16 the functions refuse with [`Error::NoDigits`], which says
//! how many digits inputs that are themselves rounded would allow (a negative number there).

mod landscape;
mod lone;
mod panel;
mod paths;
mod slices;

pub use slices::*;

use crate::Error;
use crate::scaled::pow2;
use crate::special::double_double::{Dd, Precise, exponential, two_product, two_sum};
use landscape::{Hub, Landscape, real};
use num_complex::Complex64;
use panel::Moments;
use std::f64::consts::PI;

/// An umbilic integral and its first derivatives at one point.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Umbilic {
    /// Psi.
    pub psi: Complex64,
    /// dPsi/dx, dPsi/dy, dPsi/dz.
    pub derivatives: [Complex64; 3],
}

/// The largest phase that is known to 1e-15 in double-double.
const FARTHEST: f64 = 1e16;

/// Refuses what is not finite and what leaves no digit.
fn check(x: f64, y: f64, z: f64) -> Result<(), Error> {
    for (name, value, power) in [("x", x, 1.5), ("y", y, 1.5), ("z", z, 3.0)] {
        Error::require_finite(name, value)?;
        let phase = power * value.abs().log10();
        if phase > FARTHEST.log10() {
            return Err(Error::NoDigits {
                what: "an umbilic integral",
                value: Complex64::new(value, 0.0),
                digits: 15.95 - phase,
                remedy: "make the parameters smaller; only the leading asymptotic terms of each \
                         saddle, without their phase, mean anything here",
            });
        }
    }
    Ok(())
}

/// What the integral's own parameters make of the general form.
struct Form {
    land: Landscape,
    valleys: [i32; 2],
    factor: Complex64,
    phase: Dd,
    /// Coefficients of 1, r, r^2, 1/r in the derivatives of the phase by x, y, z.
    rates: [[Dd; 4]; 3],
    /// Weight of 1/r in those derivatives, which hangs on the inner integral's own parameter.
    weight: f64,
}

/// The integral as it grows, saddle by saddle.
struct Sum<'a> {
    form: &'a Form,
    /// Whether the integral with 1/r is summed.
    direct: bool,
    /// With 1, r, r^2.
    moments: [Complex64; 3],
    /// With the derivatives of the phase.
    rates: [Complex64; 3],
}

impl Sum<'_> {
    /// Adds moments round a hub.
    fn add(&mut self, hub: &Hub, moments: &Moments, sign: f64) {
        let Precise { re, im } = hub.level;
        let (factor, exponent) = exponential(Precise { re, im: im.plus(self.form.phase) });
        let factor = factor * (sign * pow2(exponent));
        let [m0, m1, m2, over] = moments.map(|m| m * factor);
        let (r, square) = (hub.r, hub.r * hub.r);
        self.moments[0] += m0;
        self.moments[1] += r * (m0 + m1);
        self.moments[2] += square * (m0 + m1 * 2.0 + m2);
        for (sum, &[one, first, second, inverse]) in self.rates.iter_mut().zip(&self.form.rates) {
            // The value at the hub, which may be far below its terms, and what changes round it.
            let at_hub = real(second).times_plus(r, real(first)).times_plus(r, real(one));
            let (mut re, mut im) = (at_hub.re, at_hub.im);
            let change = r * first.hi + square * (2.0 * second.hi);
            *sum += m1 * change + m2 * square * second.hi;
            if self.direct {
                re = re.plus(hub.inverse.re.times(inverse));
                im = im.plus(hub.inverse.im.times(inverse));
                *sum -= over * hub.inverse.round() * inverse.hi;
            }
            *sum += m0 * Complex64::new(re.hi, im.hi);
        }
    }
}

fn evaluate(form: &Form) -> Result<Umbilic, Error> {
    let [from, to] = form.valleys;
    let mut land = form.land;
    let direct = land.inner.hi.abs() * land.steepness() > SMALL;
    if direct {
        land.ln_weight = form.weight.abs().ln();
    }
    let zero = [Complex64::ZERO; 3];
    let mut sum = Sum { form, direct, moments: zero, rates: zero };
    if !paths::between(&land, from, to, &mut sum) {
        return Err(Error::NoConvergence {
            what: "the descent from the saddles of an umbilic integral",
            limit: paths::STEPS,
            remedy: "report the parameters: every finite set should be reached",
        });
    }
    if !direct {
        let over_r = land.over_r(&sum.moments);
        for (sum, rate) in sum.rates.iter_mut().zip(&form.rates) {
            *sum += over_r * rate[3].hi;
        }
    }
    let derivatives = sum.rates.map(|rate| Complex64::I * rate * form.factor);
    Ok(Umbilic { psi: sum.moments[0] * form.factor, derivatives })
}

/// Below this coefficient (in units of what the others allow) the integral with 1/r follows from the others: on its own it
/// is then the difference of large ones.
const SMALL: f64 = 1e-4;

fn word(hi: f64) -> Dd {
    Dd { hi, lo: 0.0 }
}

/// 1/n, n below 2^26.
fn part(n: f64) -> Dd {
    let hi = 1.0 / n;
    let product = two_product(n, hi);
    Dd { hi, lo: ((1.0 - product.hi) - product.lo) * hi }
}

/// The elliptic umbilic integral `Psi^(E)(x, y, z)` with its first derivatives.
///
/// Accuracy (as counted on the module's page): 7e-15 in the tables, whatever the size of
/// the parameters (1.2e-14 on caustics at 1e6); of a million random points up to 1e10, 99.9 % below
/// 1.3e-14, worst 1.7e-12.
/// Cost: about 30 us, up to 45; 5 us where the saddles are far apart, as for most parameters above 50.
/// Source: DLMF 36.2.2, 36.2.5, 36.2.6.
///
/// # Errors
/// [`Error::Domain`] for parameters that are not finite, [`Error::NoDigits`] for such as leave no digit.
///
/// ```
/// use merging_saddles::special::umbilic::elliptic;
/// // Psi^(E)(0) = (1/3) sqrt(pi) Gamma(1/6) = 3.28868: DLMF 36.2.17.
/// let v = elliptic(0.0, 0.0, 0.0)?;
/// assert!((v.psi.re - 3.28868).abs() < 1e-5 && v.psi.im.abs() < 1e-13);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn elliptic(x: f64, y: f64, z: f64) -> Result<Umbilic, Error> {
    check(x, y, z)?;
    // s = r + z/3; the integral over t is Gaussian for Im r < 0.
    let square = two_product(z, z);
    // z (4/27 z^2 + x/3)
    let phase = square.times(part(27.0)).times(word(4.0)).plus(word(x).times(part(3.0)));
    let (zero, weight) = (word(0.0), word(y).times(part(6.0)));
    evaluate(&Form {
        land: Landscape::new(
            [square.plus(word(x)), word(2.0 * z), word(1.0)],
            two_product(y, y).times(part(12.0)),
        ),
        valleys: [-2, 0],
        factor: Complex64::new(1.0, -1.0) * (PI / 6.0).sqrt(),
        phase: phase.times(word(z)),
        rates: [
            [word(z).times(part(3.0)), word(1.0), zero, zero],
            [zero, zero, zero, weight],
            [
                square.times(part(9.0)).times(word(4.0)).plus(word(x).times(part(3.0))),
                word(2.0 * z),
                word(2.0),
                zero,
            ],
        ],
        weight: weight.hi,
    })
}

/// The hyperbolic umbilic integral `Psi^(H)(x, y, z)` with its first derivatives.
///
/// Accuracy (as counted on the module's page): 6e-15 in the tables, whatever the size of
/// the parameters (1.2e-14 on caustics at 1e6); of a million random points up to 1e10, 99.9 % below
/// 1.3e-14, worst 1.7e-12.
/// Cost: about 18 us, up to 40; 3 us where the saddles are far apart, as for most parameters above 50.
/// Source: DLMF 36.2.3, 36.2.5, 36.2.8.
///
/// # Errors
/// [`Error::Domain`] for parameters that are not finite, [`Error::NoDigits`] for such as leave no digit.
///
/// ```
/// use merging_saddles::special::umbilic::hyperbolic;
/// // Psi^(H)(0) = (1/3) Gamma(1/3)^2 = 2.39224: DLMF 36.2.18.
/// let v = hyperbolic(0.0, 0.0, 0.0)?;
/// assert!((v.psi.re - 2.39224).abs() < 1e-5 && v.psi.im.abs() < 1e-13);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn hyperbolic(x: f64, y: f64, z: f64) -> Result<Umbilic, Error> {
    check(x, y, z)?;
    // s = a + b, t = a - b, a = r + z/6; the integral over b is Gaussian for Im r > 0.
    let (sum, difference) = (two_sum(x, y), two_sum(x, -y));
    let square = two_product(z, z);
    // z (z^2/27 + sum/6)
    let phase = square.times(part(27.0)).plus(sum.times(part(6.0)));
    let half = Dd { hi: 0.5 * square.hi, lo: 0.5 * square.lo };
    let weight = difference.times(part(12.0));
    let rate = |over: Dd| [word(z).times(part(6.0)), word(1.0), word(0.0), over];
    evaluate(&Form {
        land: Landscape::new(
            [half.plus(sum), word(2.0 * z), word(2.0)],
            difference.times(difference).times(part(24.0)).minus(),
        ),
        valleys: [1, 0],
        factor: Complex64::new(1.0, 1.0) * (PI / 3.0).sqrt(),
        phase: phase.times(word(z)),
        rates: [
            rate(weight.minus()),
            rate(weight),
            [square.times(part(9.0)).plus(sum.times(part(6.0))), word(z), word(2.0), word(0.0)],
        ],
        weight: weight.hi,
    })
}
