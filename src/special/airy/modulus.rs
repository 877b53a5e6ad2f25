//! Modulus and phase functions (DLMF 9.8).
//!
//! `Bi + i Ai = M e^(i theta)`, `Bi' + i Ai' = N e^(i phi)` for `x <= 0`. With `y = -x`,
//! `xi = (2/3) y^(3/2)` and the even and odd parts E, O of the expansions DLMF 9.7.9 to 9.7.12,
//! `M e^(i theta) = (E - i O) e^(i (xi + pi/4))/(sqrt(pi) y^(1/4))`: outside `|x| = 8.8` the phases
//! come without any reduction. Inside they are angles of the values, with the turns counted by
//! the same leading term.

use super::airy_real;
use super::asymptotic::{self, FARTHEST};
use super::nodes::RADIUS;
use crate::Error;
use std::f64::consts::{FRAC_PI_4, TAU};

/// Modulus and phase of the Airy functions at one point of the negative axis.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct ModulusPhase {
    /// `M = sqrt(Ai^2 + Bi^2)`.
    pub modulus: f64,
    /// theta, radians: `Ai = M sin theta`, `Bi = M cos theta`; pi/6 at 0, growing towards -infinity.
    pub phase: f64,
    /// `N = sqrt(Ai'^2 + Bi'^2)`.
    pub prime_modulus: f64,
    /// phi, radians: `Ai' = N sin phi`, `Bi' = N cos phi`; -pi/6 at 0.
    pub prime_phase: f64,
}

/// M, theta, N and phi of DLMF 9.8 for `x <= 0`.
///
/// The phases are continuous, not reduced: `theta(a_k) = k pi`; below -1e205 they overflow to
/// infinity. Accuracy: 1e-15 relative for `-1e12 <= x`, a unit in the last place more beyond (by count
/// of roundings). Cost: some 0.1 microseconds. Source: DLMF 9.8.
///
/// # Errors
/// [`Error::Domain`] for `x > 0`, NaN and infinity.
///
/// ```
/// use merging_saddles::special::airy::modulus_phase;
/// // theta(0) = pi/6, phi(0) = -pi/6, as tan theta = Ai/Bi = 1/sqrt(3): DLMF 9.2.3 to 9.2.6.
/// let v = modulus_phase(0.0)?;
/// assert!((v.phase - std::f64::consts::FRAC_PI_6).abs() < 2e-16);
/// assert!((v.prime_phase + std::f64::consts::FRAC_PI_6).abs() < 2e-16);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn modulus_phase(x: f64) -> Result<ModulusPhase, Error> {
    if !(x <= 0.0 && x.is_finite()) {
        return Err(Error::domain("x", x, "pass a finite number that is not above zero"));
    }
    let y = -x;
    if y < RADIUS {
        let v = airy_real(x);
        let lead = 2.0 / 3.0 * y * y.sqrt();
        let turned = |sin: f64, cos: f64, about: f64| {
            let angle = sin.atan2(cos);
            angle + TAU * ((about - angle) / TAU).round()
        };
        return Ok(ModulusPhase {
            modulus: v.ai.hypot(v.bi),
            phase: turned(v.ai, v.bi, lead + FRAC_PI_4),
            prime_modulus: v.ai_prime.hypot(v.bi_prime),
            prime_phase: turned(v.ai_prime, v.bi_prime, lead - FRAC_PI_4),
        });
    }
    let (xi, w) = if y <= FARTHEST {
        let (xi, w) = asymptotic::phase_real(y);
        (xi.hi, w)
    } else {
        (2.0 / 3.0 * y * y.sqrt(), y.sqrt())
    };
    let [u_even, u_odd, v_even, v_odd] = asymptotic::parts_turned(xi);
    let root = w.sqrt();
    Ok(ModulusPhase {
        modulus: asymptotic::RSQRT_PI / root * u_even.hypot(u_odd),
        phase: xi + (FRAC_PI_4 - (u_odd / u_even).atan()),
        prime_modulus: asymptotic::RSQRT_PI * root * v_even.hypot(v_odd),
        prime_phase: xi - (FRAC_PI_4 + (v_odd / v_even).atan()),
    })
}
