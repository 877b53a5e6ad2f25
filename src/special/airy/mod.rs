//! Airy functions (DLMF chapter 9): Ai, Bi and their derivatives, for complex and real argument,
//! plain, scaled, or with the exponent apart.
//!
//! | what | functions |
//! | --- | --- |
//! | all four | [`airy()`], [`airy_real`], [`airy_scaled`], [`airy_real_scaled`], [`airy_extended`] |
//! | one alone | [`ai`], [`ai_real`], [`bi`], [`bi_real`] |
//! | Ai at `z e^(+-2 pi i/3)` | [`rotated`], [`rotated_extended`] |
//! | zeros | [`ai_zero`], [`ai_prime_zero`], [`bi_zero`], [`bi_prime_zero`], [`bi_complex_zero`], [`bi_prime_complex_zero`] |
//! | modulus and phase | [`modulus_phase`] |
//! | Scorer functions | [`scorer`](scorer()), [`scorer_real`], [`scorer_extended`] |
//! | integrals of Ai | [`ai_integral`], [`ai_integral_real`], [`ai_integral_extended`] |
//! | incomplete integrals | [`incomplete_airy`], [`incomplete_airy_extended`] |
//! | over slices | each with `_slice` at its end |
//!
//! Method: everything is done in the upper half plane (below by conjugation) with the pair Ai and
//! `B1 = Bi - i Ai = 2 e^(-i pi/6) Ai(z e^(-2 pi i/3))` (DLMF 9.2.11), whose combinations do not
//! cancel. Inside `|z| < 8.8` one Taylor step from a lattice of nodes; outside the asymptotic
//! expansions DLMF 9.7 with the phase `(2/3) z^(3/2)` in double-double.
//!
//! Accuracy: on the natural scale, that is, `|error of f| / max(|f|, |f'|/sqrt(1+|z|))` and
//! `|error of f'| / max(|f'|, |f| sqrt(1+|z|))`, which is the relative error away from zeros.
//!
//! Range: beyond `|z| = 1e12` the phase exceeds 10^18 and no digit of an oscillating value can be
//! had. There the functions return the limits that need no phase (0 where Ai is recessive,
//! infinity for Bi on the positive real axis, `e^zeta Ai` in full) and NaN for the rest.

mod asymptotic;
mod incomplete;
mod integral;
mod modulus;
mod nodes;
mod pair;
mod scaled;
mod scorer;
mod scorer_nodes;
mod single;
mod slices;
mod taylor;
mod zeros;

pub use self::incomplete::{IncompleteAiry, incomplete_airy, incomplete_airy_extended};
pub use self::integral::{AiryIntegral, ai_integral, ai_integral_extended, ai_integral_real};
pub use self::modulus::{ModulusPhase, modulus_phase};
pub use self::scaled::{airy_real_scaled, airy_scaled};
pub use self::scorer::{Scorer, scorer, scorer_extended, scorer_real};
pub use self::single::{ai, ai_real, bi, bi_real};
pub use self::slices::*;
pub use self::zeros::{
    Zero, ai_prime_zero, ai_zero, bi_complex_zero, bi_prime_complex_zero, bi_prime_zero, bi_zero,
};

use self::pair::{airy_any, airy_beyond, in_range, pair_real, rotated_any};
use crate::Scaled;
use crate::scaled::ldexp;
use num_complex::Complex64;

/// The four values of the Airy functions at one point.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Airy<T> {
    /// Ai.
    pub ai: T,
    /// Ai'.
    pub ai_prime: T,
    /// Bi.
    pub bi: T,
    /// Bi'.
    pub bi_prime: T,
}

/// The rotated pair: Ai and Ai' at `z e^(2 pi i/3)` (`plus`) and at `z e^(-2 pi i/3)` (`minus`).
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Rotated<T> {
    /// Ai(z e^(2 pi i/3)).
    pub plus: T,
    /// Ai'(z e^(2 pi i/3)), the derivative of Ai taken at the rotated point.
    pub plus_prime: T,
    /// Ai(z e^(-2 pi i/3)).
    pub minus: T,
    /// Ai'(z e^(-2 pi i/3)).
    pub minus_prime: T,
}

impl<T> Airy<T> {
    /// The same operation on all four.
    #[inline]
    fn map<U>(self, operation: impl Fn(T) -> U) -> Airy<U> {
        Airy {
            ai: operation(self.ai),
            ai_prime: operation(self.ai_prime),
            bi: operation(self.bi),
            bi_prime: operation(self.bi_prime),
        }
    }
}

/// Ai, Ai', Bi, Bi' at a complex point.
///
/// The solutions of `u'' = z u` of DLMF 9.2. Overflow gives infinite components, underflow zeros
/// or subnormal numbers; NaN gives NaN. Beyond `|z| = 1e12` see the module's page.
///
/// Accuracy (natural scale, see the module's page): 2e-15 at most for `|z| <= 100`, 7e-16 for 99 of 100 points. The imaginary
/// part of Bi close to the positive real axis, where it is exponentially small beside the real
/// part, is right on that scale only. Cost: some 0.1 microseconds.
///
/// Source: DLMF 9.2, 9.7.
///
/// ```
/// use merging_saddles::{Complex64, special::airy::airy};
/// let v = airy(Complex64::new(0.0, 0.0));
/// // Ai(0) = 3^(-2/3)/Gamma(2/3), Bi(0) = 3^(-1/6)/Gamma(2/3): DLMF 9.2.3, 9.2.5.
/// assert!((v.ai.re - 0.355028053887817239).abs() < 1e-16);
/// assert!((v.bi.re - 0.614926627446000736).abs() < 2e-16);
/// ```
pub fn airy(z: Complex64) -> Airy<Complex64> {
    airy_any(z)
}

/// Ai, Ai', Bi, Bi' at a real point.
///
/// Overflow and underflow as in [`airy`]. Accuracy: 1e-15 for `-1e6 <= x <= 100`, relative for
/// `x >= 0` and to the modulus `sqrt(Ai^2 + Bi^2)` (or that of the derivatives) for `x < 0`.
/// Cost: some 0.04 microseconds. Source: DLMF 9.2, 9.7.
///
/// ```
/// use merging_saddles::special::airy::airy_real;
/// // The first zero of Ai and the slope there: DLMF table 9.9.1.
/// let v = airy_real(-2.338107410459767);
/// assert!(v.ai.abs() < 1e-15 && (v.ai_prime - 0.70121_08227).abs() < 1e-10);
/// ```
pub fn airy_real(x: f64) -> Airy<f64> {
    let z = Complex64::new(x, 0.0);
    if !in_range(z) {
        return airy_beyond::<Complex64>(z).map(|v| v.re);
    }
    let ([a, a_prime, b, b_prime], n) = pair_real(x);
    Airy {
        ai: ldexp(a, n),
        ai_prime: ldexp(a_prime, n),
        bi: ldexp(b, -n),
        bi_prime: ldexp(b_prime, -n),
    }
}

/// Ai, Ai', Bi, Bi' with the exponent carried apart: nothing over- or underflows for `|z| <= 1e12`.
///
/// Accuracy: 2e-15 on the natural scale for `|z| <= 1e6`, 1e-14 up to 1e12; the real and the imaginary part share
/// the exponent. Cost: some 0.12 microseconds. Source: DLMF 9.2, 9.7.
///
/// ```
/// use merging_saddles::{Complex64, special::airy::airy_extended};
/// let v = airy_extended(Complex64::new(1e4, 1e4));
/// // The Wronskian (DLMF 9.2.7) of values near 10^-500000 and 10^500000.
/// let wronskian = v.ai * v.bi_prime + -(v.ai_prime * v.bi);
/// assert!((wronskian.to_complex() * std::f64::consts::PI - 1.0).norm() < 1e-14);
/// ```
pub fn airy_extended(z: Complex64) -> Airy<Scaled> {
    airy_any(z)
}

/// Ai and Ai' at `z e^(2 pi i/3)` and `z e^(-2 pi i/3)`.
///
/// Any two of `Ai(z)` and these two make a pair of solutions; `minus` is the recessive one in the
/// sector around `arg z = 2 pi/3`, `plus` around `-2 pi/3`. The rotated point itself is never
/// rounded. Overflow and NaN as in [`airy`]. Accuracy: 2e-15 on the natural scale for
/// `|z| <= 100`. Cost: as [`airy`]. Source: DLMF 9.2.10 to 9.2.12.
///
/// ```
/// use merging_saddles::{Complex64, special::airy::{airy, rotated}};
/// let z = Complex64::new(0.7, -0.4);
/// let (r, w) = (rotated(z), Complex64::from_polar(1.0, 2.0 * std::f64::consts::PI / 3.0));
/// // DLMF 9.2.12: Ai(z) + w Ai(z w) + w^-1 Ai(z w^-1) = 0.
/// assert!((airy(z).ai + w * r.plus + r.minus / w).norm() < 1e-15);
/// ```
pub fn rotated(z: Complex64) -> Rotated<Complex64> {
    rotated_any(z)
}

/// [`rotated`] with the exponents carried apart.
///
/// ```
/// use merging_saddles::{Complex64, special::airy::rotated_extended};
/// let r = rotated_extended(Complex64::new(-2e4, 2e4));
/// // DLMF 9.2.9: the Wronskian of Ai(z e^(-2 pi i/3)) and Ai(z e^(2 pi i/3)) is 1/(2 pi i); the
/// // derivatives of the two functions of z carry the factors e^(-+2 pi i/3).
/// let w = Complex64::from_polar(1.0, 2.0 * std::f64::consts::PI / 3.0);
/// let wronskian = r.minus * r.plus_prime * w + -(r.minus_prime * r.plus * w.conj());
/// let exact = Complex64::new(0.0, -0.5 / std::f64::consts::PI);
/// assert!((wronskian.to_complex() - exact).norm() < 1e-15);
/// ```
pub fn rotated_extended(z: Complex64) -> Rotated<Scaled> {
    rotated_any(z)
}
