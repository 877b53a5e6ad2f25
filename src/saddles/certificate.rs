//! The certificate: what contributes must join the two ends of the contour.
//!
//! Method. The valleys that the contributions run between, followed down below the floor, must cancel
//! against each other and against the two ends of the contour. Two points lie in one valley if the chord
//! between them stays below the floor, if not at once then after both have gone further down. Points
//! that cancel at one depth do so at every other, so one goes down only as far as is needed; how far each
//! point has been followed and which chords were looked at is kept, for one certificate asks about many
//! choices of groups.

use super::topology::{SLACK, Topology};
use super::trace::trace;
use num_complex::Complex64;

/// Depths at which points are compared.
const ROUNDS: usize = 5;

/// The valleys met so far, for one floor.
pub(crate) struct Certificate<'t, 'p> {
    topology: &'t Topology<'p>,
    floor: f64,
    wells: Vec<Well>,
    /// For each pair of wells `i < j`, at `j (j - 1)/2 + i`.
    chords: Vec<Chord>,
}

/// A point below the floor and the points further down that it leads to.
struct Well {
    depths: [Complex64; ROUNDS],
    known: usize,
}

/// What is known of two wells.
#[derive(Clone, Copy, PartialEq)]
enum Chord {
    /// Not joined at so many depths.
    Apart(usize),
    /// Joined at this depth.
    Joined(usize),
}

impl<'t, 'p> Certificate<'t, 'p> {
    pub fn new(topology: &'t Topology<'p>, floor: f64) -> Certificate<'t, 'p> {
        Certificate { topology, floor, wells: Vec::new(), chords: Vec::new() }
    }

    /// Do the valleys (weight and a point far down in each) and the ends of the contour cancel?
    pub fn closes(&mut self, valleys: &[(i32, Complex64)]) -> bool {
        let topology = self.topology;
        let mut ends = valleys.to_vec();
        if !topology.closed {
            for (weight, tail) in [1, -1].into_iter().zip(&topology.tails) {
                ends.push((weight, tail[tail.len() - 1]));
            }
        }
        // An end at infinity must really be down there; a finite end that contributes has been
        // followed down like the others.
        let level = self.level();
        if !ends.iter().all(|(_, z)| topology.h.height(*z) <= level) {
            return false;
        }
        let wells: Vec<usize> = ends.iter().map(|(_, z)| self.well(*z)).collect();
        // Each end's pool is that of its first member.
        let mut pools: Vec<usize> = (0..ends.len()).collect();
        for round in 0..ROUNDS {
            for j in 1..ends.len() {
                for i in 0..j {
                    if pools[i] != pools[j] && self.joined(wells[i], wells[j], round) {
                        let (kept, gone) = (pools[i].min(pools[j]), pools[i].max(pools[j]));
                        for pool in pools.iter_mut().filter(|pool| **pool == gone) {
                            *pool = kept;
                        }
                    }
                }
            }
            let sum = |pool: usize| -> i32 {
                ends.iter().zip(&pools).filter(|(_, p)| **p == pool).map(|(end, _)| end.0).sum()
            };
            if (0..ends.len()).all(|pool| sum(pool) == 0) {
                return true;
            }
        }
        false
    }

    /// What counts as below the floor.
    fn level(&self) -> f64 {
        self.floor + SLACK * self.topology.drop
    }

    fn well(&mut self, z: Complex64) -> usize {
        if let Some(known) = self.wells.iter().position(|well| well.depths[0] == z) {
            return known;
        }
        self.chords.extend(std::iter::repeat_n(Chord::Apart(0), self.wells.len()));
        self.wells.push(Well { depths: [z; ROUNDS], known: 1 });
        self.wells.len() - 1
    }

    /// Whether two wells are joined at a depth or above it.
    fn joined(&mut self, a: usize, b: usize, round: usize) -> bool {
        if a == b {
            return true;
        }
        let (low, high) = (a.min(b), a.max(b));
        let index = high * (high - 1) / 2 + low;
        let next = match self.chords[index] {
            Chord::Joined(at) => return at <= round,
            Chord::Apart(looked_at) => looked_at,
        };
        for depth in next..=round {
            if self.below(low, high, depth) {
                self.chords[index] = Chord::Joined(depth);
                return depth <= round;
            }
            self.chords[index] = Chord::Apart(depth + 1);
        }
        false
    }

    /// Whether the chord between two wells stays below the floor.
    fn below(&mut self, a: usize, b: usize, depth: usize) -> bool {
        /// The middle first, where the hill is if there is one.
        const ORDER: [usize; 23] =
            [12, 6, 18, 9, 15, 3, 21, 1, 2, 4, 5, 7, 8, 10, 11, 13, 14, 16, 17, 19, 20, 22, 23];
        let (a, b) = (self.deep(a, depth), self.deep(b, depth));
        let level = self.level();
        ORDER
            .iter()
            .all(|&piece| self.topology.h.height(a + (b - a) * (piece as f64 / 24.0)) < level)
    }

    /// A well's point at a depth.
    fn deep(&mut self, well: usize, depth: usize) -> Complex64 {
        let topology = self.topology;
        let well = &mut self.wells[well];
        for round in well.known..=depth {
            // At last the contour's own range of heights says where valleys open.
            let deeper = self.floor
                - if round < ROUNDS - 1 {
                    topology.drop * 4f64.powi(round as i32 - 1)
                } else {
                    topology.top - topology.bottom
                };
            let mut line = vec![well.depths[round - 1]];
            trace(&topology.h, line[0], deeper, topology.longest, &mut line);
            well.depths[round] = line[line.len() - 1];
            well.known = round + 1;
        }
        well.depths[depth]
    }
}
