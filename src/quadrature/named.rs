//! Poles of the amplitude that the caller named, where the contour was drawn across one.
//!
//! The watch (`residue`) stops the contour before every pole that it can see; one whose weight is below
//! all that it can tell is passed. If it was named, the turns of the loop from the given contour back
//! along its image round it are counted, and the residue theorem (DLMF 1.10.8) makes the crossing good.
//!
//! Method. The residue of `g exp(k (h - h(p)))` by the trapezoidal rule on circles of falling radius; the
//! one with the least figure is taken: what it differs by from half its nodes and from the circle before,
//! and rounding.

use super::panels::relative_exp;
use super::terrain::Sampler;
use crate::integral::{Amplitude, Phase};
use crate::{Error, Scaled};
use num_complex::Complex64;
use std::f64::consts::{PI, TAU};

/// Nodes on a circle.
const NODES: usize = 64;
/// Circles, each a third of the one before.
const CIRCLES: usize = 24;

/// The turns of the loop out along one path and back along another, round a point.
pub(super) fn turns(there: &[Complex64], back: &[Complex64], p: Complex64) -> i32 {
    let angle = |path: &[Complex64]| -> f64 {
        let turn = |leg: &[Complex64]| ((leg[1] - p) / (leg[0] - p)).arg();
        path.windows(2).map(turn).filter(|t| t.is_finite()).sum()
    };
    ((angle(there) - angle(back)) / TAU).round() as i32
}

/// `2 pi i Res(g exp(k h))` at a pole, and its error; circles up to the given radius.
pub(super) fn residue<P: Phase, A: Amplitude>(
    sampler: &Sampler<'_, P, A>,
    p: Complex64,
    k: f64,
    room: f64,
) -> Result<(Scaled, Scaled), Error> {
    let site = sampler.site(p).ok_or(Error::NotFinite { what: "phase", at: p })?;
    // Only weak poles are passed: on a small circle there is little else.
    let mut radius = room.min(1.0 / (k * site.slope.norm())).min((k * site.bend.norm()).powf(-0.5));
    let mut last: Option<Complex64> = None;
    let mut best = (Complex64::new(0.0, 0.0), f64::INFINITY);
    for _ in 0..CIRCLES {
        // All nodes, every second one; the modulus, and what the amplitude varies by.
        let zero = Complex64::new(0.0, 0.0);
        let (mut sum, mut half, mut size, mut variation) = (zero, zero, 0.0, 0.0);
        let mut before: Option<Complex64> = None;
        let mut complete = true;
        for node in 0..NODES {
            let z = p + Complex64::from_polar(radius, TAU * node as f64 / NODES as f64);
            let (Some(h), Some(g)) = (sampler.exponent(z), sampler.amplitude(z)) else {
                complete = false;
                break;
            };
            // The circle as it is after rounding.
            let term = g * relative_exp(k, h, site.h) * (z - p) / NODES as f64;
            sum += term;
            half += if node % 2 == 0 { term * 2.0 } else { zero };
            size += term.norm();
            variation += before.replace(g).map_or(0.0, |before| (g - before).norm()) * radius / TAU;
        }
        let noise = k * sampler.noise_scale(p) * f64::EPSILON;
        let place = 2.0 * f64::EPSILON * p.norm() / radius;
        let change = last.replace(sum).map_or(f64::INFINITY, |last| (sum - last).norm());
        let rounding = (4.0 * f64::EPSILON + noise) * size + place * variation;
        let figure = (sum - half).norm().max(change) + rounding;
        if complete && figure < best.1 {
            best = (sum, figure);
        }
        radius /= 3.0;
    }
    if !best.1.is_finite() {
        return Err(Error::NotFinite { what: "amplitude", at: p });
    }
    let front = Scaled::exp(site.h * k);
    let noise = 4.0 * f64::EPSILON * k * site.h.norm() * best.0.norm();
    let error = Scaled::from(Complex64::new(2.0 * PI * (best.1 + noise), 0.0));
    Ok((front * (best.0 * Complex64::new(0.0, 2.0 * PI)), front.norm() * error))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn turns_are_counted_with_their_sign() {
        let c = Complex64::new;
        let (low, high) = ([c(-1.0, 0.0), c(1.0, 0.0)], [c(-1.0, 0.0), c(0.0, 1.0), c(1.0, 0.0)]);
        assert_eq!(turns(&low, &high, c(0.0, 0.5)), 1);
        assert_eq!(turns(&high, &low, c(0.0, 0.5)), -1);
        assert_eq!(turns(&low, &high, c(0.0, 1.5)), 0);
    }
}
