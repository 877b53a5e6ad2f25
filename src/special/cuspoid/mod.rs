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
//! Method: any two valleys by descents from the saddles (`descent`, `hubs`, `walk`), saddles far from
//! the others by one trapezoidal rule (`lone`), the Pearcey integral on the real line from a table
//! by one Taylor step, from its lone saddles (`pearcey`) or two that merge (`fold`). Phases are carried in double-double.
//!
//! Accuracy is counted on the cuspoid scale: with `T = 1 + sum_m |x_m|^(1/(K+2-m))` and
//! `S = max(|Psi|, |dPsi/dx_m|/T^m)`, an error of Psi against S, one of `dPsi/dx_m` against
//! `S T^m`. That is the relative error away from zeros, and stays meaningful on them.
//!
//! Range: the inputs are taken as exact. Where the phase at the outermost saddle exceeds 1e16 the
//! functions refuse with [`Error::NoDigits`], which says how many digits inputs that are themselves
//! rounded would allow (a negative number there).

mod descent;
mod fold;
mod hubs;
mod integrate;
mod lone;
mod panel;
mod pearcey;
mod pearcey_nodes;
mod polynomial;
mod slices;
mod walk;
mod zeros;

use crate::{Error, Scaled};
use descent::VALLEYS;
use num_complex::Complex64;
use polynomial::{Polynomial, ZERO};
pub use slices::*;
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
    for (m, x) in x.iter().enumerate() {
        if !(x.re.is_finite() && x.im.is_finite()) {
            return Err(Error::Domain {
                what: ["x_1", "x_2", "x_3", "x_4"][m],
                value: *x,
                remedy: "pass finite parameters",
            });
        }
    }
    let degree = x.len() + 2;
    for (m, x) in x.iter().enumerate().map(|(m, x)| (m + 1, x)) {
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
/// Accuracy on the cuspoid scale: 3e-15 in the tables, median 2e-16; the worst of 1.2 million random
/// sums, with saddles that coincide or nearly so among them, 6e-14. Cost: 5 to 15 us. No allocation.
/// The mantissas are not brought to any standard size.
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
/// Accuracy as [`moments`]. Cost: about 6 us for K = 2, 8 us for K = 3, 11 us for K = 4.
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

impl<const K: usize> Cuspoid<Scaled, K> {
    /// Plain numbers: infinity or zero where they do not fit.
    pub fn to_complex(self) -> Cuspoid<Complex64, K> {
        Cuspoid {
            psi: self.psi.to_complex(),
            derivatives: self.derivatives.map(Scaled::to_complex),
        }
    }
}

/// `Psi_K(x)` along the real line (DLMF 36.2.4) for complex parameters `x = [x_1, .., x_K]`, with all
/// first derivatives: [`between`] from valley `floor((K+2)/2)` to valley 0.
///
/// # Errors
/// As [`between`].
///
/// ```
/// use merging_saddles::{Complex64, special::cuspoid};
/// // Psi_1(0) = 2 pi 3^(-1/3) Ai(0) = 1.54669 (DLMF 36.2.13, 36.2.16).
/// let v = cuspoid::real_line(&[Complex64::new(0.0, 0.0)])?.to_complex();
/// assert!((v.psi.re - 1.54669).abs() < 5e-6 && v.psi.im.abs() < 1e-15);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn real_line<const K: usize>(x: &[Complex64; K]) -> Result<Cuspoid<Scaled, K>, Error> {
    between(x, (K + 2) / 2, 0)
}

/// The Pearcey integral `Psi_2(x_1, x_2) = integral of exp(i (t^4 + x_2 t^2 + x_1 t)) dt` (DLMF
/// 36.2.14) for real parameters, with its first derivatives; `derivatives` holds `dPsi/dx_1`,
/// `dPsi/dx_2`.
///
/// Accuracy on the cuspoid scale: 7e-15 for `|x_2| <= 16`, `|x_1| <= 32` (99 of 100 below 2e-15),
/// 1.5e-15 outside, on the caustic as elsewhere, and no worse for parameters of 1e6. Cost: 0.2 us
/// inside that box; outside 0.7 us in the median, 1 us on the caustic, up to 10 us in a strip inside it.
///
/// # Errors
/// [`Error::Domain`] for parameters that are not finite, [`Error::NoDigits`] beyond the range.
///
/// ```
/// use merging_saddles::special::cuspoid::pearcey;
/// // Psi_2(0, 0) = 1.67481 + 0.69373 i (DLMF 36.2.16).
/// let v = pearcey(0.0, 0.0)?;
/// assert!((v.psi.re - 1.67481).abs() < 5e-6 && (v.psi.im - 0.69373).abs() < 5e-6);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn pearcey(x1: f64, x2: f64) -> Result<Cuspoid<Complex64, 2>, Error> {
    check(&[Complex64::new(x1, 0.0), Complex64::new(x2, 0.0)])?;
    let m = pearcey::moments(x1, x2)?;
    let turned = |z: Complex64| Complex64::new(-z.im, z.re);
    Ok(Cuspoid { psi: m[0], derivatives: [turned(m[1]), turned(m[2])] })
}

/// The swallowtail integral `Psi_3(x_1, x_2, x_3) = integral of
/// exp(i (t^5 + x_3 t^3 + x_2 t^2 + x_1 t)) dt` (DLMF 36.2.4) for real parameters, with its first
/// derivatives; complex parameters: [`real_line`].
///
/// Accuracy: 2e-15 on the cuspoid scale. Cost: about 8 us.
///
/// # Errors
/// [`Error::Domain`] for parameters that are not finite, [`Error::NoDigits`] beyond the range.
///
/// ```
/// use merging_saddles::special::cuspoid::swallowtail;
/// // Psi_3(0, 0, 0) = 1.74646 (DLMF 36.2.16).
/// assert!((swallowtail(0.0, 0.0, 0.0)?.psi.re - 1.74646).abs() < 5e-6);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn swallowtail(x1: f64, x2: f64, x3: f64) -> Result<Cuspoid<Complex64, 3>, Error> {
    real_line(&[x1, x2, x3].map(|x| Complex64::new(x, 0.0))).map(Cuspoid::to_complex)
}

/// The butterfly integral `Psi_4(x_1, .., x_4) = integral of
/// exp(i (t^6 + x_4 t^4 + x_3 t^3 + x_2 t^2 + x_1 t)) dt` (DLMF 36.2.4) for real parameters, with its
/// first derivatives; complex parameters: [`real_line`].
///
/// Accuracy: 3e-15 on the cuspoid scale. Cost: about 11 us.
///
/// # Errors
/// [`Error::Domain`] for parameters that are not finite, [`Error::NoDigits`] beyond the range.
///
/// ```
/// use merging_saddles::special::cuspoid::butterfly;
/// // Psi_4(0, 0, 0, 0) = 1.79222 + 0.48022 i (DLMF 36.2.16).
/// let v = butterfly(0.0, 0.0, 0.0, 0.0)?;
/// assert!((v.psi.re - 1.79222).abs() < 5e-6 && (v.psi.im - 0.48022).abs() < 5e-6);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn butterfly(x1: f64, x2: f64, x3: f64, x4: f64) -> Result<Cuspoid<Complex64, 4>, Error> {
    real_line(&[x1, x2, x3, x4].map(|x| Complex64::new(x, 0.0))).map(Cuspoid::to_complex)
}
