//! Incomplete canonical integrals: from a point inside the ring down into a valley.
//!
//! `J_l = integral from u_e to infinity in valley v of u^l exp(i k (Phi(u) - Phi(u_e))) du`, `l = 0..K`.
//!
//! Method. Straight steps down the steepest descent of `Re(i Phi)`, each integrated by 20-point
//! Gauss-Legendre. A step is as long as the Taylor terms of `k Phi` at its start allow the rule to
//! be exact to rounding, towards the lowest point at that distance, and shorter where the exponent would turn
//! more than it falls. After a drop of 42 the rest is below rounding. The error is what rounding makes
//! of the exponent, term by term. If the descent ends in another valley than asked for, the complete canonical
//! integrals between the two make up the difference, so no Stokes line needs care.
//!
//! Source: the rule's nodes are the zeros of P_20 (DLMF 18.3, 3.5(v)).

use super::canonical::Moments;
use super::unfolding::Unfolding;
use crate::ring::{MAX_SADDLES, ZERO};
use crate::saddles::Multiplicities;
pub(super) use crate::special::panels::RULE;
use num_complex::Complex64;
use std::f64::consts::PI;

/// Steps of one descent at most.
pub(super) const STEPS: usize = 100;
/// Rounding of the exponent relative to the sizes of the terms it is summed from.
pub(super) const ROUNDING: f64 = 0.5 * f64::EPSILON;
/// A step whose exponent falls by less than this part of its Taylor terms is cut.
const STRAIGHT: f64 = 0.7;
/// Where the integrand is below rounding.
pub(super) const FLOOR: f64 = 42.0;

/// Incomplete moments with a bound on the error of each.
#[derive(Clone, Copy)]
pub(crate) struct Incomplete {
    pub values: [Complex64; MAX_SADDLES],
    pub errors: [f64; MAX_SADDLES],
}

/// Moments `J_0 .. J_K` from `u_e` into the valley, without the factor `exp(i k Phi(u_e))`; None if
/// the descent does not arrive.
pub(crate) fn incomplete(
    phi: &Unfolding,
    u_e: Complex64,
    valley: usize,
    k: f64,
) -> Option<Incomplete> {
    let degree = phi.degree();
    let count = degree - 1;
    let ik = Complex64::new(0.0, k);
    let mut sum = [ZERO; MAX_SADDLES];
    let mut errors = [0.0; MAX_SADDLES];
    let mut u = u_e;
    // i k (Phi(u) - Phi(u_e)) at the start of the step, summed from exact differences, and its rounding.
    let mut exponent = ZERO;
    let mut blur = 4.0;
    let mut arrived = false;
    for _ in 0..STEPS {
        let drop = -exponent.re;
        if drop > FLOOR {
            arrived = true;
            break;
        }
        let taylor = phi.about(u).map(|t| t * ik);
        let step = descent(&taylor[1..=degree], budget(degree, drop))?;
        let middle = step * 0.5;
        let along =
            |s: Complex64| taylor[1..=degree].iter().rev().fold(ZERO, |sum, &t| (sum + t) * s);
        blur += k * phi.terms(u, step);
        let mut sizes = [0.0; MAX_SADDLES];
        for (node, weight) in RULE {
            for s in [middle * (1.0 - node), middle * (1.0 + node)] {
                let mut term = (exponent + along(s)).exp() * middle * weight;
                for (sum, size) in sum.iter_mut().zip(&mut sizes).take(count) {
                    *sum += term;
                    // The descent cancels little, but the powers of u may.
                    *size += term.re.abs() + term.im.abs();
                    term *= u + s;
                }
            }
        }
        for (error, size) in errors.iter_mut().zip(sizes) {
            *error += ROUNDING * blur * size;
        }
        exponent += along(step);
        u += step;
    }
    if !arrived {
        return None;
    }
    let here = valley_of(phi, u, k)?;
    if here != valley {
        let between = Moments::new(phi, &between(here, valley, degree), k)?;
        let factor = crate::Scaled::exp(-ik * phi.value(u_e));
        let blur = 16.0 + k * phi.terms(ZERO, u_e);
        for ((sum, error), &value) in sum.iter_mut().zip(&mut errors).zip(&between.values) {
            let whole = (factor * crate::Scaled::new(value, between.exponent)).to_complex();
            *sum += whole;
            *error += ROUNDING * blur * whole.norm();
        }
    }
    Some(Incomplete { values: sum, errors })
}

/// What the Taylor terms of a step may sum to for the rule to be exact, for a polynomial of the given
/// degree, after a drop.
pub(super) fn budget(degree: usize, drop: f64) -> f64 {
    (36.0 / degree as f64).min(10.0) + 0.5 * drop
}

/// Multiplicities of the way from one valley to another.
pub(super) fn between(from: usize, to: usize, degree: usize) -> Multiplicities {
    let mut m: Multiplicities = [0; MAX_SADDLES + 1];
    let mut v = from;
    while v != to {
        m[v] = 1;
        v = (v + 1) % degree;
    }
    m
}

/// The valley that a descent is in: the leading behaviour, followed on until `u^D` decides.
pub(super) fn valley_of(phi: &Unfolding, u: Complex64, k: f64) -> Option<usize> {
    let degree = phi.degree();
    let count = degree - 1;
    let ik = Complex64::new(0.0, k);
    let mut at = u;
    for _ in 0..STEPS {
        let lead = at.norm().powi(degree as i32 - 1) * degree as f64;
        let rest: f64 =
            (1..count).map(|j| j as f64 * phi.x(j).norm() * at.norm().powi(j as i32 - 1)).sum();
        let phase = (Complex64::new(0.0, 1.0) * at.powi(degree as i32)).re;
        if rest < 0.3 * lead && phase < -0.8 * at.norm().powi(degree as i32) {
            break;
        }
        let taylor = phi.about(at).map(|t| t * ik);
        let drop = -(phi.value(at) * ik).re;
        at += descent(&taylor[1..=degree], 10.0 + drop.abs())?;
    }
    let here = (at.arg() - 0.5 * PI / degree as f64) * degree as f64 / (2.0 * PI);
    Some((here.round() as i64).rem_euclid(degree as i64) as usize)
}

/// A step down: as long as the Taylor terms (of `i k Phi`, from the first on) sum to `budget`, in the
/// direction that descends most; shorter if the exponent would turn more than it falls.
pub(super) fn descent(taylor: &[Complex64], budget: f64) -> Option<Complex64> {
    let total = |rho: f64| taylor.iter().rev().fold(0.0, |sum, t| (sum + t.norm()) * rho);
    let mut rho = reach(taylor, budget)?;
    let value = |s: Complex64| taylor.iter().rev().fold(ZERO, |sum, &t| (sum + t) * s);
    for _ in 0..12 {
        let straight = |s: Complex64| value(s).re < -STRAIGHT * total(rho);
        // From the descent at the midpoint of the step to the lowest point at this distance.
        let turn =
            -(taylor[0] + taylor.get(1).copied().unwrap_or(ZERO) * descending(taylor[0]) * rho);
        if turn.norm() > 1e-3 * total(rho) / rho {
            let mut step = turn.conj() / turn.norm() * rho;
            for _ in 0..3 {
                // Re value(s e^(i t)) about t = 0: slope and curvature.
                let (mut first, mut second) = (ZERO, ZERO);
                for (n, &t) in taylor.iter().enumerate().rev() {
                    let n = (n + 1) as f64;
                    first = first * step + t * n;
                    second = second * step + t * (n * n);
                }
                let (slope, bend) = (-(first * step).im, -(second * step).re);
                if bend <= 0.0 {
                    break;
                }
                step *= Complex64::from_polar(1.0, (-slope / bend).clamp(-0.5, 0.5));
            }
            if straight(step) {
                return Some(step);
            }
        }
        let best = (0..64)
            .map(|n| Complex64::from_polar(rho, 2.0 * PI * f64::from(n) / 64.0))
            .min_by(|a, b| value(*a).re.total_cmp(&value(*b).re))?;
        if straight(best) {
            return Some(best);
        }
        rho *= 0.5;
    }
    None
}

/// The direction in which a function with this derivative descends.
fn descending(slope: Complex64) -> Complex64 {
    let size = slope.norm();
    if size > 0.0 { -slope.conj() / size } else { ZERO }
}

/// The largest length for which the Taylor terms (from the first on) sum to `budget`.
pub(super) fn reach(taylor: &[Complex64], budget: f64) -> Option<f64> {
    let total = |rho: f64| taylor.iter().rev().fold(0.0, |sum, t| (sum + t.norm()) * rho);
    // The largest rho with total(rho) <= budget, by bisection on a bracket from single terms.
    let mut high = f64::INFINITY;
    for (n, t) in taylor.iter().enumerate() {
        if t.norm() > 0.0 {
            high = high.min((budget / t.norm()).powf(1.0 / (n + 1) as f64));
        }
    }
    if !high.is_finite() {
        return None;
    }
    let mut low = 0.0;
    for _ in 0..30 {
        let middle = 0.5 * (low + high);
        if total(middle) > budget {
            high = middle
        } else {
            low = middle
        }
        if high - low < 0.02 * high {
            break;
        }
    }
    Some(low.max(0.25 * high))
}
