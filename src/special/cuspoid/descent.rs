//! Moments between valleys, for any parameters: descents from hubs, Gauss-Legendre panels on them.
//!
//! Hubs are taken from the lowest upwards until the valleys that the weights name hang together;
//! an arm into a valley that is already joined adds nothing and is left out. So valleys and hubs
//! form a forest, every sum of rays with weights has one flow on its edges, and no hub is passed
//! that the sum does not need. Any path between valleys gives the same integral: which descent ends
//! where needs no decision on a Stokes line, only the digits depend on staying low.

use super::hubs::{Hub, Hubs, SADDLES, height, hubs};
use super::panel::{self, MOMENTS};
use super::polynomial::{Polynomial, Precise, ZERO, moments_about_zero, precise, shifted, stretched};
use super::walk::{Arm, DEPTH, VERTICES, arm};
use crate::Error;
use crate::special::double_double::{Dd, exp_both, sin_cos};
use num_complex::Complex64;

/// Valleys at most.
pub(super) const VALLEYS: usize = 6;
/// Edges of the forest at most: one less than its nodes.
const EDGES: usize = VALLEYS + SADDLES - 1;

/// Moments as mantissas with a common exponent.
#[derive(Clone, Copy)]
pub(super) struct Sum {
    pub values: [Complex64; MOMENTS],
    pub exponent: i64,
}

struct Edge {
    hub: usize,
    arm: Arm,
    /// How many times the arm is run down.
    flow: i32,
    known: bool,
}

struct Forest {
    edges: [Edge; EDGES],
    count: usize,
    /// Component of each valley.
    component: [usize; VALLEYS],
}

impl Forest {
    /// True if the weights add up to nothing in every component.
    fn carries<const D: usize>(&self, weights: &[i32; VALLEYS]) -> bool {
        (0..D).all(|c| {
            (0..D).filter(|&v| self.component[v] == c).map(|v| weights[v]).sum::<i32>() == 0
        })
    }

    /// Adds a hub, its arms walked, where it joins components; the lowest arm into each counts.
    fn join<const D: usize>(&mut self, index: usize, arms: &[Arm]) {
        let mut target: Option<usize> = None;
        let mut joined = [false; VALLEYS];
        let mut chosen = [false; VALLEYS];
        for (k, arm) in arms.iter().enumerate() {
            let c = self.component[arm.valley];
            if !joined[c] {
                joined[c] = true;
                chosen[k] = true;
            }
        }
        if chosen.iter().filter(|c| **c).count() < 2 {
            return;
        }
        for (k, arm) in arms.iter().enumerate() {
            if chosen[k] && self.count < EDGES {
                self.edges[self.count] = Edge { hub: index, arm: *arm, flow: 0, known: false };
                self.count += 1;
                let old = self.component[arm.valley];
                let new = *target.get_or_insert(old);
                for c in &mut self.component[..D] {
                    if *c == old {
                        *c = new;
                    }
                }
            }
        }
    }

    /// Flow on every edge: what enters a valley is its weight, what leaves a hub is nothing.
    fn solve(&mut self, weights: &[i32; VALLEYS]) {
        for _ in 0..self.count {
            for e in 0..self.count {
                if self.edges[e].known {
                    continue;
                }
                let (hub, valley) = (self.edges[e].hub, self.edges[e].arm.valley);
                let (mut at_valley, mut at_hub) = (weights[valley], 0);
                let (mut open_valley, mut open_hub) = (0, 0);
                for other in &self.edges[..self.count] {
                    if other.arm.valley == valley {
                        at_valley -= other.flow;
                        open_valley += usize::from(!other.known);
                    }
                    if other.hub == hub {
                        at_hub -= other.flow;
                        open_hub += usize::from(!other.known);
                    }
                }
                let edge = &mut self.edges[e];
                if open_valley == 1 {
                    (edge.flow, edge.known) = (at_valley, true);
                } else if open_hub == 1 {
                    (edge.flow, edge.known) = (at_hub, true);
                }
            }
        }
    }
}

/// `sum_v weights_v integral of t^n e^(h(t)) dt along valley ray v`, n = 0 .. D-2, for
/// `h = i (t^D + ..)`; the weights add up to zero.
pub(super) fn sum<const D: usize>(
    h: &Polynomial,
    weights: &[i32; VALLEYS],
) -> Result<Sum, Error> {
    let stuck = Error::NoConvergence {
        what: "the descent from the saddles of a cuspoid integral",
        limit: 250,
        remedy: "report the parameters: every finite set should be reached",
    };
    let Some(mut hubs) = hubs::<D>(h) else { return Err(stuck) };
    let list = &mut hubs.list[..hubs.count];
    list.sort_unstable_by(|a, b| a.height().total_cmp(&b.height()));
    let mut forest = Forest {
        edges: std::array::from_fn(|_| Edge { hub: 0, arm: Arm::BLANK, flow: 0, known: false }),
        count: 0,
        component: std::array::from_fn(|v| v),
    };
    for (index, hub) in list.iter().enumerate() {
        if forest.carries::<D>(weights) {
            break;
        }
        let directions = hub.directions();
        let mut arms = [Arm::BLANK; VALLEYS];
        for (k, direction) in directions.iter().enumerate().take(hub.arms) {
            arm::<D>(h, hub, *direction, &mut arms[k]).ok_or_else(|| stuck.clone())?;
        }
        forest.join::<D>(index, &arms[..hub.arms]);
    }
    if !forest.carries::<D>(weights) {
        return Err(stuck);
    }
    forest.solve(weights);
    Ok(integrate::<D>(h, &hubs, &forest))
}

fn integrate<const D: usize>(h: &Polynomial, hubs: &Hubs, forest: &Forest) -> Sum {
    let edges = &forest.edges[..forest.count];
    let top = edges
        .iter()
        .filter(|e| e.flow != 0)
        .fold(f64::NEG_INFINITY, |top, e| top.max(hubs.list[e.hub].height()));
    let mut total = Sum { values: [ZERO; MOMENTS], exponent: 0 };
    let mut first = true;
    for (index, hub) in hubs.list[..hubs.count].iter().enumerate().rev() {
        let depth = DEPTH - (top - hub.height());
        if depth <= 0.0 || !edges.iter().any(|e| e.hub == index && e.flow != 0) {
            continue;
        }
        let (level, local) = level::<D>(h, hub);
        let mut moments = [ZERO; MOMENTS];
        for edge in edges.iter().filter(|e| e.hub == index && e.flow != 0) {
            let along = run::<D>(&local, &edge.arm, depth);
            for n in 0..D - 1 {
                moments[n] += along[n] * f64::from(edge.flow);
            }
        }
        moments_about_zero(&mut moments, D - 1, hub.at);
        let (factor, exponent) = exponential(level);
        if first {
            total.exponent = exponent;
            first = false;
        }
        let factor = factor * crate::scaled::pow2((exponent - total.exponent).clamp(-2000, 1000));
        for n in 0..D - 1 {
            total.values[n] += moments[n] * factor;
        }
    }
    total
}

/// Moments about the hub, in units of `e^(h(hub))`, down one arm.
fn run<const D: usize>(local: &Polynomial, arm: &Arm, depth: f64) -> [Complex64; MOMENTS] {
    let mut total = [ZERO; MOMENTS];
    for k in 1..arm.count.min(VERTICES) {
        if arm.drops[k - 1] > depth {
            break;
        }
        let (from, to) = (arm.vertices[k - 1], arm.vertices[k]);
        let (middle, half) = ((from + to) * 0.5, (to - from) * 0.5);
        let p = stretched::<D>(&shifted::<D>(local, middle), half);
        let mut moments = panel::moments::<D>(&p);
        let mut power = half;
        for m in &mut moments[..D - 1] {
            *m *= power;
            power *= half;
        }
        moments_about_zero(&mut moments, D - 1, middle);
        for n in 0..D - 1 {
            total[n] += moments[n];
        }
    }
    total
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

/// `e^w` as a number and an exponent of two.
fn exponential(w: Precise) -> (Complex64, i64) {
    let (sin, cos) = sin_cos(w.im);
    let (up, _, n) = exp_both(w.re);
    (Complex64::new(up * cos, up * sin), n)
}
