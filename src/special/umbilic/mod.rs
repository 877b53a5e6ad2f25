//! Umbilic canonical integrals (DLMF chapter 36): elliptic and hyperbolic, with first derivatives.
//!
//! ```text
//! Psi^(E)(x, y, z) = double integral of exp(i (s^3 - 3 s t^2 + z (s^2 + t^2) + y t + x s)) ds dt
//! Psi^(H)(x, y, z) = double integral of exp(i (s^3 + t^3 + z s t + y t + x s)) ds dt
//! ```
//!
//! (DLMF 36.2.2, 36.2.3, 36.2.5). The inner integral is Gaussian after a linear change of variables; the
//! outer one is done along descents between its valleys (files `landscape`, `paths`, `panel`).
//!
//! Accuracy is counted against `max(|Psi|, 0.1)`, for a derivative against `max(|dPsi|, 0.1)`.
//!
//! Range: the phase at the outermost saddles, of the size of `|x|^(3/2)`, `|y|^(3/2)`, `|z|^3`, is rounded once;
//! from phases of 1e4 on, an error of some 3e-16 times the phase prevails. Beyond 1e13 the functions
//! refuse with [`Error::NoDigits`].

mod landscape;
mod panel;
mod paths;
mod slices;

pub use slices::*;

use crate::Error;
use landscape::Landscape;
use num_complex::Complex64;
use std::f64::consts::{FRAC_PI_4, PI};

/// An umbilic integral and its first derivatives at one point.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Umbilic {
    /// Psi.
    pub psi: Complex64,
    /// dPsi/dx, dPsi/dy, dPsi/dz.
    pub derivatives: [Complex64; 3],
}

/// The largest phase of which a digit or two are left.
const FARTHEST: f64 = 1e13;

/// Refuses what is not finite and what leaves no digit.
fn check(x: f64, y: f64, z: f64) -> Result<(), Error> {
    for (name, value, power) in [("x", x, 1.5), ("y", y, 1.5), ("z", z, 3.0)] {
        Error::require_finite(name, value)?;
        let phase = value.abs().powf(power);
        if phase > FARTHEST {
            return Err(Error::NoDigits {
                what: "an umbilic integral",
                value: Complex64::new(value, 0.0),
                digits: 15.5 - phase.log10(),
                remedy: "make the parameters smaller: the phase of each saddle is lost here",
            });
        }
    }
    Ok(())
}

/// What the integral's own parameters make of the general form.
struct Form {
    land: Landscape,
    valleys: [i32; 2],
    factor: f64,
    phase: f64,
    /// Coefficients of 1, r, r^2, 1/r in the derivatives of the phase by x, y, z.
    rates: [[Complex64; 4]; 3],
}

fn evaluate(form: &Form) -> Result<Umbilic, Error> {
    let [from, to] = form.valleys;
    let (moments, reference) =
        paths::between(&form.land, from, to).ok_or(Error::NoConvergence {
            what: "the descent from the saddles of an umbilic integral",
            limit: 80,
            remedy: "report the parameters: every finite set should be reached",
        })?;
    let level = Complex64::new(reference.re, reference.im + form.phase).exp() * form.factor;
    let derivative = |rate: &[Complex64; 4]| {
        let sum: Complex64 = rate.iter().zip(&moments).map(|(c, m)| m * c).sum();
        Complex64::I * sum * level
    };
    Ok(Umbilic {
        psi: moments[0] * level,
        derivatives: [
            derivative(&form.rates[0]),
            derivative(&form.rates[1]),
            derivative(&form.rates[2]),
        ],
    })
}

/// Below this the coefficient of 1/r counts as zero.
const NEGLIGIBLE: f64 = 1e-280;
/// Below this the derivative that hangs on 1/r comes from the differential equations, as
/// `y Psi_yy`: the integral over 1/r is then the difference of large ones.
const SMALL: f64 = 1e-11;

fn real(rate: [f64; 4]) -> [Complex64; 4] {
    rate.map(Complex64::from)
}

/// The coefficient of 1/r, and the weight w of the integrand w/r.
fn inner(coefficient: f64, weight: f64) -> (f64, f64) {
    match coefficient.abs() {
        c if c < NEGLIGIBLE => (0.0, 0.0),
        c if c < SMALL => (coefficient, 0.0),
        _ => (coefficient, weight),
    }
}

/// The elliptic umbilic integral `Psi^(E)(x, y, z)` with its first derivatives.
///
/// Accuracy (as counted on the module's page) for parameters up to 16: 2e-13 at 999 of 1000 points,
/// worst seen 1e-12. Cost: about 25 us, up to 45.
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
    let (inner, weight) = inner(y * y / 12.0, y / 6.0);
    let by_y = if weight == 0.0 {
        // Psi_yy = Psi_xx + (2 i z Psi_x - x Psi)/3: DLMF 36.10.
        [(z * z + x) / 3.0, 4.0 / 3.0 * z, 1.0, 0.0].map(|c| Complex64::new(0.0, y * c))
    } else {
        real([0.0, 0.0, 0.0, weight])
    };
    evaluate(&Form {
        land: Landscape { outer: [z * z + x, 2.0 * z, 1.0], inner, weight: weight.abs() },
        valleys: [-2, 0],
        factor: (PI / 3.0).sqrt(),
        phase: z * (4.0 / 27.0 * z * z + x / 3.0) - FRAC_PI_4,
        rates: [
            real([z / 3.0, 1.0, 0.0, 0.0]),
            by_y,
            real([4.0 / 9.0 * z * z + x / 3.0, 2.0 * z, 2.0, 0.0]),
        ],
    })
}

/// The hyperbolic umbilic integral `Psi^(H)(x, y, z)` with its first derivatives.
///
/// Accuracy (as counted on the module's page) for parameters up to 16: 6e-14 at 999 of 1000 points,
/// worst seen 3e-13. Cost: about 15 us, up to 40.
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
    let (sum, difference) = (x + y, x - y);
    let (inner, weight) = inner(-difference * difference / 24.0, difference / 12.0);
    // Half of Psi_x - Psi_y, over i.
    let split = if weight == 0.0 {
        // Sum of the two equations without Psi_xy, DLMF 36.10.
        [sum / 6.0 + z * z / 12.0, 2.0 / 3.0 * z, 1.0, 0.0]
            .map(|c| Complex64::new(0.0, -difference * c))
    } else {
        real([0.0, 0.0, 0.0, -weight])
    };
    let mean = real([z / 6.0, 1.0, 0.0, 0.0]);
    let rate = |sign: f64| std::array::from_fn(|k| mean[k] + split[k] * sign);
    evaluate(&Form {
        land: Landscape { outer: [0.5 * z * z + sum, 2.0 * z, 2.0], inner, weight: weight.abs() },
        valleys: [1, 0],
        factor: 2.0 * (PI / 6.0).sqrt(),
        phase: z * (z * z / 27.0 + sum / 6.0) + FRAC_PI_4,
        rates: [rate(1.0), rate(-1.0), real([z * z / 9.0 + sum / 6.0, z, 2.0, 0.0])],
    })
}
