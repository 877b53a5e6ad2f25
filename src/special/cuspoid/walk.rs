//! Down from a hub into a valley, on straight pieces.
//!
//! The length of a piece solves `sum |h^(m)| rho^m/m! = 10 + 0.6 x (drop so far)`: short enough for
//! a 20-point rule, and it grows as what is left to integrate loses weight. Its direction is that
//! of steepest descent at the midpoint of a first guess. A point lies surely in its valley when
//! the landscape falls all the way outwards on its ray:
//! `D Im t^D >= sum m max(0, Re(i x_m t^m))`, `Im t^D > 0`.

use super::hubs::Hub;
use super::polynomial::{Polynomial, ZERO, shifted, slope, value};
use num_complex::Complex64;

/// Where the integrand is `e^-DEPTH` of what it was at the top, nothing more is added.
pub(super) const DEPTH: f64 = 39.0;
/// Vertices of an arm that are kept.
pub(super) const VERTICES: usize = 24;
/// The rule's error follows the exponent a little beyond the piece, where high powers grow most.
const STRETCH: f64 = 1.1;
/// The part of a full step's terms that the first one makes up where a saddle is near.
const DOORSTEP: f64 = 0.08;
/// Steps at most, kept or not.
pub(super) const STEPS: usize = 250;

/// One arm: vertices relative to the hub, the first one 0.
#[derive(Clone, Copy)]
pub(super) struct Arm {
    pub vertices: [Complex64; VERTICES],
    /// Fall of the landscape from the hub to each vertex.
    pub drops: [f64; VERTICES],
    pub count: usize,
    pub valley: usize,
}

impl Arm {
    pub const BLANK: Arm =
        Arm { vertices: [ZERO; VERTICES], drops: [0.0; VERTICES], count: 0, valley: 0 };
}

/// Unit vector along which `h` falls steepest, from its derivative.
#[inline]
fn downhill(derivative: Complex64) -> Complex64 {
    -derivative.conj() * (1.0 / derivative.norm_sqr().sqrt())
}

#[inline]
fn size(z: Complex64) -> f64 {
    z.norm_sqr().sqrt()
}

#[inline]
fn sizes<const D: usize>(local: &Polynomial) -> [f64; 7] {
    let mut out = [0.0; 7];
    for (out, term) in out.iter_mut().zip(local).take(D + 1) {
        *out = size(*term);
    }
    out
}

/// What the terms of a panel may add up to.
#[inline]
fn panel(drop: f64) -> f64 {
    12.0 + 0.6 * drop.max(0.0)
}

/// The positive `rho` with `sum size_m rho^m = target`, within a few per cent.
#[inline]
fn reach<const D: usize>(sizes: &[f64; 7], target: f64) -> f64 {
    // (target/size)^(1/m) for each term alone, with the bits of a number as its logarithm (in
    // error by at most 0.09); the least of them is too far by a factor of at most D^(1/D).
    let mut least = i64::MAX;
    for (m, size) in sizes.iter().enumerate().take(D + 1).skip(1) {
        let ratio = target.to_bits() as i64 - size.to_bits() as i64;
        least = least.min(ratio / m as i64);
    }
    let one = 1.0f64.to_bits() as i64;
    let mut rho = 1.1 * f64::from_bits((least + one) as u64);
    // Newton's method on the convex sum comes down from there.
    for _ in 0..5 {
        let (mut sum, mut growth) = (0.0, 0.0);
        for m in (1..=D).rev() {
            growth = growth * rho + sum;
            sum = sum * rho + sizes[m];
        }
        // The sum so far lacks one factor rho.
        growth = growth * rho + sum;
        sum *= rho;
        let step = (sum - target) / growth;
        rho -= step;
        if step < 0.04 * rho {
            break;
        }
    }
    rho
}

/// Whether the landscape falls from one to the next of a few points on the way along `step`, so
/// that no ridge is crossed.
#[inline]
fn falls<const D: usize>(local: &Polynomial, step: Complex64) -> bool {
    let mut line = [0.0; 7];
    let mut power = step;
    for m in 1..=D {
        line[m] = (local[m] * power).re;
        power *= step;
    }
    let at = |x: f64| (1..=D).rev().fold(0.0, |sum, m| (sum + line[m]) * x);
    let heights = [at(0.25), at(0.5), at(0.75), at(1.0)];
    heights[0] < 0.0 && heights.windows(2).all(|pair| pair[1] < pair[0])
}

/// The step of length `rho` to the lowest of a few points around that can be reached falling.
fn lowest<const D: usize>(local: &Polynomial, rho: f64) -> Option<Complex64> {
    const ROUND: usize = 16;
    let mut best = (0.0, None);
    for k in 0..ROUND {
        let step = Complex64::from_polar(rho, std::f64::consts::TAU * k as f64 / ROUND as f64);
        let height = value::<D>(local, step).re - local[0].re;
        if height < best.0 && falls::<D>(local, step) {
            best = (height, Some(step));
        }
    }
    best.1
}

/// The valley in which `t` surely lies.
#[inline]
fn valley<const D: usize>(h: &Polynomial, t: Complex64) -> Option<usize> {
    let mut power = t;
    let mut rise = 0.0;
    for (m, c) in h.iter().enumerate().take(D - 1).skip(1) {
        rise += (m as f64) * (c * power).re.max(0.0);
        power *= t;
    }
    // power = t^(D-1)
    let depth = (power * t).im;
    if !(depth > 0.0 && D as f64 * depth > rise) {
        return None;
    }
    let turn = t.arg() * (D as f64 / std::f64::consts::TAU) - 0.25;
    Some((turn.round() as i64).rem_euclid(D as i64) as usize)
}

/// Follows the arm that leaves `hub` in the given direction; None if it does not arrive.
pub(super) fn arm<const D: usize>(
    h: &Polynomial,
    hub: &Hub,
    direction: Complex64,
    arm: &mut Arm,
) -> Option<()> {
    arm.vertices[0] = ZERO;
    arm.drops[0] = 0.0;
    arm.count = 1;
    // Out of the group straight, then downhill.
    let (mut s, mut local, mut drop) = (ZERO, hub.local, 0.0);
    let mut gone = 0.0;
    while gone < hub.radius {
        let sizes = sizes::<D>(&local);
        let rho = reach::<D>(&sizes, panel(drop)) / STRETCH;
        // What is left in one or two equal parts rather than a short last one.
        let left = hub.radius - gone;
        gone = if rho >= left {
            hub.radius
        } else if rho > 0.5 * left {
            gone + 0.5 * left
        } else {
            gone + rho
        };
        s = direction * gone;
        local = shifted::<D>(&hub.local, s);
        drop = hub.local[0].re - local[0].re;
        if arm.count == VERTICES {
            return None;
        }
        arm.vertices[arm.count] = s;
        arm.drops[arm.count] = drop;
        arm.count += 1;
    }
    for _ in 0..STEPS {
        if drop > DEPTH
            && let Some(v) = valley::<D>(h, hub.at + s)
        {
            arm.valley = v;
            return Some(());
        }
        let sizes = sizes::<D>(&local);
        if sizes[1] == 0.0 {
            return None;
        }
        let mut rho = reach::<D>(&sizes, panel(drop)) / STRETCH;
        let first = downhill(local[1]);
        // On another saddle's doorstep steepest descent would stop there: look round instead.
        let mut turned =
            if sizes[1] * rho < DOORSTEP * panel(drop) { lowest::<D>(&local, rho) } else { None };
        let mut moved = false;
        for _ in 0..40 {
            let step = match turned.take() {
                Some(step) => step,
                None => {
                    let half = slope::<D>(&local, first * (0.5 * rho));
                    let along = if half == ZERO { first } else { downhill(half) };
                    let step = along * rho;
                    rho *= 0.5;
                    if !falls::<D>(&local, step) {
                        continue;
                    }
                    step
                }
            };
            let next = s + step;
            let there = shifted::<D>(&hub.local, next);
            let fall = local[0].re - there[0].re;
            if fall > 0.0 {
                (s, local) = (next, there);
                drop += fall;
                moved = true;
                break;
            }
        }
        if !moved {
            return None;
        }
        if arm.drops[arm.count - 1] < DEPTH {
            if arm.count == VERTICES {
                return None;
            }
            arm.vertices[arm.count] = s;
            arm.drops[arm.count] = drop;
            arm.count += 1;
        }
    }
    None
}
