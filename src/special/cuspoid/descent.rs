//! Moments between valleys, for any parameters: descents from hubs, Gauss-Legendre panels on them.
//!
//! Hubs are taken from the lowest upwards until the valleys that the weights name hang together;
//! an arm into a valley that is already joined adds nothing and is left out. So valleys and hubs
//! form a forest, every sum of rays with weights has one flow on its edges, and no hub is passed
//! that the sum does not need. Any path between valleys gives the same integral: which descent ends
//! where needs no decision on a Stokes line, only the digits depend on staying low.

use super::Moments;
use super::hubs::{Hub, Hubs, SADDLES, hubs};
use super::lone::{self, is_lone};
use super::panel::{self, MOMENTS};
use super::polynomial::{
    Polynomial, Precise, ZERO, exponential, moments_about_zero, precise, shifted, stretched,
};
use super::walk::{Arm, DEPTH, VERTICES, arm};
use crate::Error;
use num_complex::Complex64;

/// Valleys at most.
pub(super) const VALLEYS: usize = 6;
/// Edges of the forest at most: one less than its nodes.
const EDGES: usize = VALLEYS + SADDLES - 1;

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
) -> Result<Moments, Error> {
    sum_in_pieces::<D>(h, weights, 1)
}

/// The same with every panel cut into pieces, as a check.
fn sum_in_pieces<const D: usize>(
    h: &Polynomial,
    weights: &[i32; VALLEYS],
    pieces: usize,
) -> Result<Moments, Error> {
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
    Ok(integrate::<D>(h, &hubs, &forest, pieces))
}

fn integrate<const D: usize>(
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
        let mut flowing = edges.iter().filter(|e| e.hub == index && e.flow != 0);
        if let Some(edge) = flowing.clone().next()
            && hub.arms == 2
            && pieces == 1
            && is_lone::<D>(&local)
        {
            let along = lone::moments::<D>(&local, edge.arm.vertices[1]);
            for n in 0..D - 1 {
                moments[n] = along[n] * f64::from(edge.flow);
            }
        } else {
            for edge in flowing.by_ref() {
                let along = run::<D>(&local, &edge.arm, depth, pieces);
                for n in 0..D - 1 {
                    moments[n] += along[n] * f64::from(edge.flow);
                }
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
            total.mantissas[n] += moments[n] * factor;
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
    for k in 1..arm.count.min(VERTICES) {
        if arm.drops[k - 1] > depth {
            break;
        }
        let (from, to) = (arm.vertices[k - 1], arm.vertices[k]);
        let half = (to - from) * (0.5 / pieces as f64);
        for piece in 0..pieces {
            let middle = from + half * (2 * piece + 1) as f64;
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

#[cfg(test)]
mod tests {
    use super::*;

    /// A number in 0..1 and the next state (Weyl sequence with a mixer; common practice).
    fn random(state: &mut u64) -> f64 {
        *state = state.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = *state;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        ((z ^ (z >> 31)) >> 11) as f64 / (1u64 << 53) as f64
    }

    /// Largest difference between panels whole and in three pieces, on the cuspoid scale.
    fn worst<const D: usize>(count: usize, seed: u64) -> f64 {
        let mut state = seed;
        let mut worst = 0.0f64;
        let mut fails = 0;
        for n in 0..count {
            let mut h = [ZERO; 7];
            h[D] = Complex64::new(0.0, 1.0);
            // Sizes of the outermost saddle from 0.03 to 30; a third real, some parameters zero.
            let size = 10f64.powf(3.0 * random(&mut state) - 1.5);
            let mut t = 1.0;
            for m in 1..D - 1 {
                let x = if random(&mut state) < 0.15 {
                    ZERO
                } else {
                    let r = size.powi((D - m) as i32) * random(&mut state).sqrt();
                    let turn = random(&mut state);
                    let angle = if n % 3 == 0 { (2.0 * turn).floor() * 0.5 } else { turn };
                    Complex64::from_polar(r, std::f64::consts::TAU * angle)
                };
                let x = if n % 3 == 0 { Complex64::new(x.re, 0.0) } else { x };
                h[m] = Complex64::new(-x.im, x.re);
                t += x.norm().powf(1.0 / (D - m) as f64);
            }
            let from = (random(&mut state) * D as f64) as usize;
            let to = (from + 1 + (random(&mut state) * (D - 1) as f64) as usize) % D;
            let mut weights = [0; VALLEYS];
            (weights[from], weights[to]) = (-1, 1);
            let Ok(coarse) = sum::<D>(&h, &weights) else {
                fails += 1;
                if fails < 3 {
                    println!("FAIL {D} {from} {to} {h:?}");
                }
                continue;
            };
            let fine = sum_in_pieces::<D>(&h, &weights, 3).unwrap();
            assert_eq!(coarse.exponent, fine.exponent);
            let scale =
                (0..D - 1).map(|n| fine.mantissas[n].norm() / t.powi(n as i32)).fold(0.0, f64::max);
            for n in 0..D - 1 {
                let error = (coarse.mantissas[n] - fine.mantissas[n]).norm();
                let error = error / (scale * t.powi(n as i32));
                if error > 3e-14 && error > worst {
                    println!("{D} {error:.2e} {from} {to} {h:?}");
                }
                worst = worst.max(error);
            }
        }
        println!("{D}: fails {fails}");
        worst
    }

    #[test]
    fn panels_are_fine_enough() {
        let n = std::env::var("N").map(|s| s.parse().unwrap()).unwrap_or(3000);
        let found = [worst::<3>(n, 1), worst::<4>(n, 2), worst::<5>(n, 3), worst::<6>(n, 4)];
        println!("{found:?}");
        assert!(found.iter().all(|e| *e < 5e-14), "{found:?}");
    }
}
