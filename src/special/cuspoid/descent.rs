//! Moments between valleys, for any parameters: descents from hubs, Gauss-Legendre panels on them.
//!
//! Hubs are taken from the lowest upwards until the valleys that the weights name hang together;
//! an arm into a valley that is already joined adds nothing and is left out. So valleys and hubs
//! form a forest, every sum of rays with weights has one flow on its edges, and no hub is passed
//! that the sum does not need. Any path between valleys gives the same integral: which descent ends
//! where needs no decision on a Stokes line, only the digits depend on staying low.

use super::Moments;
use super::hubs::{Hub, Hubs, SADDLES, hubs};
use super::integrate::integrate;
use super::polynomial::Polynomial;
use super::walk::{self, Arm, STEPS};
use crate::Error;

/// Valleys at most.
pub(super) const VALLEYS: usize = 6;
/// Edges of the forest at most: one less than its nodes.
const EDGES: usize = VALLEYS + SADDLES - 1;

/// An arm may climb by this much above its hub, and costs a digit and a half there.
const CLIMB: f64 = 3.0;

/// One arm of a hub.
pub(super) struct Edge {
    pub hub: usize,
    pub arm: Arm,
    /// How many times the arm is run down.
    pub flow: i32,
    known: bool,
}

/// Hubs and valleys, joined.
pub(super) struct Forest {
    pub edges: [Edge; EDGES],
    pub count: usize,
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

    /// How far an arm that is run down climbs above its hub at most, and the highest point of all.
    fn climb(&self, hubs: &[Hub]) -> (f64, f64) {
        let mut most = (0.0f64, f64::NEG_INFINITY);
        for edge in self.edges[..self.count].iter().filter(|edge| edge.flow != 0) {
            let drops = &edge.arm.drops[..edge.arm.count];
            let climb = drops.iter().fold(0.0, |most: f64, drop| most.max(-drop));
            most = (most.0.max(climb), most.1.max(climb + hubs[edge.hub].height()));
        }
        most
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
    // Another grouping of the saddles where the first one leaves valleys apart (seen twice in
    // 800,000) or its arms climb, which costs digits (a loose group of all five saddles, once in
    // some 100,000): the one that stays lowest.
    let mut best: Option<(f64, Hubs, Forest)> = None;
    for lead in [1.0, 1.5, 0.7, 2.5, 0.5, 0.35] {
        let Some(mut hubs) = hubs::<D>(h, lead) else { continue };
        let list = &mut hubs.list[..hubs.count];
        list.sort_unstable_by(|a, b| a.height().total_cmp(&b.height()));
        if let Some(mut forest) = grow::<D>(h, list, weights) {
            forest.solve(weights);
            let (climb, peak) = forest.climb(list);
            if climb < CLIMB {
                return Ok(integrate::<D>(h, &hubs, &forest, pieces));
            }
            if best.as_ref().is_none_or(|(least, ..)| peak < *least) {
                best = Some((peak, hubs, forest));
            }
        }
    }
    if let Some((_, hubs, forest)) = &best {
        return Ok(integrate::<D>(h, hubs, forest, pieces));
    }
    Err(Error::NoConvergence {
        what: "the descent from the saddles of a cuspoid integral",
        limit: STEPS,
        remedy: "report the parameters: every finite set should be reached; \
                 a change in the last digit may help",
    })
}

/// Joins the valleys over the hubs, the lowest first; None if they stay apart.
fn grow<const D: usize>(h: &Polynomial, hubs: &[Hub], weights: &[i32; VALLEYS]) -> Option<Forest> {
    let mut forest = Forest {
        edges: std::array::from_fn(|_| Edge { hub: 0, arm: Arm::BLANK, flow: 0, known: false }),
        count: 0,
        component: std::array::from_fn(|v| v),
    };
    let mut arms = [Arm::BLANK; VALLEYS];
    for (index, hub) in hubs.iter().enumerate() {
        if forest.carries::<D>(weights) {
            break;
        }
        let directions = hub.directions();
        for (arm, direction) in arms.iter_mut().zip(directions).take(hub.arms) {
            walk::arm::<D>(h, hub, direction, arm)?;
        }
        forest.join::<D>(index, &arms[..hub.arms]);
    }
    forest.carries::<D>(weights).then_some(forest)
}

#[cfg(test)]
mod tests {
    use super::super::polynomial::ZERO;
    use super::*;
    use num_complex::Complex64;

    /// A number in 0..1 and the next state (Weyl sequence with a mixer; common practice).
    fn random(state: &mut u64) -> f64 {
        *state = state.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = *state;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        ((z ^ (z >> 31)) >> 11) as f64 / (1u64 << 53) as f64
    }

    fn complex(real: bool, size: f64, state: &mut u64) -> Complex64 {
        let z = Complex64::from_polar(size, std::f64::consts::TAU * random(state));
        if real { Complex64::new(z.re, 0.0) } else { z }
    }

    /// Parameters at random, some of them zero; `size` is that of the outermost saddle.
    fn scattered<const D: usize>(h: &mut Polynomial, size: f64, real: bool, state: &mut u64) {
        for (m, c) in h.iter_mut().enumerate().take(D - 1).skip(1) {
            let part = random(state);
            let r = if part < 0.15 { 0.0 } else { size.powi((D - m) as i32) * part.sqrt() };
            *c = Complex64::new(0.0, 1.0) * complex(real, r, state);
        }
    }

    /// Parameters of saddles at random, of which some coincide or nearly so.
    fn from_saddles<const D: usize>(h: &mut Polynomial, size: f64, real: bool, state: &mut u64) {
        let mut saddles = [ZERO; SADDLES];
        for j in 0..D - 1 {
            let near = random(state);
            saddles[j] = if j > 0 && near < 0.5 {
                let gap = if near < 0.1 { 0.0 } else { size * 10f64.powf(-20.0 * (near - 0.1)) };
                saddles[j - 1] + complex(real, gap, state)
            } else {
                complex(real, size * random(state).sqrt(), state)
            };
        }
        let mean = saddles[..D - 1].iter().sum::<Complex64>() / (D - 1) as f64;
        // f' = D prod (t - t_s)
        let mut slope = [ZERO; 7];
        slope[0] = Complex64::new(0.0, D as f64);
        for (j, saddle) in saddles[..D - 1].iter().enumerate() {
            for m in (0..=j + 1).rev() {
                let lower = if m > 0 { slope[m - 1] } else { ZERO };
                slope[m] = lower - slope[m] * (saddle - mean);
            }
        }
        for m in 1..D - 1 {
            h[m] = slope[m - 1] / m as f64;
        }
    }

    /// Largest difference between panels whole and in three pieces, on the cuspoid scale.
    fn worst<const D: usize>(count: usize, seed: u64) -> f64 {
        let mut state = seed;
        let mut worst = 0.0f64;
        for n in 0..count {
            let mut h = [ZERO; 7];
            h[D] = Complex64::new(0.0, 1.0);
            let size = 10f64.powf(3.0 * random(&mut state) - 1.5);
            if n % 2 == 0 {
                scattered::<D>(&mut h, size, n % 4 == 0, &mut state);
            } else {
                from_saddles::<D>(&mut h, size, n % 4 == 1, &mut state);
            }
            let part = |m: usize| h[m].norm().powf(1.0 / (D - m) as f64);
            let t = 1.0 + (1..D - 1).map(part).sum::<f64>();
            let from = (random(&mut state) * D as f64) as usize;
            let to = (from + 1 + (random(&mut state) * (D - 1) as f64) as usize) % D;
            let mut weights = [0; VALLEYS];
            (weights[from], weights[to]) = (-1, 1);
            let coarse = sum::<D>(&h, &weights).expect("every finite set is reached");
            let fine = sum_in_pieces::<D>(&h, &weights, 3).expect("every finite set is reached");
            assert_eq!(coarse.exponent, fine.exponent);
            let scale = |n: usize| t.powi(n as i32);
            let size = (0..D - 1).map(|n| fine.mantissas[n].norm() / scale(n)).fold(0.0, f64::max);
            for n in 0..D - 1 {
                let error = (coarse.mantissas[n] - fine.mantissas[n]).norm() / (size * scale(n));
                worst = worst.max(error);
            }
        }
        worst
    }

    /// More points of the same kind were tried with the same bound.
    #[test]
    fn panels_are_fine_enough() {
        let found =
            [worst::<3>(3000, 1), worst::<4>(3000, 2), worst::<5>(3000, 3), worst::<6>(3000, 4)];
        println!("{found:?}");
        assert!(found.iter().all(|e| *e < 5e-14), "{found:?}");
    }
}
