//! Integrals down the arms of the hubs: one lone line or Gauss-Legendre panels for each.

use super::Moments;
use super::descent::Forest;
use super::hubs::{Hub, Hubs};
use super::lone;
use super::panel::{self, MOMENTS};
use super::polynomial::{Polynomial, ZERO, moments_about_zero, precise, shifted, stretched};
use super::walk::{Arm, DEPTH};
use crate::special::double_double::{Precise, exponential};
use num_complex::Complex64;

/// The sum over the edges of flow times integral; every panel in so many pieces.
pub(super) fn integrate<const D: usize>(
    h: &Polynomial,
    hubs: &Hubs,
    forest: &Forest,
    pieces: usize,
) -> Moments {
    let edges = &forest.edges[..forest.count];
    let top = edges
        .iter()
        .filter(|e| e.flow != 0)
        .fold(f64::NEG_INFINITY, |top, e| top.max(hubs.list[e.hub].height()));
    let mut total = Moments { mantissas: [ZERO; MOMENTS], exponent: 0 };
    let mut first = true;
    for (index, hub) in hubs.list[..hubs.count].iter().enumerate().rev() {
        let depth = DEPTH - (top - hub.height());
        if depth <= 0.0 || !edges.iter().any(|e| e.hub == index && e.flow != 0) {
            continue;
        }
        let (level, local) = level::<D>(h, hub);
        let mut moments = [ZERO; MOMENTS];
        let mut add = |along: &[Complex64; MOMENTS], flow: i32| {
            for n in 0..D - 1 {
                moments[n] += along[n] * f64::from(flow);
            }
        };
        let mut own = edges.iter().filter(|e| e.hub == index && e.flow != 0);
        if hub.arms == 2 && pieces == 1 && lone::is_lone::<D>(&local) {
            if let Some(edge) = own.next() {
                add(&lone::moments::<D>(&local, edge.arm.vertices[1]), edge.flow);
            }
        } else {
            for edge in own {
                add(&run::<D>(&local, &edge.arm, depth, pieces), edge.flow);
            }
        }
        moments_about_zero(&mut moments, D - 1, hub.at);
        let (factor, exponent) = exponential(level);
        if first {
            total.exponent = exponent;
            first = false;
        }
        let factor = factor * crate::scaled::pow2((exponent - total.exponent).clamp(-2000, 1000));
        for (sum, m) in total.mantissas.iter_mut().zip(moments) {
            *sum += m * factor;
        }
    }
    total
}

/// Moments about the hub, in units of `e^(h(hub))`, down one arm.
fn run<const D: usize>(
    local: &Polynomial,
    arm: &Arm,
    depth: f64,
    pieces: usize,
) -> [Complex64; MOMENTS] {
    let mut total = [ZERO; MOMENTS];
    for k in 1..arm.count {
        if arm.drops[k - 1] > depth {
            break;
        }
        let (from, to) = (arm.vertices[k - 1], arm.vertices[k]);
        let part = (to - from) / pieces as f64;
        for piece in 0..pieces {
            let from = from + part * piece as f64;
            let moments = one_panel::<D>(local, from, from + part);
            for n in 0..D - 1 {
                total[n] += moments[n];
            }
        }
    }
    total
}

/// Moments about the hub over one straight piece.
fn one_panel<const D: usize>(
    local: &Polynomial,
    from: Complex64,
    to: Complex64,
) -> [Complex64; MOMENTS] {
    let (middle, half) = ((from + to) * 0.5, (to - from) * 0.5);
    let p = stretched::<D>(&shifted::<D>(local, middle), half);
    let mut moments = panel::moments::<D>(&p);
    let mut power = half;
    for m in &mut moments[..D - 1] {
        *m *= power;
        power *= half;
    }
    moments_about_zero(&mut moments, D - 1, middle);
    moments
}

/// The exponent at the hub and, relative to it, round it. In double-double where plain numbers
/// would leave an error in the phase.
fn level<const D: usize>(h: &Polynomial, hub: &Hub) -> (Precise, Polynomial) {
    let (value, slope) = precise::<D>(h, hub.at);
    let mut local = hub.local;
    local[0] = ZERO;
    local[1] = slope.round();
    (value, local)
}
