//! Moments between valleys, for any parameters: descents from hubs, Gauss-Legendre panels on them.
//!
//! Hubs are taken from the lowest upwards until the valleys that the weights name hang together;
//! an arm into a valley that is already joined adds nothing and is left out. So valleys and hubs
//! form a forest, every sum of rays with weights has one flow on its edges, and no hub is passed
//! that the sum does not need. Any path between valleys gives the same integral: which descent ends
//! where needs no decision on a Stokes line, only the digits depend on staying low.

use super::Moments;
use super::hubs::{SADDLES, hubs};
use super::integrate::integrate;
use super::polynomial::Polynomial;
use super::walk::{Arm, arm};
use crate::Error;

/// Valleys at most.
pub(super) const VALLEYS: usize = 6;
/// Edges of the forest at most: one less than its nodes.
const EDGES: usize = VALLEYS + SADDLES - 1;

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

    /// Largest difference between panels whole and in three pieces, on the cuspoid scale.
    fn worst<const D: usize>(count: usize, seed: u64) -> f64 {
        let mut state = seed;
        let mut worst = 0.0f64;
        for n in 0..count {
            let mut h = [ZERO; 7];
            h[D] = Complex64::new(0.0, 1.0);
            // Sizes of the outermost saddle from 0.03 to 30; a third real, some parameters zero.
            let size = 10f64.powf(3.0 * random(&mut state) - 1.5);
            let mut t = 1.0;
            for (m, c) in h.iter_mut().enumerate().take(D - 1).skip(1) {
                let part = random(&mut state);
                let r = if part < 0.15 { 0.0 } else { size.powi((D - m) as i32) * part.sqrt() };
                let x = Complex64::from_polar(r, std::f64::consts::TAU * random(&mut state));
                let x = if n % 3 == 0 { Complex64::new(x.re, 0.0) } else { x };
                *c = Complex64::new(-x.im, x.re);
                t += x.norm().powf(1.0 / (D - m) as f64);
            }
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
