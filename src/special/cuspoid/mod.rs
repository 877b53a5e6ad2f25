//! Cuspoid canonical integrals (DLMF chapter 36): cusp (Pearcey), swallowtail, butterfly.
//!
//! `Psi_K(x) = integral of exp(i f(t)) dt`, `f(t) = t^(K+2) + x_K t^K + .. + x_1 t` (DLMF 36.2.1,
//! 36.2.4), along the real line or from any one of the `K + 2` valleys to any other. Valley `v`
//! lies along `arg t = pi/(2 (K+2)) + 2 pi v/(K+2)`; the real line runs from valley
//! `floor((K+2)/2)` to valley 0. All first derivatives come with the value:
//! `dPsi_K/dx_m = i * integral of t^m exp(i f(t)) dt`.
//!
//! Parameters are listed as `[x_1, .., x_K]`.
//!
//! Accuracy is counted on the cuspoid scale: with `T = 1 + sum_m |x_m|^(1/(K+2-m))` and
//! `S = max(|Psi|, |dPsi/dx_m|/T^m)`, an error of Psi against S, one of `dPsi/dx_m` against
//! `S T^m`. That is the relative error away from zeros, and stays meaningful on them.
//!
//! Range: the inputs are taken as exact. Where the phase at the outermost saddle exceeds 1e16 the
//! functions refuse with [`Error::NoDigits`], which says how many digits inputs that are themselves
//! rounded would allow (a negative number there).

mod descent;
mod hubs;
mod lone;
mod panel;
mod pearcey;
mod pearcey_nodes;
mod polynomial;
mod walk;
mod zeros;

use crate::{Error, Scaled};
use descent::VALLEYS;
use num_complex::Complex64;
use polynomial::{Polynomial, ZERO};
pub use zeros::{PearceyZero, pearcey_zero_inside, pearcey_zero_near, pearcey_zero_outside};

/// A cuspoid integral and its first derivatives at one point.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Cuspoid<T, const K: usize> {
    /// Psi_K.
    pub psi: T,
    /// `dPsi_K/dx_m` in place `m - 1`.
    pub derivatives: [T; K],
}

/// Moments `integral of t^n exp(i f(t)) dt`, n = 0 .. K, with one exponent of two.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Moments {
    /// Moment `n` is `mantissas[n] * 2^exponent`; beyond `n = K` zero.
    pub mantissas: [Complex64; 5],
    /// The common exponent.
    pub exponent: i64,
}

/// The largest phase at the outermost saddle that is known to 1e-14 in double-double.
const FARTHEST: f64 = 1e16;

/// Refuses what is not finite and what leaves no digit.
fn check(x: &[Complex64]) -> Result<(), Error> {
    let degree = x.len() + 2;
    for (m, x) in x.iter().enumerate().map(|(m, x)| (m + 1, x)) {
        if !(x.re.is_finite() && x.im.is_finite()) {
            return Err(Error::Domain {
                what: ["x_1", "x_2", "x_3", "x_4"][m - 1],
                value: *x,
                remedy: "pass finite parameters",
            });
        }
        let size = x.re.abs().max(x.im.abs());
        // Below 256 in size no parameter makes a phase of more than 256^6 = 2.8e14.
        if size > 256.0 {
            let phase = (size.ln() * degree as f64 / (degree - m) as f64).exp();
            if phase > FARTHEST {
                return Err(Error::NoDigits {
                    what: "a cuspoid integral",
                    value: *x,
                    digits: 15.95 - size.log10() * degree as f64 / (degree - m) as f64,
                    remedy: "make the parameters smaller; only the leading asymptotic terms of \
                             each saddle, without their phase, mean anything here",
                });
            }
        }
    }
    Ok(())
}

/// The sum over the valleys of `weights[v]` times the integral of `t^n exp(i f(t))` from any common
/// point to infinity in valley `v`, n = 0 .. K, for K = 1 to 4 parameters `x = [x_1, .., x_K]`.
///
/// The `K + 2` weights must add up to zero, so that the common point drops out. A single pair of
/// valleys is `-1` at one and `+1` at the other. Nothing over- or underflows, and a sum is as
/// accurate as its own paths allow: valleys whose weight can be joined low are not reached over a
/// high saddle.
///
/// Accuracy: about 1e-15 on the cuspoid scale, worst seen 1e-13. Cost: 7 to 20 us. No allocation.
/// Method and regions: descents from the saddles, Gauss-Legendre panels.
///
/// # Errors
/// [`Error::Unsupported`] for no or more than four parameters, [`Error::Domain`] for parameters
/// that are not finite and for weights that are not `K + 2` numbers adding up to zero,
/// [`Error::NoDigits`] for parameters beyond the range.
///
/// ```
/// use merging_saddles::{Complex64, special::cuspoid};
/// // Psi_2(0) = 1.67481 + 0.69373 i (DLMF 36.2.16): from valley 2 to valley 0.
/// let zero = Complex64::new(0.0, 0.0);
/// let m = cuspoid::moments(&[zero, zero], &[1, 0, -1, 0])?;
/// assert_eq!(m.exponent, 0);
/// assert!((m.mantissas[0] - Complex64::new(1.67481, 0.69373)).norm() < 1e-5);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn moments(x: &[Complex64], weights: &[i32]) -> Result<Moments, Error> {
    let k = x.len();
    if !(1..=4).contains(&k) {
        return Err(Error::Unsupported {
            what: format!("a cuspoid integral with {k} parameters"),
            remedy: "pass one to four parameters",
        });
    }
    check(x)?;
    let total: i64 = weights.iter().map(|w| i64::from(*w)).sum();
    let small = weights.iter().all(|w| w.unsigned_abs() < 1 << 20);
    if weights.len() != k + 2 || total != 0 || !small {
        return Err(Error::domain(
            "the sum of the weights of the valleys",
            total as f64,
            "pass K + 2 weights below a million that add up to zero",
        ));
    }
    let mut all = [0; VALLEYS];
    all[..k + 2].copy_from_slice(weights);
    let mut h: Polynomial = [ZERO; 7];
    for (m, x) in x.iter().enumerate() {
        h[m + 1] = Complex64::new(-x.im, x.re);
    }
    h[k + 2] = Complex64::new(0.0, 1.0);
    match k {
        1 => descent::sum::<3>(&h, &all),
        2 => descent::sum::<4>(&h, &all),
        3 => descent::sum::<5>(&h, &all),
        _ => descent::sum::<6>(&h, &all),
    }
}

/// `Psi_K` from infinity in valley `from` to infinity in valley `to`, with all first derivatives,
/// for K = 1 to 4 and parameters `x = [x_1, .., x_K]`.
///
/// Accuracy: about 1e-15 on the cuspoid scale, worst seen 1e-13. Cost: 7 to 20 us. No allocation.
///
/// # Errors
/// As [`moments`]; [`Error::Domain`] also for a valley that does not exist. Twice the same valley
/// gives zero.
///
/// ```
/// use merging_saddles::{Complex64, special::cuspoid};
/// // Psi_3(0) = 1.74646 (DLMF 36.2.16).
/// let v = cuspoid::between(&[Complex64::new(0.0, 0.0); 3], 2, 0)?;
/// assert!((v.psi.to_complex() - Complex64::new(1.74646, 0.0)).norm() < 1e-5);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn between<const K: usize>(
    x: &[Complex64; K],
    from: usize,
    to: usize,
) -> Result<Cuspoid<Scaled, K>, Error> {
    let mut weights = [0; VALLEYS];
    for valley in [from, to] {
        if valley >= VALLEYS.min(K + 2) {
            return Err(Error::domain("valley", valley as f64, "pass a valley below K + 2"));
        }
    }
    weights[from] -= 1;
    weights[to] += 1;
    let m = moments(x, &weights[..VALLEYS.min(K + 2)])?;
    let derivative = |j: usize| {
        let value = m.mantissas[j + 1];
        Scaled::new(Complex64::new(-value.im, value.re), m.exponent)
    };
    Ok(Cuspoid {
        psi: Scaled::new(m.mantissas[0], m.exponent),
        derivatives: std::array::from_fn(derivative),
    })
}

/// The Pearcey integral and its derivatives for real parameters.
pub fn pearcey(x1: f64, x2: f64) -> Result<Cuspoid<Complex64, 2>, Error> {
    check(&[Complex64::new(x1, 0.0), Complex64::new(x2, 0.0)])?;
    let m = pearcey::moments(x1, x2)?;
    let turned = |z: Complex64| Complex64::new(-z.im, z.re);
    Ok(Cuspoid { psi: m[0], derivatives: [turned(m[1]), turned(m[2])] })
}
